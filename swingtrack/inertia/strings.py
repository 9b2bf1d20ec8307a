"""What the strings themselves do: their mass, twist, bending and load; shared by the suspensions on strings."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

from ..errors import BadRig
from ..records import Doubt, Quantity, Rig
from .string_materials import bending_rigidity, is_metal, twist_stiffness
from .suspension import need_mass

LOAD_MARGIN = (
    5.0  # static load over a string's limit below which a rig is dubious: common practice, no source
)
# Slant of the strings, (a − b)/h0, from which an exchanged or mistyped spacing is likelier than a wish: our judgment.
STEEP = 0.25
NOT_NEGATIVE = ("centre_offset", "length_difference", "string_mass", "string_stiffness", "tilt")


def add_string_inputs(rig: Rig, found: dict[str, Quantity]) -> None:
    """Add what the rig tells of the strings themselves to the inputs of a formula.

    Their mass and twist as given; where no twist is given, twist and bending by diameter and material, if both are
    known. How far the ends are clamped nobody knows: anything from a hinge (0) to a clamp (1).
    """
    given = rig.suspension.dimensions
    for key in ("string_mass", "string_stiffness"):
        if key in given:
            found[key] = given[key]
    if "string_stiffness" not in given and (twist := twist_stiffness(rig)) is not None:
        found["string_stiffness"] = twist
    if (rigidity := bending_rigidity(rig)) is not None:
        found["string_rigidity"] = rigidity
        found["string_clamping"] = Quantity(0.5, 0.5 / math.sqrt(3.0), "1", shape="rectangular")


def gravity_stiffness(x: Mapping[str, Any], arm: Any, drop: Any) -> Any:
    """Restoring torque of gravity per angle, N m/rad: (m + M_s/2) g a b/h0, more by the strings' bending.

    Parameters
    ----------
    x : mapping
        Inputs; M_s is string_mass, all strings together.
    arm : m²
        a b, less e² where the centre of mass is off the middle.
    drop : m
    """
    weight = (x["mass"] + 0.5 * x.get("string_mass", 0.0)) * x["gravity"]
    return weight * arm / drop * bending_factor(x, drop)


def bending_factor(x: Mapping[str, Any], drop: Any) -> Any:
    """By how much the strings' bending stiffens them sideways: 1/(1 − 2 c q/L), q = √(E J/N), N the tension.

    c = 1 for clamped ends, 0 for hinged ones. With both ends clamped the lateral stiffness is
    N/(L − 2 q tanh(L/(2q))) (beam under tension; docs/theory.md); the tanh is 1 for any string.
    """
    if "string_rigidity" not in x:
        return 1.0
    # E J and N both stand for all strings together, so that their number drops out.
    shortening = (x["string_rigidity"] / (x["mass"] * x["gravity"])) ** 0.5
    return 1.0 / (1.0 - 2.0 * x["string_clamping"] * shortening / drop)


def strings_moment(x: Mapping[str, Any], lower: Any) -> Any:
    """The strings' own moment of inertia, kg m², lower ends `lower` m apart: M_s D²/12.

    Each string turns about its upper end as a rod: M_s/3 at the distance D/2.
    """
    return x.get("string_mass", 0.0) * lower**2 / 12.0


def moment_on_strings(x: Mapping[str, Any], arm: Any, drop: Any, lower: Any) -> Any:
    """I = (gravity's stiffness + the strings' twist) T²/4π² − the strings' own moment, kg m²."""
    stiffness = gravity_stiffness(x, arm, drop) + x.get("string_stiffness", 0.0)
    return stiffness * x["period"] ** 2 / (4.0 * math.pi**2) - strings_moment(x, lower)


def period_on_strings(x: Mapping[str, Any], moment: float, geometry: tuple[Any, Any, Any]) -> float:
    """Small-swing period, s: the inverse of `moment_on_strings`; geometry is (arm, drop, lower)."""
    arm, drop, lower = geometry
    stiffness = gravity_stiffness(x, arm, drop) + x.get("string_stiffness", 0.0)
    return float(2.0 * math.pi * math.sqrt((moment + strings_moment(x, lower)) / stiffness))


def twist_share(x: Mapping[str, float], arm: float, drop: float) -> float:
    """Part of the restoring torque that the strings' twist makes."""
    twist = x.get("string_stiffness", 0.0)
    return float(twist / (gravity_stiffness(x, arm, drop) + twist))


def check_strings(rig: Rig, *, largest_share: float) -> tuple[Doubt, ...]:
    """Load over a string's limit (BadRig), thin margin, metal used as string (doubts).

    `largest_share` is the part of the weight that the string with the most load carries.
    """
    doubts = []
    given = rig.suspension.dimensions
    if "string_load_limit" in given:
        load = need_mass(rig).value * 9.80665 * largest_share
        limit = given["string_load_limit"].value
        if load > limit:
            raise BadRig(
                f"A string would carry {load:.3g} N, over its limit of {limit:.3g} N.",
                "Needed: strings that hold the article with a margin.",
                "Use stronger strings or more of them. Nobody under a hanging load.",
            )
        if load * LOAD_MARGIN > limit:
            doubts.append(
                Doubt(
                    "string-load-margin",
                    f"A string carries {load:.3g} N of its {limit:.3g} N: a margin of {limit / load:.1f}.",
                    f"A margin of {LOAD_MARGIN:.0f} is common practice; local codes come first.",
                )
            )
    if is_metal(rig.suspension.string_material):
        doubts.append(_metal_doubt(rig))
    return tuple(doubts)


def slant_doubts(a: float, b: float, drop: float) -> tuple[Doubt, ...]:
    """A doubt where the strings slant so much that a spacing may be mistyped."""
    if abs(a - b) <= STEEP * drop:
        return ()
    degrees = math.degrees(math.atan(abs(a - b) / drop))
    return (
        Doubt(
            "strings-slanted",
            f"The strings slant by {degrees:.0f}° ({2e3 * a:.4g} mm across above, {2e3 * b:.4g} mm below).",
            "Check which spacing is which, and that spacings (two strings) or radii (more) were given.",
        ),
    )


def _metal_doubt(rig: Rig) -> Doubt:
    found: dict[str, Quantity] = {}
    add_string_inputs(rig, found)
    if "string_rigidity" in found:
        message = "their twist and bending were estimated by diameter and taken off, with wide limits."
    elif "string_stiffness" in found:
        message = "their twist is allowed for as given, their bending at the ends is not."
    else:
        message = "the twist and bending of a wire can add a tenth and more."
    return Doubt(
        "metal-string",
        f"The strings are of {rig.suspension.string_material}: {message}",
        "Use thread, or give string_diameter and string_stiffness.",
    )
