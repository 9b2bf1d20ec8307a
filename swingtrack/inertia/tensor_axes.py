"""The set of axes of a tensor: its rows, its condition, and the axis that would help most next."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..records import Floats

# Weights that make the sum of squares of the six elements that of the nine in the matrix: independent of the frame.
FRAME = np.array([1.0, 1.0, 1.0, 2.0, 2.0, 2.0])
CANDIDATES = 2000  # directions over half a sphere: 3° apart, finer than an axis can be hung
OPEN_VARIANCE = 1e8  # of an element that no axis has touched yet, in units of the runs' own variance


@dataclass(frozen=True)
class NextAxis:
    """Axis of one more swing, and the part by which it lowers the matrix's own uncertainty (0 to 1)."""

    axis: tuple[float, float, float]
    gain: float


def axis_row(n: Sequence[Any] | Floats) -> list[Any]:
    """Row of nᵀ J n in xx, yy, zz, yz, xz, xy."""
    x, y, z = n
    return [x * x, y * y, z * z, 2.0 * y * z, 2.0 * x * z, 2.0 * x * y]


def sideways(axis: Floats) -> tuple[Floats, Floats]:
    """Two unit vectors across an axis and across one another."""
    other = np.eye(3)[int(np.argmin(np.abs(axis)))]
    first = np.cross(axis, other)
    first /= np.linalg.norm(first)
    return first, np.cross(axis, first)


def condition_of(axes: Sequence[Floats]) -> float:
    """Condition number of the axes' rows, scaled so that it does not depend on the frame.

    √2.5 = 1.58 for the six diagonals of an icosahedron, which are spread as evenly as six axes can be; infinite where
    an element is left open.
    """
    rows = np.array([axis_row(axis) for axis in axes], dtype=np.float64) / np.sqrt(FRAME)
    singular = np.linalg.svd(rows, compute_uv=False)
    if len(singular) < len(FRAME) or singular[-1] <= 1e-12 * singular[0]:
        return math.inf
    return float(singular[0] / singular[-1])


def suggest_axis(axes: Sequence[Floats], own_u: Floats, matrix: Floats, axis_u_rad: float) -> NextAxis:
    """The axis whose swing lowers the trace of the matrix's covariance most (A-optimal), searched over the sphere.

    Only what is each run's own counts: no axis lowers what all runs share.

    Parameters
    ----------
    axes : sequence of (3,) float
        Of the runs made.
    own_u : (m,) float
        Standard uncertainty of each run's moment from its own inputs, kg m².
    matrix : (3, 3) float
        J, kg m².
    axis_u_rad : float
        Standard uncertainty of an axis' direction, in each of two directions.
    """
    made = np.array(axes)
    variance = own_u**2 + _tilt_variance(made, matrix, axis_u_rad)
    relative = float(np.median(own_u / np.maximum(np.einsum("ij,jk,ik->i", made, matrix, made), 1e-300)))
    rows = np.array([axis_row(axis) for axis in axes], dtype=np.float64) / np.sqrt(FRAME)
    information = (rows / variance[:, None]).T @ rows
    open_information = np.eye(6) / (OPEN_VARIANCE * float(np.median(variance)))
    covariance = np.linalg.inv(information + open_information)
    tried = half_sphere(CANDIDATES)
    h = np.array([axis_row(axis) for axis in tried], dtype=np.float64) / np.sqrt(FRAME)
    moment = np.einsum("ij,jk,ik->i", tried, matrix, tried)
    new_variance = (relative * moment) ** 2 + _tilt_variance(tried, matrix, axis_u_rad)
    spread = h @ covariance
    lowered = np.sum(spread**2, axis=1) / (new_variance + np.sum(spread * h, axis=1))
    best = int(np.argmax(lowered))
    gain = 1.0 - math.sqrt(max(1.0 - float(lowered[best]) / float(np.trace(covariance)), 0.0))
    axis = tried[best]
    return NextAxis((round(float(axis[0]), 3), round(float(axis[1]), 3), round(float(axis[2]), 3)), gain)


def half_sphere(count: int) -> Floats:
    """Directions (count, 3) evenly spread over the half sphere z >= 0, on a golden-angle spiral."""
    turn = math.pi * (3.0 - math.sqrt(5.0))
    z = 1.0 - np.arange(count) / count
    angle = turn * np.arange(count)
    flat = np.sqrt(1.0 - z**2)
    return np.stack([flat * np.cos(angle), flat * np.sin(angle), z], axis=1)


def _tilt_variance(axes: Floats, matrix: Floats, axis_u_rad: float) -> Floats:
    """(m,) variance that tilts make: the slope of nᵀ J n across n is 2 |J n − n (nᵀ J n)|."""
    turned = axes @ matrix
    along = np.einsum("ij,ij->i", turned, axes)
    across = turned - along[:, None] * axes
    return np.asarray(4.0 * axis_u_rad**2 * np.sum(across**2, axis=1), dtype=np.float64)
