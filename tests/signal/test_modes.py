"""Other motions beside the swing."""

from __future__ import annotations

import numpy as np
import pytest

from swingtrack.records import ExpectedMode, Series
from swingtrack.signal import fit_swing
from tests.signal.series import PERIOD, RIG, noise, swing


def with_mode(ratio: float, size: float, *, seconds: float = 40.0) -> tuple[np.ndarray, np.ndarray]:
    t, y = swing(seconds)
    other = size * np.exp(-0.01 * t) * np.cos(2 * np.pi * ratio / PERIOD * t + 1)
    return t, y + other + noise(len(t), 5)


@pytest.mark.parametrize("ratio", [0.3, 0.5, 0.8, 1.3, 2.0, 2.5])
def test_sway_is_found_and_taken_out(ratio):
    t, y = with_mode(ratio, 0.05)
    sway = ExpectedMode("sway", ratio / PERIOD * 1.002, 0.005)
    found = fit_swing(Series(t, y, "rad"), law=RIG.law(), expected_modes=(sway,))
    assert abs(found.period.value - PERIOD) < 3 * found.period.u
    assert found.period.relative_u < 3e-5
    (mode,) = found.other_modes
    assert mode.frequency_hz == pytest.approx(ratio / PERIOD, rel=1e-3)
    assert mode.kind == "sway"
    assert mode.share == pytest.approx(0.38, abs=0.03)


def test_a_sway_larger_than_the_swing_is_not_taken_for_it():
    t, y = with_mode(0.72, 0.25)
    sway = ExpectedMode("sway", 0.72 / PERIOD, 0.01)
    found = fit_swing(Series(t, y, "rad"), law=RIG.law(), expected_modes=(sway,))
    assert abs(found.period.value - PERIOD) < 4 * found.period.u
    assert found.other_modes[0].kind == "sway"


@pytest.mark.parametrize("ratio", [0.98, 0.985, 1.01, 1.015, 1.02, 1.03])
def test_modes_too_near_widen_the_uncertainty_and_are_said(ratio):
    t, y = with_mode(ratio, 0.0085)
    found = fit_swing(Series(t, y, "rad"), law=RIG.law())
    alone = fit_swing(Series(*with_mode(1.0, 0.0), "rad"), law=RIG.law())
    assert "modes-too-near" in {doubt.code for doubt in found.doubts}
    assert found.period.u > 5 * alone.period.u
    assert abs(found.period.value - PERIOD) < 3 * found.period.u


def test_a_longer_clip_tells_them_apart():
    t, y = with_mode(1.02, 0.0085, seconds=150)
    found = fit_swing(Series(t, y, "rad"), law=RIG.law())
    assert abs(found.period.value - PERIOD) < 3 * found.period.u
    assert found.period.relative_u < 3e-5
    assert found.other_modes[0].frequency_hz == pytest.approx(1.02 / PERIOD, rel=1e-3)


def test_an_unnamed_harmonic_is_called_one():
    t, y = with_mode(2.0, 0.05)
    found = fit_swing(Series(t, y, "rad"), law=RIG.law())
    assert found.other_modes[0].kind == "harmonic 2"
