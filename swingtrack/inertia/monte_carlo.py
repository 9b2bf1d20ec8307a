"""Propagation of distributions by Monte Carlo (JCGM 101:2008), beside the law of propagation."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from typing import Any

import numpy as np

from ..records import Floats, MonteCarlo, Quantity

DRAWS = 200_000
SEED = 20_080_101  # any fixed number: the same input gives the same output to the last digit


def draw(quantity: Quantity, count: int, rng: np.random.Generator) -> Floats:
    """Draws of one input (JCGM 101, 6.4): rectangular limits, normal, or scaled t where dof is finite."""
    if quantity.u == 0.0:
        return np.full(count, quantity.value)
    if quantity.shape == "rectangular":
        half = quantity.u * math.sqrt(3.0)
        return rng.uniform(quantity.value - half, quantity.value + half, count)
    if math.isfinite(quantity.dof) and quantity.dof > 2.0:
        return quantity.value + quantity.u * rng.standard_t(quantity.dof, count)
    return quantity.value + quantity.u * rng.standard_normal(count)


def propagate_distributions(
    function: Callable[[Mapping[str, Any]], Any],
    inputs: Mapping[str, Quantity],
    *,
    draws: int = DRAWS,
    seed: int = SEED,
) -> Floats:
    """Values (draws,) of the result for random draws of the inputs."""
    rng = np.random.default_rng(seed)
    drawn = {name: draw(q, draws, rng) for name, q in inputs.items()}
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


def monte_carlo_check(
    function: Callable[[Mapping[str, Any]], Any], inputs: Mapping[str, Quantity], linear: Quantity
) -> MonteCarlo:
    """Monte Carlo result beside the linear one, and whether the two agree.

    They agree where both ends of the 95 % interval differ by less than half a unit of the first significant digit
    of u (JCGM 101, 8.1, with one significant digit).
    """
    values = propagate_distributions(function, inputs)
    low, high = interval(values)
    tolerance = 0.5 * 10.0 ** math.floor(math.log10(linear.u)) if linear.u > 0.0 else 0.0
    half = 1.96 * linear.u
    agrees = abs(linear.value - half - low) <= tolerance and abs(linear.value + half - high) <= tolerance
    return MonteCarlo(values.size, float(values.mean()), float(values.std(ddof=1)), (low, high), agrees)
