"""Make the sample clips, trial sheets and expected answers anew: python samples/make_samples.py

Everything in them is invented: the rigs of Reedwater Paddles, a workshop that builds and tunes kayak paddles.
"""

from __future__ import annotations

import json
import math
import sys
from dataclasses import dataclass, field
from pathlib import Path

import numpy as np

from swingtrack.rehearse import Damping, Film, RehearsalSettings, Stage, Sway, mechanism_of, rehearse_clip
from swingtrack.rig import read_rig

HERE = Path(__file__).resolve().parent


@dataclass(frozen=True)
class Sample:
    """One sample: the name of its files, and how its clip is made."""

    name: str
    settings: RehearsalSettings
    trials: tuple[int, ...] = ()
    miscount: int | None = None
    note: str = field(default="")


SAMPLES = (
    Sample(
        "paddle-above",
        RehearsalSettings(
            moment_kg_m2=0.1132,
            amplitude_rad=math.radians(8.0),
            damping=Damping(rate_per_s=0.008),
            film=Film(duration_s=30.0, crf=24, noise=0.8, uneven_ms=0.4),
            stage=Stage(distance_m=2.6, dot_radius_m=0.78, dot_diameter_m=0.06),
            seed=11,
        ),
        trials=(10, 10, 10, 10, 10),
        miscount=3,
    ),
    Sample(
        "blade-side",
        RehearsalSettings(
            moment_kg_m2=0.00462,
            amplitude_rad=math.radians(9.0),
            damping=Damping(rate_per_s=0.012, quadratic=0.02),
            release_s=1.5,
            film=Film(duration_s=30.0, crf=24, noise=0.8, uneven_ms=0.4, dropped_share=0.01),
            stage=Stage(
                camera="side", distance_m=1.0, dot_radius_m=0.16, dot_diameter_m=0.012, dot_bgr=(50, 225, 245)
            ),
            seed=12,
        ),
        trials=(20, 30, 40),
    ),
    Sample(
        "shaft-trifilar",
        RehearsalSettings(
            moment_kg_m2=0.0187,
            amplitude_rad=math.radians(14.0),
            damping=Damping(rate_per_s=0.01),
            sway=(Sway(amplitude_m=0.002, frequency_hz=math.sqrt(9.8094 / 1.35) / (2.0 * math.pi)),),
            film=Film(duration_s=30.0, crf=24, noise=0.8, uneven_ms=0.4),
            stage=Stage(
                distance_m=1.6, dot_radius_m=0.40, dot_diameter_m=0.03, dot_bgr=(50, 225, 245), clutter=8
            ),
            seed=13,
        ),
    ),
)

HAND_SCATTER_S = 0.10  # start-and-stop difference of one hand-timed run: Am. J. Phys. 87 (2) 110, abstract


def main(names: list[str]) -> None:
    """Make the samples named, or all."""
    for sample in SAMPLES:
        if names and sample.name not in names:
            continue
        rig = read_rig(HERE / f"{sample.name}.toml")
        truth = rehearse_clip(rig, HERE / f"{sample.name}.mp4", settings=sample.settings)
        moment = sample.settings.moment_kg_m2
        assert moment is not None
        answer = {
            "period_s": truth.period_s,
            "decay_rate_per_s": local_decay_rate(sample.settings, truth.period_s),
            "moment_kg_m2": moment,
            "amplitude_start_deg": math.degrees(truth.amplitude_rad),
            "radius_of_gyration_m": math.sqrt(moment / rig.article.mass.value) if rig.article.mass else None,
        }
        (HERE / f"{sample.name}.expected.json").write_text(
            json.dumps(answer, indent=2) + "\n", encoding="utf-8"
        )
        if sample.trials:
            write_trials(sample, mechanism_of(rig, moment).period_s)


def local_decay_rate(settings: RehearsalSettings, period_s: float) -> float:
    """Decay rate, 1/s, at the clip's mean amplitude: γ + 4βω0A/(3π) (docs/theory.md, Damping)."""
    gamma, beta = settings.damping.rate_per_s, settings.damping.quadratic
    omega = 2.0 * math.pi / period_s
    c = 4.0 * beta * omega / (3.0 * math.pi)
    t = np.linspace(0.0, settings.film.duration_s - settings.release_s, 2001)
    left = np.exp(-gamma * t)
    start = settings.amplitude_rad
    amplitude = gamma * start * left / (gamma + c * start * (1.0 - left))
    return float(gamma + c * amplitude.mean())


def write_trials(sample: Sample, period_s: float) -> None:
    """Hand-timed runs of the same swing, with the hand's scatter and, where asked, one miscount."""
    rng = np.random.default_rng(sample.settings.seed)
    lines = ["swings,seconds"]
    for number, swings in enumerate(sample.trials, start=1):
        counted = swings - 1 if number == sample.miscount else swings
        seconds = counted * period_s * 1.0012 + rng.normal(0.0, HAND_SCATTER_S)
        lines.append(f"{swings},{seconds:.2f}")
    (HERE / f"{sample.name}.trials.csv").write_text("\n".join(lines) + "\n", encoding="utf-8")


if __name__ == "__main__":
    main(sys.argv[1:])
