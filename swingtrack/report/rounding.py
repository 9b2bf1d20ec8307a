"""The one rounding rule: the uncertainty to two significant digits, the value to the same place.

GUM (JCGM 100:2008), 7.2.6: uncertainties to at most two significant digits, the value rounded to agree with it.
Halves go to the even digit. Every number that report/ shows passes through here.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from decimal import ROUND_HALF_EVEN, Decimal
from typing import Any

from ..records import Quantity

FEW_DIGITS = (
    6  # of a measured number that came without uncertainty: enough to be recognised, never the doubt itself
)
SHARE_FLOOR = 0.0005  # shares of a variance below it are shown as "< 0.1 %"
# Written out from a thousandth up to a hundred thousand; beyond that with a power of ten. Common practice, no source.
PLAIN_FROM_EXPONENT, PLAIN_TO_EXPONENT = -3, 5
GROUP = "\N{NARROW NO-BREAK SPACE}"
UNKNOWN = "not known"


def rounded(value: float, u: float) -> tuple[str, str]:
    """Value and uncertainty as plain decimals by the rule.

    Parameters
    ----------
    value, u : float
        In the same unit. Where `u` is zero or not finite nothing says how many digits are meant: the value then
        keeps six significant digits and the uncertainty is "0".

    Examples
    --------
    >>> rounded(2.2427197, 8.168e-05)
    ('2.242720', '0.000082')
    >>> rounded(1234.5, 37.2)
    ('1234', '37')
    >>> rounded(0.5, 0.0996)
    ('0.50', '0.10')
    """
    if not (math.isfinite(u) and u > 0.0 and math.isfinite(value)):
        return f"{value:.{FEW_DIGITS}g}", "0"
    place = _place(u)
    return _at(value, place), _at(u, place)


def show(quantity: Quantity | None, unit: str = "", *, scale: float = 1.0, k: float = 1.0) -> str:
    """ "1.12840 ± 0.00012 s": value ± k·u.

    Parameters
    ----------
    quantity : Quantity or None
        None is what can't be known.
    unit : str
        To show; the quantity's own where it is "".
    scale : float
        What one of the quantity's own unit is in `unit`.
    k : float
        Coverage factor; 1 shows the standard uncertainty.

    Examples
    --------
    >>> show(Quantity(1.128403, 0.0001234, "s"))
    '1.12840 ± 0.00012 s'
    >>> show(Quantity(0.0031984, 1.2e-5, "kg m^2"), "g cm²", scale=1e7, k=2.0)
    '31980 ± 240 g cm²'
    >>> show(Quantity(3.1984e-4, 1.2e-6, "kg m^2"))
    '(3.198 ± 0.012)·10⁻⁴ kg m²'
    """
    if quantity is None or not math.isfinite(quantity.value):
        return UNKNOWN
    return _written(quantity.value * scale, abs(scale) * quantity.u * k, pretty(unit or quantity.unit))


def show_entry(entry: Mapping[str, Any] | None, unit: str = "", *, scale: float = 1.0, k: float = 1.0) -> str:
    """`show` of a quantity as result.json holds it: {"value", "u", "unit"}, or null."""
    if entry is None or entry.get("value") is None:
        return UNKNOWN
    u = entry.get("u")
    bare = math.nan if u is None else float(u)
    return show(Quantity(float(entry["value"]), bare, str(entry["unit"])), unit, scale=scale, k=k)


def bare(value: float | None, digits: int = 3, unit: str = "", *, floor: float = 0.0) -> str:
    """A number that has no uncertainty of its own, to so many significant digits, trailing zeros kept.

    Sizes below `floor` are shown as "< floor": dust of the arithmetic is no finding.

    Examples
    --------
    >>> bare(0.4, unit="Hz"), bare(1234567.0, 4), bare(2.5e-7, 2), bare(7e-13, 2, "ms", floor=1e-3)
    ('0.400 Hz', '1234567', '2.5·10⁻⁷', '< 0.001 ms')
    """
    if value is None or not math.isfinite(value):
        return UNKNOWN
    if abs(value) < floor:
        return f"< {bare(floor, 1, unit)}"
    if value == 0.0:
        return _with_unit("0", pretty(unit))
    exponent = _first_place(abs(value), digits)
    if exponent >= PLAIN_FROM_EXPONENT:
        return _with_unit(_signed(_at(value, min(exponent - digits + 1, 0))), pretty(unit))
    # Scaled as a decimal: dividing by a power of ten first would turn 0.0001 into 9.99….
    text = f"{Decimal(value).scaleb(-exponent).quantize(Decimal(1).scaleb(1 - digits), ROUND_HALF_EVEN):f}"
    return _with_unit(f"{_signed(text)}·10{_raised(exponent)}", pretty(unit))


def count(number: int) -> str:
    """A whole number, in groups of three from five digits on (SI Brochure, 5.4.4).

    Examples
    --------
    >>> count(900), count(200000)
    ('900', '200\u202f000')
    """
    return f"{number:,}".replace(",", GROUP) if abs(number) >= 10_000 else str(number)


def percent(part: float | None, *, decimals: int = 1) -> str:
    """A part of one as percent.

    Examples
    --------
    >>> percent(0.79918), percent(8e-5), percent(0.5, decimals=0)
    ('79.9 %', '< 0.1 %', '50 %')
    """
    if part is None or not math.isfinite(part):
        return UNKNOWN
    if 0.0 < part < SHARE_FLOOR:
        return "< 0.1 %"
    return f"{_at(100.0 * part, -decimals)} %"


def change(relative: float, u: float = 0.0) -> str:
    """A relative change as signed percent, to two digits of its uncertainty, or of itself without one.

    Examples
    --------
    >>> change(-0.00183172), change(-0.00015, 1.5e-5), change(0.0)
    ('−0.18 %', '(−0.0150 ± 0.0015) %', '0 %')
    """
    if relative == 0.0 and u == 0.0:
        return "0 %"
    if u > 0.0:
        value, doubt = rounded(100.0 * relative, 100.0 * u)
        return f"({_signed(value)} ± {doubt}) %"
    return f"{_signed(_at(100.0 * relative, _place(abs(100.0 * relative))))} %"


def deviation(relative: float) -> str:
    """How far one run lies off, in percent with its sign, to ten parts in a million: comparable down a column.

    Examples
    --------
    >>> deviation(9.8e-5), deviation(-0.0124)
    ('+0.010 %', '−1.240 %')
    """
    text = _at(100.0 * relative, -3)
    if float(text) == 0.0:
        return "0.000 %"
    return f"{_signed(text) if relative < 0.0 else '+' + text} %"


def pretty(unit: str) -> str:
    """A unit as people write it: "kg m^2" → "kg m²", "1" → "".

    Examples
    --------
    >>> pretty("kg m^2"), pretty("1"), pretty("1/s"), pretty("deg")
    ('kg m²', '', '1/s', '°')
    """
    if unit in ("1", ""):
        return ""
    if unit == "deg":
        return "°"
    return unit.replace("^2", "²").replace("^3", "³")


def _written(value: float, u: float, unit: str) -> str:
    known = math.isfinite(u) and u > 0.0
    power = _power(max(abs(value), u if known else 0.0))
    text, doubt = rounded(value / 10.0**power, u / 10.0**power)
    both = f"{_signed(text)} ± {doubt}" if known else _signed(text)
    if power:
        return _with_unit(f"({both})·10{_raised(power)}" if known else f"{both}·10{_raised(power)}", unit)
    if unit in ("°", "%") and known:
        return f"({both}){'' if unit == '°' else ' '}{unit}"
    return _with_unit(both, unit)


def _with_unit(text: str, unit: str) -> str:
    return f"{text}{unit}" if unit == "°" else f"{text} {unit}".rstrip()


def _place(u: float) -> int:
    """Power of ten of the last digit that is shown of an uncertainty."""
    return _first_place(u, 2) - 1


def _first_place(size: float, digits: int) -> int:
    """Power of ten of the first digit of a number rounded to so many: that of 0.0996 to two is −1, since it rounds to 0.10."""
    exact = Decimal(size)
    exponent = exact.adjusted()
    return exact.quantize(Decimal(1).scaleb(exponent - digits + 1), ROUND_HALF_EVEN).adjusted()


def _at(value: float, place: int) -> str:
    return f"{Decimal(value).quantize(Decimal(1).scaleb(place), ROUND_HALF_EVEN):f}"


def _signed(text: str) -> str:
    return text.replace("-", "−")


def _power(size: float) -> int:
    """Power of ten to take out: none from a thousandth to a hundred thousand."""
    if size == 0.0 or not math.isfinite(size):
        return 0
    exponent = Decimal(size).adjusted()
    return 0 if PLAIN_FROM_EXPONENT <= exponent < PLAIN_TO_EXPONENT else exponent


def _raised(power: int) -> str:
    return str(power).translate(str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹"))
