"""Published measurements, recomputed: what their authors state, or why it differs."""

from __future__ import annotations

import math

import numpy as np
import pytest

from swingtrack.inertia import MOMENT_UNITS, SwingFacts, exact_period, moment_of_inertia, small_swing_period
from swingtrack.records import Quantity, Rig
from swingtrack.rig import rig_from_mapping

NO_CLOCK = SwingFacts(clock_relative_u=0.0)


def bifilar(mass: str, spacing: str, length: str, gravity: str = "9.81 m/s^2 ± 0 m/s^2", **more: str) -> Rig:
    return rig_from_mapping(
        {
            "article": {"mass": mass},
            "suspension": {"kind": "bifilar", "length": length, "upper_spacing": spacing, **more},
            "place": {"gravity": gravity},
        }
    )


@pytest.mark.parametrize(
    ("mass", "spacing", "length", "period", "stated", "recomputed"),
    [
        # B. Slinger, "Measuring the moment of inertia of a UAV" (22 Apr 2025): 9 swings in 16.5 s, which he rounds to 1.83 s
        ("0.980 kg", "0.350 m", "1.55 m", 1.83, 0.0161, 0.01611),
        ("0.980 kg", "0.350 m", "1.55 m", 16.5 / 9, 0.0161, 0.01617),
        # quadcopter posts of 9 Oct 2014, marcv81-test-pages: roll/pitch and yaw
        ("0.958 kg", "0.470 m", "0.51 m", 0.65845, 0.0112, 0.011176),
        ("0.958 kg", "0.470 m", "0.70 m", 1.0297, 0.0199, 0.019913),
        # delta wing, 5 swings in 4 s (comment in a public script); its last digit is one too high
        ("0.2565 kg", "0.650 m", "0.35 m", 0.8, 0.012311, 0.0123105),
    ],
)
def test_published_bifilar_measurements(
    mass: str, spacing: str, length: str, period: float, stated: float, recomputed: float
) -> None:
    bench = bifilar(mass, spacing, length)
    found = moment_of_inertia(bench, Quantity(period, 0.0, "s"), facts=NO_CLOCK)
    last_digit = 10.0 ** -len(f"{recomputed}".split(".")[1])
    assert found.moment.value == pytest.approx(recomputed, abs=0.51 * last_digit)
    # What he states is within what the digits of mass and tape allow.
    assert abs(found.moment.value - stated) < found.expanded


@pytest.mark.parametrize(
    ("stamps", "period"),
    [((2.555, 15.867, 29.010, 42.154, 55.231), 0.65845), ((2.848, 23.486, 44.056, 64.630), 1.0297)],
)
def test_stamps_of_the_quadcopter_runs(stamps: tuple[float, ...], period: float) -> None:
    # A stamp every 20 swings; the first group of each run is the longest, as a larger amplitude makes it.
    groups = np.diff(stamps) / 20
    assert (stamps[-1] - stamps[0]) / (20 * len(groups)) == pytest.approx(period, abs=6e-5)
    assert groups.argmax() == 0
    if period < 1:
        assert groups[0] == pytest.approx(0.6656, abs=5e-5)
        # What amplitude would have made the first group 0.6656 s where the later ones take 0.6572 s: some 13° on the average
        bench = bifilar("0.958 kg ± 0 kg", "0.470 m ± 0 m", "0.51 m ± 0 m")
        stretch = [
            exact_period(bench, 0.01118, math.radians(a)) / exact_period(bench, 0.01118, 0) for a in (10, 16)
        ]
        assert stretch[0] < 0.6656 / groups[1:].mean() < stretch[1]


@pytest.mark.parametrize(
    ("length", "t0", "mean"),
    # School study, 2021, a rod filmed at 60 frames/s: string length, T0 = 2π (k/r) √(L/g) with k² = 0.1958²/12 + 0.00339²/4,
    # r = 75.0 mm, g = 9.788; and the mean of 75 peak-to-peak periods, which its own first evaluation gives
    [
        (0.494025, 1.0643, 1.0622), (0.574025, 1.1472, 1.1564), (0.654025, 1.2246, 1.2227), (0.734025, 1.2973, 1.3067),
        (0.814025, 1.3662, 1.3804), (0.894025, 1.4317, 1.4529), (0.974025, 1.4944, 1.5351),
    ],
)  # fmt: skip
def test_rod_of_a_school_study(length: float, t0: float, mean: float) -> None:
    gyration2 = 0.1958**2 / 12 + 0.00339**2 / 4
    assert gyration2 == pytest.approx(3.1977e-3, abs=1e-7)
    bench = bifilar("1 kg ± 0 kg", "0.150 m ± 0.2 mm", f"{length} m ± 1 mm", "9.788 m/s^2 ± 0 m/s^2")
    assert small_swing_period(bench, gyration2) == pytest.approx(t0, abs=5.1e-5)
    back = moment_of_inertia(bench, Quantity(t0, 0.0, "s"), facts=NO_CLOCK)
    assert back.moment.value == pytest.approx(gyration2, rel=2e-4)
    # The means lie 0.2 % below to 2.7 % above T0: peaks at whole frames, and swings of 0.57 to 1.44 rad at the start.
    assert -0.0021 < mean / t0 - 1 < 0.0275
    assert mean / t0 < exact_period(bench, gyration2, 1.44) / t0


def compound_pendulum(gravity: str) -> Rig:
    # Course notes Notes_07_03 (studylib.net, doc 7209119): wooden 2x4, 24 in long, 2.286 lbm, centre of mass 12.25 in
    # below the pivot, 20 swings in 25.74 s
    return rig_from_mapping(
        {
            "article": {"mass": "2.286 lb ± 0 lb"},
            "suspension": {"kind": "knife-edge", "pivot_to_centre": "12.25 in ± 0 in"},
            "place": {"gravity": gravity},
        }
    )


