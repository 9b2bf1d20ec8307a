"""Every simple solid: the tables' formulas, and the solid itself filled with points."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest

from swingtrack.inertia.solids_materials import DENSITIES, density_of, source_of
from swingtrack.inertia.solids_shapes import SHAPES, Body
from swingtrack.records import Floats

# m; unlike one another, so that swapped axes show
SIZES = {
    "block": {"length": 0.3, "width": 0.2, "height": 0.5},
    "cylinder": {"diameter": 0.3, "height": 0.5},
    "tube": {"outer_diameter": 0.4, "inner_diameter": 0.25, "height": 0.3},
    "sphere": {"diameter": 0.4},
    "shell": {"outer_diameter": 0.4, "inner_diameter": 0.3},
    "thin-shell": {"diameter": 0.4},
    "rod": {"length": 0.6},
    "cone": {"diameter": 0.4, "height": 0.7},
    "frustum": {"lower_diameter": 0.5, "upper_diameter": 0.2, "height": 0.6},
    "plate": {"length": 0.3, "width": 0.2},
    "disc": {"diameter": 0.4},
    "ellipsoid": {"diameter_x": 0.3, "diameter_y": 0.4, "diameter_z": 0.6},
    "torus": {"ring_diameter": 0.6, "tube_diameter": 0.2},
    "elliptic-cylinder": {"diameter_x": 0.3, "diameter_y": 0.5, "height": 0.4},
    "hemisphere": {"diameter": 0.4},
    "pyramid": {"length": 0.3, "width": 0.5, "height": 0.6},
    "point": {},
}


def squared_gyrations(kind: str) -> Body:
    return SHAPES[kind].body(SIZES[kind])


# I/m in m² (x, y, z) as the tables of mechanics have it: J. M. Gere and S. P. Timoshenko, Mechanics of Materials, appendix
# of plane and solid bodies, for block to disc; the others confirmed below by filling the solid with points.
PUBLISHED: dict[str, Callable[[], tuple[float, float, float]]] = {
    "block": lambda: ((0.2**2 + 0.5**2) / 12, (0.3**2 + 0.5**2) / 12, (0.3**2 + 0.2**2) / 12),
    "cylinder": lambda: (*[(3 * 0.15**2 + 0.5**2) / 12] * 2, 0.15**2 / 2),
    "tube": lambda: (*[(3 * (0.2**2 + 0.125**2) + 0.3**2) / 12] * 2, (0.2**2 + 0.125**2) / 2),
    "sphere": lambda: (2 / 5 * 0.2**2,) * 3,
    "shell": lambda: (2 / 5 * (0.2**5 - 0.15**5) / (0.2**3 - 0.15**3),) * 3,
    "thin-shell": lambda: (2 / 3 * 0.2**2,) * 3,
    "rod": lambda: (0.6**2 / 12, 0.6**2 / 12, 0.0),
    "cone": lambda: (*[3 / 20 * 0.2**2 + 3 / 80 * 0.7**2] * 2, 3 / 10 * 0.2**2),
    "plate": lambda: (0.2**2 / 12, 0.3**2 / 12, (0.3**2 + 0.2**2) / 12),
    "disc": lambda: (0.2**2 / 4, 0.2**2 / 4, 0.2**2 / 2),
    "ellipsoid": lambda: ((0.2**2 + 0.3**2) / 5, (0.15**2 + 0.3**2) / 5, (0.15**2 + 0.2**2) / 5),
    "torus": lambda: (*[0.3**2 / 2 + 5 / 8 * 0.1**2] * 2, 0.3**2 + 3 / 4 * 0.1**2),
    "elliptic-cylinder": lambda: (
        0.25**2 / 4 + 0.4**2 / 12,
        0.15**2 / 4 + 0.4**2 / 12,
        (0.15**2 + 0.25**2) / 4,
    ),
    "hemisphere": lambda: (*[83 / 320 * 0.2**2] * 2, 2 / 5 * 0.2**2),
    "pyramid": lambda: (
        0.5**2 / 20 + 3 / 80 * 0.6**2,
        0.3**2 / 20 + 3 / 80 * 0.6**2,
        (0.3**2 + 0.5**2) / 20,
    ),
    "point": lambda: (0.0, 0.0, 0.0),
}


@pytest.mark.parametrize("kind", PUBLISHED)
def test_published_formula(kind: str) -> None:
    body = squared_gyrations(kind)
    assert (body.xx, body.yy, body.zz) == pytest.approx(PUBLISHED[kind](), rel=1e-14)


def test_frustum_along_its_axis() -> None:
    # The published form (3/10) m (R₁⁵ − R₂⁵)/(R₁³ − R₂³); across the axis: filled with points below.
    assert squared_gyrations("frustum").zz == pytest.approx(
        0.3 * (0.25**5 - 0.1**5) / (0.25**3 - 0.1**3), rel=1e-14
    )


def test_centres_of_mass_over_the_base() -> None:
    assert squared_gyrations("cone").height == pytest.approx(0.7 / 4)
    assert squared_gyrations("pyramid").height == pytest.approx(0.6 / 4)
    assert squared_gyrations("hemisphere").height == pytest.approx(3 * 0.2 / 8)


def _within(kind: str, x: Floats, y: Floats, z: Floats) -> np.ndarray:
    """Which points lie in the solid, from its definition alone; the base at z = 0 where it tapers."""
    r2 = x * x + y * y
    match kind:
        case "block":
            return (abs(x) < 0.15) & (abs(y) < 0.1) & (abs(z) < 0.25)
        case "cylinder":
            return (r2 < 0.15**2) & (abs(z) < 0.25)
        case "tube":
            return (r2 < 0.2**2) & (r2 > 0.125**2) & (abs(z) < 0.15)
        case "sphere":
            return r2 + z * z < 0.2**2
        case "shell":
            return (r2 + z * z < 0.2**2) & (r2 + z * z > 0.15**2)
        case "cone":
            return (z > 0) & (z < 0.7) & (r2 < (0.2 * (1 - z / 0.7)) ** 2)
        case "frustum":
            return (z > 0) & (z < 0.6) & (r2 < (0.25 - 0.15 * z / 0.6) ** 2)
        case "ellipsoid":
            return (x / 0.15) ** 2 + (y / 0.2) ** 2 + (z / 0.3) ** 2 < 1
        case "torus":
            return (np.sqrt(r2) - 0.3) ** 2 + z * z < 0.1**2
        case "elliptic-cylinder":
            return ((x / 0.15) ** 2 + (y / 0.25) ** 2 < 1) & (abs(z) < 0.2)
        case "hemisphere":
            return (z > 0) & (r2 + z * z < 0.2**2)
        case "pyramid":
            return (z > 0) & (z < 0.6) & (abs(x) < 0.15 * (1 - z / 0.6)) & (abs(y) < 0.25 * (1 - z / 0.6))
    raise AssertionError(kind)


SOLID = [kind for kind, shape in SHAPES.items() if not shape.thin]


@pytest.mark.parametrize("kind", SOLID)
def test_solid_filled_with_points(kind: str) -> None:
    """Volume, centre and moments by 500 000 evenly spread points (a Kronecker lattice), good to 1e-3."""
    steps = np.array(
        [0.8191725133961645, 0.6710436067037893, 0.5497004779019703]
    )  # powers of the plastic number
    lattice = np.arange(500_000)[:, None] * steps % 1.0 - 0.5
    middle, box = np.array([0.0, 0.0, 0.2]), np.array([1.0, 1.0, 1.3])
    coarse = middle + lattice * box
    held = coarse[_within(kind, *coarse.T)]  # where the solid is, to lay the points closer
    middle, box = 0.5 * (held.max(0) + held.min(0)), 1.05 * np.ptp(held, axis=0)
    points = middle + lattice * box
    x, y, z = points[_within(kind, *points.T)].T
    body = squared_gyrations(kind)
    volume = float(np.prod(box)) * len(x) / 500_000
    assert volume == pytest.approx(body.volume, rel=3e-3)
    assert float(z.mean()) == pytest.approx(body.height, abs=1e-3)
    spread = np.array([np.mean(x * x), np.mean(y * y), np.var(z)])
    moments = spread.sum() - spread
    assert moments == pytest.approx([body.xx, body.yy, body.zz], rel=3e-3)


def test_thin_solids_are_limits_of_thick_ones() -> None:
    thin = 1e-7
    rod = SHAPES["cylinder"].body({"diameter": thin, "height": 0.6})
    plate = SHAPES["block"].body({"length": 0.3, "width": 0.2, "height": thin})
    disc = SHAPES["cylinder"].body({"diameter": 0.4, "height": thin})
    shell = SHAPES["shell"].body({"outer_diameter": 0.4, "inner_diameter": 0.4 - 1e-6})
    for kind, thick in (("rod", rod), ("plate", plate), ("disc", disc), ("thin-shell", shell)):
        body = squared_gyrations(kind)
        assert (body.xx, body.yy, body.zz) == pytest.approx(
            (thick.xx, thick.yy, thick.zz), rel=1e-5, abs=1e-12
        )


def test_frustum_between_cone_and_cylinder() -> None:
    cone = SHAPES["frustum"].body({"lower_diameter": 0.4, "upper_diameter": 0.0, "height": 0.7})
    same = SHAPES["frustum"].body({"lower_diameter": 0.3, "upper_diameter": 0.3, "height": 0.5})
    for found, wanted, lift in (
        (cone, squared_gyrations("cone"), 0.0),
        (same, squared_gyrations("cylinder"), 0.25),
    ):
        assert found.volume == pytest.approx(wanted.volume)
        assert found.height == pytest.approx(wanted.height + lift)
        assert (found.xx, found.yy, found.zz) == pytest.approx((wanted.xx, wanted.yy, wanted.zz))


@pytest.mark.parametrize(
    ("material", "low", "high"),
    [
        # J. M. Gere, Mechanics of Materials, Table H-1
        ("brass", 8400, 8600),
        ("Aluminum alloy", 2600, 2800),
        ("oak", 640, 720),
        ("rubber", 960, 1300),
        # W. D. Callister, Materials Science and Engineering, Table B.1
        ("PVC", 1300, 1580),
        ("carbon fiber", 1780, 1810),
    ],
)
def test_densities_are_ranges(material: str, low: float, high: float) -> None:
    density = density_of(material)
    assert density is not None
    assert density.value == pytest.approx((low + high) / 2)
    assert density.u == pytest.approx((high - low) / 2 / math.sqrt(3))
    assert density.shape == "rectangular"


def test_single_numbers_of_a_table_are_not_exact() -> None:
    steel = density_of("steel")  # Gere, Table H-1: 7850
    assert steel is not None
    assert (steel.value, steel.u) == pytest.approx((7850, 78.5 / math.sqrt(3)))


def test_every_material_has_a_source_and_a_sound_range() -> None:
    assert density_of("unobtainium") is None
    assert {source_of(name) for name in DENSITIES} == {"Gere", "Callister", "memory"}
    assert all(10 < low <= high < 20_000 for low, high, _ in DENSITIES.values())
