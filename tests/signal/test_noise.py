"""The colour of residuals and what it does to uncertainties."""

from __future__ import annotations

import numpy as np
import pytest

from swingtrack.signal.noise import measure_noise
from tests.benchmarks.fit_coverage import noise


def test_white_noise_needs_no_correction():
    factors = []
    for seed in range(40):
        r = np.random.default_rng(seed).standard_normal(1500)
        found = measure_noise(np.arange(1500) / 30, r, 0.9)
        factors.append(found.inflation)
    assert np.median(factors) == 1.0
    assert np.mean(factors) == pytest.approx(1, abs=0.05)


@pytest.mark.parametrize("memory", [0.5, 0.9])
def test_autoregression_is_recovered_with_its_density_at_the_swing(memory):
    """S(f)/S̄ of an AR(1) is (1 − φ²)/(1 − 2 φ cos 2πfΔ + φ²)."""
    hz, interval = 0.9, 1 / 30
    theory = (1 - memory**2) / (1 - 2 * memory * np.cos(2 * np.pi * hz * interval) + memory**2)
    found = [
        measure_noise(np.arange(1500) * interval, noise(np.random.default_rng(seed), 1500, memory), hz)
        for seed in range(40)
    ]
    assert np.median([n.inflation for n in found]) == pytest.approx(theory, rel=0.12)
    assert np.median([n.effective for n in found]) == pytest.approx(
        1500 * (1 - memory**2) / (1 + memory**2), rel=0.15
    )
    # integral time: Δ (½ + Σ φ^l)
    expected = interval * (0.5 + memory / (1 - memory))
    assert np.median([n.correlation_time_s for n in found]) == pytest.approx(expected, rel=0.12)


def test_dropped_frames_leave_the_colour_as_it_is():
    random = np.random.default_rng(4)
    t, r = np.arange(6000) / 30, noise(random, 6000, 0.9)
    kept = random.random(6000) > 0.1
    whole, gappy = measure_noise(t, r, 0.9), measure_noise(t[kept], r[kept], 0.9)
    assert gappy.inflation == pytest.approx(whole.inflation, rel=0.1)


def test_a_line_beside_the_swing_is_not_noise():
    t = np.arange(1500) / 30
    r = np.random.default_rng(1).standard_normal(1500)
    assert not measure_noise(t, r, 0.9).structured
    found = measure_noise(t, r + 0.5 * np.cos(2 * np.pi * 0.95 * t), 0.9)
    assert found.structured
    assert found.inflation > 5
    assert found.colour_inflation < 5
