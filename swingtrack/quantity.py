"""What a user types ("412 mm ± 0.5 mm") → an uncertain number in SI.

The form is `value unit`, or `value unit ± half-width unit`, with `+/-` for ±:

- a bare ± means limits: a rectangular distribution, u = a/√3 (GUM, JCGM 100:2008, 4.3.7);
- `… ± U unit k=2` is an expanded uncertainty, u = U/k; `k=1` makes it a standard uncertainty;
- `… ± 0.1 %` is relative to the value;
- with no ± at all, half a unit of the last written digit is taken as limits, and the result says so.
"""

from __future__ import annotations

import math
import re
from decimal import Decimal
from functools import cache
from typing import Any

from .errors import BadRig
from .records import Quantity

# What a name of a dimension means in SI, and a spelling to show the user as an example.
DIMENSIONS: dict[str, tuple[str, str]] = {
    "length": ("m", "412 mm ± 0.5 mm"),
    "mass": ("kg", "0.912 kg ± 0.5 g"),
    "time": ("s", "1.128 s ± 0.2 ms k=1"),
    "angle": ("rad", "51.5 deg"),
    "density": ("kg/m^3", "1.20 kg/m^3 ± 0.02 kg/m^3"),
    "moment": ("kg m^2", "0.0213 kg m^2 ± 0.0001 kg m^2"),
    "gravity": ("m/s^2", "9.8094 m/s^2 ± 0.0002 m/s^2"),
    "stiffness": ("N m/rad", "0.021 N m/rad ± 1 %"),
    "modulus": ("Pa", "79 GPa ± 2 GPa"),
    "force": ("N", "40 N"),
    "frequency": ("Hz", "240 Hz"),
    "number": ("1", "0.5 %"),
}

_NUMBER = r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d{1,3})?"
_UNIT = r"[^\d\s±+=,;#][^±=,;#]{0,40}?"
_FORM = re.compile(
    rf"\s*(?P<value>{_NUMBER})\s*(?P<unit>{_UNIT})?\s*"
    rf"(?:(?:±|\+/-|\+-)\s*(?P<half>{_NUMBER})\s*(?P<half_unit>{_UNIT})?\s*(?:\(?k\s*=\s*(?P<k>{_NUMBER})\)?)?)?\s*"
)
_TYPED_SIGNS = str.maketrans({"−": "-", "µ": "u", "μ": "u", "·": " ", "×": " ", "\u00a0": " ", "\u202f": " "})
# Past these a number cannot be a dimension of anything that hangs on strings; it keeps arithmetic finite.
_SMALLEST, _LARGEST = 1e-30, 1e30


def parse_quantity(text: str, dimension: str, *, key: str = "") -> Quantity:
    """Read one quantity that a user typed.

    Parameters
    ----------
    text : str
        Such as "412 mm ± 0.5 mm".
    dimension : str
        One of `DIMENSIONS`.
    key : str
        Where it stands, such as "suspension.length"; used in messages.

    Returns
    -------
    Quantity
        In SI, with `shape` "rectangular" for limits and "normal" where a k is given.

    Raises
    ------
    BadRig
        The text is not of the form, the unit is unknown or of another dimension.

    Examples
    --------
    >>> q = parse_quantity("412 mm ± 0.5 mm", "length")
    >>> q.value, round(q.u, 8), q.unit
    (0.412, 0.00028868, 'm')
    >>> parse_quantity("9.81 m/s^2", "gravity").stated
    False
    """
    si_unit, example = DIMENSIONS[dimension]
    where = f"{key} = " if key else ""
    needed = f'Needed: {dimension} as number and unit, such as "{example}".'
    if not isinstance(text, str):
        raise BadRig(
            f"{where}{text!r} is not a text in quotes.", needed, "Put number and unit in one pair of quotes."
        )
    shown = repr(text if len(text) <= 60 else text[:57] + "…")
    match = _FORM.fullmatch(text.translate(_TYPED_SIGNS)) if len(text) <= 200 else None
    if match is None:
        hint = (
            "Use a point for decimals, not a comma."
            if "," in text
            else "Write: value unit ± half-width unit."
        )
        raise BadRig(f"{where}{shown} can't be read as a quantity.", needed, hint)
    unit = (match["unit"] or "").strip()
    if not unit and dimension != "number":
        raise BadRig(f"{where}{shown} has no unit.", needed, "Write the unit behind the number.")
    scale = _scale_to_si(unit, dimension, where, shown, needed)
    value = float(
        Decimal(match["value"]) * Decimal(repr(scale))
    )  # decimal: 412 mm is 0.412 m to the last bit
    if match["half"] is None:
        half = float(_half_last_digit(match["value"])) * scale
        u, shape, stated = half / math.sqrt(3.0), "rectangular", False
    else:
        half_unit = (match["half_unit"] or "").strip() or unit
        if half_unit == "%" and unit != "%":
            half = abs(value) * float(match["half"]) / 100.0
        else:
            half = float(match["half"]) * _scale_to_si(half_unit, dimension, where, shown, needed)
        k = None if match["k"] is None else float(match["k"])
        if half < 0.0 or (k is not None and k <= 0.0):
            raise BadRig(
                f"{where}{shown} has a negative uncertainty or factor k.", needed, "Make it positive."
            )
        u, shape, stated = (
            (half / math.sqrt(3.0), "rectangular", True) if k is None else (half / k, "normal", True)
        )
    if not (math.isfinite(value) and math.isfinite(u)) or max(abs(value), u) > _LARGEST:
        raise BadRig(f"{where}{shown} is out of all bounds.", needed, "Check the number and its unit.")
    if 0.0 < abs(value) < _SMALLEST:
        raise BadRig(f"{where}{shown} is too small to be meant.", needed, "Check the number and its unit.")
    return Quantity(value, u, si_unit, shape=shape, stated=stated, text=text.strip())


def _half_last_digit(number: str) -> Decimal:
    """Half a unit of the last written digit: "1.20" → 0.005."""
    exponent = Decimal(number).as_tuple().exponent
    return Decimal(5).scaleb(int(exponent) - 1)


@cache
def _registry() -> Any:
    import pint

    return pint.UnitRegistry(cache_folder=None)


def _scale_to_si(unit: str, dimension: str, where: str, shown: str, needed: str) -> float:
    """Factor from `unit` to the SI unit of `dimension`; BadRig where it is unknown or of another kind."""
    si_unit = DIMENSIONS[dimension][0]
    if dimension == "number":
        if unit in ("", "1"):
            return 1.0
        if unit == "%":
            return 0.01
    registry = _registry()
    spelled = unit.replace("°", "deg").replace("^", "**")
    try:
        parsed = registry.parse_units(spelled)
        plain = registry.Quantity(1.0, parsed)
        if plain.is_compatible_with(si_unit.replace("^", "**")) and _has_angle(parsed, dimension):
            return float(plain.to(si_unit.replace("^", "**")).magnitude)
        kind = f"has the unit {unit!r}, which is not one of {dimension}"
    except (RecursionError, MemoryError):
        raise
    except (
        Exception
    ) as error:  # pint raises its own tree, tokenizer and Python errors alike for odd spellings
        kind = f"has the unit {unit!r}, which is not known ({type(error).__name__})"
    raise BadRig(
        f"{where}{shown} {kind}.", needed, "Check the unit: its spelling, and that it is of this kind."
    )


def _has_angle(parsed: Any, dimension: str) -> bool:
    """An angle must be written with a unit of angle: to pint a radian is a pure number."""
    if dimension != "angle":
        return True
    return str(parsed) in {"degree", "radian", "arcminute", "arcsecond", "turn", "milliradian", "grade"}
