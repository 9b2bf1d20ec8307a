"""Parallel-axis moves of moments, tensors and edges."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from swingtrack.errors import BadInput
from swingtrack.inertia.combine import Run
from swingtrack.inertia.parallel_axis import (
    fit_parallel_edges,
    shift_from_centre,
    shift_tensor,
    shift_to_centre,
)
from swingtrack.inertia.solids_shapes import SHAPES
from swingtrack.records import Article, Quantity, Rig, Suspension


def q(value: float, u: float, unit: str) -> Quantity:
    return Quantity(value, u, unit)


def test_rod_about_its_end() -> None:
    """m L²/12 about the middle, m L²/3 about the end (Gere and Timoshenko, appendix of solids)."""
    moment = q(2.0 * SHAPES["rod"].body({"length": 0.6}).xx, 0.0, "kg m^2")
    shifted = shift_from_centre(moment, q(2.0, 0.0, "kg"), q(0.3, 0.0, "m"))
    assert shifted.value == pytest.approx(2.0 * 0.6**2 / 3)


def test_uncertainty_of_a_shift() -> None:
    # u² = u_I² + (d² u_m)² + (2 m d u_d)² (GUM, JCGM 100:2008, 5.1.2)
    shifted = shift_to_centre(q(0.3, 1e-3, "kg m^2"), q(2.0, 5e-3, "kg"), q(0.3, 1e-3, "m"))
    assert shifted.value == pytest.approx(0.12)
    assert shifted.u == pytest.approx(math.hypot(1e-3, 0.09 * 5e-3, 2 * 2.0 * 0.3 * 1e-3))


def test_distance_too_large_for_the_moment_is_refused() -> None:
    with pytest.raises(BadInput, match="not smaller than the moment"):
        shift_to_centre(q(0.1, 1e-3, "kg m^2"), q(2.0, 5e-3, "kg"), q(0.3, 1e-3, "m"))


def test_tensor_of_points_moves_with_them() -> None:
    rng = np.random.default_rng(3)
    masses, places = rng.uniform(0.1, 1.0, 12), rng.normal(size=(12, 3))

    def tensor(r: np.ndarray) -> np.ndarray:
        return np.einsum(
            "i,ijk->jk",
            masses,
            np.einsum("ij,ij->i", r, r)[:, None, None] * np.eye(3) - r[:, :, None] * r[:, None],
        )

    centred = places - masses @ places / masses.sum()
    offset = np.array([0.3, -0.2, 0.5])
    assert shift_tensor(tensor(centred), float(masses.sum()), offset) == pytest.approx(
        tensor(centred - offset)
    )


K, MASS, G = 0.29, 1.3, 9.8123  # k and g of the two-pivot check (round trip l1 = 0.5, l2 = 0.2)


def edges(said: tuple[float, ...], *, off: float = 0.0, u: float = 1e-4) -> list[Run]:
    runs = []
    for number, arm in enumerate(said):
        true = arm + off
        period = 2 * math.pi * math.sqrt((K**2 + true**2) / (G * true))
        rig = Rig(
            Article("paddle", q(MASS, 1e-3, "kg")),
            Suspension("knife-edge", {"pivot_to_centre": q(arm, 2e-4, "m")}),
            gravity=q(G, 1e-4, "m/s^2"),
        )
        runs.append(Run(f"edge {number}", rig, q(period, u * period, "s")))
    return runs


@pytest.mark.parametrize("off", [0.0, 0.012, -0.02])
def test_place_of_the_centre_need_not_be_known(off: float) -> None:
    result = fit_parallel_edges(edges((0.2, 0.35, 0.5), off=off))
    assert result.moment.value == pytest.approx(MASS * K**2, rel=1e-9)
    assert result.by_products[0].quantity.value == pytest.approx(off, abs=1e-9)
    assert ("centre-of-mass-off" in [d.code for d in result.doubts]) == (abs(off) > 0.005)


def test_two_edges_in_closed_form() -> None:
    """Same side, l1 − l2 = s: l1 = s (Q + s)/(Q − P + 2 s), k² = P l1 − l1², P and Q = g T²/4π² (compound pendulum)."""
    runs = edges((0.5, 0.2), off=0.01)
    p, r = (G * run.period.value**2 / (4 * math.pi**2) for run in runs)
    first = 0.3 * (r + 0.3) / (r - p + 0.6)
    assert first == pytest.approx(0.51)
    assert fit_parallel_edges(runs).moment.value == pytest.approx(MASS * (p * first - first**2), rel=1e-9)


def test_refusals() -> None:
    with pytest.raises(BadInput, match="at least 2"):
        fit_parallel_edges(edges((0.3,)))
    same = edges((0.3, 0.3))
    with pytest.raises(BadInput, match="same pivot_to_centre"):
        fit_parallel_edges(same)
    wire = replace(same[0].rig, suspension=Suspension("torsion-wire", {"stiffness": q(1.0, 0.1, "N m/rad")}))
    with pytest.raises(BadInput, match="torsion-wire"):
        fit_parallel_edges([replace(same[0], rig=wire), same[1]])
