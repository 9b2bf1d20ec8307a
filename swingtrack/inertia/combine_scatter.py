"""Scatter of runs against what they claim: chi², Birge ratio, and the scatter that has to be added where they claim too little."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ..records import Doubt, Floats, Quantity
from .combine import Consistency, RunLine
from .combine_adjust import COMPLEX_STEP, SCATTER, Adjusted, Conditions, Unsettled, adjust
from .combine_inputs import JointInputs

SIGNIFICANT = 0.05  # chance below which honest runs are not believed to scatter so much: the usual 5 %
TOO_QUIET = 0.01  # chance of so little scatter below which the claims look too large
FEW_FOR_QUIET = 4  # degrees of freedom below which quiet runs say nothing
GROSS = 10.0  # Birge ratio from which the claims are of no use: our judgment
LARGEST_SCATTER = 10.0  # relative; beyond it the runs are not of one article


@dataclass(frozen=True, eq=False)
class Settled:
    """The adjusted unknowns with the runs' scatter settled, and what is to be said of it."""

    adjusted: Adjusted
    consistency: Consistency
    doubts: tuple[Doubt, ...]
    advice: tuple[str, ...]


def settle(joint: JointInputs, conditions: Conditions, start: Sequence[float]) -> Settled:
    """Adjust, and where the runs scatter more than they claim add what is missing and adjust again.

    chi² is that of the adjustment, so that what runs share does not count as scatter. Where honest runs would
    scatter so much in less than 5 % of cases, a relative scatter τ of each run is added such that chi² = dof
    (Mandel and Paule, Analytical Chemistry 42 (1970) 1194; from memory), with dof degrees of freedom.

    Parameters
    ----------
    joint : JointInputs
    conditions : callable
        One condition a run, in the order of the runs, with `joint.scatter` in it.
    start : (q,) float
    """
    from scipy.optimize import brentq
    from scipy.special import chdtr, chdtrc

    try:
        adjusted = adjust(conditions, joint.quantities, start)
        gross = adjusted.dof > 0 and adjusted.chi2 > GROSS**2 * adjusted.dof
    except Unsettled:
        gross = True
    if (
        gross
    ):  # moving inputs by many of their u to please the runs would go astray: all linear, and said below
        adjusted = adjust(conditions, joint.quantities, start, at_measured=True)
    chi2, dof = adjusted.chi2, adjusted.dof
    scatter, claimed = pooled_scatter(joint)
    if dof == 0:
        return Settled(adjusted, Consistency(0.0, 0, None, None, 0.0, scatter, claimed), (), ())
    chance = float(chdtrc(dof, chi2))
    birge = math.sqrt(chi2 / dof)
    if chance >= SIGNIFICANT:
        advice: tuple[str, ...] = ()
        if dof >= FEW_FOR_QUIET and float(chdtr(dof, chi2)) < TOO_QUIET:
            advice = (
                f"The runs scatter {1 / max(birge, 1e-9):.1f} times less than they claim: their uncertainties may be too cautious.",
            )
        return Settled(adjusted, Consistency(chi2, dof, birge, chance, 0.0, scatter, claimed), (), advice)

    def with_scatter(tau: float) -> Adjusted:
        more = {SCATTER + run.name: Quantity(0.0, tau, "1", dof=float(dof)) for run in joint.runs}
        return adjust(conditions, {**joint.quantities, **more}, start, at_measured=gross)

    low, high = 0.0, max(_own_scale(joint), 1e-9)
    while with_scatter(high).chi2 > dof and high < LARGEST_SCATTER:
        low, high = high, 2.0 * high
    tau = (
        float(brentq(lambda t: with_scatter(t).chi2 - dof, low, high, rtol=1e-3))
        if high < LARGEST_SCATTER
        else high
    )
    doubt = Doubt(
        "scatter-over-claim",
        f"The runs scatter {birge:.1f} times more than they claim (chance {_percent(chance)} if the claims were right); "
        f"{100 * tau:.2g} % a run was added.",
        "Find what changes from run to run: how it hangs, how it is released, draughts. Hang it anew for each run.",
    )
    return Settled(
        with_scatter(tau), Consistency(chi2, dof, birge, chance, tau, scatter, claimed), (doubt,), ()
    )


