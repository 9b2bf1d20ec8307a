"""The whole chain on rehearsed clips whose truth is known, and on a real clip."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from swingtrack.measure import MeasureSettings, measure_clip, measure_path
from swingtrack.records import Rig
from swingtrack.rehearse import Damping, Film, RehearsalSettings, Stage, rehearse_clip
from swingtrack.rig import rig_from_mapping
from swingtrack.series_file import SeriesColumns, read_series


def paddle_rig(camera: str) -> Rig:
    return rig_from_mapping(
        {
            "article": {
                "name": "short shaft",
                "mass": "0.612 kg ± 0.5 g",
                "expected_moment": "0.0093 kg m^2",
            },
            "suspension": {"kind": "bifilar", "length": "0.804 m ± 1 mm", "upper_spacing": "320 mm ± 0.5 mm"},
            "place": {"gravity": "9.8094 m/s^2 ± 0.0002 m/s^2"},
            "view": {"from": camera, "dot_radius": "300 mm ± 1 mm", "dot_diameter": "20 mm ± 0.1 mm"},
        }
    )


@pytest.mark.slow
@pytest.mark.parametrize(
    ("camera", "amplitude_deg", "dot_mm", "seed"),
    [("above", 5.0, 14, 1), ("above", 10.0, 44, 2), ("side", 6.0, 24, 3)],
)
def test_period_and_decay_of_an_ordinary_clip(
    tmp_path: Path, camera: str, amplitude_deg: float, dot_mm: float, seed: int
) -> None:
    # 720p at 30 frames/s, 20 s, 5 to 10 degrees, dot of 12 to 40 pixels: the project's own acceptance limits.
    rig = paddle_rig(camera)
    settings = RehearsalSettings(
        amplitude_rad=math.radians(amplitude_deg),
        damping=Damping(rate_per_s=0.02),
        film=Film(duration_s=20.0, crf=18),
        stage=Stage(camera=camera, dot_diameter_m=dot_mm * 1e-3, distance_m=1.2),
        seed=seed,
    )
    truth = rehearse_clip(rig, tmp_path / "clip.mp4", settings=settings)
    measured = measure_clip(tmp_path / "clip.mp4", rig=rig)
    swing, inertia = measured.swing, measured.inertia
    assert swing is not None
    assert inertia is not None
    assert swing.period.value == pytest.approx(truth.period_s, rel=1e-4)
    assert swing.decay_rate.value == pytest.approx(truth.decay_rate_per_s, rel=0.02)
    assert abs(inertia.moment.value - truth.moment_kg_m2) < inertia.expanded


@pytest.mark.slow
def test_a_real_phone_clip_is_found_without_a_click(real_data: Path) -> None:
    # Period 2.0785 s ± 0.001 s by turning points and by an independent fit (README of the data folder).
    measured = measure_clip(real_data / "clips" / "redapple.mov")
    assert measured.swing is not None
    assert measured.path is not None
    assert measured.swing.period_in_clip.value == pytest.approx(2.0785, rel=1e-3)
    assert "file-retimed" in {doubt.code for doubt in measured.doubts}


@pytest.mark.slow
def test_a_real_rod_on_two_strings(real_data: Path) -> None:
    # A uniform rod: I/m = L²/12 + R²/4 = 3.1977e-3 m² (README of the data folder); the mass cancels.
    rig = rig_from_mapping(
        {
            "article": {"mass": "1 kg ± 0 g"},
            "suspension": {
                "kind": "bifilar",
                "length": "0.974025 m ± 1 mm",
                "upper_spacing": "150 mm ± 0.2 mm",
            },
            "place": {"gravity": "9.788 m/s^2 ± 0.001 m/s^2"},
        }
    )
    series = read_series(
        real_data / "bifilar_rod" / "2.7.csv", SeriesColumns(value="angle", rate_hz=60.0, unit="rad")
    )
    measured = measure_path(series, rig=rig)
    assert measured.inertia is not None
    assert measured.inertia.moment.value == pytest.approx(3.1977e-3, rel=0.02)
    assert "amplitude-large" in {doubt.code for doubt in measured.doubts}


def test_settings_that_cannot_be_met_are_refused(tmp_path: Path) -> None:
    with pytest.raises(ValueError, match="There is no file"):
        measure_clip(tmp_path / "none.mp4", settings=MeasureSettings())
