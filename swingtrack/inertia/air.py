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


def _plate_factor(ratio: float, table: tuple[float, ...]) -> float:
    """A plate's factor at long over short side `ratio`; beyond the table it closes on 1 (a strip) as 1/ratio."""
    if ratio > _RATIO[-1]:
        return 1.0 - (1.0 - table[-1]) * _RATIO[-1] / ratio
    # straight between points of 1/ratio, in which the factors are nearly straight
    inverse = [1.0 / r for r in reversed(_RATIO)]
    return float(np.interp(1.0 / ratio, inverse, list(reversed(table))))


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
    k1, k2, k3 = (_plate_factor(long / short, table) for table in (_K1, _K2, _K3))
    mass = k1 * math.pi / 4.0 * density * short**2 * long
    if width >= height:
        own = k2 * math.pi / 48.0 * density * short**2 * long**3
    else:
        own = k3 * math.pi / 128.0 * density * short**4 * long
    return mass * distance**2 + own


def disc_added_moment(diameter: float, distance: float = 0.0, *, density: float = STANDARD_DENSITY) -> float:
    """Added moment of a thin round disc that moves face on: (8/3) ρ R³ of mass at its distance, (16/45) ρ R⁵ of its own.

    Ideal flow; Lamb, Hydrodynamics, art. 102 and 108 (from memory), the potential jumps checked numerically.
    """
    radius = 0.5 * diameter
    return density * (8.0 / 3.0 * radius**3 * distance**2 + 16.0 / 45.0 * radius**5)


def ellipse_added_mass(long: float, short: float, *, density: float = STANDARD_DENSITY) -> float:
    """Added mass of a thin elliptic plate, full axes `long` >= `short`, that moves face on: (4π/3) ρ a b² / E(e).

    e² = 1 − b²/a², a and b the half axes (from memory; its limits are the disc and the strip). A paddle's blade is
    nearer to an ellipse than to a rectangle: by how much that matters.
    """
    from scipy.special import ellipe

    a, b = 0.5 * long, 0.5 * short
    return float(4.0 * math.pi / 3.0 * density * a * b**2 / ellipe(1.0 - (b / a) ** 2))


def sphere_added_moment(diameter: float, distance: float, *, density: float = STANDARD_DENSITY) -> float:
    """Half the displaced mass at its distance from the axis (ideal flow; a sphere turning in place drags nothing)."""
    return 0.5 * density * math.pi / 6.0 * diameter**3 * distance**2


def cylinder_added_moment(
    diameter: float, length: float, distance: float = 0.0, *, density: float = STANDARD_DENSITY
) -> float:
    """Long round cylinder that moves crosswise, turning about an axis across its own: ρ π r² a length."""
    mass = density * math.pi / 4.0 * diameter**2 * length
    return mass * (distance**2 + length**2 / 12.0)


def largest_added_moment(gyration: float, *, density: float = STANDARD_DENSITY) -> float:
    """What the air may add at most where the article's shape is not told, kg m².

    Of flat articles of a given radius of gyration k the square board that turns about an axis in its plane carries the
    most air that anybody is likely to swing: its side is √12 k. A slender or edgewise article carries far less.
    """
    side = math.sqrt(12.0) * gyration
    return plate_added_moment(side, side, density=density)


_NEEDED = {
    "plate": ("width", "height"),
    "disc": ("diameter",),
    "sphere": ("diameter",),
    "cylinder": ("diameter", "length"),
    "other": ("width", "height"),
}


def added_moment(air: Air) -> float:
    """Added moment of inertia of the shape in the rig file, kg m²; 0 for "none" and for a plate edge on.

    "other" is a shape that none of these resembles: it carries something between nothing and what the plate carries that
    just hides it as it moves; half of that is taken (and `air_correction` has limits that reach from nothing to all).
    """
    if air.shape == "none" or (air.shape in ("plate", "disc") and air.face == "edgewise"):
        return 0.0
    density = STANDARD_DENSITY if air.density is None else air.density.value
    size = {key: quantity.value for key, quantity in air.dimensions.items()}
    if air.shape not in _NEEDED:
        raise BadRig(
            f"air.shape = {air.shape!r} is not known.", f"Needed: one of {', '.join((*_NEEDED, 'none'))}."
        )
    for key in _NEEDED[air.shape]:
        if not size.get(key, 0.0) > 0.0:
            raise BadRig(
                f"air.{key} is missing or not over zero.",
                f"Needed for a {air.shape}: {', '.join(_NEEDED[air.shape])}.",
            )
    distance = size.get("distance", 0.0)
    if air.shape == "disc":
        return disc_added_moment(size["diameter"], distance, density=density)
    if air.shape == "sphere":
        return sphere_added_moment(size["diameter"], distance, density=density)
    if air.shape == "cylinder":
        return cylinder_added_moment(size["diameter"], size["length"], distance, density=density)
    plate = plate_added_moment(size["width"], size["height"], distance, density=density)
    return 0.5 * plate if air.shape == "other" else plate
