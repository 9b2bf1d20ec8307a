"""The one rounding rule: the uncertainty to two significant digits, the value to the same place.

GUM (JCGM 100:2008), 7.2.6: uncertainties to at most two significant digits, the value rounded to agree. Halves go
to the even digit.
"""

from __future__ import annotations

import math
from decimal import ROUND_HALF_EVEN, Decimal

from ..records import Quantity

FEW_DIGITS = 6  # of a number that has no uncertainty to say how many are meant


def rounded(value: float, u: float) -> tuple[str, str]:
    """Value and uncertainty as plain decimals by the rule.

    Examples
    --------
    >>> rounded(2.2427197, 8.168e-05)
    ('2.242720', '0.000082')
    >>> rounded(1234.5, 37.2)
    ('1234', '37')
    """
    if not (math.isfinite(u) and u > 0.0):
        return f"{value:.{FEW_DIGITS}g}", "0"
    place = _place(u)
    return _at(value, place), _at(u, place)


def _place(u: float) -> int:
    """Power of ten of the last digit that is shown."""
    exponent = Decimal(u).adjusted()
    # 0.0996 rounds to 0.10: the digit kept moves with it
    if Decimal(u).quantize(Decimal(1).scaleb(exponent - 1), ROUND_HALF_EVEN).adjusted() > exponent:
        exponent += 1
    return exponent - 1


def _at(value: float, place: int) -> str:
    number = Decimal(value).quantize(Decimal(1).scaleb(min(place, 0)), ROUND_HALF_EVEN)
    if place > 0:
        number = Decimal(value).quantize(Decimal(1).scaleb(place), ROUND_HALF_EVEN)
    return f"{number:f}"


def show(quantity: Quantity | None, unit: str = "", *, scale: float = 1.0, k: float = 1.0) -> str:
    """ "1.12840 ± 0.00012 s": value ± k·u in `unit`, of which one is `scale` of the quantity's own."""
    if quantity is None:
        return "not known"
    unit = unit or quantity.unit
    value, u = quantity.value * scale, quantity.u * scale * k
    power = _power(max(abs(value), u))
    if power:
        text, doubt = rounded(value / 10.0**power, u / 10.0**power)
        return f"({text} ± {doubt})·10{_raised(power)} {unit}".rstrip()
    text, doubt = rounded(value, u)
    return f"{text} ± {doubt} {unit}".rstrip() if u > 0.0 else f"{text} {unit}".rstrip()


def _power(size: float) -> int:
    """Power of ten to take out: none between 0.001 and a hundred thousand."""
    if size == 0.0 or not math.isfinite(size) or 1e-3 <= size < 1e5:
        return 0
    return math.floor(math.log10(size))


def _raised(power: int) -> str:
    return str(power).translate(str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹"))
