"""What a user types becomes an uncertain number in SI, or one clear message."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from swingtrack.errors import BadRig
from swingtrack.quantity import DIMENSIONS, parse_quantity


@pytest.mark.parametrize(
    ("text", "dimension", "value", "u"),
    [
        # Exact unit definitions: NIST SP 811 (2008), appendix B; limits as a/√3: GUM (JCGM 100:2008) 4.3.7.
        ("412 mm ± 0.5 mm", "length", 0.412, 0.5e-3 / math.sqrt(3)),
        ("412 ± 0.5 mm", "length", None, None),
        ("412 mm +/- 0.5", "length", 0.412, 0.5e-3 / math.sqrt(3)),
        ("1.128 s ± 0.2 ms k=1", "time", 1.128, 0.2e-3),
        ("1.128 s ± 0.4 ms k=2", "time", 1.128, 0.2e-3),
        ("1.5 kg ± 0.2 % k=2", "mass", 1.5, 0.0015),
        ("2 lb ± 0.1 oz", "mass", 2 * 0.45359237, 0.1 * 0.028349523125 / math.sqrt(3)),
        ("12 in ± 0.01 in", "length", 12 * 0.0254, 0.01 * 0.0254 / math.sqrt(3)),
        ("1 slug ± 0 slug", "mass", 14.59390293720636, 0.0),
        ("1 slug ft^2 ± 0 slug ft^2", "moment", 1.3558179483314004, 0.0),
        ("1 lb in² ± 0 lb in²", "moment", 2.926396534292e-4, 0.0),
        ("1 oz in^2 ± 0 oz in^2", "moment", 1.8289978339325e-5, 0.0),
        ("1 g·cm² ± 0 g cm²", "moment", 1e-7, 0.0),
        ("51.5° ± 0.1°", "angle", math.radians(51.5), math.radians(0.1) / math.sqrt(3)),
        ("−3 mm ± 1 mm", "length", -0.003, 1e-3 / math.sqrt(3)),
    ],
)
def test_forms_and_units(text: str, dimension: str, value: float | None, u: float | None) -> None:
    if value is None:
        with pytest.raises(BadRig, match="no unit"):
            parse_quantity(text, dimension)
        return
    quantity = parse_quantity(text, dimension)
    assert quantity.value == pytest.approx(value, rel=1e-12)
    assert quantity.u == pytest.approx(u, rel=1e-12, abs=1e-300)
    assert quantity.stated


def test_without_limits_half_the_last_digit_is_assumed_and_said() -> None:
    quantity = parse_quantity("1.20 m", "length")
    assert quantity.u == pytest.approx(0.005 / math.sqrt(3))
    assert not quantity.stated


@pytest.mark.parametrize(
    ("text", "dimension", "said"),
    [
        ("0.912 m", "mass", "not one of mass"),
        ("5", "length", "no unit"),
        ("5,2 m", "length", "not a comma"),
        ("", "length", "can't be read"),
        ("5 smoots per", "length", "not known"),
        ("5 kg/kg", "angle", "not one of angle"),
        ("5 mm ± -1 mm", "length", "negative"),
        ("5 mm ± 1 mm k=0", "length", "negative"),
        ("5 mm ± 1 kg", "length", "not one of length"),
        ("1e300 m", "length", "out of all bounds"),
        ("9" * 300 + " m", "length", "can't be read"),
        ("5 __import__('os')", "length", "not known"),
    ],
)
def test_what_cannot_be_meant_is_refused_with_an_example(text: str, dimension: str, said: str) -> None:
    with pytest.raises(BadRig) as caught:
        parse_quantity(text, dimension, key="suspension.length")
    assert said in str(caught.value)
    assert "suspension.length" in str(caught.value)
    assert DIMENSIONS[dimension][1] in str(caught.value)


@given(st.text(max_size=60), st.sampled_from(sorted(DIMENSIONS)))
def test_any_text_gives_a_finite_quantity_or_a_message(text: str, dimension: str) -> None:
    try:
        quantity = parse_quantity(text, dimension)
    except BadRig:
        return
    assert math.isfinite(quantity.value)
    assert quantity.u >= 0.0


@given(
    st.decimals(min_value="0.001", max_value="9999", places=3),
    st.sampled_from([("m", 1.0), ("cm", 100.0), ("mm", 1000.0), ("ft", 1 / 0.3048), ("in", 1 / 0.0254)]),
)
def test_units_in_any_spelling_give_the_same_answer(number: object, unit: tuple[str, float]) -> None:
    metres = float(str(number))
    other = parse_quantity(f"{metres * unit[1]!r} {unit[0]} ± 1 mm", "length")
    assert other.value == pytest.approx(metres, rel=1e-12)
    assert other.u == pytest.approx(1e-3 / math.sqrt(3))
