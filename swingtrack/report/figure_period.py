"""Period against amplitude: single cycles, and what the suspension predicts."""

from __future__ import annotations

from typing import Any

import numpy as np

from ..records import Swing
from .figure_swing import scale_of
from .layout import short
from .look import DATA, FIT, INK, key, new_figure, plain, say

BEYOND = 1.1  # the law is drawn a tenth beyond the largest amplitude


def period_figure(swing: Swing) -> Any:
    """`draw_period_amplitude` as a figure of its own."""
    figure = new_figure()
    draw_period_amplitude(figure.subplots(), swing)
    return figure


def draw_period_amplitude(ax: Any, swing: Swing) -> Any:
    """Periods of single cycles against amplitude, the suspension's law, and the small-swing period at zero.

    Where the amplitude is known in pixels or in nobody's unit alone the law can't be drawn beside the cycles.
    """
    law, trace = swing.law, swing.trace
    scale, unit = scale_of(trace.unit)
    known = np.isfinite(trace.amplitude)
    if trace.cycle_t_s.size and known.any():
        at = np.interp(trace.cycle_t_s, trace.t_s[known], scale * trace.amplitude[known])
        ax.plot(at, trace.cycle_period_s, "o", ms=3.6, mew=0, color=DATA, alpha=0.8, label="single cycles")
    else:
        say(ax, "no single cycles to show")
    if law is not None and swing.amplitude_start is not None and trace.unit == "rad":
        reach = law.amplitude_rad <= BEYOND * swing.amplitude_start.value
        ax.plot(
            scale * law.amplitude_rad[reach],
            swing.period.value * law.period_ratio[reach],
            "-",
            lw=1.6,
            color=FIT,
            label=f"{short(law.name, 20)} suspension, exact",
        )
    ax.errorbar(
        [0.0],
        [swing.period.value],
        yerr=[2.0 * swing.period.u],
        fmt="D",
        ms=5,
        color=INK,
        mfc="none",
        capsize=3,
        clip_on=False,
        label="small-swing period, ± 2 u",
    )
    ax.set_xlim(left=0.0)
    key(ax, loc="best")
    return plain(ax, f"amplitude, {unit}", "period, s")
