"""Each doubt appears where it is due, with a message and an advice."""

from __future__ import annotations

import numpy as np
import pytest

from swingtrack.records import Doubt, Series
from swingtrack.signal import fit_swing
from tests.signal.series import PERIOD, RIG, noise, swing
from tests.signal.truth import Losses, integrate, torsion_wire


def doubts(t: np.ndarray, y: np.ndarray, *, law=None) -> dict[str, Doubt]:
    found = fit_swing(Series(t, y, "rad"), law=law or RIG.law())
    return {doubt.code: doubt for doubt in found.doubts}


def test_a_good_swing_has_none():
    t, y = swing(40)
    assert doubts(t, y + noise(len(t), 1)) == {}


def test_too_few_cycles():
    t, y = swing(5)
    found = doubts(t, y + noise(len(t), 1))
    assert set(found) == {"too-few-cycles"}
    assert "4.5 swings" in found["too-few-cycles"].message


def test_large_amplitude():
    t = np.arange(900) / 30
    y = integrate(t, RIG, PERIOD, 0.8, Losses(0.02, 0, 0))
    assert "46°" in doubts(t, y + noise(900, 1))["amplitude-large"].message


def test_amplitude_beyond_the_law_falls_back_on_the_clip():
    t = np.arange(900) / 30
    y = integrate(t, RIG, PERIOD, 0.8, Losses(0.02, 0, 0))
    found = fit_swing(Series(t, y + noise(900, 1), "rad"), law=RIG.law(0.3))
    assert "amplitude-beyond-law" in {doubt.code for doubt in found.doubts}
    assert found.law is None


def test_many_outliers():
    t, y = swing(40)
    z = y + noise(len(t), 1)
    z[20::40] += 0.3
    assert "30 of 1200" in doubts(t, z)["outliers-set-aside"].message


def test_slow_sampling():
    t, y = swing(40)
    assert "4.1 samples" in doubts(t[::8], (y + noise(len(t), 1))[::8])["sampling-too-slow"].message


def test_residual_that_is_not_noise():
    """A clock that wanders by a few milliseconds leaves a line at the swing's own frequency."""
    t, _ = swing(60)
    wander = 0.004 * np.cumsum(np.random.default_rng(1).standard_normal(len(t))) / np.sqrt(len(t)) * 4
    y = integrate(np.sort(t + wander - wander[0]), RIG, PERIOD, 0.3, Losses(0.01, 0, 0))
    found = fit_swing(Series(t, y + noise(len(t), 1, 3e-4), "rad"), law=RIG.law())
    codes = {doubt.code for doubt in found.doubts}
    assert codes & {"residual-not-noise", "modes-too-near"}
    assert abs(found.period.value - PERIOD) < 3.5 * found.period.u


@pytest.mark.parametrize("seconds", [3.0, 8.0, 40.0])
def test_every_doubt_says_what_to_do(seconds):
    t, y = swing(seconds)
    for doubt in doubts(t, y + noise(len(t), 1, 0.03), law=torsion_wire().law(1.0)).values():
        assert doubt.code == doubt.code.lower()
        assert " " not in doubt.code
        assert doubt.message.endswith(".")
        assert doubt.advice.endswith(".")
