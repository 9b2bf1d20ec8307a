"""Tare: article and cradle swung together, the cradle swung alone, the difference is the article."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from ..errors import BadInput
from ..records import Doubt, Quantity
from .combine import CombinedResult, Run, need_kind, need_runs, need_same
from .combine_adjust import derive
from .combine_draws import check_by_draws
from .combine_inputs import JointInputs, doubts_of, join_inputs, not_shared_doubts
from .combine_scatter import run_lines, settle, stored_moment_doubts
from .moment import advise

LARGE_CRADLE = 0.5  # cradle's part of the whole above which the difference loses half of its digits
KINDS = ("bifilar", "trifilar", "torsion-wire", "knife-edge")


def subtract_tare(
    both: Sequence[Run], cradle: Sequence[Run], *, offset: Quantity | None = None
) -> CombinedResult:
    """Moment of the article alone: I = I(both) − I(cradle), each from its own mass and period.

    What the two share (spacing, length, gravity, stiffness, clock) is one input in both, so that its error enters
    as it really does: scaled by the difference, not by the root of the sum of squares of the two.

    On strings with the article's centre of mass off the cradle's by e sideways, the whole turns about its own centre
    and I = I(both) − I(cradle) − (m M_c/(m + M_c)) e². On a knife edge the moments about the edge are subtracted and
    I = I_edge − m l², with m = M − M_c and l = (M L − M_c L_c)/m, both centres below the edge.

    Parameters
    ----------
    both, cradle : sequence of Run
        One or more of each; repeats are averaged.
    offset : Quantity, optional
        e, m, between the centres of mass of article and cradle, across the swing axis (strings only).

    Raises
    ------
    BadInput
        Runs missing, hung differently, or a cradle heavier than both or with the larger moment.
    """
    need_runs(both, at_least=1, role="runs of article and cradle together")
    need_runs(cradle, at_least=1, role="runs of the cradle alone")
    runs = (*both, *cradle)
    need_runs(runs, at_least=2)
    need_kind(runs, KINDS, why="moments about one and the same axis are subtracted")
    need_same(runs, "suspension", [run.rig.suspension.kind for run in runs])
    need_same(both, "article", [run.rig.article.name for run in both])
    need_same(cradle, "cradle", [run.rig.article.name for run in cradle])
    kind = runs[0].rig.suspension.kind
    _check_masses(both, cradle, needed=kind != "torsion-wire")
    joint = join_inputs(runs)
    if offset is not None:
        _check_offset(kind)
        joint = joint.with_inputs({"offset of the article on the cradle": offset})
    split = len(both)

    def conditions(p: Sequence[Any], x: Mapping[str, Any]) -> list[Any]:
        return [_about_axis(joint, i, x) - p[0 if i < split else 1] for i in range(len(runs))]

    def answer(p: Sequence[Any], x: Mapping[str, Any]) -> Any:
        rest = p[0] - p[1]
        if kind == "knife-edge":
            return rest - _article_arm(joint, split, x)
        if offset is not None:
            whole, alone = (x[joint.names[i]["mass"]] for i in (0, split))
            rest = rest - (whole - alone) * alone / whole * x["offset of the article on the cradle"] ** 2
        return rest

    plain = joint.values()
    single = np.array([float(_about_axis(joint, i, plain)) for i in range(len(runs))])
    settled = settle(joint, conditions, [float(single[:split].mean()), float(single[split:].mean())])
    result = derive(settled.adjusted, answer, "kg m^2")
    if not result.quantity.value > 0.0:
        raise BadInput(
            f"Article and cradle together have {settled.adjusted.values[0]:.4g} kg m², the cradle alone {settled.adjusted.values[1]:.4g}.",
            "Needed: the larger one with the article on it.",
            "Check which run is which, and the masses.",
        )
    roles = ["article and cradle"] * split + ["cradle"] * len(cradle)
    return CombinedResult(
        method="tare",
        article=both[0].rig.article.name,
        moment=result.quantity,
        k=result.k,
        about=joint.models[0].about,
        budget=result.lines,
        runs=run_lines(joint, settled, roles, [1.0 / result.quantity.value, -1.0 / result.quantity.value]),
        consistency=settled.consistency,
        monte_carlo=check_by_draws(settled.adjusted, answer, result.quantity),
        advice=(*advise(result.lines), *settled.advice),
        doubts=(
            *settled.doubts,
            *_doubts(joint, settled.adjusted.values[1] / settled.adjusted.values[0], kind, offset),
            *stored_moment_doubts(joint),
            *doubts_of(runs),
        ),
    )


def _about_axis(joint: JointInputs, run: int, x: Mapping[str, Any]) -> Any:
    """The moment that adds up: about the swing axis itself, which for a knife edge is the edge."""
    moment = joint.moment(run, x)
    if joint.runs[run].rig.suspension.kind != "knife-edge":
        return moment
    here = joint.local(run, x)
    return moment + here["mass"] * here["pivot_to_centre"] ** 2


def _article_arm(joint: JointInputs, split: int, x: Mapping[str, Any]) -> Any:
    """m l² of the article alone about the edge."""
    whole, alone = joint.local(0, x), joint.local(split, x)
    mass = whole["mass"] - alone["mass"]
    return (whole["mass"] * whole["pivot_to_centre"] - alone["mass"] * alone["pivot_to_centre"]) ** 2 / mass


def _check_masses(both: Sequence[Run], cradle: Sequence[Run], *, needed: bool) -> None:
    lightest = min((run.rig.article.mass.value for run in both if run.rig.article.mass), default=None)
    cradle_mass = max((run.rig.article.mass.value for run in cradle if run.rig.article.mass), default=None)
    if needed and lightest is not None and cradle_mass is not None and cradle_mass >= lightest:
        raise BadInput(
            f"The cradle has {cradle_mass:.4g} kg, article and cradle together {lightest:.4g} kg.",
            "Needed: the mass of all that hung there, the cradle's in both.",
            "Write the sum as article.mass in the rig of the run with both; check which run is which.",
        )


def _check_offset(kind: str) -> None:
    if kind not in ("bifilar", "trifilar"):
        raise BadInput(
            f"An offset of the article on the cradle was given for a {kind}.",
            "Needed: none; it enters on strings alone, where the whole turns about its own centre of mass.",
            "Leave it out.",
        )


def _doubts(joint: JointInputs, part: float, kind: str, offset: Quantity | None) -> tuple[Doubt, ...]:
    doubts = [
        *not_shared_doubts(
            joint,
            "Swing the cradle on the very strings that it hangs on with the article, and give both rigs the same numbers.",
        )
    ]
    if part > LARGE_CRADLE:
        doubts.append(
            Doubt(
                "cradle-dominates",
                f"The cradle has {100 * part:.0f} % of the moment of both together.",
                "Take a lighter or a narrower cradle.",
            )
        )
    return tuple(doubts)
