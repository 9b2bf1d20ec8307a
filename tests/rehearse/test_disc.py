"""Painted discs: where they project to, and how much of each pixel they cover."""

from __future__ import annotations

import math

import numpy as np
import pytest

from swingtrack.rehearse.disc import Ellipses, cover, project_disc, soft_cover


def centroid(patch: np.ndarray, x0: int, y0: int) -> np.ndarray:
    rows, columns = np.mgrid[: patch.shape[0], : patch.shape[1]]
    return (
        np.array([(patch * columns).sum() + x0 * patch.sum(), (patch * rows).sum() + y0 * patch.sum()])
        / patch.sum()
    )


def some(diameter: float, seed: int, smear: float) -> Ellipses:
    rng = np.random.default_rng(seed)
    turn, squash = rng.uniform(0, math.pi), rng.uniform(0.3, 1.0)
    axes = np.array([[math.cos(turn), -math.sin(turn)], [math.sin(turn), math.cos(turn)]])
    shape = axes @ np.diag([(0.5 * diameter) ** 2, (0.5 * diameter * squash) ** 2]) @ axes.T
    centres = rng.uniform(60, 61, 2) + np.linspace(-0.5, 0.5, 9)[:, None] * smear * rng.uniform(-1, 1, 2)
    return Ellipses(centres, np.broadcast_to(shape, (9, 2, 2)))


@pytest.mark.parametrize("diameter", [6.0, 8.0, 16.0, 40.0, 80.0])
@pytest.mark.parametrize("smear", [0.0, 12.0])
def test_the_soft_disc_is_where_it_says(diameter: float, smear: float) -> None:
    for seed in range(12):
        ellipses = some(diameter, seed, smear)
        patch, x0, y0 = soft_cover(ellipses, 0.7)
        np.testing.assert_allclose(centroid(patch, x0, y0), ellipses.centroid, atol=1e-3)
        assert patch.sum() == pytest.approx(ellipses.areas[0], rel=5e-4)


def test_the_hard_disc_covers_its_area_exactly() -> None:
    # 5 px across, centred on a pixel: by quadrature of the circle over the pixels (1-D integrals of chords)
    patch, x0, y0 = cover(Ellipses(np.array([[10.0, 20.0]]), np.array([[[6.25, 0.0], [0.0, 6.25]]])))
    x = (np.arange(20_000) + 0.5) / 20_000
    for row, column in ((20, 10), (20, 12), (22, 11), (18, 9), (22, 12)):
        u = column - 10 - 0.5 + x
        half = np.sqrt(np.clip(6.25 - u * u, 0.0, None))
        low, high = row - 20 - 0.5, row - 20 + 0.5
        exact = np.clip(np.minimum(half, high) - np.maximum(-half, low), 0.0, None).mean()
        assert patch[row - y0, column - x0] == pytest.approx(exact, abs=1e-3)


def test_the_image_of_a_disc_is_that_of_its_rim() -> None:
    rng = np.random.default_rng(3)
    plane = np.array([[900.0, 40.0, 600.0], [-30.0, 500.0, 380.0], [0.1, -0.9, 1.0]]) + rng.normal(
        0, 0.01, (3, 3)
    )
    seen = project_disc(plane, 0.03, (0.02, -0.1))
    phase = np.arange(720) * (math.pi / 360)
    rim = np.stack([0.02 + 0.03 * np.cos(phase), -0.1 + 0.03 * np.sin(phase), np.ones(720)])
    points = plane @ rim
    x, y = points[0] / points[2], points[1] / points[2]
    away = np.stack([x, y]) - seen.centres[:, None]
    np.testing.assert_allclose(np.sum(away * np.linalg.solve(seen.shapes, away), axis=0), 1.0, atol=1e-9)
    # area and centroid of the polygon by the surveyor's formula
    cross = x * np.roll(y, -1) - np.roll(x, -1) * y
    middle = (
        ((x + np.roll(x, -1)) * cross).sum() / (3.0 * cross.sum()),
        ((y + np.roll(y, -1)) * cross).sum() / (3.0 * cross.sum()),
    )
    np.testing.assert_allclose(seen.centres, middle, atol=1e-4)
    assert float(seen.areas) == pytest.approx(abs(0.5 * cross.sum()), rel=1e-4)


def test_a_disc_cut_by_the_picture_is_still_a_patch() -> None:
    patch, x0, y0 = soft_cover(Ellipses(np.array([[0.0, -3.0]]), np.array([[[16.0, 0.0], [0.0, 16.0]]])), 0.7)
    assert x0 < 0 > y0
    assert patch.sum() == pytest.approx(16.0 * math.pi, rel=5e-4)
