"""Camera shake: fixed spots of the scene are followed, and their common motion is taken out of the dot's path.

Each spot is a textured square, matched to its own first picture by the inverse compositional step
δ = H⁻¹ Σ ∇T (I(x + p) − T), H = Σ ∇T ∇Tᵀ, mean and contrast of the square taken out first (S. Baker and
I. Matthews, Int. J. Computer Vision 56 (2004) 221, section 3.2.1). With two spots that lie well apart the
motion is a shift with a small turn and scale; a spot that none agrees with is not believed.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import cv2
import numpy as np
from numpy.typing import NDArray

from ..records import Floats
from .piece import Piece

SIDE = 33  # of the square in pixels
MOST_SPOTS = 5
FEWEST_AGREEING = 2  # one spot alone may sit on the article itself
ALIKE_PX, ALIKE_SHARE = (
    0.2,
    0.35,
)  # two fixed spots differ by noise, and by the turn and scale of the camera's motion
LEAST_APART = 0.3  # of the picture's width, for a turn to be worth taking from two spots
LONGEST_STEP = 12.0  # px from one frame to the next; more is not a shake but a picture of something else


@dataclass(eq=False)
class FixedSpot:
    """One textured square and its shifts since its first picture, NaN where it was hidden."""

    x_px: float
    y_px: float
    template: NDArray[np.float32]
    solver: NDArray[np.float32]  # (2, SIDE²): takes the difference of the squares to a step
    noise: float
    shift: tuple[float, float] = (0.0, 0.0)
    dx: list[float] = field(default_factory=list)
    dy: list[float] = field(default_factory=list)


class Steadier:
    """Follows fixed spots frame by frame; `motion` then gives what the camera did."""

    def __init__(self, picture: Piece, avoid: list[tuple[float, float, float, float]]) -> None:
        self.spots = _choose(picture, avoid)
        self.scale = picture.scale

    def step(self, picture: Piece) -> None:
        """Take in the next frame."""
        for spot in self.spots:
            found = _follow(picture, spot)
            if found is None:
                spot.dx.append(float("nan"))
                spot.dy.append(float("nan"))
                continue
            spot.shift = found
            spot.dx.append(found[0])
            spot.dy.append(found[1])


@dataclass(frozen=True, eq=False)
class Motion:
    """What the camera did at a given place of the picture, frame by frame.

    `size_px` is the spread of the motion, `u_px` the uncertainty of each shift.
    """

    dx: Floats
    dy: Floats
    size_px: float
    u_px: float


def motion_at(steadier: Steadier, x_px: Floats, y_px: Floats, width: int) -> Motion | None:
    """Motion of the scene at the dot's places; None where no two fixed spots agree on it."""
    good = [s for s in steadier.spots if np.mean(np.isfinite(s.dx)) > 0.9]
    if not good:
        return None
    dx = np.array([_filled(s.dx) for s in good])
    dy = np.array([_filled(s.dy) for s in good])
    keep = _agreeing(dx, dy)
    if len(keep) < FEWEST_AGREEING:
        return None
    dx, dy, good = dx[keep], dy[keep], [good[k] for k in keep]
    px, py = np.array([s.x_px for s in good]), np.array([s.y_px for s in good])
    size = float(np.hypot(np.std(np.median(dx, 0)), np.std(np.median(dy, 0))))
    noise = float(np.median([_high_pass(a) for a in (*dx, *dy)])) / np.sqrt(len(good))
    mean_x, mean_y = dx.mean(0), dy.mean(0)
    apart = float(np.hypot(np.ptp(px), np.ptp(py)))
    if len(good) >= 2 and apart > LEAST_APART * width:
        # Shift, turn and scale about the spots' middle: (dx, dy) = mean + s (rx, ry) + r (−ry, rx).
        rx, ry = px - px.mean(), py - py.mean()
        norm = float(np.sum(rx**2 + ry**2))
        scale = (rx @ (dx - mean_x) + ry @ (dy - mean_y)) / norm
        turn = (rx @ (dy - mean_y) - ry @ (dx - mean_x)) / norm
        # Turn and scale of a camera on a stand are slow against the noise of single frames where they are small.
        ox, oy = x_px - px.mean(), y_px - py.mean()
        mean_x, mean_y = mean_x + scale * ox - turn * oy, mean_y + scale * oy + turn * ox
    return Motion(mean_x, mean_y, size, noise)


def _agreeing(dx: Floats, dy: Floats) -> list[int]:
    """The largest set of spots that move alike; a spot on the article, or on anything that moves, goes its own way.

    Parameters
    ----------
    dx, dy : (n_spots, n_frames) float
    """
    sets = []
    for k in range(len(dx)):
        apart = np.sqrt(np.mean((dx - dx[k]) ** 2 + (dy - dy[k]) ** 2, axis=1))
        own = float(np.hypot(np.std(dx[k]), np.std(dy[k])))
        sets.append(([int(i) for i in np.flatnonzero(apart <= ALIKE_PX + ALIKE_SHARE * own)], own))
    # of sets equally large the stillest is the scene: what swings moves more than a camera that is held
    return max(sets, key=lambda item: (len(item[0]), -item[1]))[0]


