"""Small-swing formulas against the exact modes of a rigid body on strings, and against themselves backwards."""

from __future__ import annotations

import math

import numpy as np
import pytest

from swingtrack.inertia import SwingFacts, expected_modes, moment_of_inertia, small_swing_period
from swingtrack.inertia.suspension import model_of
from swingtrack.inertia.two_edge import (
    arms_on_one_side,
    arms_on_opposite_sides,
    bessel_gravity,
    kater_gravity,
)
from swingtrack.inertia.unequal_strings import unequal_stiffness
from swingtrack.records import Article, Quantity, Rig, Suspension
from tests.inertia.rigid_body import Body, sway, yaw

NO_CLOCK = SwingFacts(clock_relative_u=0.0)
MASS, G = 0.8, 9.81


def exact(value: float, unit: str = "m") -> Quantity:
    return Quantity(value, 0.0, unit)


def bench(kind: str, *, strings: int = 2, gravity: float = G, mass: float = MASS, **dimensions: float) -> Rig:
    units = {"second_period": "s", "stiffness": "N m/rad"}
    return Rig(
        Article("paddle", exact(mass, "kg")),
        Suspension(kind, {k: exact(v, units.get(k, "m")) for k, v in dimensions.items()}, strings=strings),
        gravity=exact(gravity, "m/s^2"),
    )


def hung(
    radii: tuple[list[float], list[float]], length: float, depth: float, k: tuple[float, float, float]
) -> Body:
    """Strings at the azimuths of two or more, upper and lower distances from the axis given string by string."""
    count = len(radii[0])
    angles = 2 * np.pi * np.arange(count) / count
    flat = np.column_stack([np.cos(angles), np.sin(angles)])
    upper, lower = (np.array(r)[:, None] * flat for r in radii)
    drop = np.sqrt(length**2 - np.sum((upper - lower) ** 2, axis=1))
    ties = np.column_stack([lower, np.full(count, depth)])
    hooks = np.column_stack([upper, depth + drop])
    return Body(MASS, MASS * np.diag(np.square(k)), hooks, ties, G)


def period_of(body: Body) -> float:
    return 2 * math.pi / math.sqrt(yaw(body))


@pytest.mark.parametrize("depth", [0.02, 0.1, 0.4])
def test_equal_parallel_strings(depth: float) -> None:
    # I = m g D² T²/(16 π² L), whatever the depth of the centre of mass below the ties
    body = hung(([0.15, 0.15], [0.15, 0.15]), 1.2, depth, (0.05, 0.3, 0.31))
    rig = bench("bifilar", length=1.2, upper_spacing=0.3)
    assert small_swing_period(rig, MASS * 0.31**2) == pytest.approx(period_of(body), rel=1e-10)
    by_hand = MASS * G * 0.3**2 * period_of(body) ** 2 / (16 * math.pi**2 * 1.2)
    assert moment_of_inertia(rig, exact(period_of(body), "s")).moment.value == pytest.approx(
        by_hand, rel=1e-12
    )


@pytest.mark.parametrize(("upper", "lower"), [(0.3, 0.2), (0.16, 0.4)])
def test_slanted_strings_count_by_their_drop(upper: float, lower: float) -> None:
    body = hung(([upper / 2] * 2, [lower / 2] * 2), 0.7, 0.1, (0.05, 0.2, 0.21))
    rig = bench("bifilar", length=0.7, upper_spacing=upper, lower_spacing=lower)
    assert small_swing_period(rig, MASS * 0.21**2) == pytest.approx(period_of(body), rel=1e-10)
    drop = math.sqrt(0.7**2 - (upper - lower) ** 2 / 4)
    same = bench("bifilar", drop=drop, upper_spacing=upper, lower_spacing=lower)
    assert small_swing_period(same, MASS * 0.21**2) == pytest.approx(period_of(body), rel=1e-10)


