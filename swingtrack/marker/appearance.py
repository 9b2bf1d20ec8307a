"""What a spot looks like in one picture: its colours, its size, how far it stands out all round."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..records import Floats
from .piece import Piece, colours, cut

SECTORS = 12


@dataclass(frozen=True, eq=False)
class Appearance:
    """A spot's colours and size in stored pixels.

    Parameters
    ----------
    x_px, y_px : float
        Centre, stored picture.
    diameter_px : float
    inside, around : (3,) float
        Luma and both chroma in 8-bit levels, within the spot and just outside its edge.
    evenness : float
        Contrast of the weakest twelfth of the edge over the mean contrast: near 1 for a dot, near 0 or below for
        the end of a bar.
    """

    x_px: float
    y_px: float
    diameter_px: float
    inside: Floats
    around: Floats
    evenness: float

    @property
    def contrast(self) -> float:
        """Distance of the colours in levels, chroma in full."""
        return float(np.linalg.norm(self.inside - self.around))


def likeness(planes: Floats, inside: Floats, around: Floats) -> Floats:
    """How far each sample lies on the way from the surroundings' colour (0) to the spot's (1), clipped."""
    step = inside - around
    norm = float(step @ step) or 1.0
    share = np.tensordot(step / norm, planes - around[:, None, None], axes=1)
    return np.clip(share, 0.0, 1.0)


def look_at(picture: Piece, x_px: float, y_px: float, diameter_px: float) -> Appearance | None:
    """Measure the spot near a place; None where nothing stands out there.

    The radial colour profile about the place gives the edge (largest step of the mean colour outward), the
    colours either side of it and, by sectors, how evenly the spot stands out.
    """
    x, y, diameter = float(x_px), float(y_px), float(diameter_px)
    found: Appearance | None = None
    for _ in range(3):
        piece = cut(picture, x, y, 1.1 * diameter + 8)
        if piece is None:
            return None
        planes, x0, y0 = colours(piece), piece.x0, piece.y0
        found = _measure(planes, x - x0 - 0.5, y - y0 - 0.5, diameter)
        if found is None:
            return None
        found = Appearance(
            found.x_px + x0 + 0.5,
            found.y_px + y0 + 0.5,
            found.diameter_px,
            found.inside,
            found.around,
            found.evenness,
        )
        moved = np.hypot(found.x_px - x, found.y_px - y)
        settled = moved < 0.3 and abs(found.diameter_px - diameter) < 0.1 * diameter
        x, y, diameter = found.x_px, found.y_px, found.diameter_px
        if settled:
            break
    return found


def _measure(planes: Floats, x: float, y: float, diameter: float) -> Appearance | None:
    """One round of `look_at` on half-resolution samples; places in luma pixels from the crop's first sample."""
    rows, columns = np.indices(planes.shape[1:])
    dx, dy = 2.0 * columns - x, 2.0 * rows - y
    radius = np.hypot(dx, dy)
    reach = min(0.95 * diameter + 6.0, float(radius.max()))
    edges = np.arange(0.0, reach, 2.0 if diameter < 40 else 3.0)
    bins = np.digitize(radius.ravel(), edges) - 1
    count = np.bincount(bins, minlength=len(edges))[: len(edges)]
    if len(edges) < 4 or (count[:4] == 0).any():
        return None
    profile = np.stack(
        [
            np.bincount(bins, plane.ravel(), minlength=len(edges))[: len(edges)] / np.maximum(count, 1)
            for plane in planes
        ]
    )
    # Mean colour inside each trial edge against the mean of the next two bins outside.
    inner = np.cumsum(profile * count, axis=1) / np.cumsum(count)
    best, best_step = 0, 0.0
    for k in range(1, len(edges) - 1):
        outside = profile[:, k : k + 2].mean(axis=1)
        step = float(np.linalg.norm(inner[:, k - 1] - outside)) * (edges[k] ** 0.25)
        if edges[k] >= 0.25 * diameter and step > best_step:
            best, best_step = k, step
    if best == 0:
        return None
    core = radius < max(0.6 * edges[best], 2.0)
    inside = np.median(planes[:, core], axis=1)
    rim = (radius > edges[best] + 1.0) & (radius < edges[best] * 1.35 + 4.0)
    if rim.sum() < SECTORS:
        return None
    around = np.median(planes[:, rim], axis=1)
    if np.linalg.norm(inside - around) < 3.0:
        return None
    share = likeness(planes, inside, around)
    share[radius > edges[best] * 1.3 + 3.0] = 0.0
    share = np.where(share > 0.25, share, 0.0)
    total = float(share.sum())
    if total <= 1.0:
        return None
    centre_x, centre_y = float((share * dx).sum()) / total, float((share * dy).sum()) / total
    area = 4.0 * float((share > 0.5).sum())
    sector = ((np.arctan2(dy, dx) + np.pi) / (2 * np.pi) * SECTORS).astype(int) % SECTORS
    step_vector = (inside - around) / np.linalg.norm(inside - around)
    means = [
        float(step_vector @ (inside - planes[:, rim & (sector == k)].mean(axis=1)))
        for k in range(SECTORS)
        if (rim & (sector == k)).sum() >= 2
    ]
    evenness = min(means) / float(np.mean(means)) if means and np.mean(means) > 0 else 0.0
    return Appearance(
        x + centre_x, y + centre_y, 2.0 * np.sqrt(max(area, 4.0) / np.pi), inside, around, evenness
    )
