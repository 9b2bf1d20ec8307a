"""What each part of an assembly adds: mass, m r and inertia matrix about the article's origin, from the joint inputs."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..errors import BadRig
from ..records import Quantity
from .combine_adjust import COMPLEX_STEP
from .solids_materials import density_of, plain_name
from .solids_parts import Part
from .solids_shapes import SHAPES, Body

BODY_KEYS = ("moment_x", "moment_y", "moment_z")


@dataclass(frozen=True)
class Amounts:
    """The parts with their inputs: `names[i]` are those that part i depends on, a density shared by many parts once.

    `assumed` are inputs whose uncertainty the user did not state.
    """

    parts: tuple[Part, ...]
    inputs: Mapping[str, Quantity]
    names: tuple[tuple[str, ...], ...]
    holes: Mapping[int, tuple[int, ...]]  # part → the holes made in it
    parents: Mapping[int, int]  # hole → the part that it was made in
    assumed: tuple[str, ...] = ()

    def part(self, index: int, x: Mapping[str, Any]) -> list[Any]:
        """Mass, m r (3) and J about the origin (xx, yy, zz, yz, xz, xy) of one part; negative for a hole."""
        part = self.parts[index]
        mass = self.mass(index, x)
        squared = self.body(index, x, mass)
        turned = _turned(part, x)
        r = [x[f"{part.name}: at {axis}"] + turned[row][2] * squared.height for row, axis in enumerate("xyz")]
        own = (squared.xx, squared.yy, squared.zz)
        pairs = ((0, 0), (1, 1), (2, 2), (1, 2), (0, 2), (0, 1))
        square = sum(part_of * part_of for part_of in r)
        second = [
            mass
            * (
                sum(turned[i][k] * own[k] * turned[j][k] for k in range(3))
                + (square if i == j else 0.0)
                - r[i] * r[j]
            )
            for i, j in pairs
        ]
        sign = -1.0 if part.hole else 1.0
        return [sign * value for value in (mass, *(mass * along for along in r), *second)]

    def body(self, index: int, x: Mapping[str, Any], mass: Any = 1.0) -> Body:
        """Volume, height and squared radii of gyration of one part."""
        part = self.parts[index]
        sizes = {key: x[f"{part.name}: {key}"] for key in part.dimensions}
        if part.kind == "body":
            return Body(None, 0.0, *(sizes[key] / mass for key in BODY_KEYS))
        return SHAPES[part.kind].body(sizes)

    def mass(self, index: int, x: Mapping[str, Any]) -> Any:
        """Mass of the full solid, kg; for a weighed part with holes more than what was weighed."""
        part = self.parts[index]
        if part.mass is None or index in self.holes:
            return self.density(index, x) * self.body(index, x).volume
        return x[f"{part.name}: mass"]

    def density(self, index: int, x: Mapping[str, Any]) -> Any:
        """Density, kg/m³: as given, of the material, of the part that a hole was made in, or weighed over volume."""
        part = self.parts[index]
        if index in self.parents:
            return self.density(self.parents[index], x)
        if part.mass is not None:
            missing = sum(self.body(hole, x).volume for hole in self.holes.get(index, ()))
            return x[f"{part.name}: mass"] / (self.body(index, x).volume - missing)
        return x[_density_name(part)]

    def mass_quantity(self, index: int) -> Quantity:
        """Mass of one part with its uncertainty; negative for a hole."""
        own = self.names[index]
        stepped = np.array([self.inputs[name].value for name in own])[:, None] + 1j * COMPLEX_STEP * np.eye(
            len(own)
        )
        mass = self.mass(index, dict(zip(own, stepped, strict=True))) * (
            -1.0 if self.parts[index].hole else 1.0
        )
        spread = np.broadcast_to(np.asarray(mass, dtype=complex), (len(own),))
        u = np.array([self.inputs[name].u for name in own])
        return Quantity(float(spread[0].real), float(np.linalg.norm(spread.imag / COMPLEX_STEP * u)), "kg")


def amounts_of(parts: Sequence[Part]) -> Amounts:
    """Collect the inputs of all parts and check that each can have a mass.

    Raises
    ------
    BadRig
        A part without a mass, an unknown material, a thin solid without a mass, a hole in nothing.
    """
    if not parts:
        raise BadRig(
            "There are no parts.",
            "Needed: at least one [[part]].",
            "samples/ has a parts file to start from.",
        )
    index_of: dict[str, int] = {}
    for index, part in enumerate(parts):
        if part.name in index_of:
            raise BadRig(f"Two parts are called {part.name!r}.", "Needed: a name of its own for each part.")
        index_of[part.name] = index
    parents = {
        i: _parent(part, part.of, parts, index_of) for i, part in enumerate(parts) if part.of is not None
    }
    holes: dict[int, tuple[int, ...]] = {}
    for hole, parent in parents.items():
        holes[parent] = (*holes.get(parent, ()), hole)
    inputs: dict[str, Quantity] = {}
    own_names: list[tuple[str, ...]] = []
    for index, part in enumerate(parts):
        own = _own_inputs(part)
        if index not in parents:
            own |= _matter(part, weighed_with_holes=index in holes)
        for name, quantity in own.items():
            if inputs.setdefault(name, quantity) != quantity:
                raise BadRig(
                    f"{name} is given as {inputs[name].value:g} and as {quantity.value:g} kg/m³.",
                    "Needed: one density of a material.",
                    "Give the two materials names of their own.",
                )
        own_names.append(tuple(own))
    names = []
    for index in range(len(parts)):
        parent = parents.get(index, index)
        related = (index, parent, *holes.get(parent, ())) if index in parents or index in holes else (index,)
        names.append(tuple(dict.fromkeys(name for i in related for name in own_names[i])))
    assumed = tuple(name for name, quantity in inputs.items() if not quantity.stated and quantity.u > 0.0)
    amounts = Amounts(tuple(parts), inputs, tuple(names), holes, parents, assumed)
    _check_holes(amounts)
    return amounts


def centre_of(amounts: Amounts, index: int) -> tuple[float, float, float]:
    """Centre of mass of one part in the article's frame, m."""
    plain = {name: quantity.value for name, quantity in amounts.inputs.items()}
    mass, *rest = amounts.part(index, plain)
    return float(rest[0] / mass), float(rest[1] / mass), float(rest[2] / mass)


