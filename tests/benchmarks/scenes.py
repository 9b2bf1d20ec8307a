"""Random scenes measured with no click: how often the dot is found, and whether wrong numbers come with a warning.

python -m tests.benchmarks.scenes --count 100 --seed 1000
"""

from __future__ import annotations

import argparse
import tempfile
from collections import Counter
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from swingtrack.errors import SwingtrackError
from swingtrack.measure import measure_clip
from swingtrack.records import Measurement
from swingtrack.rehearse import Truth, random_scene, rehearse_clip

FOUND_PX = (
    2.0  # rms distance from the truth (constant offset taken out) below which the right dot was followed
)
WRONG_RELATIVE = (
    1e-3  # error of the small-swing period above which, and beyond three of its u, a number is wrong
)


@dataclass(frozen=True)
class Scene:
    """One scene's outcome: "right", "missed" (nothing given), "warned" or "wrong", with why."""

    seed: int
    outcome: str
    detail: str
    labels: tuple[str, ...]


def judge_scene(seed: int, folder: Path) -> Scene:
    """Draw a scene, measure it with no click, hold it against its truth."""
    scene = random_scene(seed)
    file = folder / "scene.mp4"
    truth = rehearse_clip(scene.rig, file, settings=scene.settings)
    try:
        measured = measure_clip(file, rig=scene.rig)
    except SwingtrackError as error:
        return Scene(seed, "missed", f"{type(error).__name__}: {error.found}", scene.labels)
    finally:
        file.unlink(missing_ok=True)
    return Scene(seed, *_judge(measured, truth), scene.labels)


def _judge(measured: Measurement, truth: Truth) -> tuple[str, str]:
    assert measured.swing is not None
    assert measured.path is not None
    distance = _distance(measured, truth)
    period = measured.swing.period
    error = period.value / truth.period_s - 1.0
    detail = f"{distance:.2f} px off, period {error:+.1e} (u {period.relative_u:.1e})"
    wrong = abs(error) > max(WRONG_RELATIVE, 3.0 * period.relative_u)
    if distance < FOUND_PX and not wrong:
        return "right", detail
    codes = sorted({doubt.code for doubt in measured.doubts} - {"uncertainty-assumed"})
    return ("warned" if codes else "wrong"), f"{detail}, {', '.join(codes) or 'no warning'}"


def _distance(measured: Measurement, truth: Truth) -> float:
    """Rms distance of the followed dot from the true one, a constant offset and the camera's shake taken out."""
    path = measured.path
    assert path is not None
    track = path.tracks[0]
    removed = path.marker is not None and path.marker.shake_removed
    x = np.interp(path.t_s, truth.t_s, truth.x_px - (truth.shake_px[:, 0] if removed else 0.0))
    y = np.interp(path.t_s, truth.t_s, truth.y_px - (truth.shake_px[:, 1] if removed else 0.0))
    dx, dy = (track.x_px - x)[track.seen], (track.y_px - y)[track.seen]
    return float(np.hypot(dx.std(), dy.std()))


def main() -> None:
    """Print each scene that went wrong, and the counts."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--count", type=int, default=100)
    parser.add_argument("--seed", type=int, default=1000)
    chosen = parser.parse_args()
    counts: Counter[str] = Counter()
    with tempfile.TemporaryDirectory() as folder:
        for seed in range(chosen.seed, chosen.seed + chosen.count):
            scene = judge_scene(seed, Path(folder))
            counts[scene.outcome] += 1
            if scene.outcome != "right":
                print(
                    f"{scene.seed}: {scene.outcome}: {scene.detail} [{', '.join(scene.labels)}]", flush=True
                )
    print(", ".join(f"{outcome} {number}" for outcome, number in counts.most_common()), f"of {chosen.count}")


if __name__ == "__main__":
    main()
