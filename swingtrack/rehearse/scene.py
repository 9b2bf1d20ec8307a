"""Draws the workshop: a bench with things on it, a paddle on its strings, the painted dot."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import cv2
import numpy as np
from numpy.typing import NDArray

from ..records import Floats
from .camera import Camera
from .settings import Film, Stage

Image = NDArray[np.uint8]

FINE = 8  # supersampling of the dot's edge
SHIFT = 6  # fractional bits of the drawing calls' coordinates
DOT_CORNERS = 72  # of the polygon that stands for the disc; its area is within 0.13 % of the disc's


@dataclass(frozen=True, eq=False)
class Pose:
    """Where the article is: angle, rad, and sideways place, m."""

    angle_rad: float
    aside_m: tuple[float, float] = (0.0, 0.0)


def draw_background(stage: Stage, film: Film, rng: np.random.Generator) -> Image:
    """A bench in uneven light with objects lying about; the dot's colour only where `stage.alike` asks for it."""
    height, width = film.height, film.width
    yy, xx = np.mgrid[0:height, 0:width].astype(np.float32)
    light = 0.85 + 0.2 * (xx / width) - 0.12 * (yy / height)
    grain = cv2.GaussianBlur(rng.normal(0.0, 1.0, (height, width)).astype(np.float32), (0, 0), 9, sigmaY=1.5)
    wood = np.array([96.0, 128.0, 152.0], dtype=np.float32)
    picture = (wood[None, None] + 60.0 * grain[..., None]) * light[..., None]
    picture = np.clip(picture, 0, 255).astype(np.uint8)
    for _ in range(stage.clutter):
        centre = (int(rng.uniform(0, width)), int(rng.uniform(0, height)))
        colour = tuple(int(v) for v in rng.uniform(30, 190, 3).astype(int))
        if abs(int(colour[2]) - stage.dot_bgr[2]) + abs(int(colour[0]) - stage.dot_bgr[0]) < 120:
            colour = (colour[1], colour[1], colour[1])
        size = (int(rng.uniform(8, 0.09 * width)), int(rng.uniform(8, 0.09 * width)))
        if rng.random() < 0.5:
            cv2.ellipse(picture, centre, size, rng.uniform(0, 180), 0, 360, colour, -1, cv2.LINE_AA)
        else:
            box = cv2.boxPoints((centre, size, rng.uniform(0, 180)))
            cv2.fillConvexPoly(picture, box.astype(np.int32), colour, cv2.LINE_AA)
    for _ in range(stage.alike):
        radius = max(3, int(rng.uniform(0.008, 0.02) * width))
        centre = (int(rng.uniform(0.05, 0.95) * width), int(rng.choice([0.06, 0.94]) * height))
        cv2.circle(picture, centre, radius, stage.dot_bgr, -1, cv2.LINE_AA)
    return cv2.GaussianBlur(picture, (0, 0), 0.8)


def article_outline(stage: Stage) -> Floats:
    """Outline (n, 3) of a paddle at rest, m: shaft along the dot's radius, a blade at each end."""
    reach = 1.12 * stage.dot_radius_m
    blade, shaft = 0.20 * stage.dot_radius_m, 0.045 * stage.dot_radius_m
    half = [(0.0, shaft), (0.45, shaft), (0.62, blade), (0.93, blade), (1.0, 0.55 * blade)]
    side = [(sign * part * reach, width) for sign in (1,) for part, width in half]
    right = [(r, w) for r, w in side] + [(r, -w) for r, w in reversed(side)]
    left = [(-r, -w) for r, w in side] + [(-r, w) for r, w in reversed(side)]
    outline = np.array(right[:5] + right[5:] + left[:5] + left[5:])
    # along −y at rest, where the camera stands
    return np.stack([outline[:, 1], -outline[:, 0], np.zeros(len(outline))], axis=1)


def turned(points: Floats, pose: Pose) -> Floats:
    """World points of the article turned by the pose's angle (counter-clockwise from above) and moved aside."""
    c, s = math.cos(pose.angle_rad), math.sin(pose.angle_rad)
    x = c * points[:, 0] - s * points[:, 1] + pose.aside_m[0]
    y = s * points[:, 0] + c * points[:, 1] + pose.aside_m[1]
    return np.stack([x, y, points[:, 2]], axis=1)


def dot_rim(stage: Stage, radius_scale: float = 1.0) -> Floats:
    """Rim (n, 3) of the dot at rest: flat on top seen from above and obliquely, on the blade's end from the side."""
    phase = np.arange(DOT_CORNERS) * (2.0 * math.pi / DOT_CORNERS)
    radius = 0.5 * stage.dot_diameter_m * radius_scale
    across, along = radius * np.cos(phase), radius * np.sin(phase)
    if stage.camera == "side":
        return np.stack([across, np.full(DOT_CORNERS, -stage.dot_radius_m), along], axis=1)
    return np.stack([across, along - stage.dot_radius_m, np.zeros(DOT_CORNERS)], axis=1)


def draw_article(picture: Image, camera: Camera, stage: Stage, pose: Pose) -> None:
    """The paddle, filled; seen from the side a bar of the blade's height."""
    outline = article_outline(stage)
    if stage.camera == "side":
        r, h = 1.0 * stage.dot_radius_m, 0.09 * stage.dot_radius_m
        w = 0.16 * stage.dot_radius_m
        corners = [(-w, -r, -h), (w, -r, -h), (w, -r, h), (-w, -r, h)]
        outline = np.array(corners)
    points = camera.project(turned(outline, pose))
    cv2.fillPoly(picture, [_fixed(points)], stage.article_bgr, cv2.LINE_AA, SHIFT)


