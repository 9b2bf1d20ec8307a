"""Monte Carlo (JCGM 101) of an adjustment: every input drawn, the unknowns solved for each draw."""

from __future__ import annotations

import math

import numpy as np

from ..records import Floats, MonteCarlo, Quantity
from .budget import coverage_factor
from .combine_adjust import Adjusted, Function
from .monte_carlo import SEED, draw, interval

DRAWS = 50_000  # ends of a 95 % interval to about 1 % of u


def draw_unknowns(
    adjusted: Adjusted, *, draws: int = DRAWS, seed: int = SEED
) -> tuple[list[Floats], dict[str, Floats]]:
    """Unknowns for random draws of all inputs (JCGM 101): H F(p, x) = 0 solved for each draw.

    Returns
    -------
    p : q arrays of (draws,) float
    x : mapping of name to (draws,) float
    """
    rng = np.random.default_rng(seed)
    x = {name: draw(q, draws, rng) for name, q in adjusted.inputs.items()}
    p = [np.full(draws, value) for value in adjusted.values]
    for _ in range(8):
        f = np.array([np.broadcast_to(value, (draws,)) for value in adjusted.conditions(p, x)])
        step = adjusted.projector @ f
        p = [value - change for value, change in zip(p, step, strict=True)]
        if np.all(np.max(np.abs(step), axis=1) <= 1e-6 * np.sqrt(np.diag(adjusted.covariance))):
            break
    return p, x


def check_by_draws(adjusted: Adjusted, function: Function, linear: Quantity) -> MonteCarlo:
    """Monte Carlo beside the law of propagation, and whether they agree (JCGM 101, 8.1, one significant digit)."""
    values = np.asarray(function(*draw_unknowns(adjusted)), dtype=np.float64)
    return judge_draws(values, linear)


def judge_draws(values: Floats, linear: Quantity) -> MonteCarlo:
    """Draws of a result beside its linear value: both ends of the 95 % interval within half a digit of u, or not."""
    low, high = interval(values)
    tolerance = 0.5 * 10.0 ** math.floor(math.log10(linear.u)) if linear.u > 0.0 else 0.0
    half = coverage_factor(linear.dof, 95.0) * linear.u
    agrees = abs(linear.value - half - low) <= tolerance and abs(linear.value + half - high) <= tolerance
    return MonteCarlo(values.size, float(values.mean()), float(values.std(ddof=1)), (low, high), agrees)
