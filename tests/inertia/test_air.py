"""Air carried along, against tables, limits and potential flow."""

from __future__ import annotations

import math

import pytest

from swingtrack.inertia import SwingFacts, moment_of_inertia, small_swing_period
from swingtrack.inertia.air import (
    added_moment,
    cylinder_added_moment,
    disc_added_moment,
    ellipse_added_mass,
    largest_added_moment,
    plate_added_moment,
    sphere_added_moment,
)
from swingtrack.inertia.corrections import COEFFICIENT_LIMITS, DENSITY_LIMITS
from swingtrack.records import Air, Correction, Inertia, Quantity, Rig
from swingtrack.rig import rig_from_mapping

# Long over short side; k1 broadside mass over (π/4) ρ c² s; k2, k3 moments about the in-plane axes along the short and the
# long side over (π/48) ρ c² s³ and (π/128) ρ c⁴ s. Own vortex lattice, converged to 1e-4.
PLATES = [
    (1, 0.5790, 0.3066, 0.8176), (1.25, 0.6419, 0.3631, 0.8532), (1.5, 0.6898, 0.4127, 0.8774), (2, 0.7569, 0.4947, 0.9079),
    (2.5, 0.8009, 0.5586, 0.9263), (3, 0.8318, 0.6093, 0.9385), (4, 0.8719, 0.6835, 0.9539), (5, 0.8967, 0.7347, 0.9631),
    (8, 0.9347, 0.8222, 0.9769), (10, 0.9476, 0.8544, 0.9815),
]  # fmt: skip


@pytest.mark.parametrize(("ratio", "k1", "k2", "k3"), PLATES)
def test_plate_table(ratio: float, k1: float, k2: float, k3: float) -> None:
    c, s, rho = 0.2, 0.2 * ratio, 1.2
    about_short = plate_added_moment(s, c, density=rho)
    assert about_short == pytest.approx(k2 * math.pi / 48 * rho * c**2 * s**3, rel=1e-9)
    if ratio > 1:
        assert plate_added_moment(c, s, density=rho) == pytest.approx(
            k3 * math.pi / 128 * rho * c**4 * s, rel=1e-9
        )
    far = plate_added_moment(s, c, 3.0, density=rho) - about_short
    assert far == pytest.approx(9.0 * k1 * math.pi / 4 * rho * c**2 * s, rel=1e-9)


def test_square_plate_is_the_same_about_both_sides() -> None:
    # (π/48) k2 = (π/128) k3 to the lattice's 1e-4
    assert pytest.approx(0.8176 / 128, rel=2e-4) == 0.3066 / 48
    assert plate_added_moment(0.2, 0.2) == pytest.approx(plate_added_moment(0.2, 0.2001), rel=4e-3)


@pytest.mark.parametrize(
    ("ratio", "k1"),
    # DNV-RP-C205, table of rectangular plates, from memory (its 0.830 at 3 stands apart)
    [(1.25, 0.642), (1.5, 0.690), (2.0, 0.757), (2.5, 0.801), (3.0, 0.830), (4.0, 0.872), (5.0, 0.897), (8.0, 0.934), (10.0, 0.947)],
)  # fmt: skip
def test_plate_mass_against_a_rule_book(ratio: float, k1: float) -> None:
    c = 0.1
    mass = (plate_added_moment(ratio * c, c, 1.0) - plate_added_moment(ratio * c, c, 0.0)) / (
        math.pi / 4 * 1.2 * c**3 * ratio
    )
    assert mass == pytest.approx(k1, abs=2e-3)


def test_a_very_long_plate_is_a_strip() -> None:
    # strip theory: (π/4) ρ c² a length
    c, s = 0.01, 10.0
    assert plate_added_moment(s, c) == pytest.approx(math.pi / 48 * 1.2 * c**2 * s**3, rel=2e-2)
    steps = [
        plate_added_moment(r * c, c) / (math.pi / 48 * 1.2 * c**5 * r**3) for r in (9.99, 10.01, 20.0, 1000.0)
    ]
    assert steps == sorted(steps)
    assert steps[1] - steps[0] < 1e-3


