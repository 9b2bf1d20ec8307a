"""Corrections, each its own function: what it changes of the moment of inertia, how surely, and whether it was applied.

`relative` is the change that the correction makes, over the moment as it comes out with it. Every one is listed in the
result, those of nothing included; `moment_of_inertia` leaves out those that are named to it.
"""

from __future__ import annotations

import math
from collections.abc import Mapping

from ..records import Correction, Quantity, Rig
from .air import COEFFICIENT_LIMITS, DENSITY_LIMITS, added_moment, largest_added_moment
from .suspension import Model
from .unequal_strings import unequal_part

SCALE_AIR = 1.2 / 8000.0  # OIML D 28: scales are adjusted with weights of 8000 kg/m³ in air of 1.2 kg/m³
ON_STRINGS = ("bifilar", "trifilar")
STRING_INPUTS = {
    "string twist": ("string_stiffness",),
    "string mass": ("string_mass",),
    "string bending": ("string_rigidity", "string_clamping"),
}
_ABSENT = {
    "string twist": "neither string_stiffness nor material and diameter given; thread adds 0.01 % or less, wire far more",
    "string mass": "string_mass not given",
    "string bending": "string_diameter or string_material not given; thread bends for nothing, wire ends do not",
}
_PRESENT = {
    "string twist": "adds to the restoring torque",
    "string mass": "half of it hangs on the article; its own moment is taken off",
    "string bending": "bent ends shorten the strings, by an amount between hinged and clamped ends",
}


def amplitude_correction(shift: float | None, *, leave_out: bool = False) -> Correction:
    """What the finite swing would have cost: T in the clip is longer by `shift`, and I goes with T²."""
    if shift is None:
        return Correction(
            "amplitude", 0.0, 0.0, False, "the amplitude is not known; its doubt is in the period"
        )
    relative = (1.0 + shift) ** -2 - 1.0
    if leave_out:
        return Correction(
            "amplitude", relative, 0.0, False, "left out on request: the clip's average period is used"
        )
    return Correction(
        "amplitude", relative, 0.0, True, "the period of small swings is used, not the clip's average"
    )


def damping_correction(damping_ratio: float | None, *, leave_out: bool = False) -> Correction:
    """T_d = T_0/√(1 − ζ²), so that I without it would be too large by ζ² (viscous damping)."""
    if damping_ratio is None:
        return Correction("damping", 0.0, 0.0, False, "the damping is not known")
    if leave_out:
        return Correction(
            "damping", -(damping_ratio**2), 0.0, False, "left out on request: the damped period is used"
        )
    return Correction("damping", -(damping_ratio**2), 0.0, True, "the undamped period is used")


def string_correction(
    name: str, model: Model, inputs: Mapping[str, Quantity], *, leave_out: bool = False
) -> Correction:
    """What the strings' own twist, mass or bending changes: the formula with and without it.

    Parameters
    ----------
    name : str
        One of `STRING_INPUTS`.
    model : Model
    inputs : mapping of name to Quantity
        With the period, and with the strings' own inputs even where the correction is left out.
    """
    keys = [key for key in STRING_INPUTS[name] if key in inputs]
    if not keys:
        return Correction(name, 0.0, 0.0, False, _ABSENT[name])
    x = {key: quantity.value for key, quantity in inputs.items()}
    whole = float(model.moment(x))
    relative = 1.0 - float(model.moment({key: v for key, v in x.items() if key not in keys})) / whole
    moved = [float(model.moment({**x, key: x[key] + inputs[key].u})) - whole for key in keys]
    reason = "left out on request" if leave_out else _PRESENT[name]
    return Correction(name, relative, math.hypot(*moved) / whole, not leave_out, reason)