def _own_inputs(part: Part) -> dict[str, Quantity]:
    found = {f"{part.name}: {key}": quantity for key, quantity in part.dimensions.items()}
    found |= {f"{part.name}: at {axis}": quantity for axis, quantity in zip("xyz", part.at, strict=True)}
    found |= {f"{part.name}: turn {number}": turn.angle for number, turn in enumerate(part.turns, 1)}
    return found


def _matter(part: Part, *, weighed_with_holes: bool) -> dict[str, Quantity]:
    """The input that says how much matter a part is: its mass, or its density."""
    solid = part.kind != "body" and not SHAPES[part.kind].thin
    if part.mass is not None:
        if weighed_with_holes and not solid:
            raise BadRig(
                f"Part {part.name!r} is a {part.kind}, which has no volume to make holes in.",
                "Needed: a solid.",
            )
        return {f"{part.name}: mass": part.mass}
    density = part.density
    if density is None and part.material is not None:
        density = density_of(part.material)
        if density is None:
            raise BadRig(
                f"The material {part.material!r} of part {part.name!r} is not in the table.",
                "Needed: a material of the table, or a density.",
                'Write density = "1.2 g/cm^3 ± 0.05 g/cm^3", or add it under [materials].',
            )
    if density is None:
        raise BadRig(
            f"Part {part.name!r} has neither mass nor density nor material.",
            "Needed: one of them.",
            "Weigh it if you can.",
        )
    if not solid:
        raise BadRig(
            f"Part {part.name!r} is a {part.kind}, which has no volume.",
            "Needed: its mass.",
            "Weigh it, or take the solid with its thickness (block, cylinder, tube, shell).",
        )
    return {_density_name(part): density}


def _density_name(part: Part) -> str:
    return f"density of {plain_name(part.material)}" if part.material is not None else f"{part.name}: density"


def _parent(part: Part, of: str, parts: Sequence[Part], index_of: Mapping[str, int]) -> int:
    if of not in index_of:
        raise BadRig(
            f"Hole {part.name!r} is made in {of!r}, which is not there.",
            "Needed: the name of a part.",
            f"The parts are {', '.join(list(index_of)[:8])}.",
        )
    parent = parts[index_of[of]]
    if parent.hole:
        raise BadRig(
            f"Hole {part.name!r} is made in {of!r}, which is a hole itself.", "Needed: a part of matter."
        )
    if not part.hole or part.mass or part.density or part.material:
        raise BadRig(
            f"Part {part.name!r} has `of` beside a mass, density or material, or is no hole.",
            "Needed: `of` on holes alone, without any of these.",
            "Leave them out: the hole has the density of the part that it was made in.",
        )
    return index_of[of]


def _check_holes(amounts: Amounts) -> None:
    plain = {name: quantity.value for name, quantity in amounts.inputs.items()}
    for hole in amounts.parents:
        if amounts.body(hole, plain).volume is None:
            name, kind = amounts.parts[hole].name, amounts.parts[hole].kind
            raise BadRig(f"Hole {name!r} is a {kind}, which has no volume.", "Needed: a solid.")
    for parent, holes in amounts.holes.items():
        volume = amounts.body(parent, plain).volume
        missing = math.fsum(amounts.body(hole, plain).volume for hole in holes)
        if volume is None or missing >= volume:
            raise BadRig(
                f"The holes in {amounts.parts[parent].name!r} take away all of it.",
                "Needed: holes smaller than the part.",
                "Check their dimensions and units.",
            )


def _turned(part: Part, x: Mapping[str, Any]) -> list[list[Any]]:
    """Rotation matrix of the part's turns, the first one made first."""
    matrix: list[list[Any]] = [[1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]]
    for number, turn in enumerate(part.turns, 1):
        angle = x[f"{part.name}: turn {number}"]
        c, s = np.cos(angle), np.sin(angle)
        i, j = {"x": (1, 2), "y": (2, 0), "z": (0, 1)}[turn.axis]
        rows = [list(row) for row in matrix]
        rows[i] = [c * a - s * b for a, b in zip(matrix[i], matrix[j], strict=True)]
        rows[j] = [s * a + c * b for a, b in zip(matrix[i], matrix[j], strict=True)]
        matrix = rows
    return matrix
