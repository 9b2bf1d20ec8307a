"""Propagation of distributions by Monte Carlo (JCGM 101:2008), beside the law of propagation."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from typing import Any

import numpy as np

from ..records import Floats, MonteCarlo, Quantity
from .budget import coverage_factor
from .correlation import Correlations, correlation, groups_of

DRAWS = 200_000
SEED = 20_080_101  # any fixed number: the same input gives the same output to the last digit
Function = Callable[[Mapping[str, Any]], Any]


def draw(quantity: Quantity, count: int, rng: np.random.Generator) -> Floats:
    """Draws (count,) of one input (JCGM 101, 6.4): rectangular limits, normal, or scaled t where dof is finite."""
    if quantity.u == 0.0:
        return np.full(count, quantity.value)
    if quantity.shape == "rectangular":
        half = quantity.u * math.sqrt(3.0)
        return rng.uniform(quantity.value - half, quantity.value + half, count)
    if math.isfinite(quantity.dof):
        return quantity.value + quantity.u * rng.standard_t(quantity.dof, count)
    return quantity.value + quantity.u * rng.standard_normal(count)


def propagate_distributions(
    function: Function,
    inputs: Mapping[str, Quantity],
    *,
    draws: int = DRAWS,
    seed: int = SEED,
    correlations: Correlations | None = None,
) -> Floats:
    """Values (draws,) of the result for random draws of the inputs.

    Correlated inputs are drawn together, normal or, where their degrees of freedom are finite, from a multivariate t
    (JCGM 101, 6.4.8; JCGM 102, 5.3.2). Draws for which the function is not defined come out as NaN.
    """
    rng = np.random.default_rng(seed)
    drawn = {name: draw(q, draws, rng) for name, q in inputs.items()}
    for group in groups_of(inputs, correlations or {}):
        drawn |= _draw_together([inputs[name] for name in group], group, correlations or {}, drawn, rng)
    with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
        return np.asarray(function(drawn), dtype=np.float64) + np.zeros(draws)


def interval(values: Floats, percent: float = 95.0, *, shortest: bool = False) -> tuple[float, float]:
    """Coverage interval of draws: probabilistically symmetric, or the shortest (JCGM 101, 7.7)."""
    ordered = np.sort(values)
    if not shortest:
        tail = 0.5 - percent / 200.0
        low, high = np.quantile(ordered, [tail, 1.0 - tail])
        return float(low), float(high)
    held = round(percent / 100.0 * ordered.size)
    widths = ordered[held:] - ordered[: ordered.size - held]
    first = int(np.argmin(widths))
    return float(ordered[first]), float(ordered[first + held])


def agreement(linear: Quantity, ends: tuple[float, float], *, digits: int = 1) -> bool:
    """Whether the law of propagation is validated by Monte Carlo (JCGM 101:2008, 8.1).

    It is where both ends of the 95 % interval y ± k u(y) differ from those of the draws by at most δ, half a unit of the
    last of the `digits` significant digits of u(y).

    Parameters
    ----------
    linear : Quantity
        y, u(y) and its effective degrees of freedom, which decide k.
    ends : (float, float)
        Of the Monte Carlo interval.
    """
    if linear.u == 0.0:
        return ends == (linear.value, linear.value)
    tolerance = 0.5 * 10.0 ** (math.floor(math.log10(linear.u)) + 1 - digits)
    half = coverage_factor(linear.dof, 95.0) * linear.u
    low, high = ends
    return abs(linear.value - half - low) <= tolerance and abs(linear.value + half - high) <= tolerance


def monte_carlo_check(
    function: Function,
    inputs: Mapping[str, Quantity],
    linear: Quantity,
    *,
    correlations: Correlations | None = None,
) -> MonteCarlo:
    """Monte Carlo result beside the linear one, and whether the two agree (`agreement`).

    Draws in which the function is not defined (a string too short for the spacing drawn) are left out, and the two then
    count as not agreeing. With two degrees of freedom or fewer a t distribution has no standard deviation: u then is
    the half-width of the interval over the linear result's k.
    """
    values = propagate_distributions(function, inputs, correlations=correlations)
    sound = values[np.isfinite(values)]
    if sound.size < 2:
        return MonteCarlo(values.size, math.nan, math.nan, (math.nan, math.nan), False)
    low, high = interval(sound)
    least_dof = min((q.dof for q in inputs.values() if q.u > 0.0), default=math.inf)
    if least_dof > 2.0:
        value, u = float(sound.mean()), float(sound.std(ddof=1))
    else:
        value, u = float(np.median(sound)), 0.5 * (high - low) / coverage_factor(linear.dof, 95.0)
    agrees = sound.size == values.size and agreement(linear, (low, high))
    return MonteCarlo(values.size, value, u, (low, high), agrees)


def _draw_together(
    quantities: list[Quantity],
    names: tuple[str, ...],
    related: Correlations,
    drawn: Mapping[str, Floats],
    rng: np.random.Generator,
) -> dict[str, Floats]:
    count, dof = len(next(iter(drawn.values()))), quantities[0].dof
    matrix = np.array([[correlation(related, a, b) for b in names] for a in names])
    # Eigenvectors rather than Cholesky: a correlation of exactly one is allowed.
    sizes, vectors = np.linalg.eigh(matrix)
    if sizes[0] < -1e-9:
        raise ValueError(f"the correlations of {', '.join(names)} contradict one another")
    steps = (vectors * np.sqrt(np.maximum(sizes, 0.0))) @ rng.standard_normal((len(names), count))
    if math.isfinite(dof):
        steps *= np.sqrt(dof / rng.chisquare(dof, count))
    return {name: q.value + q.u * row for name, q, row in zip(names, quantities, steps, strict=True)}
