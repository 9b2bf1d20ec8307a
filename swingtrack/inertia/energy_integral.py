"""The exact period of a conservative swing at any amplitude, by the energy integral."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from ..records import Floats

NODES = 400  # of the midpoint rule, which converges geometrically here; 400 reach rounding at 170 degrees


def period_ratio(
    amplitude_rad: float, potential: Callable[[Floats], Floats], inertia: Callable[[Floats], Floats]
) -> float:
    """Ratio T(A) / T(0) of an even one-coordinate swing.

    T(A) = 4 ∫₀ᴬ √( m(q) / (2 ω0² (v(A) − v(q))) ) dq, with v the potential energy over I ω0² (v ≈ q²/2 at rest)
    and m the inertia over its value at rest. With q = A sin φ the integrand is smooth and periodic in φ, so that
    the midpoint rule converges geometrically and the end point, where v(A) − v(q) vanishes, is never touched.

    Parameters
    ----------
    amplitude_rad : float
        Half swing A > 0, rad.
    potential, inertia : callable
        v(q) and m(q), arrays (n,) to arrays (n,).

    Notes
    -----
    The integral is the standard quadrature of one-dimensional conservative motion (Landau and Lifshitz,
    Mechanics, §11, from memory).
    """
    phi = (np.arange(NODES) + 0.5) * (0.5 * np.pi / NODES)
    q = amplitude_rad * np.sin(phi)
    top = np.array([amplitude_rad])
    gap = potential(top)[0] - potential(q)
    integrand = np.sqrt(inertia(q) / (2.0 * gap)) * amplitude_rad * np.cos(phi)
    return float(4.0 * integrand.mean() * 0.5 * np.pi / (2.0 * np.pi))
