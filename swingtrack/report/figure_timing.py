"""When the frames were taken: the interval before each, where evenness and gaps are seen at a glance."""

from __future__ import annotations

from typing import Any

import numpy as np

from ..records import Path
from .decimate import keep_extremes
from .look import DATA, FIT, INK, key, new_figure, plain, say

GAP = 1.5  # times the usual interval from which at least one frame is missing


def timing_figure(path: Path) -> Any:
    """`draw_timing` as a figure of its own."""
    figure = new_figure()
    draw_timing(figure.subplots(), path)
    return figure


def draw_timing(ax: Any, path: Path) -> Any:
    """Interval to the frame before, ms, against time; gaps of a dropped frame or more are marked."""
    if path.t_s.size < 2:
        say(ax, "a single frame")
        return plain(ax, "time in the clip, s", "interval, ms")
    interval = 1e3 * np.diff(path.t_s)
    at = path.t_s[1:]
    usual = float(np.median(interval))
    gap = interval > GAP * usual
    ax.axhline(usual, color=FIT, lw=1.2, zorder=1, label="median")
    shown = np.flatnonzero(~gap)
    shown = shown[keep_extremes(interval[shown])]
    ax.plot(at[shown], interval[shown], ".", ms=2.8, mew=0, color=DATA, zorder=2, label="frames")
    if gap.any():
        ax.plot(at[gap], interval[gap], "x", ms=6, mew=1.3, color=INK, zorder=3, label="gaps")
    # A clock tick of rounding must not fill the axis: show at least a tenth of an interval.
    low, high = float(interval.min()), float(interval.max())
    room = max(0.08 * (high - low), 0.05 * usual)
    ax.set_ylim(max(0.0, low - room), high + room)
    ax.margins(x=0.01)
    key(ax, loc="lower right", bbox_to_anchor=(1.0, 0.99), ncols=3, borderaxespad=0.0, enlarged=2.5)
    return plain(ax, "time in the clip, s", "interval, ms")
