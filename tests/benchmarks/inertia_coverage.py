"""Do 95 % intervals of single measurements hold the truth in 95 % of simulated workshops?

    python -m tests.benchmarks.inertia_coverage --count 1000

Each case draws a true article on a true bench; tape, scale, clock, protractor and clip err as they are said to, and the rig
file says what they read. The true period comes of plain mechanics written here, not of the package. Two intervals are
counted: y ± k u by the law of propagation (k for 95.45 %, as stated in results) and the Monte Carlo interval (95 %).
"""

from __future__ import annotations

import argparse
import math
import time
from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np

from swingtrack.inertia import SwingFacts, moment_of_inertia
from swingtrack.records import Article, Inertia, Quantity, Rig, Suspension

CLOCK = 50e-6  # limits, relative
PERIOD = 1e-4  # of a clip's fit, standard, relative


@dataclass
class Bench:
    """Reads true values off with tape and scale, and keeps what was read."""

    rng: np.random.Generator
    read: dict[str, Quantity] = field(default_factory=dict)

    def within(self, key: str, true: float, half: float, unit: str = "m") -> float:
        """Write a reading that lies anywhere within ±half of the truth; gives the truth back."""
        value = true + self.rng.uniform(-half, half)
        self.read[key] = Quantity(value, half / math.sqrt(3.0), unit, shape="rectangular")
        return true

    def about(self, key: str, true: float, u: float, unit: str = "m", *, readings: int = 0) -> float:
        """Write a reading that is normal about the truth; with `readings`, the mean of so many and their own scatter."""
        if readings:
            taken = true + u * self.rng.standard_normal(readings)
            scatter = float(taken.std(ddof=1)) / math.sqrt(readings)
            self.read[key] = Quantity(float(taken.mean()), scatter, unit, dof=readings - 1)
        else:
            self.read[key] = Quantity(true + u * self.rng.standard_normal(), u, unit)
        return true

    def rig(self, kind: str, *, strings: int = 2) -> Rig:
        """The rig file."""
        dimensions = {k: q for k, q in self.read.items() if k not in ("mass", "gravity")}
        mass = self.read.get("mass")
        return Rig(
            Article("paddle", mass),
            Suspension(kind, dimensions, strings=strings),
            gravity=self.read.get("gravity"),
        )

    def swing(self, true_s: float, *, cycles: int = 0) -> Quantity:
        """The period as the clip gives it, on a clock that runs off; `cycles` makes it a mean of so many runs."""
        stretch = 1.0 + self.rng.uniform(-CLOCK, CLOCK)
        if cycles:
            taken = true_s * stretch * (1.0 + PERIOD * self.rng.standard_normal(cycles))
            return Quantity(
                float(taken.mean()), float(taken.std(ddof=1)) / math.sqrt(cycles), "s", dof=cycles - 1
            )
        return Quantity(true_s * stretch * (1.0 + PERIOD * self.rng.standard_normal()), PERIOD * true_s, "s")


def _place(bench: Bench) -> float:
    return bench.within("gravity", bench.rng.uniform(9.79, 9.82), 2e-4, "m/s^2")


def bifilar(bench: Bench) -> tuple[float, Rig, float]:
    """Two strings, slanted now and then, the centre of mass off the middle of parallel ones."""
    rng = bench.rng
    mass = bench.within("mass", rng.uniform(0.3, 2.0), 5e-4, "kg")
    g = _place(bench)
    gyration = rng.uniform(0.1, 0.4)
    a = b = 0.5 * bench.within("upper_spacing", rng.uniform(0.2, 0.5), 5e-4)
    offset = 0.0
    if rng.random() < 0.5:
        b = 0.5 * bench.within("lower_spacing", 2.0 * a * rng.uniform(0.7, 1.2), 5e-4)
    else:
        offset = bench.within("centre_offset", rng.uniform(5e-3, 0.2 * a), 2e-3)
    length = bench.within("length", rng.uniform(0.8, 2.0), 1e-3)
    drop = math.sqrt(length**2 - (a - b) ** 2)
    truth = mass * gyration**2
    return (
        truth,
        bench.rig("bifilar"),
        2 * math.pi * math.sqrt(truth * drop / (mass * g * (a * b - offset**2))),
    )


def trifilar(bench: Bench) -> tuple[float, Rig, float]:
    """Three to six strings; the tape read five times."""
    rng = bench.rng
    mass = bench.within("mass", rng.uniform(0.3, 2.0), 5e-4, "kg")
    g = _place(bench)
    gyration = rng.uniform(0.1, 0.3)
    upper = bench.about("upper_radius", rng.uniform(0.1, 0.25), 4e-4, readings=5)
    lower = bench.about("lower_radius", upper * rng.uniform(0.8, 1.2), 4e-4, readings=5)
    length = bench.within("length", rng.uniform(0.8, 1.8), 1e-3)
    truth = mass * gyration**2
    drop = math.sqrt(length**2 - (upper - lower) ** 2)
    period = 2 * math.pi * math.sqrt(truth * drop / (mass * g * upper * lower))
    return truth, bench.rig("trifilar", strings=int(rng.integers(3, 7))), period


