"""Where the uncertainty comes from: each input's share of the variance."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from ..records import BudgetLine
from .layout import short
from .look import DATA, INK, new_figure, plain
from .rounding import percent

LONGEST_NAME = 34  # signs; longer ones leave the bars no room
MOST_BARS = 12  # the rest, each smaller than these, is drawn as one


def budget_figure(budget: Sequence[BudgetLine]) -> Any:
    """`draw_budget` as a figure as tall as it has bars."""
    bars = min(len(budget), MOST_BARS + 1)
    figure = new_figure((5.4, 1.0 + 0.3 * bars))
    draw_budget(figure.subplots(), budget)
    return figure


def draw_budget(ax: Any, budget: Sequence[BudgetLine]) -> Any:
    """Share of each input in the variance of the result, the largest on top."""
    ranked = sorted(budget, key=lambda line: -line.share)
    names = [input_name(line.input) for line in ranked[:MOST_BARS]]
    shares = [line.share for line in ranked[:MOST_BARS]]
    if len(ranked) > MOST_BARS:
        names.append(f"{len(ranked) - MOST_BARS} others")
        shares.append(sum(line.share for line in ranked[MOST_BARS:]))
    places = list(range(len(names)))[::-1]
    ax.barh(places, [100.0 * share for share in shares], color=DATA, height=0.62)
    for place, share in zip(places, shares, strict=True):
        ax.annotate(
            percent(share),
            (100.0 * max(share, 0.0), place),
            xytext=(4, 0),
            textcoords="offset points",
            va="center",
            fontsize=8.5,
            color=INK,
        )
    ax.set_yticks(places, names)
    ax.set_xlim(0.0, 112.0)
    ax.set_xticks([0, 25, 50, 75, 100])
    ax = plain(ax, "share of the variance, %", "")
    ax.tick_params(axis="y", length=0)
    ax.spines["left"].set_visible(False)
    return ax


def input_name(name: str) -> str:
    """An input as people read it: "upper_spacing" → "upper spacing"."""
    return short(name.replace("_", " "), LONGEST_NAME)
