"""Units of the trade, exact by definition (NIST SP 811, appendix B)."""

from __future__ import annotations

from decimal import Decimal

import pytest

from swingtrack.inertia.units import (
    FOOT_M,
    INCH_M,
    MOMENT_UNITS,
    POUND_FORCE_N,
    POUND_KG,
    SLUG_KG,
    STANDARD_GRAVITY,
    in_trade_units,
)
from swingtrack.quantity import parse_quantity

POUND, INCH, FOOT, STANDARD = Decimal("0.45359237"), Decimal("0.0254"), Decimal("0.3048"), Decimal("9.80665")

# kg m² in one of each: decimal arithmetic from the exact definitions, four to five digits also in a stored
# conversion table of moments of inertia
PRINTED = {
    "g cm^2": 1e-7,
    "kg cm^2": 1e-4,
    "lb in^2": 2.926396534292e-4,
    "lb ft^2": 4.21401100938048e-2,
    "oz in^2": 1.828997833932500e-5,
    "slug ft^2": 1.3558179483314004,
    "lbf in s^2": 0.1129848290276167,
    "ozf in s^2": 7.06155181422604375e-3,
    "kgf cm s^2": 0.0980665,
    "gf cm s^2": 9.80665e-5,
}


@pytest.mark.parametrize(("unit", "printed"), PRINTED.items())
def test_moment_units(unit: str, printed: float) -> None:
    assert MOMENT_UNITS[unit] == pytest.approx(printed, rel=1e-13)


def test_moment_units_from_the_definitions() -> None:
    exact = {
        "lb in^2": POUND * INCH**2,
        "lb ft^2": POUND * FOOT**2,
        "oz in^2": POUND / 16 * INCH**2,
        "slug ft^2": POUND * STANDARD * FOOT,
        "lbf in s^2": POUND * STANDARD * INCH,
    }
    for unit, size in exact.items():
        assert MOMENT_UNITS[unit] == pytest.approx(float(size), rel=1e-15)


def test_base_units() -> None:
    assert (POUND_KG, INCH_M, FOOT_M, STANDARD_GRAVITY) == (0.45359237, 0.0254, 0.3048, 9.80665)
    assert POUND_FORCE_N == 4.4482216152605
    assert pytest.approx(14.59390293720636, rel=1e-15) == SLUG_KG
    assert POUND_KG / 16 == 0.028349523125
    assert pytest.approx(32.17404855643, rel=1e-12) == STANDARD_GRAVITY / FOOT_M
    assert pytest.approx(386.08858267716, rel=1e-13) == STANDARD_GRAVITY / INCH_M


@pytest.mark.parametrize(
    "unit", ["kg m^2", "g cm^2", "kg cm^2", "lb in^2", "lb ft^2", "slug ft^2", "oz in^2"]
)
def test_out_and_in_again(unit: str) -> None:
    # the reader of the rig file goes by pint's own definitions
    shown = in_trade_units(0.0213)[unit]
    assert parse_quantity(f"{shown!r} {unit}", "moment").value == pytest.approx(0.0213, rel=1e-13)
