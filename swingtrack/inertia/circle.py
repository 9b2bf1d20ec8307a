"""Three or more equal strings on two circles (trifilar and up)."""

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


class Circle:
    """I = m g R r T² / (4π² h0), R and r the radii of the upper and lower attachments, h0 = √(L² − (R − r)²).

    With parallel strings and the centre of mass off the middle by e, R r becomes r² − e² (I about the centre of
    mass). Source: docs/theory.md, section Strings on a circle (modes of the rigid body, three strings).
    """

    about = "vertical axis through the centre of mass"

    def inputs(self, rig: Rig) -> dict[str, Quantity]:
        given = rig.suspension.dimensions
        found = {"mass": need_mass(rig), "gravity": gravity_of(rig)}
        for key in ("length", "drop", "upper_radius", "lower_radius", "centre_offset"):
            if key in given:
                found[key] = given[key]
        add_string_inputs(rig, found)
        return found

    def check(self, rig: Rig) -> tuple[Doubt, ...]:
        x = {key: quantity.value for key, quantity in self.inputs(rig).items()}
        a, b, drop, _ = _geometry(x)
        doubts = list(check_strings(rig, strings=rig.suspension.strings, drop=drop))
        inside = min(a, b) * math.cos(math.pi / rig.suspension.strings)
        offset = x.get("centre_offset", 0.0)
        if offset >= inside:
            raise BadRig(
                f"centre_offset = {offset:.4g} m puts the centre of mass outside the strings (a string would go slack).",
                f"Needed: an offset below {inside:.4g} m.",
                "Move the article on its strings, or check the unit.",
            )
        if offset > 0.0 and abs(a - b) > 0.02 * (a + b):
            doubts.append(
                Doubt(
                    "offset-with-slanted-strings",
                    "The centre of mass is off the middle and the strings are slanted: the rule used is exact for parallel strings only.",
                    "Hang it with equal radii, or move the centre of mass to the middle.",
                )
            )
        if max(a, b) > 0.5 * drop:
            doubts.append(
                Doubt(
                    "strings-short",
                    f"The circle's diameter ({2 * max(a, b):.3g} m) is over the drop ({drop:.3g} m).",
                    "Longer strings make the swing gentler and the bounce smaller.",
                )
            )
        return tuple(doubts)

    def moment(self, x: Mapping[str, Any]) -> Any:
        _, b, drop, arm = _geometry(x)
        carried, rotary = string_mass_terms(x, 2.0 * b, 2.0 * b)
        swing = (x["mass"] + carried) * x["gravity"] * arm / drop * x["period"] ** 2 / FOUR_PI_2
        return swing - rotary + twist_moment(x)

    def period(self, x: Mapping[str, Any], moment: float) -> float:
        _, b, drop, arm = _geometry(x)
        carried, rotary = string_mass_terms(x, 2.0 * b, 2.0 * b)
        stiffness = (x["mass"] + carried) * x["gravity"] * arm / drop + x.get("string_stiffness", 0.0)
        return float(2.0 * math.pi * math.sqrt((moment + rotary) / stiffness))

    def dynamics(self, rig: Rig, moment: float | None) -> Dynamics:
        x = {key: quantity.value for key, quantity in self.inputs(rig).items()}
        a, b, drop, arm = _geometry(x)
        gyration = None if moment is None else math.sqrt(moment / x["mass"])
        scale = math.sqrt(arm / (a * b))
        return two_circle_dynamics(drop, a * scale, b * scale, gyration)

    def modes(self, rig: Rig) -> tuple[ExpectedMode, ...]:
        x = {key: quantity.value for key, quantity in self.inputs(rig).items()}
        _, _, drop, _ = _geometry(x)
        return (ExpectedMode("sway", math.sqrt(x["gravity"] / drop) / (2.0 * math.pi), 0.05),)


def _geometry(x: Mapping[str, Any]) -> tuple[Any, Any, Any, Any]:
    """Radii above and below, vertical drop, and the arm product R r − e² (m²)."""
    a = x["upper_radius"]
    b = x.get("lower_radius", a)
    if "drop" in x:
        drop = x["drop"]
    elif isinstance(x["length"], float) and isinstance(a, float):
        drop = vertical_drop(x["length"], a, b)
    else:
        drop = (x["length"] ** 2 - (a - b) ** 2) ** 0.5
    offset = x.get("centre_offset", 0.0)
    return a, b, drop, a * b - offset**2


CIRCLE = Circle()