def _choose(picture: Piece, avoid: list[tuple[float, float, float, float]]) -> list[FixedSpot]:
    """Corners of the scene outside of the boxes to avoid, far from one another."""
    luma = picture.luma if picture.scale == 1.0 else (picture.luma * picture.scale).astype(np.uint8)
    step = max(1, round(max(luma.shape) / 640))
    small = cv2.resize(luma, (luma.shape[1] // step, luma.shape[0] // step), interpolation=cv2.INTER_AREA)
    mask = np.zeros(small.shape, np.uint8)
    edge = SIDE // step + 12 // step + 1
    mask[edge:-edge, edge:-edge] = 255
    for x0, y0, x1, y1 in avoid:
        grown = SIDE
        mask[
            max(0, int((y0 - grown) / step)) : max(0, int((y1 + grown) / step) + 1),
            max(0, int((x0 - grown) / step)) : max(0, int((x1 + grown) / step) + 1),
        ] = 0
    corners = cv2.goodFeaturesToTrack(
        small, 40, 0.05, max(8, SIDE // step), mask=mask, blockSize=max(3, SIDE // step // 2)
    )
    if corners is None:
        return []
    spots: list[FixedSpot] = []
    least = 0.25 * luma.shape[1]
    for apart in (least, 0.5 * least):
        for cx, cy in corners.reshape(-1, 2):
            x, y = float(round(cx * step)), float(round(cy * step))
            if len(spots) >= MOST_SPOTS:
                return spots
            if any(np.hypot(x - s.x_px, y - s.y_px) < apart for s in spots):
                continue
            spot = _make(picture, x, y)
            if spot is not None:
                spots.append(spot)
    return spots


def _make(picture: Piece, x: float, y: float) -> FixedSpot | None:
    square = _square(picture, x, y)
    if square is None:
        return None
    gx = np.gradient(square, axis=1).astype(np.float32)
    gy = np.gradient(square, axis=0).astype(np.float32)
    rows = np.stack([gx.ravel(), gy.ravel(), np.ones(square.size, np.float32), square.ravel()])
    normal = (rows @ rows.T).astype(np.float64)
    try:
        solver = np.linalg.solve(normal, rows.astype(np.float64))[:2].astype(np.float32)
    except np.linalg.LinAlgError:
        return None
    # The least step that noise of two levels makes; a spot that can't do better than 0.1 px is no help.
    if float(np.max(np.sqrt(np.sum(solver**2, axis=1)))) * 2.0 > 0.1:
        return None
    return FixedSpot(x, y, square, solver, 2.0)


def _square(picture: Piece, x: float, y: float) -> NDArray[np.float32] | None:
    half = SIDE // 2
    height, width = picture.luma.shape
    if not (half + 2 <= x < width - half - 2 and half + 2 <= y < height - half - 2):
        return None
    ix, iy = int(np.floor(x)), int(np.floor(y))
    block = picture.luma[iy - half : iy + half + 2, ix - half : ix + half + 2].astype(np.float32)
    if picture.scale != 1.0:
        block *= np.float32(picture.scale)
    fx, fy = x - ix, y - iy
    if fx == 0.0 and fy == 0.0:
        return block[:-1, :-1].copy()
    rows = block[:, :-1] * np.float32(1 - fx) + block[:, 1:] * np.float32(fx)
    square: NDArray[np.float32] = rows[:-1] * np.float32(1 - fy) + rows[1:] * np.float32(fy)
    return square


def _follow(picture: Piece, spot: FixedSpot) -> tuple[float, float] | None:
    sx, sy = spot.shift
    for _ in range(8):
        square = _square(picture, spot.x_px + sx, spot.y_px + sy)
        if square is None:
            return None
        # The solver's rows are free of mean and contrast; ∇T δ = T − I makes the step −δ of the sampled place.
        step = spot.solver @ (square - spot.template).ravel()
        dx, dy = float(step[0]), float(step[1])
        sx, sy = sx - dx, sy - dy
        if abs(sx - spot.shift[0]) + abs(sy - spot.shift[1]) > LONGEST_STEP:
            return None
        if abs(dx) + abs(dy) < 0.02:
            break
    else:
        return None
    a, b = square - square.mean(), spot.template - spot.template.mean()
    if float(np.vdot(a, b)) < 0.7 * float(np.linalg.norm(a) * np.linalg.norm(b)):
        return None
    return sx, sy


def _filled(values: list[float]) -> Floats:
    data = np.array(values)
    known = np.isfinite(data)
    at = np.arange(len(data))
    result: Floats = np.interp(at, at[known], data[known])
    return result


def _high_pass(values: Floats) -> float:
    """Noise of single values by their second differences (variance 6 σ² for white noise)."""
    if len(values) < 5:
        return 0.0
    return float(1.4826 * np.median(np.abs(np.diff(values, 2))) / np.sqrt(6.0))
