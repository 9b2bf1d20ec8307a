"""Simulated swings against closed forms and published series; none of it shares code with what it checks."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.special import ellipj, ellipk

from swingtrack.errors import BadInput
from swingtrack.rehearse import Damping, SwingTruth, mechanism_of, simulate_swing

from .benches import pendulum, strings, wire

FREE = Damping(rate_per_s=0.0)


def period_in_motion(swing: SwingTruth, cycles: int) -> float:
    """Mean period between upward crossings of zero, from the integrated motion."""
    t = np.linspace(0.0, swing.ends_s, 40_001)
    y = swing.angle(t)
    at = np.flatnonzero((y[:-1] < 0.0) & (y[1:] >= 0.0))
    # Newton's step from the grid: cubic in the grid's spacing
    for _ in range(3):
        t[at] -= swing.angle(t[at]) / swing.speed(t[at])
    found = t[at]
    assert len(found) > cycles
    return float((found[cycles] - found[0]) / cycles)


def test_a_pendulum_follows_the_elliptic_function() -> None:
    # q = 2 arcsin(k sn(ω0 t + K, k)), k = sin(A/2): DLMF 22.19(i)
    mechanism = mechanism_of(pendulum(), 0.01)
    swing = simulate_swing(mechanism, amplitude_rad=1.0, damping=FREE, duration_s=20.0)
    t = np.linspace(0.0, 20.0, 3001)
    k = math.sin(0.5)
    sn, _, _, _ = ellipj(2.0 * math.pi / mechanism.period_s * t + ellipk(k * k), k * k)
    np.testing.assert_allclose(swing.angle(t), 2.0 * np.arcsin(k * sn), rtol=0.0, atol=1e-9)


@pytest.mark.parametrize(
    ("upper", "lower", "gyration", "degrees", "ratio"),
    [  # docs/theory.md, "Finite amplitude": 30-digit quadrature and a six-degree-of-freedom rigid body
        (0.2, 0.2, 0.10, 5, 1.00048091),
        (0.2, 0.2, 0.10, 30, 1.01754914),
        (0.2, 0.2, 0.05, 45, 1.04434294),
        (0.5, 0.5, 0.15, 20, 1.01141579),
        (1.0, 1.0, 0.30, 45, 1.10705424),
        (0.6, 0.3, 0.15, 30, 1.02106292),
        (0.2, 0.8, 0.30, 10, 1.00180416),
    ],
)
def test_the_period_on_two_strings(
    upper: float, lower: float, gyration: float, degrees: int, ratio: float
) -> None:
    mechanism = mechanism_of(strings(1.0, upper, lower), 0.5 * gyration**2)
    swing = simulate_swing(
        mechanism, amplitude_rad=math.radians(degrees), damping=FREE, duration_s=5.5 * mechanism.period_s
    )
    assert period_in_motion(swing, 4) / mechanism.period_s == pytest.approx(ratio, abs=1.2e-8)


def test_energy_is_kept_where_nothing_damps() -> None:
    mechanism = mechanism_of(strings(1.0, 1.0, 0.8), 0.02)
    swing = simulate_swing(mechanism, amplitude_rad=1.0, damping=FREE, duration_s=30.0)
    t = np.linspace(0.0, 30.0, 2001)
    q, v = swing.angle(t), swing.speed(t)
    energy = [0.5 * mechanism.inertia(a) * b * b + mechanism.potential(a) for a, b in zip(q, v, strict=True)]
    assert np.ptp(energy) / np.mean(energy) < 1e-9


def test_torque_and_half_slope_are_the_derivatives_of_energy() -> None:
    # central differences; a slip in either would let energy be kept by neither
    mechanism = mechanism_of(
        strings(0.9, 0.4, 0.3, string_mass="30 g", string_stiffness="0.01 N m/rad"), 0.01
    )
    h = 1e-5
    for q in (0.2, 0.7, 1.3):
        slope = (mechanism.potential(q + h) - mechanism.potential(q - h)) / (2 * h)
        assert mechanism.torque(q) == pytest.approx(-slope, rel=1e-8)
        bend = (mechanism.inertia(q + h) - mechanism.inertia(q - h)) / (4 * h)
        assert mechanism.half_slope(q) == pytest.approx(bend, rel=1e-7)


def test_viscous_decay_of_a_harmonic_swing_is_exponential() -> None:
    # θ = A e^(−γt) (cos ω_d t + γ/ω_d sin ω_d t), ω_d² = ω0² − γ²: any text on damped oscillation
    mechanism = mechanism_of(wire("1 N m/rad"), 1.0)
    swing = simulate_swing(mechanism, amplitude_rad=0.3, damping=Damping(0.05), duration_s=60.0)
    t = np.linspace(0.0, 60.0, 601)
    w = math.sqrt(1.0 - 0.05**2)
    exact = 0.3 * np.exp(-0.05 * t) * (np.cos(w * t) + 0.05 / w * np.sin(w * t))
    np.testing.assert_allclose(swing.angle(t), exact, atol=1e-10)


def test_dry_friction_takes_the_same_from_each_swing() -> None:
    # exact: A drops by 4 d/ω0² a cycle, straight in time, and sticks in the end
    mechanism = mechanism_of(wire(), 0.02)
    swing = simulate_swing(mechanism, amplitude_rad=0.5, damping=Damping(0.0, 0.0, 0.01), duration_s=100.0)
    peaks = swing.angle(mechanism.period_s * np.arange(1, 11))
    np.testing.assert_allclose(peaks, 0.5 - 0.04 * np.arange(1, 11), atol=1e-9)
    assert np.ptp(swing.angle(np.array([90.0, 95.0, 100.0]))) == 0.0


def test_quadratic_damping_against_an_independent_integration() -> None:
    # docs/theory.md, "Damping": 0.272631 after 10 cycles at β = 0.1, A0 = 1, ω0 = 1
    mechanism = mechanism_of(wire("1 N m/rad"), 1.0)
    swing = simulate_swing(mechanism, amplitude_rad=1.0, damping=Damping(0.0, 0.1, 0.0), duration_s=66.0)
    t = np.linspace(61.5, 65.0, 20_001)
    assert np.abs(swing.angle(t)).max() == pytest.approx(0.272631, abs=2e-6)


@pytest.mark.parametrize(
    ("cycle", "amplitude"), [(1, 0.831532), (5, 0.464472), (10, 0.268003), (20, 0.112987)]
)
def test_viscous_and_quadratic_damping_together(cycle: int, amplitude: float) -> None:
    # A = γ A0 E/(γ + c A0 (1 − E)), γ = 0.01, β = 0.05, ω0 = A0 = 1: docs/theory.md, "Damping" (averaging, to 1e-3)
    mechanism = mechanism_of(wire("1 N m/rad"), 1.0)
    end = 2.0 * math.pi * cycle
    swing = simulate_swing(
        mechanism, amplitude_rad=1.0, damping=Damping(0.01, 0.05, 0.0), duration_s=end + 2.0
    )
    t = np.linspace(end - 1.5, end + 1.5, 6001)
    assert np.abs(swing.angle(t)).max() == pytest.approx(amplitude, rel=1e-3)


def test_the_local_rate_is_the_loss_over_a_cycle() -> None:
    # at a small amplitude's first cycle the logarithm of the height falls by δ T
    damping = Damping(0.004, 0.03, 0.0004)
    mechanism = mechanism_of(wire("1 N m/rad"), 1.0)
    swing = simulate_swing(mechanism, amplitude_rad=0.2, damping=damping, duration_s=10.0)
    t = np.linspace(5.5, 7.0, 20_001)
    height = float(np.abs(swing.angle(t)).max())
    mean = 0.5 * (0.2 + height)
    assert math.log(0.2 / height) / (2.0 * math.pi) == pytest.approx(damping.local_rate(mean, 1.0), rel=1e-3)


def test_it_is_held_until_the_release_and_known_to_its_end() -> None:
    mechanism = mechanism_of(wire(), 0.02)
    swing = simulate_swing(mechanism, amplitude_rad=0.2, damping=FREE, duration_s=5.0, release_s=1.5)
    assert swing.angle(np.array([0.0, 1.5])).tolist() == [0.2, 0.2]
    assert swing.angle(np.array([[1.5 + 0.5 * mechanism.period_s]])) == pytest.approx(-0.2, abs=1e-9)
    with pytest.raises(BadInput, match="integration ends"):
        swing.angle(np.array([7.0]))


def test_a_release_beyond_the_reach_of_the_strings_is_refused() -> None:
    # spacing over length: turned by more than about 104° these strings would have to stretch
    mechanism = mechanism_of(strings(0.4, 0.5), 0.01)
    with pytest.raises(BadInput, match="would not swing back"):
        simulate_swing(mechanism, amplitude_rad=2.5, damping=FREE, duration_s=1.0)