def buoyancy_correction(rig: Rig, *, apply: bool = False) -> Correction:
    """On strings buoyancy cancels: gravity's pull less buoyancy is what a scale reads.

    A scale adjusted with steel weights in air shows M where the pull is M (1 − 1.2/8000) g, whatever the article's
    density: 0.015 %. It is applied on request, so that the plain formula stays the plain formula.
    """
    if rig.suspension.kind not in ON_STRINGS:
        return Correction(
            "buoyancy",
            0.0,
            0.0,
            False,
            "a wire's stiffness knows no weight"
            if rig.suspension.kind == "torsion-wire"
            else "cancels in the pull; m l² takes the true mass, 0.1 % over the scale's reading at the density of water, "
            "4 % for foam: weigh dense articles, or use strings",
        )
    return Correction(
        "buoyancy",
        -SCALE_AIR,
        SCALE_AIR / 10.0,
        apply,
        "cancels on strings: the scale's reading is the pull that turns the article back; what is left is the scale's own "
        f"adjustment in air, 0.015 %, which is {'' if apply else 'not '}applied",
    )


def air_correction(rig: Rig, moment: float, *, leave_out: bool = False) -> Correction:
    """Air carried along swings as well and is no part of the article: taken off where the rig says the shape.

    Where it does not, the reason bounds it.
    """
    if rig.air is None:
        return Correction("air", 0.0, 0.0, False, _air_bound(rig, moment))
    part = added_moment(rig.air) / moment
    coefficient = 1.0 if rig.air.shape == "other" else COEFFICIENT_LIMITS
    density = DENSITY_LIMITS if rig.air.density is None else rig.air.density.relative_u * math.sqrt(3.0)
    reason = (
        f"air carried along by a {rig.air.shape}"
        if part
        else "edge on or none: nothing carried along to first order"
    )
    if leave_out:
        reason = f"left out on request: {reason}"
    u = part * math.hypot(coefficient, density) / math.sqrt(3.0)
    return Correction("air", -part, u, part != 0.0 and not leave_out, reason)


def tilt_correction(rig: Rig, *, leave_out: bool = False) -> Correction:
    """An article hung out of level by θ is swung about another axis of its own: I cos²θ + I⊥ sin²θ.

    The moment I⊥ about the axis that it leans towards is not known; from nothing to twice I is allowed for, which makes
    sin²θ of I as limits. Nothing is added where the rig does not say how far out of level it may be.
    """
    tilt = rig.suspension.dimensions.get("tilt")
    if tilt is None:
        return Correction(
            "tilt",
            0.0,
            0.0,
            False,
            "the moment is about the vertical as it hung; 2° out of level is 0.1 % of the difference of the moments",
        )
    u = math.sin(tilt.value) ** 2 / math.sqrt(3.0)
    reason = f"{math.degrees(tilt.value):.2g}° out of level at most: in the doubt, as limits of sin²θ"
    return Correction("tilt", 0.0, u, not leave_out, "left out on request" if leave_out else reason)


def unequal_strings_correction(rig: Rig, *, leave_out: bool = False) -> Correction:
    """Strings of slightly unequal length: which is the longer is not said, so that it goes into the doubt."""
    part = unequal_part(rig)
    if part == 0.0:
        return Correction("unequal strings", 0.0, 0.0, False, "length_difference not given")
    reason = (
        "left out on request" if leave_out else "either string may be the longer: in the doubt, as limits"
    )
    return Correction("unequal strings", 0.0, part / math.sqrt(3.0), not leave_out, reason)


def _air_bound(rig: Rig, moment: float) -> str:
    mass = rig.article.mass
    if mass is None or not moment > 0.0:
        return "[air] not given: no air was taken off; light broad articles need it"
    part = largest_added_moment(math.sqrt(moment / mass.value)) / moment
    most = f"{100.0 * part:.1g} %" if part < 0.1 else f"{100.0 * part:.0f} %"
    return (
        "[air] not given: no air was taken off. A square board of this mass and moment that fans the air would carry "
        f"{most}; anything slender or edgewise far less"
    )