def test_centre_of_mass_off_the_middle_by_the_product_of_the_distances() -> None:
    # I = m g d1 d2 T²/(4 π² L), I about the centre of mass
    body = hung(([0.19, 0.11], [0.19, 0.11]), 1.2, 0.05, (0.05, 0.3, 0.31))
    rig = bench("bifilar", length=1.2, upper_spacing=0.3, centre_offset=0.04)
    assert small_swing_period(rig, MASS * 0.31**2) == pytest.approx(period_of(body), rel=1e-10)


@pytest.mark.parametrize("count", [3, 4, 6])
@pytest.mark.parametrize(("upper", "lower"), [(0.2, 0.2), (0.12, 0.2), (0.3, 0.15)])
def test_strings_on_circles(count: int, upper: float, lower: float) -> None:
    # I = m g R r T²/(4 π² h0). Four strings and more: the same body, tensions as for equal strings.
    body = hung(([upper] * count, [lower] * count), 0.9, 0.03, (0.2, 0.22, 0.3))
    rig = bench("trifilar", strings=count, length=0.9, upper_radius=upper, lower_radius=lower)
    assert small_swing_period(rig, MASS * 0.3**2) == pytest.approx(period_of(body), rel=1e-10)


@pytest.mark.parametrize("azimuth", [0.0, 0.5, 1.0, 3.0])
def test_three_parallel_strings_off_centre(azimuth: float) -> None:
    # r² becomes r² − e², whichever way the centre of mass lies
    angles = 2 * np.pi * np.arange(3) / 3
    ring = 0.2 * np.column_stack([np.cos(angles), np.sin(angles), np.zeros(3)])
    shift = 0.03 * np.array([math.cos(azimuth), math.sin(azimuth), 0.0])
    ties = ring - shift
    body = Body(MASS, MASS * np.diag([0.04, 0.05, 0.09]), np.add(ties, [0, 0, 0.9]), ties, G)
    rig = bench("trifilar", strings=3, length=0.9, upper_radius=0.2, centre_offset=0.03)
    assert small_swing_period(rig, MASS * 0.09) == pytest.approx(period_of(body), rel=1e-10)


def test_strings_of_unequal_length() -> None:
    # L1 = 1, L2 = 1.1, d1 = d2 = 0.2, k = 0.15, g = 1: 1.69697 by the formula, 1.70188 exact (centre of mass at the ties)
    ties = np.array([[0.2, 0, 0], [-0.2, 0, 0.0]])
    hooks = np.add(ties, [[0, 0, 1.0], [0, 0, 1.1]])
    exact_rate = yaw(Body(1.0, np.diag([0.05, 0.16, 0.15]) ** 2, hooks, ties, 1.0))
    assert exact_rate == pytest.approx(1.70188, abs=5e-6)
    formula = unequal_stiffness(0.2, 0.2, (1.0, 1.1)) / 0.15**2
    assert formula == pytest.approx(1.69697, abs=5e-6)


@pytest.mark.parametrize(("difference", "offset"), [(0.02, 0.0), (0.1, 0.0), (0.1, 0.03)])
@pytest.mark.parametrize("depth", [0.0, 0.1, 0.3])
def test_the_limits_for_unequal_strings_hold_the_exact_modes(
    difference: float, offset: float, depth: float
) -> None:
    rig = bench("bifilar", length=1.0, upper_spacing=0.4, centre_offset=offset, length_difference=difference)
    found = moment_of_inertia(rig, exact(1.0, "s"), facts=NO_CLOCK)
    limit = math.sqrt(3) * next(c for c in found.corrections if c.name == "unequal strings").u
    equal = (0.2**2 - offset**2) * G / 0.15**2
    for way in (1, -1):
        ties = np.array([[0.2 + offset, 0, depth], [offset - 0.2, 0, depth]])
        hooks = np.add(ties, [[0, 0, 1.0 + way * difference / 2], [0, 0, 1.0 - way * difference / 2]])
        rate = yaw(Body(MASS, MASS * np.diag([0.05, 0.16, 0.15]) ** 2, hooks, ties, G))
        assert abs(rate / equal - 1) < limit


