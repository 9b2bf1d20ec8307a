"""Knife-edge (compound) pendulum: inertia about the edge and about the centre of mass."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

import numpy as np

from ..records import Doubt, ExpectedMode, Quantity, Rig
from .gravity import gravity_of
from .suspension import Dynamics, need_dimensions, need_mass

FOUR_PI_2 = 4.0 * math.pi**2
# m l² over I from which a doubt in the distance is worth four times its size in I and more: our judgment.
FAR = 3.0


def pendulum_dynamics() -> Dynamics:
    """v(q) = 1 − cos q, m(q) = 1; defined below 180°."""
    return Dynamics(lambda q: 2.0 * np.sin(0.5 * q) ** 2, np.ones_like, math.pi)


class KnifeEdge:
    """I_edge = m g l T² / (4π²), I = I_edge − m l², l from the edge to the centre of mass."""

    about = "axis through the centre of mass, parallel to the edge"

    def inputs(self, rig: Rig) -> dict[str, Quantity]:
        found = {"mass": need_mass(rig), "gravity": gravity_of(rig)}
        if "pivot_to_centre" in rig.suspension.dimensions:
            found["pivot_to_centre"] = rig.suspension.dimensions["pivot_to_centre"]
        return found

    def check(self, rig: Rig) -> tuple[Doubt, ...]:
        need_dimensions(rig, "pivot_to_centre")
        need_mass(rig)
        return ()

    def moment(self, x: Mapping[str, Any]) -> Any:
        return self.moment_about_edge(x) - x["mass"] * x["pivot_to_centre"] ** 2

    def moment_about_edge(self, x: Mapping[str, Any]) -> Any:
        """Moment of inertia about the edge itself, kg m²."""
        return x["mass"] * x["gravity"] * x["pivot_to_centre"] * x["period"] ** 2 / FOUR_PI_2

    def period(self, x: Mapping[str, Any], moment: float) -> float:
        arm = x["pivot_to_centre"]
        return float(
            2.0 * math.pi * math.sqrt((moment + x["mass"] * arm**2) / (x["mass"] * x["gravity"] * arm))
        )

    def dynamics(self, rig: Rig, moment: float | None) -> Dynamics:
        return pendulum_dynamics()

    def modes(self, rig: Rig) -> tuple[ExpectedMode, ...]:
        return ()

    def judge(self, x: Mapping[str, Any], moment: float) -> tuple[Doubt, ...]:
        moved = x["mass"] * x["pivot_to_centre"] ** 2
        if not moment > 0.0 or moved <= FAR * moment:
            return ()
        return (
            Doubt(
                "edge-far-from-centre",
                f"The moment is the small difference of two big ones: m l² is {moved / moment:.1f} times it, and every "
                "doubt in distance and period grows accordingly.",
                "Move the edge nearer to the centre of mass (best about one radius of gyration off), or use strings.",
            ),
        )


KNIFE_EDGE = KnifeEdge()
