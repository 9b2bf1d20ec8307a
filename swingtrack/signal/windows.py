"""The swing seen through short windows: local amplitude, phase, rest and misfit against time."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from swingtrack.records import Floats

# Window length and spacing in periods: one period separates the swing from its rest place; four steps a period
# follow a release closely.
WINDOW_PERIODS = 1.0
HOPS_PER_PERIOD = 4
# A window with fewer samples than this says nothing; windows are made long enough to hold twice as many.
FEWEST_IN_WINDOW = 6
# Windows are lengthened until the amplitude stands this many times out of its noise in each.
LEAST_IN_WINDOW = 8.0
LONGEST_SHARE = 0.2


@dataclass(frozen=True, eq=False)
class Windows:
    """Least-squares fits of b + A cos(2π f (t − t₀) + φ) in windows of one period.

    Parameters
    ----------
    t : (w,) float
        Middle of each, s.
    amplitude, rest, misfit : (w,) float
        A, b and the rms residual; NaN where a window holds too few samples.
    phase : (w,) float
        2π f (t − t₀) + φ at the middle, unwrapped, rad.
    """

    t: Floats
    amplitude: Floats
    rest: Floats
    misfit: Floats
    phase: Floats


def fit_windows(t: Floats, y: Floats, hz: float) -> Windows:
    """Fit windows along the record, of one period where that is enough to see the swing in each."""
    a_period = 1 / hz / float(np.median(np.diff(t)))
    periods = max(WINDOW_PERIODS, 2 * FEWEST_IN_WINDOW / a_period)
    found = _fit(t, y, hz, periods)
    known = np.isfinite(found.amplitude)
    if known.any():
        rough = float(np.median(found.misfit[known])) / max(float(np.max(found.amplitude[known])), 1e-300)
        # u(A) = σ √(2/n) in a window of n samples
        needed = 2 * (LEAST_IN_WINDOW * rough) ** 2 / a_period
        longest = LONGEST_SHARE * float(t[-1] - t[0]) * hz
        if needed > periods and longest > periods:
            found = _fit(t, y, hz, min(needed, longest))
    return found


def _fit(t: Floats, y: Floats, hz: float, periods: float) -> Windows:
    """By running sums and their differences."""
    width = periods / hz
    hop = width / HOPS_PER_PERIOD
    middles = np.arange(t[0] + width / 2, t[-1] - width / 2 + hop / 2, hop)
    if len(middles) == 0:
        middles = np.array([(t[0] + t[-1]) / 2])
    first = np.searchsorted(t, middles - width / 2)
    last = np.searchsorted(t, middles + width / 2, side="right")
    turn = 2 * np.pi * hz * (t - t[0])
    columns = np.column_stack([np.ones_like(t), np.cos(turn), np.sin(turn)])
    level = float(np.median(y))
    z = y - level
    products = np.column_stack([columns[:, i] * columns[:, j] for i in range(3) for j in range(3)])
    sums = _window_sums(np.column_stack([products, columns * z[:, None], z * z]), first, last)
    normal = sums[:, :9].reshape(-1, 3, 3)
    right = sums[:, 9:12]
    count = sums[:, 0]
    enough = (count >= FEWEST_IN_WINDOW) & (np.abs(np.linalg.det(normal)) > 0.02 * np.maximum(count, 1) ** 3)
    normal = np.where(enough[:, None, None], normal, np.eye(3))
    found = np.linalg.solve(normal, right[..., None])[..., 0]
    misfit = np.sqrt(np.maximum(sums[:, 12] - np.sum(found * right, axis=1), 0) / np.maximum(count - 3, 1))
    nan = np.where(enough, 0.0, np.nan)
    amplitude = np.hypot(found[:, 1], found[:, 2]) + nan
    local = np.arctan2(-found[:, 2], found[:, 1])
    known = np.flatnonzero(enough)
    shift = np.full(len(middles), np.nan)
    shift[known] = np.unwrap(local[known])
    phase = 2 * np.pi * hz * (middles - t[0]) + shift
    return Windows(
        middles, amplitude, np.asarray(found[:, 0] + level + nan, dtype=float), misfit + nan, phase
    )


def _window_sums(columns: Floats, first: np.ndarray, last: np.ndarray) -> Floats:
    total = np.vstack([np.zeros(columns.shape[1]), np.cumsum(columns, axis=0)])
    return np.asarray(total[last] - total[first])
