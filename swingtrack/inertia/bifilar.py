"""Bifilar suspension: two equal strings, equal or unequal spacing, centre of mass off the middle allowed."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

from ..errors import BadRig
from ..records import Doubt, ExpectedMode, Quantity, Rig
from .gravity import gravity_of
from .strings import add_string_inputs, check_strings, string_mass_terms, twist_moment
from .suspension import Dynamics, need_mass
from .two_circles import two_circle_dynamics, vertical_drop

FOUR_PI_2 = 4.0 * math.pi**2


class Bifilar:
    """I = m g a b T² / (4π² h0), a and b the half spacings, h0 = √(L² − (a − b)²) the vertical drop.

    With the centre of mass off the middle by e along the line of the strings, a b becomes (a + e)(b − e) at equal
    spacing D: (D/2)² − e² (the product of the distances), I then about the centre of mass.
    Sources: docs/theory.md, section Bifilar (modes checked against the rigid body with six degrees of freedom).
    """

    about = "vertical axis through the centre of mass"

    def inputs(self, rig: Rig) -> dict[str, Quantity]:
        given = rig.suspension.dimensions
        found = {"mass": need_mass(rig), "gravity": gravity_of(rig)}
        for key in ("length", "drop", "upper_spacing", "lower_spacing", "centre_offset"):
            if key in given:
                found[key] = given[key]
        add_string_inputs(rig, found)
        return found

    def check(self, rig: Rig) -> tuple[Doubt, ...]:
        x = {key: quantity.value for key, quantity in self.inputs(rig).items()}
        a, b, drop, arm = _geometry(x)
        doubts = list(check_strings(rig, strings=2, drop=drop))
        offset = x.get("centre_offset", 0.0)
        if offset >= min(a, b):
            raise BadRig(
                f"centre_offset = {offset:.4g} m puts the centre of mass outside the strings ({min(a, b):.4g} m from the middle).",
                "Needed: the centre of mass between the two strings.",
                "Move the strings, or check the unit.",
            )
        if "centre_offset" in x and abs(a - b) > 0.02 * (a + b):
            doubts.append(
                Doubt(
                    "offset-with-slanted-strings",
                    "The centre of mass is off the middle and the strings are slanted: the product rule is exact for parallel strings only.",
                    "Hang it with equal spacings, or move the centre of mass to the middle.",
                )
            )
        if max(a, b) > drop:
            doubts.append(
                Doubt(
                    "strings-short",
                    f"The spacing ({2 * max(a, b):.3g} m) is over twice the drop ({drop:.3g} m).",
                    "Longer strings make the swing gentler and the bounce smaller.",
                )
            )
        if arm <= 0.0:
            raise BadRig(
                "The spacings leave no arm for gravity to turn the article back.",
                "Needed: spacings over zero.",
            )
        return tuple(doubts)

    def moment(self, x: Mapping[str, Any]) -> Any:
        _, _, drop, arm = _geometry(x)
        carried, rotary = string_mass_terms(x, x["upper_spacing"], x.get("lower_spacing", x["upper_spacing"]))
        swing = (x["mass"] + carried) * x["gravity"] * arm / drop * x["period"] ** 2 / FOUR_PI_2
        return swing - rotary + twist_moment(x)

    def period(self, x: Mapping[str, Any], moment: float) -> float:
        _, _, drop, arm = _geometry(x)
        carried, rotary = string_mass_terms(x, x["upper_spacing"], x.get("lower_spacing", x["upper_spacing"]))
        stiffness = (x["mass"] + carried) * x["gravity"] * arm / drop + x.get("string_stiffness", 0.0)
        return float(2.0 * math.pi * math.sqrt((moment + rotary) / stiffness))

    def dynamics(self, rig: Rig, moment: float | None) -> Dynamics:
        x = {key: quantity.value for key, quantity in self.inputs(rig).items()}
        a, b, drop, arm = _geometry(x)
        gyration = None if moment is None else math.sqrt(moment / x["mass"])
        # Off the middle the article tips a little as it turns; the mean radius √(ab − e²) keeps the small-swing
        # stiffness exact and the finite-amplitude part good to the order of (e/a)².
        scale = math.sqrt(arm / (a * b))
        return two_circle_dynamics(drop, a * scale, b * scale, gyration)

    def modes(self, rig: Rig) -> tuple[ExpectedMode, ...]:
        x = {key: quantity.value for key, quantity in self.inputs(rig).items()}
        _, _, drop, _ = _geometry(x)
        hz = math.sqrt(x["gravity"] / drop) / (2.0 * math.pi)
        # Along the strings' line sway is exactly g/L; across it the article tips as well and the frequency rises.
        return (ExpectedMode("sway", hz, 0.03), ExpectedMode("roll", 2.0 * hz, 0.6))


def _geometry(x: Mapping[str, Any]) -> tuple[Any, Any, Any, Any]:
    """Half spacings a and b, vertical drop h0, and the arm product ab − e² (m²)."""
    a = 0.5 * x["upper_spacing"]
    b = 0.5 * x["lower_spacing"] if "lower_spacing" in x else a
    if "drop" in x:
        drop = x["drop"]
    elif isinstance(x["length"], float) and isinstance(a, float):
        drop = vertical_drop(x["length"], a, b)
    else:
        drop = (x["length"] ** 2 - (a - b) ** 2) ** 0.5
    offset = x.get("centre_offset", 0.0)
    return a, b, drop, a * b - offset**2


BIFILAR = Bifilar()
