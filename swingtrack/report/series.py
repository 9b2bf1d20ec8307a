"""One report for a series of runs: each run, how they scatter and drift, the combined answer, the tensor on its axes.

The records come from stage 3, which this folder does not import: `CombinedResult` (inertia/combine.py) and
`TensorResult` (inertia/tensor.py).
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from typing import Any

from .figure_budget import budget_figure
from .figure_series import deviations_figure, moments_figure
from .figure_tensor import axes_figure, principal_figure
from .figures import Drawing
from .html import ranked, render_page
from .look import our_settings, save
from .numbers import Numbers
from .units import second_moment_unit


def render_series(result: Any, *, document: Mapping[str, Any], runs: Sequence[Mapping[str, Any]] = ()) -> str:
    """The report of a combined result as HTML text.

    Parameters
    ----------
    result : CombinedResult or TensorResult
        For the figures.
    document : mapping
        The combined document of the same result, as `combine --json` prints it: every number is taken from it.
    runs : sequence of mapping
        The result.json documents of the runs, in the order of the result's own, for what each was made of.
    """
    part = document["combined"]
    tensor = part.get("method") == "tensor"
    return render_page(
        "series.html.j2",
        n=Numbers(document),
        tensor=tensor,
        own=[Numbers(run, label=str(index)) for index, run in enumerate(runs)],
        figures={drawing.name: drawing for drawing in series_drawings(result)},
        budget=[] if tensor else ranked(part["budget"]),
        second_unit=second_moment_unit(1.0 if tensor else float(part["moment"]["value"])),
        plot=None,
    )


def series_files(result: Any) -> dict[str, bytes]:
    """All figures of a combined result, as file name → bytes, PNG and SVG of each."""
    return {
        f"{drawing.name}.{kind}": save(drawing.figure, kind)
        for drawing in series_drawings(result)
        for kind in ("png", "svg")
    }


def series_drawings(result: Any) -> tuple[Drawing, ...]:
    """Figures of a combined result: its runs, and the tensor or the budget."""
    with our_settings():
        return tuple(_drawings(result))


def _drawings(result: Any) -> Iterator[Drawing]:
    if result.method == "tensor":
        yield Drawing(
            "axes",
            "The principal axes among the axes swung about",
            "A view into the article's frame x, y, z: thin numbered lines are the axes swung about, thick lines the "
            "principal axes, as long as the square root of their moments.",
            axes_figure(result),
        )
        yield Drawing(
            "principal",
            "Principal moments",
            "Bars of the three principal moments with their expanded uncertainty; the table has the same numbers.",
            principal_figure(result),
        )
    else:
        yield Drawing(
            "moments",
            "Each run alone and the combined moment",
            "The moment of each run in the order given, with bars of two standard uncertainties; a band marks the "
            "combined moment and its expanded uncertainty.",
            moments_figure(result),
        )
    if any(run.deviation is not None for run in result.runs):
        yield Drawing(
            "deviations",
            "Scatter and drift of the runs",
            "How far each run lies from what the combined result predicts for it, in the order given.",
            deviations_figure(result),
        )
    if result.method != "tensor":
        yield Drawing(
            "budget",
            "Where the uncertainty comes from",
            "Bars of each input's share of the variance, the largest on top; the table has the same numbers.",
            budget_figure(result.budget),
        )
