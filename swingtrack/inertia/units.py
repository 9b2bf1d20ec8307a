"""Units of moment of inertia that the trade uses, exact by definition (docs/theory.md, Units)."""

from __future__ import annotations

POUND_KG = 0.45359237
INCH_M = 0.0254
FOOT_M = 0.3048
SLUG_KG = 14.593902937206365  # lbf s²/ft with lbf = 0.45359237 · 9.80665 N

# kg m² in one of each
MOMENT_UNITS: dict[str, float] = {
    "kg m^2": 1.0,
    "kg cm^2": 1e-4,
    "g cm^2": 1e-7,
    "lb in^2": POUND_KG * INCH_M**2,
    "lb ft^2": POUND_KG * FOOT_M**2,
    "slug ft^2": SLUG_KG * FOOT_M**2,
    "oz in^2": POUND_KG / 16.0 * INCH_M**2,
}
