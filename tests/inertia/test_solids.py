"""Articles put together from solids: sums, places, turns, holes, uncertainties and the comparison with a measurement."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from swingtrack.errors import BadInput, BadRig
from swingtrack.inertia.budget import propagate
from swingtrack.inertia.parallel_axis import shift_tensor
from swingtrack.inertia.solids import assemble
from swingtrack.inertia.solids_compare import normalised_error
from swingtrack.inertia.solids_parts import Assembly, Axis, Part, Turn
from swingtrack.inertia.solids_result import SolidResult
from swingtrack.quantity import parse_quantity
from swingtrack.records import Quantity


def exact(value: float, unit: str = "m") -> Quantity:
    return Quantity(value, 0.0, unit)


def at(x: float = 0.0, y: float = 0.0, z: float = 0.0) -> tuple[Quantity, Quantity, Quantity]:
    return exact(x), exact(y), exact(z)


def solid(name: str, kind: str, *, place: tuple[float, float, float] = (0, 0, 0), **given: object) -> Part:
    """A part of exact dimensions; `mass` and `density` as numbers."""
    more = {k: v for k, v in given.items() if k in ("hole", "of", "turns", "material")}
    mass = exact(given["mass"], "kg") if "mass" in given else None  # type: ignore[arg-type]
    density = exact(given["density"], "kg/m^3") if "density" in given else None  # type: ignore[arg-type]
    sizes = {
        k: exact(v)
        for k, v in given.items()
        if isinstance(v, int | float) and k not in ("mass", "density", "hole")
    }
    return Part(name, kind, sizes, at(*place), mass=mass, density=density, **more)  # type: ignore[arg-type]


def matrix(result: SolidResult) -> np.ndarray:
    return np.array([[q.value for q in row] for row in result.matrix])


def built(*parts: Part, axis: Axis | None = None) -> SolidResult:
    return assemble(Assembly("paddle", parts, axis or Axis()))


def test_steel_bar_of_a_published_torsion_pendulum() -> None:
    # oocities.org/torsionpendulum, calculations page: steel bar of 3.016 ft, 8.163 lb, diameter 1.000 in, about an axis
    # across its middle: 0.1924 slug ft² (0.19243 recomputed).
    sizes = {
        "diameter": parse_quantity("1.000 in ± 0.001 in", "length"),
        "height": parse_quantity("3.016 ft ± 0.001 ft", "length"),
    }
    bar = Part("bar", "cylinder", sizes, at(), mass=parse_quantity("8.163 lb ± 0.001 lb", "mass"))
    result = built(bar, axis=Axis((1.0, 0.0, 0.0)))
    slug_ft2 = parse_quantity("1 slug ft^2", "moment").value
    assert result.moment.value / slug_ft2 == pytest.approx(0.19243, abs=5e-6)


def test_rod_of_a_published_bifilar_study() -> None:
    # School study of a bifilar rod (2021): k² = 0.1958²/12 + 0.00339²/4 = 3.1977e-3 m²
    result = built(
        solid("rod", "cylinder", diameter=2 * 0.00339, height=0.1958, mass=1.0), axis=Axis((1.0, 0.0, 0.0))
    )
    assert result.moment.value == pytest.approx(3.1977e-3, abs=5e-8)


def test_two_halves_make_a_whole() -> None:
    whole = built(solid("all", "block", length=0.4, width=0.1, height=0.06, density=700.0))
    halves = built(
        solid("left", "block", length=0.2, width=0.1, height=0.06, density=700.0, place=(-0.1, 0, 0)),
        solid("right", "block", length=0.2, width=0.1, height=0.06, density=700.0, place=(0.1, 0, 0)),
    )
    assert halves.mass.value == pytest.approx(whole.mass.value)
    assert matrix(halves) == pytest.approx(matrix(whole), rel=1e-12, abs=1e-15)


def test_two_hemispheres_make_a_sphere() -> None:
    flip = (Turn("x", exact(math.pi, "rad")),)
    halves = built(
        solid("upper", "hemisphere", diameter=0.3, density=100.0),
        solid("lower", "hemisphere", diameter=0.3, density=100.0, turns=flip),
    )
    sphere = built(solid("ball", "sphere", diameter=0.3, density=100.0))
    assert matrix(halves) == pytest.approx(matrix(sphere), rel=1e-12, abs=1e-15)
    assert [q.value for q in halves.centre] == pytest.approx([0.0, 0.0, 0.0], abs=1e-15)


def test_hole_makes_a_cylinder_a_tube() -> None:
    tube = built(solid("tube", "tube", outer_diameter=0.03, inner_diameter=0.027, height=1.7, density=1570.0))
    drilled = built(
        solid("rod", "cylinder", diameter=0.03, height=1.7, density=1570.0),
        solid("bore", "cylinder", diameter=0.027, height=1.7, hole=True, of="rod"),
    )
    assert drilled.mass.value == pytest.approx(tube.mass.value)
    assert matrix(drilled) == pytest.approx(matrix(tube), rel=1e-12, abs=1e-18)


def test_weighed_part_was_weighed_with_its_hole() -> None:
    tube = built(solid("tube", "tube", outer_diameter=0.03, inner_diameter=0.027, height=1.7, mass=0.3))
    drilled = built(
        solid("rod", "cylinder", diameter=0.03, height=1.7, mass=0.3),
        solid("bore", "cylinder", diameter=0.027, height=1.7, hole=True, of="rod"),
    )
    assert drilled.mass.value == pytest.approx(0.3)
    assert matrix(drilled) == pytest.approx(matrix(tube), rel=1e-11, abs=1e-18)


def test_turns_are_made_in_the_order_written() -> None:
    # A rod along z, laid along x by a turn about y, then swung a quarter about z: it ends along y.
    turns = (Turn("y", exact(math.pi / 2, "rad")), Turn("z", exact(math.pi / 2, "rad")))
    result = built(solid("rod", "rod", length=1.2, mass=1.0, turns=turns))
    assert np.diag(matrix(result)) == pytest.approx([0.12, 0.0, 0.12], abs=1e-15)


def test_turn_is_counter_clockwise() -> None:
    # A cone standing on z tipped by +90° about x points to −y: its centre of mass lies there (right-hand rule).
    result = built(
        solid(
            "cone", "cone", diameter=0.2, height=0.4, mass=1.0, turns=(Turn("x", exact(math.pi / 2, "rad")),)
        )
    )
    assert [q.value for q in result.centre] == pytest.approx([0.0, -0.1, 0.0], abs=1e-15)


def test_points_and_axis_through_a_point() -> None:
    # Two points of 1 kg on x = ±1 m: J = diag(0, 2, 2); about z through (3, 4, 0): 2 + 2 · 25 (parallel-axis theorem).
    points = [solid(name, "point", mass=1.0, place=(x, 0, 0)) for name, x in (("a", 1.0), ("b", -1.0))]
    assert np.diag(matrix(built(*points))) == pytest.approx([0.0, 2.0, 2.0])
    assert built(*points, axis=Axis((0, 0, 2.0), at(3.0, 4.0, 0.0))).moment.value == pytest.approx(52.0)


def test_products_of_inertia_have_the_sign_of_the_matrix() -> None:
    # J_xy = −Σ m x y = −2 kg m² for 1 kg at (1, 1, 0) and at (−1, −1, 0).
    points = [solid(name, "point", mass=1.0, place=(x, x, 0)) for name, x in (("a", 1.0), ("b", -1.0))]
    assert matrix(built(*points))[0, 1] == pytest.approx(-2.0)


def test_ready_made_body_keeps_its_moments() -> None:
    moments = {
        f"moment_{axis}": exact(value, "kg m^2")
        for axis, value in zip("xyz", (1e-3, 2e-3, 2.5e-3), strict=True)
    }
    motor = Part("motor", "body", moments, at(0.3, 0, 0), mass=exact(0.4, "kg"))
    assert np.diag(matrix(built(motor))) == pytest.approx([1e-3, 2e-3, 2.5e-3])


@settings(max_examples=25, deadline=None)
@given(st.tuples(*[st.floats(-math.pi, math.pi)] * 3), st.tuples(*[st.floats(-2.0, 2.0)] * 3))
def test_turning_and_moving_the_whole_changes_nothing_of_its_own(
    angles: tuple[float, float, float], move: tuple[float, float, float]
) -> None:
    def moved(part: Part) -> Part:
        turns = tuple(Turn(axis, exact(angle, "rad")) for axis, angle in zip("xyz", angles, strict=True))
        return replace(part, turns=turns, at=at(*move))

    parts = (
        solid("plate", "plate", length=0.5, width=0.2, mass=0.3),
        solid("rod", "rod", length=1.1, mass=0.2),
    )
    first, second = built(*parts), built(*(moved(part) for part in parts))
    assert [m for m, _ in second.principal] == pytest.approx(
        [m for m, _ in first.principal], rel=1e-9, abs=1e-12
    )
    assert [q.value for q in second.centre] == pytest.approx(list(move), abs=1e-12)


def test_moment_table_adds_up_and_matches_the_parallel_axis_rule() -> None:
    plate = solid("plate", "plate", length=0.5, width=0.2, mass=0.3, place=(0.4, 0.1, -0.2))
    ball = solid("ball", "sphere", diameter=0.1, mass=0.5, place=(-0.3, 0, 0.25))
    axis = Axis((1.0, 2.0, -0.5), at(0.1, 0.2, 0.3))
    result = built(plate, ball, axis=axis)
    assert sum(line.moment for line in result.parts) == pytest.approx(result.moment.value)
    assert sum(line.share for line in result.parts) == pytest.approx(1.0)
    n = np.array(axis.direction) / np.linalg.norm(axis.direction)
    for part, line in zip((plate, ball), result.parts, strict=True):
        alone = built(part)
        offset = np.array([q.value for q in alone.centre]) - np.array([0.1, 0.2, 0.3])
        assert line.moment == pytest.approx(
            float(n @ shift_tensor(matrix(alone), alone.mass.value, offset) @ n)
        )


def test_uncertainty_by_the_law_of_propagation() -> None:
    """Against GTC's uncertain numbers put through the tables' formula: block about z, density and all sides uncertain."""
    sides = {
        "length": Quantity(0.4, 1e-3, "m"),
        "width": Quantity(0.1, 5e-4, "m"),
        "height": Quantity(0.06, 5e-4, "m"),
    }
    density = Quantity(700.0, 20.0, "kg/m^3")
    part = Part("block", "block", sides, at(), density=density)

    def formula(x: dict[str, object]) -> object:
        mass = x["density"] * x["length"] * x["width"] * x["height"]  # type: ignore[operator]
        return mass * (x["length"] ** 2 + x["width"] ** 2) / 12  # type: ignore[operator]

    wanted = propagate(formula, {**sides, "density": density}, "kg m^2")  # type: ignore[arg-type]
    result = built(part)
    assert result.moment.value == pytest.approx(wanted.quantity.value, rel=1e-12)
    assert result.moment.u == pytest.approx(wanted.quantity.u, rel=1e-9)
    shares = {line.input.removeprefix("block: "): line.share for line in result.budget}
    for line in wanted.lines:
        assert shares[line.input] == pytest.approx(line.share, rel=1e-9)
    assert sum(line.contribution**2 for line in result.budget) == pytest.approx(result.moment.u**2)


def test_one_material_is_one_density() -> None:
    """Ten parts of one board do not average its density out; ten parts of densities of their own do, as 1/√10."""
    density = Quantity(680.0, 68.0, "kg/m^3")
    parts = [
        Part(
            f"slat {n}",
            "block",
            {"length": exact(0.1), "width": exact(0.1), "height": exact(0.1)},
            at(n),
            density=density,
        )
        for n in range(10)
    ]
    apart = built(*parts)
    alike = built(*(replace(part, material="oak") for part in parts))
    assert alike.mass.relative_u == pytest.approx(0.1)
    assert apart.mass.relative_u == pytest.approx(0.1 / math.sqrt(10))


def test_monte_carlo_stands_beside_and_agrees_where_it_is_linear() -> None:
    length = parse_quantity("1.200 m ± 1 mm", "length")
    result = built(
        Part("rod", "rod", {"length": length}, at(), mass=parse_quantity("0.5 kg ± 1 g", "mass")),
        axis=Axis((1, 0, 0)),
    )
    assert result.monte_carlo.agrees
    assert result.monte_carlo.u == pytest.approx(result.moment.u, rel=0.02)


def test_monte_carlo_disagrees_where_a_wide_limit_bends_the_result() -> None:
    wide = Quantity(0.02, 0.02 / math.sqrt(3), "m", shape="rectangular")  # a diameter of 0 to 40 mm
    result = built(Part("ball", "sphere", {"diameter": wide}, at(), density=exact(1000.0, "kg/m^3")))
    assert not result.monte_carlo.agrees


def test_comparison_with_a_measurement() -> None:
    rod = Part("rod", "rod", {"length": exact(1.2)}, at(), mass=Quantity(1.0, 0.005, "kg"))
    near = Assembly("rod", (rod,), Axis((1, 0, 0)), measured_moment=Quantity(0.1212, 0.0005, "kg m^2"))
    (comparison,) = assemble(near).comparisons
    # E_n = (x − X)/√(U² + U_ref²), ISO/IEC 17043, with U = 2 u: 0.0012/(2 · √(0.0005² + 0.0006²))
    assert comparison.normalised_error == pytest.approx(0.0012 / (2 * math.hypot(0.0005, 0.0006)), rel=1e-9)
    assert comparison.agrees
    far = replace(near, measured_moment=Quantity(0.13, 0.0005, "kg m^2"))
    assert not assemble(far).comparisons[0].agrees


def test_normalised_error_has_a_sign_and_needs_an_uncertainty() -> None:
    assert normalised_error(9.0, 0.3, 10.0, 0.4) == pytest.approx(-2.0)
    with pytest.raises(BadInput, match="without uncertainty"):
        normalised_error(1.0, 0.0, 1.1, 0.0)


def test_hole_outside_its_matter_is_doubted() -> None:
    result = built(
        solid("plate", "block", length=0.2, width=0.2, height=0.01, density=1000.0),
        solid("hole", "block", length=0.1, width=0.1, height=0.01, hole=True, of="plate", place=(1.0, 0, 0)),
    )
    assert [doubt.code for doubt in result.doubts] == ["solids-unphysical"]


@pytest.mark.parametrize(
    ("parts", "said"),
    [
        ([], "no parts"),
        ([solid("a", "sphere", diameter=0.1)], "neither mass nor density"),
        ([solid("a", "sphere", diameter=0.1, material="air")], "not in the table"),
        ([solid("a", "plate", length=0.1, width=0.1, density=100.0)], "no volume"),
        ([solid("a", "point", mass=1.0), solid("a", "point", mass=1.0)], "Two parts are called 'a'"),
        (
            [solid("a", "point", mass=1.0), solid("h", "sphere", diameter=0.1, hole=True, of="b")],
            "which is not there",
        ),
        ([solid("a", "point", mass=1.0), solid("h", "sphere", diameter=0.1, hole=True, of="a")], "no volume"),
        (
            [
                solid("a", "sphere", diameter=0.1, mass=1.0),
                solid("h", "sphere", diameter=0.2, hole=True, of="a"),
            ],
            "take away all of it",
        ),
        (
            [solid("a", "sphere", diameter=0.1, mass=1.0), solid("h", "sphere", diameter=0.05, of="a")],
            "`of` beside",
        ),
        (
            [
                solid("a", "sphere", diameter=0.1, mass=1.0),
                solid("h", "sphere", diameter=0.05, hole=True, mass=2.0),
            ],
            "more matter than holes",
        ),
    ],
)
def test_what_cannot_be_is_refused(parts: list[Part], said: str) -> None:
    with pytest.raises(BadRig, match=said):
        built(*parts)
