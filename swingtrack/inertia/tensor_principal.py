"""Principal moments and axes of a fitted inertia matrix, with uncertainties, and whether a body can have them."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ..records import BudgetLine, Doubt, Floats, MonteCarlo, Quantity
from .budget import coverage_factor
from .combine_adjust import Adjusted, budget_lines, effective_dof
from .combine_draws import draw_unknowns, judge_draws

# Standard uncertainties by which a margin may lie under zero: a flat plate lies at zero itself.
SENSE_TOLERANCE = 2.0
APART = 3.0  # standard uncertainties between two principal moments below which their axes are not told apart


@dataclass(frozen=True)
class PrincipalAxis:
    """One principal moment and its axis.

    Parameters
    ----------
    moment : Quantity
        kg m².
    k : float
        Coverage factor for about 95 %.
    direction : three float
        Unit vector in the article's frame; its largest part is positive.
    direction_u_rad : float or None
        Standard uncertainty of the direction towards the axis that it is mixed up with most easily; None where the
        two moments are too near to tell the axes apart.
    budget : tuple of BudgetLine
    monte_carlo : MonteCarlo
    """

    moment: Quantity
    k: float
    direction: tuple[float, float, float]
    direction_u_rad: float | None
    budget: tuple[BudgetLine, ...]
    monte_carlo: MonteCarlo

    @property
    def expanded(self) -> float:
        """Expanded uncertainty k · u, kg m²."""
        return self.k * self.moment.u


def principal_axes(adjusted: Adjusted) -> tuple[PrincipalAxis, ...]:
    """Principal moments λ and axes v, smallest first, of an adjustment whose unknowns are xx, yy, zz, yz, xz, xy.

    First-order perturbation: δλᵢ = vᵢᵀ δJ vᵢ, and axis i turns towards axis j by vⱼᵀ δJ vᵢ/(λᵢ − λⱼ). Monte Carlo of the
    whole adjustment beside it, since moments that lie near one another repel.
    """
    moments, vectors = np.linalg.eigh(_matrix(adjusted.values))
    drawn = np.asarray(np.linalg.eigvalsh(_matrices(draw_unknowns(adjusted)[0])), dtype=np.float64)
    found = []
    for i in range(3):
        lines = budget_lines(
            adjusted.inputs,
            _row(vectors[:, i], vectors[:, i]) @ adjusted.sensitivity,
            scatter_dof=adjusted.dof,
        )
        u = math.sqrt(sum(line.contribution**2 for line in lines))
        quantity = Quantity(float(moments[i]), u, "kg m^2", dof=effective_dof(lines, u))
        found.append(
            PrincipalAxis(
                moment=quantity,
                k=coverage_factor(quantity.dof),
                direction=_pointing(vectors[:, i]),
                direction_u_rad=_direction_u(adjusted, moments, vectors, i),
                budget=lines,
                monte_carlo=judge_draws(drawn[:, i], quantity),
            )
        )
    return tuple(found)


def triangle_margin(adjusted: Adjusted) -> Quantity:
    """λ₁ + λ₂ − λ₃ with its uncertainty, kg m²: twice ∫ z² dm along the axis of the largest moment."""
    moments, vectors = np.linalg.eigh(_matrix(adjusted.values))
    row = sum(sign * _row(vectors[:, i], vectors[:, i]) for i, sign in ((0, 1.0), (1, 1.0), (2, -1.0)))
    variance = float(row @ adjusted.covariance @ row)
    return Quantity(float(moments[0] + moments[1] - moments[2]), math.sqrt(variance), "kg m^2")


def sense_doubts(principal: Sequence[PrincipalAxis], margin: Quantity) -> tuple[Doubt, ...]:
    """No body has a negative principal moment, or one that is larger than the other two together."""
    doubts = []
    least = principal[0].moment
    if least.value <= 0.0:
        doubts.append(
            Doubt(
                "tensor-not-positive",
                f"The smallest principal moment comes out as {least.value:.3g} ± {least.u:.2g} kg m²: no body has that.",
                "Check which axis belongs to which run; a wrong sign in an axis is enough.",
            )
        )
    if margin.value < -SENSE_TOLERANCE * margin.u:
        doubts.append(
            Doubt(
                "tensor-triangle",
                f"The largest principal moment exceeds the other two together by {-margin.value:.3g} kg m² "
                f"({-margin.value / margin.u:.1f} standard uncertainties): no body has that.",
                "Check which axis belongs to which run, and that all axes went through the centre of mass.",
            )
        )
    return tuple(doubts)


def alike_doubts(principal: Sequence[PrincipalAxis]) -> tuple[Doubt, ...]:
    """Axes of moments that can't be told apart have no direction."""
    if all(axis.direction_u_rad is not None for axis in principal):
        return ()
    return (
        Doubt(
            "principal-axes-alike",
            "Two principal moments lie too near one another: which directions their axes have can't be known.",
            "Any two directions across the third axis serve; the moments themselves are sound.",
        ),
    )


def _direction_u(adjusted: Adjusted, moments: Floats, vectors: Floats, i: int) -> float | None:
    turns = []
    for j in (k for k in range(3) if k != i):
        apart = float(moments[j] - moments[i])
        difference = _row(vectors[:, j], vectors[:, j]) - _row(vectors[:, i], vectors[:, i])
        mixing = _row(vectors[:, i], vectors[:, j])
        if abs(apart) <= APART * math.sqrt(float(difference @ adjusted.covariance @ difference)):
            return None
        turns.append(math.sqrt(float(mixing @ adjusted.covariance @ mixing)) / abs(apart))
    return max(turns)


def _row(a: Floats, b: Floats) -> Floats:
    """aᵀ J b as a row in xx, yy, zz, yz, xz, xy."""
    return np.array(
        [
            a[0] * b[0],
            a[1] * b[1],
            a[2] * b[2],
            a[1] * b[2] + a[2] * b[1],
            a[0] * b[2] + a[2] * b[0],
            a[0] * b[1] + a[1] * b[0],
        ]
    )


def _matrix(values: Floats) -> Floats:
    return np.asarray(_matrices([np.array([value]) for value in values])[0], dtype=np.float64)


def _matrices(p: Sequence[Floats]) -> Floats:
    """(n, 3, 3) matrices of six arrays (n,)."""
    xx, yy, zz, yz, xz, xy = p
    return np.stack([xx, xy, xz, xy, yy, yz, xz, yz, zz], axis=-1).reshape(-1, 3, 3)


def _pointing(vector: Floats) -> tuple[float, float, float]:
    sign = 1.0 if vector[int(np.argmax(np.abs(vector)))] >= 0.0 else -1.0
    x, y, z = (sign * vector).tolist()
    return float(x), float(y), float(z)