def pooled_scatter(joint: JointInputs) -> tuple[float | None, float | None]:
    """Pooled relative standard deviation of runs hung alike, √(Σ(n−1)s²/Σ(n−1)), and their own claim (rms)."""
    groups: dict[str, list[int]] = {}
    for index, (run, names) in enumerate(zip(joint.runs, joint.names, strict=True)):
        article = run.rig.article
        bench = sorted((key, name) for key, name in names.items() if key != "period")
        groups.setdefault(repr((bench, article.name, article.axis, article.added)), []).append(index)
    moments, own = own_moments(joint)
    squares, freedom, claims = 0.0, 0, []
    for members in groups.values():
        if len(members) > 1:
            logs = np.log(moments[members])
            squares += float(np.sum((logs - logs.mean()) ** 2))
            freedom += len(members) - 1
            claims += [own[index] for index in members]
    if not freedom:
        return None, None
    return math.sqrt(squares / freedom), math.sqrt(float(np.mean(np.square(claims))))


def own_moments(joint: JointInputs) -> tuple[Floats, Floats]:
    """Each run's moment alone (m,), kg m², and its relative standard uncertainty from the inputs of that run only (m,)."""
    users: dict[str, int] = {}
    for names in joint.names:
        for name in names.values():
            users[name] = users.get(name, 0) + 1
    plain = joint.values()
    moments, own = [], []
    for index, names in enumerate(joint.names):
        moment = float(joint.moment(index, plain))
        parts = []
        for name in names.values():
            if users[name] == 1:
                stepped = joint.moment(index, {**plain, name: plain[name] + 1j * COMPLEX_STEP})
                parts.append(np.imag(stepped) / COMPLEX_STEP * joint.quantities[name].u / moment)
        moments.append(moment)
        own.append(math.sqrt(math.fsum(part**2 for part in parts)))
    return np.array(moments), np.array(own)


def single_moment(joint: JointInputs, run: int) -> Quantity:
    """One run's moment alone with its whole uncertainty, as it would be reported by itself."""
    from .budget import propagate

    needed = {name: joint.quantities[name] for name in joint.names[run].values()}
    return propagate(lambda x: joint.moment(run, x), needed, "kg m^2").quantity


def run_lines(
    joint: JointInputs,
    settled: Settled,
    roles: Sequence[str],
    gradient: Sequence[float],
    moments: Sequence[Quantity] | None = None,
) -> tuple[RunLine, ...]:
    """The table of runs; `gradient` is ∂ln(answer)/∂p, `moments` the runs' own where the formula does not give them.

    The conditions must be (what the run says) − (what the unknowns predict), so that a misfit is a deviation.
    """
    adjusted = settled.adjusted
    pull = -np.asarray(gradient) @ adjusted.projector
    lines = []
    for index, (run, role) in enumerate(zip(joint.runs, roles, strict=True)):
        moment = single_moment(joint, index) if moments is None else moments[index]
        misfit, u = float(adjusted.misfit[index]), float(adjusted.misfit_u[index])
        comparable = adjusted.dof > 0 and u > 1e-9 * abs(moment.value)
        lines.append(
            RunLine(
                name=run.name,
                role=role,
                period=run.period,
                moment=moment,
                deviation=misfit / moment.value if adjusted.dof > 0 else None,
                normalised=misfit / u if comparable else None,
                weight=float(pull[index]) * moment.value,
                source=run.source,
            )
        )
    return tuple(lines)


def stored_moment_doubts(joint: JointInputs) -> tuple[Doubt, ...]:
    """Runs whose stored moment is not what their rig and period give here: the file was changed by hand, or is old."""
    moments, _ = own_moments(joint)
    odd = [
        f"{run.name} ({run.moment.value:.6g} kg m² stored, {moment:.6g} from its rig and period)"
        for run, moment in zip(joint.runs, moments, strict=True)
        if run.moment is not None and abs(run.moment.value - moment) > 0.1 * run.moment.u + 1e-9 * moment
    ]
    if not odd:
        return ()
    return (
        Doubt(
            "stored-moment-differs",
            f"Stored and recomputed moment differ: {'; '.join(odd)}. The recomputed one is used.",
            "Measure again, or undo the change in the file.",
        ),
    )


def _percent(chance: float) -> str:
    return f"{100 * chance:.2g} %" if chance > 1e-4 else "below 0.01 %"


def _own_scale(joint: JointInputs) -> float:
    _, own = own_moments(joint)
    return float(np.max(own))
