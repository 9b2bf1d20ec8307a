"""How the swing dies away: the amplitude against time with the law of damping that was fitted."""

from __future__ import annotations

from typing import Any

import numpy as np

from ..records import Swing
from .decimate import keep_extremes
from .figure_swing import scale_of
from .layout import short
from .look import DATA, FAINT, FIT, key, new_figure, plain


def amplitude_figure(swing: Swing) -> Any:
    """`draw_amplitude` as a figure of its own."""
    figure = new_figure()
    draw_amplitude(figure.subplots(), swing)
    return figure


def draw_amplitude(ax: Any, swing: Swing) -> Any:
    """The fit's amplitude as an envelope round the measured swing, the half-life marked where it falls inside."""
    trace = swing.trace
    scale, unit = scale_of(trace.unit)
    kept = np.flatnonzero(trace.used)
    shown = kept[keep_extremes(trace.measured[kept])]
    ax.plot(trace.t_s[shown], scale * trace.measured[shown], "-", lw=0.6, color=DATA, alpha=0.6)
    ax.plot([], [], "-", lw=1.2, color=DATA, alpha=0.7, label="measured swing")
    shown = kept[keep_extremes(trace.amplitude[kept])]
    label = f"amplitude, {short(swing.damping_law, 24)} damping"
    for sign in (1.0, -1.0):
        ax.plot(
            trace.t_s[shown],
            sign * scale * trace.amplitude[shown],
            "-",
            lw=1.8,
            color=FIT,
            label=label if sign > 0.0 else None,
        )
    ax.axhline(0.0, color=FAINT, lw=0.8, zorder=0)
    if swing.half_life is not None:
        half = trace.free_from_s + swing.half_life.value
        if half <= trace.free_to_s:
            ax.axvline(half, color=FAINT, lw=1.0, ls=(0, (4, 3)), label="one half-life after the start")
    ax.margins(x=0.01)
    key(ax, loc="lower right", bbox_to_anchor=(1.0, 0.99), ncols=2, borderaxespad=0.0)
    return plain(ax, "time, s", f"swing and amplitude, {unit}")
