"""Propagation of distributions against the worked examples of JCGM 101:2008 and others."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

import numpy as np
import pytest

from swingtrack.inertia.advice import advise_on_linearity
from swingtrack.inertia.budget import propagate
from swingtrack.inertia.monte_carlo import (
    agreement,
    draw,
    interval,
    monte_carlo_check,
    propagate_distributions,
)
from swingtrack.records import Quantity


def limits(low: float, high: float, unit: str = "1") -> Quantity:
    return Quantity(0.5 * (low + high), 0.5 * (high - low) / math.sqrt(3.0), unit, shape="rectangular")


def four(x: Mapping[str, Any]) -> Any:
    return x["x0"] + x["x1"] + x["x2"] + x["x3"]


def test_four_normal_inputs() -> None:
    # JCGM 101:2008, 9.2.2: u = 2, 95 % ± 3.92
    inputs = {f"x{i}": Quantity(0.0, 1.0, "1") for i in range(4)}
    found = monte_carlo_check(four, inputs, propagate(four, inputs, "1").quantity)
    assert found.u == pytest.approx(2.0, rel=5e-3)
    assert found.interval_95 == pytest.approx((-3.92, 3.92), abs=0.03)
    assert found.agrees
    assert found.draws == 200_000


@pytest.mark.parametrize(
    ("spread", "u", "half", "linear_half"),
    # 9.2.3 and 9.2.4: four rectangular inputs; 3.879407 = 2√3 (2 − (3/5)^¼); ± 17.0 where the law of propagation gives ± 19.9
    [(1.0, 2.0, 2 * math.sqrt(3) * (2 - 0.6**0.25), 3.92), (10.0, math.sqrt(103.0), 17.0, 19.9)],
)
def test_four_rectangular_inputs(spread: float, u: float, half: float, linear_half: float) -> None:
    inputs = {f"x{i}": limits(-math.sqrt(3), math.sqrt(3)) for i in range(3)}
    inputs["x3"] = limits(-math.sqrt(3) * spread, math.sqrt(3) * spread)
    draws = propagate_distributions(four, inputs)
    assert draws.std() == pytest.approx(u, rel=5e-3)
    for shortest in (False, True):
        low, high = interval(draws, shortest=shortest)
        assert (high - low) / 2 == pytest.approx(half, rel=6e-3)
    assert 1.96 * propagate(four, inputs, "1").quantity.u == pytest.approx(linear_half, abs=0.01)
    # The two agree to one digit of u = 2.0, and do not where u = 10 and the ends are 2.9 apart… to one digit, δ = 5, they do.
    assert agreement(propagate(four, inputs, "1").quantity, interval(draws))
    assert agreement(propagate(four, inputs, "1").quantity, interval(draws), digits=2) == (spread == 1.0)


def test_mass_and_buoyancy() -> None:
    # 9.3: first-order u 0.0539 mg, Monte Carlo u 0.0754 mg, shortest 95 % 1.0834 to 1.3825 mg
    inputs = {
        "m": Quantity(100_000.0, 0.05, "mg"),
        "d": Quantity(1.234, 0.02, "mg"),
        "air": limits(1.1, 1.3),
        "w": limits(7000.0, 9000.0),
        "r": limits(7950.0, 8050.0),
    }

    def error(x: Mapping[str, Any]) -> Any:
        return (x["m"] + x["d"]) * (1 + (x["air"] - 1.2) * (1 / x["w"] - 1 / x["r"])) - 100_000.0

    linear = propagate(error, inputs, "mg").quantity
    assert linear.value == pytest.approx(1.234, abs=5e-4)
    assert linear.u == pytest.approx(0.0539, abs=5e-5)
    draws = propagate_distributions(error, inputs)
    assert draws.std() == pytest.approx(0.0754, abs=0.0008)
    assert interval(draws, shortest=True) == pytest.approx((1.0834, 1.3825), abs=0.006)
    found = monte_carlo_check(error, inputs, linear)
    assert not found.agrees
    assert "Monte Carlo" in advise_on_linearity(linear, found)[0]


def test_gauge_block() -> None:
    # 9.5: 838 nm, u = 36 nm, 99 % from 744 to 932 nm (the law of propagation: 32; 745 to 931). Curvilinear trapezoids
    # are limits whose ends are themselves within limits; θ is a cycle of ± 0.5 °C about −0.1 °C.
    inputs = {
        "standard": Quantity(50_000_623.0, 25.0, "nm", dof=18),
        "d": Quantity(215.0, 6.0, "nm", dof=24),
        "d1": Quantity(0.0, 4.0, "nm", dof=5),
        "d2": Quantity(0.0, 7.0, "nm", dof=8),
        "expansion": limits(9.5e-6, 13.5e-6),
        "mean": Quantity(-0.1, 0.2, "°C"),
        "phase": limits(0.0, 2 * math.pi, "rad"),
        "wide": limits(0.9e-6, 1.1e-6),
        "place": limits(-1.0, 1.0),
        "warm": limits(0.025, 0.075),
        "where": limits(-1.0, 1.0),
    }

    def deviation(x: Mapping[str, Any]) -> Any:
        theta = x["mean"] + 0.5 * np.cos(x["phase"])
        difference = x["wide"] * x["place"] * theta + x["expansion"] * x["warm"] * x["where"]
        return x["standard"] + x["d"] + x["d1"] + x["d2"] - x["standard"] * difference - 50_000_000.0

    draws = propagate_distributions(deviation, inputs)
    assert draws.mean() == pytest.approx(838, abs=0.5)
    assert draws.std() == pytest.approx(36, abs=0.5)
    assert interval(draws, 99.0) == pytest.approx((744, 932), abs=2.0)


def test_logarithm() -> None:
    # y = ln x, x within 0.1 to 1.1: −0.511, u 0.481 by the law; −0.665, 0.606, shortest 95 % −1.895 to 0.095 by Monte
    # Carlo (NPL Report DEM-ES-011)
    inputs = {"x": limits(0.1, 1.1)}
    found = propagate(lambda x: x["x"] ** 1.0, inputs, "1").quantity
    assert (math.log(found.value), found.u / found.value) == pytest.approx((-0.511, 0.481), abs=5e-4)
    draws = propagate_distributions(lambda x: np.log(x["x"]), inputs)
    assert draws.mean() == pytest.approx(-0.665, abs=4e-3)
    assert draws.std() == pytest.approx(0.606, abs=4e-3)
    low, high = interval(draws, shortest=True)
    assert high == pytest.approx(0.095, abs=2e-3)
    assert low == pytest.approx(-1.895, abs=0.02)


def test_viscometer() -> None:
    # NIST TN 1900, E3: linear 5.69, u 1.03; Monte Carlo mean 5.82, u 1.11, 95 % 4.05 to 8.39
    inputs = {
        "mu": Quantity(4.63, 0.0463, "1"), "t": Quantity(61.0, 6.1, "s"), "rb": Quantity(2217.0, 0.5, "1"),
        "r": Quantity(1180.0, 0.5, "1"), "tc": Quantity(36.6, 5.49, "s"), "rc": Quantity(810.0, 0.5, "1"),
    }  # fmt: skip

    def viscosity(x: Mapping[str, Any]) -> Any:
        return x["mu"] * x["t"] * (x["rb"] - x["r"]) / (x["tc"] * (x["rb"] - x["rc"]))

    linear = propagate(viscosity, inputs, "1")
    assert linear.quantity.value == pytest.approx(5.69, abs=0.005)
    assert linear.quantity.u == pytest.approx(1.03, abs=0.005)
    draws = propagate_distributions(viscosity, inputs)
    assert draws.mean() == pytest.approx(5.82, abs=0.02)
    assert draws.std() == pytest.approx(1.11, abs=0.02)
    assert interval(draws) == pytest.approx((4.05, 8.39), abs=0.04)


def test_distributions_of_the_inputs() -> None:
    # GUM 4.3.7, G.3: a/√3 for limits; Student's t has √(ν/(ν − 2)) times its u
    rng = np.random.default_rng(3)
    flat = draw(limits(-2.0, 2.0), 100_000, rng)
    assert (flat.min(), flat.max()) == pytest.approx((-2.0, 2.0), abs=1e-3)
    assert flat.std() == pytest.approx(2.0 / math.sqrt(3.0), rel=5e-3)
    heavy = draw(Quantity(5.0, 0.1, "s", dof=6), 200_000, rng)
    assert heavy.std() == pytest.approx(0.1 * math.sqrt(6 / 4), rel=0.02)
    assert np.quantile(heavy, 0.975) == pytest.approx(5.0 + 2.45 * 0.1, abs=4e-3)  # GUM Table G.2
    assert np.all(draw(Quantity(1.5, 0.0, "m"), 3, rng) == 1.5)


@pytest.mark.parametrize("dof", [1, 2, 3])
def test_few_readings_widen_both_alike(dof: int) -> None:
    inputs = {"x": Quantity(10.0, 0.1, "s", dof=dof)}
    linear = propagate(lambda x: 2.0 * x["x"], inputs, "s").quantity
    found = monte_carlo_check(lambda x: 2.0 * x["x"], inputs, linear)
    low, high = found.interval_95
    half = {1: 12.71, 2: 4.30, 3: 3.18}[dof] * 0.2  # GUM Table G.2
    assert 0.5 * (high - low) == pytest.approx(half, rel=0.03)
    if dof < 3:  # no standard deviation exists: the half-width over k stands for it
        assert found.u == pytest.approx(0.2, rel=0.03)


def test_correlated_inputs_are_drawn_together() -> None:
    x = {"a": Quantity(1.0, 0.1, "1"), "b": Quantity(2.0, 0.2, "1"), "c": Quantity(0.0, 1.0, "1")}
    related = {("a", "b"): 0.8}
    draws = propagate_distributions(lambda q: q["a"] - q["b"], x, correlations=related)
    assert draws.std() == pytest.approx(math.sqrt(0.01 + 0.04 - 2 * 0.8 * 0.02), rel=5e-3)
    one = propagate_distributions(lambda q: 2 * q["a"] - q["b"], x, correlations={("a", "b"): 1.0})
    assert one.std() == pytest.approx(0.0, abs=1e-9)
    few = {key: Quantity(q.value, q.u, "1", dof=4) for key, q in x.items()}
    heavy = propagate_distributions(lambda q: q["a"] + q["b"], few, correlations=related)
    u = propagate(lambda q: q["a"] + q["b"], few, "1", correlations=related).quantity.u
    assert np.quantile(heavy, 0.975) - 3.0 == pytest.approx(2.78 * u, rel=0.02)  # t of the GUM, Table G.2
    with pytest.raises(ValueError, match="contradict"):
        propagate_distributions(
            lambda q: q["a"], x, correlations={("a", "b"): 1.0, ("b", "c"): 1.0, ("a", "c"): -1.0}
        )


def test_the_same_input_gives_the_same_output() -> None:
    inputs = {"x": Quantity(1.0, 0.1, "1")}
    first, second = (propagate_distributions(lambda x: x["x"] ** 2, inputs) for _ in range(2))
    assert np.array_equal(first, second)
    other = propagate_distributions(lambda x: x["x"] ** 2, inputs, seed=1)
    assert not np.array_equal(first, other)


def test_draws_beyond_the_formula_are_no_agreement() -> None:
    inputs = {"x": Quantity(0.3, 0.2, "1")}
    linear = propagate(lambda x: x["x"] ** 0.5, inputs, "1").quantity
    found = monte_carlo_check(lambda x: x["x"] ** 0.5, inputs, linear)
    assert not found.agrees
    assert math.isfinite(found.u)


def test_an_exact_result_agrees_with_itself() -> None:
    inputs = {"x": Quantity(2.0, 0.0, "1")}
    found = monte_carlo_check(
        lambda x: 3.0 * x["x"], inputs, propagate(lambda x: 3.0 * x["x"], inputs, "1").quantity
    )
    assert found.agrees
    assert (found.value, found.u) == (6.0, 0.0)
