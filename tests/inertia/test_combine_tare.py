"""Tare: what article-with-cradle and cradle share cancels as it should."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from swingtrack.errors import BadInput
from swingtrack.inertia.combine import Run
from swingtrack.inertia.combine_tare import subtract_tare
from swingtrack.inertia.suspension import model_of
from swingtrack.records import Article, Quantity, Rig, Suspension


def q(value: float, u: float, unit: str) -> Quantity:
    return Quantity(value, u, unit)


BENCH = {"length": q(1.2, 5e-4, "m"), "upper_spacing": q(0.3, 3e-4, "m")}
G = q(9.81, 1e-3, "m/s^2")


def hung(
    name: str, mass: float, moment: float, *, kind: str = "bifilar", bench: dict[str, Quantity] = BENCH
) -> Run:
    """A run with the very period that the stated dimensions give."""
    rig = Rig(Article(name, q(mass, 1e-4, "kg")), Suspension(kind, bench), gravity=G)
    x = {key: quantity.value for key, quantity in model_of(kind).inputs(rig).items()}
    period = model_of(kind).period(x, moment)
    return Run(name, rig, q(period, 1e-4 * period, "s"))


def test_difference_and_its_budget() -> None:
    result = subtract_tare([hung("paddle on cradle", 1.2, 0.030)], [hung("cradle", 0.3, 0.010)])
    assert result.moment.value == pytest.approx(0.020, rel=1e-12)
    shares = {line.input: line.contribution / 0.020 for line in result.budget}
    # I(both) − I(cradle) with D, L, g common: relative as for one article, 2 u(D)/D, u(L)/L, u(g)/g; not √(30² + 10²)
    assert shares["upper_spacing"] == pytest.approx(2 * 3e-4 / 0.3)
    assert shares["length"] == pytest.approx(5e-4 / 1.2)
    assert shares["gravity"] == pytest.approx(1e-3 / 9.81)
    # the masses are distinct: each weighs with its own moment
    assert shares["mass (paddle on cradle)"] == pytest.approx(0.030 / 0.020 * 1e-4 / 1.2)
    assert shares["mass (cradle)"] == pytest.approx(0.010 / 0.020 * 1e-4 / 0.3)
    assert shares["period (paddle on cradle)"] == pytest.approx(0.030 / 0.020 * 2e-4)
    assert result.monte_carlo is not None
    assert result.monte_carlo.agrees


def test_suspension_stated_differently_does_not_cancel_and_is_doubted() -> None:
    other = {**BENCH, "upper_spacing": q(0.3001, 3e-4, "m")}
    result = subtract_tare([hung("both", 1.2, 0.030)], [hung("cradle", 0.3, 0.010, bench=other)])
    assert "suspension-not-shared" in [doubt.code for doubt in result.doubts]
    spacing = [line.contribution / 0.020 for line in result.budget if line.input.startswith("upper_spacing")]
    assert math.hypot(*spacing) == pytest.approx(2e-3 * math.hypot(1.5, 0.5), rel=1e-3)


def test_article_off_the_cradle_by_the_parallel_axis_rule() -> None:
    """Whole = article + cradle + reduced mass · e² about the common centre (Huygens and Steiner)."""
    article, cradle, e = 0.9, 0.3, 0.05
    whole = 0.020 + 0.010 + article * cradle / (article + cradle) * e**2
    result = subtract_tare(
        [hung("both", article + cradle, whole)], [hung("cradle", cradle, 0.010)], offset=q(e, 1e-3, "m")
    )
    assert result.moment.value == pytest.approx(0.020, rel=1e-12)


def test_cradle_on_a_knife_edge() -> None:
    """Moments about the edge add, and the article's own centre of mass is that of both less the cradle's."""
    article, l_article, own = 0.9, 0.40, 0.05
    cradle, l_cradle, cradle_own = 0.2, 0.15, 0.004
    arm = (article * l_article + cradle * l_cradle) / (article + cradle)
    about_edge = own + article * l_article**2 + cradle_own + cradle * l_cradle**2
    both = about_edge - (article + cradle) * arm**2
    result = subtract_tare(
        [hung("both", 1.1, both, kind="knife-edge", bench={"pivot_to_centre": q(arm, 1e-4, "m")})],
        [
            hung(
                "cradle",
                0.2,
                cradle_own,
                kind="knife-edge",
                bench={"pivot_to_centre": q(l_cradle, 1e-4, "m")},
            )
        ],
    )
    assert result.moment.value == pytest.approx(own, rel=1e-10)


def test_torsion_wire_needs_no_mass() -> None:
    """I(article) is κ/4π² (T₁² − T₂²) (any text on the torsion pendulum)."""
    wire = {"stiffness": q(0.02, 2e-4, "N m/rad")}
    rigs = [Rig(Article(name, None), Suspension("torsion-wire", wire)) for name in ("both", "cradle")]
    runs = [Run(rig.article.name, rig, q(t, 1e-3, "s")) for rig, t in zip(rigs, (6.0, 2.5), strict=True)]
    result = subtract_tare(runs[:1], runs[1:])
    assert result.moment.value == pytest.approx(0.02 * (6.0**2 - 2.5**2) / (4 * math.pi**2))


def test_repeats_of_either_are_averaged() -> None:
    both = [replace(hung("both", 1.2, 0.030), name=f"both {n}") for n in range(4)]
    result = subtract_tare(both, [hung("cradle", 0.3, 0.010)])
    own = [line.contribution for line in result.budget if line.input.startswith("period (both")]
    assert math.hypot(*own) == pytest.approx(0.030 * 2e-4 / 2)
    assert [line.weight for line in result.runs] == pytest.approx([0.375] * 4 + [-0.5])


def test_heavy_cradle_is_doubted() -> None:
    result = subtract_tare([hung("both", 1.2, 0.030)], [hung("cradle", 0.9, 0.020)])
    assert "cradle-dominates" in [doubt.code for doubt in result.doubts]


@pytest.mark.parametrize(
    ("both", "cradle", "said"),
    [
        ([], [hung("cradle", 0.3, 0.01)], "together given"),
        ([hung("both", 1.2, 0.03)], [], "cradle alone given"),
        ([hung("cradle", 0.3, 0.01)], [hung("both", 1.2, 0.03)], "all that hung there"),
        ([hung("both", 1.2, 0.01)], [hung("cradle", 0.3, 0.02)], "larger one"),
        (
            [hung("both", 1.2, 0.03)],
            [
                hung(
                    "cradle",
                    0.3,
                    0.01,
                    kind="trifilar",
                    bench={"length": BENCH["length"], "upper_radius": q(0.15, 0, "m")},
                )
            ],
            "the same suspension",
        ),
    ],
)
def test_what_is_no_tare_is_refused(both: list[Run], cradle: list[Run], said: str) -> None:
    with pytest.raises(BadInput, match=said):
        subtract_tare(both, cradle)


def test_offset_on_an_edge_is_refused() -> None:
    edge = {"pivot_to_centre": q(0.3, 1e-4, "m")}
    with pytest.raises(BadInput, match="offset"):
        subtract_tare(
            [hung("both", 1.2, 0.03, kind="knife-edge", bench=edge)],
            [hung("cradle", 0.3, 0.01, kind="knife-edge", bench=edge)],
            offset=q(0.01, 1e-3, "m"),
        )
