"""The one rounding rule against published examples and against another implementation."""

from __future__ import annotations

import math

import pytest
from hypothesis import assume, example, given
from hypothesis import strategies as st
from uncertainties import ufloat

from swingtrack.records import Quantity
from swingtrack.report.rounding import bare, change, count, deviation, percent, rounded, show, show_entry


@pytest.mark.parametrize(
    ("value", "u", "said"),
    [
        # GUM (JCGM 100:2008), 7.2.6: y = 10.05762 Ω with u = 27 mΩ is rounded to 10.058 Ω. From memory.
        (10.05762, 0.027, ("10.058", "0.027")),
        # GUM 7.2.2: m = 100.02147 g with u = 0.35 mg. From memory.
        (100.02147, 0.00035, ("100.02147", "0.00035")),
        # GUM H.1.7: 50.000838 mm with u = 32 nm, computed as 31.67 nm (references page, section 10).
        (50.000838, 31.67e-6, ("50.000838", "0.000032")),
        # CODATA 2018 constant of gravitation 6.67430(15) in 10⁻¹¹ m³/(kg s²). From memory.
        (6.67430, 0.00015, ("6.67430", "0.00015")),
    ],
)
def test_published_roundings(value: float, u: float, said: tuple[str, str]) -> None:
    assert rounded(value, u) == said


@given(
    st.floats(-1e6, 1e6, allow_nan=False),
    st.floats(-6.0, 3.0).map(lambda power: 10.0**power),
)
@example(0.5, 0.0996)
@example(0.5, 0.0995)
@example(-3.0, 9.96)
def test_the_same_digits_as_another_implementation(value: float, u: float) -> None:
    """The uncertainties package formats value and u to the digits asked for; both give the same two numbers."""
    assume(abs(value) > 1e-9 or value == 0.0)
    if u < 9.9:  # beyond, that package keeps digits before the point that the rule rounds away
        assert list(rounded(value, u)) == f"{ufloat(value, u):.2uf}".split("+/-")
    assert float(rounded(value, u)[1]) == pytest.approx(float(f"{u:.1e}"), rel=1e-12)


@given(st.floats(1e-3, 1e3), st.floats(1e-6, 1e-1), st.integers(-3, 3))
def test_scaling_the_unit_scales_the_digits(value: float, relative: float, power: int) -> None:
    """Metres or millimetres: the same digits are shown, but for those that float scaling moves across a half."""
    u = relative * value
    first = [float(text) for text in rounded(value, u)]
    second = [float(text) * 10.0**-power for text in rounded(value * 10.0**power, u * 10.0**power)]
    place = 10.0 ** math.floor(math.log10(first[1]) - 1)
    assert abs(first[1] - second[1]) <= 1.01 * place
    assert abs(first[0] - second[0]) <= 1.01 * place


def test_large_uncertainties_round_before_the_point() -> None:
    assert rounded(123456.0, 3700.0) == ("123500", "3700")
    assert show(Quantity(123456.0, 3700.0, "px")) == "(1.235 ± 0.037)·10⁵ px"


def test_no_uncertainty_is_not_made_up() -> None:
    assert rounded(1.2345678, 0.0) == ("1.23457", "0")
    assert show(Quantity(1.2345678, 0.0, "s")) == "1.23457 s"
    assert show(Quantity(1.5, math.inf, "s")) == "1.5 s"
    assert show(None) == "not known"
    assert show(Quantity(math.nan, 1.0, "s")) == "not known"
    assert show_entry({"value": 2.5, "u": None, "unit": "s"}) == "2.5 s"


def test_coverage_factor_and_unit() -> None:
    moment = Quantity(0.0031984, 1.21e-5, "kg m^2")
    assert show(moment, "kg m²", k=2.0) == "0.003198 ± 0.000024 kg m²"
    assert show(moment, "g cm²", scale=1e7, k=2.0) == "31980 ± 240 g cm²"
    assert show(Quantity(0.1395, 0.00137, "rad"), "°", scale=180.0 / math.pi) == "(7.993 ± 0.078)°"
    assert show(Quantity(-0.25, 0.012, "1")) == "−0.250 ± 0.012"


def test_numbers_without_uncertainty() -> None:
    assert [bare(v, 3) for v in (9.9996e-5, 0.00099999, 999.99, -0.01, 0.0)] == [
        "1.00·10⁻⁴",
        "0.00100",
        "1000",
        "−0.0100",
        "0",
    ]
    assert bare(None) == bare(math.nan) == "not known"
    assert [percent(v) for v in (0.0, 0.0004, 0.0006, 1.0)] == ["0.0 %", "< 0.1 %", "0.1 %", "100.0 %"]
    assert change(0.00012345) == "0.012 %"
    assert deviation(-0.0000001) == "0.000 %"
    assert count(9999) == "9999"
