"""Do 95 % intervals of combined results hold the truth in 95 % of simulated workshops?

    python -m tests.benchmarks.combine_coverage --count 1000

Each case draws a bench, an article and what tape, scale, clock and clips say of them, and combines the runs.
"""

from __future__ import annotations

import argparse
import time
from collections.abc import Callable

import numpy as np

from swingtrack.inertia.budget import coverage_factor
from swingtrack.inertia.combine import CombinedResult, Run
from swingtrack.inertia.combine_added_weights import fit_added_weights
from swingtrack.inertia.combine_reference import compare_with_reference
from swingtrack.inertia.combine_repeats import combine_repeats
from swingtrack.inertia.combine_tare import subtract_tare
from swingtrack.inertia.parallel_axis import fit_parallel_edges
from swingtrack.inertia.suspension import model_of
from swingtrack.inertia.sway_gyration import gyration_by_sway
from swingtrack.inertia.tensor import fit_tensor
from swingtrack.records import AddedWeight, Article, Quantity, Rig, Suspension
from tests.inertia.combine_workshops import BENCHES, CLOCK_RELATIVE_U, Workshop, article, true_sum

# truth, answer, and its 95 % interval by Monte Carlo where it has one
Case = tuple[float, Quantity, tuple[float, float] | None]


def _drawn(result: CombinedResult) -> tuple[float, float]:
    assert result.monte_carlo is not None
    return result.monte_carlo.interval_95


def repeats(rng: np.random.Generator, kind: str) -> list[Case]:
    shop = Workshop(rng)
    bench = BENCHES[kind](shop)
    mass, moment = rng.uniform(0.5, 2.0), rng.uniform(0.01, 0.05)
    paddle = article(shop, "paddle", mass)
    result = combine_repeats([bench.run(f"run {i}", paddle, mass, moment) for i in range(5)])
    return [(moment, result.moment, _drawn(result))]


def tare(rng: np.random.Generator, kind: str) -> list[Case]:
    shop = Workshop(rng)
    bench = BENCHES[kind](shop)
    mass, moment = rng.uniform(0.5, 2.0), rng.uniform(0.01, 0.05)
    light, small = 0.3 * mass, rng.uniform(0.1, 0.5) * moment
    both = article(shop, "paddle", mass + light)
    cradle = article(shop, "cradle", light)
    result = subtract_tare(
        [bench.run("both", both, mass + light, moment + small)], [bench.run("cradle", cradle, light, small)]
    )
    return [(moment, result.moment, _drawn(result))]


def reference(rng: np.random.Generator, kind: str) -> list[Case]:
    shop = Workshop(rng)
    bench = BENCHES[kind](shop)
    mass, moment = rng.uniform(0.5, 2.0), rng.uniform(0.01, 0.05)
    known = moment * rng.uniform(0.5, 2.0)
    paddle = article(shop, "paddle", mass)
    bar = article(
        shop, "bar", 1.0, expected_moment=shop.measure("known", known, "kg m^2", limits=1e-3 * known)
    )
    result = compare_with_reference(
        [bench.run("paddle", paddle, mass, moment)], [bench.run("bar", bar, 1.0, known)]
    )
    return [(moment, result.moment, _drawn(result))]


def added_weights(rng: np.random.Generator, kind: str) -> list[Case]:
    shop = Workshop(rng)
    bench = BENCHES[kind](shop)
    mass, moment = rng.uniform(0.5, 2.0), rng.uniform(0.01, 0.05)
    runs = []
    far = np.sqrt(moment / 0.4)
    for step, distance in enumerate((None, 0.5 * far, 0.75 * far, far)):
        pair = [] if distance is None else [(0.2, distance), (0.2, distance)]
        extra_mass, extra = true_sum(pair)
        if step == 0:
            paddle = article(shop, "paddle", mass)
            weights = [shop.measure(f"weight {name}", 0.2, "kg", limits=0.05e-3) for name in "AB"]
        added = tuple(
            AddedWeight(m, shop.measure(f"{m.text} at step {step}", d, "m", limits=0.2e-3))
            for m, (_, d) in zip(weights, pair, strict=False)
        )
        hung = Article(paddle.name, paddle.mass, added=added)
        runs.append(bench.run(f"step {step}", hung, mass + extra_mass, moment + extra))
    result = fit_added_weights(runs)
    return [(moment, result.moment, _drawn(result))]


