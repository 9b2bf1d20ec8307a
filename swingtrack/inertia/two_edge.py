"""Reversible pendulum with two edges on opposite sides of the centre of mass: the arms need not be measured."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

from ..errors import BadRig
from ..records import Doubt, ExpectedMode, Quantity, Rig
from .gravity import gravity_of
from .knife_edge import pendulum_dynamics
from .suspension import Dynamics, need_dimensions, need_mass

FOUR_PI_2 = 4.0 * math.pi**2
# |k²/(l1 l2) − 1| below which the two periods say nearly the same thing and doubts grow tenfold: our judgment.
CONJUGATE = 0.1


def arms_on_opposite_sides(p: Any, q: Any, separation: Any) -> tuple[Any, Any]:
    """Distances l1, l2 from the edges to the centre of mass between them, m.

    p = g T1²/4π², q = g T2²/4π², s the distance between the edges: l1 = s (q − s)/(p + q − 2 s), l2 = s − l1.
    """
    first = separation * (q - separation) / (p + q - 2.0 * separation)
    return first, separation - first


def arms_on_one_side(p: Any, q: Any, separation: Any) -> tuple[Any, Any]:
    """Distances l1 > l2 to the centre of mass, both edges on one side of it, l1 − l2 = s: l1 = s (q + s)/(q − p + 2 s)."""
    first = separation * (q + separation) / (q - p + 2.0 * separation)
    return first, first - separation


def kater_gravity(period: Any, separation: Any) -> Any:
    """Gravity from a reversible pendulum with equal periods about both edges, m/s²: g = 4π² s/T²."""
    return FOUR_PI_2 * separation / period**2


def bessel_gravity(periods: tuple[Any, Any], arms: tuple[Any, Any]) -> Any:
    """Gravity from nearly equal periods, m/s²: 8π²/g = (T1² + T2²)/(l1 + l2) + (T1² − T2²)/(l1 − l2)."""
    (t1, t2), (l1, l2) = periods, arms
    return 8.0 * math.pi**2 / ((t1**2 + t2**2) / (l1 + l2) + (t1**2 - t2**2) / (l1 - l2))


class TwoEdge:
    """Periods T1 and T2 about two edges a known distance s apart give the arms and k.

    With p = g T1²/4π² and q = g T2²/4π²: l1 = s (q − s)/(p + q − 2 s), k² = p l1 − l1², I = m k².
    Source: docs/theory.md, section Two edges (round trip; Kater's pendulum is the case p = q = s).
    """

    about = "axis through the centre of mass, parallel to the edges"

    def inputs(self, rig: Rig) -> dict[str, Quantity]:
        given = rig.suspension.dimensions
        found = {"mass": need_mass(rig), "gravity": gravity_of(rig)}
        return found | {key: given[key] for key in ("edge_separation", "second_period") if key in given}

    def check(self, rig: Rig) -> tuple[Doubt, ...]:
        need_dimensions(rig, "edge_separation", "second_period")
        need_mass(rig)
        return ()

    def first_arm(self, x: Mapping[str, Any]) -> Any:
        """Distance l1 from the first edge to the centre of mass, m."""
        return arms_on_opposite_sides(*_lengths(x), x["edge_separation"])[0]

    def moment(self, x: Mapping[str, Any]) -> Any:
        p, _ = _lengths(x)
        arm = self.first_arm(x)
        return x["mass"] * (p * arm - arm**2)

    def period(self, x: Mapping[str, Any], moment: float) -> float:
        """Period about the first edge that goes with `moment` and the second period.

        The second period alone leaves two places of the centre of mass open; of two that lie between the edges the one
        farther from the first edge is taken.
        """
        s, k2 = x["edge_separation"], moment / x["mass"]
        q = _length(x["gravity"], x["second_period"])
        slack = 0.25 * q * q - k2
        roots = (0.5 * q - math.sqrt(slack), 0.5 * q + math.sqrt(slack)) if slack >= 0.0 else ()
        inside = [arm for arm in roots if 0.0 < arm < s]
        if not inside:
            raise BadRig(
                f"No place between the edges gives a moment of {moment:.4g} kg m² and a second period of {x['second_period']:.5g} s.",
                "Needed: edge_separation and second_period of one and the same article.",
            )
        first = s - inside[0]
        return float(2.0 * math.pi * math.sqrt((k2 + first**2) / (x["gravity"] * first)))

    def dynamics(self, rig: Rig, moment: float | None) -> Dynamics:
        return pendulum_dynamics()

    def modes(self, rig: Rig) -> tuple[ExpectedMode, ...]:
        return ()

    def judge(self, x: Mapping[str, Any], moment: float) -> tuple[Doubt, ...]:
        first, s = float(self.first_arm(x)), x["edge_separation"]
        if not 0.0 < first < s:
            raise BadRig(
                f"Periods {x['period']:.5g} s and {x['second_period']:.5g} s put the centre of mass outside the edges "
                f"({first:.4g} m from the first of two edges {s:.4g} m apart).",
                "Needed: edges on opposite sides of the centre of mass.",
                "Check edge_separation and which period belongs to which edge; one edge alone is a knife-edge.",
            )
        apart = abs(moment / x["mass"] / (first * (s - first)) - 1.0)
        if apart >= CONJUGATE:
            return ()
        return (
            Doubt(
                "edges-conjugate",
                f"The two periods are so alike ({x['period']:.5g} s and {x['second_period']:.5g} s for these edges) that "
                f"doubts in them and in gravity grow some {1.0 / max(apart, 1e-6):.0f} times.",
                "Move one edge nearer to the centre of mass, or give pivot_to_centre of one edge as a knife-edge.",
            ),
        )


def _length(gravity: Any, period: Any) -> Any:
    """Length of the simple pendulum of the same period, g T²/4π², m."""
    return gravity * period**2 / FOUR_PI_2


def _lengths(x: Mapping[str, Any]) -> tuple[Any, Any]:
    return _length(x["gravity"], x["period"]), _length(x["gravity"], x["second_period"])


TWO_EDGE = TwoEdge()
