"""Corrections, each its own function: what it changes of the moment of inertia, how surely, and whether it was applied."""

from __future__ import annotations

import math

from ..records import Correction, Rig
from .air import COEFFICIENT_LIMITS, DENSITY_LIMITS, added_moment

SCALE_AIR = 1.2 / 8000.0  # OIML D 28: scales are adjusted with weights of 8000 kg/m³ in air of 1.2 kg/m³
ON_STRINGS = ("bifilar", "trifilar")


def amplitude_correction(shift: float | None) -> Correction:
    """What the finite swing would have cost: T in the clip is longer by `shift`, and I goes with T²."""
    if shift is None:
        return Correction(
            "amplitude", 0.0, 0.0, False, "the amplitude is not known; its doubt is in the period"
        )
    relative = (1.0 + shift) ** -2 - 1.0
    return Correction(
        "amplitude", relative, 0.0, True, "the period of small swings is used, not the clip's average"
    )


def damping_correction(damping_ratio: float | None) -> Correction:
    """T_d = T_0/√(1 − ζ²), so that I without it would be too large by ζ² (viscous damping)."""
    if damping_ratio is None:
        return Correction("damping", 0.0, 0.0, False, "the damping is not known")
    return Correction("damping", -(damping_ratio**2), 0.0, True, "the undamped period is used")


def string_twist_correction(rig: Rig, moment: float, period_s: float) -> Correction:
    """The strings' own twist stiffness adds to gravity's: κ T²/(4π² I)."""
    stiffness = rig.suspension.dimensions.get("string_stiffness")
    if stiffness is None:
        return Correction(
            "string twist",
            0.0,
            0.0,
            False,
            "string_stiffness not given; thread adds 0.01 % or less, wire far more",
        )
    part = stiffness.value * period_s**2 / (4.0 * math.pi**2 * moment)
    return Correction("string twist", part, part * stiffness.relative_u, True, "adds to the restoring torque")


def string_mass_correction(rig: Rig) -> Correction:
    """The strings' mass: about M_s/(2 m) of I, less their own moment."""
    strings, mass = rig.suspension.dimensions.get("string_mass"), rig.article.mass
    if strings is None or mass is None:
        return Correction("string mass", 0.0, 0.0, False, "string_mass not given")
    part = 0.5 * strings.value / mass.value
    return Correction(
        "string mass",
        part,
        part * strings.relative_u,
        True,
        "half of it hangs on the article; its own moment is taken off",
    )


def buoyancy_correction(rig: Rig) -> Correction:
    """On strings buoyancy cancels: gravity's pull less buoyancy is what a scale reads."""
    if rig.suspension.kind not in ON_STRINGS:
        return Correction("buoyancy", 0.0, 0.0, False, "below the other doubts for a dense article")
    return Correction(
        "buoyancy",
        -SCALE_AIR,
        SCALE_AIR / 10.0,
        False,
        "cancels on strings: the scale's reading is the pull that turns the article back; what is left is the scale's own "
        "adjustment in air, 0.015 %, which is not applied",
    )


def air_correction(rig: Rig, moment: float) -> Correction:
    """Air carried along swings as well and is no part of the article: taken off where the rig says the shape."""
    if rig.air is None:
        return Correction(
            "air", 0.0, 0.0, False, "[air] not given: no air was taken off; light broad articles need it"
        )
    part = added_moment(rig.air) / moment
    limits = math.hypot(COEFFICIENT_LIMITS, DENSITY_LIMITS if rig.air.density is None else 0.0)
    reason = (
        f"air carried along by a {rig.air.shape}"
        if part
        else "edge on or none: nothing carried along to first order"
    )
    return Correction("air", -part, part * limits / math.sqrt(3.0), part != 0.0, reason)


def tilt_correction() -> Correction:
    """The swing axis is vertical; an article hung out of level is measured about another axis of its own."""
    return Correction(
        "tilt",
        0.0,
        0.0,
        False,
        "the moment is about the vertical as it hung; 2° out of level is 0.1 % of the difference of the moments",
    )
