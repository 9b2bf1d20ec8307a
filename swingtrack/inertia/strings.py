"""What the strings themselves do: their mass, their twist, their load; shared by suspensions on strings."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

from ..errors import BadRig
from ..records import Doubt, Quantity, Rig

# Materials of wire, whose twist and bending add a tenth and more: docs/theory.md, "Strings that twist".
METALS = (
    "steel",
    "iron",
    "brass",
    "copper",
    "bronze",
    "aluminium",
    "aluminum",
    "titanium",
    "tungsten",
    "wire",
    "metal",
)
LOAD_MARGIN = (
    5.0  # static load over a string's limit below which a rig is dubious: common practice, no source
)


def add_string_inputs(rig: Rig, found: dict[str, Quantity]) -> None:
    """Add string_mass and string_stiffness to the inputs where the rig gives them."""
    for key in ("string_mass", "string_stiffness"):
        if key in rig.suspension.dimensions:
            found[key] = rig.suspension.dimensions[key]


def string_mass_terms(x: Mapping[str, Any], upper: Any, lower: Any) -> tuple[Any, Any]:
    """What the mass M_s of all strings adds: (mass carried, kg; moment of inertia, kg m²).

    Each string hangs from the upper end and turns with the lower: (m + M_s/2) g … = I + M_s D²/12 for spacing D
    (references in docs/theory.md; D² becomes the lower spacing squared for slanted strings).
    """
    mass = x.get("string_mass", 0.0)
    return mass * 0.5, mass * lower**2 / 12.0


def twist_moment(x: Mapping[str, Any]) -> Any:
    """Moment of inertia that the strings' own twist stiffness κ accounts for: κ T²/4π², kg m²."""
    return x.get("string_stiffness", 0.0) * x["period"] ** 2 / (4.0 * math.pi**2)


def check_strings(rig: Rig, *, strings: int, drop: float) -> tuple[Doubt, ...]:
    """Load over a string's limit (BadRig), thin margin, metal used as string (doubts)."""
    doubts = []
    given = rig.suspension.dimensions
    if rig.article.mass is not None and "string_load_limit" in given:
        load = rig.article.mass.value * 9.80665 / strings
        limit = given["string_load_limit"].value
        if load > limit:
            raise BadRig(
                f"Each string would carry {load:.3g} N, over its limit of {limit:.3g} N.",
                "Needed: strings that hold the article with a margin.",
                "Use stronger strings or more of them. Nobody under a hanging load.",
            )
        if load * LOAD_MARGIN > limit:
            doubts.append(
                Doubt(
                    "string-load-margin",
                    f"Each string carries {load:.3g} N of its {limit:.3g} N: a margin of {limit / load:.1f}.",
                    f"A margin of {LOAD_MARGIN:.0f} is common practice; local codes come first.",
                )
            )
    material = (rig.suspension.string_material or "").lower()
    if any(metal in material for metal in METALS) and "string_stiffness" not in given:
        doubts.append(
            Doubt(
                "metal-string",
                f"The strings are of {rig.suspension.string_material}: the twist and bending of a wire can add a tenth and more.",
                "Use thread, or give string_stiffness.",
            )
        )
    return tuple(doubts)
