"""Swings of known truth, made without any code of the fit: exact equations integrated by scipy's DOP853.

The suspensions are written here from their geometry, not taken from the package.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import NDArray
from scipy.integrate import quad, solve_ivp

from swingtrack.records import SwingLaw

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Rig:
    """A suspension by its potential v(q) (∂v = v'), inertia m(q) and m'(q); dimensionless, v = q²/2 + …, m = 1 + …"""

    name: str
    v: Callable[[Floats], Floats]
    v1: Callable[[Floats], Floats]
    m: Callable[[Floats], Floats]
    m1: Callable[[Floats], Floats]

    def law(self, q_max: float = 1.2) -> SwingLaw:
        """As the rig's stage hands it over."""

        def potential(s: Floats) -> Floats:
            q = np.maximum(q_max * np.sqrt((s + 1) / 2), 1e-5)
            return np.asarray(2 * self.v(q) / q**2)

        def inertia(s: Floats) -> Floats:
            return np.asarray(self.m(q_max * np.sqrt((s + 1) / 2)))

        amplitudes = np.linspace(0, q_max, 25)[1:]
        ratios = np.array([self.ratio(float(a)) for a in amplitudes])
        return SwingLaw(
            self.name,
            q_max,
            chebyshev.chebinterpolate(potential, 40),
            chebyshev.chebinterpolate(inertia, 40),
            amplitudes,
            ratios,
        )

    def ratio(self, amplitude: float) -> float:
        """T(A)/T(0) by the energy integral, q = A sin φ."""

        def integrand(phi: float) -> float:
            q = np.array(amplitude * np.sin(phi))
            fall = float(self.v(np.array(amplitude)) - self.v(q))
            return amplitude * np.cos(phi) * float(np.sqrt(self.m(q) / (2 * fall)))

        return float(2 / np.pi * quad(integrand, 0, np.pi / 2 - 1e-9, epsabs=1e-11, epsrel=1e-11)[0])


def bifilar(length: float, upper: float, lower: float, gyration: float, *, bounce: bool = True) -> Rig:
    """Strings of `length`, half spacings (or radii) `upper` and `lower`, radius of gyration; any one unit."""
    ab = upper * lower
    h0 = np.sqrt(length**2 - (upper - lower) ** 2)

    def h(q: Floats) -> Floats:
        return np.asarray(np.sqrt(length**2 - upper**2 - lower**2 + 2 * ab * np.cos(q)))

    def v(q: Floats) -> Floats:
        # h0 − h without cancellation: (h0² − h²)/(h0 + h), h0² − h² = 4ab sin²(q/2)
        return np.asarray(4 * ab * np.sin(q / 2) ** 2 / (h0 + h(q)) * h0 / ab)

    def v1(q: Floats) -> Floats:
        return np.asarray(np.sin(q) * h0 / h(q))

    def m(q: Floats) -> Floats:
        return np.asarray(1 + bounce * (ab * np.sin(q) / h(q) / gyration) ** 2)

    def m1(q: Floats) -> Floats:
        s, c, height = np.sin(q), np.cos(q), h(q)
        return np.asarray(bounce * (ab / gyration) ** 2 * (2 * s * c / height**2 + 2 * ab * s**3 / height**4))

    return Rig("bifilar", v, v1, m, m1)


def knife_edge() -> Rig:
    """A compound pendulum."""
    return Rig("knife-edge", lambda q: 2 * np.sin(q / 2) ** 2, np.sin, np.ones_like, np.zeros_like)


def torsion_wire() -> Rig:
    """A linear spring."""
    return Rig("torsion-wire", lambda q: q * q / 2, lambda q: q, np.ones_like, np.zeros_like)


@dataclass(frozen=True)
class Losses:
    """γ of 2γθ' (1/s), β of βθ'|θ'|, and the static angle of dry friction (rad)."""

    gamma: float = 0.0
    beta: float = 0.0
    dry: float = 0.0


def integrate(t: Floats, rig: Rig, period: float, amplitude: float, losses: Losses) -> Floats:
    """θ(t) from rest at `amplitude` at t = 0, half-swing by half-swing so that dry friction stays exact."""
    omega = 2 * np.pi / period
    q = np.zeros_like(t)
    start, place, direction = 0.0, amplitude, -1.0
    while start <= t[-1]:

        def slope(_: float, state: Floats, sign: float = direction) -> list[float]:
            angle, speed = state
            push = omega**2 * float(rig.v1(np.array(angle))) + 0.5 * float(rig.m1(np.array(angle))) * speed**2
            drag = 2 * losses.gamma * speed + losses.beta * speed * abs(speed) + losses.dry * omega**2 * sign
            return [speed, -(push + drag) / float(rig.m(np.array(angle)))]

        def turns(_: float, state: Floats) -> float:
            return float(state[1])

        turns.terminal = True  # type: ignore[attr-defined]
        turns.direction = -direction  # type: ignore[attr-defined]
        solved = solve_ivp(
            slope,
            (start, start + 2 * period),
            [place, direction * 1e-300],
            method="DOP853",
            rtol=1e-12,
            atol=1e-14,
            events=turns,
            dense_output=True,
        )
        end = float(solved.t[-1])
        inside = (t >= start) & (t <= end)
        q[inside] = solved.sol(t[inside])[0]
        start, place, direction = end, float(solved.y[0, -1]), -direction
    return q
