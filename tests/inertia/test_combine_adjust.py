"""The adjustment behind every method: errors in all inputs, shared inputs once."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import Any

import numpy as np
import pytest

from swingtrack.errors import BadInput
from swingtrack.inertia.budget import propagate
from swingtrack.inertia.combine_adjust import adjust, derive
from swingtrack.inertia.combine_draws import check_by_draws, draw_unknowns
from swingtrack.records import Quantity

# K. Pearson's points with D. York's weights (Canadian Journal of Physics 44 (1966) 1079), the usual test of straight
# lines with errors in both variables.
PEARSON_X = (0.0, 0.9, 1.8, 2.6, 3.3, 4.4, 5.2, 6.1, 6.5, 7.4)
PEARSON_Y = (5.9, 5.4, 4.4, 4.6, 3.5, 3.7, 2.8, 2.8, 2.4, 1.5)
YORK_WEIGHT_X = (1000.0, 1000.0, 500.0, 800.0, 200.0, 80.0, 60.0, 20.0, 1.8, 1.0)
YORK_WEIGHT_Y = (1.0, 1.8, 4.0, 8.0, 20.0, 20.0, 70.0, 70.0, 100.0, 500.0)


def pearson() -> dict[str, Quantity]:
    found = {}
    for n in range(10):
        found[f"x{n}"] = Quantity(PEARSON_X[n], YORK_WEIGHT_X[n] ** -0.5, "1")
        found[f"y{n}"] = Quantity(PEARSON_Y[n], YORK_WEIGHT_Y[n] ** -0.5, "1")
    return found


def line(p: Sequence[Any], x: Mapping[str, Any]) -> list[Any]:
    return [x[f"y{n}"] - p[0] - p[1] * x[f"x{n}"] for n in range(10)]


def test_line_with_errors_in_both_variables() -> None:
    fitted = adjust(line, pearson(), [6.0, -0.5])
    # York, Evensen, Martínez and De Basabe Delgado, American Journal of Physics 72 (2004) 367: intercept 5.47991022,
    # slope −0.480533407, standard errors 0.294970735 and 0.0579850090, chi²/8 = 1.4832941 (quoted from memory; the next
    # test finds the same line by brute force).
    assert fitted.values == pytest.approx([5.47991022, -0.480533407], rel=1e-7)
    assert np.sqrt(np.diag(fitted.covariance)) == pytest.approx([0.294970735, 0.0579850090], rel=2e-3)
    assert fitted.chi2 / fitted.dof == pytest.approx(1.4832941, rel=1e-6)


def test_line_against_brute_force() -> None:
    from scipy.optimize import minimize

    x, y = np.array(PEARSON_X), np.array(PEARSON_Y)
    u2, v2 = 1 / np.array(YORK_WEIGHT_X), 1 / np.array(YORK_WEIGHT_Y)

    def merit(p: Any) -> float:  # chi² with every point moved to where the line is nearest, in closed form
        return float(np.sum((y - p[0] - p[1] * x) ** 2 / (v2 + p[1] ** 2 * u2)))

    best = minimize(
        merit, [5.0, -0.4], method="Nelder-Mead", options={"xatol": 1e-10, "fatol": 1e-12, "maxiter": 4000}
    )
    fitted = adjust(line, pearson(), [5.0, -0.4])
    assert fitted.values == pytest.approx(best.x, rel=1e-6)
    assert fitted.chi2 == pytest.approx(best.fun, rel=1e-9)


def test_misfit_over_its_uncertainty_is_a_studentised_residual() -> None:
    """For n equal readings of one number the residual has u √(1 − 1/n) (any text on least squares)."""
    readings = {f"y{n}": Quantity(value, 0.2, "1") for n, value in enumerate((1.0, 1.3, 0.9, 1.2))}
    fitted = adjust(lambda p, x: [x[f"y{n}"] - p[0] for n in range(4)], readings, [1.0])
    assert fitted.misfit == pytest.approx(np.array([1.0, 1.3, 0.9, 1.2]) - 1.1)
    assert fitted.misfit_u == pytest.approx(0.2 * math.sqrt(0.75) * np.ones(4))


def test_shared_scale_error_does_not_drag_the_mean_down() -> None:
    """Peelle's puzzle: 1.5 and 1.0, each ±10 % of its own and ±20 % of a factor common to both.

    Weights made of the observed values give 0.88, below both (R. W. Peelle, 1987; from memory). The mean must lie between
    them, and its own doubt hardly be below the 20 % that they share.
    """
    inputs = {
        "a": Quantity(1.5, 0.15, "1"),
        "b": Quantity(1.0, 0.10, "1"),
        "factor": Quantity(1.0, 0.2, "1"),
    }
    fitted = adjust(lambda p, x: [x["a"] * x["factor"] - p[0], x["b"] * x["factor"] - p[0]], inputs, [1.2])
    weighted = (1.5 / 0.15**2 + 1.0 / 0.10**2) / (1 / 0.15**2 + 1 / 0.10**2)
    assert fitted.values[0] == pytest.approx(weighted)
    assert math.sqrt(fitted.covariance[0, 0]) / fitted.values[0] > 0.2


def test_one_condition_is_the_law_of_propagation() -> None:
    """Against GTC's uncertain numbers, with degrees of freedom."""
    inputs = {
        "mass": Quantity(0.5, 5e-4, "kg"),
        "spacing": Quantity(0.3, 5e-4, "m", shape="rectangular"),
        "period": Quantity(1.2, 5e-4, "s", dof=7.0),
    }

    def moment(x: Mapping[str, Any]) -> Any:
        return x["mass"] * 9.81 * (x["spacing"] * x["period"] / (4 * math.pi)) ** 2

    wanted = propagate(moment, inputs, "kg m^2")
    fitted = adjust(lambda p, x: [moment(x) - p[0]], inputs, [1e-3])
    found = derive(fitted, lambda p, x: p[0], "kg m^2")
    assert found.quantity.value == pytest.approx(wanted.quantity.value, rel=1e-12)
    assert found.quantity.u == pytest.approx(wanted.quantity.u, rel=1e-10)
    assert found.quantity.dof == pytest.approx(wanted.quantity.dof, rel=1e-6)
    assert found.k == pytest.approx(wanted.k)
    assert [line.share for line in found.lines] == pytest.approx(
        [line.share for line in wanted.lines], rel=1e-8
    )


