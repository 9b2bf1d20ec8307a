"""Rigs that cannot be, rigs that are dubious: one clear message each."""

from __future__ import annotations

import math
from typing import Any

import pytest

from swingtrack.errors import BadRig
from swingtrack.inertia import SwingFacts, moment_of_inertia, small_swing_period, swing_law
from swingtrack.records import Article, Quantity, Rig, Suspension
from swingtrack.rig import rig_from_mapping

FACTS = SwingFacts(clock_relative_u=0.0)
STRINGS = {"length": "1 m ± 1 mm", "upper_spacing": "0.3 m ± 0.5 mm"}


def rig(kind: str = "bifilar", *, mass: str = "1 kg ± 1 g", **dimensions: str) -> Rig:
    return rig_from_mapping(
        {
            "article": {"mass": mass},
            "suspension": {"kind": kind, **dimensions},
            "place": {"gravity": "9.81 m/s^2 ± 0.001 m/s^2"},
        }
    )


def direct(kind: str, mass: float = 1.0, **dimensions: float) -> Rig:
    """A rig that no file reader has looked at."""
    given = {key: Quantity(value, 0.0, "m") for key, value in dimensions.items()}
    return Rig(
        Article("paddle", Quantity(mass, 0.0, "kg")),
        Suspension(kind, given),
        gravity=Quantity(9.81, 0.0, "m/s^2"),
    )


@pytest.mark.parametrize(
    ("bench", "said"),
    [
        (direct("bifilar", length=1.0, upper_spacing=-0.3), "upper_spacing = -0.3 m is negative"),
        (direct("bifilar", length=0.0, upper_spacing=0.3), "length = 0 m is zero"),
        (direct("bifilar", -1.0, length=1.0, upper_spacing=0.3), "article.mass = -1 kg is negative"),
        (direct("bifilar", 0.0, length=1.0, upper_spacing=0.3), "article.mass = 0 kg is zero"),
        (direct("bifilar", upper_spacing=0.3), "length is missing"),
        (direct("bifilar", length=1.0), "upper_spacing is missing"),
        (direct("bifilar", length=math.nan, upper_spacing=0.3), "finite"),
        (direct("trifilar", length=1.0, upper_radius=0.0), "upper_radius = 0 m is zero"),
        (direct("torsion-wire", wire_diameter=1e-3, shear_modulus=79e9, length=0.0), "length = 0 m is zero"),
        (direct("torsion-wire", wire_diameter=1e-3, length=1.0), "shear_modulus is missing"),
        (direct("torsion-wire", reference_moment=1e-3), "reference_period is missing"),
        (direct("knife-edge"), "pivot_to_centre is missing"),
        (direct("two-edge", edge_separation=0.5), "second_period is missing"),
        (direct("pogo-stick", length=1.0), "'pogo-stick' is not known"),
        (direct("bifilar", length=0.05, upper_spacing=0.3, lower_spacing=0.1), "can't reach"),
        (direct("bifilar", length=0.2, upper_spacing=0.2, lower_spacing=0.8), "can't reach"),
        (direct("trifilar", length=0.1, upper_radius=0.3, lower_radius=0.1), "can't reach"),
        (direct("bifilar", length=1.0, upper_spacing=0.3, centre_offset=0.2), "outside the strings"),
        (direct("trifilar", length=1.0, upper_radius=0.3, centre_offset=0.2), "go slack"),
        (direct("bifilar", length=1.0, upper_spacing=0.3, string_load_limit=1.0), "over its limit"),
        (direct("trifilar", length=1.0, upper_radius=0.3, string_load_limit=1.0), "over its limit"),
    ],
)
def test_rigs_that_cannot_hang(bench: Rig, said: str) -> None:
    for use in (
        lambda: moment_of_inertia(bench, Quantity(1.0, 0.0, "s")),
        lambda: swing_law(bench, period_s=1.0, q_max_rad=0.5),
    ):
        with pytest.raises(BadRig, match=said) as caught:
            use()
        assert caught.value.needed


@pytest.mark.parametrize(
    ("dimensions", "said"),
    # what the reader of the rig file refuses by itself
    [
        ({"kind": "bifilar", "length": "1 m", "upper_spacing": "-300 mm"}, "negative"),
        (
            {"kind": "torsion-wire", "wire_diameter": "1 mm", "shear_modulus": "79 GPa", "length": "0 m"},
            "zero",
        ),
    ],
)
def test_rig_files_that_cannot_be(dimensions: dict[str, Any], said: str) -> None:
    with pytest.raises(BadRig, match=said):
        rig_from_mapping({"article": {"mass": "1 kg"}, "suspension": dimensions})
    with pytest.raises(BadRig, match="negative"):
        rig_from_mapping({"article": {"mass": "-1 kg"}, "suspension": {"kind": "bifilar", **STRINGS}})


