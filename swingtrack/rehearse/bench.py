"""The still background: a bench or a floor with the things of a paddle workshop lying about."""

from __future__ import annotations

import math
from typing import Any

import cv2
import numpy as np
from numpy.typing import NDArray

from ..records import Floats
from .settings import Film, Stage

Image = NDArray[Any]  # (height, width, 3) BGR or (height, width), uint8
Rng = np.random.Generator

SHIFT = 6  # fractional bits of the drawing calls' coordinates
BASES = {"wood": (96, 128, 152), "mat": (92, 104, 66), "concrete": (138, 142, 144), "white": (206, 210, 212)}
UNLIKE = 110.0  # least distance in BGR of a thing's colour from the dot's: likeness is `alike`'s business


def draw_bench(stage: Stage, film: Film, rng: Rng, keep_clear: Floats) -> Image:
    """The background without anything that moves.

    Parameters
    ----------
    keep_clear : (n, 2) float
        Where the dot comes by, px: the still look-alikes keep away from it.
    """
    height, width = film.height, film.width
    picture = _surface(stage.bench, height, width, rng)
    for _ in range(stage.clutter):
        thing = THINGS[int(rng.integers(len(THINGS)))]
        place = np.array([rng.uniform(0, width), rng.uniform(0, height)])
        thing(picture, place, rng.uniform(0.02, 0.09) * min(width, height) * 1.4, _colour(stage, rng), rng)
    _alike(picture, stage, rng, keep_clear)
    yy, xx = np.mgrid[0:height, 0:width].astype(np.float32)
    light = 0.88 + 0.2 * xx / width - 0.12 * yy / height
    return as_levels(picture * light[..., None])


def as_levels(values: Any) -> Image:
    """Rounded and held to 0 to 255, uint8."""
    return np.asarray(np.clip(np.rint(values), 0, 255), dtype=np.uint8)


