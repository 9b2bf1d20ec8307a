"""Small-swing period of noise-free exact integrations against the fit's: relative errors in a table.

python -m tests.benchmarks.fit_exact [--count N]
"""

from __future__ import annotations

import argparse
import itertools
import time

import numpy as np

from swingtrack.records import Series
from swingtrack.signal import fit_swing
from tests.signal.truth import Losses, Rig, bifilar, integrate, knife_edge

PERIOD_S = 1.1
LENGTH_S = 30.0
SAMPLES = 1800
RIGS = {
    "bifilar D/L 0.25": lambda: bifilar(1.0, 0.125, 0.125, 0.12),
    "bifilar 0.6 over 0.3": lambda: bifilar(1.0, 0.3, 0.15, 0.15),
    "bifilar 0.2 over 0.8": lambda: bifilar(1.0, 0.1, 0.4, 0.3),
    "bifilar D/L 1, k 0.3": lambda: bifilar(1.0, 0.5, 0.5, 0.3),
    "knife edge": knife_edge,
}
LOSSES = {
    "viscous": Losses(0.02, 0, 0),
    "quadratic": Losses(0, 0.08, 0),
    "dry": Losses(0, 0, 0.0006),
    "viscous+quadratic": Losses(0.01, 0.04, 0),
    "viscous+dry": Losses(0.01, 0, 0.0005),
    "all three": Losses(0.01, 0.03, 0.0004),
}
ANGLES_DEG = (5, 10, 20, 30, 45)


def error(rig: Rig, losses: Losses, degrees: float, second: bool) -> tuple[float, float, str]:
    """Relative error of the period, seconds the fit took, and the damping law it chose."""
    t = np.arange(SAMPLES) * LENGTH_S / SAMPLES
    amplitude = float(np.radians(degrees))
    # Dry friction in proportion, so that it does not stop the smallest swings.
    scaled = Losses(losses.gamma, losses.beta, losses.dry * amplitude / np.radians(20))
    y = integrate(t, rig, PERIOD_S, amplitude, scaled)
    if second:
        y = y + 0.1 * amplitude * np.exp(-0.01 * t) * np.cos(2 * np.pi * t * 1.05 / PERIOD_S + 0.7)
    began = time.perf_counter()
    swing = fit_swing(Series(t, y, "rad"), law=rig.law())
    return swing.period.value / PERIOD_S - 1, time.perf_counter() - began, swing.damping_law


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--count", type=int, default=10**6, help="cases at most")
    parser.add_argument("--second", action="store_true", help="with a second mode only")
    options = parser.parse_args()
    cases = list(itertools.product(RIGS, LOSSES, ANGLES_DEG, (True,) if options.second else (False, True)))
    worst = 0.0
    step = max(len(cases) // options.count, 1)
    print(f"{'rig':22s} {'damping':18s} {'start':>5s} {'2nd':>4s} {'dT/T':>9s} {'s':>6s}  law")
    for rig, losses, degrees, second in cases[::step]:
        wrong, seconds, law = error(RIGS[rig](), LOSSES[losses], degrees, second)
        worst = max(worst, abs(wrong))
        print(
            f"{rig:22s} {losses:18s} {degrees:4d}° {'yes' if second else 'no':>4s} {wrong:9.1e} {seconds:6.2f}  {law}"
        )
    print(f"worst {worst:.1e}")


if __name__ == "__main__":
    main()
