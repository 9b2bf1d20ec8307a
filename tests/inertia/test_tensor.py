"""The whole tensor from swings about six or more axes."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from swingtrack.errors import BadInput
from swingtrack.inertia.combine import Run
from swingtrack.inertia.solids_shapes import SHAPES
from swingtrack.inertia.suspension import model_of
from swingtrack.inertia.tensor import fit_tensor, moment_about
from swingtrack.records import Article, Quantity, Rig, Suspension

MASS = 0.9
BENCH = {"length": Quantity(1.2, 5e-4, "m"), "upper_spacing": Quantity(0.3, 3e-4, "m")}
G = Quantity(9.81, 1e-3, "m/s^2")
ROOT = math.sqrt(0.5)
SEVEN = ((1, 0, 0), (0, 1, 0), (0, 0, 1), (ROOT, ROOT, 0), (ROOT, 0, ROOT), (0, ROOT, ROOT), (ROOT, -ROOT, 0))
GOLDEN = (1 + math.sqrt(5)) / 2


def rotation(seed: int) -> np.ndarray:
    turned, _ = np.linalg.qr(np.random.default_rng(seed).standard_normal((3, 3)))
    return turned * np.sign(np.linalg.det(turned))


def block_tensor(turned: np.ndarray | None = None) -> np.ndarray:
    turned = rotation(5) if turned is None else turned
    body = SHAPES["block"].body({"length": 0.5, "width": 0.25, "height": 0.1})
    return turned @ np.diag([MASS * body.xx, MASS * body.yy, MASS * body.zz]) @ turned.T


def swings(
    true: np.ndarray, axes: object = SEVEN, *, u: float = 1e-4, errors: np.ndarray | None = None
) -> list[Run]:
    runs = []
    for number, axis in enumerate(np.array(axes, dtype=float)):
        n = axis / np.linalg.norm(axis)
        article = Article("paddle", Quantity(MASS, 1e-4, "kg"), axis=(float(n[0]), float(n[1]), float(n[2])))
        rig = Rig(article, Suspension("bifilar", BENCH), gravity=G)
        x = {key: quantity.value for key, quantity in model_of("bifilar").inputs(rig).items()}
        period = model_of("bifilar").period(x, float(n @ true @ n)) * (
            1 + (0.0 if errors is None else errors[number])
        )
        runs.append(Run(f"axis {number}", rig, Quantity(period, u * period, "s")))
    return runs


def as_array(result: object) -> np.ndarray:
    return np.array([[q.value for q in row] for row in result.matrix])  # type: ignore[attr-defined]


@settings(max_examples=8, deadline=None)
@given(st.integers(0, 10_000))
def test_exact_swings_give_the_tensor_back(seed: int) -> None:
    turned = rotation(seed)
    true = block_tensor(turned)
    result = fit_tensor(swings(true))
    assert as_array(result) == pytest.approx(true, rel=1e-9, abs=1e-12)
    for axis, column in zip(result.principal, (0, 1, 2), strict=True):
        # a block's smallest moment is about its longest side (x), the largest about its shortest (z)
        assert abs(float(np.dot(axis.direction, turned[:, column]))) == pytest.approx(1.0, abs=1e-9)


def test_moment_about_any_axis() -> None:
    true = block_tensor()
    result = fit_tensor(swings(true))
    n = np.array([1.0, -2.0, 0.5])
    assert moment_about(result, n.tolist()).value == pytest.approx(float(n @ true @ n / (n @ n)))
    with pytest.raises(BadInput, match="no direction"):
        moment_about(result, (0, 0, 0))


def test_principal_moments_of_a_block_and_their_margin() -> None:
    body = SHAPES["block"].body({"length": 0.5, "width": 0.25, "height": 0.1})
    result = fit_tensor(swings(block_tensor()))
    assert [axis.moment.value for axis in result.principal] == pytest.approx(
        [MASS * m for m in (body.xx, body.yy, body.zz)]
    )
    # λ₁ + λ₂ − λ₃ = 2 ∫ z² dm = m h²/6 for a block of height h along the axis of the largest moment
    assert result.triangle_margin.value == pytest.approx(MASS * 0.1**2 / 6)
    assert result.doubts == ()


def test_shared_scale_error_scales_the_whole() -> None:
    """Spacing, length, gravity and mass are one input for all axes: every principal moment has their full part."""
    result = fit_tensor(swings(block_tensor(), u=1e-6), axis_u_rad=0.0)
    for axis in result.principal:
        shares = {line.input: line.contribution / axis.moment.value for line in axis.budget}
        assert shares["upper_spacing"] == pytest.approx(2 * 3e-4 / 0.3, rel=1e-6)
        assert shares["gravity"] == pytest.approx(1e-3 / 9.81, rel=1e-6)
        assert sum(line.contribution**2 for line in axis.budget) == pytest.approx(axis.moment.u**2)


def test_perturbation_of_moments_and_axes_against_draws() -> None:
    """Spread of fits to noisy periods beside the uncertainties that one fit states (own errors alone)."""
    true, rng = block_tensor(), np.random.default_rng(11)
    exact = [
        replace(run, rig=replace(run.rig, gravity=replace(G, u=0.0), suspension=_exact_bench()))
        for run in swings(true, u=1e-3)
    ]
    exact = [
        replace(run, rig=replace(run.rig, article=replace(run.rig.article, mass=Quantity(MASS, 0.0, "kg"))))
        for run in exact
    ]
    moments, tilts = [], []
    stated = fit_tensor(exact, axis_u_rad=0.0)
    longest = np.array(stated.principal[0].direction)
    towards = np.array(stated.principal[1].direction)
    for _ in range(150):
        noisy = [
            replace(
                run, period=replace(run.period, value=run.period.value * (1 + 1e-3 * rng.standard_normal()))
            )
            for run in exact
        ]
        rows = np.array([_row(run.rig.article.axis) for run in noisy])
        said = [model_of("bifilar").moment(_inputs(run)) for run in noisy]
        weights = 1 / np.array(said)
        xx, yy, zz, yz, xz, xy = np.linalg.lstsq(rows * weights[:, None], np.ones(7), rcond=None)[0]
        values, vectors = np.linalg.eigh(np.array([[xx, xy, xz], [xy, yy, yz], [xz, yz, zz]]))
        moments.append(values)
        v = vectors[:, 0] * np.sign(vectors[:, 0] @ longest)
        tilts.append(float(v @ towards))
    spread = np.std(moments, axis=0, ddof=1)
    assert spread == pytest.approx([axis.moment.u for axis in stated.principal], rel=0.2)
    assert stated.principal[0].direction_u_rad == pytest.approx(float(np.std(tilts, ddof=1)), rel=0.2)


def _exact_bench() -> Suspension:
    return Suspension("bifilar", {key: replace(quantity, u=0.0) for key, quantity in BENCH.items()})


def _inputs(run: Run) -> dict[str, float]:
    inputs = {key: quantity.value for key, quantity in model_of("bifilar").inputs(run.rig).items()}
    return {**inputs, "period": run.period.value}


def _row(axis: tuple[float, float, float] | None) -> list[float]:
    assert axis is not None
    x, y, z = axis
    return [x * x, y * y, z * z, 2 * y * z, 2 * x * z, 2 * x * y]


def test_tilted_axes_blur_the_products_of_inertia() -> None:
    sharp = fit_tensor(swings(block_tensor()), axis_u_rad=0.0)
    blunt = fit_tensor(swings(block_tensor()), axis_u_rad=math.radians(1.0))
    assert blunt.matrix[0][1].u > 3 * sharp.matrix[0][1].u
    assert "directions of the axes" in [line.input for line in blunt.principal[0].budget]


def test_condition_of_an_icosahedron() -> None:
    """Six axes through the corners of an icosahedron are the most even set: rows' Gram matrix has eigenvalues 2 and 5, so
    √2.5 (icosahedral design of strength 4; derived by averaging n⁴ over the sphere).
    """
    corners = [
        (0, 1, GOLDEN),
        (0, 1, -GOLDEN),
        (1, GOLDEN, 0),
        (1, -GOLDEN, 0),
        (GOLDEN, 0, 1),
        (GOLDEN, 0, -1),
    ]
    result = fit_tensor(swings(block_tensor(), corners))
    assert result.condition == pytest.approx(math.sqrt(2.5))
    assert result.consistency.dof == 0


def test_condition_does_not_depend_on_the_frame() -> None:
    turned = rotation(2)
    first = fit_tensor(swings(block_tensor(), SEVEN))
    second = fit_tensor(swings(turned @ block_tensor() @ turned.T, np.array(SEVEN) @ turned.T))
    assert second.condition == pytest.approx(first.condition)
    assert [a.moment.u for a in second.principal] == pytest.approx(
        [a.moment.u for a in first.principal], rel=1e-6
    )


def test_next_axis_is_where_nothing_was_measured_well() -> None:
    # Five good axes and a sixth that leaves xy nearly open: the next one lies across x and y.
    axes = ((1, 0, 0), (0, 1, 0), (0, 0, 1), (1, 0, 1), (0, 1, 1), (1, 0.1, 0.3))
    result = fit_tensor(swings(block_tensor(), axes))
    assert "axes-too-alike" in [doubt.code for doubt in result.doubts]
    x, y, _ = result.next_axis.axis
    assert abs(x * y) > 0.3
    assert result.next_axis.gain > 0.3
    better = fit_tensor(swings(block_tensor(), (*axes, result.next_axis.axis)))
    assert better.condition < 0.5 * result.condition


def test_next_axis_gains_what_it_says() -> None:
    """The promised part of the matrix's own uncertainty against a fit with that axis added (own errors alone)."""

    def own(runs: list[Run]) -> float:
        found = []
        for run in runs:
            article = replace(run.rig.article, mass=Quantity(MASS, 0.0, "kg"))
            found.append(
                replace(
                    run,
                    rig=replace(
                        run.rig, gravity=replace(G, u=0.0), suspension=_exact_bench(), article=article
                    ),
                )
            )
        covariance = np.array(fit_tensor(found, axis_u_rad=math.radians(0.5)).covariance)
        return math.sqrt(float(np.diag(covariance) @ np.array([1, 1, 1, 2, 2, 2])))

    runs = swings(block_tensor())
    promise = fit_tensor(runs).next_axis
    after = own(swings(block_tensor(), (*SEVEN, promise.axis)))
    assert 1 - after / own(runs) == pytest.approx(promise.gain, abs=0.03)


