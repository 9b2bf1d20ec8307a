"""Radius of gyration from yaw and sway of a bifilar."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from swingtrack.errors import BadInput
from swingtrack.inertia.bifilar import BIFILAR
from swingtrack.inertia.combine import Run
from swingtrack.inertia.sway_gyration import gyration_by_sway, radius_by_sway
from swingtrack.records import Article, Quantity, Rig, Suspension


def q(value: float, u: float, unit: str) -> Quantity:
    return Quantity(value, u, unit)


def seen(*, k: float = 0.12, spacing: float = 0.3, length: float = 1.2, offset: float = 0.0) -> Run:
    """Yaw by the bifilar's formula, sway along the strings' line exactly g/L; written length and gravity are far off."""
    x = {"mass": 0.9, "gravity": 9.8123, "length": length, "upper_spacing": spacing, "centre_offset": offset}
    yaw = BIFILAR.period(x, 0.9 * k**2)
    sway = 2 * math.pi * math.sqrt(length / 9.8123)
    bench = {"length": q(1.9 * length, 1e-3, "m"), "upper_spacing": q(spacing, 3e-4, "m")}
    if offset:
        bench["centre_offset"] = q(offset, 1e-3, "m")
    rig = Rig(
        Article("paddle", q(0.9, 1e-3, "kg")), Suspension("bifilar", bench), gravity=q(12.0, 1e-3, "m/s^2")
    )
    return Run("clip", rig, q(yaw, 1e-3, "s"), sway_period=q(sway, 2e-3, "s"))


@pytest.mark.parametrize("offset", [0.0, 0.04])
def test_neither_length_nor_gravity_enters(offset: float) -> None:
    result = gyration_by_sway(seen(offset=offset))
    assert result.by_products[0].quantity.value == pytest.approx(0.12, rel=1e-12)
    assert result.moment.value == pytest.approx(0.9 * 0.12**2, rel=1e-12)


def test_yaw_and_sway_coincide_where_the_spacing_is_twice_k() -> None:
    # Hinrichsen, Journal of Sailboat Technology 2014-01: the two modes coincide at D = 2k
    assert radius_by_sway(0.24, 2.0, 2.0) == pytest.approx(0.12)
    assert "sway-near-yaw" in [d.code for d in gyration_by_sway(seen(spacing=0.241)).doubts]
    assert "sway-near-yaw" not in [d.code for d in gyration_by_sway(seen()).doubts]


def test_budget_in_closed_form() -> None:
    run = seen()
    result = gyration_by_sway(run)
    assert run.sway_period is not None
    shares = {line.input: line.contribution / result.moment.value for line in result.budget}
    # I = m (D T_y/(2 T_s))²: relative sensitivities 1, 2, 2, 2
    assert shares["mass"] == pytest.approx(1e-3 / 0.9)
    assert shares["upper_spacing"] == pytest.approx(2 * 3e-4 / 0.3)
    assert shares["period"] == pytest.approx(2 * 1e-3 / run.period.value)
    assert shares["sway_period"] == pytest.approx(2 * 2e-3 / run.sway_period.value)
    radius = result.by_products[0].quantity
    assert radius.relative_u == pytest.approx(
        math.hypot(3e-4 / 0.3, 1e-3 / run.period.value, 2e-3 / run.sway_period.value)
    )


def test_refusals() -> None:
    run = seen()
    with pytest.raises(BadInput, match="no sway was seen"):
        gyration_by_sway(replace(run, sway_period=None))
    slanted = {**run.rig.suspension.dimensions, "lower_spacing": q(0.25, 3e-4, "m")}
    with pytest.raises(BadInput, match="lower spacing apart"):
        gyration_by_sway(replace(run, rig=replace(run.rig, suspension=Suspension("bifilar", slanted))))
    wire = replace(run.rig, suspension=Suspension("torsion-wire", {"stiffness": q(1.0, 0.1, "N m/rad")}))
    with pytest.raises(BadInput, match="torsion-wire"):
        gyration_by_sway(replace(run, rig=wire))


def test_strings_that_this_method_leaves_out_are_doubted() -> None:
    run = seen()
    heavy = {**run.rig.suspension.dimensions, "string_mass": q(0.02, 1e-3, "kg")}
    result = gyration_by_sway(replace(run, rig=replace(run.rig, suspension=Suspension("bifilar", heavy))))
    assert "sway-ignores-strings" in [d.code for d in result.doubts]
