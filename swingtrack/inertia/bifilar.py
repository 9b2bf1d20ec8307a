"""Bifilar suspension: two strings, equal or unequal spacing, centre of mass off the middle allowed."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

from ..errors import BadRig
from ..records import Doubt, ExpectedMode, Quantity, Rig
from .gravity import gravity_of
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
from .unequal_strings import unequal_doubts

PARALLEL = 0.02  # |a − b| / (a + b) below which strings count as parallel for the rule of the off-centre mass


class Bifilar:
    """I = m g a b T² / (4π² h0), a and b the half spacings, h0 = √(L² − (a − b)²) the vertical drop.

    With the centre of mass off the middle by e along the line of parallel strings, a b becomes the product of the
    distances, (D/2 + e)(D/2 − e) = (D/2)² − e²; I is then about the centre of mass.
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
        given = rig.suspension.dimensions
        need_dimensions(
            rig, "drop" if "drop" in given else "length", "upper_spacing", not_negative=NOT_NEGATIVE
        )
        x = {key: quantity.value for key, quantity in self.inputs(rig).items()}
        a, b, drop, _ = _geometry(x)
        offset = x.get("centre_offset", 0.0)
        if offset >= min(a, b):
            raise BadRig(
                f"centre_offset = {offset:.4g} m puts the centre of mass outside the strings ({min(a, b):.4g} m from the middle).",
                "Needed: the centre of mass between the two strings.",
                "Move the strings, or check the unit.",
            )
        doubts = list(check_strings(rig, largest_share=0.5 * (1.0 + offset / min(a, b))))
        if offset > 0.0 and abs(a - b) > PARALLEL * (a + b):
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
        return (*doubts, *slant_doubts(a, b, drop), *unequal_doubts(rig))

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
        # Off the middle the article tips a little as it turns; the mean radius √(ab − e²) keeps the small-swing
        # stiffness exact and the finite-amplitude part good to the order of (e/a)².
        scale = math.sqrt(arm / (a * b))
        return two_circle_dynamics(drop, (a * scale, b * scale), gyration, twist=twist_share(x, arm, drop))

    def modes(self, rig: Rig) -> tuple[ExpectedMode, ...]:
        x = {key: quantity.value for key, quantity in self.inputs(rig).items()}
        a, b, drop, _ = _geometry(x)
        hz = math.sqrt(x["gravity"] / drop) / (2.0 * math.pi)
        # Along the line of parallel strings sway is exactly g/L; slanted strings pitch the article as it sways, by
        # an amount that depends on its depth, which the rig does not say. Across, the article tips as well and the
        # frequency rises.
        return (ExpectedMode("sway", hz, 0.03 + abs(a - b) / drop), ExpectedMode("roll", 2.0 * hz, 0.6))

    def judge(self, x: Mapping[str, Any], moment: float) -> tuple[Doubt, ...]:
        return ()


def _geometry(x: Mapping[str, Any]) -> tuple[Any, Any, Any, Any]:
    """Half spacings a and b, vertical drop h0, and the arm product ab − e² (m²)."""
    a = 0.5 * x["upper_spacing"]
    b = 0.5 * x["lower_spacing"] if "lower_spacing" in x else a
    offset = x.get("centre_offset", 0.0)
    return a, b, drop_of(x, a, b), a * b - offset**2


BIFILAR = Bifilar()
