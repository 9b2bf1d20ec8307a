"""From a period to the moment of inertia, with its budget, corrections and advice: the door of stage 3."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from typing import Any

from ..errors import BadInput, BadRig
from ..records import Correction, Doubt, ExpectedMode, Inertia, Quantity, Rig
from . import corrections as c
from .advice import WORTH_IMPROVING, advise, advise_on_linearity, advise_on_scale
from .budget import Propagated, propagate
from .knife_edge import KNIFE_EDGE
from .monte_carlo import monte_carlo_check
from .suspension import Model, model_of
from .sway_check import check_sway

__all__ = ["CORRECTIONS", "SwingFacts", "advise", "expected_modes", "moment_of_inertia"]

DEFAULT_CLOCK_U = 50e-6 / math.sqrt(3.0)  # a phone's clock within 50 ppm, as limits
COARSE = 0.05  # relative standard uncertainty from which a moment is called coarse: our judgment
CORRECTIONS = (
    "amplitude",
    "damping",
    "string twist",
    "string mass",
    "string bending",
    "unequal strings",
    "buoyancy",
    "air",
    "tilt",
)


@dataclass(frozen=True)
class SwingFacts:
    """What the clip says beside the period, and which corrections are wanted.

    Parameters
    ----------
    clock_relative_u : float
        Relative standard uncertainty of the clock.
    amplitude_rad : float or None
        Half swing at the start of the fitted part.
    amplitude_shift : float or None
        How much longer the clip's average period is than the small-swing one, relative.
    damping_ratio : float or None
    sway_period_s : float or None
        Period of sway along the line of the strings, seen in the same clip.
    leave_out : tuple of str
        Names of `CORRECTIONS` that are not to be applied; they stay in the list, as left out.
    scale_in_air : bool
        Whether the mass is a scale's bare reading, to be lowered by the 0.015 % that a scale adjusted in air shows too much
        (`corrections.buoyancy_correction`).
    """

    clock_relative_u: float = DEFAULT_CLOCK_U
    amplitude_rad: float | None = None
    amplitude_shift: float | None = None
    damping_ratio: float | None = None
    sway_period_s: float | None = None
    leave_out: tuple[str, ...] = ()
    scale_in_air: bool = False


def moment_of_inertia(rig: Rig, period: Quantity, *, facts: SwingFacts | None = None) -> Inertia:
    """Moment of inertia of the article from the period of small undamped swings.

    Parameters
    ----------
    rig : Rig
    period : Quantity
        s, with its standard uncertainty and degrees of freedom; the clock's is added from `facts`.
    facts : SwingFacts, optional

    Returns
    -------
    Inertia
        About the axis that the suspension turns; for a knife edge about the centre of mass, with the moment about
        the edge beside it.

    Raises
    ------
    BadRig
        The rig can't be hung as described, or period and dimensions leave no positive moment.

    Examples
    --------
    >>> from swingtrack.records import Article, Suspension
    >>> given = {"length": Quantity(1.0, 0.0, "m"), "upper_spacing": Quantity(0.3, 0.0, "m")}
    >>> rig = Rig(
    ...     Article("paddle", Quantity(0.5, 0.0, "kg")),
    ...     Suspension("bifilar", given),
    ...     gravity=Quantity(9.81, 0.0, "m/s^2"),
    ... )
    >>> round(moment_of_inertia(rig, Quantity(1.2, 0.0, "s")).moment.value, 9)
    0.004025541
    """
    facts = facts or SwingFacts()
    _check_names(facts.leave_out)
    if not (math.isfinite(period.value) and period.value > 0.0):
        raise BadRig(f"A period of {period.value:g} s was given.", "Needed: a period over zero.")
    model = model_of(rig.suspension.kind)
    doubts = list(model.check(rig))
    full = model.inputs(rig) | {"period": _wanted_period(period, facts)}
    dropped = {key for name in facts.leave_out for key in c.STRING_INPUTS.get(name, ())}
    inputs = {key: quantity for key, quantity in full.items() if key not in dropped}
    x = {key: quantity.value for key, quantity in inputs.items()}
    plain = float(model.moment(x))
    doubts += model.judge(x, plain)
    if not plain > 0.0:
        raise BadRig(
            f"Period {period.value:.6g} s and the distances give a moment of inertia of {plain:.3g} kg m².",
            "Needed: a positive one; the period is too short for these distances.",
            "Check the distances, the period and their units.",
        )
    corrected = _corrections(rig, full, plain, facts)
    inputs |= _further_inputs(corrected, plain, facts)
    function = _corrected(model.moment)
    result = propagate(function, inputs, "kg m^2")
    if not result.quantity.value > 0.0:
        raise BadRig(
            f"The air said to swing along would be more than all that swings ({plain:.3g} kg m²).",
            "Needed: an [air] shape of the size of the article.",
            "Check its dimensions and their units.",
        )
    edge = None
    if rig.suspension.kind == "knife-edge":
        edge = propagate(_corrected(KNIFE_EDGE.moment_about_edge), inputs, "kg m^2").quantity
    drawn = monte_carlo_check(function, inputs, result.quantity)
    agrees, disagrees = check_sway(rig, result.quantity, inputs["period"], facts.sway_period_s)
    return Inertia(
        moment=result.quantity,
        k=result.k,
        about=model.about,
        radius_of_gyration=_gyration(inputs, function),
        budget=result.lines,
        corrections=corrected,
        monte_carlo=drawn,
        moment_about_edge=edge,
        advice=(
            *advise(result.lines),
            *advise_on_scale(rig, result.quantity),
            *advise_on_linearity(result.quantity, drawn),
            *agrees,
        ),
        doubts=(*doubts, *_doubts(rig, model, result), *disagrees),
    )


def expected_modes(rig: Rig, period_s: float | None = None) -> tuple[ExpectedMode, ...]:
    """Frequencies that the rig predicts for motions other than the swing; sway is the string length's own."""
    return model_of(rig.suspension.kind).modes(rig)


