"""Poses of the article, and how the camera sees them."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from swingtrack.rehearse import Film, RehearsalSettings, Roll, Stage, Sway, mechanism_of, simulate_swing
from swingtrack.rehearse.body import Motion
from swingtrack.rehearse.camera import camera_for, sized_stage

from .benches import strings


def motion(**asked: object) -> Motion:
    settings = RehearsalSettings(amplitude_rad=0.5, release_s=1.0, **asked)  # type: ignore[arg-type]
    mechanism = mechanism_of(strings(1.0, 0.4), 0.02)
    swing = simulate_swing(
        mechanism, amplitude_rad=0.5, damping=settings.damping, duration_s=8.0, release_s=1.0
    )
    return Motion(swing, settings, mechanism.rise)


def test_every_pose_is_a_rotation() -> None:
    bodies = motion(roll=(Roll(0.05, 1.3, axis_rad=0.4),)).at(np.linspace(0.0, 8.0, 30))
    np.testing.assert_allclose(
        bodies.turn @ np.swapaxes(bodies.turn, -1, -2), np.broadcast_to(np.eye(3), (30, 3, 3)), atol=1e-12
    )
    np.testing.assert_allclose(np.linalg.det(bodies.turn), 1.0)


def test_the_article_rises_on_its_strings_as_it_turns() -> None:
    bodies = motion().at(np.linspace(1.0, 8.0, 200))
    # h² = L² − 2a² (1 − cos q) for parallel strings
    height = np.sqrt(1.0 - 2.0 * 0.2**2 * (1.0 - np.cos(bodies.angle_rad)))
    np.testing.assert_allclose(bodies.shift[:, 2], 1.0 - height, atol=1e-12)


def test_sway_waits_for_the_release_and_decays() -> None:
    swaying = motion(sway=(Sway(0.01, 0.5, decay_per_s=0.1, direction_rad=0.3, phase_rad=math.pi / 2),))
    aside = swaying.at(np.array([0.5, 1.0 + 1e-9, 3.0, 5.0])).shift[:, :2]
    np.testing.assert_allclose(aside[0], 0.0)
    way = np.array([math.cos(0.3), math.sin(0.3)])
    for row, size in zip(aside[1:], (0.01, 0.01 * math.exp(-0.2), 0.01 * math.exp(-0.4)), strict=True):
        np.testing.assert_allclose(row, size * way, atol=1e-9)


def test_the_hand_trembles_and_is_quiet_at_the_release() -> None:
    held = motion(tremble_rad=0.01)
    early = held.angle(np.linspace(0.0, 0.6, 100))
    assert 0.002 < np.std(early) < 0.01
    assert held.angle(np.array([1.0]))[0] == 0.5
    assert abs(held.angle(np.array([0.999]))[0] - 0.5) < 1e-5


def test_counter_clockwise_is_so_in_the_picture() -> None:
    camera = camera_for(Stage(), Film())
    rest, turned = camera.project(
        np.array([[0.0, -0.3, 0.0], [0.3 * math.sin(0.1), -0.3 * math.cos(0.1), 0.0]])
    )
    axis = camera.project(np.zeros((1, 3)))[0]
    a, b = rest - axis, turned - axis
    # y runs downward in the picture: counter-clockwise as seen is a negative cross product there
    assert a[0] * b[1] - a[1] * b[0] < 0.0
    assert a[1] == pytest.approx(0.36 * 720, rel=1e-9)


@pytest.mark.parametrize("camera", ["above", "side", "oblique"])
def test_a_plane_is_projected_as_its_points_are(camera: str) -> None:
    stage = Stage(camera=camera, aside_deg=12.0 if camera == "oblique" else 0.0)
    eye = camera_for(stage, Film())
    np.testing.assert_allclose(eye.turn @ eye.turn.T, np.eye(3), atol=1e-12)
    assert np.linalg.det(eye.turn) == pytest.approx(1.0)
    origin, across, along = np.array([0.01, -0.3, 0.0]), np.array([0.6, 0.8, 0.0]), np.array([0.0, 0.0, -1.0])
    u, v = 0.04, -0.02
    seen = eye.plane(origin, across, along) @ np.array([u, v, 1.0])
    np.testing.assert_allclose(seen[:2] / seen[2], eye.project(origin + u * across + v * along), atol=1e-9)


def test_a_dot_is_as_large_as_asked_in_pixels() -> None:
    camera = camera_for(Stage(), Film())
    stage = sized_stage(replace(Stage(), dot_diameter_px=24.0), camera)
    ends = camera.project(np.array([[s * 0.5 * stage.dot_diameter_m, -0.3, 0.0] for s in (-1, 1)]))
    assert ends[1, 0] - ends[0, 0] == pytest.approx(24.0, rel=1e-9)
