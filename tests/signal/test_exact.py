"""The exact motion against integrations by other code."""

from __future__ import annotations

import numpy as np
import pytest

from swingtrack.signal.exact import PARAMETERS, SwingState, move
from swingtrack.signal.half_swing import Damping
from swingtrack.signal.restoring import FromLaw, PendulumLike
from tests.signal.truth import Losses, bifilar, integrate, knife_edge

PERIOD = 1.1
OMEGA = 2 * np.pi / PERIOD


@pytest.mark.parametrize(
    ("rig", "losses", "degrees"),
    [
        (knife_edge(), Losses(0.02, 0.05, 0.001), 40),
        (bifilar(1.0, 0.5, 0.5, 0.3), Losses(0.02, 0, 0), 45),
        (bifilar(1.0, 0.1, 0.4, 0.3), Losses(0, 0.08, 0.0005), 25),
    ],
    ids=["knife edge", "wide bifilar", "unequal bifilar"],
)
def test_agrees_with_an_integrator_step_by_step(rig, losses, degrees):
    t = np.sort(np.random.default_rng(1).uniform(0, 30, 400))
    a = np.radians(degrees)
    damping = Damping(losses.gamma / OMEGA, losses.beta, losses.dry)
    motion = move(t, SwingState(a, 0.0, OMEGA, damping), FromLaw(rig.law()))
    np.testing.assert_allclose(motion.q, integrate(t, rig, PERIOD, a, losses), atol=1e-8)


@pytest.mark.parametrize("number", range(7), ids=PARAMETERS)
def test_derivatives_along_the_whole_record(number):
    t = np.linspace(0, 20, 300)
    at = np.array([0.7, 0.4, OMEGA, 0.004, 0.03, 0.002, 1.0])

    def motion(p):
        return move(t, SwingState(p[0], p[1], p[2], Damping(*p[3:])), PendulumLike())

    step = 1e-6 * np.eye(7)[number]
    numeric = (motion(at + step).q - motion(at - step).q) / 2e-6
    analytic = motion(at).slopes[:, number]
    np.testing.assert_allclose(numeric, analytic, atol=1e-6 * max(np.abs(analytic).max(), 1))


def test_velocity_is_the_slope_of_the_motion():
    t = np.linspace(0.1, 5, 200)
    state = SwingState(0.5, 0.3, 4.0, Damping(0.01, 0.02, 0.001))
    numeric = (move(t + 1e-6, state, PendulumLike()).q - move(t - 1e-6, state, PendulumLike()).q) / 2e-6
    np.testing.assert_allclose(move(t, state, PendulumLike()).velocity, numeric, atol=1e-7)


def test_a_clock_twice_as_fast_halves_every_time():
    t = np.linspace(0, 20, 200)
    damping = Damping(0.01, 0.02, 0.001)
    slow = move(t, SwingState(0.5, 0.3, 4.0, damping), PendulumLike()).q
    fast = move(t / 2, SwingState(0.5, 0.3, 8.0, damping), PendulumLike()).q
    np.testing.assert_allclose(slow, fast, atol=1e-12)


def test_the_other_side_is_the_mirror_image():
    t = np.linspace(0, 5, 50)
    damping = Damping(0.01, 0.02, 0.001)
    right = move(t, SwingState(0.5, 0.3, 4.0, damping, 1), PendulumLike()).q
    left = move(t, SwingState(0.5, 0.3, 4.0, damping, -1), PendulumLike()).q
    np.testing.assert_array_equal(left, -right)


def test_growing_swings_are_followed_too():
    t = np.linspace(0, 60, 300)
    motion = move(t, SwingState(0.05, 0.0, 4.0, Damping(-0.01, shape=0.0)), PendulumLike())
    rate = 0.01 * 4
    omega = 4 * np.sqrt(1 - 0.01**2)
    exact = 0.05 * np.exp(rate * t) * (np.cos(omega * t) - 0.01 / np.sqrt(1 - 0.01**2) * np.sin(omega * t))
    np.testing.assert_allclose(motion.q, exact, atol=1e-11)
