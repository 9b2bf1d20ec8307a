"""The swing with its fit and the residuals below it on one time axis."""

from __future__ import annotations

from typing import Any

import numpy as np

from ..records import Bools, SwingTrace
from .decimate import keep_extremes
from .layout import short
from .look import DATA, FAINT, FIT, INK, SHADE, WIDE, key, new_figure, plain

DEGREES = 180.0 / np.pi
LEFT_OUT_S = 1e-6  # shorter stretches at either end are rounding, not a part left out


def scale_of(unit: str) -> tuple[float, str]:
    """Factor and unit in which a trace is shown: angles in degrees; a unit that nobody knows says so."""
    return (DEGREES, "°") if unit == "rad" else (1.0, short(unit, 12) or "unit of the series")


def set_aside(trace: SwingTrace) -> Bools:
    """(n,) bool: samples in the free part that the fit did not use."""
    free = (trace.t_s >= trace.free_from_s) & (trace.t_s <= trace.free_to_s)
    return ~trace.used & np.isfinite(trace.measured) & free


def swing_figure(trace: SwingTrace) -> Any:
    """Data with the fit above, residuals below, on one time axis."""
    figure = new_figure(WIDE)
    upper, lower = figure.subplots(2, 1, sharex=True, height_ratios=[3, 1.3])
    draw_swing(upper, trace)
    draw_residual(lower, trace)
    upper.tick_params(labelbottom=False)
    upper.set_xlabel("")
    figure.align_ylabels()
    return figure


def draw_swing(ax: Any, trace: SwingTrace) -> Any:
    """Data and fit against time; parts left out are shaded, samples set aside crossed."""
    scale, unit = scale_of(trace.unit)
    line = keep_extremes(trace.fitted)
    ax.plot(trace.t_s[line], scale * trace.fitted[line], "-", lw=1.8, color=FIT, alpha=0.55, label="fit")
    shown = keep_extremes(trace.measured)
    ax.plot(trace.t_s[shown], scale * trace.measured[shown], ".", ms=3.0, mew=0, color=DATA, label="measured")
    aside = set_aside(trace)
    if aside.any():
        ax.plot(
            trace.t_s[aside],
            scale * trace.measured[aside],
            "x",
            ms=6,
            mew=1.2,
            color=INK,
            label="set aside by the fit",
        )
    _shade_left_out(ax, trace, label="not the free swing")
    ax.margins(x=0.01)
    # Above the data, which fills the axes from side to side.
    key(ax, loc="lower right", bbox_to_anchor=(1.0, 0.98), ncols=4, borderaxespad=0.0, enlarged=2.5)
    return plain(ax, "time, s", f"swing, {unit}")


def draw_residual(ax: Any, trace: SwingTrace) -> Any:
    """Measured less fitted; samples set aside are crossed, at the edge where they lie beyond it."""
    scale, unit = scale_of(trace.unit)
    residual = scale * (trace.measured - trace.fitted)
    kept = np.flatnonzero(trace.used)
    shown = kept[keep_extremes(residual[kept])]
    ax.axhline(0.0, color=FAINT, lw=0.8, zorder=0)
    ax.plot(trace.t_s[shown], residual[shown], ".", ms=2.6, mew=0, color=DATA)
    aside = set_aside(trace) & np.isfinite(residual)
    if aside.any() and kept.size:
        reach = 1.15 * float(np.max(np.abs(residual[kept])))
        ax.plot(
            trace.t_s[aside],
            np.clip(residual[aside], -reach, reach),
            "x",
            ms=5,
            mew=1.2,
            color=INK,
            clip_on=False,
        )
    _shade_left_out(ax, trace)
    ax.margins(x=0.01)
    return plain(ax, "time, s", f"residual, {unit}")


def _shade_left_out(ax: Any, trace: SwingTrace, label: str | None = None) -> None:
    for start, end in ((trace.t_s[0], trace.free_from_s), (trace.free_to_s, trace.t_s[-1])):
        if end - start > LEFT_OUT_S:
            ax.axvspan(start, end, color=SHADE, lw=0, zorder=0, label=label)
            label = None
