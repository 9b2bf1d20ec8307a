"""Drawn pictures before any compression: the dot is where the truth says, seen in every way a phone may see it."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from swingtrack.errors import BadInput
from swingtrack.rehearse import Damping, Film, RehearsalSettings, Stage
from swingtrack.rehearse.clock import frame_times
from swingtrack.rehearse.disc import Ellipses, soft_cover
from swingtrack.rehearse.filming import Shooting, draw_frames
from swingtrack.rehearse.picture import Planes, SensorNoise, lit, noise_curve, to_planes
from swingtrack.rehearse.rehearsal import prepare_shooting

from .benches import strings

CLEAN = Film(width=480, height=320, duration_s=0.8, rate_hz=10.0, noise=0.0, exposure_s=0.02)


def shoot(film: Film, stage: Stage, **more: object) -> Shooting:
    settings = RehearsalSettings(amplitude_rad=0.3, film=film, stage=stage, damping=Damping(0.05), **more)  # type: ignore[arg-type]
    return prepare_shooting(strings(), settings)[0]


def drawn_places(film: Film, stage: Stage, **more: object) -> tuple[np.ndarray, np.ndarray]:
    """Luma centroids of the dot, from a white and a black dot in the same scene, and the truth; stored pixels."""
    white, black = (shoot(film, replace(stage, dot_bgr=(v, v, v)), **more) for v in (245, 10))
    found = []
    for bright, dark in zip(draw_frames(white), draw_frames(black), strict=True):
        weight = bright.luma.astype(float) - dark.luma
        rows, columns = np.mgrid[: weight.shape[0], : weight.shape[1]]
        found.append([(weight * columns).sum() / weight.sum(), (weight * rows).sum() / weight.sum()])
    return np.array(found), white.places()


@pytest.mark.parametrize(
    ("stage", "more"),
    [
        (Stage(dot_diameter_px=8.0), {}),
        (Stage(dot_diameter_px=26.0, ring=True), {}),
        (Stage(camera="side", dot_diameter_px=16.0, arc_share=0.8), {}),
        (Stage(camera="oblique", dot_diameter_px=20.0, aside_deg=15.0), {}),
    ],
)
def test_the_drawn_dot_is_where_the_truth_says(stage: Stage, more: dict[str, object]) -> None:
    found, truth = drawn_places(CLEAN, stage, **more)
    assert np.ptp(truth[:, 0]) > 20.0
    np.testing.assert_allclose(found, truth, atol=0.005)


def test_shake_moves_the_dot_with_the_picture() -> None:
    film = replace(CLEAN, shake_px=4.0)
    found, truth = drawn_places(film, Stage(dot_diameter_px=16.0))
    np.testing.assert_allclose(found, truth, atol=0.005)
    still = shoot(replace(film, shake_px=0.0), Stage(dot_diameter_px=16.0)).places()
    moved = shoot(film, Stage(dot_diameter_px=16.0))
    np.testing.assert_allclose(truth - still, moved.shake_px, atol=1e-9)
    assert np.abs(moved.shake_px).max() > 1.0


@pytest.mark.parametrize("turn", [90, 180, 270])
def test_a_turned_picture_is_stored_turned(turn: int) -> None:
    found, truth = drawn_places(replace(CLEAN, rotation_deg=turn), Stage(dot_diameter_px=16.0))
    x, y, w, h = truth[:, 0], truth[:, 1], 479.0, 319.0
    # a player turns the stored picture clockwise by `turn`: ISO/IEC 14496-12, the track's matrix
    stored = {90: (y, w - x), 180: (w - x, h - y), 270: (h - y, x)}[turn]
    np.testing.assert_allclose(found, np.stack(stored, axis=1), atol=0.005)


@pytest.mark.parametrize("turn", [0, 90])
def test_a_rolling_shutter_sees_each_row_at_its_time(turn: int) -> None:
    # Brute force: each stored row taken from a dot drawn as it is at that row's instant.
    film = replace(CLEAN, readout_s=0.03, exposure_s=1e-6, rotation_deg=turn)
    stage = Stage(dot_diameter_px=24.0)
    shooting = shoot(film, stage)
    straight = shoot(replace(film, readout_s=0.0, rate_hz=1000.0, uneven_ms=0.0), stage)
    times, dot = straight.times.taken_s, straight.ellipses[0]
    rows = 320 if turn == 0 else 480
    for frame in (2, 4, 5):
        taken = shooting.times.taken_s[frame]
        canvas = np.zeros((320, 480))
        for row in range(rows):
            t = taken + 0.03 * ((row + 0.5) / rows - 0.5)
            centre = np.array([[np.interp(t, times, dot.centres[:, 0, k]) for k in (0, 1)]])
            patch, x0, y0 = soft_cover(Ellipses(centre, dot.shapes[:1, 0]), 0.7)
            whole = np.zeros((320, 480))
            whole[y0 : y0 + patch.shape[0], x0 : x0 + patch.shape[1]] = patch
            # stored row r of a quarter turn is the upright column 479 − r
            if turn == 0:
                canvas[row] = whole[row]
            else:
                canvas[:, 479 - row] = whole[:, 479 - row]
        y, x = np.mgrid[:320, :480]
        found = np.array([(canvas * x).sum(), (canvas * y).sum()]) / canvas.sum()
        np.testing.assert_allclose(found, shooting.places()[frame], atol=0.01)


def test_the_smear_is_as_long_as_the_dot_moves_while_the_shutter_is_open() -> None:
    film = replace(CLEAN, exposure_s=0.06, uneven_ms=0.0)
    shooting = shoot(film, Stage(dot_diameter_px=16.0))
    frame = int(np.argmax(np.abs(np.gradient(shooting.places()[:, 0]))))
    first, last = shooting.ellipses[0].centres[frame, [0, -1], 0]
    steps = shooting.ellipses[0].centres.shape[1]
    middle = shooting.bodies.angle_rad[frame]
    assert steps >= 5
    # the sub-exposures span all but one step of the shutter's time
    speed = np.ptp(middle) / (film.exposure_s * (steps - 1) / steps)
    assert abs(last - first) == pytest.approx(
        0.36 * 320 * speed * film.exposure_s * (steps - 1) / steps, rel=0.05
    )


def test_chroma_is_sited_on_the_left() -> None:
    # H.264 (ITU-T H.264, figure E-1, type 0): on the even luma columns, between the rows; blue and green stay at 128
    picture = np.full((64, 64, 3), 128, dtype=np.uint8)
    ramp = (np.arange(64) * 2).astype(np.uint8)
    picture[..., 2] = 60 + ramp[None, :]
    v = to_planes(picture).chroma_v.astype(float)
    exact = 128.0 + (224 / 255 * 0.5) * ((60 + 2 * (2.0 * np.arange(2, 30))) - 128.0)
    np.testing.assert_allclose(v[10, 2:30], exact, atol=1.0)
    down = np.full((64, 64, 3), 128, dtype=np.uint8)
    down[..., 2] = (60 + ramp)[:, None]
    w = to_planes(down).chroma_v.astype(float)
    between = 128.0 + (224 / 255 * 0.5) * ((60 + 2 * (2.0 * np.arange(2, 30) + 0.5)) - 128.0)
    np.testing.assert_allclose(w[2:30, 10], between, atol=1.0)


def test_noise_is_as_strong_as_asked_and_grows_in_the_dark() -> None:
    grey = Planes(
        np.full((200, 200), 126, np.uint8),
        np.full((100, 100), 128, np.uint8),
        np.full((100, 100), 128, np.uint8),
    )
    noise = SensorNoise(replace(CLEAN, noise=5.0), 200, 200, np.random.default_rng(1))
    noisy = [noise.added(grey) for _ in range(4)]
    luma = np.stack([p.luma.astype(float) for p in noisy]) - 126
    assert luma.std() == pytest.approx(5.0, rel=0.03)
    assert abs(luma.mean()) < 0.1
    assert np.stack([p.chroma_u.astype(float) for p in noisy]).std() == pytest.approx(2.5, rel=0.05)
    # another frame is another noise
    assert abs(np.corrcoef(luma[0].ravel(), luma[1].ravel())[0, 1]) < 0.03
    curve = noise_curve()
    assert curve[126] == pytest.approx(1.0, abs=0.01)
    assert curve[40] > 1.2 > 1.0 > curve[220]


def test_light_turns_luma_about_black() -> None:
    planes = Planes(
        np.full((4, 4), 116, np.uint8), np.full((2, 2), 148, np.uint8), np.full((2, 2), 118, np.uint8)
    )
    dimmed = lit(planes, 0.5)
    assert (dimmed.luma[0, 0], dimmed.chroma_u[0, 0], dimmed.chroma_v[0, 0]) == (66, 138, 123)
    banded = lit(planes, np.array([1.0, 0.5, 1.0, 0.5]))
    assert banded.luma[:, 0].tolist() == [116, 66, 116, 66]


def test_repeated_frames_show_the_one_before() -> None:
    film = replace(CLEAN, repeated_share=0.4, duration_s=2.0, noise=2.0)
    shooting = shoot(film, Stage(dot_diameter_px=12.0))
    pictures = list(draw_frames(shooting))
    repeated = np.flatnonzero(shooting.times.repeated)
    assert len(repeated) > 3
    for frame in repeated:
        assert np.array_equal(pictures[frame].luma, pictures[frame - 1].luma)
        np.testing.assert_array_equal(shooting.places()[frame], shooting.places()[frame - 1])
    fresh = [k for k in range(1, len(pictures)) if k not in set(repeated)]
    assert all(not np.array_equal(pictures[k].luma, pictures[k - 1].luma) for k in fresh)


def test_the_second_dot_is_opposite() -> None:
    shooting = shoot(CLEAN, Stage(dots=2, dot_diameter_px=12.0))
    axis = shooting.camera.project(np.zeros((1, 3)))[0]
    np.testing.assert_allclose(
        0.5 * (shooting.places(0) + shooting.places(1)), np.broadcast_to(axis, (8, 2)), atol=0.05
    )
    with pytest.raises(BadInput, match="from the side"):
        shoot(CLEAN, Stage(dots=2, camera="side"))


def test_a_dot_that_leaves_the_picture_is_refused() -> None:
    with pytest.raises(BadInput, match="leave the picture"):
        shoot(CLEAN, Stage(arc_share=0.6))


def test_times_are_uneven_in_order_and_thinned_as_asked() -> None:
    film = Film(duration_s=60.0, uneven_ms=2.0, dropped_share=0.1, gaps=((10.0, 12.0),))
    times = frame_times(film, 90_000, np.random.default_rng(5))
    steps = np.diff(times.taken_s)
    assert (steps > 0).all()
    assert np.array_equal(times.taken_s, times.ticks / 90_000)
    assert 0.85 < times.taken_s.size / (58.0 * 30.0) < 0.95
    assert not ((times.taken_s > 10.001) & (times.taken_s < 11.999)).any()
    ordinary = steps[steps < 0.05]
    assert np.std(ordinary) == pytest.approx(2e-3 * math.sqrt(2.0), rel=0.1)


def test_a_coarse_time_base_rounds_the_stored_times_alone() -> None:
    times = frame_times(Film(uneven_ms=1.0), 600, np.random.default_rng(5))
    off = times.ticks / 600 - times.taken_s
    assert np.abs(off).max() <= 0.5 / 600 + 1e-12
    assert np.std(off) == pytest.approx(1 / 600 / math.sqrt(12.0), rel=0.1)
