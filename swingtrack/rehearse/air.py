"""Air that is carried along, worked out apart from `inertia/air.py`: by vortex rings on the plate, not by a table."""

from __future__ import annotations

import math
from functools import lru_cache

import numpy as np

from ..errors import BadRig
from ..records import Air, Floats

AIR_DENSITY = 1.20  # kg/m³, about 20 °C at sea level
PANELS = (
    14  # along each side; with the half-panel margin of the vortex lattice the result is good to about 1 %
)


def air_moment(air: Air | None) -> float:
    """Moment of inertia of the carried air, kg m²: what the rig's [air] says, 0 where it says nothing."""
    if air is None or air.shape == "none" or (air.shape == "plate" and air.face == "edgewise"):
        return 0.0
    size = {key: quantity.value for key, quantity in air.dimensions.items()}
    density = AIR_DENSITY if air.density is None else air.density.value
    distance = size.get("distance", 0.0)
    try:
        if air.shape == "sphere":  # half of the displaced mass: Lamb, Hydrodynamics, art. 92, from memory
            return density * math.pi / 12.0 * size["diameter"] ** 3 * distance**2
        if air.shape == "cylinder":  # the displaced mass of each slice: Lamb, art. 68, from memory
            slice_mass = density * math.pi * (0.5 * size["diameter"]) ** 2
            ends = [distance - 0.5 * size["length"], distance + 0.5 * size["length"]]
            return slice_mass * (ends[1] ** 3 - ends[0] ** 3) / 3.0
        return density * plate_integral(size["width"], size["height"], distance)
    except KeyError as missing:
        raise BadRig(
            f"air.{missing.args[0]} is missing.", f"Needed: the dimensions of a {air.shape}."
        ) from missing


@lru_cache(maxsize=32)
def plate_integral(width: float, height: float, distance: float) -> float:
    """Added moment over density, m⁵, of a thin plate that turns about an axis along its height.

    The plate's points move face on with the speed x, their distance from the axis. Vortex rings of strength μ keep
    the air from passing through it (Katz and Plotkin, Low-Speed Aerodynamics, vortex ring elements, from memory);
    the kinetic energy is ½ ρ ∫ μ x dS.

    Parameters
    ----------
    width, height : float
        Side across the swing axis and along it, m.
    distance : float
        From the axis to the plate's middle, m.
    """
    # The edge vortex lies a quarter of a panel inside the plate's edge: the vortex lattice's known best place.
    x, y = _edges(width), _edges(height)
    xm, ym = 0.5 * (x[1:] + x[:-1]), 0.5 * (y[1:] + y[:-1])
    cx, cy = (m.ravel() for m in np.meshgrid(xm, ym, indexing="ij"))
    x0, y0 = (m.ravel() for m in np.meshgrid(x[:-1], y[:-1], indexing="ij"))
    x1, y1 = (m.ravel() for m in np.meshgrid(x[1:], y[1:], indexing="ij"))
    flow = _ring_flow(cx[:, None] - x0, cx[:, None] - x1, cy[:, None] - y0, cy[:, None] - y1)
    speed = cx + distance
    strength = np.linalg.solve(flow, speed)
    return abs(float(np.sum(strength * speed * (x1 - x0) * (y1 - y0))))


def _edges(side: float) -> Floats:
    step = side / (PANELS + 0.5)
    return np.asarray((np.arange(PANELS + 1) - 0.5 * PANELS) * step, dtype=np.float64)


def _ring_flow(left: Floats, right: Floats, low: Floats, high: Floats) -> Floats:
    """Normal speed in the plane of a rectangular vortex ring of unit strength, by Biot and Savart.

    Arguments are the point's coordinates relative to the ring's four sides. The sum over corners of
    √(x² + y²)/(x y), signed, over 4π.
    """

    def corner(x: Floats, y: Floats) -> Floats:
        return np.asarray(np.sqrt(x * x + y * y) / (x * y), dtype=np.float64)

    total = corner(left, low) - corner(right, low) - corner(left, high) + corner(right, high)
    return np.asarray(total / (4.0 * math.pi), dtype=np.float64)
