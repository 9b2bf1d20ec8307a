"""Torsion wire: stiffness as given, from the wire's dimensions and shear modulus, or calibrated with a known body."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

import numpy as np

from ..records import Doubt, ExpectedMode, Quantity, Rig
from .suspension import Dynamics, need_dimensions

WIRE_KEYS = ("wire_diameter", "shear_modulus", "length")
CALIBRATION_KEYS = ("reference_moment", "reference_period")
MANY_TURNS_RAD = 100.0  # a wire twists as far as anyone cares to turn it


def wire_stiffness(shear_modulus: Any, diameter: Any, length: Any) -> Any:
    """Twist stiffness of a round wire, N m/rad: κ = π G d⁴ / (32 L) (Gere, Mechanics of Materials, torsion).

    Examples
    --------
    >>> round(wire_stiffness(79e9, 0.5e-3, 1.0), 7)
    0.0004847
    """
    return math.pi * shear_modulus * diameter**4 / (32.0 * length)


def calibrated_stiffness(reference_moment: Any, reference_period: Any) -> Any:
    """κ = 4π² I_ref / T_ref², N m/rad, from the swing of a body of known moment on the same wire."""
    return 4.0 * math.pi**2 * reference_moment / reference_period**2


class TorsionWire:
    """I = κ T² / (4π²); harmonic at any amplitude as long as the wire is elastic."""

    about = "the wire's axis"

    def inputs(self, rig: Rig) -> dict[str, Quantity]:
        given = rig.suspension.dimensions
        return {key: given[key] for key in _keys(rig) if key in given}

    def check(self, rig: Rig) -> tuple[Doubt, ...]:
        need_dimensions(rig, *_keys(rig))
        given = rig.suspension.dimensions
        if "wire_diameter" not in _keys(rig):
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
        return Dynamics(lambda q: 0.5 * q**2, np.ones_like, MANY_TURNS_RAD)

    def modes(self, rig: Rig) -> tuple[ExpectedMode, ...]:
        length = rig.suspension.dimensions.get("length")
        if length is None:
            return ()
        return (ExpectedMode("sway", math.sqrt(9.80665 / length.value) / (2.0 * math.pi), 0.1),)

    def judge(self, x: Mapping[str, Any], moment: float) -> tuple[Doubt, ...]:
        return ()


def _keys(rig: Rig) -> tuple[str, ...]:
    """The inputs that the formula uses: stiffness before a calibration before the wire's dimensions."""
    given = rig.suspension.dimensions
    if "stiffness" in given:
        return ("stiffness",)
    return CALIBRATION_KEYS if "reference_moment" in given else WIRE_KEYS


def _stiffness(x: Mapping[str, Any]) -> Any:
    if "stiffness" in x:
        return x["stiffness"]
    if "reference_moment" in x:
        return calibrated_stiffness(x["reference_moment"], x["reference_period"])
    return wire_stiffness(x["shear_modulus"], x["wire_diameter"], x["length"])


TORSION_WIRE = TorsionWire()
