"""Repeats: several runs of one article about one axis → one moment of inertia."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from .combine import CombinedResult, Run, need_runs, need_same
from .combine_adjust import derive
from .combine_draws import check_by_draws
from .combine_inputs import doubts_of, join_inputs
from .combine_scatter import own_moments, run_lines, settle, stored_moment_doubts
from .moment import advise

# Share of the variance that all runs have in common above which repeats gain nothing.
RARELY_WORTH_REPEATING = 0.9


def combine_repeats(runs: Sequence[Run]) -> CombinedResult:
    """Weighted mean of repeated runs, which averages down what is each run's own and nothing that they share.

    Each run i says I_i(x) = I with its own inputs and the shared ones in x; the least-squares adjustment of all of
    them (`combine_adjust`) weighs runs by what is their own. Scatter over the claim is added to each run.

    Raises
    ------
    BadInput
        Fewer than two runs, or runs of different articles or about different axes.
    """
    need_runs(runs, at_least=2)
    need_same(runs, "article", [run.rig.article.name for run in runs])
    need_same(runs, "axis", [run.rig.article.axis for run in runs])
    joint = join_inputs(runs)
    need_same(runs, "axis of the moment", [model.about for model in joint.models])

    def conditions(p: Sequence[Any], x: Mapping[str, Any]) -> list[Any]:
        return [joint.moment(i, x) - p[0] for i in range(len(joint.runs))]

    def answer(p: Sequence[Any], x: Mapping[str, Any]) -> Any:
        return p[0]

    start, _ = own_moments(joint)
    settled = settle(joint, conditions, [float(start.mean())])
    result = derive(settled.adjusted, answer, "kg m^2")
    lines = run_lines(joint, settled, ["repeat"] * len(runs), [1.0 / result.quantity.value])
    own_names = {
        name for i, names in enumerate(joint.names) for name in names.values() if _alone(joint.names, i, name)
    }
    common = sum(
        line.share for line in result.lines if line.input in joint.quantities and line.input not in own_names
    )
    advice = list(advise(result.lines))
    if common > RARELY_WORTH_REPEATING:
        advice.append(
            f"{100 * common:.0f} % of the variance is common to the runs: further repeats gain nothing; "
            "a reference article or added weights on the same strings would."
        )
    return CombinedResult(
        method="repeats",
        article=runs[0].rig.article.name,
        moment=result.quantity,
        k=result.k,
        about=joint.models[0].about,
        budget=result.lines,
        runs=lines,
        consistency=settled.consistency,
        monte_carlo=check_by_draws(settled.adjusted, answer, result.quantity),
        advice=(*advice, *settled.advice),
        doubts=(*settled.doubts, *stored_moment_doubts(joint), *doubts_of(runs)),
    )


def _alone(names: Sequence[Mapping[str, str]], run: int, name: str) -> bool:
    return all(name not in other.values() for index, other in enumerate(names) if index != run)
