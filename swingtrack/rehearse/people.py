"""What moves besides the article: strings, the hand that lets go, somebody or something at the picture's edge."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from ..records import Floats
from .bench import Image, fill, round_spot, stroke
from .body import Bodies
from .camera import Camera
from .mechanism import Strings
from .settings import Film, Stage

SKIN, SLEEVE = (138, 166, 212), (104, 78, 62)
STRING_BGR = (208, 214, 220)
STRING_M = 0.0012
HAND_M = 0.085  # across the knuckles; anthropometry tables give 75 to 95 mm, from memory
HAND_GONE_S = 0.7  # from letting go until it is out of the picture
NEAREST = 0.06  # of the camera's distance: what is nearer is a blur that the drawing leaves out
FARTHEST_PX = 200_000.0  # the drawing calls' fixed-point coordinates end not far beyond
THINNEST_PX = 0.9


def string_directions(count: int, over_dot: bool) -> Floats:
    """Directions of the strings round the axis, rad: as far from the dot's (−90°) as can be, or over it."""
    step = 2.0 * math.pi / count
    start = -0.5 * math.pi + (0.0 if over_dot else 0.5 * step)
    return np.asarray(start + step * np.arange(count), dtype=np.float64)


def draw_strings(picture: Image, camera: Camera, strings: Strings, body: Bodies, over_dot: bool) -> None:
    """Straight strings from the article to the beam, thicker the nearer they come to the camera."""
    turn = string_directions(strings.count, over_dot)
    round_ = np.stack([np.cos(turn), np.sin(turn), np.zeros_like(turn)], axis=1)
    feet = body.points(strings.lower_m * round_)
    heads = strings.upper_m * round_ + [0.0, 0.0, strings.drop_m]
    forward = camera.turn[2]
    nearest = NEAREST * float(np.linalg.norm(camera.place))
    for foot, head in zip(feet, heads, strict=True):
        depth, far = (float((p - camera.place) @ forward) for p in (foot, head))
        if depth <= nearest:
            continue
        if far < nearest:
            head = foot + (depth - nearest) / (depth - far) * (head - foot)
            far = nearest
        ends = camera.project(np.stack([foot, head]))
        if np.abs(ends).max() < FARTHEST_PX:
            # in perspective a straight string is a straight wedge: its width goes with the place along it
            wide = [max(STRING_M * camera.focal_px / d, THINNEST_PX) for d in (depth, far)]
            _wedge(picture, ends, wide)


def _wedge(picture: Image, ends: Floats, wide: list[float]) -> None:
    way = ends[1] - ends[0]
    length = float(np.hypot(*way))
    if length < 1.0:
        return
    across = 0.5 * np.array([-way[1], way[0]]) / length
    corners = [
        ends[0] - across * wide[0],
        ends[0] + across * wide[0],
        ends[1] + across * wide[1],
        ends[1] - across * wide[1],
    ]
    fill(picture, np.array(corners), STRING_BGR)


def draw_line_in_front(picture: Image, x_px: float) -> None:
    """A plumb line that hangs still before the dot's path."""
    stroke(picture, [[x_px, 0.0], [x_px + 3.0, picture.shape[0]]], STRING_BGR, 0.003 * picture.shape[0])


@dataclass(frozen=True)
class Hand:
    """Where the hand is: 0 holds, 1 is out of the picture."""

    gone: float

    @staticmethod
    def at(t_s: float, release_s: float) -> Hand:
        """The hand opens first and draws back ever faster."""
        return Hand(max(0.0, (t_s - release_s) / HAND_GONE_S))


