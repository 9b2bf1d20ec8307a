"""A circle through the places of one dot: centre, radius and how sure they are."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from swingtrack.records import Floats
from swingtrack.signal.solver import minimise


@dataclass(frozen=True)
class Circle:
    """Centre and radius, px, with the radius's standard uncertainty and the rms distance from the circle.

    `sagitta_px` is the rise of the arc over its chord, `sagitta_u_px` its uncertainty: an arc whose rise is not
    significant is a straight line to all intents.
    """

    x_px: float
    y_px: float
    radius_px: float
    u_radius_px: float
    rms_px: float
    sagitta_px: float
    sagitta_u_px: float


def fit_circle(x: Floats, y: Floats, weight: Floats) -> Circle | None:
    """Least sum of squared distances from the circle, weighted; None where the points make no circle.

    Started from the algebraic fit of I. Kåsa (IEEE Trans. Instrum. Meas. 25, 1976, 8; from memory), which is biased
    to small circles on short arcs; the geometric fit that follows is not, to first order.
    """
    x0, y0 = float(np.median(x)), float(np.median(y))
    scale = max(float(np.ptp(x)), float(np.ptp(y)), 1e-9)
    u, v = (x - x0) / scale, (y - y0) / scale
    design = np.column_stack([2 * u, 2 * v, np.ones_like(u)])
    algebraic, *_ = np.linalg.lstsq(design * weight[:, None], (u * u + v * v) * weight, rcond=None)
    a, b, c = algebraic.tolist()
    square = c + a * a + b * b
    if not (np.isfinite(square) and square > 0):
        return None
    along, across, rise = _along_chord(u, v)
    # Curvature, tangent offset and direction stay finite on a straight line, where a centre runs off to infinity.
    start = np.array([_curvature_sign(rise, along) / np.sqrt(square), 0.0, 0.0])

    def distances(p: Floats) -> tuple[Floats, Floats] | None:
        k, offset, tilt = p
        s = along * np.cos(tilt) + across * np.sin(tilt)
        n = across * np.cos(tilt) - along * np.sin(tilt) - offset
        inner = (1 - k * n) ** 2 + (k * s) ** 2
        root = np.sqrt(inner)
        d = (2 * n - k * (s * s + n * n)) / (1 + root)
        d_n = (1 - k * n) / root
        d_s = -k * s / root
        d_k = (-(s * s + n * n) - d * (-(1 - k * n) * n + k * s * s) / root) / (1 + root)
        d_tilt = d_s * n + d_n * (-s) + d_s * offset
        jacobian = np.column_stack([d_k, -d_n, d_tilt])
        return d * weight, jacobian * weight[:, None]

    outcome = minimise(distances, start)
    k, offset, tilt = outcome.parameters.tolist()
    if k == 0:
        return None
    u_k = float(np.sqrt(outcome.covariance()[0, 0]))
    radius = 1 / abs(k)
    direction, normal, origin = _frame(u, v)
    normal_turned = normal * np.cos(tilt) - direction * np.sin(tilt)
    centre = origin + normal_turned * (offset + 1 / k)
    half = float(np.ptp(along)) / 2
    sagitta = abs(k) * half**2 / 2
    return Circle(
        x0 + scale * float(centre[0]),
        y0 + scale * float(centre[1]),
        scale * radius,
        scale * radius * u_k / abs(k),
        scale * float(np.sqrt(outcome.sum_of_squares / len(x))),
        scale * sagitta,
        scale * u_k * half**2 / 2,
    )


def _frame(u: Floats, v: Floats) -> tuple[Floats, Floats, Floats]:
    """Direction of the chord, its normal, and the mean place."""
    origin = np.array([u.mean(), v.mean()])
    _, _, vt = np.linalg.svd(np.column_stack([u, v]) - origin, full_matrices=False)
    direction = vt[0]
    return direction, np.array([-direction[1], direction[0]]), origin


def _along_chord(u: Floats, v: Floats) -> tuple[Floats, Floats, Floats]:
    direction, normal, origin = _frame(u, v)
    points = np.column_stack([u, v]) - origin
    across = points @ normal
    return points @ direction, across, across


def _curvature_sign(rise: Floats, along: Floats) -> float:
    """Side to which the ends of the arc bend."""
    return 1.0 if np.sum((along**2 - np.mean(along**2)) * rise) > 0 else -1.0
