"""The straight line behind added weights: what pulls, what was added, and which weight is which in several runs."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..records import Floats, Quantity, Rig
from .combine import Run
from .combine_inputs import JointInputs, join_inputs
from .suspension import need_mass

FOUR_PI_2 = 4.0 * math.pi**2
ON_STRINGS = ("bifilar", "trifilar")


@dataclass(frozen=True)
class WeightLine:
    """The terms of C M T² = I + added, for each run, out of the joint inputs."""

    joint: JointInputs
    weights: tuple[tuple[tuple[str, str, str | None], ...], ...]  # joint names of mass, distance, own moment
    masses: tuple[str, ...]  # joint name of the article's own mass in each run; empty on a torsion wire

    @classmethod
    def of(cls, runs: Sequence[Run]) -> WeightLine:
        found, weights = _weight_inputs(runs)
        on_strings = runs[0].rig.suspension.kind in ON_STRINGS
        masses: tuple[str, ...] = ()
        if on_strings:
            own = _own_masses(runs)
            same = all(mass == own[0] for mass in own)
            masses = tuple("mass" if same else f"mass ({run.name})" for run in runs)
            found |= dict(zip(masses, own, strict=True))
        joint = join_inputs(runs, keys=_keys(runs[0].rig) if on_strings else ())
        return cls(joint.with_inputs(found), weights, masses)

    def added(self, run: int, x: Mapping[str, Any]) -> Any:
        """Σ (m d² + own moment), kg m²."""
        return sum(
            (
                x[mass] * x[distance] ** 2 + (x[own] if own else 0.0)
                for mass, distance, own in self.weights[run]
            ),
            0.0,
        )

    def pull(self, run: int, constant: Any, x: Mapping[str, Any]) -> Any:
        """C M T² (strings, with half their mass, and their twist beside it) or C T² (torsion wire)."""
        here = self.joint.local(run, x)
        if not self.masses:
            return constant * here["period"] ** 2
        mass = (
            x[self.masses[run]]
            + sum((x[name] for name, _, _ in self.weights[run]), 0.0)
            + 0.5 * here.get("string_mass", 0.0)
        )
        return (constant * mass + here.get("string_stiffness", 0.0) / FOUR_PI_2) * here["period"] ** 2

    def beside(self, run: int, x: Mapping[str, Any]) -> Any:
        """What swings beside article and weights: the strings' own M_s D²/12 (D across, below) and the air."""
        here = self.joint.local(run, x)
        air = self.joint.carried_air(run, x)
        if "string_mass" not in here:
            return air
        if "upper_spacing" in here:
            across = here.get("lower_spacing", here["upper_spacing"])
        else:
            across = 2.0 * here.get("lower_radius", here["upper_radius"])
        return air + here["string_mass"] * across**2 / 12.0

    def whole(self, run: int) -> Callable[[Sequence[Any], Mapping[str, Any]], Any]:
        """Moment of article and weights in one run, with the constant as fitted."""
        return lambda p, x: self.pull(run, p[1], x) - self.beside(run, x)

    def start(self, added: Floats) -> list[float]:
        """Unknowns (I, C) by an ordinary straight line."""
        plain = self.joint.values()
        runs = range(len(self.joint.runs))
        known = np.array([float(self.pull(i, 0.0, plain) - self.beside(i, plain)) for i in runs])
        swing = np.array([float(self.pull(i, 1.0, plain) - self.pull(i, 0.0, plain)) for i in runs])
        slope, intercept = np.polyfit(swing, added - known, 1)
        return [-float(intercept), float(slope)]


def _keys(rig: Rig) -> set[str]:
    """Inputs of the suspension that enter: only what the strings' own mass and twist need."""
    keys = {"string_mass", "string_stiffness"}
    if "string_mass" in rig.suspension.dimensions:
        keys |= {"upper_spacing", "lower_spacing", "upper_radius", "lower_radius"}
    return keys


def _own_masses(runs: Sequence[Run]) -> list[Quantity]:
    """The article's mass in each run, without the weights."""
    return [need_mass(run.rig) if run.rig.article.mass is None else run.rig.article.mass for run in runs]


def _weight_inputs(
    runs: Sequence[Run],
) -> tuple[dict[str, Quantity], tuple[tuple[tuple[str, str, str | None], ...], ...]]:
    """Inputs of the weights: the n-th weight stated alike in two runs is one and the same weight."""
    found: dict[str, Quantity] = {}
    numbers: dict[tuple[Any, ...], str] = {}
    used = []
    for run in runs:
        seen: dict[tuple[Any, ...], int] = {}
        here = []
        for weight in run.rig.article.added:

            def name_of(what: str, quantity: Quantity, *more: Quantity) -> str:
                stated = (what, quantity, *more)
                seen[stated] = seen.get(stated, 0) + 1  # noqa: B023  # called in this very pass of the loop
                mark = (*stated, seen[stated])  # noqa: B023
                if mark not in numbers:
                    count = sum(other[0] == what for other in numbers)
                    numbers[mark] = f"{what} {count + 1}"
                    found[numbers[mark]] = quantity
                return numbers[mark]

            own = (
                None
                if weight.own_moment is None
                else name_of("own moment of weight", weight.own_moment, weight.mass)
            )
            here.append(
                (
                    name_of("mass of weight", weight.mass),
                    name_of("distance of weight", weight.distance, weight.mass),
                    own,
                )
            )
        used.append(tuple(here))
    return found, tuple(used)
