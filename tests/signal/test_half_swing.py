"""Half-swings against closed forms, published tables and the energy integral."""

from __future__ import annotations

import mpmath
import numpy as np
import pytest

from swingtrack.signal.half_swing import Damping, solve_half_swings
from swingtrack.signal.restoring import FromLaw, PendulumLike
from tests.signal.truth import bifilar, torsion_wire


def chain(start: float, damping: Damping, halves: int) -> tuple[float, float]:
    """Amplitude and dimensionless time after a number of half-swings of the harmonic pull, one by one."""
    a, x = start, 0.0
    for _ in range(halves):
        half = solve_half_swings(np.array([a]), damping, PendulumLike())
        x += 2 / float(half.rate[0])
        a = -float(half.coefficients[0].sum())
    return a, x


@pytest.mark.parametrize("degrees", [5, 10, 30, 60, 90, 120])
def test_pendulum_takes_the_elliptic_integral(degrees):
    """T/T0 = (2/π) K(sin(A/2)), at 30 digits by mpmath."""
    a = np.radians(degrees)
    exact = float(2 / mpmath.pi * mpmath.ellipk(mpmath.sin(mpmath.mpf(a) / 2) ** 2))
    half = solve_half_swings(np.array([a]), Damping(), PendulumLike())
    assert half.solved
    assert 2 / half.rate[0] / np.pi == pytest.approx(exact, rel=1e-10)


@pytest.mark.parametrize(
    ("rig", "degrees", "ratio"),
    [
        # 30-digit quadrature and ODE runs agree on these (bifilar, lengths over L; with the bounce's energy)
        ((0.1, 0.1, 0.10), 20, 1.00773899),
        ((0.1, 0.1, 0.05), 45, 1.04434294),
        ((0.25, 0.25, 0.15), 30, 1.02552854),
        ((0.5, 0.5, 0.30), 45, 1.10705424),
        ((0.3, 0.15, 0.15), 45, 1.04742131),
        ((0.1, 0.4, 0.30), 30, 1.01642886),
    ],
)
def test_bifilar_periods_of_the_published_cases(rig, degrees, ratio):
    a = np.radians(degrees)
    half = solve_half_swings(np.array([a]), Damping(), FromLaw(bifilar(1.0, *rig).law()))
    assert 2 / half.rate[0] / np.pi == pytest.approx(ratio, abs=6e-9)


def test_viscous_half_swing_is_the_damped_oscillator():
    """Duration π/√(1 − ζ²), next amplitude A exp(−ζ π/√(1 − ζ²))."""
    zeta = 0.02
    half = solve_half_swings(np.array([0.4, 2.0]), Damping(zeta=zeta, shape=0.0), PendulumLike())
    duration = np.pi / np.sqrt(1 - zeta**2)
    np.testing.assert_allclose(2 / half.rate, duration, rtol=1e-13)
    np.testing.assert_allclose(
        -half.coefficients.sum(axis=1),
        [0.4 * np.exp(-zeta * duration), 2 * np.exp(-zeta * duration)],
        rtol=1e-12,
    )


def test_dry_friction_takes_two_static_angles_a_half_swing_and_no_time():
    a, x = chain(1.0, Damping(dry=0.01, shape=0.0), 20)
    assert a == pytest.approx(0.6, abs=1e-12)
    assert x == pytest.approx(20 * np.pi, rel=1e-13)


def test_quadratic_damping_of_published_runs():
    """θ'' + 0.1 θ'|θ'| + θ = 0 from 1: 0.272631 after ten cycles by integration."""
    assert chain(1.0, Damping(beta=0.1, shape=0.0), 20)[0] == pytest.approx(0.272631, abs=1e-6)


def test_viscous_and_quadratic_together_of_published_runs():
    """γ = 0.01, β = 0.05, ω0 = 1, from 1: amplitudes after 1, 5 and 10 cycles by integration."""
    damping = Damping(zeta=0.01, beta=0.05, shape=0.0)
    for cycles, amplitude in ((1, 0.831532), (5, 0.464472), (10, 0.268003)):
        assert chain(1.0, damping, 2 * cycles)[0] == pytest.approx(amplitude, rel=2e-3)


@pytest.mark.parametrize("number", range(5))
def test_derivatives_are_those_of_the_solution(number):
    """Analytic derivatives to amplitude, ζ, β, f and Λ against differences."""
    at = np.array([0.7, 0.01, 0.05, 0.003, 1.2])

    def solve(p):
        half = solve_half_swings(p[:1], Damping(*p[1:]), PendulumLike())
        return np.append(half.coefficients[0], half.rate[0])

    step = 1e-5 * np.eye(5)[number]
    half = solve_half_swings(at[:1], Damping(*at[1:]), PendulumLike())
    analytic = np.append(half.d_coefficients[0, :, number], half.d_rate[0, number])
    np.testing.assert_allclose((solve(at + step) - solve(at - step)) / 2e-5, analytic, atol=2e-9)


def test_torsion_wire_keeps_its_period():
    half = solve_half_swings(np.array([0.1, 1.0, 2.5]), Damping(), FromLaw(torsion_wire().law(3.0)))
    np.testing.assert_allclose(2 / half.rate, np.pi, rtol=1e-12)
