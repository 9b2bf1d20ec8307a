"""Hand-timed runs beside the clip: the period of each, miscounts where they were counted and where they belong."""

from __future__ import annotations

from typing import Any

from ..records import Quantity, Stopwatch
from .look import DATA, FIT, INK, key, new_figure, plain

EDGE = 0.06  # of the axis: a run that lies beyond it is drawn so far inside, with an arrow and its number


def stopwatch_figure(stopwatch: Stopwatch, clip_period: Quantity | None) -> Any:
    """`draw_stopwatch` as a figure of its own."""
    figure = new_figure()
    draw_stopwatch(figure.subplots(), stopwatch, clip_period)
    return figure


def draw_stopwatch(ax: Any, stopwatch: Stopwatch, clip_period: Quantity | None = None) -> Any:
    """Period of each trial, their mean with ± 2 u, and the clip's own period with ± 2 u."""
    _band(ax, stopwatch.period, DATA, "stopwatch, ± 2 u")
    if clip_period is not None:
        _band(ax, clip_period, FIT, "clip, ± 2 u")
    good, mended, odd = [], [], []
    for number, trial in enumerate(stopwatch.trials, start=1):
        if trial.verdict == "ok":
            good.append((number, trial.period_s))
        elif trial.swings_that_fit:
            mended.append((number, trial.seconds / trial.swings_that_fit))
        if trial.verdict != "ok":
            odd.append((number, trial.period_s, trial.verdict))
    anchors = [period for _, period in good + mended]
    anchors += [
        stopwatch.period.value + side * 2.0 * min(stopwatch.period.u, stopwatch.period.value)
        for side in (-1, 1)
    ]
    if clip_period is not None:
        anchors.append(clip_period.value)
    low, high = min(anchors), max(anchors)
    room = 0.25 * (high - low) or 0.01 * high
    low, high = low - room, high + room
    if good:
        ax.plot(*zip(*good, strict=True), "o", ms=6, color=DATA, label="counted right")
    if mended:
        ax.plot(*zip(*mended, strict=True), "o", ms=6, mfc="none", mew=1.3, color=DATA, label="count mended")
    for number, period, verdict in odd:
        shown = min(max(period, low + EDGE * (high - low)), high - EDGE * (high - low))
        mark = "x" if shown == period else ("^" if period > shown else "v")
        ax.plot([number], [shown], mark, ms=6, mew=1.4, color=INK)
        side = -1 if number == len(stopwatch.trials) else 1
        ax.annotate(
            f"{verdict}: {period:.4g} s",
            (number, shown),
            xytext=(7 * side, 0),
            textcoords="offset points",
            va="center",
            ha="left" if side > 0 else "right",
            fontsize=8.5,
            color=INK,
        )
    ax.set_ylim(low, high)
    ax.set_xlim(0.4, len(stopwatch.trials) + 0.6)
    ax.xaxis.get_major_locator().set_params(integer=True)
    key(ax, loc="lower right", bbox_to_anchor=(1.0, 0.99), ncols=2, borderaxespad=0.0)
    return plain(ax, "trial, number in the sheet", "period, s")


def _band(ax: Any, period: Quantity, colour: str, label: str) -> None:
    ax.axhspan(
        period.value - 2.0 * period.u, period.value + 2.0 * period.u, color=colour, alpha=0.16, lw=0, zorder=0
    )
    ax.axhline(period.value, color=colour, lw=1.3, label=label, zorder=1)
