"""Units of moment of inertia that the trade uses, exact by definition (docs/theory.md, Units)."""

from __future__ import annotations

POUND_KG = 0.45359237
INCH_M = 0.0254
FOOT_M = 0.3048
STANDARD_GRAVITY = 9.80665
POUND_FORCE_N = 4.4482216152605  # 0.45359237 · 9.80665
SLUG_KG = POUND_FORCE_N / FOOT_M  # 1 lbf s²/ft

# kg m² in one of each
MOMENT_UNITS: dict[str, float] = {
    "kg m^2": 1.0,
    "kg cm^2": 1e-4,
    "g cm^2": 1e-7,
    "lb in^2": POUND_KG * INCH_M**2,
    "lb ft^2": POUND_KG * FOOT_M**2,
    "slug ft^2": SLUG_KG * FOOT_M**2,
    "oz in^2": POUND_KG / 16.0 * INCH_M**2,
    "lbf in s^2": POUND_FORCE_N * INCH_M,
    "ozf in s^2": POUND_FORCE_N / 16.0 * INCH_M,
    "kgf cm s^2": STANDARD_GRAVITY * 1e-2,
    "gf cm s^2": STANDARD_GRAVITY * 1e-5,
}


def in_trade_units(moment_kg_m2: float) -> dict[str, float]:
    """The same moment of inertia in every unit of `MOMENT_UNITS`.

    Examples
    --------
    >>> round(in_trade_units(0.0213)["lb in^2"], 3)
    72.786
    """
    return {unit: moment_kg_m2 / size for unit, size in MOMENT_UNITS.items()}
