"""How long the fit takes, beside a plain damped sine and lmfit on the same data.

    python -m tests.benchmarks.fit_speed [--count N]

Processor time, the smallest of N runs. The full fit finds the free part, chooses the damping law, finds the second mode
5 % away and fits the exact equation with all terms.
"""

from __future__ import annotations

import argparse
import time
from collections.abc import Callable

import lmfit
import numpy as np

from swingtrack.records import Series
from swingtrack.signal import fit_swing
from swingtrack.signal.solver import minimise
from tests.signal.truth import Losses, bifilar, integrate

RIG = bifilar(1.0, 0.15, 0.15, 0.15)


def damped(p: np.ndarray, t: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """A exp(−γt) cos(ωt + φ) + B and its derivatives."""
    fade, turn = np.exp(-p[3] * t), p[1] * t + p[2]
    c, s = fade * np.cos(turn), fade * np.sin(turn)
    return p[0] * c + p[4], np.column_stack([c, -p[0] * t * s, -p[0] * s, -p[0] * t * c, np.ones_like(t)])


def best(run: Callable[[], object], count: int) -> float:
    """Least processor time, s."""
    times = []
    for _ in range(count):
        began = time.process_time()
        run()
        times.append(time.process_time() - began)
    return min(times)


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--count", type=int, default=5)
    options = parser.parse_args()
    random = np.random.default_rng(1)
    for n, seconds, slow in ((1800, 30.0, 1.0), (18000, 300.0, 0.1)):
        t = np.arange(n) * seconds / n
        y = integrate(t, RIG, 1.1, 0.35, Losses(0.02 * slow, 0.02 * slow, 0.0002 * slow))
        y = y + 0.035 * np.exp(-0.01 * slow * t) * np.cos(2 * np.pi * t * 1.05 / 1.1 + 0.7)
        y = y + 0.001 * random.standard_normal(n)
        law = RIG.law()
        full = best(lambda t=t, y=y, law=law: fit_swing(Series(t, y, "rad"), law=law), options.count)
        truth = np.array([0.35, 5.7, 0.1, 0.03 * slow, 0.0])
        z = damped(truth, t)[0] + 0.001 * random.standard_normal(n)
        start = truth * [1.02, 1.0002, 1, 1.05, 1]

        def residuals(p: np.ndarray, t: np.ndarray = t, z: np.ndarray = z) -> tuple[np.ndarray, np.ndarray]:
            seen, jacobian = damped(p, t)
            return seen - z, jacobian

        plain = best(lambda r=residuals, s=start: minimise(r, s), options.count)
        parameters = lmfit.Parameters()
        for i, value in enumerate(start):
            parameters.add(f"p{i}", value=float(value))
        theirs = best(
            lambda p=parameters, r=residuals: lmfit.minimize(
                lambda q: r(np.array([q[f"p{i}"].value for i in range(5)]))[0], p
            ),
            options.count,
        )
        print(
            f"{n:6d} samples: full fit {full:.3f} s; plain damped sine {1e3 * plain:.1f} ms, "
            f"lmfit {1e3 * theirs:.1f} ms ({theirs / plain:.1f} times)"
        )


if __name__ == "__main__":
    main()
