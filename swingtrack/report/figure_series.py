"""Several runs in the order in which they were made: scatter and drift at a glance, the combined answer across them."""

from __future__ import annotations

from typing import Any

from ..records import Quantity
from .look import DATA, FAINT, FIT, INK, key, new_figure, plain
from .rounding import bare

FAR = 2.0  # standard uncertainties from which a run is marked


def moments_figure(result: Any) -> Any:
    """`draw_moments` as a figure of its own."""
    figure = new_figure((6.4, 3.4))
    draw_moments(figure.subplots(), result)
    return figure


def deviations_figure(result: Any) -> Any:
    """`draw_deviations` as a figure of its own."""
    figure = new_figure((6.4, 3.4))
    draw_deviations(figure.subplots(), result)
    return figure


def draw_moments(ax: Any, result: Any) -> Any:
    """Moment of each run alone, ± 2 u, with the combined moment ± U as a band."""
    _band(ax, result.moment, result.k)
    for number, run in enumerate(result.runs, start=1):
        far = run.normalised is not None and abs(run.normalised) > FAR
        ax.errorbar(
            [number],
            [run.moment.value],
            yerr=[2.0 * run.moment.u],
            fmt="D" if far else "o",
            ms=6,
            color=INK if far else DATA,
            mfc="none" if far else DATA,
            capsize=3,
            lw=1.2,
            label=_label(number, "each run alone, ± 2 u"),
        )
    _numbered(ax, len(result.runs))
    return plain(ax, "run, in the order given", "moment of inertia, kg m²")


def draw_deviations(ax: Any, result: Any) -> Any:
    """How far each run lies from what the combined result predicts for it, with its own ± 2 u where that is known."""
    ax.axhline(0.0, color=FIT, lw=1.3, label="combined result")
    shown = False
    for number, run in enumerate(result.runs, start=1):
        if run.deviation is None:
            continue
        own = None if not run.normalised else abs(run.deviation / run.normalised)
        ax.errorbar(
            [number],
            [100.0 * run.deviation],
            yerr=None if own is None else [200.0 * own],
            fmt="o",
            ms=6,
            color=DATA,
            capsize=3,
            lw=1.2,
            label=None if shown else "runs, ± 2 u of what is their own",
        )
        shown = True
    _numbered(ax, len(result.runs))
    return plain(ax, "run, in the order given", "deviation, %")


def _band(ax: Any, moment: Quantity, k: float) -> None:
    half = k * moment.u
    ax.axhspan(moment.value - half, moment.value + half, color=FIT, alpha=0.16, lw=0, zorder=0)
    ax.axhline(moment.value, color=FIT, lw=1.4, label=f"combined, ± U (k = {bare(k, 3)})", zorder=1)


def _label(number: int, text: str) -> str | None:
    return text if number == 1 else None


def _numbered(ax: Any, runs: int) -> None:
    ax.set_xlim(0.4, runs + 0.6)
    ax.xaxis.get_major_locator().set_params(integer=True)
    ax.grid(visible=True, axis="x", color=FAINT, alpha=0.25, lw=0.6)
    ax.set_axisbelow(True)
    key(ax, loc="lower right", bbox_to_anchor=(1.0, 1.0), ncols=2, borderaxespad=0.2)
