"""Added weights from clip to answer: drawn clips of a bench whose tape measure errs by a tenth."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from swingtrack.inertia.combine import Run
from swingtrack.inertia.combine_added_weights import fit_added_weights
from swingtrack.measure import measure_clip
from swingtrack.records import AddedWeight, Article, Quantity, Rig, Suspension
from swingtrack.rehearse.rehearsal import rehearse_clip
from swingtrack.rehearse.settings import Film, RehearsalSettings, Stage

MASS, MOMENT, PAIR = 0.9, 0.02, 0.15
GRAVITY = Quantity(9.81, 1e-3, "m/s^2")


def bench(article: Article, length: float, spacing: float) -> Rig:
    dimensions = {"length": Quantity(length, 1e-3, "m"), "upper_spacing": Quantity(spacing, 1e-3, "m")}
    return Rig(article, Suspension("bifilar", dimensions), gravity=GRAVITY)


@pytest.mark.slow
def test_moment_within_two_in_a_thousand_with_wrong_dimensions(tmp_path: Path) -> None:
    """True bench 1.000 m by 300 mm; written down 1.100 m by 270 mm, which alone would put I a quarter off."""
    runs = []
    for number, distance in enumerate((None, 0.18, 0.24)):
        weights = (
            ()
            if distance is None
            else tuple(
                AddedWeight(Quantity(PAIR, 1e-5, "kg", text=side), Quantity(distance, 1e-4, "m", text=side))
                for side in "LR"
            )
        )
        total = MASS + PAIR * len(weights)
        moment = MOMENT + sum(PAIR * weight.distance.value**2 for weight in weights)
        true = bench(Article("paddle", Quantity(total, 0.0, "kg")), 1.0, 0.3)
        film = Film(width=640, height=360, duration_s=15.0)
        stage = Stage(dot_radius_m=0.25)
        clip = tmp_path / f"step{number}.mp4"
        rehearse_clip(
            true, clip, settings=RehearsalSettings(moment_kg_m2=moment, film=film, stage=stage, seed=number)
        )
        written = bench(Article("paddle", Quantity(MASS, 1e-4, "kg"), added=weights), 1.1, 0.27)
        swing = measure_clip(clip, rig=written).swing
        assert swing is not None
        runs.append(Run(clip.stem, written, swing.period, clock_relative_u=50e-6 / math.sqrt(3)))
    result = fit_added_weights(runs)
    assert result.moment.value == pytest.approx(MOMENT, rel=2e-3)
    assert abs(result.moment.value - MOMENT) < 3.0 * result.moment.u
    assert result.moment.relative_u < 2e-3
    assert "suspension-constant-off" in [doubt.code for doubt in result.doubts]