def test_sway_along_the_line_is_the_plain_pendulum_of_the_string_length() -> None:
    body = hung(([0.15, 0.15], [0.15, 0.15]), 1.2, 0.1, (0.05, 0.3, 0.31))
    assert sway(body, 0) == pytest.approx(G / 1.2, rel=1e-10)
    modes = {mode.kind: mode for mode in expected_modes(bench("bifilar", length=1.2, upper_spacing=0.3), 1.0)}
    assert modes["sway"].frequency_hz == pytest.approx(math.sqrt(G / 1.2) / (2 * math.pi), rel=1e-12)


def test_across_the_line_the_double_pendulum_is_within_what_is_expected() -> None:
    # K = m g diag(L, c), M = m [[L², L c], [L c, c² + kx²]]
    length, c, kx = 1.2, 0.1, 0.05
    stiffness = G * np.diag([length, c])
    mass = np.array([[length**2, length * c], [length * c, c**2 + kx**2]])
    low, high = np.sort(np.linalg.eigvals(np.linalg.solve(mass, stiffness)).real)
    body = hung(([0.15, 0.15], [0.15, 0.15]), length, c, (kx, 0.3, 0.31))
    assert sway(body, 1) == pytest.approx(low, rel=1e-10)
    roll = next(
        m for m in expected_modes(bench("bifilar", length=1.2, upper_spacing=0.3), 1.0) if m.kind == "roll"
    )
    assert math.sqrt(low) / (2 * math.pi) < roll.frequency_hz * (1 + roll.relative_u)
    assert high > low


def test_yaw_and_sway_coincide_where_the_spacing_is_twice_the_radius_of_gyration() -> None:
    k = 0.31
    body = hung(([k, k], [k, k]), 1.2, 0.1, (0.05, 0.3, k))
    assert yaw(body) == pytest.approx(sway(body, 0), rel=1e-9)


def test_sway_in_the_clip_agrees_or_is_doubted() -> None:
    rig = bench("bifilar", length=1.2, upper_spacing=0.3, centre_offset=0.02)
    body = hung(([0.17, 0.13], [0.17, 0.13]), 1.2, 0.05, (0.05, 0.3, 0.31))
    period, sway_s = exact(period_of(body), "s"), 2 * math.pi / math.sqrt(sway(body, 0))
    right = moment_of_inertia(rig, period, facts=SwingFacts(sway_period_s=sway_s))
    assert any("Sway in the same clip" in line and "agrees" in line for line in right.advice)
    assert not right.doubts
    wrong = bench("bifilar", length=1.0, upper_spacing=0.3, centre_offset=0.02)
    doubted = moment_of_inertia(wrong, period, facts=SwingFacts(sway_period_s=sway_s))
    assert {doubt.code for doubt in doubted.doubts} == {"sway-disagrees"}
    slanted = bench("bifilar", length=1.2, upper_spacing=0.3, lower_spacing=0.3)
    assert not moment_of_inertia(slanted, period, facts=SwingFacts(sway_period_s=9.0)).doubts


@pytest.mark.parametrize(
    ("kind", "dimensions"),
    [
        ("bifilar", {"length": 1.1, "upper_spacing": 0.3, "lower_spacing": 0.24, "string_mass": 0.01}),
        ("trifilar", {"drop": 1.1, "upper_radius": 0.2, "lower_radius": 0.15}),
        ("torsion-wire", {"stiffness": 0.03}),
        ("torsion-wire", {"wire_diameter": 5e-4, "shear_modulus": 79e9, "length": 1.0}),
        ("torsion-wire", {"reference_moment": 0.02, "reference_period": 3.0}),
        ("knife-edge", {"pivot_to_centre": 0.21}),
        ("two-edge", {"edge_separation": 0.7, "second_period": 1.5}),
    ],
)
def test_period_and_moment_are_inverse(kind: str, dimensions: dict[str, float]) -> None:
    rig = bench(kind, strings=3 if kind == "trifilar" else 2, **dimensions)
    period = small_swing_period(rig, 0.037)
    assert moment_of_inertia(rig, exact(period, "s"), facts=NO_CLOCK).moment.value == pytest.approx(
        0.037, rel=1e-12
    )


