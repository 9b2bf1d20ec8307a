"""A rehearsal: the user's own rig swung and filmed on paper, with its truth."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import asdict, dataclass
from pathlib import Path as FilePath
from typing import Any

import cv2
import numpy as np

from ..errors import BadRig
from ..records import Floats, Rig
from . import scene
from .camera import Camera, camera_for
from .encode import write_clip
from .motion import SimulatedSwing, mechanism_of, simulate_swing
from .scene import Pose
from .settings import Film, RehearsalSettings

SUB_EXPOSURES = 5
NOISE_FIELDS = (
    6  # drawn once and laid down with random shifts: a fresh field each frame would take most of the time
)


@dataclass(frozen=True, eq=False)
class Truth:
    """What is true of a rehearsed clip: period of small undamped swings, decay, moment, and the dot's path.

    `t_s`, `x_px`, `y_px` are per frame of the file, upright pixels; `repeated` marks frames that show the one
    before.
    """

    period_s: float
    decay_rate_per_s: float
    moment_kg_m2: float
    amplitude_rad: float
    release_s: float
    t_s: Floats
    angle_rad: Floats
    x_px: Floats
    y_px: Floats
    repeated: Any
    dot_diameter_px: float
    settings: RehearsalSettings

    def to_dict(self) -> dict[str, Any]:
        """Plain numbers for a JSON file: the truth without the path."""
        return {
            "period_s": self.period_s,
            "decay_rate_per_s": self.decay_rate_per_s,
            "moment_kg_m2": self.moment_kg_m2,
            "amplitude_start_deg": math.degrees(self.amplitude_rad),
            "release_s": self.release_s,
            "frames": int(self.t_s.size),
            "dot_diameter_px": self.dot_diameter_px,
            "dot_first_px": [float(self.x_px[0]), float(self.y_px[0])],
            "settings": asdict(self.settings),
        }


def rehearse_clip(
    rig: Rig,
    out_file: str | FilePath,
    *,
    settings: RehearsalSettings | None = None,
    progress: Callable[[float], None] | None = None,
) -> Truth:
    """Swing the rig's article, film it, and write the clip.

    Raises
    ------
    BadRig
        Neither the settings nor the rig say the article's moment of inertia.
    BadInput
        The clip can't be written.
    """
    settings = settings or RehearsalSettings()
    moment = settings.moment_kg_m2
    if moment is None:
        if rig.article.expected_moment is None:
            raise BadRig(
                "Nothing says the article's moment of inertia.",
                'Needed: expected_moment under [article], such as "0.021 kg m^2", or --moment.',
                "A guess will do for a rehearsal; swingtrack solids works one out from simple shapes.",
            )
        moment = rig.article.expected_moment.value
    rng = np.random.default_rng(settings.seed)
    film = settings.film
    swing = simulate_swing(
        mechanism_of(rig, moment),
        amplitude_rad=settings.amplitude_rad,
        damping=settings.damping,
        duration_s=max(film.duration_s - settings.release_s, 0.1) + 0.2,
        release_s=settings.release_s,
    )
    times, repeated = _frame_times(film, rng)
    camera = camera_for(settings.stage, film)
    centres = np.zeros((times.size, 2))
    pictures = _pictures(settings, swing, camera, times, repeated, centres, rng, progress)
    write_clip(FilePath(out_file), pictures, film)
    rim = camera.project(scene.dot_rim(settings.stage))
    return Truth(
        period_s=swing.period_s,
        decay_rate_per_s=settings.damping.rate_per_s,
        moment_kg_m2=moment,
        amplitude_rad=settings.amplitude_rad,
        release_s=settings.release_s,
        t_s=times - times[0],
        angle_rad=swing.angle(times),
        x_px=centres[:, 0],
        y_px=centres[:, 1],
        repeated=repeated,
        dot_diameter_px=float(np.ptp(rim[:, 0])),
        settings=settings,
    )


def _frame_times(film: Film, rng: np.random.Generator) -> tuple[Floats, Any]:
    """True capture instants, s, on the file's time base, and which frames repeat the one before."""
    even = np.arange(round(film.duration_s * film.rate_hz)) / film.rate_hz
    times = even + 0.05 + rng.normal(0.0, film.uneven_ms * 1e-3, even.size)
    times = np.round(np.maximum.accumulate(times + np.arange(times.size) * 1e-9) * 90_000) / 90_000
    kept = rng.random(times.size) >= film.dropped_share
    kept[0] = True
    times = times[kept]
    times = times[np.concatenate([[True], np.diff(times) > 1e-4])]
    repeated = rng.random(times.size) < film.repeated_share
    repeated[0] = False
    return times, repeated


