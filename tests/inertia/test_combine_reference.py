"""Ratio method: a reference of known moment makes up for the geometry; a published torsion pendulum recomputed."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from swingtrack.errors import BadInput
from swingtrack.inertia.combine import Run
from swingtrack.inertia.combine_reference import compare_with_reference
from swingtrack.inertia.suspension import model_of
from swingtrack.inertia.units import MOMENT_UNITS
from swingtrack.records import Article, Quantity, Rig, Suspension

SLUG_FT2 = MOMENT_UNITS["slug ft^2"]


def q(value: float, u: float, unit: str) -> Quantity:
    return Quantity(value, u, unit)


def wire_run(name: str, period: float, *, known: Quantity | None = None, stiffness: float = 1.0) -> Run:
    rig = Rig(
        Article(name, None, expected_moment=known),
        Suspension("torsion-wire", {"stiffness": q(stiffness, 0.5 * stiffness, "N m/rad")}),
    )
    return Run(name, rig, q(period, 0.005, "s"))


@settings(max_examples=10, deadline=None)
@given(st.floats(0.05, 50.0))
def test_published_torsion_pendulum_with_cradle(stiffness: float) -> None:
    """oocities.org/torsionpendulum, calculations page: bar of 0.1924 slug ft² and cradle 4.62 s, cradle alone 1.21 s, object
    and cradle 4.08 s; stated k = 0.382 lbf ft/rad and object 0.147 slug ft², recomputed 0.38213 and 0.14696. Whatever
    stiffness the rig claims must not matter.
    """
    known = q(0.19243 * SLUG_FT2, 1e-4, "kg m^2")
    result = compare_with_reference(
        [wire_run("object", 4.08, stiffness=stiffness)],
        [wire_run("bar", 4.62, known=known, stiffness=stiffness)],
        cradle=[wire_run("cradle", 1.21, stiffness=stiffness)],
    )
    assert result.moment.value / SLUG_FT2 == pytest.approx(0.14696, abs=1e-5)
    assert result.moment.value == pytest.approx(0.19925, abs=1e-5)
    lbf_ft = 0.45359237 * 9.80665 * 0.3048
    assert result.by_products[0].quantity.value * stiffness / lbf_ft == pytest.approx(0.38213, abs=1e-5)
    # stated cradle 0.014 slug ft², recomputed 0.01417
    cradle = result.by_products[0].quantity.value * stiffness * 1.21**2 / (4 * math.pi**2)
    assert cradle / SLUG_FT2 == pytest.approx(0.01417, abs=1e-5)
    assert next(line for line in result.budget if line.input == "stiffness").share < 1e-12


TAPE = {"length": q(1.2, 5e-3, "m"), "upper_spacing": q(0.3, 3e-3, "m")}
TRUE = {"length": 1.207, "upper_spacing": 0.2963, "gravity": 9.8123}


def hung(name: str, mass: float, moment: float, *, known: Quantity | None = None) -> Run:
    """On the true bench, written down with a tape measure that errs."""
    period = model_of("bifilar").period({**TRUE, "mass": mass}, moment)
    article = Article(name, q(mass, 1e-4, "kg"), expected_moment=known)
    return Run(
        name, Rig(article, Suspension("bifilar", TAPE), gravity=q(9.81, 0.01, "m/s^2")), q(period, 1e-4, "s")
    )


def test_wrong_tape_measure_cancels_on_strings() -> None:
    known = q(0.025, 2.5e-5, "kg m^2")
    result = compare_with_reference([hung("paddle", 0.9, 0.02)], [hung("bar", 1.0, 0.025, known=known)])
    assert result.moment.value == pytest.approx(0.02, rel=1e-12)
    shares = {line.input: line.contribution / 0.02 for line in result.budget}
    assert max(shares[key] for key in ("length", "upper_spacing", "gravity")) < 1e-10
    assert shares["moment of the reference"] == pytest.approx(1e-3)
    assert shares["mass (paddle)"] == pytest.approx(1e-4 / 0.9)
    assert shares["mass (bar)"] == pytest.approx(1e-4 / 1.0)
    assert shares["period (paddle)"] == pytest.approx(2e-4 / hung("paddle", 0.9, 0.02).period.value)


def test_reference_far_off_is_doubted() -> None:
    known = q(0.25, 2.5e-5, "kg m^2")
    result = compare_with_reference([hung("paddle", 0.9, 0.02)], [hung("bar", 1.0, 0.25, known=known)])
    assert [doubt.code for doubt in result.doubts] == ["reference-far-off"]


def test_refusals() -> None:
    paddle, bar = hung("paddle", 0.9, 0.02), hung("bar", 1.0, 0.025)
    with pytest.raises(BadInput, match="gives no known moment"):
        compare_with_reference([paddle], [bar])
    known = q(0.025, 2.5e-5, "kg m^2")
    good = hung("bar", 1.0, 0.025, known=known)
    with pytest.raises(BadInput, match="of the article given"):
        compare_with_reference([], [good])
    edge = replace(paddle.rig, suspension=Suspension("knife-edge", {"pivot_to_centre": q(0.3, 1e-3, "m")}))
    with pytest.raises(BadInput, match="hangs by knife-edge"):
        compare_with_reference([replace(paddle, rig=edge)], [good])
    with pytest.raises(BadInput, match="larger moment than with something on it"):
        compare_with_reference([paddle], [good], cradle=[hung("cradle", 0.9, 0.03)])
