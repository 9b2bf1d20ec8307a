"""What strings are made of: how stiff they are against twist and bending, and which are metal."""

from __future__ import annotations

import math
from dataclasses import dataclass

from ..records import Quantity, Rig

# Shear modulus and Young's modulus, Pa, and their relative limits. Metals: Gere, Mechanics of Materials, table of
# moduli (from memory), ±10 % for alloy and drawing. Solid polymer line: 1.2 GPa and 3 GPa (dry polyamide, from
# memory), ±50 % for kind, heat and moisture.
_METAL_LIMITS, _POLYMER_LIMITS = 0.10, 0.50
_METALS = {
    "steel": (79e9, 200e9),
    "iron": (79e9, 200e9),
    "brass": (38e9, 102e9),
    "bronze": (42e9, 110e9),
    "copper": (44e9, 117e9),
    "aluminium": (27e9, 71e9),
    "aluminum": (27e9, 71e9),
    "titanium": (42e9, 112e9),
    "tungsten": (155e9, 380e9),
}
_SOLID_LINES = ("monofilament", "nylon", "polyamide", "fluorocarbon", "fishing line")
# A bundle of fibres twists and bends far more easily than a solid line of its width: anywhere from nothing to that.
_FIBRES = (
    "thread",
    "braid",
    "twisted",
    "cotton",
    "linen",
    "polyester",
    "dyneema",
    "aramid",
    "silk",
    "cord",
    "yarn",
)
_POLYMER = (1.2e9, 3.0e9)


@dataclass(frozen=True)
class StringMaterial:
    """Moduli of a string, Pa, with relative limits; a `bundle` of fibres has anything from zero to them."""

    shear_modulus: float
    youngs_modulus: float
    limits: float
    metal: bool
    bundle: bool


def is_metal(name: str | None) -> bool:
    """Whether the name in the rig file is that of a metal or of wire."""
    lower = (name or "").lower()
    return any(metal in lower for metal in (*_METALS, "wire", "metal"))


def material_of(name: str | None) -> StringMaterial | None:
    """The material by its name in the rig file; None where the name says too little.

    Examples
    --------
    >>> material_of("steel wire").metal, material_of("braided polyester").bundle, material_of("string")
    (True, True, None)
    """
    lower = (name or "").lower()
    for metal, moduli in _METALS.items():
        if metal in lower:
            return StringMaterial(*moduli, _METAL_LIMITS, metal=True, bundle=False)
    if any(word in lower for word in _FIBRES):
        return StringMaterial(*_POLYMER, _POLYMER_LIMITS, metal=False, bundle=True)
    if any(word in lower for word in _SOLID_LINES):
        return StringMaterial(*_POLYMER, _POLYMER_LIMITS, metal=False, bundle=False)
    return None


def twist_stiffness(rig: Rig) -> Quantity | None:
    """Twist stiffness of all strings together, N m/rad: n π G d⁴/(32 L); None where material or width is not given."""
    length = rig.suspension.dimensions.get("length") or rig.suspension.dimensions.get("drop")
    material = material_of(rig.suspension.string_material)
    if length is None or material is None:
        return None
    return _estimate(rig, material, math.pi * material.shear_modulus / (32.0 * length.value), "N m/rad")


def bending_rigidity(rig: Rig) -> Quantity | None:
    """Bending rigidity of all strings together, N m²: n E π d⁴/64; None where material or width is not given."""
    material = material_of(rig.suspension.string_material)
    if material is None:
        return None
    return _estimate(rig, material, math.pi * material.youngs_modulus / 64.0, "N m^2")


def number_of_strings(rig: Rig) -> int:
    """How many strings carry the article; the record's own default of two does not fit a circle of strings."""
    return max(3, rig.suspension.strings) if rig.suspension.kind == "trifilar" else rig.suspension.strings


def _estimate(rig: Rig, material: StringMaterial, per_fourth_power: float, unit: str) -> Quantity | None:
    diameter = rig.suspension.dimensions.get("string_diameter")
    if diameter is None:
        return None
    solid = number_of_strings(rig) * per_fourth_power * diameter.value**4
    if material.bundle:
        return Quantity(0.5 * solid, 0.5 * solid / math.sqrt(3.0), unit, shape="rectangular")
    u = solid * math.hypot(4.0 * diameter.relative_u, material.limits / math.sqrt(3.0))
    return Quantity(solid, u, unit)
