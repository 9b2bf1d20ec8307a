"""Simple solids: volume, centre of mass and moments of inertia about it, each from the dimensions that a user measures.

Local frame: z is the axis of symmetry; the reference point, which `at` places, is the middle of the solid, or the middle
of its base where it tapers (cone, frustum, hemisphere, pyramid; the base at the bottom). The formulas are those of the
tables of mechanics, gathered in docs/theory.md under Solids.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

Dimensions = Mapping[str, Any]


@dataclass(frozen=True)
class Body:
    """What a solid amounts to, per unit of mass.

    Parameters
    ----------
    volume : number or None
        m³; None for what has no thickness.
    height : number
        Of the centre of mass above the reference point, along z, m.
    xx, yy, zz : number
        Squared radii of gyration about the axes through the centre of mass, m².
    """

    volume: Any
    height: Any
    xx: Any
    yy: Any
    zz: Any


@dataclass(frozen=True)
class Shape:
    """One kind of solid: the keys of its dimensions, what it amounts to, and what can't be."""

    keys: tuple[str, ...]
    body: Callable[[Dimensions], Body]
    thin: bool = False
    smaller: tuple[tuple[str, str], ...] = ()  # pairs of keys of which the first must be below the second


def block(d: Dimensions) -> Body:
    """Rectangular block, length along x, width along y, height along z: I_xx = m (b² + c²)/12."""
    a, b, c = d["length"] ** 2, d["width"] ** 2, d["height"] ** 2
    volume = d["length"] * d["width"] * d["height"]
    return Body(volume, 0.0, (b + c) / 12.0, (a + c) / 12.0, (a + b) / 12.0)


def cylinder(d: Dimensions) -> Body:
    """Solid cylinder: I_zz = m R²/2, I_xx = m (3 R² + h²)/12."""
    return _tube(0.5 * d["diameter"], 0.0, d["height"])


def tube(d: Dimensions) -> Body:
    """Hollow cylinder: I_zz = m (R² + r²)/2, I_xx = m (3 (R² + r²) + h²)/12."""
    return _tube(0.5 * d["outer_diameter"], 0.5 * d["inner_diameter"], d["height"])


def sphere(d: Dimensions) -> Body:
    """Solid sphere: 2 m R²/5."""
    radius = 0.5 * d["diameter"]
    return _alike(4.0 / 3.0 * math.pi * radius**3, 0.4 * radius**2)


def shell(d: Dimensions) -> Body:
    """Thick spherical shell: (2/5) m (R⁵ − r⁵)/(R³ − r³)."""
    outer, inner = 0.5 * d["outer_diameter"], 0.5 * d["inner_diameter"]
    cubes = outer**3 - inner**3
    return _alike(4.0 / 3.0 * math.pi * cubes, 0.4 * (outer**5 - inner**5) / cubes)


def thin_shell(d: Dimensions) -> Body:
    """Thin spherical shell: 2 m R²/3."""
    return _alike(None, 2.0 / 3.0 * (0.5 * d["diameter"]) ** 2)


def rod(d: Dimensions) -> Body:
    """Thin rod along z: m L²/12."""
    across = d["length"] ** 2 / 12.0
    return Body(None, 0.0, across, across, 0.0)


def cone(d: Dimensions) -> Body:
    """Solid cone, centre of mass h/4 above the base: I_zz = 3 m R²/10, I_xx = 3 m R²/20 + 3 m h²/80."""
    r2, h = (0.5 * d["diameter"]) ** 2, d["height"]
    across = 0.15 * r2 + 3.0 / 80.0 * h**2
    return Body(math.pi / 3.0 * r2 * h, 0.25 * h, across, across, 0.3 * r2)


def frustum(d: Dimensions) -> Body:
    """Frustum of a cone, R₁ below and R₂ above: I_zz = (3/10) m (R₁⁵ − R₂⁵)/(R₁³ − R₂³).

    Quotients of differences are written as sums, which hold for R₁ = R₂ too. Across the axis, by integration over discs:
    I_xx = I_zz/2 + m h² (s₂/s₀ − (s₁/s₀)²) with s_k = ∫₀¹ t^k (R₁ + (R₂ − R₁) t)² dt.
    """
    a, b, h = 0.5 * d["lower_diameter"], 0.5 * d["upper_diameter"], d["height"]
    s0 = (a * a + a * b + b * b) / 3.0
    s1 = (a * a + 2.0 * a * b + 3.0 * b * b) / 12.0
    s2 = (a * a + 3.0 * a * b + 6.0 * b * b) / 30.0
    fifth = a**4 + a**3 * b + a * a * b * b + a * b**3 + b**4
    along = 0.1 * fifth / s0
    centre = s1 / s0
    across = 0.5 * along + h**2 * (s2 / s0 - centre**2)
    return Body(math.pi * h * s0, h * centre, across, across, along)


def plate(d: Dimensions) -> Body:
    """Thin rectangular plate, length along x, width along y: m b²/12, m a²/12, m (a² + b²)/12."""
    a, b = d["length"] ** 2 / 12.0, d["width"] ** 2 / 12.0
    return Body(None, 0.0, b, a, a + b)


