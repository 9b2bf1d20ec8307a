"""Air carried along by the article: added mass of plates, spheres and cylinders in ideal flow."""

from __future__ import annotations

import math

import numpy as np

from ..errors import BadRig
from ..records import Air

STANDARD_DENSITY = 1.20  # kg/m³, about 20 °C at sea level; the limits of ±10 % span -10 to 40 °C up to 500 m
DENSITY_LIMITS = 0.10
# Ideal flow against swinging models: NACA TN 1187 finds the air's part by such coefficients; how well is not given
# in the part that could be read. A quarter as limits is our judgment.
COEFFICIENT_LIMITS = 0.25

# Rectangular plate, long side over short side: k1 (broadside mass), k2 (turning about the axis parallel to the
# short side), k3 (about the one parallel to the long side). Vortex lattice converged to 1e-4; k1 equals the table
# of DNV-RP-C205 (from memory) to its three digits except at 3.
_RATIO = (1.0, 1.25, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 8.0, 10.0)
_K1 = (0.5790, 0.6419, 0.6898, 0.7569, 0.8009, 0.8318, 0.8719, 0.8967, 0.9347, 0.9476)
_K2 = (0.3066, 0.3631, 0.4127, 0.4947, 0.5586, 0.6093, 0.6835, 0.7347, 0.8222, 0.8544)
_K3 = (0.8176, 0.8532, 0.8774, 0.9079, 0.9263, 0.9385, 0.9539, 0.9631, 0.9769, 0.9815)


def plate_added_moment(
    width: float, height: float, distance: float = 0.0, *, density: float = STANDARD_DENSITY
) -> float:
    """Added moment of inertia of a rectangular plate that moves face on, about an axis in or parallel to its plane.

    I = k1 (π/4) ρ c² s · d² + own, own = k2 (π/48) ρ c² s³ (axis along the short side c) or k3 (π/128) ρ c⁴ s
    (axis along the long side s).

    Parameters
    ----------
    width, height : float
        Side across the swing axis and side along it, m.
    distance : float
        From the axis to the plate's middle, m.
    """
    short, long = min(width, height), max(width, height)
    ratio = min(long / short, _RATIO[-1])
    k1, k2, k3 = (float(np.interp(ratio, _RATIO, k)) for k in (_K1, _K2, _K3))
    mass = k1 * math.pi / 4.0 * density * short**2 * long
    if width >= height:
        own = k2 * math.pi / 48.0 * density * short**2 * long**3
    else:
        own = k3 * math.pi / 128.0 * density * short**4 * long
    return mass * distance**2 + own


def sphere_added_moment(diameter: float, distance: float, *, density: float = STANDARD_DENSITY) -> float:
    """Half the displaced mass at its distance from the axis (ideal flow; a sphere turning in place drags nothing)."""
    return 0.5 * density * math.pi / 6.0 * diameter**3 * distance**2


def cylinder_added_moment(
    diameter: float, length: float, distance: float = 0.0, *, density: float = STANDARD_DENSITY
) -> float:
    """Long round cylinder that moves crosswise, turning about an axis across its own: ρ π r² a length."""
    mass = density * math.pi / 4.0 * diameter**2 * length
    return mass * (distance**2 + length**2 / 12.0)


def added_moment(air: Air) -> float:
    """Added moment of inertia of the shape in the rig file, kg m²; 0 for "none" and for a plate edge on."""
    density = STANDARD_DENSITY if air.density is None else air.density.value
    size = {key: quantity.value for key, quantity in air.dimensions.items()}
    distance = size.get("distance", 0.0)
    if air.shape == "none" or (air.shape == "plate" and air.face == "edgewise"):
        return 0.0
    needed = {"plate": ("width", "height"), "sphere": ("diameter",), "cylinder": ("diameter", "length")}[
        air.shape
    ]
    missing = [key for key in needed if key not in size]
    if missing:
        raise BadRig(f"air.{missing[0]} is missing.", f"Needed for a {air.shape}: {', '.join(needed)}.")
    if air.shape == "plate":
        return plate_added_moment(size["width"], size["height"], distance, density=density)
    if air.shape == "sphere":
        return sphere_added_moment(size["diameter"], distance, density=density)
    return cylinder_added_moment(size["diameter"], size["length"], distance, density=density)
