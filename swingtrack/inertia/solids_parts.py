"""What a parts file describes: solids, where they are, how they are turned, and the axis asked for."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from ..records import Quantity


@dataclass(frozen=True)
class Turn:
    """A turn by `angle` (rad, counter-clockwise seen from the axis' tip) about an axis parallel to the article's x, y or z."""

    axis: str
    angle: Quantity


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