def test_published_compound_pendulum() -> None:
    # g = 386 in/s²: stated m g a T²/(4π²) = 453.52, m a² = 343.04, J = 110.48 lbm in²; recomputed 453.521, 343.043, 110.478
    period, unit = Quantity(25.74 / 20, 0.0, "s"), MOMENT_UNITS["lb in^2"]
    found = moment_of_inertia(compound_pendulum("386 in/s^2 ± 0 in/s^2"), period, facts=NO_CLOCK)
    assert found.moment.value / unit == pytest.approx(110.478, abs=5e-4)
    assert found.moment_about_edge is not None
    assert found.moment_about_edge.value / unit == pytest.approx(453.521, abs=5e-4)
    assert (found.moment_about_edge.value - found.moment.value) / unit == pytest.approx(343.043, abs=5e-4)
    # J is the small difference of two big terms: the program says so.
    assert {doubt.code for doubt in found.doubts} == {"edge-far-from-centre"}
    standard = moment_of_inertia(compound_pendulum("9.80665 m/s^2 ± 0 m/s^2"), period, facts=NO_CLOCK)
    assert standard.moment.value / unit == pytest.approx(110.582, abs=5e-4)
    # 1.2 % under what the notes compute from its dimensions, 111.9 lbm in²: a block 24 in by some 3.4 in.
    assert found.moment.value / unit / 111.9 == pytest.approx(1 - 0.012, abs=1e-3)
    assert pytest.approx(111.9, abs=0.1) == 2.286 * (24.0**2 + 3.4**2) / 12


def test_published_torsion_pendulum() -> None:
    # oocities.org/torsionpendulum/calculations.html: steel bar 3.016 ft, 8.163 lb, diameter 1.000 in; periods bar + cradle
    # 4.62 s, cradle 1.21 s, object + cradle 4.08 s. Stated: bar 0.1924, κ = 0.382, cradle 0.014, object 0.147;
    # recomputed 0.19243, 0.38213, 0.01417, 0.14696 slug ft² (lbf ft/rad)
    unit = MOMENT_UNITS["slug ft^2"]
    mass, foot = 8.163 * 0.45359237, 0.3048
    assert mass / 14.59390293720636 == pytest.approx(0.2537, abs=5e-5)
    moment_of_bar = mass * ((3.016 * foot) ** 2 / 12 + (foot / 24) ** 2 / 4)
    assert moment_of_bar / unit == pytest.approx(0.19243, abs=5e-6)
    kappa = 4.0 * math.pi**2 * moment_of_bar / unit / (4.62**2 - 1.21**2)
    assert kappa == pytest.approx(0.38213, abs=2e-5)
    rig = rig_from_mapping(
        {"article": {}, "suspension": {"kind": "torsion-wire", "stiffness": f"{kappa} lbf ft/rad ± 0 %"}}
    )
    swung = {
        period: moment_of_inertia(rig, Quantity(period, 0.0, "s"), facts=NO_CLOCK).moment.value / unit
        for period in (1.21, 4.08, 4.62)
    }
    assert swung[1.21] == pytest.approx(0.01417, abs=5e-6)
    assert swung[4.62] - swung[1.21] == pytest.approx(0.19243, abs=5e-6)
    assert swung[4.08] - swung[1.21] == pytest.approx(0.14696, abs=1e-5)
    assert (swung[4.08] - swung[1.21]) * unit == pytest.approx(0.19925, abs=1e-5)


def test_budget_of_the_sensitivity_example() -> None:
    # dI/I = dm/m + dg/g + 2 dD/D − dL/L + 2 dT/T: I = 4.025541e-3, relative u 3.716e-3, of which 2 dD/D 3.333e-3
    rig = bifilar(
        "0.5 kg ± 0.5 g k=1", "0.3 m ± 0.5 mm k=1", "1 m ± 1 mm k=1", "9.81 m/s^2 ± 0.0005 m/s^2 k=1"
    )
    found = moment_of_inertia(rig, Quantity(1.2, 0.0005, "s"), facts=NO_CLOCK)
    assert found.moment.value == pytest.approx(4.025541e-3, abs=5e-10)
    assert found.moment.relative_u == pytest.approx(3.716e-3, abs=5e-7)
    lines = {line.input: line for line in found.budget}
    assert lines["upper_spacing"].contribution / found.moment.value == pytest.approx(3.333e-3, abs=5e-7)
    assert sum(line.share for line in found.budget) == pytest.approx(1.0)
    assert math.fsum(line.contribution**2 for line in found.budget) == pytest.approx(found.moment.u**2)
    assert found.monte_carlo is not None
    assert found.monte_carlo.agrees


def test_one_measured_spacing_counts_twice_and_two_count_once_each() -> None:
    one = moment_of_inertia(
        bifilar("1 kg ± 0 g", "0.3 m ± 1 mm k=1", "1 m ± 0 m"), Quantity(1.0, 0.0, "s"), facts=NO_CLOCK
    )
    two = moment_of_inertia(
        bifilar("1 kg ± 0 g", "0.3 m ± 1 mm k=1", "1 m ± 0 m", lower_spacing="0.3 m ± 1 mm k=1"),
        Quantity(1.0, 0.0, "s"),
        facts=NO_CLOCK,
    )
    assert one.moment.value == pytest.approx(two.moment.value)
    assert one.moment.u / two.moment.u == pytest.approx(math.sqrt(2.0), rel=1e-4)
