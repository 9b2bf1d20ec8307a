"""Place of a spot by its colour alone, good to a fraction of a pixel: for learning a dot and for finding it again."""

from __future__ import annotations

from dataclasses import dataclass

import cv2
import numpy as np

from ..records import Floats
from .appearance import Appearance, likeness
from .piece import Piece, colours, cut

# Likeness below this is taken for surroundings: noise of 10 levels on a contrast of 40 stays under it.
FLOOR = 0.3


@dataclass(frozen=True, eq=False)
class Coarse:
    """Centroid, area and second moments of the spot-coloured patch, stored pixels."""

    x_px: float
    y_px: float
    area_px2: float
    moments: Floats  # (2, 2), px²


def centroid(picture: Piece, look: Appearance, x_px: float, y_px: float, reach_px: float) -> Coarse | None:
    """Centroid of what has the spot's colour within `reach_px` of a place; None where there is too little."""
    piece = cut(picture, x_px, y_px, reach_px + 4)
    if piece is None:
        return None
    share = likeness(colours(piece), look.inside, look.around)
    share = np.where(share > FLOOR, share, 0.0)
    rows, columns = share.shape
    xs = piece.x0 + 0.5 + 2.0 * np.arange(columns)
    ys = piece.y0 + 0.5 + 2.0 * np.arange(rows)
    x, y = x_px, y_px
    total = 0.0
    for round_ in range(4):
        near = (xs[None, :] - x) ** 2 + (ys[:, None] - y) ** 2 <= reach_px**2
        weight = share * near
        total = float(weight.sum())
        if total * 4.0 < 0.15 * look.diameter_px**2:
            return None
        across, down = weight.sum(axis=0), weight.sum(axis=1)
        nx, ny = float(across @ xs) / total, float(down @ ys) / total
        done = abs(nx - x) + abs(ny - y) < 0.1
        x, y = nx, ny
        if done or round_ == 3:
            break
    dx, dy = xs - x, ys - y
    moments = np.array(
        [
            [float(across @ dx**2), float(dy @ weight @ dx)],
            [float(dy @ weight @ dx), float(down @ dy**2)],
        ]
    )
    return Coarse(x, y, 4.0 * total, moments / total)


def search(
    picture: Piece, look: Appearance, box: tuple[float, float, float, float]
) -> list[tuple[float, float, float]]:
    """Places in a box (x0, y0, x1, y1) that look like the spot, best first: (x, y, score), at most four.

    The score compares the likeness within a disc of the spot's size with that in the ring round it: 1 for a spot
    of the right colour and size on its usual surroundings, 0 for a plain wall.
    """
    half = max(box[2] - box[0], box[3] - box[1]) / 2 + look.diameter_px
    piece = cut(picture, (box[0] + box[2]) / 2, (box[1] + box[3]) / 2, half)
    if piece is None:
        return []
    share = likeness(colours(piece), look.inside, look.around).astype(np.float32)
    radius = max(1.0, look.diameter_px / 4)  # half-resolution samples
    score = cv2.filter2D(share, -1, _ring_kernel(radius), borderType=cv2.BORDER_REPLICATE)
    rows, columns = score.shape
    xs, ys = piece.x0 + 0.5 + 2.0 * np.arange(columns), piece.y0 + 0.5 + 2.0 * np.arange(rows)
    score[:, (xs < box[0]) | (xs > box[2])] = -1.0
    score[(ys < box[1]) | (ys > box[3]), :] = -1.0
    found: list[tuple[float, float, float]] = []
    for _ in range(4):
        _, best, _, (column, row) = cv2.minMaxLoc(score)
        if best < 0.3:
            break
        found.append((float(xs[column]), float(ys[row]), float(best)))
        cv2.circle(score, (column, row), int(2 * radius) + 1, -1.0, -1)
    return found


def _ring_kernel(radius: float) -> Floats:
    """Mean within the disc less mean in the ring out to 1.5 radii."""
    half = int(np.ceil(1.5 * radius)) + 1
    axis = np.arange(-half, half + 1)
    rho = np.hypot(axis[None, :], axis[:, None])
    disc = np.clip(radius + 0.5 - rho, 0.0, 1.0)
    ring = np.clip(1.5 * radius + 1.0 - rho, 0.0, 1.0) * np.clip(rho - radius, 0.0, 1.0)
    kernel: Floats = (disc / disc.sum() - ring / ring.sum()).astype(np.float32)
    return kernel
