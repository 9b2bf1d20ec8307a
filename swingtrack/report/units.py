"""In which unit a number is shown: the sizes that people at a bench read at sight."""

from __future__ import annotations

import math

SMALL_MOMENT = 0.01  # kg m²: below it g cm² is the handier second unit, above it kg cm²
SMALL_MASS = 0.1  # kg


def shown_in(unit: str, value: float) -> tuple[str, float]:
    """Unit to show and its factor: lengths in mm, angles in degrees, small masses in g, all else as it is.

    Examples
    --------
    >>> shown_in("m", 0.5), shown_in("s", 3.1), shown_in("kg", 0.02)
    (('mm', 1000.0), ('s', 1.0), ('g', 1000.0))
    """
    if unit == "m":
        return "mm", 1e3
    if unit == "rad":
        return "°", 180.0 / math.pi
    if unit == "deg":
        return "°", 1.0
    if unit == "kg" and abs(value) < SMALL_MASS:
        return "g", 1e3
    if unit == "kg m^2":
        return "kg m²", 1.0
    return unit, 1.0


def second_moment_unit(value: float) -> tuple[str, float]:
    """The unit that stands beside kg m², with its factor.

    Examples
    --------
    >>> second_moment_unit(3.2e-3), second_moment_unit(0.11)
    (('g cm²', 10000000.0), ('kg cm²', 10000.0))
    """
    return ("g cm²", 1e7) if abs(value) < SMALL_MOMENT else ("kg cm²", 1e4)
