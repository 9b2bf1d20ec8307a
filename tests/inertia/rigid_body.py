"""A rigid body with six degrees of freedom on inextensible strings, linearised about rest: the judge of the formulas.

Nothing of the package is used. Each string i from the point U_i above to the point S_i of the body (from its centre of
mass) holds |r + R(θ) S_i − U_i| = L_i. With δ = δr + θ×S to first order and ½ θ×(θ×S) to second, the constraint's second
derivative is |δ|² + (θ·S)(θ·W) − θ²(S·W), W the vector along the string. Lagrange's multipliers at rest (the tensions per
length) weigh these; mass and stiffness matrices are then taken on the motions that the strings allow.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np


@dataclass
class Body:
    mass: float
    inertia: np.ndarray  # (3, 3) about the centre of mass
    hooks: np.ndarray  # (n, 3) upper ends
    ties: np.ndarray  # (n, 3) lower ends at rest; both from the centre of mass at rest, z up
    gravity: float = 9.81


def modes(body: Body) -> tuple[np.ndarray, np.ndarray]:
    """(ω², shapes) of the motions that the strings allow; shapes (6, n): δr, θ with unit kinetic energy."""
    along = body.ties - body.hooks
    slopes = np.hstack([along, np.cross(body.ties, along)])
    weight = np.array([0.0, 0.0, body.mass * body.gravity, 0.0, 0.0, 0.0])
    tensions, *_ = np.linalg.lstsq(slopes.T, -weight, rcond=None)
    assert np.allclose(slopes.T @ tensions, -weight, atol=1e-9), "the body is not at rest"
    stiffness = np.zeros((6, 6))
    for tension, s, w in zip(tensions, body.ties, along, strict=True):
        cross = np.array([[0, s[2], -s[1]], [-s[2], 0, s[0]], [s[1], -s[0], 0]])  # θ×S = cross @ θ
        first = np.hstack([np.eye(3), cross])
        second = np.zeros((6, 6))
        second[3:, 3:] = 0.5 * (np.outer(s, w) + np.outer(w, s)) - np.eye(3) * (s @ w)
        stiffness += tension * (first.T @ first + second)
    _, sizes, turns = np.linalg.svd(slopes)
    allowed = turns[np.sum(sizes > 1e-9 * sizes[0]) :].T
    mass = np.zeros((6, 6))
    mass[:3, :3], mass[3:, 3:] = body.mass * np.eye(3), body.inertia
    lower = np.linalg.cholesky(allowed.T @ mass @ allowed)
    half = np.linalg.solve(lower, allowed.T @ stiffness @ allowed)
    values, vectors = np.linalg.eigh(np.linalg.solve(lower, half.T).T)
    return values, allowed @ np.linalg.solve(lower.T, vectors)


def yaw(body: Body) -> float:
    """ω² of the motion that turns most about the vertical."""
    values, shapes = modes(body)
    return float(values[np.argmax(np.abs(shapes[5]))])


def sway(body: Body, direction: int) -> float:
    """ω² of the motion that shifts most along x (0) or y (1)."""
    values, shapes = modes(body)
    return float(values[np.argmax(np.abs(shapes[direction]))])
