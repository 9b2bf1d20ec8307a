"""The answer with its budget: from inertia/ to report/."""

from __future__ import annotations

import math
from dataclasses import dataclass

from .basic import Doubt, Quantity


@dataclass(frozen=True)
class BudgetLine:
    """One input's part in the uncertainty of the result.

    `sensitivity` is ∂result/∂input in SI, `contribution` = |sensitivity| · u, `share` the part of the total
    variance (0 to 1).
    """

    input: str
    value: float
    u: float
    unit: str
    sensitivity: float
    contribution: float
    share: float
    dof: float = math.inf


@dataclass(frozen=True)
class Correction:
    """A correction as a relative change of the result, applied or only stated, with its uncertainty."""

    name: str
    relative: float
    u: float
    applied: bool
    reason: str


@dataclass(frozen=True)
class MonteCarlo:
    """Propagation of distributions (JCGM 101) beside the law of propagation."""

    draws: int
    value: float
    u: float
    interval_95: tuple[float, float]
    agrees: bool


@dataclass(frozen=True)
class Inertia:
    """The answer: moment of inertia about `about`, its budget and its doubts.

    `k` is the coverage factor for about 95 %; `expanded` = k · moment.u.
    """

    moment: Quantity
    k: float
    about: str
    radius_of_gyration: Quantity | None
    budget: tuple[BudgetLine, ...]
    corrections: tuple[Correction, ...] = ()
    monte_carlo: MonteCarlo | None = None
    moment_about_edge: Quantity | None = None
    advice: tuple[str, ...] = ()
    doubts: tuple[Doubt, ...] = ()

    @property
    def expanded(self) -> float:
        """Expanded uncertainty k · u, kg m²."""
        return self.k * self.moment.u