def _surface(kind: str, height: int, width: int, rng: Rng) -> Image:
    """Planks, a cutting mat, a floor or a painted board."""
    base = np.array(BASES[kind], dtype=np.float32)
    white = rng.normal(0.0, 1.0, (height, width)).astype(np.float32)
    if kind == "wood":
        grain = cv2.GaussianBlur(white, (0, 0), 9, sigmaY=1.5)
        tone = np.ones((height, 1), dtype=np.float32)
        board = max(24, height // 5)
        for top in range(int(rng.integers(-board, 0)), height, board):
            tone[max(top, 0) : max(top + board, 0)] *= rng.uniform(0.9, 1.08)
            tone[max(top, 0) : max(top + 2, 0)] *= 0.55
        picture = (base + 60.0 * grain[..., None]) * tone[..., None]
    elif kind == "concrete":
        spots = 55.0 * cv2.GaussianBlur(white, (0, 0), 3) + 160.0 * cv2.GaussianBlur(white, (0, 0), 25)
        picture = base + spots[..., None]
    else:
        picture = base + 6.0 * cv2.GaussianBlur(white, (0, 0), 2)[..., None]
    picture = as_levels(picture)
    if kind == "mat":
        step = max(16, height // 18)
        for k in range(1, max(height, width) // step + 1):
            colour = (150, 168, 120) if k % 5 == 0 else (112, 126, 84)
            cv2.line(picture, (k * step, 0), (k * step, height), colour, 1)
            cv2.line(picture, (0, k * step), (width, k * step), colour, 1)
    return picture


def _colour(stage: Stage, rng: Rng) -> tuple[int, int, int]:
    """Any colour that is not the dot's."""
    for _ in range(50):
        colour = rng.uniform(25, 215, 3)
        if float(np.linalg.norm(colour - np.array(stage.dot_bgr))) > UNLIKE:
            break
    return _bgr(colour)


def _bgr(colour: Any) -> tuple[int, int, int]:
    b, g, r = (int(v) for v in np.clip(colour, 0, 255))
    return b, g, r


def _fixed(points: Any) -> Any:
    return np.rint(np.asarray(points) * (1 << SHIFT)).astype(np.int32)


def fill(picture: Image, points: Any, colour: tuple[int, int, int]) -> None:
    """Filled polygon with smooth edges; points (n, 2) in px."""
    cv2.fillPoly(picture, [_fixed(points)], colour, cv2.LINE_AA, SHIFT)


def stroke(picture: Image, ends: Any, colour: tuple[int, int, int], thickness: float) -> None:
    """A straight stroke with smooth edges between two points (2, 2), px; thinner than 1 px it fades instead."""
    (x0, y0), (x1, y1) = (tuple(int(v) for v in p) for p in _fixed(ends))
    cv2.line(picture, (x0, y0), (x1, y1), colour, max(1, round(thickness)), cv2.LINE_AA, SHIFT)


def round_spot(picture: Image, centre: Any, radius: float, colour: tuple[int, int, int]) -> None:
    """Filled circle with smooth edges."""
    x, y = (int(v) for v in _fixed(centre))
    cv2.circle(picture, (x, y), max(1, round(radius * (1 << SHIFT))), colour, -1, cv2.LINE_AA, SHIFT)


def _box(place: Floats, half: tuple[float, float], turn: float) -> Floats:
    c, s = math.cos(turn), math.sin(turn)
    corners = np.array([[-1, -1], [1, -1], [1, 1], [-1, 1]]) * half
    return np.asarray(place + corners @ np.array([[c, s], [-s, c]]))


def _block(picture: Image, place: Floats, size: float, colour: tuple[int, int, int], rng: Rng) -> None:
    """An offcut with a lit edge."""
    turn, half = rng.uniform(0, math.pi), (size * rng.uniform(0.5, 1.2), size * rng.uniform(0.2, 0.7))
    fill(picture, _box(place + np.array([4.0, 5.0]), half, turn), _bgr(0.45 * np.array(BASES["wood"])))
    fill(picture, _box(place, half, turn), colour)
    fill(picture, _box(place, (half[0], half[1] * 0.12), turn), _bgr(1.12 * np.array(colour)))


def _tin(picture: Image, place: Floats, size: float, colour: tuple[int, int, int], rng: Rng) -> None:
    """A tin of varnish from above."""
    round_spot(picture, place + np.array([5.0, 6.0]), size * 0.72, (48, 56, 64))
    round_spot(picture, place, size * 0.7, (178, 180, 182))
    round_spot(picture, place, size * 0.6, colour)
    round_spot(picture, place - size * 0.15, size * 0.2, _bgr(1.15 * np.array(colour)))


def _tape(picture: Image, place: Floats, size: float, colour: tuple[int, int, int], rng: Rng) -> None:
    """A roll of tape."""
    round_spot(picture, place, size * 0.6, colour)
    round_spot(picture, place, size * 0.42, (150, 175, 190))
    round_spot(picture, place, size * 0.36, (70, 84, 92))


def _rule(picture: Image, place: Floats, size: float, colour: tuple[int, int, int], rng: Rng) -> None:
    """A steel rule with its marks."""
    turn = rng.uniform(0, math.pi)
    half = (size * 2.4, size * 0.22)
    fill(picture, _box(place, half, turn), (196, 200, 202))
    along = np.array([math.cos(turn), math.sin(turn)])
    across = np.array([-along[1], along[0]])
    for k in np.arange(-2.3, 2.35, 0.12):
        foot = place + along * k * size - across * half[1]
        stroke(picture, [foot, foot + across * half[1] * 0.7], (60, 60, 60), 1)


def _pencil(picture: Image, place: Floats, size: float, colour: tuple[int, int, int], rng: Rng) -> None:
    turn = rng.uniform(0, 2 * math.pi)
    along = np.array([math.cos(turn), math.sin(turn)])
    stroke(picture, [place - along * size * 1.3, place + along * size * 1.3], colour, size * 0.14)
    stroke(picture, [place + along * size * 1.3, place + along * size * 1.55], (150, 190, 220), size * 0.1)


def _rag(picture: Image, place: Floats, size: float, colour: tuple[int, int, int], rng: Rng) -> None:
    phase = np.arange(40) * (2 * math.pi / 40)
    radius = size * (1.0 + 0.25 * np.sin(3 * phase + rng.uniform(0, 6)) + 0.12 * np.sin(7 * phase))
    fill(picture, place + radius[:, None] * np.stack([np.cos(phase), np.sin(phase)], axis=1), colour)
    for k in range(4):
        turn = rng.uniform(0, math.pi)
        way = size * 0.6 * np.array([math.cos(turn), math.sin(turn)])
        stroke(picture, [place - way + k, place + way], _bgr(0.85 * np.array(colour)), 2)


def _screws(picture: Image, place: Floats, size: float, colour: tuple[int, int, int], rng: Rng) -> None:
    """Screws and washers: small round spots, dark and bright."""
    for _ in range(int(rng.integers(3, 8))):
        at = place + rng.normal(0, size, 2)
        radius = rng.uniform(3.0, 0.2 * size + 3.5)
        tone = int(rng.choice([45, 120, 205]))
        round_spot(picture, at, radius, (tone, tone, tone))
        round_spot(picture, at, radius * 0.4, (70, 70, 70))


def _paper(picture: Image, place: Floats, size: float, colour: tuple[int, int, int], rng: Rng) -> None:
    """A cutting list."""
    turn = rng.uniform(-0.4, 0.4)
    half = (size * 0.9, size * 1.25)
    fill(picture, _box(place, half, turn), (222, 228, 230))
    for k in range(9):
        row = place + _box(np.zeros(2), (0.0, half[1] * (k - 4.5) / 5.5), turn)[2]
        way = np.array([math.cos(turn), math.sin(turn)]) * half[0] * rng.uniform(0.3, 0.75)
        stroke(picture, [row - way, row + 0.6 * way], (120, 112, 108), 1)


THINGS = (_block, _block, _tin, _tape, _rule, _pencil, _rag, _screws, _paper)


def _alike(picture: Image, stage: Stage, rng: Rng, keep_clear: Floats) -> None:
    """Spots of the dot's colour and about its size, where the dot never comes by."""
    height, width = picture.shape[:2]
    diameter = stage.dot_diameter_px or 20.0
    for _ in range(stage.alike):
        for _ in range(60):
            centre = np.array([rng.uniform(0.04, 0.96) * width, rng.uniform(0.04, 0.96) * height])
            if np.min(np.hypot(*(keep_clear - centre).T)) > 3.0 * diameter:
                break
        else:
            centre = np.array([0.04 * width, rng.uniform(0.04, 0.96) * height])
        radius = 0.5 * diameter * rng.uniform(0.6, 1.7)
        colour = _bgr(np.array(stage.dot_bgr) + rng.normal(0.0, 8.0, 3))
        if rng.random() < 0.6:
            round_spot(picture, centre, radius, colour)
        else:
            fill(picture, _box(centre, (radius, 0.8 * radius), rng.uniform(0, 3)), colour)
