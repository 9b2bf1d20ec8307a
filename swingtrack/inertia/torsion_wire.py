"""Torsion wire: stiffness as given, or from the wire's dimensions and shear modulus."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

import numpy as np

from ..records import Doubt, ExpectedMode, Quantity, Rig
from .suspension import Dynamics

WIRE_KEYS = ("wire_diameter", "shear_modulus", "length")


def wire_stiffness(shear_modulus: Any, diameter: Any, length: Any) -> Any:
    """Twist stiffness of a round wire, N m/rad: κ = π G d⁴ / (32 L) (Gere, Mechanics of Materials, torsion)."""
    return math.pi * shear_modulus * diameter**4 / (32.0 * length)


class TorsionWire:
    """I = κ T² / (4π²); harmonic at any amplitude as long as the wire is elastic."""

    about = "the wire's axis"

    def inputs(self, rig: Rig) -> dict[str, Quantity]:
        given = rig.suspension.dimensions
        keys = ("stiffness",) if "stiffness" in given else WIRE_KEYS
        return {key: given[key] for key in keys}

    def check(self, rig: Rig) -> tuple[Doubt, ...]:
        given = rig.suspension.dimensions
        if "stiffness" in given:
            return ()
        diameter = given["wire_diameter"]
        doubts = []
        if diameter.relative_u > 0.005:
            doubts.append(
                Doubt(
                    "wire-diameter-coarse",
                    f"The diameter is known to {100 * diameter.relative_u:.1f} % and enters with its fourth power.",
                    "Measure it with a micrometer in several places, or calibrate the wire with a reference article.",
                )
            )
        if diameter.value > 0.1 * given["length"].value:
            doubts.append(
                Doubt(
                    "wire-thick",
                    "The wire is thicker than a tenth of its length: it is no torsion wire.",
                    "Check the units.",
                )
            )
        return tuple(doubts)

    def moment(self, x: Mapping[str, Any]) -> Any:
        return _stiffness(x) * x["period"] ** 2 / (4.0 * math.pi**2)

    def period(self, x: Mapping[str, Any], moment: float) -> float:
        return float(2.0 * math.pi * math.sqrt(moment / _stiffness(x)))

    def dynamics(self, rig: Rig, moment: float | None) -> Dynamics:
        return Dynamics(lambda q: 0.5 * q**2, np.ones_like, 100.0)

    def modes(self, rig: Rig) -> tuple[ExpectedMode, ...]:
        length = rig.suspension.dimensions.get("length")
        if length is None:
            return ()
        return (ExpectedMode("sway", math.sqrt(9.80665 / length.value) / (2.0 * math.pi), 0.1),)


def _stiffness(x: Mapping[str, Any]) -> Any:
    return (
        x["stiffness"]
        if "stiffness" in x
        else wire_stiffness(x["shear_modulus"], x["wire_diameter"], x["length"])
    )


TORSION_WIRE = TorsionWire()
