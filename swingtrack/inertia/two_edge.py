"""Reversible pendulum with two edges on opposite sides of the centre of mass: the arms need not be measured."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

from ..records import Doubt, ExpectedMode, Quantity, Rig
from .gravity import gravity_of
from .knife_edge import pendulum_dynamics
from .suspension import Dynamics, need_mass

FOUR_PI_2 = 4.0 * math.pi**2


class TwoEdge:
    """Periods T1 and T2 about two edges a known distance s apart give the arms and k.

    With P = g T1²/4π² and Q = g T2²/4π²: l1 = s (Q − s)/(P + Q − 2 s), k² = P l1 − l1², I = m k².
    Source: docs/theory.md, section Two edges (round trip; Kater's pendulum is the case P = Q = s).
    """

    about = "axis through the centre of mass, parallel to the edges"

    def inputs(self, rig: Rig) -> dict[str, Quantity]:
        given = rig.suspension.dimensions
        return {
            "mass": need_mass(rig),
            "gravity": gravity_of(rig),
            "edge_separation": given["edge_separation"],
            "second_period": given["second_period"],
        }

    def check(self, rig: Rig) -> tuple[Doubt, ...]:
        return ()

    def first_arm(self, x: Mapping[str, Any]) -> Any:
        """Distance l1 from the first edge to the centre of mass, m."""
        p = x["gravity"] * x["period"] ** 2 / FOUR_PI_2
        q = x["gravity"] * x["second_period"] ** 2 / FOUR_PI_2
        s = x["edge_separation"]
        return s * (q - s) / (p + q - 2.0 * s)

    def moment(self, x: Mapping[str, Any]) -> Any:
        p = x["gravity"] * x["period"] ** 2 / FOUR_PI_2
        arm = self.first_arm(x)
        return x["mass"] * (p * arm - arm**2)

    def period(self, x: Mapping[str, Any], moment: float) -> float:
        """Period about the first edge that goes with `moment` and the second period."""
        s = x["edge_separation"]
        q = x["gravity"] * x["second_period"] ** 2 / FOUR_PI_2
        # k² = l2 (Q − l2) has two roots; the arm of the second edge is the one that leaves l1 = s − l2 positive.
        k2 = moment / x["mass"]
        root = math.sqrt(0.25 * q * q - k2)
        second = next(l2 for l2 in (0.5 * q - root, 0.5 * q + root) if 0.0 < l2 < s)
        first = s - second
        return float(2.0 * math.pi * math.sqrt((k2 + first**2) / (x["gravity"] * first)))

    def dynamics(self, rig: Rig, moment: float | None) -> Dynamics:
        return pendulum_dynamics()

    def modes(self, rig: Rig) -> tuple[ExpectedMode, ...]:
        return ()


TWO_EDGE = TwoEdge()
