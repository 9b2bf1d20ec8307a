"""The part of the record in which nothing but the swing itself is at work.

Before it the article is held or at rest, after it someone stops it, in between somebody may bump into it. Windows of
one period whose amplitude, phase and misfit run on smoothly are joined; the longest run of them is the free part.
"""

from __future__ import annotations

import numpy as np

from swingtrack.records import Bools, Floats
from swingtrack.signal.windows import Windows

# Judgments, from trials on rehearsed series with held starts, pushes, bumps and stops:
# a change of ln A or of phase from window to window, beside the usual one round about, that no damping makes,
STEP_FLOOR = 0.06
# times the usual scatter of the same record (a second mode makes much of it),
STEP_FACTOR = 8.0
# windows over which "round about" reaches,
AROUND = 10
# misfit over amplitude that is no swing any more, unless the whole record is as noisy,
WORST_MISFIT = 0.5
# the smallest amplitude, as a share of the largest, that still counts as the swing,
LEAST_SHARE = 0.01
# and hops without samples beyond which nothing can be said of a jump.
LONG_GAP = 4


def find_free_part(windows: Windows) -> tuple[float, float] | None:
    """Start and end of the free swing, s, to about half a period; None where no run of windows holds together."""
    if np.isfinite(windows.amplitude).sum() < 4 or not np.isfinite(np.diff(windows.phase)).any():
        return None
    windows = _known(windows)
    good = _good(windows)
    runs = _runs(np.concatenate([[True], _smooth(windows)]), good)
    if not runs:
        return None
    first, last = max(runs, key=lambda run: _worth(windows, run))
    if last - first < 2:
        return None
    half = float(np.min(np.diff(windows.t))) * 2
    return float(windows.t[first] - half), float(windows.t[last] + half)


def _known(windows: Windows) -> Windows:
    known = np.isfinite(windows.amplitude) & np.isfinite(windows.phase)
    return Windows(
        windows.t[known],
        windows.amplitude[known],
        windows.rest[known],
        windows.misfit[known],
        windows.phase[known],
    )


def _good(windows: Windows) -> Bools:
    swings = windows.misfit < np.maximum(WORST_MISFIT * windows.amplitude, 1.5 * np.median(windows.misfit))
    return np.asarray(swings & (windows.amplitude > LEAST_SHARE * np.max(windows.amplitude)))


def _smooth(windows: Windows) -> Bools:
    """Whether each window follows from the one before it."""
    hop = float(np.min(np.diff(windows.t)))
    hops = np.diff(windows.t) / hop
    noise = windows.misfit / np.maximum(windows.amplitude, 1e-300)
    allowed = np.maximum(noise[1:], noise[:-1])
    fine = np.ones(len(hops), dtype=bool)
    for value in (np.log(np.maximum(windows.amplitude, 1e-300)), windows.phase):
        step = np.diff(value) / hops
        beside = np.abs(step - _running_median(step))
        fine &= beside * hops < np.maximum(STEP_FLOOR, STEP_FACTOR * np.median(beside)) + allowed
    return np.asarray(fine | (hops > LONG_GAP))


def _running_median(values: Floats) -> Floats:
    padded = np.pad(values, AROUND, mode="reflect" if len(values) > AROUND else "edge")
    return np.asarray(np.median(np.lib.stride_tricks.sliding_window_view(padded, 2 * AROUND + 1), axis=1))


def _runs(follows: Bools, good: Bools) -> list[tuple[int, int]]:
    runs: list[tuple[int, int]] = []
    start: int | None = None
    for i in range(len(good)):
        if good[i] and (start is None or follows[i]):
            start = i if start is None else start
            continue
        if start is not None:
            runs.append((start, i - 1))
        start = i if good[i] else None
    if start is not None:
        runs.append((start, len(good) - 1))
    return runs


def _worth(windows: Windows, run: tuple[int, int]) -> float:
    """How much a run tells of the period: its length to the power 3/2 times its mean amplitude."""
    first, last = run
    amplitude: Floats = windows.amplitude[first : last + 1]
    return float((last - first + 1) ** 1.5 * np.sqrt(np.mean(amplitude**2)))
