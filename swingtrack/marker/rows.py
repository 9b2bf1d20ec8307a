"""Rolling shutter: a sensor reads row after row, so a dot is seen at its own row's time.

With readout time R from the first row to the last and row r of H (stored picture), the dot's picture belongs to
t + R (r / H − ½), t the frame's time. A period is not changed by that to first order, the shape of the swing is.
"""

from __future__ import annotations

import numpy as np

from ..records import Floats


def row_delay(row_px: Floats, height: int, readout_s: float) -> Floats:
    """R (r / H − ½) in seconds for each stored row; rows of frames without the dot are filled in between."""
    known = np.isfinite(row_px)
    at = np.arange(len(row_px))
    rows = np.interp(at, at[known], row_px[known]) if known.any() else np.full(len(row_px), (height - 1) / 2)
    delay: Floats = readout_s * ((rows + 0.5) / height - 0.5)
    return delay


def shift_in_time(t_s: Floats, values: Floats, by_s: Floats) -> Floats:
    """Values seen at t + by, carried back to t by the local parabola through seven frames.

    y(t) = y(t + by) − y' by + y'' by² / 2, the derivatives from least squares, so that little noise is added.
    """
    out = values.copy()
    n = len(t_s)
    for i in range(n):
        if not np.isfinite(values[i]) or by_s[i] == 0.0:
            continue
        low, high = max(0, i - 3), min(n, i + 4)
        near = np.arange(low, high)[np.isfinite(values[low:high])]
        if len(near) < 4:
            continue
        # Times at which each was really seen.
        tau = (t_s[near] + by_s[near]) - (t_s[i] + by_s[i])
        slope = np.linalg.lstsq(
            np.column_stack([np.ones_like(tau), tau, tau**2 / 2]), values[near], rcond=None
        )[0]
        out[i] = values[i] - slope[1] * by_s[i] + slope[2] * by_s[i] ** 2 / 2
    return out
