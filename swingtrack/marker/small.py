"""Small copies of the pictures for finding: luma and chroma on one coarse grid, and where things move."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass

import cv2
import numpy as np
from numpy.typing import NDArray

from ..records import Floats, Frame
from .piece import Piece, whole

# Long side of a small picture aimed at: a quarter of 1080p, on which an 8 px dot still covers 2 samples.
LONG_SIDE = 480

# Pictures a second that finding looks at: enough that a dot moves by a few of its sizes between two.
LOOKS_PER_S = 30.0

# Whole pictures kept for a closer look at the candidates, and what they may take.
KEPT = 5
KEPT_BYTES = 60_000_000


@dataclass(frozen=True, eq=False)
class SmallClip:
    """A stretch of a clip on the coarse grid.

    Parameters
    ----------
    t_s : (n,) float
    pictures : list of (rows, columns, 3) uint8
        Luma and both chroma, 8-bit levels.
    factor : int
        Stored pixels a sample.
    moving : (rows, columns) bool
        Where something moves.
    noise : float
        Usual standard deviation of luma over time, levels.
    kept : list of (t_s, Piece)
        Whole pictures, spread over the stretch.
    ended : bool
        The clip ended within the stretch.
    """

    t_s: Floats
    pictures: list[NDArray[np.uint8]]
    factor: int
    moving: NDArray[np.bool_]
    noise: float
    kept: list[tuple[float, Piece]]
    ended: bool

    def stored(self, x: Floats, y: Floats) -> tuple[Floats, Floats]:
        """Stored pixels of places on the coarse grid: sample (0, 0) covers pixels 0 … factor − 1."""
        middle = (self.factor - 1) / 2
        return np.asarray(x) * self.factor + middle, np.asarray(y) * self.factor + middle


def shrink(frame: Frame, factor: int) -> NDArray[np.uint8]:
    """The frame averaged over factor × factor pixels, three planes side by side in one array."""
    height, width = frame.luma.shape
    size = (width // factor, height // factor)
    planes = []
    for plane in (frame.luma, frame.chroma_u, frame.chroma_v):
        if plane is None:
            planes.append(np.full((size[1], size[0]), 128, np.uint8))
            continue
        fx, fy = round(width / plane.shape[1]), round(height / plane.shape[0])
        rows, columns = size[1] * factor // fy, size[0] * factor // fx
        small = cv2.resize(plane[:rows, :columns], size, interpolation=cv2.INTER_AREA)
        if frame.depth > 8:
            small = (small >> (frame.depth - 8)).astype(np.uint8)
        planes.append(small)
    return np.dstack(planes)


def read_small(
    frames: Iterable[Frame],
    width: int,
    height: int,
    lasting_s: float,
    *,
    progress: Callable[[float], None] | None = None,
) -> SmallClip | None:
    """Take in `lasting_s` seconds of frames; None where there are fewer than a dozen."""
    factor = int(np.clip(round(max(width, height) / LONG_SIDE), 1, 6))
    times: list[float] = []
    pictures: list[NDArray[np.uint8]] = []
    kept: list[tuple[float, Piece]] = []
    first = last = None
    ended = True
    size = int(width * height * 1.5)
    room = int(np.clip(KEPT_BYTES // size, 2, KEPT))
    for frame in frames:
        if first is None:
            first = frame.t_s
        if frame.t_s - first > lasting_s:
            ended = False
            break
        if last is not None and frame.t_s - last < 0.9 / LOOKS_PER_S:
            continue
        last = frame.t_s
        times.append(frame.t_s)
        pictures.append(shrink(frame, factor))
        if len(kept) < room and frame.t_s - first >= lasting_s * (len(kept) + 0.5) / room:
            kept.append((frame.t_s, _copy(whole(frame))))
        if progress is not None:
            progress((frame.t_s - first) / lasting_s)
    if len(pictures) < 12:
        return None
    moving, noise = _where_moving(pictures)
    return SmallClip(np.array(times), pictures, factor, moving, noise, kept, ended)


def _copy(piece: Piece) -> Piece:
    return Piece(
        piece.luma.copy(),
        None if piece.chroma_u is None else piece.chroma_u.copy(),
        None if piece.chroma_v is None else piece.chroma_v.copy(),
        0,
        0,
        piece.spacing_x,
        piece.spacing_y,
        piece.scale,
    )


def _where_moving(pictures: list[NDArray[np.uint8]]) -> tuple[NDArray[np.bool_], float]:
    """Samples whose level changes over time by more than most do, grown by a few samples."""
    step = max(1, len(pictures) // 60)
    chosen = pictures[::step]
    total = np.zeros(pictures[0].shape, np.float32)
    square = np.zeros(pictures[0].shape, np.float32)
    level = [float(p[..., 0].mean()) for p in chosen]
    middle = float(np.median(level))
    for picture, mean in zip(chosen, level, strict=True):
        values = picture.astype(np.float32)
        values[..., 0] -= mean - middle  # drift of the exposure and mains flicker move the whole picture
        total += values
        square += values * values
    n = len(chosen)
    spread = np.sqrt(np.maximum(square / n - (total / n) ** 2, 0.0))
    usual = np.median(spread, axis=(0, 1))
    limit = 2.5 * usual + 1.0
    moving = (spread > limit).any(axis=2).astype(np.uint8)
    moving = cv2.morphologyEx(moving, cv2.MORPH_OPEN, np.ones((2, 2), np.uint8))
    moving = cv2.dilate(moving, np.ones((7, 7), np.uint8))
    return moving.astype(bool), float(usual[0])
