"""Simulated swings against closed forms; drawn dots against their truth."""

from __future__ import annotations

import math
from pathlib import Path

import av
import numpy as np
import pytest
from scipy.special import ellipk

from swingtrack.rehearse import Damping, Film, RehearsalSettings, mechanism_of, rehearse_clip, simulate_swing
from swingtrack.rig import rig_from_mapping

PENDULUM = {
    "article": {"mass": "0.4 kg"},
    "suspension": {"kind": "knife-edge", "pivot_to_centre": "0.3 m"},
    "place": {"gravity": "9.81 m/s^2"},
}
STRINGS = {
    "article": {"mass": "0.5 kg", "expected_moment": "0.005 kg m^2"},
    "suspension": {"kind": "bifilar", "length": "1 m", "upper_spacing": "0.2 m"},
    "place": {"gravity": "9.81 m/s^2"},
}
FREE = Damping(rate_per_s=0.0)


def crossings(t: np.ndarray, y: np.ndarray) -> np.ndarray:
    at = np.flatnonzero(np.diff(np.sign(y)) != 0)
    return t[at] - y[at] * (t[at + 1] - t[at]) / (y[at + 1] - y[at])


def test_pendulum_period_against_the_elliptic_integral() -> None:
    # T = 4/ω0 K(sin²(A/2)): DLMF 22.19(i)
    mechanism = mechanism_of(rig_from_mapping(PENDULUM), 0.01)
    swing = simulate_swing(mechanism, amplitude_rad=1.0, damping=FREE, duration_s=8.0)
    t = np.linspace(0.0, 8.0, 80_001)
    found = np.mean(np.diff(crossings(t, swing.angle(t))[::2]))
    assert found == pytest.approx(mechanism.period_s * 2 / math.pi * ellipk(math.sin(0.5) ** 2), rel=1e-7)


def test_bifilar_period_against_the_table() -> None:
    # case of docs/theory.md, Finite amplitude: D = 0.2 L, k = 0.1 L, with bounce, 30°: T/T0 = 1.017549139809
    mechanism = mechanism_of(rig_from_mapping(STRINGS), 0.5 * 0.1**2)
    swing = simulate_swing(mechanism, amplitude_rad=math.radians(30), damping=FREE, duration_s=12.0)
    t = np.linspace(0.0, 12.0, 120_001)
    found = np.mean(np.diff(crossings(t, swing.angle(t))[::2]))
    assert found / mechanism.period_s == pytest.approx(1.017549139809, abs=2e-7)


def test_dry_friction_takes_the_same_from_each_swing() -> None:
    # exact: A drops by 4 d/ω0² a cycle, straight in time, and sticks in the end
    rig = rig_from_mapping(
        {"article": {}, "suspension": {"kind": "torsion-wire", "stiffness": "0.02 N m/rad"}}
    )
    mechanism = mechanism_of(rig, 0.02)
    swing = simulate_swing(mechanism, amplitude_rad=0.5, damping=Damping(0.0, 0.0, 0.01), duration_s=100.0)
    period = mechanism.period_s
    peaks = swing.angle(period * np.arange(1, 11))
    np.testing.assert_allclose(peaks, 0.5 - 0.04 * np.arange(1, 11), atol=1e-9)
    assert np.ptp(swing.angle(np.array([90.0, 95.0, 100.0]))) == 0.0


def test_quadratic_damping_against_averaging() -> None:
    # A = A0/(1 + c A0 t), c = 4 β ω0/(3π): 0.789471 after 10 cycles at β = 0.01, A0 = 1 (docs/theory.md, Damping)
    rig = rig_from_mapping({"article": {}, "suspension": {"kind": "torsion-wire", "stiffness": "1 N m/rad"}})
    swing = simulate_swing(
        mechanism_of(rig, 1.0), amplitude_rad=1.0, damping=Damping(0.0, 0.01, 0.0), duration_s=70.0
    )
    t = np.linspace(62.0, 63.7, 5001)
    assert np.abs(swing.angle(t)).max() == pytest.approx(0.789471, abs=2e-5)


def test_the_file_holds_the_true_times_and_the_turn(tmp_path: Path) -> None:
    film = Film(width=320, height=240, duration_s=1.5, uneven_ms=2.0, dropped_share=0.1)
    truth = rehearse_clip(
        rig_from_mapping(STRINGS), tmp_path / "c.mp4", settings=RehearsalSettings(film=film)
    )
    with av.open(str(tmp_path / "c.mp4")) as container:
        times = np.array([float(frame.pts * frame.time_base) for frame in container.decode(video=0)])
    np.testing.assert_allclose(times - times[0], truth.t_s, atol=1e-9)
    assert truth.t_s.size < 45


def test_a_rehearsal_needs_a_moment(tmp_path: Path) -> None:
    with pytest.raises(ValueError, match="expected_moment"):
        rehearse_clip(rig_from_mapping(PENDULUM), tmp_path / "c.mp4")