def test_swapped_axes_are_found_out() -> None:
    runs = swings(block_tensor(np.eye(3)))
    swapped = [
        replace(runs[0], period=runs[2].period),
        runs[1],
        replace(runs[2], period=runs[0].period),
        *runs[3:],
    ]
    assert fit_tensor(swapped).doubts[0].code == "scatter-over-claim"


def test_what_no_body_has_is_doubted() -> None:
    long = np.diag([0.01, 0.02, 0.05])  # 0.01 + 0.02 < 0.05
    result = fit_tensor(swings(long))
    assert [doubt.code for doubt in result.doubts] == ["tensor-triangle"]
    negative = np.array([[0.02, 0.03, 0.0], [0.03, 0.02, 0.0], [0.0, 0.0, 0.04]])  # −0.01, 0.04, 0.05
    result = fit_tensor(swings(negative, SEVEN[:6]))
    assert "tensor-not-positive" in [doubt.code for doubt in result.doubts]


def test_flat_plate_is_not_doubted() -> None:
    assert fit_tensor(swings(np.diag([0.01, 0.02, 0.03]))).doubts == ()


def test_axes_that_cannot_be_told_apart_have_no_direction() -> None:
    result = fit_tensor(swings(np.diag([0.01, 0.02, 0.02])))
    assert result.principal[0].direction_u_rad is not None
    assert result.principal[1].direction_u_rad is None
    assert [doubt.code for doubt in result.doubts] == ["principal-axes-alike"]


def test_refusals() -> None:
    runs = swings(block_tensor())
    with pytest.raises(BadInput, match="at least 6"):
        fit_tensor(runs[:5])
    with pytest.raises(BadInput, match="does not say about which axis"):
        fit_tensor(
            [
                *runs[:6],
                replace(runs[6], rig=replace(runs[6].rig, article=replace(runs[6].rig.article, axis=None))),
            ]
        )
    flat = [(math.cos(a), math.sin(a), 0.0) for a in np.linspace(0, 2.5, 6)] + [(0, 0, 1)]
    with pytest.raises(BadInput, match="leave an element of the matrix open"):
        fit_tensor(swings(block_tensor(), flat))
