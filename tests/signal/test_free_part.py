"""The held, pushed, stopped and bumped parts are found and left out."""

from __future__ import annotations

import numpy as np
import pytest

from swingtrack.records import Series, Swing
from swingtrack.signal import fit_swing
from tests.signal.series import PERIOD, RIG, START, noise, swing
from tests.signal.truth import Losses, integrate


def fit(t: np.ndarray, y: np.ndarray) -> Swing:
    return fit_swing(Series(t, y + noise(len(t), 7), "rad"), law=RIG.law())


def check(found: Swing) -> None:
    assert abs(found.period.value - PERIOD) < 3.5 * found.period.u
    assert found.period.relative_u < 1e-4


def test_held_aside_and_let_go():
    t, y = swing(40)
    found = fit(t, np.where(t < 5, START, np.interp(t - 5, t, y)))
    check(found)
    assert found.trace.free_from_s == pytest.approx(5, abs=0.15)
    assert np.isnan(found.trace.fitted[t < 4.8]).all()
    assert "part-left-out" in {doubt.code for doubt in found.doubts}


def test_at_rest_then_pushed():
    t, y = swing(40)
    found = fit(t, np.where(t < 5, 0, np.interp(t - 5, t, y)))
    check(found)
    assert found.trace.free_from_s == pytest.approx(5, abs=0.3)


def test_stopped_by_hand():
    t, y = swing(40)
    found = fit(t, np.where(t > 25, 0.03 * np.exp(-(t - 25)), y))
    check(found)
    assert found.trace.free_to_s == pytest.approx(25, abs=0.3)


@pytest.mark.parametrize(("at", "again", "kept"), [(20.0, 0.2, "after"), (26.0, 0.09, "before")])
def test_bumped_half_way(at, again, kept):
    t, y = swing(40)
    later = t >= at
    y = y.copy()
    y[later] = integrate(t[later] - at, RIG, PERIOD, again, Losses(0.02, 0.02, 0))
    found = fit(t, y)
    check(found)
    if kept == "after":
        assert found.trace.free_from_s == pytest.approx(at, abs=0.3)
    else:
        assert found.trace.free_to_s == pytest.approx(at, abs=0.3)


def test_a_gap_in_the_record_is_bridged():
    t, y = swing(40)
    there = (t < 10) | (t > 22)
    found = fit(t[there], y[there])
    check(found)
    assert found.trace.free_from_s < 0.1
    assert found.trace.free_to_s > 39.8


def test_an_undisturbed_swing_is_used_whole():
    t, y = swing(40)
    found = fit(t, y)
    assert found.trace.used.all()
    assert found.doubts == ()
