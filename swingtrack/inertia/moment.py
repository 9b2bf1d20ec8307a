"""From a period to the moment of inertia, with its budget, corrections and advice: the door of stage 3."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

from ..errors import BadRig
from ..records import BudgetLine, Correction, Doubt, ExpectedMode, Inertia, Quantity, Rig
from . import corrections as c
from .budget import Propagated, propagate
from .knife_edge import KNIFE_EDGE
from .monte_carlo import monte_carlo_check
from .suspension import Model, model_of

DEFAULT_CLOCK_U = 50e-6 / math.sqrt(3.0)  # a phone's clock within 50 ppm, as limits
WORTH_IMPROVING = 0.10  # share of the variance below which measuring an input better gains next to nothing
SWAY_TOLERANCE = 3.0  # the two radii of gyration should agree within this many standard uncertainties


@dataclass(frozen=True)
class SwingFacts:
    """What the clip says beside the period.

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
    """

    clock_relative_u: float = DEFAULT_CLOCK_U
    amplitude_rad: float | None = None
    amplitude_shift: float | None = None
    damping_ratio: float | None = None
    sway_period_s: float | None = None


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
    """
    facts = facts or SwingFacts()
    if not (math.isfinite(period.value) and period.value > 0.0):
        raise BadRig(f"A period of {period.value:g} s was given.", "Needed: a period over zero.")
    model = model_of(rig.suspension.kind)
    doubts = list(model.check(rig))
    inputs = model.inputs(rig) | {"period": period}
    if facts.clock_relative_u > 0.0:
        inputs["clock"] = Quantity(0.0, facts.clock_relative_u, "1", shape="rectangular")
    plain = float(_with_clock(model.moment)({key: q.value for key, q in inputs.items()}))
    if not plain > 0.0:
        raise BadRig(
            f"Period {period.value:.6g} s and the distances give a moment of inertia of {plain:.3g} kg m².",
            "Needed: a positive one; the period is too short for these distances.",
            "Check the distances, the period and their units.",
        )
    corrected = _corrections(rig, plain, period.value, facts)
    air = next(item for item in corrected if item.name == "air")
    if air.relative:
        inputs["air"] = Quantity(-air.relative * plain, air.u * plain, "kg m^2", shape="rectangular")
    function = _with_air(_with_clock(model.moment))
    result = propagate(function, inputs, "kg m^2")
    edge = None
    if rig.suspension.kind == "knife-edge":
        edge = propagate(_with_clock(KNIFE_EDGE.moment_about_edge), inputs, "kg m^2").quantity
    doubts += _doubts(rig, result, facts)
    return Inertia(
        moment=result.quantity,
        k=result.k,
        about=model.about,
        radius_of_gyration=_gyration(model, inputs, function),
        budget=result.lines,
        corrections=corrected,
        monte_carlo=monte_carlo_check(function, inputs, result.quantity),
        moment_about_edge=edge,
        advice=advise(result.lines),
        doubts=tuple(doubts),
    )


def expected_modes(rig: Rig, period_s: float | None = None) -> tuple[ExpectedMode, ...]:
    """Frequencies that the rig predicts for motions other than the swing; sway is the string length's own."""
    return model_of(rig.suspension.kind).modes(rig)


def advise(lines: tuple[BudgetLine, ...]) -> tuple[str, ...]:
    """Which inputs to measure better, the most worthwhile first, and what halving each doubt would gain."""
    ranked = sorted((line for line in lines if line.share >= WORTH_IMPROVING), key=lambda line: -line.share)
    said = []
    for line in ranked[:3]:
        gain = 1.0 - math.sqrt(1.0 - 0.75 * min(line.share, 1.0))
        name = line.input.replace("_", " ")
        said.append(
            f"{name} makes {100 * line.share:.0f} % of the variance: halving its doubt takes {100 * gain:.0f} % off the uncertainty."
        )
    return tuple(said)


def _with_clock(moment: Callable[[Mapping[str, Any]], Any]) -> Callable[[Mapping[str, Any]], Any]:
    """The clock's relative error stretches every period alike."""

    def function(x: Mapping[str, Any]) -> Any:
        stretch = 1.0 + x["clock"] if "clock" in x else 1.0
        return moment({**x, "period": x["period"] * stretch})

    return function


def _with_air(moment: Callable[[Mapping[str, Any]], Any]) -> Callable[[Mapping[str, Any]], Any]:
    def function(x: Mapping[str, Any]) -> Any:
        return moment(x) - x["air"] if "air" in x else moment(x)

    return function


def _gyration(
    model: Model, inputs: Mapping[str, Quantity], function: Callable[[Mapping[str, Any]], Any]
) -> Quantity | None:
    """k = √(I/m), with the mass in both counted once; None without a mass."""
    if "mass" not in inputs:
        return None
    return propagate(lambda x: (function(x) / x["mass"]) ** 0.5, inputs, "m").quantity


def _corrections(rig: Rig, moment: float, period_s: float, facts: SwingFacts) -> tuple[Correction, ...]:
    """Every correction, applied or not, zero ones included."""
    found = [c.amplitude_correction(facts.amplitude_shift), c.damping_correction(facts.damping_ratio)]
    if rig.suspension.kind in c.ON_STRINGS:
        found += [c.string_twist_correction(rig, moment, period_s), c.string_mass_correction(rig)]
    return (*found, c.buoyancy_correction(rig), c.air_correction(rig, moment), c.tilt_correction())


def _doubts(rig: Rig, result: Propagated, facts: SwingFacts) -> list[Doubt]:
    doubts = []
    unstated = [
        key
        for key, q in model_of(rig.suspension.kind).inputs(rig).items()
        if not q.stated and key != "gravity"
    ]
    if unstated:
        doubts.append(
            Doubt(
                "uncertainty-assumed",
                f"No ± was given for {', '.join(key.replace('_', ' ') for key in unstated)}: half a unit of the last digit was taken.",
                "Write what your tape or scale can really do, such as ± 0.5 mm.",
            )
        )
    largest = max(result.lines, key=lambda line: line.share)
    if result.quantity.relative_u > 0.05:
        doubts.append(
            Doubt(
                "inertia-coarse",
                f"The moment is known to {200 * result.quantity.relative_u:.0f} % only; {largest.input.replace('_', ' ')} dominates.",
                "Measure that better first.",
            )
        )
    if rig.suspension.kind == "bifilar" and facts.sway_period_s is not None:
        doubts += _sway_check(rig, result, facts.sway_period_s)
    return doubts


def _sway_check(rig: Rig, result: Propagated, sway_period_s: float) -> list[Doubt]:
    """k = (D/2) T_yaw/T_sway needs neither length, gravity nor mass; it should agree (docs/theory.md)."""
    lines = {line.input: line for line in result.lines}
    if "lower_spacing" in lines or "centre_offset" in lines:
        return []
    spacing, period, mass = lines["upper_spacing"].value, lines["period"].value, lines["mass"].value
    by_sway = mass * (0.5 * spacing * period / sway_period_s) ** 2
    difference = by_sway / result.quantity.value - 1.0
    if abs(difference) <= SWAY_TOLERANCE * max(result.quantity.relative_u, 0.01):
        return []
    return [
        Doubt(
            "sway-disagrees",
            f"The sway seen in the clip gives a moment {100 * difference:+.1f} % off this one.",
            "Check string length, spacing and mass; measure the spacing at the knots.",
        )
    ]