def test_foam_board() -> None:
    # 0.2 m by 0.4 m of 0.1 kg turning about its short in-plane axis: I = 1.333e-3, the air 0.998e-4, 7.5 %
    board = rig_from_mapping(
        {
            "article": {"mass": "0.1 kg ± 0 kg"},
            "suspension": {"kind": "torsion-wire", "stiffness": "0.01 N m/rad ± 0 %"},
            "air": {
                "shape": "plate", "width": "0.4 m ± 0 m", "height": "0.2 m ± 0 m", "face": "broadside",
                "density": "1.2041 kg/m^3 ± 0 kg/m^3",
            },
        }
    )  # fmt: skip
    assert board.air is not None
    truth = 0.1 * 0.4**2 / 12
    assert truth == pytest.approx(1.333e-3, abs=5e-7)
    assert added_moment(board.air) * 1.2 / 1.2041 == pytest.approx(0.994e-4, abs=5e-7)
    assert added_moment(board.air) == pytest.approx(0.998e-4, abs=5e-8)
    assert added_moment(board.air) / truth == pytest.approx(0.075, abs=5e-4)
    period = Quantity(small_swing_period(board, truth), 0.0, "s")
    assert period.value == pytest.approx(2 * math.pi * math.sqrt((truth + 0.998e-4) / 0.01), rel=1e-4)
    found = moment_of_inertia(board, period, facts=SwingFacts(clock_relative_u=0.0))
    assert found.moment.value == pytest.approx(truth, rel=1e-12)
    assert correction(found).applied
    kept = SwingFacts(clock_relative_u=0.0, leave_out=("air",))
    assert moment_of_inertia(board, period, facts=kept).moment.value == pytest.approx(
        truth + 0.998e-4, rel=1e-4
    )


def test_sphere_and_cylinder() -> None:
    # half the displaced mass of a sphere (Lamb, art. 92); π ρ r² a length of a cylinder crosswise (art. 68)
    assert sphere_added_moment(0.2, 0.5, density=1.2) == pytest.approx(
        0.5 * 1.2 * math.pi / 6 * 0.2**3 * 0.5**2
    )
    long = cylinder_added_moment(0.1, 2.0, density=1.2)
    assert long == pytest.approx(1.2 * math.pi * 0.05**2 * 2.0**3 / 12)


def test_disc_and_ellipse() -> None:
    # (8/3) ρ R³ and (16/45) ρ R⁵; the ellipse's limits are the disc and the strip (π ρ b² a length of its width)
    assert disc_added_moment(0.4, density=1.2) == pytest.approx(1.2 * 16 / 45 * 0.2**5)
    mass = disc_added_moment(0.4, 1.0, density=1.2) - disc_added_moment(0.4, density=1.2)
    assert mass == pytest.approx(1.2 * 8 / 3 * 0.2**3)
    assert ellipse_added_mass(0.4, 0.4, density=1.2) == pytest.approx(mass)
    strip = (
        1.2 * math.pi * 2.0 * (2 / 3) * 0.01**2
    )  # ∫ π ρ b(x)² dx over a half-width b of an ellipse 2 m long
    assert ellipse_added_mass(2.0, 0.02, density=1.2) == pytest.approx(strip, rel=2e-3)


def correction(result: Inertia) -> Correction:
    return next(item for item in result.corrections if item.name == "air")


def paddle(air: dict[str, str] | None, *, mass: str = "0.9 kg ± 0 kg") -> Rig:
    tables = {
        "article": {"mass": mass},
        "suspension": {"kind": "bifilar", "length": "1.2 m ± 0 m", "upper_spacing": "0.5 m ± 0 m"},
        "place": {"gravity": "9.81 m/s^2 ± 0 m/s^2"},
    }
    return rig_from_mapping(tables if air is None else tables | {"air": air})


