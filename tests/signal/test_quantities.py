"""What follows from period and decay rate: closed forms, their inverses and limits."""

from __future__ import annotations

import numpy as np
import pytest

from swingtrack.records import Quantity, Series
from swingtrack.signal import FitSettings, fit_swing
from swingtrack.signal import quantities as q
from tests.signal.series import PERIOD, RIG, noise, swing
from tests.signal.truth import Losses, integrate, torsion_wire


def test_published_log_decrement():
    """ζ = 0.02: 0.12568885, checked by an integration of the equation."""
    assert q.log_decrement(Quantity(0.02, 1e-4, "1")).value == pytest.approx(0.12568885, abs=1e-8)


def test_log_decrement_and_damping_ratio_are_inverse():
    for zeta in (1e-3, 0.05, 0.4):
        decrement = q.log_decrement(Quantity(zeta, 0.0, "1")).value
        assert decrement / np.hypot(2 * np.pi, decrement) == pytest.approx(zeta, rel=1e-12)


def test_half_life_and_quality_factor():
    rate = Quantity(0.02, 0.001, "1/s", 100)
    half = q.half_life(rate)
    assert half is not None
    assert half.value == pytest.approx(np.log(2) / 0.02)
    assert half.relative_u == pytest.approx(rate.relative_u)
    factor = q.quality_factor(q.damping_ratio(rate, 5.0))
    assert factor is not None
    assert factor.value == pytest.approx(5.0 / (2 * 0.02))


def test_no_half_life_where_no_decay_is_established():
    assert q.half_life(Quantity(1e-4, 1e-4, "1/s")) is None
    assert q.half_life(Quantity(-0.02, 1e-4, "1/s")) is None
    assert q.quality_factor(Quantity(1e-5, 1e-4, "1")) is None


def test_shares_of_the_causes_at_both_ends():
    """γ = 0.01, c = 4βω/(3π), d = 2fω/π of the truth at the amplitudes of the truth."""
    t = np.arange(1800) / 60
    losses = Losses(0.01, 0.05, 0.0008)
    y = integrate(t, RIG, PERIOD, 0.5, losses)
    found = fit_swing(Series(t, y + noise(1800, 1, 1e-5), "rad"), law=RIG.law())
    assert found.damping_law == "viscous+quadratic+dry"
    omega = 2 * np.pi / PERIOD
    assert found.amplitude_start is not None
    assert found.amplitude_end is not None
    for amplitude, end in (
        (found.amplitude_start.value, "share_start"),
        (found.amplitude_end.value, "share_end"),
    ):
        parts = np.array(
            [
                losses.gamma,
                4 * losses.beta * omega * amplitude / (3 * np.pi),
                2 * losses.dry * omega / (np.pi * amplitude),
            ]
        )
        shares = [getattr(term, end) for term in found.damping_terms]
        np.testing.assert_allclose(shares, parts / parts.sum(), atol=0.02)
    for term, value in zip(found.damping_terms, (losses.gamma, losses.beta, losses.dry), strict=True):
        assert abs(term.value.value - value) < 4 * term.value.u


@pytest.mark.parametrize(
    ("losses", "law"),
    [(Losses(0.02, 0, 0), "viscous"), (Losses(0, 0.15, 0), "quadratic"), (Losses(0, 0, 0.0008), "dry")],
)
def test_the_law_of_damping_is_told_by_evidence(losses, law):
    t, y = swing(30, losses=losses)
    found = fit_swing(Series(t, y + noise(len(t), 2, 2e-4), "rad"), law=RIG.law())
    assert found.damping_law == law


def test_decay_rate_is_the_local_one_at_the_mean_amplitude():
    t, y = swing(30, losses=Losses(0, 0, 0.0008))
    found = fit_swing(Series(t, y + noise(len(t), 2, 2e-4), "rad"), law=RIG.law())
    middle = np.mean(found.trace.amplitude)
    assert found.decay_rate.value == pytest.approx(
        2 * 0.0008 * 2 * np.pi / PERIOD / (np.pi * middle), rel=0.01
    )


def test_laws_asked_for_are_the_laws_fitted():
    t, y = swing(30)
    series = Series(t, y + noise(len(t), 2), "rad")
    found = fit_swing(series, law=RIG.law(), settings=FitSettings(damping=("quadratic", "dry")))
    assert found.damping_law == "quadratic+dry"


def test_heavy_damping_second_order_shift_is_taken_out():
    """With ζ = 0.1 the swing is 0.5 % slower than the undamped one; the period reported is the undamped."""
    zeta = 0.1
    t = np.arange(300) / 30
    omega = 2 * np.pi / PERIOD
    y = 0.3 * np.exp(-zeta * omega * t) * np.cos(omega * np.sqrt(1 - zeta**2) * t)
    found = fit_swing(Series(t, y + noise(300, 3, 1e-4), "rad"), law=torsion_wire().law(1.0))
    assert abs(found.period.value - PERIOD) < 3 * found.period.u
    assert found.period.relative_u < 1e-4
    assert found.period_in_clip.value == pytest.approx(PERIOD / np.sqrt(1 - zeta**2), rel=2e-4)
    assert "damping-heavy" in {doubt.code for doubt in found.doubts}