@pytest.mark.parametrize(
    ("kind", "dimensions", "mass_power"),
    [
        ("bifilar", {"length": 1.1, "upper_spacing": 0.3, "lower_spacing": 0.24}, 1),
        ("trifilar", {"length": 1.1, "upper_radius": 0.2}, 1),
        ("knife-edge", {"pivot_to_centre": 0.21}, 1),
    ],
)
def test_scaling_of_units(kind: str, dimensions: dict[str, float], mass_power: int) -> None:
    # Twice the lengths and √2 times the period are four times I/m; twice the mass is twice I.
    def moment(scale: float, mass: float) -> float:
        rig = bench(
            kind,
            mass=mass,
            strings=3 if kind == "trifilar" else 2,
            **{k: scale * v for k, v in dimensions.items()},
        )
        return moment_of_inertia(rig, exact(1.7 * math.sqrt(scale), "s"), facts=NO_CLOCK).moment.value

    assert moment(2.0, 1.0) == pytest.approx(4.0 * moment(1.0, 1.0), rel=1e-12)
    assert moment(1.0, 2.0) == pytest.approx(2.0**mass_power * moment(1.0, 1.0), rel=1e-12)


K, FIRST, SECOND, PLACE = 0.29, 0.5, 0.2, 9.8123  # the check of docs/theory.md, Knife edge, two edges


def pendulum_period(k: float, arm: float, g: float = PLACE) -> float:
    return 2.0 * math.pi * math.sqrt((k**2 + arm**2) / (g * arm))


def test_two_edges_round_trip() -> None:
    t1, t2 = pendulum_period(K, FIRST), pendulum_period(K, SECOND)
    rig = bench("two-edge", gravity=PLACE, mass=1.0, edge_separation=FIRST + SECOND, second_period=t2)
    found = moment_of_inertia(rig, exact(t1, "s"), facts=NO_CLOCK)
    assert found.moment.value == pytest.approx(K**2, rel=1e-12)
    assert small_swing_period(rig, K**2) == pytest.approx(t1, rel=1e-12)
    p, q = (PLACE * t**2 / (4 * math.pi**2) for t in (t1, t2))
    assert arms_on_opposite_sides(p, q, 0.7) == pytest.approx((FIRST, SECOND), rel=1e-12)
    assert arms_on_one_side(p, q, 0.3) == pytest.approx((FIRST, SECOND), rel=1e-12)


def test_reversible_pendulum_gives_gravity() -> None:
    # Kater: equal periods where k² = l1 l2, g = 4π²(l1 + l2)/T²; Bessel's formula for any two periods
    second = K**2 / FIRST
    t1, t2 = pendulum_period(K, FIRST), pendulum_period(K, second)
    assert t1 == pytest.approx(t2, rel=1e-12)
    assert kater_gravity(t1, FIRST + second) == pytest.approx(PLACE, rel=1e-12)
    near = pendulum_period(K, second * 1.01)
    assert bessel_gravity((t1, near), (FIRST, second * 1.01)) == pytest.approx(PLACE, rel=1e-12)


def test_edges_at_conjugate_points_are_doubted() -> None:
    # k² = l1 l2: the two periods are equal, and say nothing of k
    second = 1.02 * K**2 / FIRST
    rig = bench(
        "two-edge", gravity=PLACE, edge_separation=FIRST + second, second_period=pendulum_period(K, second)
    )
    found = moment_of_inertia(rig, exact(pendulum_period(K, FIRST), "s"), facts=NO_CLOCK)
    assert "edges-conjugate" in {doubt.code for doubt in found.doubts}
    assert found.moment.value / MASS == pytest.approx(K**2, rel=1e-9)


def test_calibrated_wire() -> None:
    # I/I_ref = T²/T_ref²; the clock errs in both alike only if both were timed by it, which the rig does not say
    rig = bench("torsion-wire", reference_moment=0.02, reference_period=3.0)
    assert model_of("torsion-wire").period(
        {"reference_moment": 0.02, "reference_period": 3.0}, 0.02
    ) == pytest.approx(3.0)
    assert moment_of_inertia(rig, exact(6.0, "s"), facts=NO_CLOCK).moment.value == pytest.approx(
        0.08, rel=1e-12
    )