def _pictures(
    settings: RehearsalSettings,
    swing: SimulatedSwing,
    camera: Camera,
    times: Floats,
    repeated: Any,
    centres: Floats,
    rng: np.random.Generator,
    progress: Callable[[float], None] | None,
) -> Iterator[tuple[float, Any]]:
    """Draw frame after frame; fills `centres` with the dot's true place."""
    stage, film = settings.stage, settings.film
    background = scene.draw_background(stage, film, rng)
    fields = _noise_fields(film, rng)
    last = None
    for number, t in enumerate(times):
        if progress is not None and number % 10 == 0:
            progress(number / times.size)
        if repeated[number] and last is not None:
            centres[number] = centres[number - 1]
            yield float(t), last
            continue
        row_time = 0.0
        if film.readout_s:
            first = camera.project(
                scene.turned(scene.dot_rim(stage).mean(axis=0, keepdims=True), _pose(settings, swing, t))
            )
            row_time = film.readout_s * (float(first[0, 1]) / film.height - 0.5)
        poses = [_pose(settings, swing, t + row_time + s) for s in _exposure(film)]
        picture = background.copy()
        middle = poses[len(poses) // 2]
        light = 1.0 + film.drift * t / film.duration_s + film.flicker * math.sin(2.0 * math.pi * 100.0 * t)
        scene.draw_article(picture, camera, stage, middle)
        centres[number] = scene.draw_dot(picture, camera, stage, poses)
        if stage.strings and stage.camera != "side":
            scene.draw_strings(picture, camera, stage, middle)
        if stage.hand:
            gone = float(np.clip((t - settings.release_s) / 0.4, 0.0, 1.0))
            if gone < 1.0:
                scene.draw_hand(picture, camera, stage, middle, gone)
        if stage.mover:
            scene.draw_mover(picture, film, float(t))
        if film.shake_px:
            picture, centres[number] = _shaken(picture, centres[number], film.shake_px, float(t))
        if light != 1.0:
            picture = cv2.convertScaleAbs(picture, alpha=light)
        last = _noisy(picture, fields, rng)
        yield float(t), last


def _exposure(film: Film) -> Floats:
    """Instants within the exposure, centred on the frame's time."""
    return ((np.arange(SUB_EXPOSURES) + 0.5) / SUB_EXPOSURES - 0.5) * film.exposure_s


def _pose(settings: RehearsalSettings, swing: SimulatedSwing, t: float) -> Pose:
    x = y = 0.0
    for sway in settings.sway:
        since = t - settings.release_s
        if since > 0.0:
            s = sway.amplitude_m * math.exp(-sway.decay_per_s * since)
            s *= math.sin(2.0 * math.pi * sway.frequency_hz * since + sway.phase_rad)
            x, y = x + s * math.cos(sway.direction_rad), y + s * math.sin(sway.direction_rad)
    return Pose(float(swing.angle(np.array([t]))[0]), (x, y))


def _shaken(picture: Any, centre: Floats, size: float, t: float) -> tuple[Any, Floats]:
    shift = size * np.array([math.sin(1.1 * t) + 0.4 * math.sin(5.3 * t), 0.7 * math.sin(0.8 * t + 1.0)])
    matrix = np.array([[1.0, 0.0, shift[0]], [0.0, 1.0, shift[1]]])
    moved = cv2.warpAffine(
        picture, matrix, picture.shape[1::-1], flags=cv2.INTER_LINEAR, borderMode=cv2.BORDER_REPLICATE
    )
    return moved, centre + shift


def _noise_fields(film: Film, rng: np.random.Generator) -> list[Any]:
    shape = (film.height + 64, film.width + 64, 3)
    return [
        rng.normal(0.0, film.noise, shape).astype(np.int16) for _ in range(NOISE_FIELDS if film.noise else 0)
    ]


def _noisy(picture: Any, fields: list[Any], rng: np.random.Generator) -> Any:
    if not fields:
        return picture
    field = fields[int(rng.integers(len(fields)))]
    y, x = rng.integers(0, 64, 2)
    height, width = picture.shape[:2]
    return cv2.add(picture, field[y : y + height, x : x + width], dtype=cv2.CV_8U)
