"""The swing as the page's own plot takes it: short numbers, long records thinned."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from ..records import Floats, SwingTrace
from .decimate import keep_extremes
from .figure_swing import scale_of

MOST_SAMPLES = (
    12_000  # some 0.4 MB of page; a screen has fewer columns, and zooming still shows single samples
)
DIGITS_BELOW_NOISE = 2  # shown beyond the residual's own size


def plot_data(trace: SwingTrace) -> dict[str, Any]:
    """Columns t, y (measured), f (fitted; null where there is none), used ("1" or "0" each), and how to show them."""
    scale, unit = scale_of(trace.unit)
    shown = keep_extremes(trace.measured, MOST_SAMPLES)
    residual = scale * (trace.measured - trace.fitted)[trace.used]
    noise = float(np.sqrt(np.nanmean(residual**2))) if residual.size else math.nan
    digits = _digits(noise, float(np.nanmax(np.abs(scale * trace.measured), initial=0.0)))
    return {
        "t": [round(float(t), 6) for t in trace.t_s[shown]],
        "y": _column(scale * trace.measured[shown], digits + 1),
        "f": _column(scale * trace.fitted[shown], digits + 1),
        "used": "".join("1" if used else "0" for used in trace.used[shown]),
        "from": trace.free_from_s,
        "to": trace.free_to_s,
        "unit": unit,
        "gap": "" if unit == "°" else " ",
        "digits": digits,
        "thinned": len(shown) < len(trace.t_s),
    }


def _column(values: Floats, decimals: int) -> list[float | None]:
    return [round(float(v), decimals) if math.isfinite(v) else None for v in values]


def _digits(noise: float, size: float) -> int:
    """Decimals that show a residual to two digits, or the swing to five where there is no residual."""
    if not (math.isfinite(noise) and noise > 1e-9 * size):
        noise = 1e-4 * size or 1.0
    return max(0, min(12, DIGITS_BELOW_NOISE - 1 - math.floor(math.log10(noise))))