def draw_dot(picture: Image, camera: Camera, stage: Stage, poses: list[Pose], light: float = 1.0) -> Floats:
    """Draw the dot smeared over the poses of the exposure; returns the mean projected centre (2,), px."""
    colour = np.clip(np.array(stage.dot_bgr, dtype=np.float32) * light, 0, 255)
    if stage.ring:
        _lay(
            picture,
            _coverage(camera, dot_rim(stage, 1.5), poses),
            np.array([18.0, 18.0, 18.0], dtype=np.float32),
        )
    _lay(picture, _coverage(camera, dot_rim(stage), poses), colour)
    middle = dot_rim(stage).mean(axis=0, keepdims=True)
    return np.mean([camera.project(turned(middle, pose))[0] for pose in poses], axis=0)


def _coverage(camera: Camera, rim: Floats, poses: list[Pose]) -> tuple[Any, int, int]:
    """Share of each pixel that the disc covers over the exposure, with the patch's corner."""
    rims = [camera.project(turned(rim, pose)) for pose in poses]
    everything = np.concatenate(rims)
    low, high = (
        np.floor(everything.min(axis=0)).astype(int) - 2,
        np.ceil(everything.max(axis=0)).astype(int) + 3,
    )
    size = high - low
    total = np.zeros((size[1], size[0]), dtype=np.float32)
    for points in rims:
        fine = np.zeros((size[1] * FINE, size[0] * FINE), dtype=np.uint8)
        # a pixel's centre is an integer; its fine pixels are centred at (i + ½)/FINE − ½ of it
        places = (points - low + 0.5) * FINE - 0.5
        cv2.fillPoly(fine, [_fixed(places)], 255, cv2.LINE_AA, SHIFT)
        total += cv2.resize(fine, (int(size[0]), int(size[1])), interpolation=cv2.INTER_AREA)
    return total / (255.0 * len(rims)), int(low[0]), int(low[1])


def _lay(picture: Image, patch: tuple[Any, int, int], colour: Any) -> None:
    """Lay a colour over the picture by coverage, cut at the picture's edge."""
    cover, x0, y0 = patch
    height, width = picture.shape[:2]
    x1, y1 = min(x0 + cover.shape[1], width), min(y0 + cover.shape[0], height)
    left, top = max(x0, 0), max(y0, 0)
    if left >= x1 or top >= y1:
        return
    part = cover[top - y0 : y1 - y0, left - x0 : x1 - x0, None]
    under = picture[top:y1, left:x1].astype(np.float32)
    picture[top:y1, left:x1] = np.clip(under + part * (colour - under) + 0.5, 0, 255).astype(np.uint8)


def draw_strings(picture: Image, camera: Camera, stage: Stage, pose: Pose) -> None:
    """Two strings from the article towards the camera's upper edge; seen from above they are short and thin."""
    for end in (-0.5, 0.5):
        foot = turned(np.array([[0.0, end * stage.dot_radius_m, 0.0]]), pose)[0]
        head = np.array([0.0, end * stage.dot_radius_m, 0.35 * stage.distance_m])
        a, b = camera.project(np.stack([foot, head]))
        cv2.line(picture, _point(a), _point(b), (210, 215, 220), 1, cv2.LINE_AA, SHIFT)


def draw_hand(picture: Image, camera: Camera, stage: Stage, pose: Pose, gone: float) -> None:
    """A hand that holds the far blade and draws back: `gone` 0 holding, 1 out of the way."""
    grip = turned(np.array([[0.0, 0.9 * stage.dot_radius_m, 0.0]]), pose)[0]
    place = camera.project(grip + np.array([0.5 * gone, 0.6 * gone, 0.0])[None] * stage.dot_radius_m * 3.0)[0]
    size = max(8, int(0.09 * picture.shape[0]))
    skin = (132, 160, 205)
    x, y = int(place[0]), int(place[1])
    if -4000 < x < 8000 and -4000 < y < 8000:
        cv2.ellipse(picture, (x, y), (size, int(0.7 * size)), 20, 0, 360, skin, -1, cv2.LINE_AA)
        cv2.ellipse(
            picture,
            (x + size, y - size // 3),
            (2 * size, size // 2),
            -20,
            0,
            360,
            (90, 92, 120),
            -1,
            cv2.LINE_AA,
        )


def draw_mover(picture: Image, film: Film, t_s: float) -> None:
    """Somebody's sleeve at the picture's edge that moves back and forth unevenly."""
    x = int(film.width * (0.04 + 0.03 * math.sin(0.9 * t_s) + 0.02 * math.sin(2.3 * t_s + 1.0)))
    y = int(film.height * (0.8 + 0.1 * math.sin(0.37 * t_s)))
    cv2.ellipse(
        picture,
        (x, y),
        (int(0.05 * film.width), int(0.09 * film.height)),
        15,
        0,
        360,
        (120, 84, 60),
        -1,
        cv2.LINE_AA,
    )


def _fixed(points: Floats) -> Any:
    return np.rint(points * (1 << SHIFT)).astype(np.int32)


def _point(place: Floats) -> tuple[int, int]:
    return (round(place[0] * (1 << SHIFT)), round(place[1] * (1 << SHIFT)))
