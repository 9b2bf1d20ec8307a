"""Gravity from what is known of the place."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..records import Quantity, Rig

# Real gravity differs from normal gravity by 5e-4 m/s² as a rule and by 3e-3 at most (from memory): as a
# standard uncertainty that leaves the largest anomalies within three.
ANOMALY_U = 1.0e-3
FREE_AIR = 3.086e-6  # 1/s²: how fast gravity falls with height
# Without any place: the least and the greatest gravity on Earth (Hirt et al., Geophys. Res. Lett. 40 (2013) 4279:
# 9.7639 m/s² on Huascarán, 9.8337 m/s² on the Arctic Ocean; from memory), as limits.
LOWEST, HIGHEST = 9.764, 9.834
TERMS = 9  # of the series in (E/u)² = 0.0067
ALTITUDE_LIMIT_M = 2000.0  # most benches stand lower than this where no altitude is given: our judgment


@dataclass(frozen=True)
class Ellipsoid:
    """A level ellipsoid: half axis a (m), flattening f, GM (m³/s²), spin ω (rad/s)."""

    a: float
    f: float
    gm: float
    spin: float


# NIMA TR8350.2, 3rd edition, tables 3.1 and 3.3; Moritz, J. Geodesy 74 (2000) 128.
WGS84 = Ellipsoid(6_378_137.0, 1.0 / 298.257223563, 3.986004418e14, 7.292115e-5)
GRS80 = Ellipsoid(6_378_137.0, 1.0 / 298.257222101, 3.986005e14, 7.292115e-5)


def normal_gravity(latitude_rad: Any, altitude_m: Any = 0.0, *, ellipsoid: Ellipsoid = WGS84) -> Any:
    """Normal gravity at a geodetic latitude and a height above the ellipsoid, m/s².

    The closed form in ellipsoidal coordinates u, β of the point (Heiskanen and Moritz, Physical Geodesy, 1967, section
    2-7 and 6-2; NIMA TR8350.2, section 4): with E the linear eccentricity, w = √((u² + E² sin²β)/(u² + E²)),
    −w γ_u = GM/(u²+E²) + ω²a²E/(u²+E²) · q′/q₀ · (½ sin²β − 1/6) − ω²u cos²β,
    w γ_β = (ω²a² q/(q₀ √(u²+E²)) − ω² √(u²+E²)) sin β cos β, γ = √(γ_u² + γ_β²).
    At height 0 this is Somigliana's formula.

    Parameters
    ----------
    latitude_rad : float or array
    altitude_m : float or array
        Height above the ellipsoid; height above the sea serves (the two differ by less than 110 m).
    ellipsoid : Ellipsoid

    Examples
    --------
    >>> float(round(normal_gravity(math.radians(45.0)), 8))
    9.80619777
    """
    b = ellipsoid.a * (1.0 - ellipsoid.f)
    e2 = ellipsoid.a**2 - b * b
    turned = (ellipsoid.spin * ellipsoid.a) ** 2 / _q(b, e2)
    sine, cosine = np.sin(latitude_rad), np.cos(latitude_rad)
    normal = ellipsoid.a**2 / np.hypot(ellipsoid.a * cosine, b * sine)
    r, z = (normal + altitude_m) * cosine, ((b / ellipsoid.a) ** 2 * normal + altitude_m) * sine
    d = r * r + z * z - e2
    u2 = 0.5 * (d + np.sqrt(d * d + 4.0 * e2 * z * z))
    u, far2 = np.sqrt(u2), u2 + e2
    beta = np.arctan2(z * np.sqrt(far2), u * r)
    sine, cosine = np.sin(beta), np.cos(beta)
    down = ellipsoid.gm / far2 + turned * math.sqrt(e2) / far2 * _q_slope(u, e2) * (0.5 * sine**2 - 1.0 / 6.0)
    down = down - ellipsoid.spin**2 * u * cosine**2
    along = (turned * _q(u, e2) / np.sqrt(far2) - ellipsoid.spin**2 * np.sqrt(far2)) * sine * cosine
    return np.hypot(down, along) / np.sqrt((u2 + e2 * sine**2) / far2)


def gravity_1980(latitude_rad: Any) -> Any:
    """International Gravity Formula 1980, short form, m/s² at sea level: 9.780327 (1 + 0.0053024 s² − 0.0000058 s₂²).

    With s = sin φ and s₂ = sin 2φ; within 1e-6 m/s² of the closed form of GRS 80 (Moritz, J. Geodesy 74 (2000) 128).
    """
    return 9.780327 * (
        1.0 + 0.0053024 * np.sin(latitude_rad) ** 2 - 0.0000058 * np.sin(2.0 * latitude_rad) ** 2
    )


def gravity_of(rig: Rig) -> Quantity:
    """Local gravity with its uncertainty: as given, from latitude and altitude, or Earth's whole range."""
    if rig.gravity is not None:
        return rig.gravity
    if rig.latitude is None:
        half = 0.5 * (HIGHEST - LOWEST)
        return Quantity(
            0.5 * (LOWEST + HIGHEST), half / math.sqrt(3.0), "m/s^2", shape="rectangular", stated=False
        )
    latitude = rig.latitude
    height = rig.altitude.value if rig.altitude is not None else 0.0
    # An altitude that was left out: 3.1e-6 · 2000 m = 6 mm/s² as a limit.
    height_u = rig.altitude.u if rig.altitude is not None else ALTITUDE_LIMIT_M / math.sqrt(3.0)
    step = 1e-4
    north, south = (normal_gravity(latitude.value + way * step, height) for way in (1.0, -1.0))
    slope = float(north - south) / (2.0 * step)
    u = math.hypot(ANOMALY_U, slope * latitude.u, FREE_AIR * height_u)
    return Quantity(float(normal_gravity(latitude.value, height)), u, "m/s^2")


def _q(u: Any, e2: float) -> Any:
    """q = ½ [(1 + 3 u²/E²) arctan(E/u) − 3 u/E], as the series of its bracket in t = E/u.

    The closed form loses six digits to cancellation: t is 0.08.
    """
    t2 = e2 / (u * u)
    return sum(
        (-1) ** (k + 1) * 2 * k * t2**k / ((2 * k + 1) * (2 * k + 3)) for k in range(1, TERMS)
    ) * np.sqrt(t2)


def _q_slope(u: Any, e2: float) -> Any:
    """q′ = 3 (1 + u²/E²) [1 − (u/E) arctan(E/u)] − 1, likewise."""
    t2 = e2 / (u * u)
    return sum((-1) ** (k + 1) * 6 * t2**k / ((2 * k + 1) * (2 * k + 3)) for k in range(1, TERMS))
