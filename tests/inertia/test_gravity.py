"""Gravity against closed formulas, tables and standards."""

from __future__ import annotations

import math

import numpy as np
import pytest

from swingtrack.inertia import SwingFacts, moment_of_inertia
from swingtrack.inertia.gravity import GRS80, WGS84, Ellipsoid, gravity_1980, gravity_of, normal_gravity
from swingtrack.inertia.units import STANDARD_GRAVITY
from swingtrack.records import Quantity, Rig
from swingtrack.rig import rig_from_mapping

# Latitude in degrees, height in m, normal gravity of WGS 84 and GRS 80 in m/s²: closed formula at 30 digits, and the
# library boule 0.6.0; the constants of WGS 84 are NIMA TR8350.2's (3rd edition), of GRS 80 Moritz's.
TABLE = [
    (0, 0, 9.7803253359, 9.78032677153), (15, 0, 9.78378496236, 9.78378639766), (30, 0, 9.79324726922, 9.79324870361),
    (45, 0, 9.80619776938, 9.80619920252), (60, 0, 9.81917695312, 9.81917838502), (75, 0, 9.82869662749, 9.82869805848),
    (90, 0, 9.83218493786, 9.83218636852), (0, 100, 9.7800165634, 9.7800179990), (0, 1000, 9.7772382646, 9.7772396998),
    (0, 3000, 9.7710684774, 9.7710699117), (45, 100, 9.8058892169, 9.8058906500), (45, 1000, 9.8031128969, 9.8031143296),
    (45, 3000, 9.7969475012, 9.7969489330), (90, 100, 9.8318766063, 9.8318780369), (90, 1000, 9.8291022743, 9.8291037045),
    (90, 3000, 9.8229412900, 9.8229427193),
]  # fmt: skip


@pytest.mark.parametrize(("latitude", "height", "wgs84", "grs80"), TABLE)
def test_normal_gravity(latitude: float, height: float, wgs84: float, grs80: float) -> None:
    phi = math.radians(latitude)
    assert normal_gravity(phi, height) == pytest.approx(wgs84, abs=1.1e-10)
    assert normal_gravity(phi, height, ellipsoid=GRS80) == pytest.approx(grs80, abs=1.1e-10)


def test_normal_gravity_of_many_places_at_once() -> None:
    rows = np.array(TABLE)
    assert np.allclose(normal_gravity(np.radians(rows[:, 0]), rows[:, 1]), rows[:, 2], rtol=0, atol=1.1e-10)


@pytest.mark.parametrize(
    ("ellipsoid", "equator", "k", "e2"),
    # g = ge (1 + k sin²φ)/√(1 − e² sin²φ): WGS 84 and GRS 80 as published
    [
        (WGS84, 9.7803253359, 0.00193185265241, 0.00669437999014),
        (GRS80, 9.7803267715, 0.001931851353, 0.0066943800229),
    ],
)
def test_somigliana(ellipsoid: Ellipsoid, equator: float, k: float, e2: float) -> None:
    assert ellipsoid.f * (2 - ellipsoid.f) == pytest.approx(e2, abs=5e-14)
    for degrees in range(0, 91, 10):
        s2 = math.sin(math.radians(degrees)) ** 2
        somigliana = equator * (1 + k * s2) / math.sqrt(1 - e2 * s2)
        assert normal_gravity(math.radians(degrees), ellipsoid=ellipsoid) == pytest.approx(
            somigliana, abs=1e-10
        )


def test_equator_and_pole() -> None:
    # WGS 84: 9.780325335904 and 9.832184937863, k = b gp/(a ge) − 1 = 0.00193185265246; GRS 80: gp = 9.8321863685
    equator, pole = normal_gravity(0.0), normal_gravity(math.pi / 2)
    assert equator == pytest.approx(9.780325335904, abs=2e-12)
    assert pole == pytest.approx(9.832184937863, abs=2e-12)
    assert (1 - WGS84.f) * pole / equator - 1 == pytest.approx(0.00193185265246, abs=1e-13)
    assert normal_gravity(math.pi / 2, ellipsoid=GRS80) == pytest.approx(9.8321863685, abs=6e-11)