@pytest.mark.parametrize(
    ("kind", "dimensions", "period", "code"),
    [
        ("bifilar", STRINGS | {"string_material": "brass wire"}, 1.0, "metal-string"),
        ("bifilar", STRINGS | {"string_load_limit": "10 N"}, 1.0, "string-load-margin"),
        ("bifilar", {"length": "0.2 m ± 1 mm", "upper_spacing": "0.5 m ± 1 mm"}, 1.0, "strings-short"),
        ("bifilar", STRINGS | {"lower_spacing": "0.9 m ± 1 mm"}, 1.0, "strings-slanted"),
        ("bifilar", STRINGS | {"lower_spacing": "0.25 m ± 1 mm", "centre_offset": "5 mm"}, 1.0, "offset-with-slanted-strings"),
        ("bifilar", STRINGS | {"length_difference": "80 mm ± 1 mm"}, 1.0, "strings-unequal"),
        ("bifilar", {"length": "1 m", "upper_spacing": "0.3 m ± 0.5 mm"}, 1.0, "uncertainty-assumed"),
        ("bifilar", {"length": "1 m ± 1 mm", "upper_spacing": "0.3 m ± 20 mm"}, 1.0, "inertia-coarse"),
        ("trifilar", {"length": "0.3 m ± 1 mm", "upper_radius": "0.2 m ± 1 mm"}, 1.0, "strings-short"),
        ("trifilar", {"length": "1 m ± 1 mm", "upper_radius": "0.1 m ± 0.5 mm", "lower_radius": "0.4 m ± 1 mm"}, 1.0, "strings-slanted"),
        ("trifilar", {"length": "1 m ± 1 mm", "upper_radius": "0.2 m ± 0.5 mm", "lower_radius": "0.15 m ± 1 mm", "centre_offset": "5 mm"}, 1.0, "offset-with-slanted-strings"),
        ("torsion-wire", {"wire_diameter": "0.5 mm ± 0.05 mm", "shear_modulus": "79 GPa ± 2 GPa", "length": "1 m ± 1 mm"}, 1.0, "wire-diameter-coarse"),
        ("torsion-wire", {"wire_diameter": "50 mm ± 0.1 mm", "shear_modulus": "79 GPa ± 2 GPa", "length": "0.4 m ± 1 mm"}, 1.0, "wire-thick"),
        ("knife-edge", {"pivot_to_centre": "0.6 m ± 0.5 mm"}, 1.6, "edge-far-from-centre"),
    ],
)  # fmt: skip
def test_dubious_rigs_are_measured_and_doubted(
    kind: str, dimensions: dict[str, str], period: float, code: str
) -> None:
    found = moment_of_inertia(rig(kind, **dimensions), Quantity(period, 1e-4, "s"), facts=FACTS)
    assert code in {doubt.code for doubt in found.doubts}
    assert all(doubt.message and doubt.advice for doubt in found.doubts)


@pytest.mark.parametrize(
    ("kind", "dimensions", "period"),
    [
        ("bifilar", STRINGS, 1.0),
        ("bifilar", STRINGS | {"lower_spacing": "0.25 m ± 0.5 mm"}, 1.0),
        ("bifilar", STRINGS | {"centre_offset": "0 mm ± 1 mm", "lower_spacing": "0.2 m ± 0.5 mm"}, 1.0),
        ("trifilar", {"length": "1 m ± 1 mm", "upper_radius": "0.2 m ± 0.5 mm"}, 1.0),
        ("torsion-wire", {"stiffness": "0.02 N m/rad ± 1 %"}, 3.0),
        ("knife-edge", {"pivot_to_centre": "0.2 m ± 0.2 mm"}, 1.3),
    ],
)
def test_sound_rigs_are_not_doubted(kind: str, dimensions: dict[str, str], period: float) -> None:
    assert moment_of_inertia(rig(kind, **dimensions), Quantity(period, 1e-4, "s"), facts=FACTS).doubts == ()


@pytest.mark.parametrize("period", [0.0, -1.0, math.inf, math.nan])
def test_periods_that_cannot_be(period: float) -> None:
    with pytest.raises(BadRig, match="Needed: a period over zero"):
        moment_of_inertia(rig(**STRINGS), Quantity(period, 0.0, "s"))


def test_a_period_too_short_for_the_distances_is_refused() -> None:
    with pytest.raises(BadRig, match="too short"):
        moment_of_inertia(rig("knife-edge", pivot_to_centre="0.3 m ± 1 mm"), Quantity(0.5, 0.0, "s"))


def test_edges_whose_periods_contradict_their_distance_are_refused() -> None:
    # With simple pendulums of 0.9 m and 0.6 m the centre of mass would be 0.7 m outside edges that are 0.7 m apart.
    t1, t2 = (2 * math.pi * math.sqrt(length / 9.81) for length in (0.9, 0.6))
    with pytest.raises(BadRig, match="outside the edges"):
        moment_of_inertia(
            rig("two-edge", edge_separation="0.7 m ± 0.1 mm", second_period=f"{t2!r} s ± 0 s"),
            Quantity(t1, 0.0, "s"),
        )


def test_a_moment_that_no_place_between_the_edges_explains_is_refused() -> None:
    bench = rig("two-edge", edge_separation="0.3 m ± 0.1 mm", second_period="1 s ± 0 s")
    with pytest.raises(BadRig, match="No place between the edges"):
        small_swing_period(bench, 1.0)
