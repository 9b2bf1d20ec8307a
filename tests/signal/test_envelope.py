"""The averaged envelopes against integration and published values."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from swingtrack.signal.envelope import Losses, amplitude_at


@pytest.mark.parametrize(
    "losses",
    [
        Losses(0.05, 0, 0),
        Losses(0, 0.2, 0),
        Losses(0, 0, 0.01),
        Losses(0.03, 0.1, 0),
        Losses(0.03, 0, 0.005),
        Losses(0, 0.1, 0.01),
        Losses(0.02, 0.1, 0.004),
        Losses(0.2, 0.05, 0.01),
    ],
)
def test_closed_form_solves_its_equation(losses):
    t = np.linspace(0, 30, 61)
    solved = solve_ivp(
        lambda _, a: -losses.viscous * a - losses.quadratic * a**2 - losses.dry * (a > 0),
        (0, 30),
        [0.8],
        t_eval=t,
        rtol=1e-10,
        atol=1e-12,
        max_step=0.2,
    )
    np.testing.assert_allclose(amplitude_at(t, 0.8, losses), np.maximum(solved.y[0], 0), atol=2e-6)


def test_published_averaged_values():
    """γ = 0.01, β = 0.05, ω0 = 1, A0 = 1, after 20 cycles: 0.112987 by integration of the full equation."""
    losses = Losses.from_coefficients(1.0, 0.01, 0.05, 0.0)
    assert amplitude_at(np.array([40 * np.pi]), 1.0, losses)[0] == pytest.approx(0.112987, rel=2e-3)
    alone = Losses.from_coefficients(1.0, 0.0, 0.1, 0.0)
    # θ'' + 0.1 θ'|θ'| + θ = 0 from 1: 0.272631 after ten cycles by integration; averaging is good to (βA)²
    assert amplitude_at(np.array([20 * np.pi]), 1.0, alone)[0] == pytest.approx(0.272631, rel=1e-3)


def test_a_swing_that_has_come_to_rest_stays_there():
    assert amplitude_at(np.array([1e3]), 0.1, Losses(0, 0, 0.01))[0] == 0
    assert amplitude_at(np.array([1e3]), 0.1, Losses(0, 0.1, 0.01))[0] == 0


def test_shares_add_up():
    assert sum(Losses(0.02, 0.1, 0.004).shares(0.3)) == pytest.approx(1)
    assert Losses().shares(0.3) == (0, 0, 0)
