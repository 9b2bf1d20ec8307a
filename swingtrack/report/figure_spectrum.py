"""What the fit leaves: the spectrum of the residual, with the swing and every other motion named."""

from __future__ import annotations

from typing import Any

import numpy as np

from ..records import Swing
from .decimate import keep_extremes
from .figure_swing import scale_of
from .layout import short
from .look import DATA, FIT, THIRD, new_figure, plain, say
from .rounding import bare

FLOOR = 1e-3  # of the largest line: deeper notches are numerical and only stretch the axis


def spectrum_figure(swing: Swing) -> Any:
    """`draw_spectrum` as a figure of its own."""
    figure = new_figure()
    draw_spectrum(figure.subplots(), swing)
    return figure


def draw_spectrum(ax: Any, swing: Swing) -> Any:
    """Amplitude spectrum of the residual against frequency, both axes logarithmic."""
    trace = swing.trace
    scale, unit = scale_of(trace.unit)
    there = (trace.spectrum_hz > 0.0) & np.isfinite(trace.spectrum_residual)
    hz, height = trace.spectrum_hz[there], scale * trace.spectrum_residual[there]
    labels = ("frequency, Hz", f"residual's amplitude, {unit}")
    if not hz.size or not height.max() > 0.0:
        say(ax, "no residual to show")
        return plain(ax, *labels)
    shown = keep_extremes(height)
    ax.loglog(hz[shown], np.maximum(height[shown], FLOOR * height.max()), "-", lw=0.8, color=DATA, zorder=2)
    named = [(1.0 / swing.period_in_clip.value, "swing", FIT, "-")]
    named += [(mode.frequency_hz, short(mode.kind, 16), THIRD, "--") for mode in swing.other_modes]
    for row, (frequency, kind, colour, dash) in enumerate(sorted(named)):
        ax.axvline(frequency, color=colour, lw=1.4, ls=dash, zorder=1)
        # Names step down one row each, so that two modes close together stay legible.
        ax.annotate(
            kind,
            (frequency, 1.0),
            xycoords=("data", "axes fraction"),
            xytext=(4, -3 - 11 * (row % 3)),
            textcoords="offset points",
            va="top",
            fontsize=8.5,
            color=colour,
        )
    ax.set_ylim(top=6.0 * height.max())
    return _plain_numbers(plain(ax, *labels))


def _plain_numbers(ax: Any) -> Any:
    """Ticks in words that need no formula setter: "0.1", and "10⁻³" where that is shorter."""
    from matplotlib.ticker import FuncFormatter, NullFormatter

    ax.xaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
    ax.yaxis.set_major_formatter(FuncFormatter(lambda value, _: bare(value, 1)))
    for axis in (ax.xaxis, ax.yaxis):
        axis.set_minor_formatter(NullFormatter())
    return ax
