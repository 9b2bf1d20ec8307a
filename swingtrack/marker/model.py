"""The dot as the matched locator expects it: radial profile, ellipse, motion blur, sampled finely once a blur.

A dot is point-symmetric: luma and chroma depend on the elliptical radius ρ = |M (x − c)| alone. Only such a
symmetric template has a centre that means something, and it can't drift when it is measured anew; the picture of
a frame is the template drawn out along the way the dot goes while the shutter is open.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import cv2
import numpy as np
from numpy.typing import NDArray

from ..records import Floats

Singles = NDArray[np.float32]

# Spacing of the radial profile's knots in pixels: fine against any lens's blur.
KNOT_PX = 0.25

# The finely sampled templates of one clip may take this much; beyond it the oldest go.
CACHE_BYTES = 48_000_000


@dataclass(frozen=True, eq=False)
class Phase:
    """The template as one plane's samples see it, for one place of the centre between the samples.

    Parameters
    ----------
    parts : (6, rows, columns) float32
        Picture, one, x, y, ∂/∂x, ∂/∂y; zero outside the window.
    inverse : (6, 6) float
        (parts · partsᵀ)⁻¹.
    samples : float
        Number of samples in the window.
    """

    parts: Singles
    flat: Singles
    inverse: Floats
    normal: Floats
    samples: float


@dataclass(eq=False)
class Sheet:
    """One plane's template on the fine grid, sorted by phase so that no window is ever copied together.

    `phases` is (stride_y, stride_x, 6, rows, columns): fine sample (r · stride_y + p, …) lies in phase p, row r.
    """

    phases: Singles
    middle: int
    fine: int
    _ready: dict[tuple[int, int], Phase] = field(default_factory=dict, repr=False)

    def phase(self, py: int, px: int) -> Phase:
        """The template at one phase with its normal equations, kept once made."""
        found = self._ready.get((py, px))
        if found is None:
            found = solve_ready(self.phases[py, px])
            self._ready[(py, px)] = found
        return found


def solve_ready(parts: Singles) -> Phase:
    """Normal equations of a window's parts; the pseudo-inverse, as a window cut off may lack some part."""
    flat = parts.reshape(6, -1)
    normal = (flat @ flat.T).astype(np.float64)
    return Phase(
        parts, flat, np.linalg.pinv(normal, rcond=1e-12, hermitian=True), normal, float(normal[1, 1])
    )


@dataclass(frozen=True, eq=False)
class Template:
    """One blur's picture: a sheet for luma, one for chroma, and the window's half-width in pixels."""

    luma: Sheet
    chroma: Sheet | None
    reach_px: int

    @property
    def nbytes(self) -> int:
        return self.luma.phases.nbytes + (0 if self.chroma is None else self.chroma.phases.nbytes)


