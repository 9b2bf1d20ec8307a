"""Whole clips: the file holds the times and the turn that were asked for, and nothing is left behind on failure."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path

import av
import numpy as np
import pytest

from swingtrack.errors import BadInput
from swingtrack.rehearse import Film, RehearsalSettings, Stage, random_scene, rehearse_clip
from swingtrack.rehearse.rehearsal import prepare_shooting

from .benches import pendulum, strings

SMALL = Film(width=320, height=240, duration_s=1.5, uneven_ms=2.0)


def decoded(file: Path) -> tuple[np.ndarray, list[np.ndarray]]:
    """Frame times from the first, and luma planes as stored."""
    with av.open(str(file)) as container:
        frames = [
            (float(f.pts * f.time_base), f.to_ndarray(format="gray")) for f in container.decode(video=0)
        ]
    times = np.array([t for t, _ in frames])
    return times - times[0], [picture for _, picture in frames]


@pytest.mark.parametrize(
    ("name", "film"),
    [
        ("c.mp4", replace(SMALL, dropped_share=0.1)),
        ("c.mov", replace(SMALL, codec="libx265", gaps=((0.5, 0.9),))),
        ("c.mp4", replace(SMALL, b_frames=3)),
        ("c.mov", replace(SMALL, time_base_hz=600)),
        ("c.mkv", replace(SMALL, ten_bit=True, codec="libx265")),
        ("c.webm", replace(SMALL, codec="libvpx-vp9")),
        ("c.mp4", replace(SMALL, codec="libsvtav1")),
        ("c.3gp", replace(SMALL, codec="mpeg4", bitrate_mbps=2.0)),
        ("c.mp4", replace(SMALL, stretch=8.0)),
    ],
)
def test_the_file_holds_exactly_the_times_asked_for(tmp_path: Path, name: str, film: Film) -> None:
    truth = rehearse_clip(strings(), tmp_path / name, settings=RehearsalSettings(film=film))
    times, pictures = decoded(tmp_path / name)
    assert len(pictures) == truth.t_s.size
    np.testing.assert_allclose(times, truth.t_s, rtol=0.0, atol=1e-9)
    # stored times are the true instants, stretched where slow motion was asked for, to half a tick of the time base
    tick = {"c.mkv": 1e-3, "c.webm": 1e-3}.get(name, 1.0 / film.time_base_hz)
    np.testing.assert_allclose(times, (truth.taken_s - truth.taken_s[0]) * film.stretch, atol=1.01 * tick)
    assert [p.name for p in tmp_path.iterdir()] == [name]


@pytest.mark.parametrize("turn", [0, 90, 180, 270])
def test_players_turn_the_picture_upright(tmp_path: Path, turn: int) -> None:
    film = replace(SMALL, rotation_deg=turn, noise=0.0, crf=12)
    stage = Stage(
        dot_bgr=(245, 245, 245), dot_diameter_px=24.0, clutter=0, strings=False, shadow=False, bench="mat"
    )
    truth = rehearse_clip(strings(), tmp_path / "c.mp4", settings=RehearsalSettings(film=film, stage=stage))
    with av.open(str(tmp_path / "c.mp4")) as container:
        frame = next(container.decode(video=0))
        # FFmpeg gives the turn counter-clockwise
        assert frame.rotation % 360 == (-turn) % 360
        upright = np.rot90(frame.to_ndarray(format="gray"), k=frame.rotation // 90)
    assert upright.shape == (240, 320)
    x, y = round(truth.x_px[0]), round(truth.y_px[0])
    assert upright[y, x] > 200
    assert upright[y, x - 20] < 130


def test_the_dot_survives_the_encoder(tmp_path: Path) -> None:
    stage = Stage(dot_bgr=(245, 245, 245), dot_diameter_px=16.0)
    settings = RehearsalSettings(film=replace(SMALL, crf=14), stage=stage)
    truth = rehearse_clip(strings(), tmp_path / "c.mp4", settings=settings)
    _, pictures = decoded(tmp_path / "c.mp4")
    for frame in range(0, len(pictures), 9):
        x, y = round(truth.x_px[frame]), round(truth.y_px[frame])
        part = np.clip(pictures[frame][y - 12 : y + 13, x - 12 : x + 13].astype(float) - 110.0, 0.0, None)
        rows, columns = np.mgrid[-12:13, -12:13]
        found = np.array([(part * columns).sum(), (part * rows).sum()]) / part.sum() + (x, y)
        np.testing.assert_allclose(found, (truth.x_px[frame], truth.y_px[frame]), atol=0.4)


def test_the_same_seed_gives_the_same_clip(tmp_path: Path) -> None:
    settings = RehearsalSettings(film=SMALL)
    for name in ("a.mp4", "b.mp4"):
        rehearse_clip(strings(), tmp_path / name, settings=settings)
    assert (tmp_path / "a.mp4").read_bytes() == (tmp_path / "b.mp4").read_bytes()


def test_the_truth_goes_into_json(tmp_path: Path) -> None:
    shares: list[float] = []
    settings = RehearsalSettings(film=SMALL, period_s=1.1, amplitude_rad=0.2)
    truth = rehearse_clip(strings(), tmp_path / "c.mp4", settings=settings, progress=shares.append)
    told = json.loads(json.dumps(truth.to_dict()))
    assert told["period_s"] == pytest.approx(1.1, rel=1e-12)
    assert told["moment_kg_m2"] == truth.moment_kg_m2
    assert told["frames"] == len(truth.x_px) == len(truth.t_s) == len(truth.angle_rad)
    assert told["settings"]["film"]["width"] == 320
    assert shares == sorted(shares)
    assert shares[-1] == 1.0


def test_decay_in_the_clip_includes_every_cause(tmp_path: Path) -> None:
    film = Film(width=64, height=64, duration_s=20.0, rate_hz=10.0)
    truth = rehearse_clip(
        strings(), tmp_path / "c.mp4", settings=RehearsalSettings(film=film, amplitude_rad=0.3)
    )
    assert truth.decay_rate_in_clip_per_s == pytest.approx(truth.decay_rate_per_s, rel=0.05)


@pytest.mark.parametrize(
    ("name", "film", "says"),
    [
        ("c.txt", SMALL, "ending in"),
        ("c.webm", SMALL, "libx264 does not go"),
        ("c.mkv", replace(SMALL, rotation_deg=90), "turn is not written"),
        ("no/such/c.mp4", SMALL, "no folder"),
        ("c.mp4", replace(SMALL, gaps=((0.0, 2.0),)), "frames are left"),
    ],
)
def test_what_cannot_be_written_is_said_at_once(tmp_path: Path, name: str, film: Film, says: str) -> None:
    with pytest.raises(BadInput, match=says):
        rehearse_clip(strings(), tmp_path / name, settings=RehearsalSettings(film=film))
    assert list(tmp_path.iterdir()) == []


def test_nothing_is_left_behind_when_drawing_is_broken_off(tmp_path: Path) -> None:
    def stop(share: float) -> None:
        if share > 0.3:
            raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        rehearse_clip(strings(), tmp_path / "c.mp4", settings=RehearsalSettings(film=SMALL), progress=stop)
    assert list(tmp_path.iterdir()) == []


def test_a_rehearsal_needs_a_moment(tmp_path: Path) -> None:
    with pytest.raises(BadInput, match="expected_moment"):
        rehearse_clip(pendulum(), tmp_path / "c.mp4")


@pytest.mark.parametrize(
    "asked",
    [
        {"film": {"width": 321}},
        {"film": {"rotation_deg": 45}},
        {"film": {"codec": "theora"}},
        {"film": {"dropped_share": 1.0}},
        {"stage": {"camera": "below"}},
        {"stage": {"dots": 3}},
        {"stage": {"distance_m": 0.3}},
        {"amplitude_rad": 0.0},
        {"moment_kg_m2": 0.1, "period_s": 1.0},
        {"damping": {"quadratic": -1.0}},
    ],
)
def test_settings_that_cannot_be_are_refused(asked: dict[str, object]) -> None:
    from swingtrack.rehearse import Damping

    makers = {"film": Film, "stage": Stage, "damping": Damping}
    with pytest.raises(BadInput, match="Needed"):
        RehearsalSettings(**{k: makers[k](**v) if k in makers else v for k, v in asked.items()})  # type: ignore[arg-type]


def test_random_scenes_are_possible_and_varied() -> None:
    scenes = [random_scene(seed, duration_s=1.0) for seed in range(80)]
    assert scenes[7] == random_scene(7, duration_s=1.0)
    labels = {label for scene in scenes for label in scene.labels}
    wanted = {
        "above", "side", "oblique", "flicker", "exposure drift", "shake", "dropped frames", "repeated images",
        "rolling shutter", "portrait", "look-alikes", "hand", "mover: swinging", "string over the dot", "sway",
        "small dot", "middling dot", "large dot", "white, black ring, on metal", "black on white",
    }  # fmt: skip
    assert wanted <= labels
    sizes = []
    for scene in scenes[:25]:
        shooting, swing = prepare_shooting(scene.rig, scene.settings)
        assert swing.period_s == pytest.approx(scene.settings.period_s, rel=1e-9)
        sizes.append(shooting.diameter_px)
    assert min(sizes) > 5.0
    assert min(sizes) < 14.0
    assert max(sizes) > 45.0
