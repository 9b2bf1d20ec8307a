"""Errors of period and decay rate over the Cramér–Rao bound, over many random series.

    python -m tests.benchmarks.fit_efficiency [--count N] [--seed S]

Damped swings on a torsion wire (the model whose bound has a closed form): 300 to 18000 samples at uneven times,
amplitude over noise 3 to 1000, white noise. The bound is the inverse of the Fisher matrix
JᵀJ/s², computed here from the model's derivatives, not by the fit (Kay, Fundamentals of Statistical Signal Processing:
Estimation Theory, 1993, ch. 3; from memory).
"""

from __future__ import annotations

import argparse
from dataclasses import dataclass

import numpy as np

from swingtrack.errors import NothingToMeasure
from swingtrack.records import Series
from swingtrack.signal import fit_swing
from tests.signal.truth import torsion_wire


@dataclass(frozen=True)
class Case:
    """A random series and its truth."""

    t: np.ndarray
    y: np.ndarray
    period: float
    gamma: float
    bound_period: float
    bound_gamma: float


def draw(random: np.random.Generator) -> Case:
    """One series with its bounds."""
    n = int(np.exp(random.uniform(np.log(300), np.log(18000))))
    period = random.uniform(0.6, 2.5)
    length = period * random.uniform(10, 60)
    gamma = random.uniform(0.1, 2.0) / length
    noise = np.exp(random.uniform(np.log(1 / 1000), np.log(1 / 3)))
    t = np.arange(n) * length / n
    t = t + random.uniform(-0.3, 0.3, n) * length / n
    t = t[random.random(n) > 0.03]
    phase = random.uniform(0, 2 * np.pi)
    # The equation's ω0 and γ; the swing runs at ω = √(ω0² − γ²).
    omega = np.sqrt((2 * np.pi / period) ** 2 - gamma**2)
    fade, turn = np.exp(-gamma * t), omega * t + phase
    y = 0.02 + fade * np.cos(turn) + noise * random.standard_normal(len(t))
    columns = np.column_stack(
        [
            fade * np.cos(turn),
            -t * fade * np.sin(turn),
            -fade * np.sin(turn),
            -t * fade * np.cos(turn),
            np.ones_like(t),
        ]
    )
    bound = np.linalg.inv(columns.T @ columns / noise**2)
    return Case(
        t, y, period, gamma, float(np.sqrt(bound[1, 1]) / omega * period), float(np.sqrt(bound[3, 3]))
    )


def ratios(count: int, seed: int) -> tuple[np.ndarray, np.ndarray, int]:
    """Errors over bounds of period and decay, and how many series gave no answer."""
    random = np.random.default_rng(seed)
    law = torsion_wire().law(3.0)
    of_period, of_gamma, lost = [], [], 0
    for _ in range(count):
        case = draw(random)
        try:
            swing = fit_swing(Series(case.t, case.y, "rad"), law=law)
        except NothingToMeasure:
            lost += 1
            continue
        of_period.append((swing.period.value - case.period) / case.bound_period)
        of_gamma.append((swing.decay_rate.value - case.gamma) / case.bound_gamma)
    return np.array(of_period), np.array(of_gamma), lost


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--count", type=int, default=500)
    parser.add_argument("--seed", type=int, default=1)
    options = parser.parse_args()
    of_period, of_gamma, lost = ratios(options.count, options.seed)
    print(f"{options.count} series, {lost} without an answer; root mean square of error over bound:")
    for name, values in (("period", of_period), ("decay rate", of_gamma)):
        spread = np.sqrt(np.mean(values**2))
        print(
            f"  {name:10s} {spread:.3f} ± {spread / np.sqrt(2 * len(values)):.3f}   worst {np.abs(values).max():.1f}"
        )


if __name__ == "__main__":
    main()
