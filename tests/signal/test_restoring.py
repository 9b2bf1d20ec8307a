"""Restoring laws: values and derivatives."""

from __future__ import annotations

import numpy as np
import pytest

from swingtrack.signal.restoring import FromLaw, PendulumLike, is_isochronous
from tests.signal.truth import bifilar, knife_edge, torsion_wire

ANGLES = np.linspace(-1.1, 1.1, 45)


@pytest.mark.parametrize("rig", [bifilar(1, 0.3, 0.15, 0.15), bifilar(1, 0.5, 0.5, 0.3), knife_edge()])
def test_series_give_back_the_geometry(rig):
    pull = FromLaw(rig.law()).pull(ANGLES, 0.0)
    np.testing.assert_allclose(pull.v1, rig.v1(ANGLES), atol=1e-8)
    np.testing.assert_allclose(pull.m, rig.m(ANGLES), atol=1e-8)
    np.testing.assert_allclose(pull.m1, rig.m1(ANGLES), atol=1e-7)


@pytest.mark.parametrize("restoring", [FromLaw(bifilar(1, 0.3, 0.15, 0.15).law()), PendulumLike()])
def test_second_derivatives_are_slopes_of_the_first(restoring):
    h = 1e-6
    ahead, behind = restoring.pull(ANGLES + h, 0.8), restoring.pull(ANGLES - h, 0.8)
    here = restoring.pull(ANGLES, 0.8)
    np.testing.assert_allclose((ahead.v1 - behind.v1) / (2 * h), here.v2, atol=1e-8)
    np.testing.assert_allclose((ahead.m - behind.m) / (2 * h), here.m1, atol=1e-8)
    np.testing.assert_allclose((ahead.m1 - behind.m1) / (2 * h), here.m2, atol=1e-8)


def test_pendulum_family_passes_through_torsion_wire_and_pendulum():
    np.testing.assert_allclose(PendulumLike().pull(ANGLES, 1.0).v1, np.sin(ANGLES), atol=1e-15)
    np.testing.assert_allclose(PendulumLike().pull(ANGLES, 0.0).v1, ANGLES, atol=1e-15)
    np.testing.assert_allclose(PendulumLike().pull(ANGLES, -1.0).v1, np.sinh(ANGLES), atol=1e-14)


def test_slope_to_the_shape_is_smooth_through_none():
    h = 1e-4
    for shape in (-0.5, -1e-5, 0.0, 1e-5, 0.9):
        numeric = (PendulumLike().pull(ANGLES, shape + h).v1 - PendulumLike().pull(ANGLES, shape - h).v1) / (
            2 * h
        )
        np.testing.assert_allclose(PendulumLike().pull(ANGLES, shape).v1_shape, numeric, atol=1e-9)


def test_only_the_torsion_wire_keeps_time():
    assert is_isochronous(torsion_wire().law(2.0))
    assert not is_isochronous(knife_edge().law())
