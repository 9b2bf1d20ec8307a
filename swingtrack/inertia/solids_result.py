"""What an assembly of solids amounts to: the records of its result."""

from __future__ import annotations

from dataclasses import dataclass

from ..records import BudgetLine, Doubt, MonteCarlo, Quantity


@dataclass(frozen=True)
class SolidLine:
    """One part in the table: its mass (negative for a hole), where its centre of mass is, its part of the moment."""

    name: str
    kind: str
    mass: Quantity
    centre_m: tuple[float, float, float]
    moment: float
    share: float


@dataclass(frozen=True)
class Comparison:
    """A worked-out and a measured number: E_n = difference over the root of the summed squares of U; |E_n| <= 1 agrees."""

    what: str
    expected: Quantity
    measured: Quantity
    normalised_error: float
    agrees: bool


@dataclass(frozen=True)
class SolidResult:
    """What the assembly amounts to.

    Parameters
    ----------
    mass : Quantity
    centre : three Quantity
        Centre of mass in the article's frame, m.
    matrix : 3 × 3 of Quantity
        Inertia matrix about the centre of mass, kg m²; off the diagonal with the matrix's sign (J_xy = −∫ x y dm).
    moment : Quantity
        About the axis asked for, kg m², with `k` for about 95 % and its `budget`.
    about : str
    principal : tuple of three (moment, direction)
        Smallest first.
    parts : tuple of SolidLine
    monte_carlo : MonteCarlo
        Of `moment`.
    comparisons, doubts
    """

    name: str
    mass: Quantity
    centre: tuple[Quantity, ...]
    matrix: tuple[tuple[Quantity, ...], ...]
    moment: Quantity
    k: float
    about: str
    budget: tuple[BudgetLine, ...]
    principal: tuple[tuple[float, tuple[float, float, float]], ...]
    parts: tuple[SolidLine, ...]
    monte_carlo: MonteCarlo
    comparisons: tuple[Comparison, ...] = ()
    doubts: tuple[Doubt, ...] = ()

    @property
    def expanded(self) -> float:
        """Expanded uncertainty k · u of the moment, kg m²."""
        return self.k * self.moment.u
