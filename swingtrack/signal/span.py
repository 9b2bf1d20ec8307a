"""Where exactly the free swing begins and ends: the plain fit is carried on over the record until it fails.

Windows of a period (`free_part`) find the free part to half a period and lose the tail in the noise. Here the fitted
motion is carried outward in quarter-periods as long as the samples follow it, and edges that do not are cut off.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np

from swingtrack.records import Floats
from swingtrack.signal.exact import move
from swingtrack.signal.fitting import MAD_TO_SIGMA, Fitted
from swingtrack.signal.half_swing import Damping
from swingtrack.signal.model import SwingModel

# A quarter-period follows the fit when its residuals are not this many times larger than the fitted part's,
FOLLOWS = 3.0
# or no larger than this share of the amplitude (beyond the part fitted, where damping is extrapolated).
FOLLOWS_SHARE = 0.08
SAMPLES_A_BIN = 6
ROUNDS = 8
# One round carries the fit on by this share of its length at most.
REACH = 0.6


def shift_origin(model: SwingModel, by: float) -> SwingModel:
    """The same plain motion with its time counted from `by` s later (or earlier, for a negative one).

    Backwards the motion obeys the same equation with every damping term's sign turned.
    """
    state = model.state()
    v = dict(model.values)
    x = v["phase"] + v["omega0"] * by
    if x >= 0:
        motion = move(np.array([max(by, 0.0)]), state, model.restoring)
        places, sizes = motion.turning_x, motion.turning_amplitude
    else:
        d = state.damping
        back = replace(state, phase=0.0, damping=Damping(-d.zeta, -d.beta, -d.dry, d.shape))
        motion = move(np.array([0.0, -x / v["omega0"]]), back, model.restoring)
        places, sizes = -motion.turning_x, motion.turning_amplitude
    if not motion.valid:
        return model
    before = np.flatnonzero(places <= x + 1e-12)
    k = int(before[-1]) if x >= 0 else int(before[0])
    v["amplitude"], v["phase"] = float(sizes[k]), float(max(x - places[k], 0.0))
    v["rest"] += v["drift"] * by
    return replace(model, values=v, side=model.side * (1 if k % 2 == 0 else -1))


def settle_span(
    record: tuple[Floats, Floats, Floats],
    span: tuple[float, float],
    fitted: Fitted,
    refit: Callable[[SwingModel, tuple[float, float]], Fitted | None],
) -> tuple[Fitted, tuple[float, float]]:
    """Carry the fit on, or cut it back, until its span stands.

    Parameters
    ----------
    record : t, y, weight, each (n,) float
        The whole record.
    span : (float, float)
        Start and end of the part fitted, s; `fitted` counts its time from the start.
    refit : callable
        (model counted from the new start, new span) ↦ fit.
    """
    seen = {span}
    for _ in range(ROUNDS):
        wider = _next_span(record, span, fitted)
        if wider is None or wider in seen:
            break
        seen.add(wider)
        again = refit(shift_origin(fitted.model, wider[0] - span[0]), wider)
        if again is None:
            break
        fitted, span = again, wider
    return fitted, span


def _next_span(
    record: tuple[Floats, Floats, Floats], span: tuple[float, float], fitted: Fitted
) -> tuple[float, float] | None:
    t, y, weight = record
    period = 2 * np.pi / fitted.model.values["omega0"]
    length = span[1] - span[0]
    first = max(float(t[0]), span[0] - REACH * length - period)
    last = min(float(t[-1]), span[1] + REACH * length + period)
    model = shift_origin(fitted.model, first - span[0])
    inside = (t >= first) & (t <= last)
    at = t[inside]
    motion = model.motion(at - first)
    if not motion.valid:
        return None
    left = np.abs(y[inside] - model.seen(at - first)) * weight[inside]
    width = max(period / 4, SAMPLES_A_BIN * float(np.median(np.diff(t))))
    bins = np.floor((at - span[0]) / width).astype(int)
    numbers, starts = np.unique(bins, return_index=True)
    groups = np.split(left, starts[1:])
    typical = np.array([MAD_TO_SIGMA * np.median(group) for group in groups])
    core = (at >= span[0]) & (at <= span[1])
    usual = MAD_TO_SIGMA * float(np.median(left[core]))
    amplitude = fitted.model.values["amplitude"] * fitted.model.values["radius"]
    outside = (numbers * width + span[0] < span[0] - width / 2) | (numbers * width + span[0] >= span[1])
    local = amplitude * np.ones(len(numbers))
    tail = numbers * width > length
    local[tail] *= _fade(fitted)
    limit = FOLLOWS * usual + np.where(outside, FOLLOWS_SHARE * local, 0.02 * local)
    follows = typical <= limit
    middle = int(np.argmin(np.abs(numbers * width - length / 2)))
    low = _reach(follows, middle, -1)
    high = _reach(follows, middle, 1)
    begin = max(float(at[starts[low]]), first)
    end = float(at[starts[high + 1] - 1]) if high + 1 < len(starts) else last
    if end - begin < 2 * period:
        return None
    return (begin, end)


def _fade(fitted: Fitted) -> float:
    """Amplitude at the end over that at the start of the part fitted."""
    motion = fitted.model.motion(np.array([0.0, float(fitted.samples.t[-1])]))
    return float(motion.turning_amplitude[-1] / motion.turning_amplitude[0])


def _reach(follows: np.ndarray, middle: int, step: int) -> int:
    """The last bin from the middle outward before two in a row do not follow."""
    last, i = middle, middle
    while 0 <= i < len(follows):
        beyond = i + step
        if follows[i]:
            last = i
        elif not (0 <= beyond < len(follows) and follows[beyond]):
            break
        i = beyond
    return last
