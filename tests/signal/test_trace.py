"""What the figures get."""

from __future__ import annotations

import numpy as np
import pytest

from swingtrack.records import Series
from swingtrack.signal import fit_swing
from tests.signal.series import NOISE, RIG, noise, swing


def test_data_fit_and_residual_share_the_times():
    t, y = swing(30)
    z = y + noise(len(t), 1)
    trace = fit_swing(Series(t, z, "rad"), law=RIG.law()).trace
    np.testing.assert_array_equal(trace.t_s, t)
    np.testing.assert_array_equal(trace.measured, z)
    assert np.std(trace.measured - trace.fitted) == pytest.approx(NOISE, rel=0.1)
    np.testing.assert_allclose(trace.fitted, y, atol=6 * NOISE / 10)


def test_single_cycles_scatter_about_the_period():
    t, y = swing(30)
    found = fit_swing(Series(t, y + noise(len(t), 1), "rad"), law=RIG.law())
    assert len(found.trace.cycle_period_s) > 45  # every half-swing starts one
    assert np.mean(found.trace.cycle_period_s) == pytest.approx(found.period_in_clip.value, rel=2e-4)
    assert np.std(found.trace.cycle_period_s) < 3e-3
    assert np.all(np.diff(found.trace.cycle_t_s) > 0)


def test_a_frame_at_a_wrong_time_shows_in_its_cycle():
    t, y = swing(30)
    late = t + np.where(t > 15, 1 / 30, 0)
    trace = fit_swing(Series(late, y + noise(len(t), 1), "rad"), law=RIG.law()).trace
    longest = trace.cycle_t_s[np.argmax(trace.cycle_period_s)]
    assert longest == pytest.approx(15, abs=1.2)


def test_envelope_lies_on_the_peaks():
    t, y = swing(30)
    trace = fit_swing(Series(t, y + noise(len(t), 1), "rad"), law=RIG.law()).trace
    top = 1 + np.flatnonzero((y[1:-1] > y[:-2]) & (y[1:-1] >= y[2:]))
    np.testing.assert_allclose(trace.amplitude[top], y[top], rtol=0.02)


def test_residual_spectrum_of_white_noise_is_flat():
    t, y = swing(30)
    trace = fit_swing(Series(t, y + noise(len(t), 1), "rad"), law=RIG.law()).trace
    low, high = trace.spectrum_hz < 5, trace.spectrum_hz > 9
    assert np.mean(trace.spectrum_residual[low] ** 2) == pytest.approx(
        np.mean(trace.spectrum_residual[high] ** 2), rel=0.35
    )
