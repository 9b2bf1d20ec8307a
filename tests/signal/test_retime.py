"""Frames missing or shown twice under times that do not say so."""

from __future__ import annotations

import numpy as np
import pytest

from swingtrack.records import View
from swingtrack.signal import FitSettings, fit_swing
from tests.signal.series import path
from tests.signal.truth import Losses, bifilar, integrate

RIG = bifilar(1.2, 0.15, 0.15, 0.2)
PERIOD, RATE = 1.3, 30.0
# True time of each frame less its stored time, in frames: one image lost at 5.5 s, two at 9.2 s, one doubled at 14 s.
JUMPS = ((5.55, 1), (9.25, 2), (14.0, -1))


def filmed(jumps: tuple[tuple[float, int], ...]) -> object:
    stored = np.arange(600) / RATE
    true = stored + sum(n / RATE * (stored >= at) for at, n in jumps)
    q = integrate(np.sort(true), RIG, PERIOD, 0.17, Losses(0.02, 0, 0))
    q = np.interp(true, np.sort(true), q)
    return path([(600 + 250 * np.cos(q + 1.2), 400 - 250 * np.sin(q + 1.2))], RATE, 3)


def test_jumps_are_found_said_and_put_into_the_uncertainty():
    found = fit_swing(filmed(JUMPS), law=RIG.law(), view=View("above"))
    (doubt,) = [d for d in found.doubts if d.code == "frame-times-jump"]
    assert "+1 at 5.5" in doubt.message
    assert "+2 at 9.2" in doubt.message
    assert "-1 at 14.0" in doubt.message
    assert abs(found.period.value - PERIOD) < 2 * found.period.u
    assert found.period.relative_u > 1e-3  # two frames in twenty seconds


def test_mended_on_demand_the_period_is_right():
    found = fit_swing(filmed(JUMPS), law=RIG.law(), view=View("above"), settings=FitSettings(mend_times=True))
    assert abs(found.period.value - PERIOD) < 3 * found.period.u
    assert found.period.relative_u < 3e-5


@pytest.mark.parametrize("mend", [False, True])
def test_steady_times_are_left_alone(mend):
    found = fit_swing(filmed(()), law=RIG.law(), view=View("above"), settings=FitSettings(mend_times=mend))
    assert found.doubts == ()
    assert found.period.relative_u < 3e-5


def test_a_single_bad_frame_is_no_jump():
    one = filmed(())
    one.tracks[0].x_px[200] += 4
    found = fit_swing(one, law=RIG.law(), view=View("above"))
    assert found.doubts == ()
    assert found.outliers == 1
