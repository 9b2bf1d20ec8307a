"""What a rig of each size would reach, and how long a clip is worth filming."""

from __future__ import annotations

from typing import Any

import numpy as np

from .look import DATA, FAINT, FIT, SHADE, key, new_figure, plain, say
from .rounding import bare

LEVELS = 10  # contours between the best and what nineteen rigs in twenty reach


def plan_rig_figure(plan: Any) -> Any:
    """`draw_reach` as a figure of its own."""
    figure = new_figure((6.4, 4.4))
    draw_reach(figure.subplots(), plan)
    return figure


def plan_clip_figure(plan: Any) -> Any:
    """`draw_clip_length` as a figure of its own."""
    figure = new_figure()
    draw_clip_length(figure.subplots(), plan)
    return figure


def draw_reach(ax: Any, plan: Any) -> Any:
    """Contours of the expanded uncertainty of the moment over spacing and length; grey where no rig can be.

    Forbidden are rigs too high or wide for the room, too fast or slow, too near to sway, or with strings too short.
    """
    spacing, length = 1e3 * plan.spacing_m, 1e3 * plan.length_m
    ax.contourf(
        spacing,
        length,
        (~plan.allowed).astype(float),
        levels=[0.5, 1.5],
        colors=[SHADE],
        zorder=0,
    )
    reach = 100.0 * plan.relative_u
    if np.isfinite(reach).any():
        low, high = float(np.nanmin(reach)), float(np.nanpercentile(reach, 95))
        if high > 1.02 * low:
            levels = np.geomspace(1.02 * low, high, LEVELS)
            lines = ax.contour(spacing, length, reach, levels=levels, colors=DATA, linewidths=1.0)
            ax.clabel(lines, fmt=lambda value: f"{bare(value, 2)} %", fontsize=8, colors=DATA)
            ax.plot([], [], "-", lw=1.0, color=DATA, label="expanded uncertainty of the moment")
    given = plan.rig.suspension.dimensions
    ax.plot(
        1e3 * given["upper_spacing"].value,
        1e3 * given["length"].value,
        "D",
        ms=8,
        color=FIT,
        label="the plan",
        clip_on=False,
        zorder=5,
    )
    ax.plot([], [], "s", ms=9, color=SHADE, mec=FAINT, label="can't be hung, or too near to sway")
    key(ax, loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=2, borderaxespad=0.3)
    return plain(ax, "string spacing, mm", "string length, mm")


def draw_clip_length(ax: Any, plan: Any) -> Any:
    """Relative standard uncertainty of the period over the length of the clip, the planned length marked."""
    if plan.clip_lengths_s.size < 2:
        say(ax, "a single length of clip")
        return plain(ax, "length of the clip, s", "uncertainty of the period, ppm")
    ax.plot(
        plan.clip_lengths_s, 1e6 * plan.period_relative_u, "-", lw=1.6, color=DATA, label="expected, u(T)/T"
    )
    ax.axvline(plan.clip_s, color=FIT, lw=1.3, label="the plan")
    key(ax, loc="upper right")
    ax.set_ylim(bottom=0.0)  # from nothing on, so that a longer clip that gains little is seen to gain little
    return plain(ax, "length of the clip, s", "uncertainty of the period, ppm")