FACTS = SwingFacts(clock_relative_u=0.0)


def test_limits_of_the_air_are_in_the_budget() -> None:
    blade = {"shape": "plate", "width": "0.2 m", "height": "0.45 m", "distance": "0.9 m", "face": "broadside"}
    found = moment_of_inertia(paddle(blade), Quantity(2.5, 0.0, "s"), facts=FACTS)
    air = next(line for line in found.budget if line.input == "air")
    relative = math.hypot(COEFFICIENT_LIMITS, DENSITY_LIMITS) / math.sqrt(3)
    assert air.u == pytest.approx(relative * air.value)
    assert air.share == pytest.approx(1.0)
    thin = blade | {"density": "1.10 kg/m^3 ± 0.011 kg/m^3"}
    high = moment_of_inertia(paddle(thin), Quantity(2.5, 0.0, "s"), facts=FACTS)
    line = next(line for line in high.budget if line.input == "air")
    assert line.value == pytest.approx(air.value * 1.10 / 1.20)
    assert line.u / line.value == pytest.approx(math.hypot(COEFFICIENT_LIMITS, 0.01) / math.sqrt(3))


@pytest.mark.parametrize(
    "air", [{"shape": "none"}, {"shape": "plate", "width": "1 m", "height": "1 m", "face": "edgewise"}]
)
def test_nothing_carried_along(air: dict[str, str]) -> None:
    found = moment_of_inertia(paddle(air), Quantity(2.5, 0.0, "s"), facts=FACTS)
    assert (correction(found).relative, correction(found).applied) == (0.0, False)
    assert "air" not in {line.input for line in found.budget}


def test_a_shape_not_told_is_bounded() -> None:
    found = moment_of_inertia(paddle(None), Quantity(2.5, 0.0, "s"), facts=FACTS)
    gyration = math.sqrt(found.moment.value / 0.9)
    part = largest_added_moment(gyration) / found.moment.value
    # a square board of side √12 k: 0.3066 (π/48) ρ s⁵
    assert part * found.moment.value == pytest.approx(
        0.3066 * math.pi / 48 * 1.2 * (math.sqrt(12) * gyration) ** 5
    )
    assert f"{100 * part:.0f} %" in correction(found).reason
    heavy = moment_of_inertia(paddle(None, mass="90 kg ± 0 kg"), Quantity(0.3, 0.0, "s"), facts=FACTS)
    assert "less" in correction(heavy).reason


def test_another_shape_is_between_nothing_and_its_plate() -> None:
    plate = Air(
        "plate", {"width": Quantity(0.4, 0.0, "m"), "height": Quantity(0.3, 0.0, "m")}, face="broadside"
    )
    other = Air("other", plate.dimensions)
    assert added_moment(other) == pytest.approx(0.5 * added_moment(plate))
    rig = paddle(None)
    bounded = Rig(rig.article, rig.suspension, gravity=rig.gravity, air=other)
    found = moment_of_inertia(bounded, Quantity(1.0, 0.0, "s"), facts=FACTS)
    air = next(line for line in found.budget if line.input == "air")
    assert air.value - math.sqrt(3) * air.u <= 0.0 <= air.value


def test_air_that_cannot_be() -> None:
    with pytest.raises(ValueError, match=r"air\.height is missing"):
        added_moment(Air("plate", {"width": Quantity(0.4, 0.0, "m")}))
    with pytest.raises(ValueError, match="'cube' is not known"):
        added_moment(Air("cube", {}))
    huge = {"shape": "plate", "width": "4 m", "height": "4 m", "face": "broadside"}
    with pytest.raises(ValueError, match="more than all that swings"):
        moment_of_inertia(paddle(huge), Quantity(1.0, 0.0, "s"))
