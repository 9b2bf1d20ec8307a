"""Exact periods at any amplitude against tables and integrations made by other code."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.integrate import solve_ivp
from scipy.special import ellipk

from swingtrack.inertia import exact_period, small_swing_period, swing_law
from swingtrack.inertia.energy_integral import period_ratio
from swingtrack.inertia.knife_edge import pendulum_dynamics
from swingtrack.inertia.two_circles import two_circle_dynamics
from swingtrack.records import Rig
from swingtrack.rig import rig_from_mapping

# 30-digit quadrature that agrees with an ODE integration to 1.4e-13 in every cell (docs/theory.md, Finite
# amplitude): upper and lower spacing and radius of gyration in string lengths, bounce, T/T0 at 5, 10, 20, 30, 45°.
BIFILAR = [
    (0.2, 0.2, 0.10, False, (1.000461894319, 1.001850084734, 1.007440757627, 1.016895718174, 1.038821333094)),
    (0.2, 0.2, 0.10, True, (1.000480907746, 1.001925837182, 1.007738988302, 1.017549139809, 1.040205697848)),
    (0.2, 0.2, 0.05, True, (1.000537944776, 1.0021530431, 1.008632893206, 1.019505704459, 1.044342942357)),
    (0.5, 0.5, 0.25, True, (1.000505772497, 1.00202382, 1.008107441, 1.018291441, 1.041449939423)),
    (1.0, 1.0, 0.50, False, (1.00011900416, 1.000476172486, 1.001907188143, 1.004300579173, 1.009724311199)),
    (1.0, 1.0, 0.30, True, (1.001439375762, 1.00573682355, 1.022627623523, 1.049794231257, 1.107054237781)),
    (0.6, 0.3, 0.15, False, (1.00041043588, 1.001644213464, 1.00661667072, 1.01503925034, 1.034632569659)),
    (0.6, 0.3, 0.15, True, (1.000585500601, 1.002341760247, 1.009363908037, 1.021062922062, 1.047421314467)),
    (0.2, 0.8, 0.30, True, (1.000450555254, 1.001804162386, 1.007248067318, 1.016428857592, 1.037606738423)),
]
DEGREES = (5, 10, 20, 30, 45)
ROUNDED = 5e-9  # of table cells quoted to nine digits


@pytest.mark.parametrize(("upper", "lower", "gyration", "bounce", "ratios"), BIFILAR)
def test_bifilar_table(
    upper: float, lower: float, gyration: float, bounce: bool, ratios: tuple[float, ...]
) -> None:
    a, b = 0.5 * upper, 0.5 * lower
    dynamics = two_circle_dynamics(math.sqrt(1.0 - (a - b) ** 2), a, b, gyration if bounce else None)
    for degrees, expected in zip(DEGREES, ratios, strict=True):
        found = period_ratio(math.radians(degrees), dynamics.potential, dynamics.inertia)
        assert found == pytest.approx(expected, abs=ROUNDED)


@pytest.mark.parametrize("degrees", [0.1, 1, 5, 30, 60, 90, 120, 150, 170])
def test_pendulum_against_the_elliptic_integral(degrees: float) -> None:
    # T/T0 = (2/π) K(m), m = sin²(A/2): DLMF 22.19(i)
    dynamics = pendulum_dynamics()
    amplitude = math.radians(degrees)
    expected = 2.0 / math.pi * ellipk(math.sin(0.5 * amplitude) ** 2)
    assert period_ratio(amplitude, dynamics.potential, dynamics.inertia) == pytest.approx(expected, rel=1e-12)


def rig(kind: str) -> Rig:
    suspensions = {
        "bifilar": {"length": "1 m ± 0 m", "upper_spacing": "0.4 m ± 0 m", "lower_spacing": "0.3 m ± 0 m"},
        "trifilar": {"length": "0.9 m ± 0 m", "upper_radius": "0.2 m ± 0 m"},
        "knife-edge": {"pivot_to_centre": "0.3 m ± 0 m"},
        "torsion-wire": {"stiffness": "0.02 N m/rad ± 0 %"},
    }
    return rig_from_mapping(
        {
            "article": {"mass": "0.5 kg ± 0 kg"},
            "suspension": {"kind": kind} | suspensions[kind],
            "place": {"gravity": "9.81 m/s^2 ± 0 m/s^2"},
        }
    )


MOMENT = 0.005


def integrated_period(kind: str, amplitude: float) -> float:
    """Period by integrating Newton's law in plain mechanics from rest to the first passage through the middle."""
    mass, g = 0.5, 9.81

    def rates(_t: float, s: np.ndarray) -> list[float]:
        q, v = s
        if kind == "torsion-wire":
            return [v, -0.02 * q / MOMENT]
        if kind == "knife-edge":
            return [v, -mass * g * 0.3 * math.sin(q) / (MOMENT + mass * 0.3**2)]
        length, a, b = (1.0, 0.2, 0.15) if kind == "bifilar" else (0.9, 0.2, 0.2)
        h = math.sqrt(length**2 - a**2 - b**2 + 2 * a * b * math.cos(q))
        z1 = a * b * math.sin(q) / h
        z2 = a * b * math.cos(q) / h + (a * b * math.sin(q)) ** 2 / h**3
        return [v, -(mass * g * z1 + mass * z1 * z2 * v * v) / (MOMENT + mass * z1 * z1)]

    def middle(_t: float, s: np.ndarray) -> float:
        return float(s[0])

    middle.terminal = True  # type: ignore[attr-defined]
    solved = solve_ivp(rates, (0, 20), [amplitude, 0], method="DOP853", rtol=1e-13, atol=1e-15, events=middle)
    return 4.0 * float(solved.t_events[0][0])


@pytest.mark.parametrize("kind", ["bifilar", "trifilar", "knife-edge", "torsion-wire"])
@pytest.mark.parametrize("degrees", [0.1, 3, 45, 120])
def test_exact_period_against_the_equation_of_motion(kind: str, degrees: float) -> None:
    amplitude = math.radians(degrees)
    found = exact_period(rig(kind), MOMENT, amplitude)
    assert found == pytest.approx(integrated_period(kind, amplitude), rel=1e-9)


@pytest.mark.parametrize("kind", ["bifilar", "trifilar", "knife-edge"])
def test_the_law_carries_the_exact_motion(kind: str) -> None:
    bench = rig(kind)
    small = small_swing_period(bench, MOMENT)
    law = swing_law(bench, period_s=small, q_max_rad=1.2)

    def series(coefficients: np.ndarray, q: np.ndarray) -> np.ndarray:
        return np.polynomial.chebyshev.chebval(2.0 * (q / law.q_max_rad) ** 2 - 1.0, coefficients)

    for amplitude in (0.05, 0.6, 1.19):
        by_series = period_ratio(
            amplitude, lambda q: 0.5 * q**2 * series(law.potential, q), lambda q: series(law.inertia, q)
        )
        assert by_series == pytest.approx(exact_period(bench, MOMENT, amplitude) / small, abs=1e-11)
    assert np.interp(0.6, law.amplitude_rad, law.period_ratio) == pytest.approx(
        exact_period(bench, MOMENT, 0.6) / small, abs=2e-4
    )


def test_beyond_what_the_suspension_allows_is_refused() -> None:
    with pytest.raises(ValueError, match="beyond what this suspension allows"):
        exact_period(rig("knife-edge"), MOMENT, math.pi)
