"""Several results → one answer: the records that every method of combining shares, and the checks on its runs.

One method a file: `combine_repeats`, `combine_tare`, `combine_reference`, `combine_added_weights`, `parallel_axis`,
`sway_gyration`; the whole tensor is in `tensor`.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from ..errors import BadInput
from ..records import BudgetLine, Doubt, MonteCarlo, Quantity, Rig


@dataclass(frozen=True)
class Run:
    """One measured swing, as a method of combining takes it.

    Parameters
    ----------
    name : str
        Short and different from the other runs' names: it stands in tables and budgets.
    rig : Rig
        As it hung in this run. `rig.article.mass` is all that hung there, a cradle included, but not the weights
        in `rig.article.added`.
    period : Quantity
        Small-swing period, s; its u as in the result file, the clock's part included.
    moment : Quantity or None
        As computed for this run alone; only compared with what is computed here.
    sway_period : Quantity or None
        Period of sway along the line of the strings, seen in the same clip.
    clock_relative_u : float
        The clock's relative standard uncertainty within `period.u`. Runs with the same `clock` share its error.
    clock : str
        Which clock; the default takes one phone for all runs.
    source : str
        File that the run comes from.
    doubts : tuple of Doubt
        Of that run's own result.
    """

    name: str
    rig: Rig
    period: Quantity
    moment: Quantity | None = None
    sway_period: Quantity | None = None
    clock_relative_u: float = 0.0
    clock: str = "clock"
    source: str = ""
    doubts: tuple[Doubt, ...] = ()


@dataclass(frozen=True)
class RunLine:
    """One run in the table of a combined result.

    `deviation` is how far the run alone lies from what the combined result predicts for it, relative;
    `normalised` is that over its standard uncertainty without what all runs share (None where nothing is left to
    compare); `weight` its part in the answer: ∂ln(answer)/∂ln(the run's own moment).
    """

    name: str
    role: str
    period: Quantity
    moment: Quantity
    deviation: float | None
    normalised: float | None
    weight: float
    source: str


@dataclass(frozen=True)
class Consistency:
    """Scatter of the runs against what they claim.

    Parameters
    ----------
    chi2, dof : float, int
        Weighted sum of squared deviations, with what the runs share taken into account, and its degrees of freedom.
    birge : float or None
        Birge ratio √(chi2/dof); None without degrees of freedom.
    p_value : float or None
        How often honest runs would scatter at least so much.
    extra_relative_u : float
        Scatter between runs, as a relative standard uncertainty of each, that had to be added so that chi2 = dof;
        0 where the claims suffice.
    scatter_relative, claimed_relative : float or None
        Pooled standard deviation of runs that were hung alike, and what those runs claim of their own (rms), relative.
    """

    chi2: float
    dof: int
    birge: float | None
    p_value: float | None
    extra_relative_u: float = 0.0
    scatter_relative: float | None = None
    claimed_relative: float | None = None


@dataclass(frozen=True)
class NamedQuantity:
    """A by-product of a method, such as the suspension constant of the added-weights line."""

    name: str
    quantity: Quantity
    meaning: str


@dataclass(frozen=True)
class CombinedResult:
    """The answer of a method of combining; `budget` lines carry its whole variance."""

    method: str
    article: str
    moment: Quantity
    k: float
    about: str
    budget: tuple[BudgetLine, ...]
    runs: tuple[RunLine, ...]
    consistency: Consistency
    monte_carlo: MonteCarlo | None = None
    by_products: tuple[NamedQuantity, ...] = ()
    advice: tuple[str, ...] = ()
    doubts: tuple[Doubt, ...] = ()

    @property
    def expanded(self) -> float:
        """Expanded uncertainty k · u, kg m²."""
        return self.k * self.moment.u


def need_runs(runs: Sequence[Run], *, at_least: int, role: str = "runs") -> None:
    """BadInput where runs are too few, share a name, or have no usable period."""
    if len(runs) < at_least:
        raise BadInput(
            f"{len(runs)} of {role} given.",
            f"Needed: at least {at_least}.",
            "Measure more, or take another method.",
        )
    names = [run.name for run in runs]
    twice = sorted({name for name in names if names.count(name) > 1})
    if twice:
        raise BadInput(
            f"The name {twice[0]!r} stands for more than one run.",
            "Needed: a name of its own for each.",
            "Was one file given twice?",
        )
    for run in runs:
        usable = math.isfinite(run.period.value) and run.period.value > 0.0 and math.isfinite(run.period.u)
        if not usable or run.period.u < 0.0:
            raise BadInput(
                f"Run {run.name!r} has the period {run.period.value:g} s ± {run.period.u:g} s.",
                "Needed: a period over zero with a standard uncertainty.",
                "Measure it again, or leave it out.",
            )
        if run.clock_relative_u * run.period.value > run.period.u * (1.0 + 1e-9):
            raise BadInput(
                f"Run {run.name!r} claims a clock of {1e6 * run.clock_relative_u:.3g} ppm, more than its whole period's doubt.",
                "Needed: a period's uncertainty that holds the clock's part.",
                "Check where the period comes from.",
            )


def need_same(runs: Sequence[Run], what: str, values: Sequence[object]) -> None:
    """BadInput where runs that must agree in `what` do not."""
    for run, value in zip(runs, values, strict=True):
        if value != values[0]:
            raise BadInput(
                f"Run {runs[0].name!r} has {what} {values[0]!r}, run {run.name!r} has {value!r}.",
                f"Needed: the same {what} in all runs of this method.",
                "Leave the odd one out, or take another method.",
            )


def need_kind(runs: Sequence[Run], kinds: Sequence[str], *, why: str) -> None:
    """BadInput where a run hangs in a way that the method can't use."""
    for run in runs:
        if run.rig.suspension.kind not in kinds:
            raise BadInput(
                f"Run {run.name!r} hangs by {run.rig.suspension.kind}.",
                f"Needed: {' or '.join(kinds)}; {why}.",
                "Take another method for it.",
            )