def _check_names(leave_out: tuple[str, ...]) -> None:
    unknown = [name for name in leave_out if name not in CORRECTIONS]
    if unknown:
        raise BadInput(
            f"There is no correction {unknown[0]!r} to leave out.",
            f"Needed: any of {', '.join(CORRECTIONS)}.",
        )


def _wanted_period(period: Quantity, facts: SwingFacts) -> Quantity:
    """The period that the formula is to take: the clip's own where amplitude or damping are left uncorrected."""
    stretch = 1.0
    if "amplitude" in facts.leave_out and facts.amplitude_shift is not None:
        stretch *= 1.0 + facts.amplitude_shift
    if "damping" in facts.leave_out and facts.damping_ratio is not None:
        stretch /= math.sqrt(1.0 - facts.damping_ratio**2)
    return replace(period, value=period.value * stretch)


def _further_inputs(
    corrected: tuple[Correction, ...], plain: float, facts: SwingFacts
) -> dict[str, Quantity]:
    """Inputs beside those of the suspension: the clock, the air in kg m², and what changes the moment relatively."""
    found = {}
    if facts.clock_relative_u > 0.0:
        found["clock"] = Quantity(0.0, facts.clock_relative_u, "1", shape="rectangular")
    by_name = {item.name: item for item in corrected if item.applied}
    if "air" in by_name:
        air = by_name["air"]
        found["air"] = Quantity(-air.relative * plain, air.u * plain, "kg m^2", shape="rectangular")
    for name, key in (("buoyancy", "scale_in_air"), ("tilt", "tilt"), ("unequal strings", "unequal_strings")):
        if name in by_name:
            found[key] = Quantity(by_name[name].relative, by_name[name].u, "1", shape="rectangular")
    return found


def _corrected(moment: Callable[[Mapping[str, Any]], Any]) -> Callable[[Mapping[str, Any]], Any]:
    """The suspension's formula with the clock's error in the period, less the air, times what is relative."""

    def function(x: Mapping[str, Any]) -> Any:
        stretched = {**x, "period": x["period"] * (1.0 + x["clock"])} if "clock" in x else x
        found = moment(stretched)
        if "air" in x:
            found = found - x["air"]
        for key in ("scale_in_air", "tilt", "unequal_strings"):
            if key in x:
                found = found * (1.0 + x[key])
        return found

    return function


def _gyration(
    inputs: Mapping[str, Quantity], function: Callable[[Mapping[str, Any]], Any]
) -> Quantity | None:
    """k = √(I/m), with the mass in both counted once; None without a mass."""
    if "mass" not in inputs:
        return None
    return propagate(lambda x: (function(x) / x["mass"]) ** 0.5, inputs, "m").quantity


def _corrections(
    rig: Rig, inputs: Mapping[str, Quantity], moment: float, facts: SwingFacts
) -> tuple[Correction, ...]:
    """Every correction, applied or not, zero ones included."""
    out = facts.leave_out
    found = [
        c.amplitude_correction(facts.amplitude_shift, leave_out="amplitude" in out),
        c.damping_correction(facts.damping_ratio, leave_out="damping" in out),
    ]
    if rig.suspension.kind in c.ON_STRINGS:
        model = model_of(rig.suspension.kind)
        found += [c.string_correction(name, model, inputs, leave_out=name in out) for name in c.STRING_INPUTS]
    if rig.suspension.kind == "bifilar":
        found.append(c.unequal_strings_correction(rig, leave_out="unequal strings" in out))
    return (
        *found,
        c.buoyancy_correction(rig, apply=facts.scale_in_air and "buoyancy" not in out),
        c.air_correction(rig, moment, leave_out="air" in out),
        c.tilt_correction(rig, leave_out="tilt" in out),
    )


def _doubts(rig: Rig, model: Model, result: Propagated) -> list[Doubt]:
    doubts = []
    unstated = [key for key, q in model.inputs(rig).items() if not q.stated and key != "gravity"]
    if unstated:
        doubts.append(
            Doubt(
                "uncertainty-assumed",
                f"No ± was given for {', '.join(key.replace('_', ' ') for key in unstated)}: half a unit of the last digit was taken.",
                "Write what your tape or scale can really do, such as ± 0.5 mm.",
            )
        )
    shares = {line.input: line.share for line in result.lines}
    nowhere = rig.gravity is None and rig.latitude is None
    if nowhere and shares.get("gravity", 0.0) >= WORTH_IMPROVING:
        doubts.append(
            Doubt(
                "gravity-unknown",
                f"No place was given: gravity's whole range on Earth makes {100 * shares['gravity']:.0f} % of the variance.",
                'Write the latitude in [place], such as latitude = "51.5 deg"; any map has it.',
            )
        )
    if result.quantity.relative_u > COARSE:
        largest = max(result.lines, key=lambda line: line.share)
        doubts.append(
            Doubt(
                "inertia-coarse",
                f"The moment is known to {200 * result.quantity.relative_u:.0f} % only; {largest.input.replace('_', ' ')} dominates.",
                "Measure that better first.",
            )
        )
    return doubts
