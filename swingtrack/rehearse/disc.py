"""A painted disc in the picture: the ellipse that it projects to, and the exact share of each pixel that it covers."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..records import Floats

FINE = 3  # pixels are split by this before the lens's blur: sampling first and blurring later would shift a small dot
RIM_POINTS = (
    128  # of the chord polygon, beside the points where the rim crosses pixel edges; area within 4e-4
)


@dataclass(frozen=True, eq=False)
class Ellipses:
    """Ellipses {c + S^½ u, |u| = 1}: centres (..., 2), px, and shapes S (..., 2, 2), px²."""

    centres: Floats
    shapes: Floats

    @property
    def areas(self) -> Floats:
        """π √det S, px²."""
        det = self.shapes[..., 0, 0] * self.shapes[..., 1, 1] - self.shapes[..., 0, 1] ** 2
        return np.asarray(math.pi * np.sqrt(det), dtype=np.float64)

    @property
    def centroid(self) -> Floats:
        """Centroid over the last leading axis, weighted by area: where a smeared disc is."""
        weight = self.areas / self.areas.sum(axis=-1, keepdims=True)
        return np.asarray((weight[..., None] * self.centres).sum(axis=-2), dtype=np.float64)

    def at(self, index: int) -> Ellipses:
        """Those of one frame."""
        return Ellipses(self.centres[index], self.shapes[index])


def project_disc(plane: Floats, radius: float, middle: tuple[float, float] = (0.0, 0.0)) -> Ellipses:
    """Image of a disc in a plane: exact, by the dual conic.

    The disc's dual conic diag(r², r², −1), moved to its middle, goes over to H D Hᵀ; scaled to −1 in its last element
    that is [[S − c cᵀ, −c], [−cᵀ, −1]]. Hartley and Zisserman, Multiple View Geometry, section 2.2.3, from memory.

    Parameters
    ----------
    plane : (..., 3, 3)
        Homography from the plane's coordinates, m, to pixels.
    radius : float
        m.
    """
    x, y = middle
    to_middle = np.array([[1.0, 0.0, x], [0.0, 1.0, y], [0.0, 0.0, 1.0]])
    h = plane @ to_middle
    dual = h @ np.diag([radius**2, radius**2, -1.0]) @ np.swapaxes(h, -1, -2)
    dual = dual / -dual[..., 2:, 2:]
    centres = -dual[..., :2, 2]
    shapes = dual[..., :2, :2] + centres[..., :, None] * centres[..., None, :]
    return Ellipses(np.asarray(centres, dtype=np.float64), np.asarray(shapes, dtype=np.float64))


def cover(ellipses: Ellipses, *, margin: int = 2) -> tuple[Floats, int, int]:
    """Mean over ellipses (n,) of the share of each pixel covered, and the patch's first column and row.

    The rim is cut where it crosses pixel edges, and each chord's signed area is added to its pixel and carried to the
    right: exact for the polygon, so that the patch's centroid is the ellipses'.
    """
    reach = np.sqrt(np.stack([ellipses.shapes[:, 0, 0], ellipses.shapes[:, 1, 1]], axis=-1))
    low = np.floor((ellipses.centres - reach).min(axis=0)).astype(int) - margin
    high = np.ceil((ellipses.centres + reach).max(axis=0)).astype(int) + margin
    width, height = (int(n) for n in high - low + 1)
    # pixel (i, j) of the patch covers [j, j + 1) × [i, i + 1) from here on
    centres = np.asarray(ellipses.centres - low + 0.5, dtype=np.float64)
    rim = _rim(centres, np.asarray(np.linalg.cholesky(ellipses.shapes), dtype=np.float64), (width, height))
    start, end = rim, np.roll(rim, -1, axis=1)
    middle = 0.5 * (start + end)
    column = np.clip(np.floor(middle[..., 0]).astype(int), 0, width - 2)
    row = np.clip(np.floor(middle[..., 1]).astype(int), 0, height - 1)
    rise = end[..., 1] - start[..., 1]
    part = middle[..., 0] - column
    cell = (row * width + column).ravel()
    grid = np.bincount(cell, weights=(rise * (1.0 - part)).ravel(), minlength=width * height)
    grid += np.bincount(cell + 1, weights=(rise * part).ravel(), minlength=width * height)
    area = np.cumsum(grid.reshape(height, width), axis=1)
    return np.asarray(np.abs(area) / len(centres), dtype=np.float64), int(low[0]), int(low[1])


def soft_cover(ellipses: Ellipses, softness_px: float) -> tuple[Any, int, int]:
    """`cover` seen through a lens that blurs by `softness_px` (standard deviation), float32."""
    import cv2

    fine = Ellipses(FINE * (ellipses.centres + 0.5) - 0.5, FINE**2 * ellipses.shapes)
    patch, left, top = cover(fine, margin=math.ceil(FINE * (4.0 * softness_px + 1.0)))
    x0, y0 = left // FINE, top // FINE
    height, width = (
        math.ceil((n + off) / FINE) for n, off in zip(patch.shape, (top % FINE, left % FINE), strict=True)
    )
    whole = np.zeros((height * FINE, width * FINE), dtype=np.float32)
    whole[top % FINE :, left % FINE :][: patch.shape[0], : patch.shape[1]] = patch
    if softness_px > 0.0:
        whole = cv2.GaussianBlur(whole, (0, 0), FINE * softness_px, borderType=cv2.BORDER_CONSTANT)
    return cv2.resize(whole, (width, height), interpolation=cv2.INTER_AREA), x0, y0


def _rim(centres: Floats, halves: Floats, size: tuple[int, int]) -> Floats:
    """Points (n, p, 2) round each rim, in order: evenly spaced ones and every crossing of a pixel edge."""
    n = len(centres)
    angles = [np.broadcast_to(np.arange(RIM_POINTS) * (2.0 * math.pi / RIM_POINTS), (n, RIM_POINTS))]
    for axis in (0, 1):
        across, along = halves[:, axis, 0], halves[:, axis, 1]
        reach, phase = np.hypot(across, along), np.arctan2(along, across)
        lines = np.arange(size[axis] + 1)
        # lines that the rim does not reach give its extreme point: a harmless double
        half = np.arccos(np.clip((lines - centres[:, axis, None]) / reach[:, None], -1.0, 1.0))
        angles += [phase[:, None] + half, phase[:, None] - half]
    turn = np.sort(np.concatenate(angles, axis=1) % (2.0 * math.pi), axis=1)
    unit = np.stack([np.cos(turn), np.sin(turn)], axis=-1)
    return np.asarray(centres[:, None] + np.einsum("nij,npj->npi", halves, unit), dtype=np.float64)
