"""One half-swing, turning point to turning point, for many start amplitudes at once.

In dimensionless time x = ω0 t, going down from q = A, q' = 0, the exact equation is

    m(q) q'' + ½ m'(q) q'² + v'(q) + 2 ζ q' − β q'² − f = 0

(velocity-squared drag β q'|q'| and dry friction f sgn q' keep one sign in a half-swing, so the solution is smooth
and nothing has to be split or softened). With s from −1 to 1 over the half-swing and r = 2 / duration, q is a
Chebyshev series in s. Collocation at the Chebyshev points together with q(−1) = A and q'(±1) = 0 makes a
boundary-value problem for the coefficients and r, solved by Newton's method; its last matrix gives the exact
derivatives to A, ζ, β, f and Λ. Spectral collocation after L. N. Trefethen, Spectral Methods in MATLAB (2000), ch. 13
(from memory).

A whole swing is then a chain of half-swings: each ends where the mirror image of the next begins.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.polynomial import chebyshev

from swingtrack.records import Floats
from swingtrack.signal.restoring import Restoring

# Chebyshev terms in time: a cosine over half a turn needs 16 for 1e-13; a wide bifilar at 45°
# needs the rest for 1e-10.
TIME_TERMS = 32
NEWTON_STEPS = 30
# Order of the derivatives: to the start amplitude, then to the four dimensionless parameters.
SHAPE_NAMES = ("zeta", "beta", "dry", "shape")


@dataclass(frozen=True)
class Damping:
    """Dimensionless damping and shape: ζ = γ/ω0, β (1/rad), f (the static angle of dry friction, rad), Λ."""

    zeta: float = 0.0
    beta: float = 0.0
    dry: float = 0.0
    shape: float = 1.0


@dataclass(frozen=True, eq=False)
class HalfSwings:
    """Solved half-swings for `n` start amplitudes, with derivatives to (A, ζ, β, f, Λ) in the last axis.

    Parameters
    ----------
    coefficients : (n, TIME_TERMS) float
        Of q in T_j(s), rad.
    rate : (n,) float
        r = 2 / duration.
    d_coefficients : (n, TIME_TERMS, 5) float
    d_rate : (n, 5) float
    solved : bool
        Newton's method settled for every amplitude.
    """

    coefficients: Floats
    rate: Floats
    d_coefficients: Floats
    d_rate: Floats
    solved: bool


@lru_cache(maxsize=4)
def _basis(terms: int) -> tuple[Floats, Floats, Floats, Floats, Floats]:
    """T_j, T_j', T_j'' at the inner points, and T_j(−1), T_j'(±1)."""
    inner = np.cos(np.pi * (2 * np.arange(terms - 2) + 1) / (2 * (terms - 2)))
    eye = np.eye(terms)
    first = chebyshev.chebder(eye, axis=0)
    second = chebyshev.chebder(first, axis=0)
    t0 = np.asarray(chebyshev.chebvander(inner, terms - 1), dtype=float)
    t1 = np.asarray(chebyshev.chebvander(inner, terms - 2) @ first, dtype=float)
    t2 = np.asarray(chebyshev.chebvander(inner, terms - 3) @ second, dtype=float)
    ends = chebyshev.chebvander(np.array([-1.0, 1.0]), terms - 1)
    end_slopes = np.asarray(chebyshev.chebvander(np.array([-1.0, 1.0]), terms - 2) @ first, dtype=float)
    return t0, t1, t2, ends, end_slopes


def solve_half_swings(amplitude: Floats, damping: Damping, restoring: Restoring) -> HalfSwings:
    """Solve the half-swing from each of `amplitude` (n,), rad.

    Examples
    --------
    The pendulum from 90° takes 1.180340599016 times as long as from nearly none:

    >>> import numpy as np
    >>> from swingtrack.signal.restoring import PendulumLike
    >>> half = solve_half_swings(np.array([np.pi / 2]), Damping(), PendulumLike())
    >>> round(float(2 / half.rate[0] / np.pi), 9)
    1.180340599
    """
    terms = TIME_TERMS
    t0, t1, t2, ends, end_slopes = _basis(terms)
    n = len(amplitude)
    x = np.zeros((n, terms + 1))
    x[:, :terms] = amplitude[:, None] * _cosine_start(terms)
    x[:, terms] = 2 / np.pi
    matrix = np.zeros((n, terms + 1, terms + 1))
    matrix[:, terms - 2, :terms] = ends[0]
    matrix[:, terms - 1, :terms] = end_slopes[0]
    matrix[:, terms, :terms] = end_slopes[1]
    wrong = np.zeros((n, terms + 1))
    zeta, beta = damping.zeta, damping.beta
    solved = False
    for _ in range(NEWTON_STEPS):
        c, r = x[:, :terms], x[:, terms : terms + 1]
        q, q1, q2 = c @ t0.T, c @ t1.T, c @ t2.T
        pull = restoring.pull(q, damping.shape)
        bend = pull.m * q2 + (pull.m1 / 2 - beta) * q1**2
        wrong[:, : terms - 2] = r**2 * bend + pull.v1 + 2 * zeta * r * q1 - damping.dry
        wrong[:, terms - 2] = c @ ends[0] - amplitude
        wrong[:, terms - 1 :] = c @ end_slopes.T
        on_q = r**2 * (pull.m1 * q2 + pull.m2 / 2 * q1**2) + pull.v2
        on_q1 = r**2 * (pull.m1 - 2 * beta) * q1 + 2 * zeta * r
        on_q2 = r**2 * pull.m
        matrix[:, : terms - 2, :terms] = on_q[..., None] * t0 + on_q1[..., None] * t1 + on_q2[..., None] * t2
        matrix[:, : terms - 2, terms] = 2 * r * bend + 2 * zeta * q1
        step = np.linalg.solve(matrix, wrong[..., None])[..., 0]
        x = x - step
        size = float(np.max(np.abs(step[:, :terms]) / amplitude[:, None]))
        if not size < 1e3:
            break
        if size < 1e-9:  # Newton doubles the digits: the step just taken leaves some 1e-18
            solved = True
            break
    pushes = np.zeros((n, terms + 1, 5))
    pushes[:, terms - 2, 0] = 1.0
    pushes[:, : terms - 2, 1] = -2 * r * q1
    pushes[:, : terms - 2, 2] = r**2 * q1**2
    pushes[:, : terms - 2, 3] = 1.0
    pushes[:, : terms - 2, 4] = -pull.v1_shape
    slopes = np.asarray(np.linalg.solve(matrix, pushes), dtype=float)
    return HalfSwings(x[:, :terms], x[:, terms], slopes[:, :terms], slopes[:, terms], solved)


@lru_cache(maxsize=4)
def _cosine_start(terms: int) -> Floats:
    """Chebyshev coefficients of cos(π (s + 1) / 2), the half-swing of a harmonic oscillator."""
    nodes = chebyshev.chebpts1(terms)
    values = np.cos(np.pi * (nodes + 1) / 2)
    return np.asarray(np.linalg.solve(chebyshev.chebvander(nodes, terms - 1), values), dtype=float)
