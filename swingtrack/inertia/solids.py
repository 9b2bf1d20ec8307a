"""Expected moment of inertia and centre of mass of an article put together from simple solids.

`read_parts` (in solids_file) makes an `Assembly` of a TOML file, `assemble` works it out.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from ..errors import BadInput, BadRig
from ..records import BudgetLine, Doubt, Floats, MonteCarlo, Quantity
from .combine_adjust import COMPLEX_STEP, budget_lines, effective_dof, judge_draws
from .budget import coverage_factor
from .monte_carlo import SEED, draw
from .solids_mass import MassRules
from .solids_place import Turn, place

DRAWS = 20_000  # ends of a 95 % interval to about 2 % of u
AGREES = 1.0  # |E_n| up to which two results agree (ISO/IEC 17043)
ELEMENTS = ((0, 0), (1, 1), (2, 2), (1, 2), (0, 2), (0, 1))


@dataclass(frozen=True)
class Part:
    """One solid of an assembly.

    Parameters
    ----------
    name, kind : str
        `kind` as in `solids_shapes.SHAPES`, or "body" with its own moments.
    dimensions : mapping of key to Quantity
        m; for a "body" moment_x, moment_y, moment_z in kg m² about its centre of mass.
    at : three Quantity
        Where the reference point is in the article's frame, m.
    turns : tuple of Turn
        In the order in which they are made, about axes through the reference point parallel to the article's.
    mass, density : Quantity or None
        One of them; the mass of a part with holes is what a scale reads, without what the holes took away.
    material : str or None
        Parts of one material share its density.
    hole : bool
        Taken away instead of added.
    of : str or None
        For a hole: the part that it was made in, whose density is what is missing.
    """

    name: str
    kind: str
    dimensions: Mapping[str, Quantity]
    at: tuple[Quantity, Quantity, Quantity]
    turns: tuple[Turn, ...] = ()
    mass: Quantity | None = None
    density: Quantity | None = None
    material: str | None = None
    hole: bool = False
    of: str | None = None


@dataclass(frozen=True)
class Axis:
    """An axis in the article's frame: a direction, through a point or (None) through the centre of mass."""

    direction: tuple[float, float, float] = (0.0, 0.0, 1.0)
    through: tuple[Quantity, Quantity, Quantity] | None = None


@dataclass(frozen=True)
class Assembly:
    """An article as a parts file describes it; `measured` what was measured of it, to compare with."""

    name: str
    parts: tuple[Part, ...]
    axis: Axis = Axis()
    measured_moment: Quantity | None = None
    measured_mass: Quantity | None = None
    source: Mapping[str, Any] = field(default_factory=dict)


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


def normalised_error(x: float, expanded_x: float, reference: float, expanded_reference: float) -> float:
    """E_n = (x − X)/√(U² + U_ref²); |E_n| <= 1 is satisfactory (ISO/IEC 17043).

    Parameters
    ----------
    x, expanded_x : float
        A result and its expanded uncertainty (about 95 %).
    reference, expanded_reference : float

    Examples
    --------
    >>> normalised_error(10.3, 0.3, 10.0, 0.4)
    0.6
    """
    both = math.hypot(expanded_x, expanded_reference)
    if not (math.isfinite(both) and both > 0.0):
        raise BadInput(
            "Both numbers were given without uncertainty.",
            "Needed: an expanded uncertainty of at least one.",
            "Write it behind ±.",
        )
    return round(x - reference, 15) / both