def disc(d: Dimensions) -> Body:
    """Thin disc: m R²/4, m R²/2."""
    across = 0.25 * (0.5 * d["diameter"]) ** 2
    return Body(None, 0.0, across, across, 2.0 * across)


def ellipsoid(d: Dimensions) -> Body:
    """Solid ellipsoid of semi-axes a, b, c: I_xx = m (b² + c²)/5."""
    a, b, c = (0.5 * d[f"diameter_{axis}"] for axis in "xyz")
    volume = 4.0 / 3.0 * math.pi * a * b * c
    return Body(volume, 0.0, (b * b + c * c) / 5.0, (a * a + c * c) / 5.0, (a * a + b * b) / 5.0)


def torus(d: Dimensions) -> Body:
    """Torus of ring radius R (to the middle of the tube) and tube radius r: z m (R² + 3r²/4), x m (R²/2 + 5r²/8)."""
    ring2, tube2 = (0.5 * d["ring_diameter"]) ** 2, (0.5 * d["tube_diameter"]) ** 2
    across = 0.5 * ring2 + 0.625 * tube2
    volume = math.pi**2 * d["ring_diameter"] * tube2
    return Body(volume, 0.0, across, across, ring2 + 0.75 * tube2)


def elliptic_cylinder(d: Dimensions) -> Body:
    """Elliptic cylinder of semi-axes a, b: z m (a² + b²)/4, x m (b²/4 + h²/12)."""
    a2, b2, h2 = (0.5 * d["diameter_x"]) ** 2, (0.5 * d["diameter_y"]) ** 2, d["height"] ** 2
    volume = math.pi * 0.25 * d["diameter_x"] * d["diameter_y"] * d["height"]
    return Body(volume, 0.0, 0.25 * b2 + h2 / 12.0, 0.25 * a2 + h2 / 12.0, 0.25 * (a2 + b2))


def hemisphere(d: Dimensions) -> Body:
    """Solid hemisphere, flat side down, centre of mass 3R/8 above it: z 2 m R²/5, x 83 m R²/320."""
    radius = 0.5 * d["diameter"]
    across = 83.0 / 320.0 * radius**2
    return Body(2.0 / 3.0 * math.pi * radius**3, 0.375 * radius, across, across, 0.4 * radius**2)


def pyramid(d: Dimensions) -> Body:
    """Rectangular pyramid, base A × B, centre of mass h/4 above it: z m (A² + B²)/20, x m (B²/20 + 3h²/80)."""
    a2, b2, h2 = d["length"] ** 2, d["width"] ** 2, d["height"] ** 2
    tall = 3.0 / 80.0 * h2
    volume = d["length"] * d["width"] * d["height"] / 3.0
    return Body(volume, 0.25 * d["height"], b2 / 20.0 + tall, a2 / 20.0 + tall, (a2 + b2) / 20.0)


def point(d: Dimensions) -> Body:
    """A mass without extent."""
    return Body(None, 0.0, 0.0, 0.0, 0.0)


SHAPES: dict[str, Shape] = {
    "block": Shape(("length", "width", "height"), block),
    "cylinder": Shape(("diameter", "height"), cylinder),
    "tube": Shape(
        ("outer_diameter", "inner_diameter", "height"), tube, smaller=(("inner_diameter", "outer_diameter"),)
    ),
    "sphere": Shape(("diameter",), sphere),
    "shell": Shape(
        ("outer_diameter", "inner_diameter"), shell, smaller=(("inner_diameter", "outer_diameter"),)
    ),
    "thin-shell": Shape(("diameter",), thin_shell, thin=True),
    "rod": Shape(("length",), rod, thin=True),
    "cone": Shape(("diameter", "height"), cone),
    "frustum": Shape(("lower_diameter", "upper_diameter", "height"), frustum),
    "plate": Shape(("length", "width"), plate, thin=True),
    "disc": Shape(("diameter",), disc, thin=True),
    "ellipsoid": Shape(("diameter_x", "diameter_y", "diameter_z"), ellipsoid),
    "torus": Shape(("ring_diameter", "tube_diameter"), torus, smaller=(("tube_diameter", "ring_diameter"),)),
    "elliptic-cylinder": Shape(("diameter_x", "diameter_y", "height"), elliptic_cylinder),
    "hemisphere": Shape(("diameter",), hemisphere),
    "pyramid": Shape(("length", "width", "height"), pyramid),
    "point": Shape((), point, thin=True),
}


def _tube(outer: Any, inner: Any, height: Any) -> Body:
    squares = outer**2 + inner**2
    across = 0.25 * squares + height**2 / 12.0
    return Body(math.pi * (outer**2 - inner**2) * height, 0.0, across, across, 0.5 * squares)


def _alike(volume: Any, squared_gyration: Any) -> Body:
    return Body(volume, 0.0, squared_gyration, squared_gyration, squared_gyration)
