"""Simulated workshops: a true article on a true bench, measured with tape, scale and clock that err as they are said to."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from swingtrack.inertia.combine import Run
from swingtrack.inertia.suspension import model_of
from swingtrack.records import Article, Quantity, Rig, Suspension

PERIOD_RELATIVE_U = 1e-4
CLOCK_RELATIVE_U = 2e-5


@dataclass
class Workshop:
    """Truth beside what is written in the rig files; `rng` decides both. Every number is measured once and written."""

    rng: np.random.Generator
    true: dict[str, float] = field(default_factory=dict)
    written: dict[str, Quantity] = field(default_factory=dict)

    def measure(self, name: str, value: float, unit: str, *, limits: float) -> Quantity:
        """A reading of `value` with an error anywhere within ±limits."""
        reading = value + self.rng.uniform(-limits, limits)
        quantity = Quantity(reading, limits / math.sqrt(3.0), unit, shape="rectangular", text=name)
        self.true[name], self.written[name] = value, quantity
        return quantity

    def period(self, true_s: float, clock: float, *, relative_u: float = PERIOD_RELATIVE_U) -> Quantity:
        """A period as a clip gives it, on a clock that runs off by `clock`."""
        error = relative_u * self.rng.standard_normal()
        return Quantity(
            true_s * (1.0 + clock + error), true_s * math.hypot(relative_u, CLOCK_RELATIVE_U), "s"
        )

    def clock(self) -> float:
        return float(CLOCK_RELATIVE_U * math.sqrt(3.0) * self.rng.uniform(-1.0, 1.0))


@dataclass
class Bench:
    """A suspension of one kind, its true and its written dimensions, on which articles are swung."""

    shop: Workshop
    kind: str
    true: dict[str, float]
    written: dict[str, Quantity]
    clock_error: float

    def run(self, name: str, article: Article, true_mass: float, true_moment: float, **more: Any) -> Run:
        """Swing an article of `true_moment` (weights included); its period is that of the true bench."""
        x = {**self.true, "mass": true_mass}
        period = model_of(self.kind).period(x, true_moment)
        rig = Rig(article, Suspension(self.kind, self.written), gravity=self.shop.written.get("gravity"))
        return Run(
            name,
            rig,
            self.shop.period(period, self.clock_error, **more),
            clock_relative_u=CLOCK_RELATIVE_U,
        )


def bifilar_bench(shop: Workshop, *, tape: float = 0.5e-3) -> Bench:
    true = {"length": shop.rng.uniform(0.8, 1.6), "upper_spacing": shop.rng.uniform(0.2, 0.4)}
    true["lower_spacing"] = true["upper_spacing"] * shop.rng.uniform(0.9, 1.1)
    written = {key: shop.measure(key, value, "m", limits=tape) for key, value in true.items()}
    true["gravity"] = 9.8094
    shop.measure("gravity", true["gravity"], "m/s^2", limits=2e-4)
    return Bench(shop, "bifilar", true, written, shop.clock())


def trifilar_bench(shop: Workshop, *, tape: float = 0.5e-3) -> Bench:
    true = {"length": shop.rng.uniform(0.8, 1.6), "upper_radius": shop.rng.uniform(0.1, 0.2)}
    written = {key: shop.measure(key, value, "m", limits=tape) for key, value in true.items()}
    true["gravity"] = 9.8094
    shop.measure("gravity", true["gravity"], "m/s^2", limits=2e-4)
    return Bench(shop, "trifilar", true, written, shop.clock())


def torsion_bench(shop: Workshop) -> Bench:
    true = {"stiffness": shop.rng.uniform(0.01, 0.1)}
    written = {
        "stiffness": shop.measure("stiffness", true["stiffness"], "N m/rad", limits=0.02 * true["stiffness"])
    }
    return Bench(shop, "torsion-wire", true, written, shop.clock())


BENCHES: dict[str, Callable[[Workshop], Bench]] = {
    "bifilar": bifilar_bench,
    "trifilar": trifilar_bench,
    "torsion-wire": torsion_bench,
}


def article(shop: Workshop, name: str, mass: float, *, scale: float = 0.5e-3, **more: Any) -> Article:
    """An article as it is written in a rig, weighed on a scale with limits `scale`."""
    return Article(name, shop.measure(f"mass {name}", mass, "kg", limits=scale), **more)


def true_sum(weights: list[tuple[float, float]]) -> tuple[float, float]:
    """Mass and moment of point weights (mass, distance)."""
    return sum(m for m, _ in weights), sum(m * d * d for m, d in weights)