def torsion_wire(bench: Bench) -> tuple[float, Rig, float]:
    """A wire by its diameter, modulus and length, or by a body of known moment."""
    rng = bench.rng
    truth = rng.uniform(1e-3, 2e-2)
    if rng.random() < 0.5:
        diameter = bench.about("wire_diameter", rng.uniform(0.3e-3, 1e-3), 1e-6, readings=8)
        modulus = bench.within("shear_modulus", rng.uniform(75e9, 82e9), 1.0e9, "Pa")
        length = bench.within("length", rng.uniform(0.5, 1.5), 1e-3)
        stiffness = math.pi * modulus * diameter**4 / (32.0 * length)
    else:
        known = bench.within("reference_moment", rng.uniform(2e-3, 1e-2), 1e-5, "kg m^2")
        stiffness = rng.uniform(5e-4, 0.05)
        period = 2 * math.pi * math.sqrt(known / stiffness)
        bench.about("reference_period", period, 1e-3 * period, "s")
    return truth, bench.rig("torsion-wire"), 2 * math.pi * math.sqrt(truth / stiffness)


def knife_edge(bench: Bench) -> tuple[float, Rig, float]:
    """A pendulum on an edge."""
    rng = bench.rng
    mass = bench.within("mass", rng.uniform(0.3, 2.0), 5e-4, "kg")
    g = _place(bench)
    gyration = rng.uniform(0.15, 0.4)
    arm = bench.within("pivot_to_centre", gyration * rng.uniform(0.6, 1.4), 5e-4)
    truth = mass * gyration**2
    return truth, bench.rig("knife-edge"), 2 * math.pi * math.sqrt((truth + mass * arm**2) / (mass * g * arm))


def two_edge(bench: Bench) -> tuple[float, Rig, float]:
    """A reversible pendulum, its edges well off the conjugate points."""
    rng = bench.rng
    mass = bench.within("mass", rng.uniform(0.3, 2.0), 5e-4, "kg")
    g = _place(bench)
    k = rng.uniform(0.2, 0.4)
    first = k * rng.uniform(1.1, 1.6)
    second = first * rng.uniform(0.3, 0.45)
    bench.within("edge_separation", first + second, 3e-4)
    other = 2 * math.pi * math.sqrt((k**2 + second**2) / (g * second))
    bench.about("second_period", other, PERIOD * other, "s")
    return mass * k**2, bench.rig("two-edge"), 2 * math.pi * math.sqrt((k**2 + first**2) / (g * first))


KINDS: dict[str, Callable[[Bench], tuple[float, Rig, float]]] = {
    "bifilar": bifilar,
    "trifilar": trifilar,
    "torsion-wire": torsion_wire,
    "knife-edge": knife_edge,
    "two-edge": two_edge,
}


def one_case(kind: str, rng: np.random.Generator) -> tuple[float, Inertia]:
    """The truth, and what is measured."""
    bench = Bench(rng)
    truth, rig, period = KINDS[kind](bench)
    facts = SwingFacts(clock_relative_u=CLOCK / math.sqrt(3.0))
    return truth, moment_of_inertia(
        rig, bench.swing(period, cycles=10 if rng.random() < 0.3 else 0), facts=facts
    )


@dataclass
class Held:
    """How often each interval held the truth, the mean and spread of (y − truth)/u, and the mean relative u."""

    linear: float
    monte_carlo: float
    bias: float
    spread: float
    relative_u: float


def coverage(kind: str, count: int, seed: int) -> Held:
    """Simulate `count` workshops of one kind."""
    rng = np.random.default_rng(seed)
    rows = []
    for _ in range(count):
        truth, found = one_case(kind, rng)
        assert found.monte_carlo is not None
        low, high = found.monte_carlo.interval_95
        error = found.moment.value - truth
        rows.append(
            (
                abs(error) <= found.expanded,
                low <= truth <= high,
                error / found.moment.u,
                found.moment.relative_u,
            )
        )
    linear, drawn, scaled, relative = (np.array(column, dtype=float) for column in zip(*rows, strict=True))
    return Held(linear.mean(), drawn.mean(), scaled.mean(), scaled.std(), relative.mean())


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--count", type=int, default=1000, help="workshops of each kind")
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--kind", choices=list(KINDS), help="one kind alone")
    asked = parser.parse_args()
    print(
        f"{'suspension':14} {'y ± k u':>8} {'Monte Carlo':>12} {'bias':>7} {'spread':>7} {'u/y':>8} {'seconds':>8}"
    )
    for kind in [asked.kind] if asked.kind else KINDS:
        began = time.perf_counter()
        held = coverage(kind, asked.count, asked.seed)
        took = time.perf_counter() - began
        print(
            f"{kind:14} {100 * held.linear:7.1f}% {100 * held.monte_carlo:11.1f}% {held.bias:7.3f} {held.spread:7.3f} "
            f"{held.relative_u:8.1e} {took:8.1f}"
        )


if __name__ == "__main__":
    main()
