"""Is the stated uncertainty of each place true? Its scale is set by how far the places lie off a smooth swing.

The locator's own uncertainty assumes that what its template leaves over is white; codecs make it otherwise. Over
each period a harmonic series with slowly changing amplitude is fitted,
c + d t + Σ_k (a_k cos kωt + b_k sin kωt) + t (a cos ωt + b sin ωt), k = 1 … 3, and the residuals are compared
with the stated u, the lost degrees of freedom given back. A clip whose frame times are off shows residuals along
the dot's way in proportion to its speed: those say nothing of the place, so along the way only the slow half of
the frames counts.
"""

from __future__ import annotations

import numpy as np

from ..records import Floats
from .predict import dominant_frequency

PARAMETERS = 10
FEWEST = 25  # frames a window must hold
MOST_WINDOWS = 40
LIMITS = (0.3, 30.0)


def uncertainty_scale(
    t_s: Floats, x_px: Floats, y_px: Floats, u_x: Floats, u_y: Floats
) -> tuple[float, float] | None:
    """Factors for u_x and u_y that make the normalised residuals' spread 1; None where too few frames say so."""
    seen = np.isfinite(x_px)
    t, xy, u = t_s[seen], np.column_stack([x_px, y_px])[seen], np.column_stack([u_x, u_y])[seen]
    if len(t) < 2 * FEWEST:
        return None
    head = t < t[0] + min(t[-1] - t[0], 12.0)
    swing = dominant_frequency(t[head], xy[head])
    if swing is None:
        return None
    omega = swing[0]
    interval = float(np.median(np.diff(t)))
    lasting = max(2 * np.pi / omega, (PARAMETERS + FEWEST) * interval)
    starts = np.arange(t[0], t[-1] - lasting, lasting)
    if not len(starts):
        return None
    starts = starts[:: max(1, len(starts) // MOST_WINDOWS)]
    normal: list[list[Floats]] = [[], []]
    for start in starts:
        inside = (t >= start) & (t < start + lasting)
        if inside.sum() < FEWEST:
            continue
        for axis, values in enumerate(_normalised(t[inside] - start, xy[inside], u[inside], omega)):
            if len(values):
                normal[axis].append(values)
    if not normal[0] or not normal[1]:
        return None
    scales = [_spread(np.concatenate(part)) for part in normal]
    return scales[0], scales[1]


def _normalised(t: Floats, xy: Floats, u: Floats, omega: float) -> tuple[Floats, Floats]:
    w = omega * t
    s = t - t.mean()
    base = np.column_stack(
        [
            np.ones_like(t),
            s,
            *(f(k * w) for k in (1, 2, 3) for f in (np.cos, np.sin)),
            s * np.cos(w),
            s * np.sin(w),
        ]
    )
    coefficients, _, rank, _ = np.linalg.lstsq(base, xy, rcond=None)
    left = (xy - base @ coefficients) * np.sqrt(len(t) / max(len(t) - rank, 1))
    velocity = np.gradient(base @ coefficients, t, axis=0)
    speed = np.hypot(velocity[:, 0], velocity[:, 1])
    slow = speed <= np.median(speed)
    top = float(speed.max())
    if top <= 0:
        return left[:, 0] / u[:, 0], left[:, 1] / u[:, 1]
    # An axis across the way is free of timing faults in all frames, one along it in the slow ones.
    parts = []
    for axis in (0, 1):
        across = np.abs(velocity[:, axis]) <= 0.1 * top
        use = slow | across
        parts.append(left[use, axis] / u[use, axis])
    return parts[0], parts[1]


def _spread(values: Floats) -> float:
    """Standard deviation without the few that lie beyond four robust ones."""
    robust = 1.4826 * float(np.median(np.abs(values)))
    kept = values[np.abs(values) <= 4 * max(robust, 1e-12)]
    return float(np.clip(np.sqrt(np.mean(kept**2)) if len(kept) else 1.0, *LIMITS))