@pytest.mark.parametrize(("latitude", "slope"), [(0, -3.0877e-6), (45, -3.0855e-6), (90, -3.0834e-6)])
def test_free_air_gradient(latitude: float, slope: float) -> None:
    # dg/dh = −2 g/a (1 + f + m − 2 f sin²φ), m = ω² a² b/GM = 0.00344978650684
    phi = math.radians(latitude)
    found = (normal_gravity(phi, 1.0) - normal_gravity(phi, -1.0)) / 2.0
    m = WGS84.spin**2 * WGS84.a**3 * (1 - WGS84.f) / WGS84.gm
    assert m == pytest.approx(0.00344978650684, abs=1e-14)
    by_hand = -2 * normal_gravity(phi) / WGS84.a * (1 + WGS84.f + m - 2 * WGS84.f * math.sin(phi) ** 2)
    assert by_hand == pytest.approx(slope, abs=5e-11)
    assert found == pytest.approx(by_hand, rel=5e-5)  # the formula leaves out f² and the like


@pytest.mark.parametrize(("latitude", "expected"), [(0, 9.780327), (45, 9.806200), (90, 9.832186)])
def test_formula_of_1980(latitude: float, expected: float) -> None:
    phi = math.radians(latitude)
    assert gravity_1980(phi) == pytest.approx(expected, abs=1e-6)
    assert gravity_1980(phi) == pytest.approx(normal_gravity(phi, ellipsoid=GRS80), abs=1e-6)


def test_what_a_round_value_costs() -> None:
    # 9.81 in place of the local value: 3.9e-4 of I at 45°, 3.0e-3 at the equator; 9.80665 is gravity nowhere in particular
    assert 9.81 / normal_gravity(math.radians(45)) - 1 == pytest.approx(3.9e-4, abs=5e-6)
    assert 9.81 / normal_gravity(0.0) - 1 == pytest.approx(3.0e-3, abs=5e-5)
    assert STANDARD_GRAVITY == 9.80665


def rig(place: dict[str, str]) -> Rig:
    return rig_from_mapping(
        {
            "article": {"mass": "1 kg ± 0 g"},
            "suspension": {"kind": "bifilar", "length": "1 m ± 0 m", "upper_spacing": "0.3 m ± 0 m"},
            "place": place,
        }
    )


def test_given_gravity_is_taken_as_it_is() -> None:
    assert gravity_of(rig({"gravity": "9.8094 m/s^2 ± 0.0002 m/s^2 k=2"})).u == pytest.approx(1e-4)


def test_latitude_and_altitude() -> None:
    g = gravity_of(rig({"latitude": "45 deg ± 0.5 deg", "altitude": "1000 m ± 50 m"}))
    assert g.value == pytest.approx(9.8031128969, abs=1e-9)
    # one degree of latitude is 9e-4 m/s² there; anomalies count for 1e-3, 50 m for 1.5e-4 as limits
    by_hand = math.hypot(1e-3, 9.0e-4 * 0.5 / math.sqrt(3), 3.086e-6 * 50 / math.sqrt(3))
    assert g.u == pytest.approx(by_hand, rel=2e-3)
    low = gravity_of(rig({"latitude": "45 deg ± 0.5 deg"}))
    assert low.u > 3 * g.u  # nobody said how high up


def test_without_a_place_the_whole_earth_is_allowed_for() -> None:
    g = gravity_of(rig({}))
    half = g.u * math.sqrt(3.0)
    assert g.value - half <= normal_gravity(0.0, 4000.0)
    assert g.value + half >= normal_gravity(math.pi / 2)


def test_an_unknown_place_is_doubted_where_it_matters() -> None:
    period = Quantity(1.0, 0.0, "s")
    facts = SwingFacts(clock_relative_u=0.0)
    unknown = moment_of_inertia(rig({}), period, facts=facts)
    assert {doubt.code for doubt in unknown.doubts} == {"gravity-unknown"}
    assert not moment_of_inertia(rig({"latitude": "51.5 deg"}), period, facts=facts).doubts[1:]
    tables = {**rig({}).source, "article": {"mass": "1 kg ± 50 g"}}
    coarse = moment_of_inertia(rig_from_mapping(tables), period, facts=facts)
    assert not coarse.doubts
