"""Radius of gyration from yaw and sway in one clip of a bifilar: neither length, gravity nor mass enters."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from ..errors import BadInput
from ..records import BudgetLine, Doubt, Quantity
from .budget import propagate
from .combine import CombinedResult, Consistency, NamedQuantity, Run, RunLine, need_kind, need_runs
from .combine_inputs import doubts_of, own_period
from .moment import advise
from .monte_carlo import monte_carlo_check
from .suspension import need_mass

NEAR = 0.05  # relative: yaw and sway so near one another beat slowly and a clip can hardly tell them apart


def radius_by_sway(spacing: Any, yaw_period: Any, sway_period: Any, centre_offset: Any = 0.0) -> Any:
    """k = √(D²/4 − e²) · T_yaw/T_sway, m, for parallel strings and sway along the line of the strings.

    With e the offset of the centre of mass from the middle; k = D/2 · T_yaw/T_sway for e = 0. Yaw obeys
    I = m g (D²/4 − e²) T²/(4π² L) and sway along the line is g/L exactly (docs/theory.md, Other modes of the bifilar).

    Examples
    --------
    >>> radius_by_sway(0.3, 1.6, 2.0)
    0.12
    """
    return (0.25 * spacing**2 - centre_offset**2) ** 0.5 * yaw_period / sway_period


def gyration_by_sway(run: Run) -> CombinedResult:
    """Radius of gyration and moment m k² of one run in which sway along the line of the strings was seen.

    The clock is the same for both periods and drops out.

    Raises
    ------
    BadInput
        No sway period, slanted strings, or another suspension than a bifilar.
    """
    need_runs([run], at_least=1)
    need_kind([run], ("bifilar",), why="the rule k = D/2 · T_yaw/T_sway is a bifilar's")
    given = run.rig.suspension.dimensions
    if "lower_spacing" in given:
        raise BadInput(
            f"Run {run.name!r} states its lower spacing apart from the upper one.",
            "Needed: parallel strings, one spacing; slanted strings sway by another law.",
            "Hang it with equal spacings and leave lower_spacing out.",
        )
    if run.sway_period is None:
        raise BadInput(
            f"In run {run.name!r} no sway was seen.",
            "Needed: the period of sway along the line of the strings.",
            "Film one clip in which the article is also pushed gently along the line of the strings.",
        )
    inputs = {
        "mass": need_mass(run.rig),
        "upper_spacing": given["upper_spacing"],
        "period": own_period(run),
        "sway_period": run.sway_period,
    }
    if "centre_offset" in given:
        inputs["centre_offset"] = given["centre_offset"]

    def gyration(x: Mapping[str, Any]) -> Any:
        return radius_by_sway(x["upper_spacing"], x["period"], x["sway_period"], x.get("centre_offset", 0.0))

    def moment(x: Mapping[str, Any]) -> Any:
        return x["mass"] * gyration(x) ** 2

    result = propagate(moment, inputs, "kg m^2")
    radius = propagate(gyration, {key: q for key, q in inputs.items() if key != "mass"}, "m")
    line = RunLine(run.name, "yaw and sway", run.period, result.quantity, None, None, 1.0, run.source)
    return CombinedResult(
        method="sway",
        article=run.rig.article.name,
        moment=result.quantity,
        k=result.k,
        about="vertical axis through the centre of mass",
        budget=result.lines,
        runs=(line,),
        consistency=Consistency(0.0, 0, None, None),
        monte_carlo=monte_carlo_check(moment, inputs, result.quantity),
        by_products=(
            NamedQuantity("radius of gyration", radius.quantity, "without length, gravity and mass"),
        ),
        advice=advise(result.lines),
        doubts=(*_near_doubts(run, run.sway_period), *_string_doubts(given, result.lines), *doubts_of([run])),
    )


def _near_doubts(run: Run, sway: Quantity) -> tuple[Doubt, ...]:
    if abs(run.period.value / sway.value - 1.0) > NEAR:
        return ()
    return (
        Doubt(
            "sway-near-yaw",
            f"Yaw ({run.period.value:.4g} s) and sway ({sway.value:.4g} s) are within {100 * NEAR:.0f} % of one another: "
            "each pulls the other's period.",
            "Change the spacing: the two coincide where it is twice the radius of gyration.",
        ),
    )


def _string_doubts(given: Mapping[str, Quantity], lines: Sequence[BudgetLine]) -> tuple[Doubt, ...]:
    """The strings' mass and twist act on yaw and sway differently, and this rule leaves them out."""
    if not {"string_mass", "string_stiffness"} & set(given):
        return ()
    return (
        Doubt(
            "sway-ignores-strings",
            "The rig gives the strings' mass or twist, which this method leaves out.",
            "Use light thread, or take the moment from the period and the dimensions.",
        ),
    )
