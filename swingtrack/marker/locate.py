"""Sub-pixel place of a dot in one picture by matched estimation.

With T the dot's template, the picture round the dot is taken as

    I(x) = a T(x − c) + o + r·x + noise        (luma, and the same with its own a, o, r for chroma)

and is linearised about a centre n on the template's fine grid: I = a T − (c − n)·a ∇T + o + r·x. Least squares
over the window gives a (gain), o and r (uneven light) and the step c − n; luma and chroma share the step and are
weighted. For white noise this reaches the Cramér–Rao bound (S. M. Kay, Fundamentals of Statistical Signal
Processing: Estimation Theory, 1993, section 3.9). Free gain and light take exposure drift, flicker and shading
out of the place.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import hypot, sqrt
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .model import DotModel, Phase, Sheet, Singles, Template, solve_ready
from .piece import Piece

MOST_ROUNDS = 6
SETTLED_PX = 0.12  # within the reach of the linearised template about its own grid point
LEAST_SPREAD = 0.3  # of the model's spread: a picture by luck too clean does not get a boundless weight


@dataclass(frozen=True, slots=True)
class Located:
    """Where the dot is in one picture, stored pixels.

    Parameters
    ----------
    x_px, y_px : float
    var_x, var_y, cov_xy : float
        Covariance of the place from what the template leaves over, px².
    gain : float
        Contrast over the template's, luma and chroma by what each says of the place.
    misfit : float
        Root mean square of what is left over, over what the model expects.
    settled : bool
        The steps ended.
    """

    x_px: float
    y_px: float
    var_x: float
    var_y: float
    cov_xy: float
    gain: float
    misfit: float
    settled: bool


@dataclass(frozen=True, slots=True)
class PlaneStep:
    """One plane's say: the step from the place asked about, its information (per unit of noise variance)."""

    dx: float
    dy: float
    hxx: float
    hyy: float
    hxy: float
    gain: float
    spread: float


def locate(
    picture: Piece, model: DotModel, x_px: float, y_px: float, velocity: tuple[float, float]
) -> Located | None:
    """Find the dot near (x, y); `velocity` in px/s decides the blur. None where the window leaves the picture."""
    return locate_with(picture, model, model.template(*velocity), x_px, y_px)


def locate_with(
    picture: Piece, model: DotModel, template: Template, x_px: float, y_px: float
) -> Located | None:
    """As `locate`, with a template drawn beforehand."""
    x, y = x_px, y_px
    farthest = 1.5 * template.reach_px
    step: Located | None = None
    for _ in range(MOST_ROUNDS):
        step = _step(picture, model, template, x, y)
        if step is None:
            return None
        x, y = step.x_px, step.y_px
        if step.settled or not (abs(x - x_px) < farthest and abs(y - y_px) < farthest):
            break
    return step


def _step(picture: Piece, model: DotModel, template: Template, x: float, y: float) -> Located | None:
    """One step of the linearised estimate from (x, y)."""
    luma = luma_step(picture, model, template, x, y)
    if luma is None:
        return None
    weight = 1.0 / model.spread_luma**2
    hxx, hyy, hxy = weight * luma.hxx, weight * luma.hyy, weight * luma.hxy
    gx, gy = hxx * luma.dx + hxy * luma.dy, hxy * luma.dx + hyy * luma.dy
    noise = (weight * max(luma.spread, LEAST_SPREAD * model.spread_luma)) ** 2
    sxx, syy, sxy = noise * luma.hxx, noise * luma.hyy, noise * luma.hxy
    gain, misfit = luma.gain, luma.spread / model.spread_luma
    chroma = chroma_step(picture, model, template, x, y)
    if chroma is not None:
        trust = hxx + hyy
        weight *= model.chroma_weight
        cxx, cyy, cxy = weight * chroma.hxx, weight * chroma.hyy, weight * chroma.hxy
        hxx, hyy, hxy = hxx + cxx, hyy + cyy, hxy + cxy
        gx, gy = gx + cxx * chroma.dx + cxy * chroma.dy, gy + cxy * chroma.dx + cyy * chroma.dy
        noise = (weight * max(chroma.spread, LEAST_SPREAD * model.spread_chroma)) ** 2
        sxx, syy, sxy = sxx + noise * chroma.hxx, syy + noise * chroma.hyy, sxy + noise * chroma.hxy
        share = (cxx + cyy) / (trust + cxx + cyy)
        gain = (1 - share) * gain + share * chroma.gain
        misfit = sqrt((1 - share) * misfit**2 + share * (chroma.spread / model.spread_chroma) ** 2)
    det = hxx * hyy - hxy * hxy
    if not det > 0.0:
        return None
    ixx, iyy, ixy = hyy / det, hxx / det, -hxy / det
    dx, dy = ixx * gx + ixy * gy, ixy * gx + iyy * gy
    size, limit = hypot(dx, dy), 0.5 * model.radius_px + 1.0
    if size > limit:
        dx, dy = dx * limit / size, dy * limit / size
    # Covariance H⁻¹ S H⁻¹ of an estimate weighted otherwise than by its noise.
    axx, axy = ixx * sxx + ixy * sxy, ixx * sxy + ixy * syy
    ayx, ayy = ixy * sxx + iyy * sxy, ixy * sxy + iyy * syy
    var_x, var_y, cov = axx * ixx + axy * ixy, ayx * ixy + ayy * iyy, axx * ixy + axy * iyy
    return Located(x + dx, y + dy, var_x, var_y, cov, gain, misfit, size < SETTLED_PX)