def test_sensitivities_are_those_of_a_new_fit() -> None:
    """By finite differences of whole fits, at points that lie on a line (off it the weights change as well)."""
    inputs = {
        name: replace(
            quantity, value=5.5 - 0.5 * PEARSON_X[int(name[1])] if name[0] == "y" else quantity.value
        )
        for name, quantity in pearson().items()
    }
    fitted = adjust(line, inputs, [6.0, -0.4])
    for name in ("x4", "y9"):
        step = 1e-3 * inputs[name].u
        up, down = (
            adjust(
                line,
                {**inputs, name: replace(inputs[name], value=inputs[name].value + sign * step)},
                [6.0, -0.4],
            )
            for sign in (1, -1)
        )
        column = list(inputs).index(name)
        assert fitted.sensitivity[:, column] == pytest.approx(
            (up.values - down.values) / (2 * step), rel=1e-4
        )


def test_draws_spread_as_the_covariance_says() -> None:
    fitted = adjust(line, pearson(), [6.0, -0.5])
    p, _ = draw_unknowns(fitted, draws=20_000)
    assert np.std(p[0]) == pytest.approx(math.sqrt(fitted.covariance[0, 0]), rel=0.05)
    result = derive(fitted, lambda p, x: p[0] + 2.0 * p[1], "1")
    assert check_by_draws(fitted, lambda p, x: p[0] + 2.0 * p[1], result.quantity).u == pytest.approx(
        result.quantity.u, rel=0.05
    )


def test_exact_inputs_are_allowed() -> None:
    exact = {"a": Quantity(2.0, 0.0, "1"), "b": Quantity(2.0, 0.0, "1")}
    fitted = adjust(lambda p, x: [x["a"] - p[0], x["b"] - p[0]], exact, [1.0])
    assert fitted.values[0] == pytest.approx(2.0)
    assert derive(fitted, lambda p, x: p[0], "1").quantity.u == 0.0


def test_open_unknown_is_refused() -> None:
    inputs = {"a": Quantity(1.0, 0.1, "1"), "b": Quantity(1.0, 0.1, "1")}
    with pytest.raises(BadInput, match="too much alike"):
        adjust(lambda p, x: [x["a"] - p[0] - p[1], x["b"] - p[0] - p[1]], inputs, [0.5, 0.5])
