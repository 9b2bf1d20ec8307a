"""Spectra at uneven times against a reference library."""

from __future__ import annotations

import numpy as np
import pytest
from astropy.timeseries import LombScargle

from swingtrack.signal.spectrum import amplitude_spectrum, background, refine_peak


def uneven(seed: int) -> tuple[np.ndarray, np.ndarray, float]:
    random = np.random.default_rng(seed)
    t = np.arange(600) / 30
    t = t[random.random(600) > 0.1]
    hz = random.uniform(0.5, 2)
    return t, 0.3 * np.cos(2 * np.pi * hz * t + 1) + 0.05 * random.standard_normal(len(t)), hz


@pytest.mark.parametrize("seed", range(5))
def test_peak_agrees_with_lomb_scargle(seed):
    t, y, hz = uneven(seed)
    found = amplitude_spectrum(t, y)
    peak = refine_peak(t, y, float(found.hz[np.argmax(found.amplitude)]), found.resolution_hz)
    grid = hz + np.linspace(-0.05, 0.05, 4001)
    power = LombScargle(t, y, fit_mean=True).power(grid, method="slow")
    assert peak == pytest.approx(grid[np.argmax(power)], abs=0.02 * found.resolution_hz)


@pytest.mark.parametrize("tapered", [False, True])
def test_a_steady_line_stands_as_high_as_its_amplitude(tapered):
    t, y, hz = uneven(7)
    found = amplitude_spectrum(t, y, tapered=tapered)
    assert np.interp(hz, found.hz, found.amplitude) == pytest.approx(0.3, rel=0.05)


def test_background_follows_the_noise_and_not_the_line():
    t = np.arange(600) / 30  # evenly: gaps would spread a little of the line over the background
    y = 0.3 * np.cos(2 * np.pi * 1.3 * t + 1) + 0.05 * np.random.default_rng(3).standard_normal(600)
    found = amplitude_spectrum(t, y)
    # Rayleigh: median amplitude of white noise is σ √(4 ln 2/n)
    expected = 0.05 * np.sqrt(4 * np.log(2) / len(t))
    assert np.median(background(found)) == pytest.approx(expected, rel=0.3)
    assert background(found).max() < 0.03