@dataclass(eq=False)
class DotModel:
    """What the locator needs to know of a dot; made by `learn.learn_dot`.

    Parameters
    ----------
    radius_px : float
        Geometric mean of the semi-axes.
    metric : (2, 2) float
        M of ρ = |M (x − c)|, determinant 1.
    luma, chroma : (knots,) float
        Levels at ρ = 0, KNOT_PX, 2 KNOT_PX …; `chroma` is along `chroma_axis`, None for a dot without colour.
    chroma_axis : (2,) float
        Direction in the (u, v) plane in which the dot differs from its surroundings.
    chroma_offset : (2,) float
        Where the first chroma sample lies, luma pixels from the first luma sample.
    exposure_s : float
        Time over which the dot's picture is drawn out.
    spread_luma, spread_chroma : float
        Standard deviation of what the template leaves over, levels.
    chroma_weight : float
        Weight of a chroma sample's square over a luma sample's.
    spacing : (int, int)
        Luma pixels from one chroma sample to the next, across and down.
    """

    radius_px: float
    metric: Floats
    luma: Floats
    chroma: Floats | None
    chroma_axis: Floats
    chroma_offset: Floats
    exposure_s: float = 0.0
    spread_luma: float = 3.0
    spread_chroma: float = 3.0
    chroma_weight: float = 0.25
    spacing: tuple[int, int] = (2, 2)
    _cache: dict[tuple[int, int], Template] = field(default_factory=dict, repr=False)
    _bytes: int = field(default=0, repr=False)

    @property
    def fine(self) -> int:
        """Samples a pixel of the template: coarser for big dots, whose edges are as soft but whose grids are not small."""
        return 4 if self.radius_px < 18 else 3 if self.radius_px < 30 else 2

    @property
    def blur_step_px(self) -> float:
        """Blurs nearer than this share a template: a tenth of the diameter hardly changes the match."""
        return max(1.0, 0.1 * self.radius_px)

    def forget(self) -> None:
        """Drop the templates after a change of the model."""
        self._cache.clear()
        self._bytes = 0

    def template(self, vx_px_s: float, vy_px_s: float) -> Template:
        """The template for a velocity in pixels per second."""
        step = self.blur_step_px
        bx, by = round(vx_px_s * self.exposure_s / step), round(vy_px_s * self.exposure_s / step)
        if bx < 0 or (bx == 0 and by < 0):  # the blur of −v is that of v
            bx, by = -bx, -by
        found = self._cache.get((bx, by))
        if found is None:
            found = self.draw(bx * step, by * step)
            while self._cache and self._bytes + found.nbytes > CACHE_BYTES:
                self._bytes -= self._cache.pop(next(iter(self._cache))).nbytes
            self._cache[(bx, by)] = found
            self._bytes += found.nbytes
        return found

    def draw(self, blur_x: float, blur_y: float) -> Template:
        """The template for a blur in pixels; `template` keeps and shares them."""
        fine = self.fine
        knots = np.arange(len(self.luma)) * KNOT_PX
        window = knots[-1]
        # Half-widths of the sharp ellipse ρ = window, by the metric's inverse.
        inverse = np.linalg.inv(self.metric)
        half = float(np.max(np.hypot(inverse[:, 0], inverse[:, 1]))) * window
        reach = int(np.ceil(half + max(abs(blur_x), abs(blur_y)) / 2)) + 1
        middle = fine * (reach + 1)
        axis = ((np.arange(2 * middle + 1) - middle) / fine).astype(np.float32)
        x, y = axis[None, :], axis[:, None]
        rho = self._rho(x, y)
        kernel = _line(blur_x * fine, blur_y * fine)
        # The window is the ellipse drawn out along the blur: where any part of it passes.
        t = np.float32(0.0)
        if blur_x or blur_y:
            t = np.clip((x * blur_x + y * blur_y) / (blur_x**2 + blur_y**2), -0.5, 0.5).astype(np.float32)
        mask = (self._rho(x - t * blur_x, y - t * blur_y) <= window).astype(np.float32)
        sheets: list[Sheet | None] = []
        for profile, gaps in ((self.luma, (1, 1)), (self.chroma, self.spacing)):
            if profile is None:
                sheets.append(None)
                continue
            sharp = np.interp(rho.ravel(), knots, profile - profile[-1]).reshape(rho.shape).astype(np.float32)
            drawn = (
                sharp if kernel is None else cv2.filter2D(sharp, -1, kernel, borderType=cv2.BORDER_CONSTANT)
            )
            stack = np.empty((6, *drawn.shape), np.float32)
            stack[0], stack[1], stack[2], stack[3] = drawn, 1.0, x / reach, y / reach
            stack[4], stack[5] = _slope(drawn, 1) * fine, _slope(drawn, 0) * fine
            stack *= mask
            sheets.append(Sheet(_by_phase(stack, gaps[1] * fine, gaps[0] * fine), middle, fine))
        luma = sheets[0]
        assert luma is not None
        return Template(luma, sheets[1], reach)

    def _rho(self, x: Singles, y: Singles) -> Singles:
        (a, b), (c, d) = self.metric.astype(np.float32)
        return np.sqrt((a * x + b * y) ** 2 + (c * x + d * y) ** 2)


def _by_phase(stack: Singles, stride_y: int, stride_x: int) -> Singles:
    """(6, n, n) on the fine grid to (stride_y, stride_x, 6, rows, columns), padded with zeros."""
    parts, height, width = stack.shape
    rows, columns = -(-height // stride_y), -(-width // stride_x)
    padded = np.zeros((parts, rows * stride_y, columns * stride_x), np.float32)
    padded[:, :height, :width] = stack
    sorted_ = padded.reshape(parts, rows, stride_y, columns, stride_x).transpose(2, 4, 0, 1, 3)
    result: Singles = np.ascontiguousarray(sorted_)
    return result


def _line(dx: float, dy: float) -> Singles | None:
    """Kernel that averages along a segment of fine samples; None for one shorter than a sample."""
    length = float(np.hypot(dx, dy))
    if length < 1.0:
        return None
    half = int(np.ceil(max(abs(dx), abs(dy)) / 2)) + 1
    steps = int(4 * length) + 1
    s = (np.arange(steps) + 0.5) / steps - 0.5
    px, py = half + s * dx, half + s * dy
    kernel = np.zeros((2 * half + 1, 2 * half + 1), np.float32)
    ix, iy = np.floor(px).astype(int), np.floor(py).astype(int)
    fx, fy = px - ix, py - iy
    for ox, oy, weight in (
        (0, 0, (1 - fx) * (1 - fy)),
        (1, 0, fx * (1 - fy)),
        (0, 1, (1 - fx) * fy),
        (1, 1, fx * fy),
    ):
        np.add.at(kernel, (iy + oy, ix + ox), weight)
    return kernel / kernel.sum()


def _slope(picture: Singles, axis: int) -> Singles:
    """Derivative per sample by the fourth-order central difference; zero at the border."""
    p = np.moveaxis(picture, axis, 0)
    slope = np.zeros_like(p)
    slope[2:-2] = (8.0 * (p[3:-1] - p[1:-3]) - (p[4:] - p[:-4])) / 12.0
    return np.moveaxis(slope, 0, axis)