def tensor(rng: np.random.Generator, kind: str) -> list[Case]:
    shop = Workshop(rng)
    bench = BENCHES[kind](shop)
    mass = rng.uniform(0.5, 2.0)
    x, y, z = rng.uniform(0.005, 0.01), rng.uniform(0.015, 0.025), rng.uniform(0.035, 0.05)
    turned, _ = np.linalg.qr(rng.standard_normal((3, 3)))
    true = turned @ np.diag([(y + z) / 2, (x + z) / 2, (x + y) / 2]) @ turned.T
    written = article(shop, "paddle", mass)
    axes = [*np.eye(3), *(np.array(a) / np.sqrt(2) for a in ((1, 1, 0), (1, 0, 1), (0, 1, 1), (1, -1, 0)))]
    tilt = np.radians(0.5)
    runs = []
    for i, axis in enumerate(axes):
        hung = axis + tilt * rng.standard_normal(3)
        hung /= np.linalg.norm(hung)
        said = Article(written.name, written.mass, axis=tuple(axis))
        runs.append(bench.run(f"axis {i}", said, mass, float(hung @ true @ hung)))
    result = fit_tensor(runs, axis_u_rad=float(tilt))
    truths = np.linalg.eigvalsh(true)
    elements = [(0, 0), (1, 2)]
    cases = [
        (float(truth), found.moment, found.monte_carlo.interval_95)
        for truth, found in zip(truths, result.principal, strict=True)
    ]
    return cases + [(float(true[i, j]), result.matrix[i][j], None) for i, j in elements]


def edges(rng: np.random.Generator, kind: str) -> list[Case]:
    """Three holes drilled on a line at known distances from one another, the centre of mass known to 5 mm."""
    shop = Workshop(rng)
    mass, k, off = rng.uniform(0.5, 2.0), rng.uniform(0.2, 0.4), rng.uniform(-5e-3, 5e-3)
    paddle, clock = article(shop, "paddle", mass), shop.clock()
    gravity = shop.measure("gravity", 9.8094, "m/s^2", limits=2e-4)
    runs = []
    for number, arm in enumerate((0.15, 0.3, 0.5)):
        said = shop.measure(f"edge {number}", arm, "m", limits=0.2e-3)
        true = {"mass": mass, "gravity": 9.8094, "pivot_to_centre": arm + off}
        period = model_of(kind).period(true, mass * k**2)
        rig = Rig(paddle, Suspension(kind, {"pivot_to_centre": said}), gravity=gravity)
        runs.append(Run(f"edge {number}", rig, shop.period(period, clock), clock_relative_u=CLOCK_RELATIVE_U))
    result = fit_parallel_edges(runs)
    return [(mass * k**2, result.moment, _drawn(result))]


def sway(rng: np.random.Generator, kind: str) -> list[Case]:
    """Yaw and sway of one clip; the stated length is of no account."""
    shop = Workshop(rng)
    spacing, mass = rng.uniform(0.2, 0.4), rng.uniform(0.5, 2.0)
    k, length, clock = spacing * rng.uniform(0.3, 0.45), rng.uniform(0.8, 1.6), shop.clock()
    bench = {
        "length": Quantity(1.0, 0.1, "m"),
        "upper_spacing": shop.measure("spacing", spacing, "m", limits=0.5e-3),
    }
    true = {"mass": mass, "gravity": 9.8094, "length": length, "upper_spacing": spacing}
    yaw = shop.period(model_of(kind).period(true, mass * k**2), clock)
    swayed = shop.period(2 * np.pi * np.sqrt(length / 9.8094), clock, relative_u=1e-3)
    rig = Rig(article(shop, "paddle", mass), Suspension(kind, bench))
    result = gyration_by_sway(Run("clip", rig, yaw, sway_period=swayed, clock_relative_u=CLOCK_RELATIVE_U))
    return [(mass * k**2, result.moment, _drawn(result))]


METHODS: dict[str, Callable[[np.random.Generator, str], list[Case]]] = {
    "repeats": repeats,
    "tare": tare,
    "reference": reference,
    "added weights": added_weights,
    "tensor": tensor,
    "edges": edges,
    "sway": sway,
}


KINDS = {method: tuple(BENCHES) for method in METHODS} | {"edges": ("knife-edge",), "sway": ("bifilar",)}


def coverage(method: str, kind: str, *, count: int, seed: int) -> tuple[float, float, float]:
    """Share of 95 % intervals that hold the truth (law of propagation, Monte Carlo), and rms of (answer − truth)/u."""
    held, drawn, scaled = [], [], []
    for case in range(count):
        rng = np.random.default_rng([seed, case])
        for truth, answer, interval in METHODS[method](rng, kind):
            error = (answer.value - truth) / answer.u
            held.append(abs(error) <= coverage_factor(answer.dof, 95.0))
            scaled.append(error)
            if interval is not None:
                drawn.append(interval[0] <= truth <= interval[1])
    return float(np.mean(held)), float(np.mean(drawn)), float(np.sqrt(np.mean(np.square(scaled))))


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--count", type=int, default=100)
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--method", choices=list(METHODS), action="append")
    wanted = parser.parse_args()
    print(f"{'method':<15}{'suspension':<14}{'by law':>9}{'by draws':>10}{'rms(e/u)':>10}{'s a case':>10}")
    for method in wanted.method or METHODS:
        for kind in KINDS[method]:
            begun = time.perf_counter()
            law, draws, rms = coverage(method, kind, count=wanted.count, seed=wanted.seed)
            each = (time.perf_counter() - begun) / wanted.count
            print(
                f"{method:<15}{kind:<14}{100 * law:>8.1f}%{100 * draws:>9.1f}%{rms:>10.3f}{each:>10.3f}",
                flush=True,
            )


if __name__ == "__main__":
    main()
