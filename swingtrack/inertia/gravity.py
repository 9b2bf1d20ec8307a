"""Gravity from what is known of the place."""

from __future__ import annotations

import math
from typing import Any

from ..records import Quantity, Rig

# WGS 84 normal gravity: NIMA TR8350.2, 3rd edition, section 4 (Somigliana's closed form).
EQUATOR = 9.7803253359
SOMIGLIANA_K = 0.00193185265241
ECCENTRICITY_2 = 0.00669437999014
SEMI_MAJOR_M = 6_378_137.0
FLATTENING = 1.0 / 298.257223563
GRAVITY_RATIO = 0.00344978650684

# Real gravity differs from normal gravity by 5e-4 m/s² as a rule and by 3e-3 at most (from memory): as a
# standard uncertainty that leaves the largest anomalies within three.
ANOMALY_U = 1.0e-3
# Without any place: from the equator high up to the pole at sea level, as limits.
LOWEST, HIGHEST = 9.764, 9.834


def normal_gravity(latitude_rad: Any, altitude_m: Any = 0.0) -> Any:
    """Normal gravity g(φ, h), m/s².

    g = g_e (1 + k sin²φ)/√(1 − e² sin²φ) · [1 − 2 (1 + f + m − 2 f sin²φ) h/a + 3 h²/a²]

    Parameters
    ----------
    latitude_rad : float or array
    altitude_m : float or array
        Height above the ellipsoid; height above the sea serves (the two differ by less than 110 m).

    Notes
    -----
    NIMA TR8350.2 (3rd ed.), equations 4-1 and 4-3; good to 1e-8 m/s² below 10 km.

    Examples
    --------
    >>> round(normal_gravity(math.radians(45.0)), 8)
    9.80619777
    """
    s2 = math.sin(latitude_rad) ** 2
    surface = EQUATOR * (1.0 + SOMIGLIANA_K * s2) / math.sqrt(1.0 - ECCENTRICITY_2 * s2)
    x = altitude_m / SEMI_MAJOR_M
    return surface * (
        1.0 - 2.0 * (1.0 + FLATTENING + GRAVITY_RATIO - 2.0 * FLATTENING * s2) * x + 3.0 * x * x
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
    height = rig.altitude.value if rig.altitude is not None else 0.0
    # An altitude that was left out is somewhere below 2000 m for most benches: 3.1e-6 · 2000 = 6 mm/s² as a limit.
    height_u = rig.altitude.u if rig.altitude is not None else 2000.0 / math.sqrt(3.0)
    latitude = rig.latitude
    step = 1e-4
    slope = (
        normal_gravity(latitude.value + step, height) - normal_gravity(latitude.value - step, height)
    ) / (2.0 * step)
    u = math.sqrt(ANOMALY_U**2 + (slope * latitude.u) ** 2 + (3.086e-6 * height_u) ** 2)
    return Quantity(normal_gravity(latitude.value, height), u, "m/s^2")
