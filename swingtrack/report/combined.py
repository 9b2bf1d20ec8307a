"""Terminal pages of combined results, tensors and solids.

The records come from stage 3, which this folder does not import: `CombinedResult` (inertia/combine.py), `TensorResult`
(inertia/tensor.py) and `SolidResult` (inertia/solids_result.py).
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from ..records import Quantity
from .layout import advice_lines, clean, columns, doubt_lines, short, table
from .rounding import bare, deviation, percent, rounded, show
from .text import causes
from .units import second_moment_unit


def combined_text(result: Any) -> str:
    """One answer of several runs: the moment, the runs, what dominates, what to do next."""
    unit, scale = second_moment_unit(result.moment.value)
    rows = [
        (
            f"moment by {result.method.replace('-', ' ')}",
            f"{show(result.moment, 'kg m²', k=result.k)}   (k = {result.k:.2f}, about 95 %)",
        ),
        ("", show(result.moment, unit, scale=scale, k=result.k)),
        ("article", result.article),
        ("about", result.about),
        *((item.name, f"{show(item.quantity)}   ({item.meaning})") for item in result.by_products),
    ]
    if result.consistency.birge is not None:
        rows.append(("consistency", consistency_words(result.consistency)))
    rows.append(("doubt comes from", causes(result.budget, 4)))
    return _page([table(rows), "", *_run_lines(result.runs)], result)


def tensor_text(result: Any) -> str:
    """The inertia matrix about the centre of mass, its principal moments and axes."""
    power, cells = _matrix_cells(result.matrix)
    lines = [
        f"inertia matrix of {clean(result.article)} about the centre of mass, {power}kg m² (± one standard uncertainty)",
        *columns(["", "x", "y", "z"], [[name, *row] for name, row in zip("xyz", cells, strict=True)]),
        "",
        "principal moments (about 95 %) and their axes",
    ]
    for axis in result.principal:
        sure = (
            "not told apart"
            if axis.direction_u_rad is None
            else f"± {bare(axis.direction_u_rad * 57.29578, 2, '°')}"
        )
        lines.append(f"  {show(axis.moment, 'kg m²', k=axis.k)}   along {_direction(axis.direction)} {sure}")
    lines += [
        "",
        table(
            [
                ("consistency", consistency_words(result.consistency)),
                ("condition of the axes", f"{bare(result.condition, 2)} (1.6 at best)"),
                (
                    "next axis",
                    f"{_direction(result.next_axis.axis)} takes {percent(result.next_axis.gain, decimals=0)} off",
                ),
            ]
        ),
        "",
        *_run_lines(result.runs),
    ]
    return _page(lines, result)


def solids_text(result: Any) -> str:
    """What an assembly of solids amounts to."""
    centre = ", ".join(rounded(1e3 * part.value, 1e3 * part.u)[0] for part in result.centre)
    unit, scale = second_moment_unit(result.moment.value)
    rows = [
        ("expected moment", f"{show(result.moment, 'kg m²', k=result.k)}   (k = {result.k:.2f}, about 95 %)"),
        ("", show(result.moment, unit, scale=scale, k=result.k)),
        ("about", result.about),
        ("mass", show(result.mass)),
        ("centre of mass", f"({centre}) mm"),
        ("principal moments", ", ".join(bare(moment, 4) for moment, _ in result.principal) + " kg m²"),
        ("doubt comes from", causes(result.budget)),
    ]
    body = [
        [short(part.name, 24), part.kind, show(part.mass), bare(part.moment, 4), percent(part.share)]
        for part in result.parts
    ]
    lines = [
        table(rows),
        "",
        *columns(["part", "kind", "mass", "moment, kg m²", "share"], body, left=(0, 1)),
    ]
    for item in result.comparisons:
        verdict = "agrees" if item.agrees else "does not agree"
        lines.append(
            f"  measured {item.what}: {show(item.measured)}, E_n = {bare(item.normalised_error, 2)}: {verdict}"
        )
    return "\n".join(lines) + "\n" + doubt_lines(result.doubts)


def consistency_words(consistency: Any) -> str:
    """What the scatter of the runs says of their claims."""
    if consistency.birge is None:
        return "nothing left over to judge the scatter by"
    added = (
        ""
        if not consistency.extra_relative_u
        else f"; {percent(consistency.extra_relative_u, decimals=2)} a run was added"
    )
    return f"Birge ratio {bare(consistency.birge, 2)} with {consistency.dof} degrees of freedom{added}"


def _run_lines(runs: Sequence[Any]) -> list[str]:
    body = [
        [
            short(run.name, 26),
            run.role,
            show(run.period),
            show(run.moment),
            "" if run.deviation is None else deviation(run.deviation),
        ]
        for run in runs
    ]
    return columns(["run", "role", "period, ± u", "moment alone, ± u", "deviation"], body, left=(0, 1))


def _matrix_cells(matrix: Sequence[Sequence[Quantity]]) -> tuple[str, list[list[str]]]:
    """Elements of a matrix with one power of ten for all, so that they can be compared at sight."""
    largest = max(abs(element.value) for row in matrix for element in row)
    if largest >= 1e-2:
        power, scale = "", 1.0
    else:
        power, scale = ("10⁻³ ", 1e3) if largest >= 1e-5 else ("10⁻⁶ ", 1e6)
    return power, [
        [" ± ".join(rounded(element.value * scale, element.u * scale)).replace("-", "−") for element in row]
        for row in matrix
    ]


def _direction(axis: Sequence[float]) -> str:
    return "(" + ", ".join(f"{part:+.4f}" for part in axis).replace("-", "−") + ")"


def _page(lines: list[str], result: Any) -> str:
    lines += advice_lines(result.advice)
    return "\n".join(lines) + "\n" + doubt_lines(result.doubts)
