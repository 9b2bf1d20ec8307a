"""How often the 95 % intervals of period and decay rate hold the truth.

    python -m tests.benchmarks.fit_coverage [--count N] [--seed S]

Series on a torsion wire with white and AR(1) noise (0, 0.5, 0.9), dropped frames and bad frames, uneven lengths.
"""

from __future__ import annotations

import argparse

import numpy as np
from scipy.stats import t as student

from swingtrack.errors import NothingToMeasure
from swingtrack.records import Series
from swingtrack.signal import fit_swing
from tests.signal.truth import torsion_wire


def noise(random: np.random.Generator, n: int, memory: float) -> np.ndarray:
    """AR(1) noise of unit standard deviation."""
    e = random.standard_normal(n) * np.sqrt(1 - memory**2)
    r = np.empty(n)
    r[0] = random.standard_normal()
    for i in range(1, n):
        r[i] = memory * r[i - 1] + e[i]
    return r


def one(random: np.random.Generator, memory: float) -> tuple[bool, bool, float, float] | None:
    """Whether the intervals of period and decay rate hold the truth, and the normalised errors."""
    n = int(np.exp(random.uniform(np.log(400), np.log(4000))))
    period = random.uniform(0.8, 2.0)
    length = n / 30
    if length < 8 * period:
        length = 8 * period
    gamma = random.uniform(0.1, 1.5) / length
    size = np.exp(random.uniform(np.log(0.003), np.log(0.2)))
    t = np.arange(n) * length / n
    omega = np.sqrt((2 * np.pi / period) ** 2 - gamma**2)
    y = np.exp(-gamma * t) * np.cos(omega * t + random.uniform(0, 6.28)) + size * noise(random, n, memory)
    bad = random.random(n) < 0.005
    y[bad] += random.choice([-1, 1], bad.sum()) * size * random.uniform(8, 40, bad.sum())
    kept = random.random(n) > 0.05
    try:
        swing = fit_swing(Series(t[kept], y[kept], "rad"), law=torsion_wire().law(3.0))
    except NothingToMeasure:
        return None
    result = []
    for quantity, truth in ((swing.period, period), (swing.decay_rate, gamma)):
        k = student.ppf(0.975, quantity.dof)
        result.append((abs(quantity.value - truth) <= k * quantity.u, (quantity.value - truth) / quantity.u))
    return result[0][0], result[1][0], result[0][1], result[1][1]


def coverage(count: int, seed: int, memory: float) -> tuple[float, float, float, float, int]:
    """Shares of intervals that hold the truth, root mean squares of normalised errors, series without an answer."""
    random = np.random.default_rng(seed)
    found = [one(random, memory) for _ in range(count)]
    there = np.array([f for f in found if f is not None], dtype=float)
    rms = np.sqrt(np.mean(there[:, 2:] ** 2, axis=0))
    return (*there[:, :2].mean(axis=0), *rms, count - len(there))


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--count", type=int, default=1000, help="series in all")
    parser.add_argument("--seed", type=int, default=1)
    options = parser.parse_args()
    memories = (0.0, 0.5, 0.9)
    each = max(options.count // len(memories), 1)
    print("memory  period  decay   rms period, decay   no answer")
    for memory in memories:
        a, b, c, d, lost = coverage(each, options.seed, memory)
        print(f"{memory:6.1f}  {100 * a:5.1f}%  {100 * b:5.1f}%  {c:6.2f} {d:6.2f} {lost:14d}")


if __name__ == "__main__":
    main()
