"""Added weights: known weights at known distances, in steps → moment of inertia and suspension constant, no geometry."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import Any

import numpy as np

from ..errors import BadInput
from ..records import AddedWeight, Doubt, Floats, Quantity, Rig
from .combine import CombinedResult, NamedQuantity, Run, need_kind, need_runs, need_same
from .combine_adjust import derive
from .combine_draws import check_by_draws
from .combine_inputs import doubts_of
from .combine_scatter import run_lines, settle
from .combine_weight_line import FOUR_PI_2, ON_STRINGS, WeightLine
from .moment import advise

KINDS = (*ON_STRINGS, "torsion-wire")
# Largest added moment over the article's below which the line is too short to lean on: our judgment.
SMALL_STEP = 0.3
PAIR_TOLERANCE = 0.01  # two weights balance one another where masses and distances agree to this, relative
CONSTANTS = {
    True: ("m^2/s^2", "restoring torque per mass and angle, g a b/h0"),
    False: ("N m/rad", "twist stiffness of the wire"),
}
# Standard uncertainties between the constant found and the one from the stated dimensions.
CONSTANT_TOLERANCE = 3.0


def fit_added_weights(runs: Sequence[Run]) -> CombinedResult:
    """Moment of inertia of the article by the straight line of added moment against (mass times) period squared.

    On strings the restoring torque grows with all the mass M that hangs there, M = m + Σ mⱼ, and
        C M T² = I + Σ (mⱼ dⱼ² + Iⱼ),   C = g a b/(4π² h0);
    on a torsion wire the stiffness stays and C M becomes C = κ/4π². Unknown are I and C: neither spacing, length,
    gravity nor the clock enters. Both variables have errors, a weight used in several runs is one input, and so is
    the mass of the article. The strings' own mass and twist are allowed for where the rig gives them.

    Parameters
    ----------
    runs : sequence of Run
        Two or more, of one article on one suspension, with different `rig.article.added` (none in one of them is
        best). `rig.article.mass` is the article without the weights.

    Raises
    ------
    BadInput
        Fewer than two runs, or all with the same added moment.
    """
    need_runs(runs, at_least=2, role="runs with added weights")
    need_kind(runs, KINDS, why="on an edge weights move the centre of mass")
    need_same(runs, "suspension", [run.rig.suspension.kind for run in runs])
    need_same(runs, "article", [run.rig.article.name for run in runs])
    need_same(runs, "axis", [run.rig.article.axis for run in runs])
    line = WeightLine.of(runs)
    joint, plain = line.joint, line.joint.values()
    added = np.array([float(line.added(i, plain)) for i in range(len(runs))])
    if np.ptp(added) <= 1e-9 * max(added.max(), 1e-300):
        raise BadInput(
            f"All runs have the same added moment ({added[0]:.4g} kg m²).",
            "Needed: at least two different ones, best none in one run.",
            "Write the weights as [[article.added]] in the rigs; move or add weights between runs.",
        )

    def conditions(p: Sequence[Any], x: Mapping[str, Any]) -> list[Any]:
        return [
            line.pull(i, p[1], x) * joint.scatter(i, x) - line.beside(i, x) - line.added(i, x) - p[0]
            for i in range(len(runs))
        ]

    def answer(p: Sequence[Any], x: Mapping[str, Any]) -> Any:
        return p[0]

    start = line.start(added)
    joint = replace(joint, rule=lambda i, x: line.pull(i, start[1], x))
    settled = settle(joint, conditions, start)
    adjusted = settled.adjusted
    if not (adjusted.values[0] > 0.0 and adjusted.values[1] > 0.0):
        raise BadInput(
            f"The line gives a moment of {adjusted.values[0]:.3g} kg m² and a constant of {adjusted.values[1]:.3g}.",
            "Needed: periods that grow with the added moment.",
            "Check which weights hung in which run, their distances and units.",
        )
    result = derive(adjusted, answer, "kg m^2")
    unit, meaning = CONSTANTS[joint.runs[0].rig.suspension.kind in ON_STRINGS]
    constant = derive(adjusted, lambda p, x: FOUR_PI_2 * p[1], unit)
    whole = [derive(adjusted, line.whole(i), "kg m^2").quantity for i in range(len(runs))]
    return CombinedResult(
        method="added weights",
        article=runs[0].rig.article.name,
        moment=result.quantity,
        k=result.k,
        about=joint.models[0].about,
        budget=result.lines,
        runs=run_lines(
            joint, settled, ["added weights"] * len(runs), [1.0 / result.quantity.value, 0.0], whole
        ),
        consistency=settled.consistency,
        monte_carlo=check_by_draws(adjusted, answer, result.quantity),
        by_products=(NamedQuantity("suspension constant", constant.quantity, meaning),),
        advice=(*advise(result.lines), *settled.advice),
        doubts=(
            *settled.doubts,
            *_span_doubts(added, result.quantity),
            *_balance_doubts(runs),
            *_constant_doubts(runs[0].rig, constant.quantity),
            *doubts_of(runs),
        ),
    )


def _span_doubts(added: Floats, moment: Quantity) -> tuple[Doubt, ...]:
    if np.ptp(added) >= SMALL_STEP * moment.value:
        return ()
    message = f"The weights add at most {100 * np.ptp(added) / moment.value:.0f} % to the article's moment."
    return (
        Doubt(
            "added-weights-small",
            message,
            "Take heavier weights or hang them farther out: up to the article's own moment.",
        ),
    )


def _balance_doubts(runs: Sequence[Run]) -> tuple[Doubt, ...]:
    odd = [run.name for run in runs if not _balanced(run.rig.article.added)]
    if not odd or runs[0].rig.suspension.kind not in ON_STRINGS:
        return ()
    message = f"{', '.join(odd)}: weights that do not balance move the centre of mass off the middle of the strings."
    return (Doubt("added-weights-unbalanced", message, "Hang weights in equal pairs on opposite sides."),)


def _balanced(added: Sequence[AddedWeight]) -> bool:
    """Whether the weights off the axis can be paired off."""
    arms = sorted(
        weight.mass.value * weight.distance.value for weight in added if weight.distance.value > 0.0
    )
    pairs = zip(arms[::2], arms[1::2], strict=False)
    return len(arms) % 2 == 0 and all(far - near <= PAIR_TOLERANCE * far for near, far in pairs)


def _constant_doubts(rig: Rig, found: Quantity) -> tuple[Doubt, ...]:
    """The constant found beside the one from the stated dimensions: a tape measure that errs shows here."""
    from .budget import propagate
    from .suspension import model_of

    model = model_of(rig.suspension.kind)
    inputs = {
        k: q for k, q in model.inputs(rig).items() if k not in ("mass", "string_mass", "string_stiffness")
    }
    share = {"mass": 1.0} if rig.suspension.kind in ON_STRINGS else {}
    stated = propagate(
        lambda x: FOUR_PI_2 * model.moment({**x, **share, "period": 1.0}), inputs, found.unit
    ).quantity
    off = found.value - stated.value
    if abs(off) <= CONSTANT_TOLERANCE * math.hypot(found.u, stated.u):
        return ()
    return (
        Doubt(
            "suspension-constant-off",
            f"The weights give the suspension a constant {100 * off / stated.value:+.2g} % off that of the stated dimensions.",
            "Measure spacing and drop again, and the distances of the weights.",
        ),
    )
