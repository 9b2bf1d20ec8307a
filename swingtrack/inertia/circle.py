"""Three or more equal strings on two circles (trifilar and up)."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

from ..errors import BadRig
from ..records import Doubt, ExpectedMode, Quantity, Rig
from .gravity import gravity_of
from .string_materials import number_of_strings
from .strings import (
    NOT_NEGATIVE,
    add_string_inputs,
    check_strings,
    moment_on_strings,
    period_on_strings,
    slant_doubts,
    twist_share,
)
from .suspension import Dynamics, need_dimensions, need_mass
from .two_circles import drop_of, two_circle_dynamics

PARALLEL = 0.02  # |R − r| / (R + r) below which strings count as parallel for the rule of the off-centre mass


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
        given, strings = rig.suspension.dimensions, number_of_strings(rig)
        need_dimensions(
            rig, "drop" if "drop" in given else "length", "upper_radius", not_negative=NOT_NEGATIVE
        )
        x = {key: quantity.value for key, quantity in self.inputs(rig).items()}
        a, b, drop, _ = _geometry(x)
        inside = min(a, b) * math.cos(math.pi / strings)
        offset = x.get("centre_offset", 0.0)
        if offset >= inside:
            raise BadRig(
                f"centre_offset = {offset:.4g} m puts the centre of mass outside the strings (a string would go slack).",
                f"Needed: an offset below {inside:.4g} m.",
                "Move the article on its strings, or check the unit.",
            )
        # Tensions that vary straight across the circle: (1 + 2 e/r)/n on the side of the centre of mass, exact for
        # three strings and the least uneven of the possible ones for more.
        doubts = list(check_strings(rig, largest_share=(1.0 + 2.0 * offset / min(a, b)) / strings))
        if offset > 0.0 and abs(a - b) > PARALLEL * (a + b):
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
        return (*doubts, *slant_doubts(a, b, drop))

    def moment(self, x: Mapping[str, Any]) -> Any:
        _, b, drop, arm = _geometry(x)
        return moment_on_strings(x, arm, drop, 2.0 * b)

    def period(self, x: Mapping[str, Any], moment: float) -> float:
        _, b, drop, arm = _geometry(x)
        return period_on_strings(x, moment, (arm, drop, 2.0 * b))

    def dynamics(self, rig: Rig, moment: float | None) -> Dynamics:
        x = {key: quantity.value for key, quantity in self.inputs(rig).items()}
        a, b, drop, arm = _geometry(x)
        gyration = None if moment is None else math.sqrt(moment / x["mass"])
        scale = math.sqrt(arm / (a * b))
        return two_circle_dynamics(drop, (a * scale, b * scale), gyration, twist=twist_share(x, arm, drop))

    def modes(self, rig: Rig) -> tuple[ExpectedMode, ...]:
        x = {key: quantity.value for key, quantity in self.inputs(rig).items()}
        a, b, drop, _ = _geometry(x)
        hz = math.sqrt(x["gravity"] / drop) / (2.0 * math.pi)
        return (ExpectedMode("sway", hz, 0.05 + abs(a - b) / drop),)

    def judge(self, x: Mapping[str, Any], moment: float) -> tuple[Doubt, ...]:
        return ()


def _geometry(x: Mapping[str, Any]) -> tuple[Any, Any, Any, Any]:
    """Radii above and below, vertical drop, and the arm product R r − e² (m²)."""
    a = x["upper_radius"]
    b = x.get("lower_radius", a)
    offset = x.get("centre_offset", 0.0)
    return a, b, drop_of(x, a, b), a * b - offset**2


CIRCLE = Circle()
