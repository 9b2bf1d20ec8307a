"""The law of propagation of uncertainty against the worked examples of the GUM and others."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

import GTC
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from swingtrack.inertia.advice import advise, gain_of_halving
from swingtrack.inertia.budget import Propagated, correlation_of, coverage_factor, propagate, second_order_u
from swingtrack.records import BudgetLine, Quantity

# JCGM 100:2008, H.1, end gauge: nominal length 50 mm, everything in nm and °C
STANDARD = 50_000_623.0
END_GAUGE = {
    "standard": Quantity(STANDARD, 25.0, "nm", dof=18),
    "d_mean": Quantity(215.0, 5.8, "nm", dof=24),
    "d_random": Quantity(0.0, 3.9, "nm", dof=5),
    "d_systematic": Quantity(0.0, 6.7, "nm", dof=8),
    "expansion": Quantity(11.5e-6, 2e-6 / math.sqrt(3), "1/°C", shape="rectangular"),
    "expansion_difference": Quantity(0.0, 1e-6 / math.sqrt(3), "1/°C", dof=50, shape="rectangular"),
    "temperature": Quantity(-0.1, math.hypot(0.2, 0.5 / math.sqrt(2)), "°C"),
    "temperature_difference": Quantity(0.0, 0.05 / math.sqrt(3), "°C", dof=2, shape="rectangular"),
}


def end_gauge(x: Mapping[str, Any]) -> Any:
    return (
        x["standard"] + x["d_mean"] + x["d_random"] + x["d_systematic"]
        - x["standard"] * (x["expansion_difference"] * x["temperature"] + x["expansion"] * x["temperature_difference"])
    )  # fmt: skip


def test_gum_h1_end_gauge() -> None:
    # 50 000 838 nm, u = 32 nm (31.67 unrounded), effective dof 16 (16.76), t99 = 2.92, U99 = 93 nm
    found = propagate(end_gauge, END_GAUGE, "nm")
    assert found.quantity.value == pytest.approx(50_000_838.0)
    assert found.quantity.u == pytest.approx(31.67, abs=0.01)
    assert found.quantity.dof == pytest.approx(16.76, abs=0.02)
    k = coverage_factor(found.quantity.dof, 99.0)
    assert k == pytest.approx(2.92, abs=0.005)
    assert round(k * 32) == 93
    parts = {line.input: line.contribution for line in found.lines}
    assert parts["expansion_difference"] == pytest.approx(2.9, abs=0.05)
    assert parts["temperature_difference"] == pytest.approx(16.6, abs=0.05)
    difference = propagate(
        lambda x: x["d_mean"] + x["d_random"] + x["d_systematic"],
        {key: q for key, q in END_GAUGE.items() if key.startswith("d_")},
        "nm",
    )
    assert difference.quantity.u == pytest.approx(9.7, abs=0.05)
    # The GUM rounds u to 9.7 before it takes the fourth power, which makes 25.6 of 25.4.
    assert difference.quantity.dof * (9.7 / difference.quantity.u) ** 4 == pytest.approx(25.6, abs=0.05)


def test_gum_h1_with_the_second_order() -> None:
    # H.1.7: the products δα·θ and α·δθ bring 11.7 and 1.7 nm more, and u to 34 nm
    second = second_order_u(end_gauge, END_GAUGE)
    assert round(second) == 34
    assert math.sqrt(second**2 - 31.67**2) == pytest.approx(math.hypot(11.7, 1.7), abs=0.1)


def test_second_order_where_the_slopes_vanish() -> None:
    # y = x² at 0: u² = 2 u⁴; y = x³ at 0: u² = 15 u⁶, of which the second-order terms of the GUM see none;
    # y = x1 x2 at 0: u = u1 u2
    x = {"a": Quantity(0.0, 0.3, "1"), "b": Quantity(0.0, 0.2, "1")}
    assert second_order_u(lambda q: q["a"] ** 2, x) == pytest.approx(math.sqrt(2) * 0.09, rel=1e-9)
    assert second_order_u(lambda q: q["a"] * q["b"], x) == pytest.approx(0.06, rel=1e-9)
    assert propagate(lambda q: q["a"] * q["b"], x, "1").quantity.u == 0.0
    at_one = {"a": Quantity(1.0, 0.1, "1")}  # sin: u² (c² + ½ s² u² − c² u²)
    s, c = math.sin(1.0), math.cos(1.0)
    by_hand = 0.1 * math.sqrt(c * c + 0.5 * (s * 0.1) ** 2 - (c * 0.1) ** 2)
    assert second_order_u(lambda q: math.sin(q["a"]), at_one) == pytest.approx(by_hand, rel=1e-4)


# JCGM 100:2008, H.2: simultaneous readings of voltage (V), current (A) and phase (rad)
READINGS = {
    "V": np.array([5.007, 4.994, 5.005, 4.990, 4.999]),
    "I": 1e-3 * np.array([19.663, 19.639, 19.640, 19.685, 19.678]),
    "phi": np.array([1.0456, 1.0438, 1.0468, 1.0428, 1.0433]),
}


def impedance() -> tuple[dict[str, Propagated], dict[tuple[str, str], float]]:
    names = list(READINGS)
    covariance = np.cov(list(READINGS.values())) / 5
    u = np.sqrt(np.diag(covariance))
    inputs = {
        name: Quantity(float(READINGS[name].mean()), float(u[i]), "", dof=4) for i, name in enumerate(names)
    }
    related = {
        (names[i], names[j]): float(covariance[i, j] / (u[i] * u[j])) for i, j in ((0, 1), (0, 2), (1, 2))
    }
    functions = {
        "R": lambda x: x["V"] / x["I"] * GTC.cos(x["phi"]),
        "X": lambda x: x["V"] / x["I"] * GTC.sin(x["phi"]),
        "Z": lambda x: x["V"] / x["I"],
    }
    return {key: propagate(f, inputs, "ohm", correlations=related) for key, f in functions.items()}, related


def test_gum_h2_simultaneous_resistance_and_reactance() -> None:
    found, related = impedance()
    for key, value, u in (("R", 127.732, 0.071), ("X", 219.847, 0.295), ("Z", 254.260, 0.236)):
        assert found[key].quantity.value == pytest.approx(value, abs=6e-4)
        assert found[key].quantity.u == pytest.approx(u, abs=6e-4)
    for a, b, r in (("R", "X", -0.588), ("R", "Z", -0.485), ("X", "Z", 0.993)):
        assert correlation_of(found[a], found[b], correlations=related) == pytest.approx(r, abs=6e-4)
    # With five readings of each the degrees of freedom are four, as one set of readings gives no more.
    assert found["R"].quantity.dof == pytest.approx(4.0)


def test_shares_of_correlated_inputs_add_up_to_the_whole() -> None:
    found, _ = impedance()
    for result in found.values():
        assert math.fsum(line.share for line in result.lines) == pytest.approx(1.0)
    assert found["R"].lines[0].share < 0.0  # what V does to R is more than undone by what goes with it


def test_correlations_that_make_no_sense_are_refused() -> None:
    x = {"a": Quantity(1.0, 0.1, "1"), "b": Quantity(1.0, 0.1, "1", dof=5), "c": Quantity(1.0, 0.0, "1")}

    def total(q: Mapping[str, Any]) -> Any:
        return q["a"] + q["b"] + q["c"]

    for related, said in (
        ({("a", "b"): 0.5}, "differ in degrees of freedom"),
        ({("a", "c"): 0.5}, "no input with an uncertainty"),
        ({("a", "b"): 1.5}, "between -1 and 1"),
    ):
        with pytest.raises(ValueError, match=said):
            propagate(total, x, "1", correlations=related)


# GUM, JCGM 100:2008, Table G.2: degrees of freedom; t for 90, 95, 95.45, 99, 99.73 %
STUDENT = [
    (1, 6.31, 12.71, 13.97, 63.66, 235.8), (2, 2.92, 4.30, 4.53, 9.92, 19.21), (3, 2.35, 3.18, 3.31, 5.84, 9.22),
    (4, 2.13, 2.78, 2.87, 4.60, 6.62), (5, 2.02, 2.57, 2.65, 4.03, 5.51), (6, 1.94, 2.45, 2.52, 3.71, 4.90),
    (8, 1.86, 2.31, 2.37, 3.36, 4.28), (10, 1.81, 2.23, 2.28, 3.17, 3.96), (15, 1.75, 2.13, 2.18, 2.95, 3.59),
    (20, 1.72, 2.09, 2.13, 2.85, 3.42), (50, 1.68, 2.01, 2.05, 2.68, 3.16), (math.inf, 1.645, 1.960, 2.000, 2.576, 3.000),
]  # fmt: skip


@pytest.mark.parametrize("row", STUDENT)
def test_student_factors(row: tuple[float, ...]) -> None:
    dof, *factors = row
    digits = 5e-4 if math.isinf(dof) else 5.1e-3
    for percent, expected in zip((90.0, 95.0, 95.45, 99.0, 99.73), factors, strict=True):
        assert coverage_factor(dof, percent) == pytest.approx(expected, abs=0.05 if expected > 99 else digits)


def test_effective_degrees_of_freedom_are_rounded_down() -> None:
    assert coverage_factor(4.99) == coverage_factor(4.0)
    assert coverage_factor(0.4) == coverage_factor(1.0)


@settings(max_examples=30, deadline=None)
@given(
    st.lists(
        st.tuples(st.floats(0.5, 2.0), st.floats(1e-6, 0.1), st.integers(-2, 3)), min_size=1, max_size=5
    ),
    st.integers(3, 60),
)
def test_a_product_of_powers_adds_relative_uncertainties(
    parts: list[tuple[float, float, int]], dof: int
) -> None:
    # GUM 5.1.6: (u/y)² = Σ (pᵢ uᵢ/xᵢ)²; Welch and Satterthwaite: ν = u⁴/Σ(uᵢ⁴/ν)
    inputs = {f"x{i}": Quantity(v, u * v, "1", dof=dof) for i, (v, u, _) in enumerate(parts)}

    def product(x: Mapping[str, Any]) -> Any:
        found = 1.0
        for i, (_, _, power) in enumerate(parts):
            found = found * x[f"x{i}"] ** power
        return found + 0.0 * x["x0"]

    terms = [(power * u) ** 2 for _, u, power in parts]
    found = propagate(product, inputs, "1")
    assert found.quantity.relative_u == pytest.approx(math.sqrt(sum(terms)), rel=1e-9, abs=1e-15)
    if sum(terms):
        effective = sum(terms) ** 2 / sum(t**2 / dof for t in terms)
        assert found.quantity.dof == pytest.approx(effective, rel=1e-9)
        assert math.fsum(line.share for line in found.lines) == pytest.approx(1.0)


def test_an_exact_input_still_has_a_sensitivity() -> None:
    lines = propagate(
        lambda x: x["a"] * x["b"] ** 2, {"a": Quantity(3.0, 0.1, "m"), "b": Quantity(2.0, 0.0, "s")}, "m"
    ).lines
    assert lines[1].sensitivity == pytest.approx(12.0)
    assert (lines[1].contribution, lines[1].share) == (0.0, 0.0)


def test_advice_says_what_halving_a_doubt_gains() -> None:
    # u² = 0.9 + 0.1: halving the first leaves 0.225 + 0.1, u falls by 43 %
    assert gain_of_halving(0.9) == pytest.approx(1 - math.sqrt(0.325))
    lines = tuple(
        BudgetLine(n, 1.0, 0.1, "m", 1.0, 0.1, s)
        for n, s in (("upper_spacing", 0.9), ("mass", 0.05), ("a", -0.1))
    )
    assert advise(lines) == (
        "upper spacing makes 90 % of the variance: halving its doubt takes 43 % off the uncertainty.",
    )
