"""Random trial sheets: how often a miscount is named, how often a good run is accused, coverage of the interval.

python -m tests.benchmarks.stopwatch_sheets --count 5000 --seed 1
"""

from __future__ import annotations

import argparse
from dataclasses import dataclass

import numpy as np
from scipy.special import stdtrit

from swingtrack.signal.stopwatch import Run, TrialSheet, assess_trials


@dataclass(frozen=True)
class Figures:
    """Shares over all sheets: miscounts named where detectable, sheets with a false accusation, coverage."""

    sheets: int
    detectable: int
    detected_share: float
    accused_share: float
    coverage: float


def judge_sheets(*, count: int, seed: int) -> Figures:
    """Draw sheets (scatter 0.05 to 0.2 s, 3 to 15 trials, one miscount in a third of them) and judge them."""
    rng = np.random.default_rng(seed)
    detectable = named = accused = held = 0
    for _ in range(count):
        trials, scatter, period = int(rng.integers(3, 16)), rng.uniform(0.05, 0.2), rng.uniform(0.5, 4.0)
        counts = (
            rng.choice([5, 10, 20], trials)
            if rng.random() < 0.5
            else np.full(trials, rng.choice([5, 10, 20]))
        )
        seconds = counts * period + rng.normal(0.0, scatter, trials)
        written, wrong = counts.copy(), -1
        if rng.random() < 1.0 / 3.0:
            wrong = int(rng.integers(trials))
            written[wrong] += rng.choice([-1, 1])
        found = assess_trials(
            TrialSheet(tuple(Run(int(n), float(t)) for n, t in zip(written, seconds, strict=True)))
        )
        said = {
            i: trial.swings_that_fit for i, trial in enumerate(found.trials) if trial.verdict == "miscount"
        }
        if wrong >= 0 and period > 5.0 * scatter:
            detectable += 1
            named += said.get(wrong) == counts[wrong]
        accused += any(i != wrong for i in said)
        if wrong < 0 or period > 5.0 * scatter:
            k = float(stdtrit(found.period.dof, 0.975))
            held += abs(found.period.value - period) <= k * found.period.u
        else:
            held += 1  # an undetectable miscount can't be told from the hand's scatter
    return Figures(count, detectable, named / max(detectable, 1), accused / count, held / count)


def main() -> None:
    """Print the figures."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--count", type=int, default=1000)
    parser.add_argument("--seed", type=int, default=1)
    chosen = parser.parse_args()
    figures = judge_sheets(count=chosen.count, seed=chosen.seed)
    print(f"sheets {figures.sheets}, detectable miscounts {figures.detectable}")
    print(
        f"named {100 * figures.detected_share:.2f} %, sheets with a false accusation {100 * figures.accused_share:.2f} %"
    )
    print(f"coverage of the 95 % interval {100 * figures.coverage:.1f} %")


if __name__ == "__main__":
    main()
