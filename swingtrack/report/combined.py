"""Terminal pages of combined results, tensors and solids."""

from __future__ import annotations

import textwrap
from typing import Any

from ..records import Quantity
from .rounding import rounded, show
from .text import WIDTH, doubt_lines, table


def combined_text(result: Any) -> str:
    """One answer of several runs: the moment, the runs, what dominates, what to do next."""
    rows = [
        (
            f"moment by {result.method.replace('-', ' ')}",
            f"{show(result.moment, 'kg m²', k=result.k)}   (k = {result.k:.2f}, about 95 %)",
        ),
        ("article", result.article),
        ("about", result.about),
    ]
    for item in result.by_products:
        rows.append((item.name, f"{show(item.quantity)}   ({item.meaning})"))
    if result.consistency.birge is not None:
        rows.append(
            (
                "consistency",
                f"Birge ratio {result.consistency.birge:.2f} with {result.consistency.dof} degrees of freedom",
            )
        )
    ranked = sorted(result.budget, key=lambda line: -line.share)[:4]
    rows.append(("doubt comes from", ", ".join(f"{line.input} {100 * line.share:.0f} %" for line in ranked)))
    return _page([table(rows), "", *_run_lines(result.runs)], result)


def tensor_text(result: Any) -> str:
    """The inertia matrix about the centre of mass, its principal moments and axes."""
    lines = [
        f"inertia matrix of {result.article} about the centre of mass, kg m² (± one standard uncertainty)"
    ]
    for row in result.matrix:
        lines.append("  " + "  ".join(f"{show(entry, ''):>30}" for entry in row))
    lines += ["", "principal moments"]
    for axis in result.principal:
        direction = ", ".join(f"{part:+.4f}" for part in axis.direction)
        lines.append(f"  {show(axis.moment, 'kg m²', k=axis.k)}   along ({direction})")
    ahead = ", ".join(f"{part:+.3f}" for part in result.next_axis.axis)
    lines += ["", f"axis that would help most next: ({ahead})", "", *_run_lines(result.runs)]
    return _page(lines, result)


def solids_text(result: Any) -> str:
    """What an assembly of solids amounts to."""
    centre = ", ".join(rounded(1e3 * part.value, 1e3 * part.u)[0] for part in result.centre)
    rows = [
        ("expected moment", f"{show(result.moment, 'kg m²', k=result.k)}   (k = {result.k:.2f}, about 95 %)"),
        ("about", result.about),
        ("mass", show(result.mass, "kg")),
        ("centre of mass", f"({centre}) mm"),
        ("principal moments", ", ".join(f"{moment:.5g}" for moment, _ in result.principal) + " kg m²"),
    ]
    lines = [table(rows), "", f"  {'part':<24}{'kind':<18}{'mass, kg':>12}{'share':>9}"]
    lines += [
        f"  {p.name[:22]:<24}{p.kind:<18}{p.mass.value:>12.5g}{100 * p.share:>7.1f} %" for p in result.parts
    ]
    for item in result.comparisons:
        verdict = "agrees" if item.agrees else "does not agree"
        lines.append(
            f"  measured {item.what}: {show(item.measured)}, E_n = {item.normalised_error:.2f}: {verdict}"
        )
    return "\n".join(lines) + "\n" + doubt_lines(result.doubts, most=20)


def _run_lines(runs: Any) -> list[str]:
    lines = [f"  {'run':<26}{'role':<14}{'period, s':<26}{'deviation':>10}"]
    for run in runs:
        off = "" if run.deviation is None else f"{100 * run.deviation:+.3f} %"
        lines.append(f"  {run.name[:24]:<26}{run.role:<14}{_short(run.period):<26}{off:>10}")
    return lines


def _short(period: Quantity) -> str:
    value, u = rounded(period.value, period.u)
    return f"{value} ± {u}"


def _page(lines: list[str], result: Any) -> str:
    for line in result.advice:
        lines += textwrap.wrap(f"advice: {line}", WIDTH, subsequent_indent="  ")
    return "\n".join(lines) + "\n" + doubt_lines(result.doubts, most=20)
