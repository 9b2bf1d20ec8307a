"""Ratio method: an article of known moment on the same strings makes up for their geometry."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from ..errors import BadInput
from ..records import Doubt, Quantity
from .combine import CombinedResult, NamedQuantity, Run, need_kind, need_runs, need_same
from .combine_adjust import derive
from .combine_draws import check_by_draws
from .combine_inputs import JointInputs, doubts_of, join_inputs, not_shared_doubts
from .combine_scatter import own_moments, run_lines, settle, stored_moment_doubts
from .moment import advise

KINDS = ("bifilar", "trifilar", "torsion-wire")
# Ratio of the two moments beyond which what does not quite cancel shows: common practice, no source.
FAR_FROM_REFERENCE = 4.0
REFERENCE_INPUT = "moment of the reference"


def compare_with_reference(
    article: Sequence[Run], reference: Sequence[Run], *, cradle: Sequence[Run] = ()
) -> CombinedResult:
    """Moment of an article from a reference article of known moment on the same suspension.

    I = I_ref · f(article)/f(reference), f the suspension's own formula; on strings that is I_ref m T²/(m_ref T_ref²),
    on a torsion wire I_ref T²/T_ref². Spacing, length, gravity, stiffness and the clock cancel because both have the
    very same input. With a cradle that carries both:
    I = I_ref · (f(article) − f(cradle))/(f(reference) − f(cradle)).

    Parameters
    ----------
    article, reference : sequence of Run
        One or more of each. The reference's rig has `expected_moment`, its known moment (without the cradle).
    cradle : sequence of Run, optional
        The cradle alone; article and reference were then swung on it, masses included.

    Raises
    ------
    BadInput
        No known moment, runs missing or hung by different kinds of suspension.
    """
    need_runs(article, at_least=1, role="runs of the article")
    need_runs(reference, at_least=1, role="runs of the reference article")
    runs = (*article, *reference, *cradle)
    need_runs(runs, at_least=2)
    need_kind(runs, KINDS, why="on an edge the distance to the centre of mass does not cancel")
    need_same(runs, "suspension", [run.rig.suspension.kind for run in runs])
    for group, what in ((article, "article"), (reference, "reference"), (cradle, "cradle")):
        need_same(group, what, [run.rig.article.name for run in group])
    joint = join_inputs(runs).with_inputs({REFERENCE_INPUT: _known_moment(reference)})
    group_of = [0] * len(article) + [1] * len(reference) + [2] * len(cradle)

    def conditions(p: Sequence[Any], x: Mapping[str, Any]) -> list[Any]:
        return [joint.moment(i, x) - p[group] for i, group in enumerate(group_of)]

    def scale(p: Sequence[Any], x: Mapping[str, Any]) -> Any:
        return x[REFERENCE_INPUT] / (p[1] - p[2] if cradle else p[1])

    def answer(p: Sequence[Any], x: Mapping[str, Any]) -> Any:
        return scale(p, x) * (p[0] - p[2] if cradle else p[0])

    single, _ = own_moments(joint)
    start = [float(single[np.array(group_of) == group].mean()) for group in range(3 if cradle else 2)]
    settled = settle(joint, conditions, start)
    values = settled.adjusted.values
    if cradle and not (values[0] > values[2] and values[1] > values[2]):
        raise BadInput(
            "The cradle alone has a larger moment than with something on it.",
            "Needed: runs of the cradle alone, the cradle with the article, the cradle with the reference.",
            "Check which run is which, and the masses.",
        )
    result = derive(settled.adjusted, answer, "kg m^2")
    factor = derive(settled.adjusted, scale, "1")
    known = joint.quantities[REFERENCE_INPUT].value
    gradient = [1.0 / values[0], -1.0 / values[1]]
    if cradle:
        a, r = values[0] - values[2], values[1] - values[2]
        gradient = [1.0 / a, -1.0 / r, 1.0 / r - 1.0 / a]
    roles = [("article", "reference", "cradle")[group] for group in group_of]
    return CombinedResult(
        method="reference",
        article=article[0].rig.article.name,
        moment=result.quantity,
        k=result.k,
        about=joint.models[0].about,
        budget=result.lines,
        runs=run_lines(joint, settled, roles, gradient),
        consistency=settled.consistency,
        monte_carlo=check_by_draws(settled.adjusted, answer, result.quantity),
        by_products=(
            NamedQuantity(
                "scale of the suspension",
                factor.quantity,
                "by what the moments from the stated dimensions have to be multiplied; 1 where tape and scale were right",
            ),
        ),
        advice=(*advise(result.lines), *settled.advice),
        doubts=(
            *settled.doubts,
            *_doubts(joint, result.quantity.value / known),
            *stored_moment_doubts(joint),
            *doubts_of(runs),
        ),
    )


def _known_moment(reference: Sequence[Run]) -> Quantity:
    known = [run.rig.article.expected_moment for run in reference]
    first = known[0]
    if first is None or any(other != first for other in known):
        raise BadInput(
            f"The rig of {reference[0].name!r} gives no known moment, or the reference's runs give different ones.",
            "Needed: article.expected_moment in the reference's rig, the same in all of its runs.",
            'Write expected_moment = "0.0213 kg m^2 ± 0.0001 kg m^2", or work it out with swingtrack solids.',
        )
    return first


def _doubts(joint: JointInputs, ratio: float) -> tuple[Doubt, ...]:
    doubts = [
        *not_shared_doubts(joint, "Swing both on the very same strings, and give both rigs the same numbers.")
    ]
    if not 1.0 / FAR_FROM_REFERENCE <= ratio <= FAR_FROM_REFERENCE:
        doubts.append(
            Doubt(
                "reference-far-off",
                f"The article has {ratio:.2g} times the moment of the reference.",
                "Take a reference of about the article's own moment and mass: what does not quite cancel then stays small.",
            )
        )
    return tuple(doubts)