def luma_step(picture: Piece, model: DotModel, template: Template, x: float, y: float) -> PlaneStep | None:
    """What luma alone says from (x, y)."""
    found = _window(template.luma, (x - picture.x0, y - picture.y0), (1, 1), picture.luma.shape)
    if found is None:
        return None
    phase, rows, columns, rest = found
    patch = picture.luma[rows, columns].astype(np.float32)
    if picture.scale != 1.0:
        patch *= np.float32(picture.scale)
    patch -= np.float32(model.luma[-1])
    return _solve(phase, patch, rest)


def chroma_step(picture: Piece, model: DotModel, template: Template, x: float, y: float) -> PlaneStep | None:
    """What chroma alone says from (x, y); None for a grey dot or a grey picture."""
    u, v = picture.chroma_u, picture.chroma_v
    if template.chroma is None or model.chroma is None or u is None or v is None:
        return None
    ox, oy = model.chroma_offset
    found = _window(template.chroma, (x - picture.x0 - ox, y - picture.y0 - oy), model.spacing, u.shape)
    if found is None:
        return None
    phase, rows, columns, rest = found
    au, av = model.chroma_axis
    patch = u[rows, columns] * np.float32(au * picture.scale)
    patch += v[rows, columns] * np.float32(av * picture.scale)
    patch -= np.float32(model.chroma[-1])
    return _solve(phase, patch, rest)


def _window(
    sheet: Sheet, at: tuple[float, float], spacing: tuple[int, int], shape: tuple[int, ...]
) -> tuple[Phase, slice, slice, tuple[float, float]] | None:
    """The template's phase for a centre, the samples under it, and what the fine grid leaves of the centre."""
    fine, middle = sheet.fine, sheet.middle
    gx, gy = round(at[0] * fine), round(at[1] * fine)
    rest = at[0] - gx / fine, at[1] - gy / fine
    stride_x, stride_y = spacing[0] * fine, spacing[1] * fine
    c0, r0 = -((middle - gx) // stride_x), -((middle - gy) // stride_y)
    px, py = (middle - gx) % stride_x, (middle - gy) % stride_y
    rows, columns = sheet.phases.shape[3:]
    height, width = shape
    if r0 >= 0 and c0 >= 0 and r0 + rows <= height and c0 + columns <= width:
        return sheet.phase(py, px), slice(r0, r0 + rows), slice(c0, c0 + columns), rest
    top, left = max(0, -r0), max(0, -c0)
    bottom, right = min(rows, height - r0), min(columns, width - c0)
    # At the picture's border at least two thirds of the window must be there.
    if bottom - top < 0.67 * rows or right - left < 0.67 * columns:
        return None
    parts = np.ascontiguousarray(sheet.phases[py, px][:, top:bottom, left:right])
    return solve_ready(parts), slice(r0 + top, r0 + bottom), slice(c0 + left, c0 + right), rest


def _solve(phase: Phase, patch: Singles, rest: tuple[float, float]) -> PlaneStep | None:
    values: NDArray[Any] = patch.ravel()
    flat = phase.flat
    right = flat @ values
    found = phase.inverse @ right
    gain, fx, fy = float(found[0]), float(found[4]), float(found[5])
    if abs(gain) < 1e-3:
        return None
    left = float(np.dot(values * flat[1], values)) - float(found @ right)
    spread = sqrt(max(left, 0.0) / max(phase.samples - 6.0, 1.0))
    inverse = phase.inverse
    bxx, byy, bxy = float(inverse[4, 4]), float(inverse[5, 5]), float(inverse[4, 5])
    det = bxx * byy - bxy * bxy
    if not det > 0.0:
        return None
    scale = gain * gain / det
    return PlaneStep(
        -fx / gain - rest[0], -fy / gain - rest[1], scale * byy, scale * bxx, -scale * bxy, gain, spread
    )