def draw_hand(picture: Image, camera: Camera, stage: Stage, body: Bodies, hand: Hand) -> None:
    """Fingers round the far blade (from the side: at the end's right edge), the arm coming from there."""
    if hand.gone >= 1.0:
        return
    r = stage.dot_radius_m
    side = stage.camera == "side"
    half = max(0.17 * r, 0.8 * stage.dot_diameter_m * (1.5 if stage.ring else 1.0))
    grip = np.array([[half, -r, 0.0]]) if side else np.array([[0.0, 0.97 * r, 0.0]])
    point = body.points(grip)[0]
    depth = float((point - camera.place) @ camera.turn[2])
    size = min(HAND_M, 0.3 * r) * camera.focal_px / depth
    at = camera.project(point[None])[0]
    arm = np.array([0.94, 0.34]) if side else np.array([0.62, -0.78])
    across = np.array([-arm[1], arm[0]])
    # off the article at once, then faster and faster along the arm
    at = at + arm * size * (0.25 * min(1.0, 8.0 * hand.gone) + 9.0 * hand.gone**2)
    wrist = at + arm * size * 1.3
    stroke(picture, [wrist, wrist + arm * 14.0 * size], SLEEVE, 1.15 * size)
    stroke(picture, [at + arm * size * 0.7, wrist + 0.4 * arm * size], SKIN, 0.75 * size)
    knuckle = at + arm * size * 0.55
    phase = np.arange(24) * (2.0 * math.pi / 24)
    palm = knuckle + size * (0.5 * np.cos(phase)[:, None] * arm + 0.52 * np.sin(phase)[:, None] * across)
    fill(picture, palm, SKIN)
    spread = 1.0 + 0.5 * min(1.0, 4.0 * hand.gone)
    for k, length in enumerate((0.42, 0.5, 0.47, 0.36)):
        root = knuckle + across * size * (0.36 - 0.24 * k) * spread
        stroke(picture, [root, root - arm * size * length], tuple(v - 6 * k for v in SKIN), 0.2 * size)  # type: ignore[arg-type]
    thumb = knuckle + across * size * 0.55
    stroke(picture, [thumb, thumb - arm * size * 0.35 + across * size * 0.1], (126, 152, 200), 0.2 * size)


def draw_mover(picture: Image, stage: Stage, film: Film, t_s: float, period_s: float) -> None:
    """Somebody at the picture's edge, a thing that swings on its own, or a fan."""
    w, h = film.width, film.height
    if stage.mover_kind == "swinging":
        swing = 0.22 * math.exp(-0.012 * t_s) * math.sin(2.0 * math.pi * t_s / (1.17 * period_s) + 0.6)
        top = np.array([0.12 * w, -0.05 * h])
        bob = top + 0.42 * h * np.array([math.sin(swing), math.cos(swing)])
        stroke(picture, [top, bob], (90, 96, 100), 0.004 * h)
        round_spot(picture, bob, 0.035 * h, (76, 142, 150))
        round_spot(picture, bob, 0.014 * h, (60, 70, 78))
        return
    if stage.mover_kind == "fan":
        hub = np.array([0.9 * w, 0.14 * h])
        round_spot(picture, hub, 0.11 * h, (92, 92, 96))
        for k in range(3):
            turn = 2.0 * math.pi * (t_s * 1.9 + k / 3.0)
            blade = np.array([[0.01, -0.012], [0.1, -0.035], [0.1, 0.03], [0.01, 0.012]]) * h
            c, s = math.cos(turn), math.sin(turn)
            fill(picture, hub + blade @ np.array([[c, s], [-s, c]]), (158, 152, 146))
        round_spot(picture, hub, 0.018 * h, (70, 70, 74))
        return
    at = np.array(
        [
            w * (0.04 + 0.03 * math.sin(0.9 * t_s) + 0.02 * math.sin(2.3 * t_s + 1.0)),
            h * (0.8 + 0.1 * math.sin(0.37 * t_s)),
        ]
    )
    phase = np.arange(36) * (2.0 * math.pi / 36)
    body = at + np.stack([0.055 * w * np.cos(phase), 0.15 * h * np.sin(phase)], axis=1)
    fill(picture, body, (120, 84, 60))
    round_spot(picture, at - [0.0, 0.12 * h], 0.045 * h, (60, 72, 92))
    stroke(picture, [at, at + np.array([0.08 * w, 0.05 * h * math.sin(1.7 * t_s)])], SLEEVE, 0.05 * h)
