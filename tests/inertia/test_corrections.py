"""Corrections: all listed, each to be switched, none hidden."""

from __future__ import annotations

import math
from typing import Any

import pytest

from swingtrack.inertia import SwingFacts, moment_of_inertia
from swingtrack.inertia.corrections import SCALE_AIR
from swingtrack.inertia.moment import CORRECTIONS
from swingtrack.records import Article, Correction, Inertia, Quantity, Rig, Suspension
from swingtrack.rig import rig_from_mapping

PERIOD = Quantity(1.2, 0.0, "s")


def rig(**more: str) -> Rig:
    return rig_from_mapping(
        {
            "article": {"mass": "0.5 kg ± 0 g"},
            "suspension": {"kind": "bifilar", "length": "1 m ± 0 m", "upper_spacing": "0.3 m ± 0 m", **more},
            "place": {"gravity": "9.81 m/s^2 ± 0 m/s^2"},
        }
    )


def with_dimension(key: str, value: float, unit: str) -> Rig:
    plain = rig()
    dimensions = {**plain.suspension.dimensions, key: Quantity(value, 0.0, unit)}
    return Rig(plain.article, Suspension("bifilar", dimensions), gravity=plain.gravity)


def measured(bench: Rig, **facts: Any) -> Inertia:
    return moment_of_inertia(bench, PERIOD, facts=SwingFacts(clock_relative_u=0.0, **facts))


def correction(result: Inertia, name: str) -> Correction:
    return next(item for item in result.corrections if item.name == name)


PLAIN = 0.5 * 9.81 * 0.3**2 * 1.2**2 / (16 * math.pi**2)


def test_every_correction_is_listed_even_when_it_is_nothing() -> None:
    found = measured(rig())
    assert tuple(item.name for item in found.corrections) == CORRECTIONS
    assert all(
        item.relative == 0.0 and not item.applied for item in found.corrections if item.name != "buoyancy"
    )
    assert all(item.reason for item in found.corrections)
    assert found.moment.value == pytest.approx(PLAIN, rel=1e-14)


@pytest.mark.parametrize(
    ("kind", "dimensions"),
    [
        ("torsion-wire", {"stiffness": Quantity(0.02, 0.0, "N m/rad")}),
        ("knife-edge", {"pivot_to_centre": Quantity(0.2, 0.0, "m")}),
        ("trifilar", {"length": Quantity(1.0, 0.0, "m"), "upper_radius": Quantity(0.2, 0.0, "m")}),
    ],
)
def test_other_suspensions_list_what_concerns_them(kind: str, dimensions: dict[str, Quantity]) -> None:
    bench = Rig(Article("paddle", Quantity(0.5, 0.0, "kg")), Suspension(kind, dimensions, strings=3))
    names = {item.name for item in measured(bench).corrections}
    assert {"amplitude", "damping", "buoyancy", "air", "tilt"} <= names <= set(CORRECTIONS)
    assert ("string mass" in names) == (kind == "trifilar")


def test_amplitude_is_told_and_can_be_left_in() -> None:
    # a swing whose average period is 0.5 % too long makes I 1 % too large
    found = measured(rig(), amplitude_shift=0.005)
    assert found.moment.value == pytest.approx(PLAIN, rel=1e-14)
    assert correction(found, "amplitude").relative == pytest.approx(1.005**-2 - 1)
    left = measured(rig(), amplitude_shift=0.005, leave_out=("amplitude",))
    assert left.moment.value == pytest.approx(PLAIN * 1.005**2, rel=1e-12)
    assert not correction(left, "amplitude").applied


def test_damping_is_told_and_can_be_left_in() -> None:
    # T_d = T_0/√(1 − ζ²)
    found = measured(rig(), damping_ratio=0.05)
    assert found.moment.value == pytest.approx(PLAIN, rel=1e-14)
    assert correction(found, "damping").relative == pytest.approx(-0.0025)
    left = measured(rig(), damping_ratio=0.05, leave_out=("damping",))
    assert left.moment.value == pytest.approx(PLAIN / (1 - 0.0025), rel=1e-12)


def test_buoyancy_is_applied_on_request() -> None:
    # M (1 − 1.2/8000) g in place of m g: 0.99985 of the scale's reading (OIML D 28: 8000 kg/m³ in air of 1.2 kg/m³)
    assert pytest.approx(0.99985, abs=1e-9) == 1 - SCALE_AIR
    found = measured(rig())
    assert (correction(found, "buoyancy").applied, found.moment.value) == (
        False,
        pytest.approx(PLAIN, rel=1e-14),
    )
    bare = measured(rig(), scale_in_air=True)
    assert bare.moment.value == pytest.approx(0.99985 * PLAIN, rel=1e-12)
    assert correction(bare, "buoyancy").applied
    assert measured(rig(), scale_in_air=True, leave_out=("buoyancy",)).moment.value == found.moment.value


def test_the_scale_is_pointed_out_where_it_begins_to_count() -> None:
    fine = moment_of_inertia(rig(), Quantity(1.2, 1e-4, "s"), facts=SwingFacts())
    coarse = moment_of_inertia(rig(), Quantity(1.2, 1e-3, "s"), facts=SwingFacts())
    assert any("0.99985" in line for line in fine.advice)
    assert not any("0.99985" in line for line in coarse.advice)


def test_tilt_is_in_the_doubt() -> None:
    # I cos²θ + I⊥ sin²θ with I⊥ anywhere from nothing to 2 I: ± sin²θ
    level = measured(rig())
    leaning = measured(with_dimension("tilt", math.radians(3.0), "rad"))
    limits = math.sin(math.radians(3.0)) ** 2
    assert leaning.moment.value == pytest.approx(level.moment.value)
    assert leaning.moment.relative_u == pytest.approx(limits / math.sqrt(3), rel=1e-9)
    assert correction(leaning, "tilt").applied
    left = moment_of_inertia(
        with_dimension("tilt", 0.05, "rad"),
        PERIOD,
        facts=SwingFacts(clock_relative_u=0.0, leave_out=("tilt",)),
    )
    assert left.moment.u == 0.0


def test_unequal_strings_are_in_the_doubt_and_warned_of() -> None:
    # 100 mm in 1 m with the mass in the middle: (d1 d2/D)(d1/L1 + d2/L2) is 0.25 % over the mean length's, and 0.5 % for coupling
    found = measured(rig(length_difference="100 mm ± 1 mm"))
    assert found.moment.relative_u == pytest.approx((1 / (1 - 0.05**2) - 1 + 0.005) / math.sqrt(3), rel=1e-9)
    assert {doubt.code for doubt in found.doubts} == {"strings-unequal"}
    assert not measured(rig(length_difference="10 mm ± 1 mm")).doubts
    off = measured(rig(length_difference="10 mm ± 1 mm", centre_offset="30 mm ± 0 mm"))
    assert {doubt.code for doubt in off.doubts} == {"strings-unequal"}


def test_an_unknown_correction_cannot_be_left_out() -> None:
    with pytest.raises(ValueError, match="no correction 'magnetism'"):
        measured(rig(), leave_out=("magnetism",))
