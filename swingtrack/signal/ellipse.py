"""A circle seen at a slant: the ellipse through the places of one dot, its long axis level in the picture.

The camera looks down at an elevation e at a dot that runs on a level circle of radius R about a vertical axis:

    x = x₀ + R sin φ,   y = y₀ + R sin e cos φ   (y down; the dot on the camera's side)

Fitted by the distance from the ellipse to first order (P. D. Sampson, Comput. Graph. Image Process. 18, 1982, 97; from
memory), with what is known of R beforehand. The camera is taken to be level and far off against R.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from swingtrack.records import Floats
from swingtrack.signal.solver import minimise

# Elevations tried as starts, as sin e; short arcs have several minima.
STARTS = (0.15, 0.4, 0.8)


@dataclass(frozen=True, eq=False)
class Ellipse:
    """Centre, R (px) and sin e, with their covariance (4, 4) in the order x₀, y₀, ln R, sin e; rms distance, px."""

    x_px: float
    y_px: float
    radius_px: float
    slant: float
    covariance: Floats
    rms_px: float

    def angle(self, x: Floats, y: Floats) -> Floats:
        """φ of each place, rad: the direction on the circle that it was seen from."""
        return np.asarray(
            np.arctan2((x - self.x_px) / self.radius_px, (y - self.y_px) / (self.radius_px * self.slant))
        )

    def shifted(self, step: Floats) -> Ellipse:
        """The ellipse with (x₀, y₀, ln R, sin e) changed by `step`."""
        return Ellipse(
            self.x_px + float(step[0]),
            self.y_px + float(step[1]),
            self.radius_px * float(np.exp(step[2])),
            self.slant + float(step[3]),
            self.covariance,
            self.rms_px,
        )

    def relative_u(self, x: Floats, y: Floats) -> float:
        """Relative standard uncertainty of the angle's scale that the ellipse's own doubt makes."""
        size = float(np.std(self.angle(x, y)))
        values, vectors = np.linalg.eigh(self.covariance)
        total = 0.0
        for value, vector in zip(values, vectors.T, strict=True):
            moved = float(np.std(self.shifted(vector * np.sqrt(max(value, 0.0))).angle(x, y)))
            total += (moved / size - 1) ** 2
        return float(np.sqrt(total))


def fit_ellipse(
    x: Floats, y: Floats, weight: Floats, *, radius_px: float | None = None, radius_relative_u: float = 0.1
) -> Ellipse | None:
    """Fit the ellipse, weighted; `radius_px` with its relative uncertainty where R is known from the dot's size.

    Returns None where no start leads to an ellipse with 0 < sin e < 1.
    """
    scale = max(float(np.ptp(x)), float(np.ptp(y)), 1e-9)
    x0, y0 = float(np.median(x)), float(np.median(y))
    u, v = (x - x0) / scale, (y - y0) / scale
    noise = _roughness(u, v)
    known = None if radius_px is None else np.log(radius_px / scale)

    def distances(p: Floats) -> tuple[Floats, Floats] | None:
        if not (1e-3 < p[3] < 1.2) or abs(p[2]) > 8:
            return None
        d, jacobian = _sampson(p, u, v)
        d, jacobian = d * weight, jacobian * weight[:, None]
        if known is not None:
            row = np.array([0.0, 0.0, noise / radius_relative_u, 0.0])
            d = np.append(d, (p[2] - known) * row[2])
            jacobian = np.vstack([jacobian, row])
        return d, jacobian

    best = None
    for slant in STARTS:
        ln_radius = known if known is not None else 0.0
        start = np.array([0.0, -np.exp(ln_radius) * slant, ln_radius, slant])
        try:
            outcome = minimise(distances, start, first_damping=1.0)
        except ValueError:
            continue
        if best is None or outcome.sum_of_squares < best.sum_of_squares:
            best = outcome
    if best is None or not best.parameters[3] <= 1.05:
        return None
    p = best.parameters
    stretch = np.array([scale, scale, 1.0, 1.0])
    return Ellipse(
        x0 + scale * float(p[0]),
        y0 + scale * float(p[1]),
        scale * float(np.exp(p[2])),
        float(p[3]),
        best.covariance() * np.outer(stretch, stretch),
        scale * float(np.sqrt(best.sum_of_squares / len(x))),
    )


def _roughness(u: Floats, v: Floats) -> float:
    """Noise of one place across the path, from what a cubic along it leaves."""
    points = np.column_stack([u - u.mean(), v - v.mean()])
    _, _, vt = np.linalg.svd(points, full_matrices=False)
    along, across = points @ vt[0], points @ vt[1]
    left = across - np.polynomial.polynomial.polyval(
        along, np.polynomial.polynomial.polyfit(along, across, 3)
    )
    return max(1.4826 * float(np.median(np.abs(left))), 1e-9)


def _sampson(p: Floats, u: Floats, v: Floats) -> tuple[Floats, Floats]:
    """First-order distance F/|∇F| and its derivatives by central differences (four smooth parameters)."""

    def distance(p: Floats) -> Floats:
        radius, slant = np.exp(p[2]), p[3]
        a, b = (u - p[0]) / radius, (v - p[1]) / (radius * slant)
        slope = 2 * np.hypot(a, b / slant) / radius
        return np.asarray((a * a + b * b - 1) / slope)

    steps = 1e-6 * np.eye(4)
    columns = [(distance(p + step) - distance(p - step)) / 2e-6 for step in steps]
    return distance(p), np.column_stack(columns)
