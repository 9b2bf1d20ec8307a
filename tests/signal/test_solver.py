"""The least-squares solver against certified data and a reference library."""

from __future__ import annotations

import re
from pathlib import Path

import lmfit
import numpy as np
import pytest

from swingtrack.signal.solver import minimise

PARAMETER_LINE = re.compile(r"\s*b\d\s*=\s*(\S+)\s+(\S+)\s+(\S+)\s+(\S+)")


def read_strd(file: Path) -> tuple[np.ndarray, np.ndarray, np.ndarray, float]:
    """Rows (start 1, start 2, certified value, certified standard deviation); x; y; certified sum of squares."""
    lines = file.read_text().splitlines()
    found = [PARAMETER_LINE.match(line) for line in lines[:60]]
    rows = np.array([[float(v) for v in m.groups()] for m in found if m])
    total = next(
        float(line.split(":")[1]) for line in lines[:60] if line.startswith("Residual Sum of Squares")
    )
    data = np.array([[float(v) for v in line.split()] for line in lines[60:] if line.strip()])
    return rows, data[:, 1], data[:, 0], total


def enso(b, x):
    turn = 2 * np.pi * x
    y = b[0] + b[1] * np.cos(turn / 12) + b[2] * np.sin(turn / 12)
    columns = [np.ones_like(x), np.cos(turn / 12), np.sin(turn / 12)]
    for period, c, s in ((b[3], b[4], b[5]), (b[6], b[7], b[8])):
        cos, sin = np.cos(turn / period), np.sin(turn / period)
        y = y + c * cos + s * sin
        columns += [(c * sin - s * cos) * turn / period**2, cos, sin]
    return y, np.column_stack(columns)


def misra(b, x):
    e = np.exp(-b[1] * x)
    return b[0] * (1 - e), np.column_stack([1 - e, b[0] * x * e])


def lanczos(b, x):
    e = [np.exp(-b[i + 1] * x) for i in (0, 2, 4)]
    columns = [c for i, part in zip((0, 2, 4), e, strict=True) for c in (part, -b[i] * x * part)]
    return sum(b[i] * part for i, part in zip((0, 2, 4), e, strict=True)), np.column_stack(columns)


def mgh17(b, x):
    e, f = np.exp(-b[3] * x), np.exp(-b[4] * x)
    return b[0] + b[1] * e + b[2] * f, np.column_stack([np.ones_like(x), e, f, -b[1] * x * e, -b[2] * x * f])


def danwood(b, x):
    return b[0] * x ** b[1], np.column_stack([x ** b[1], b[0] * x ** b[1] * np.log(x)])


CASES = [
    (name, model, start)
    for name, model in (
        ("ENSO", enso),
        ("Misra1a", misra),
        ("BoxBOD", misra),
        ("Lanczos3", lanczos),
        ("MGH17", mgh17),
        ("DanWood", danwood),
    )
    for start in (0, 1)
    if (name, start) != ("MGH17", 0)  # from its first start even the certifying solvers diverge
]


@pytest.mark.parametrize(("name", "model", "start"), CASES, ids=[f"{n} start {s + 1}" for n, _, s in CASES])
def test_certified_nist_strd_values(real_data, name, model, start):
    """NIST Statistical Reference Datasets: 7 digits of the parameters, 5 of their standard deviations."""
    rows, x, y, total = read_strd(real_data / "nist_strd" / f"{name}.dat")

    def residuals(p):
        with np.errstate(all="ignore"):
            seen, jacobian = model(p, x)
        return (seen - y, jacobian) if np.all(np.isfinite(jacobian)) else None

    # The starts are far off on purpose: a cautious first step, as the solver's option has it.
    with np.errstate(over="ignore"):
        fit = minimise(residuals, rows[:, start], first_damping=100.0)
    assert fit.settled
    assert fit.usable
    np.testing.assert_allclose(fit.parameters, rows[:, 2], rtol=1e-7)
    np.testing.assert_allclose(np.sqrt(np.diag(fit.covariance())), rows[:, 3], rtol=1e-5)
    assert fit.sum_of_squares == pytest.approx(total, rel=1e-8)


def damped(p, t):
    fade, turn = np.exp(-p[3] * t), p[1] * t + p[2]
    c, s = fade * np.cos(turn), fade * np.sin(turn)
    return p[0] * c + p[4], np.column_stack([c, -p[0] * t * s, -p[0] * s, -p[0] * t * c, np.ones_like(t)])


def test_agrees_with_lmfit_in_values_and_covariance():
    random = np.random.default_rng(3)
    t = np.sort(random.uniform(0, 20, 400))
    truth = np.array([1.0, 5.0, 0.3, 0.04, 0.1])
    y = damped(truth, t)[0] + 0.05 * random.standard_normal(400)
    start = truth * 1.01
    ours = minimise(lambda p: (damped(p, t)[0] - y, damped(p, t)[1]), start)
    parameters = lmfit.Parameters()
    for i, value in enumerate(start):
        parameters.add(f"p{i}", value=float(value))
    theirs = lmfit.minimize(
        lambda p: damped([p[f"p{i}"].value for i in range(5)], t)[0] - y, parameters, xtol=1e-12, ftol=1e-12
    )
    values = np.array([theirs.params[f"p{i}"].value for i in range(5)])
    np.testing.assert_allclose(ours.parameters, values, rtol=1e-6)
    # lmfit's covariance comes from numerical derivatives
    np.testing.assert_allclose(ours.covariance(), theirs.covar, rtol=2e-3, atol=1e-8)


def test_two_parameters_of_which_only_the_sum_shows_are_not_usable():
    x = np.linspace(0, 1, 30)
    fit = minimise(lambda p: ((p[0] + p[1]) * x - 2 * x, np.column_stack([x, x])), np.array([0.0, 0.0]))
    assert fit.settled
    assert not fit.usable
    assert fit.parameters.sum() == pytest.approx(2.0)


def test_parameters_of_very_different_size_are_treated_alike():
    x = np.linspace(0, 1, 50)
    y = 3e9 * np.exp(-2e-9 * 1e9 * x)

    def residuals(p):
        e = np.exp(-p[1] * 1e9 * x)
        return p[0] * e - y, np.column_stack([e, -p[0] * 1e9 * x * e])

    fit = minimise(residuals, np.array([1e9, 1e-9]))
    np.testing.assert_allclose(fit.parameters, [3e9, 2e-9], rtol=1e-10)


def test_a_start_outside_the_model_is_refused():
    with pytest.raises(ValueError, match="start values"):
        minimise(lambda p: None, np.array([1.0]))


def test_running_out_of_steps_is_said():
    x = np.linspace(0, 10, 50)
    y = np.cos(3 * x)
    fit = minimise(
        lambda p: (np.cos(p[0] * x) - y, (-x * np.sin(p[0] * x))[:, None]), np.array([2.9]), most_steps=1
    )
    assert not fit.settled
    assert not fit.usable
    assert "1 steps" in fit.message
