"""How strongly the suspension pulls back at an angle, and how its inertia varies with it.

In dimensionless time x = ω0 t the free swing is m(q) q'' + ½ m'(q) q'² + v'(q) = 0. A restoring law answers with
m, m', m'', v', v'' at given angles, and with ∂v'/∂Λ where the law has a free shape Λ that the clip has to tell.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Protocol

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import NDArray

from swingtrack.records import Floats, SwingLaw

# A shift T/T0 − 1 below this at any amplitude counts as none (a torsion wire).
ISOCHRONOUS_SHIFT = 1e-9


@dataclass(frozen=True, eq=False)
class Pull:
    """m, m', m'' and v', v'', ∂v'/∂Λ at the angles asked for, each of their shape; dimensionless."""

    m: Floats
    m1: Floats
    m2: Floats
    v1: Floats
    v2: Floats
    v1_shape: Floats


class Restoring(Protocol):
    """What the integrator asks of a suspension."""

    def pull(self, q: Floats, shape: float) -> Pull: ...


class PendulumLike:
    """v'(q) = sin(√Λ q)/√Λ, m = 1: a family from the torsion wire (Λ = 0) over the pendulum (Λ = 1) and beyond.

    T/T0 = 1 + Λ A²/16 + 11 Λ² A⁴/3072 + … Used where no rig says how the period grows with the amplitude, or
    where the unit of the coordinate is unknown: then Λ has the unit of its inverse square.
    Λ < 0 (sinh) is a suspension that stiffens.
    """

    def pull(self, q: Floats, shape: float) -> Pull:
        """See `Restoring`."""
        z = shape * q * q
        sinc, cos, slope = _sinc_cos_slope(z)
        one = np.ones_like(q)
        nought = np.zeros_like(q)
        return Pull(one, nought, nought, q * sinc, cos, q * q * q * slope)


def _sinc_cos_slope(z: Floats) -> tuple[Floats, Floats, Floats]:
    """sin(√z)/√z, cos(√z) and d(sin(√z)/√z)/dz, analytic through z = 0 (hyperbolic for z < 0)."""
    root = np.sqrt(np.abs(z))
    small = root < 1e-2
    safe = np.where(small, 1.0, root)
    sinc = np.where(z >= 0, np.sin(safe), np.sinh(np.minimum(safe, 50.0))) / safe
    cos = np.where(z >= 0, np.cos(root), np.cosh(np.minimum(root, 50.0)))
    # Series of sin(√z)/√z = Σ (−z)ⁿ/(2n+1)!; four terms are exact to 1e-18 below √z = 0.01.
    sinc = np.where(small, 1 - z / 6 * (1 - z / 20 * (1 - z / 42)), sinc)
    slope = np.where(small, -1 / 6 + z / 60 * (1 - z / 28), (cos - sinc) / (2 * np.where(small, 1.0, z)))
    return sinc, cos, slope


class FromLaw:
    """The suspension's exact law as handed over by the rig's stage: Chebyshev series of v and m (`SwingLaw`)."""

    def __init__(self, law: SwingLaw) -> None:
        self._q_max = law.q_max_rad
        p, p_s, p_ss = _with_slopes(law.potential)
        m, m_s, m_ss = _with_slopes(law.inertia)
        # With s = 2 (q/q_max)² − 1, ds/dq = 4 q/q_max² and q² = q_max² (s + 1)/2, everything is even in q or q times
        # something even: m, m'/q, m'', v'/q and v'' as Chebyshev series in s, evaluated in one pass.
        per = 4 / self._q_max**2
        square = np.array([0.5, 0.5]) * self._q_max**2
        series = (
            m,
            m_s * per,
            _add(chebyshev.chebmul(m_ss, square) * per**2, m_s * per),
            _add(p, chebyshev.chebmul(p_s, square) * per / 2),
            _add(
                p,
                _add(
                    chebyshev.chebmul(p_s, square) * per * 2.5,
                    chebyshev.chebmul(chebyshev.chebmul(p_ss, square), square) * per**2 / 2,
                ),
            ),
        )
        length = max(len(one) for one in series)
        table = np.array([np.pad(one, (0, length - len(one))) for one in series]).T
        weight = np.max(np.abs(table), axis=1)
        enough = int(np.flatnonzero(weight > 1e-17 * weight.max())[-1]) + 1
        self._table = table[:enough]

    def pull(self, q: Floats, shape: float) -> Pull:
        """See `Restoring`; a law from a rig has no free shape."""
        s = 2 * (q / self._q_max) ** 2 - 1
        m, m1_q, m2, v1_q, v2 = chebyshev.chebval(s, self._table)
        return Pull(m, m1_q * q, m2, v1_q * q, v2, np.zeros_like(q))


def _with_slopes(series: Floats) -> tuple[Floats, Floats, Floats]:
    whole = np.asarray(series, dtype=float)
    first = np.asarray(chebyshev.chebder(whole) if len(whole) > 1 else [0.0], dtype=float)
    second = np.asarray(chebyshev.chebder(first) if len(first) > 1 else [0.0], dtype=float)
    return whole, first, second


def _add(a: NDArray[Any], b: NDArray[Any]) -> Floats:
    return np.asarray(chebyshev.chebadd(a, b))


def is_isochronous(law: SwingLaw) -> bool:
    """Whether the period does not depend on the amplitude at all (a torsion wire)."""
    return bool(np.max(np.abs(np.asarray(law.period_ratio) - 1)) < ISOCHRONOUS_SHIFT)
