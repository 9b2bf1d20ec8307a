"""Frames whose stored times are off by whole frame intervals, seen in the swing itself.

A recorder that drops an image, or shows one twice, and stamps the file as if nothing had happened shifts all that
follows by a frame. The swing shows it: between two frames the residual jumps by q' τ, τ a whole number of intervals,
and stays there. Such a jump is mended by moving the later times; it is counted and said. Times that are uneven already
are those of a recorder that stamps what it does, and are left alone.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from swingtrack.records import Doubt, Floats
from swingtrack.signal.coordinate import Coordinate
from swingtrack.signal.fitting import MAD_TO_SIGMA, Fitted

# A line through four residuals on either side is carried on to the place between two frames: these are its weights
# (least squares), from the far one to the near one. What is smooth makes no jump there.
CARRY_ON = np.array([-0.35, 0.05, 0.45, 0.85])
BESIDE = len(CARRY_ON)
# A jump stands this many robust standard deviations out of all the others, (chance: none in a million)
LEAST_JUMP = 6.0
# makes a whole number of frames to within this share of one,
WHOLE_FRAMES = 0.25
# and is looked for only where the swing moves at this share of its top speed or more.
LEAST_SPEED = 0.35
# Share of intervals that have to be equal (to 2 %) for the times to be a recorder's pretence.
EVEN_SHARE = 0.9
EVEN_TO = 0.02
MOST_JUMPS = 12


@dataclass(frozen=True)
class Jump:
    """Times from `at_s` on are early by `frames` intervals (late, where negative); `at_s` as mended so far."""

    at_s: float
    frames: int


def has_even_times(t: Floats) -> bool:
    """Whether the times look like a counter's: nearly all intervals whole multiples of one."""
    step = np.diff(t)
    interval = float(np.median(step))
    away = np.abs(step / interval - np.maximum(np.rint(step / interval), 1))
    return bool(np.mean(away < EVEN_TO) > EVEN_SHARE)


def find_jump(fitted: Fitted, start_s: float) -> Jump | None:
    """The largest jump of a whole number of frames in the fit's residuals; `start_s` is the time of its origin."""
    kept = fitted.samples.kept
    t = fitted.samples.t[kept]
    if len(t) < 8 * BESIDE:
        return None
    interval = float(np.median(np.diff(t)))
    residual = fitted.kept_residuals / fitted.samples.weight[kept]
    speed = _speed(fitted, t)
    i = np.arange(BESIDE, len(t) - BESIDE)
    windows = np.lib.stride_tricks.sliding_window_view(residual, BESIDE)
    jump = windows[i] @ CARRY_ON[::-1] - windows[i - BESIDE] @ CARRY_ON
    usual = MAD_TO_SIGMA * float(np.median(np.abs(jump - np.median(jump))))
    moving = (speed[i] + speed[i - 1]) / 2
    fast = np.abs(moving) > LEAST_SPEED * np.max(np.abs(speed))
    frames = np.where(fast, jump / np.where(fast, moving, 1.0) / interval, 0.0)
    whole = np.rint(frames)
    candidate = fast & (whole != 0) & (np.abs(frames - whole) < WHOLE_FRAMES)
    candidate &= np.abs(jump) > LEAST_JUMP * max(usual, fitted.sigma * 1e-6)
    candidate &= _sharp(residual, moving * interval, i)
    if not candidate.any():
        return None
    best = int(np.argmax(np.where(candidate, np.abs(jump), 0.0)))
    return Jump(start_s + float(t[i[best]]), int(whole[best]))


def _speed(fitted: Fitted, t: Floats) -> Floats:
    """Slope of the fitted coordinate at times `t`, per second."""
    step = 1e-4 / fitted.model.values["omega0"]
    return np.asarray((fitted.model.seen(t + step) - fitted.model.seen(t)) / step)


def _sharp(residual: Floats, per_frame: Floats, i: np.ndarray) -> np.ndarray:
    """Whether most of the jump happens between the two neighbours themselves."""
    between = residual[i] - residual[i - 1]
    return np.asarray(np.abs(between) > 0.6 * np.abs(per_frame))


def mend(coordinate: Coordinate, jump: Jump) -> Coordinate:
    """The coordinate with the times from a jump on moved; where two samples then share a time, the later is kept."""
    interval = float(np.median(np.diff(coordinate.t)))
    later = coordinate.t >= jump.at_s - interval / 4
    t = coordinate.t + np.where(later, jump.frames * interval, 0.0)
    first = float(t[later][0]) if later.any() else np.inf
    kept = later | (t < first - interval / 4)
    return replace(coordinate, t=t[kept], y=coordinate.y[kept], u=coordinate.u[kept])


def _as_stored(jumps: tuple[Jump, ...], interval_s: float) -> list[tuple[float, int]]:
    """Stored time and size of every jump, in their order: what was mended before it is taken off again."""
    stored = []
    for k, jump in enumerate(jumps):
        earlier = sum(other.frames for other in jumps[:k] if other.at_s <= jump.at_s)
        stored.append((jump.at_s - earlier * interval_s, jump.frames))
    return sorted(stored)


def jumps_doubt(jumps: tuple[Jump, ...], interval_s: float, mended_period_s: float, *, moved: bool) -> Doubt:
    """What was found, and what was or would be made of it."""
    places = ", ".join(f"{frames:+d} at {at_s:.2f} s" for at_s, frames in _as_stored(jumps, interval_s))
    return Doubt(
        "frame-times-jump",
        f"The swing jumps by whole frames, as if images were missing (+) or shown twice (−) under times that do not "
        f"say so: {places}. "
        + (
            "The later times were moved accordingly."
            if moved
            else f"With the times moved accordingly the mean period would be {mended_period_s:.5g} s; the uncertainty "
            "covers both."
        ),
        "Film with a camera application that keeps a steady rate, in good light.",
    )
