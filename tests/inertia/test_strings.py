"""What strings do of themselves: twist, bending, mass, load, material."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.integrate import solve_bvp
from scipy.linalg import eigh_tridiagonal

from swingtrack.inertia import SwingFacts, moment_of_inertia, small_swing_period
from swingtrack.inertia.string_materials import bending_rigidity, is_metal, material_of, twist_stiffness
from swingtrack.inertia.strings import bending_factor
from swingtrack.inertia.torsion_wire import wire_stiffness
from swingtrack.records import Correction, Inertia, Quantity, Rig
from swingtrack.rig import rig_from_mapping

NO_CLOCK = SwingFacts(clock_relative_u=0.0)
MASS, SPACING, LENGTH, G = 0.5, 0.3, 1.0, 9.81


def rig(**more: str) -> Rig:
    return rig_from_mapping(
        {
            "article": {"mass": "0.5 kg ± 0 g"},
            "suspension": {"kind": "bifilar", "length": "1 m ± 0 m", "upper_spacing": "0.3 m ± 0 m", **more},
            "place": {"gravity": "9.81 m/s^2 ± 0 m/s^2"},
        }
    )


def correction(result: Inertia, name: str) -> Correction:
    return next(item for item in result.corrections if item.name == name)


@pytest.mark.parametrize(
    ("diameter", "modulus", "part", "digits"),
    # m = 0.5 kg, D = 0.3 m, L = 1 m: two wires add 0.88 % (steel 0.5 mm), 14 % (steel 1 mm), 0.013 % (polymer 0.5 mm)
    [(0.5e-3, 79e9, 0.0088, 5e-5), (1e-3, 79e9, 0.14, 2e-3), (0.5e-3, 1.2e9, 0.00013, 5e-6)],
)
def test_twist_against_gravity(diameter: float, modulus: float, part: float, digits: float) -> None:
    gravity = MASS * G * SPACING**2 / (4.0 * LENGTH)
    assert 2.0 * wire_stiffness(modulus, diameter, LENGTH) / gravity == pytest.approx(part, abs=digits)


def test_stiffness_of_a_steel_wire() -> None:
    # d = 0.5 mm, G = 79 GPa, L = 1 m
    assert wire_stiffness(79e9, 0.5e-3, 1.0) == pytest.approx(4.85e-4, abs=5e-7)


def lateral_stiffness(pull: float, rigidity: float) -> float:
    """Force per shift of the end of a clamped string of 1 m, by solving E J y'''' = N y'' as a boundary-value problem."""

    def slopes(_x: np.ndarray, y: np.ndarray) -> np.ndarray:
        return np.vstack([y[1], y[2], y[3], pull / rigidity * y[2]])

    def ends(left: np.ndarray, right: np.ndarray) -> np.ndarray:
        return np.array([left[0], left[1], right[0] - 1.0, right[1]])

    x = 0.5 - 0.5 * np.cos(np.linspace(0.0, np.pi, 400))
    found = solve_bvp(slopes, ends, x, np.zeros((4, x.size)), tol=1e-9, max_nodes=100_000)
    return float(pull * found.sol(0.5)[1] - rigidity * found.sol(0.5)[3])


@pytest.mark.parametrize(
    ("diameter", "modulus", "expected"),
    # N = 2.5 N, L = 1 m; steel with E = 200 GPa, polymer 3 GPa
    [(0.5e-3, 200e9, 1.032346), (1e-3, 200e9, 1.143290), (0.5e-3, 3e9, 1.003852)],
)
def test_clamped_ends_shorten_a_string(diameter: float, modulus: float, expected: float) -> None:
    rigidity = modulus * math.pi * diameter**4 / 64.0
    x = {"string_rigidity": rigidity, "mass": 2.5, "gravity": 1.0, "string_clamping": 1.0}
    assert bending_factor(x, 1.0) == pytest.approx(expected, abs=1e-6)
    assert bending_factor({**x, "string_clamping": 0.0}, 1.0) == 1.0
    assert lateral_stiffness(2.5, rigidity) / 2.5 == pytest.approx(expected, abs=2e-6)


def chain_rate(strings: float, gyration: float = 0.12) -> float:
    """ω² of yaw of a body on two hanging chains of 400 elements each: the lowest mode of masses on a line under tension.

    One chain with half of the body is enough: the lower end moves by D/2 times the angle and carries I/(2 (D/2)²).
    """
    count = 400
    lump, step = 0.5 * strings / count, LENGTH / count
    masses = np.full(count, lump)
    masses[-1] = 0.5 * lump + 0.5 * MASS * gyration**2 / (0.5 * SPACING) ** 2
    below = np.cumsum(np.append(0.5 * lump, np.full(count - 1, lump)))[::-1]
    pull = (0.5 * MASS + below) * G / step
    diagonal = (pull + np.append(pull[1:], 0.0)) / masses
    beside = -pull[1:] / np.sqrt(masses[:-1] * masses[1:])
    return float(eigh_tridiagonal(diagonal, beside, eigvals_only=True, select="i", select_range=(0, 0))[0])


@pytest.mark.parametrize(
    ("ratio", "plain", "corrected"),
    # m = 0.5 kg, k = 0.12 m, D = 0.3 m, L = 1 m: M_s/m, I over the truth without and with the correction
    [(0.004, 1.000083, 1.0000001), (0.02, 1.000415, 1.0000029), (0.1, 1.002051, 1.0000698)],
)
def test_string_mass_against_a_chain(ratio: float, plain: float, corrected: float) -> None:
    strings, truth = ratio * MASS, MASS * 0.12**2
    period = Quantity(2.0 * math.pi / math.sqrt(chain_rate(strings)), 0.0, "s")
    without = moment_of_inertia(rig(), period, facts=NO_CLOCK).moment.value
    heavy = rig(string_mass=f"{strings!r} kg ± 0 kg")
    found = moment_of_inertia(heavy, period, facts=NO_CLOCK)
    assert without / truth == pytest.approx(plain, abs=1e-6)
    assert found.moment.value / truth == pytest.approx(corrected, abs=2e-7)
    # Uncorrected error of I: −M_s/(2m) + M_s D²/(12 m k²)
    first_order = -ratio / 2 + ratio * SPACING**2 / (12 * 0.12**2)
    assert -correction(found, "string mass").relative == pytest.approx(first_order, rel=ratio)


def test_string_mass_does_nothing_at_one_spacing() -> None:
    # It vanishes at D = √6 k.
    gyration = SPACING / math.sqrt(6.0)
    heavy = rig(string_mass="50 g ± 0 g")
    period = small_swing_period(rig(), MASS * gyration**2)
    assert small_swing_period(heavy, MASS * gyration**2) == pytest.approx(period, rel=1e-12)


def test_wire_is_corrected_by_its_material_and_width() -> None:
    steel = rig(string_material="steel wire", string_diameter="1 mm ± 10 um")
    found = moment_of_inertia(steel, Quantity(1.2, 0.0, "s"), facts=NO_CLOCK)
    twist, bending = correction(found, "string twist"), correction(found, "string bending")
    plain = moment_of_inertia(rig(), Quantity(1.2, 0.0, "s"), facts=NO_CLOCK).moment.value
    assert found.moment.value == pytest.approx(plain * (1.067 + 0.1405), rel=2e-3)  # half clamped; twist 14 %
    assert twist.relative == pytest.approx(0.1405 / 1.2075, rel=5e-3)
    assert bending.applied
    assert plain < found.moment.value - 2 * bending.u * found.moment.value
    assert [doubt.code for doubt in found.doubts if doubt.code == "metal-string"] == ["metal-string"]
    assert {"string_stiffness", "string_rigidity", "string_clamping"} <= {line.input for line in found.budget}


def test_wire_of_unknown_width_is_only_warned_of() -> None:
    found = moment_of_inertia(rig(string_material="steel wire"), Quantity(1.2, 0.0, "s"), facts=NO_CLOCK)
    plain = moment_of_inertia(rig(), Quantity(1.2, 0.0, "s"), facts=NO_CLOCK)
    assert found.moment.value == plain.moment.value
    assert {doubt.code for doubt in found.doubts} == {"metal-string"}
    assert "tenth" in found.doubts[0].message


def test_a_stated_twist_goes_before_an_estimated_one() -> None:
    stated = rig(
        string_material="steel", string_diameter="1 mm ± 10 um", string_stiffness="1e-3 N m/rad ± 1 %"
    )
    lines = {line.input: line for line in moment_of_inertia(stated, Quantity(1.2, 0.0, "s")).budget}
    assert lines["string_stiffness"].value == 1e-3


def test_thread_is_bounded_from_nothing_to_a_solid_line() -> None:
    thread = rig(string_material="braided polyester", string_diameter="0.5 mm ± 50 um")
    solid = rig(string_material="nylon monofilament", string_diameter="0.5 mm ± 50 um")
    bundle, line = twist_stiffness(thread), twist_stiffness(solid)
    assert bundle is not None
    assert line is not None
    assert bundle.value - math.sqrt(3) * bundle.u == pytest.approx(0.0, abs=1e-12)
    assert bundle.value + math.sqrt(3) * bundle.u == pytest.approx(line.value)
    assert line.value == pytest.approx(2 * wire_stiffness(1.2e9, 0.5e-3, 1.0))
    assert bending_rigidity(rig(string_diameter="0.5 mm ± 50 um")) is None
    found = moment_of_inertia(thread, Quantity(1.2, 0.0, "s"), facts=NO_CLOCK)
    assert abs(correction(found, "string twist").relative) < 2e-4
    assert not found.doubts


@pytest.mark.parametrize(
    ("name", "metal", "known"),
    [
        ("steel wire", True, True), ("Brass", True, True), ("piano wire", True, False), ("braided polyester", False, True),
        ("fishing line", False, True), ("hemp", False, False), (None, False, False),
    ],
)  # fmt: skip
def test_materials(name: str | None, metal: bool, known: bool) -> None:
    assert is_metal(name) == metal
    assert (material_of(name) is not None) == known


def test_corrections_of_strings_can_be_left_out() -> None:
    full = rig(string_mass="50 g ± 1 g", string_stiffness="1e-3 N m/rad ± 1 %")
    facts = SwingFacts(clock_relative_u=0.0, leave_out=("string twist", "string mass"))
    found = moment_of_inertia(full, Quantity(1.2, 0.0, "s"), facts=facts)
    plain = moment_of_inertia(rig(), Quantity(1.2, 0.0, "s"), facts=NO_CLOCK)
    assert found.moment.value == pytest.approx(plain.moment.value, rel=1e-14)
    assert correction(found, "string mass").relative != 0.0
    assert not correction(found, "string mass").applied
    assert "left out" in correction(found, "string twist").reason
    with_both = moment_of_inertia(full, Quantity(1.2, 0.0, "s"), facts=NO_CLOCK)
    for name in ("string twist", "string mass"):
        one = SwingFacts(clock_relative_u=0.0, leave_out=(name,))
        without = moment_of_inertia(full, Quantity(1.2, 0.0, "s"), facts=one).moment.value
        assert correction(with_both, name).relative == pytest.approx(1.0 - without / with_both.moment.value)


def test_load_of_the_string_that_carries_most() -> None:
    # 0.5 kg is 2.45 N a string; with the centre of mass 50 mm off the middle of 300 mm one carries two thirds.
    assert not moment_of_inertia(
        rig(string_load_limit="20 N"), Quantity(1.0, 0.0, "s"), facts=NO_CLOCK
    ).doubts
    thin = moment_of_inertia(rig(string_load_limit="3 N"), Quantity(1.0, 0.0, "s"), facts=NO_CLOCK)
    assert {doubt.code for doubt in thin.doubts} == {"string-load-margin"}
    with pytest.raises(ValueError, match="over its limit"):
        moment_of_inertia(rig(string_load_limit="3 N", centre_offset="50 mm ± 1 mm"), Quantity(1.0, 0.0, "s"))
