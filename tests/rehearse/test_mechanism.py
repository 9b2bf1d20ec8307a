"""The plain mechanics of each suspension against formulas in the literature and against `inertia/`, written apart."""

from __future__ import annotations

import math
from typing import Any

import pytest

from swingtrack.errors import BadRig
from swingtrack.inertia import small_swing_period
from swingtrack.records import Air, Quantity, Rig
from swingtrack.rehearse import mechanism_of
from swingtrack.rehearse.air import air_moment, plate_integral
from swingtrack.rehearse.mechanism import gravity_of
from swingtrack.rehearse.rehearsal import moment_for_period
from swingtrack.rig import rig_from_mapping

from .benches import PLACE, pendulum, strings, wire


def test_a_uniform_rod_on_two_strings() -> None:
    # T = 2π √(4 I L/(m g D²)): docs/theory.md, "Bifilar"
    found = mechanism_of(strings(1.0, 0.2), 0.005).period_s
    assert found == pytest.approx(2.0 * math.pi * math.sqrt(4 * 0.005 / (0.5 * 9.81 * 0.04)), rel=1e-14)


def test_a_steel_wire() -> None:
    # d = 0.5 mm, G = 79 GPa, L = 1 m: 4.85e-4 N m/rad (docs/theory.md, "Torsion wire")
    rig = rig_from_mapping(
        {
            "article": {},
            "suspension": {
                "kind": "torsion-wire",
                "wire_diameter": "0.5 mm",
                "shear_modulus": "79 GPa",
                "length": "1 m",
            },
        }
    )
    assert mechanism_of(rig, 1.0).stiffness == pytest.approx(4.85e-4, rel=1e-3)


def test_heavy_strings_change_the_period_as_a_chain_of_elements_does() -> None:
    # m = 0.5, k = 0.12, D = 0.3, L = 1, M_s/m = 0.1: the formula without strings gives 1.002051 of the true I by a
    # chain of 400 elements (docs/theory.md, "String mass"); rigid strings agree with it to 7e-5.
    moment = 0.5 * 0.12**2
    heavy = mechanism_of(strings(1.0, 0.3, string_mass="50 g"), moment).period_s
    light = mechanism_of(strings(1.0, 0.3), moment).period_s
    assert (heavy / light) ** 2 == pytest.approx(1.002051, abs=1e-4)


@pytest.mark.parametrize(
    "hung",
    [
        {"kind": "bifilar", "length": "1.1 m", "upper_spacing": "0.3 m", "lower_spacing": "0.2 m"},
        {"kind": "bifilar", "drop": "0.8 m", "upper_spacing": "0.3 m", "centre_offset": "20 mm"},
        {"kind": "bifilar", "length": "1 m", "upper_spacing": "0.25 m", "string_mass": "9 g"},
        {"kind": "bifilar", "length": "1 m", "upper_spacing": "0.25 m", "string_stiffness": "1e-3 N m/rad"},
        {
            "kind": "trifilar",
            "length": "1.2 m",
            "upper_radius": "0.1 m",
            "lower_radius": "0.16 m",
            "strings": 4,
        },
        {"kind": "knife-edge", "pivot_to_centre": "0.21 m"},
        {"kind": "torsion-wire", "stiffness": "0.03 N m/rad"},
    ],
)
def test_both_stages_agree_though_written_apart(hung: dict[str, Any]) -> None:
    rig = rig_from_mapping({"article": {"mass": "0.7 kg"}, "suspension": hung, "place": PLACE})
    assert mechanism_of(rig, 0.013).period_s == pytest.approx(small_swing_period(rig, 0.013), rel=1e-12)
    assert moment_for_period(rig, mechanism_of(rig, 0.013).period_s) == pytest.approx(0.013, rel=1e-10)


def test_gravity_by_latitude() -> None:
    # normal gravity of GRS 80: 9.780327 at the equator, 9.832186 at the poles (Moritz 1980); 3.086e-6 1/s² with height
    def rig(latitude_deg: float, altitude_m: float) -> Rig:
        place = {"latitude": f"{latitude_deg} deg", "altitude": f"{altitude_m} m"}
        return rig_from_mapping(
            {
                "article": {"mass": "1 kg"},
                "suspension": {"kind": "knife-edge", "pivot_to_centre": "1 m"},
                "place": place,
            }
        )

    assert gravity_of(rig(0.0, 0.0)) == pytest.approx(9.780327, abs=1e-6)
    assert gravity_of(rig(90.0, 0.0)) == pytest.approx(9.832186, abs=1e-6)
    assert gravity_of(rig(45.0, 1000.0)) - gravity_of(rig(45.0, 0.0)) == pytest.approx(-3.086e-3, rel=1e-9)


@pytest.mark.parametrize(("ratio", "k1"), [(1.0, 0.579), (2.0, 0.757), (4.0, 0.872), (8.0, 0.934)])
def test_a_plate_carries_as_much_air_as_tables_say(ratio: float, k1: float) -> None:
    # Added mass of a rectangular plate, k1 (π/4) ρ c² s: DNV-RP-C205, table of three-dimensional bodies (from memory).
    # Far from the axis only the plate's translation counts.
    far = 100.0
    assert plate_integral(0.1 * ratio, 0.1, far) / far**2 == pytest.approx(
        k1 * math.pi / 4 * 0.1**2 * (0.1 * ratio), rel=0.015
    )


def test_air_slows_the_swing_and_is_no_part_of_the_article() -> None:
    wide = Air("cylinder", {"diameter": Quantity(0.2, 0.0, "m"), "length": Quantity(0.6, 0.0, "m")})
    # ρ π r² ℓ³/12
    assert air_moment(wide) == pytest.approx(1.2 * math.pi * 0.01 * 0.6**3 / 12, rel=1e-12)
    bare = strings()
    airy = Rig(bare.article, bare.suspension, gravity=bare.gravity, air=wide)
    mechanism = mechanism_of(airy, 0.005)
    assert mechanism.moment_kg_m2 == 0.005
    assert (mechanism.period_s / mechanism_of(bare, 0.005).period_s) ** 2 == pytest.approx(
        1 + air_moment(wide) / 0.005, rel=1e-12
    )


def test_the_rise_is_the_drawing_up_of_the_strings() -> None:
    # parallel strings at 90°: each runs from (a, 0) to (0, a), so h = √(L² − 2a²)
    mechanism = mechanism_of(strings(1.0, 0.4), 0.01)
    assert mechanism.rise(math.pi / 2) == pytest.approx(1.0 - math.sqrt(1.0 - 2 * 0.2**2), rel=1e-12)


@pytest.mark.parametrize(
    ("rig", "says"),
    [
        (strings(0.1, 0.5, 0.2), "can't reach across"),
        (strings(1.0, 0.2, centre_offset="120 mm"), "outside the strings"),
        (
            rig_from_mapping(
                {
                    "article": {"mass": "1 kg"},
                    "suspension": {"kind": "two-edge", "edge_separation": "0.4 m", "second_period": "1 s"},
                }
            ),
            "can't be rehearsed",
        ),
    ],
)
def test_impossible_rigs_are_refused(rig: Rig, says: str) -> None:
    with pytest.raises(BadRig, match=says):
        mechanism_of(rig, 0.01)


def test_a_moment_must_be_over_zero_and_a_period_within_reach() -> None:
    with pytest.raises(BadRig, match="over zero"):
        mechanism_of(wire(), 0.0)
    with pytest.raises(BadRig, match="takes longer"):
        moment_for_period(pendulum(), 0.2)
