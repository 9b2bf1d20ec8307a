"""A body on equal strings between two circles: the geometry that bifilar and n-string suspensions share."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

import numpy as np

from ..errors import BadRig
from ..records import Floats
from .suspension import Dynamics


def vertical_drop(length: float, a: float, b: float) -> float:
    """Vertical drop h0 = √(L² − (a − b)²) of a string between radii a and b; BadRig where it can't reach."""
    if abs(a - b) >= length:
        raise BadRig(
            f"Strings of {length:.4g} m can't reach between radii {a:.4g} m and {b:.4g} m.",
            "Needed: strings longer than the difference of the radii (half spacings).",
            "Check length and spacings, and their units.",
        )
    return math.sqrt(length**2 - (a - b) ** 2)


def drop_of(x: Mapping[str, Any], a: Any, b: Any) -> Any:
    """The drop as measured, or by the strings' length; plain numbers, arrays of draws and uncertain numbers alike."""
    if "drop" in x:
        return x["drop"]
    if isinstance(x["length"], float) and isinstance(a, float) and isinstance(b, float):
        return vertical_drop(x["length"], a, b)
    return (x["length"] ** 2 - (a - b) ** 2) ** 0.5


def two_circle_dynamics(
    drop: float, radii: tuple[float, float], gyration: float | None, *, twist: float = 0.0
) -> Dynamics:
    """Exact yaw of a body on equal inextensible strings from radius a above to radius b below.

    The height below the upper circle is h(q) = √(h0² − 2ab (1 − cos q)). With I ω0² = m g ab/h0 + κ and f the part of
    it that the strings' twist κ makes, v(q) = (1 − f)(h0 − h) h0/(ab) + f q²/2 and m(q) = 1 + (h′/k)²,
    h′ = −ab sin q / h (the bounce).

    Parameters
    ----------
    drop : float
        h0, m.
    radii : (float, float)
        a and b, m.
    gyration : float or None
        Radius of gyration k, m; None leaves the bounce out.
    twist : float
        f, 0 for thread.

    Notes
    -----
    Own derivation (docs/theory.md); checked against six-degree-of-freedom and quadrature tables in the tests.
    """
    ab = radii[0] * radii[1]

    def height_squared(q: Floats) -> Floats:
        return drop**2 - 4.0 * ab * np.sin(0.5 * q) ** 2

    def potential(q: Floats) -> Floats:
        # (h0 − h) written as (h0² − h²)/(h0 + h): no cancellation at small angles
        h = np.sqrt(height_squared(q))
        return (1.0 - twist) * 4.0 * np.sin(0.5 * q) ** 2 * drop / (drop + h) + 0.5 * twist * q**2

    def inertia(q: Floats) -> Floats:
        if gyration is None:
            return np.ones_like(q)
        return 1.0 + (ab * np.sin(q) / gyration) ** 2 / height_squared(q)

    reach = drop**2 / (4.0 * ab)
    limit = math.pi if reach >= 1.0 else 2.0 * math.asin(math.sqrt(reach))
    return Dynamics(potential, inertia, limit)
