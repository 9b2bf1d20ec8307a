"""Which input to measure better, and what that would gain."""

from __future__ import annotations

import math

from ..records import BudgetLine, MonteCarlo, Quantity, Rig
from .corrections import ON_STRINGS, SCALE_AIR

WORTH_IMPROVING = 0.10  # share of the variance below which measuring an input better gains next to nothing
NONLINEAR = 0.1  # relative difference of the two standard uncertainties from which the linear law is doubted
SHIFTED = 0.25  # shift of the mean over u from which it is


def advise(lines: tuple[BudgetLine, ...]) -> tuple[str, ...]:
    """Which inputs to measure better, the most worthwhile first, and what halving each doubt would gain."""
    ranked = sorted((line for line in lines if line.share >= WORTH_IMPROVING), key=lambda line: -line.share)
    said = []
    for line in ranked[:3]:
        name = line.input.replace("_", " ")
        said.append(
            f"{name} makes {100 * line.share:.0f} % of the variance: halving its doubt takes "
            f"{100 * gain_of_halving(line.share):.0f} % off the uncertainty."
        )
    return tuple(said)


def gain_of_halving(share: float) -> float:
    """How much smaller u becomes, relative, when an independent input's u is halved: 1 − √(1 − ¾ share)."""
    return 1.0 - math.sqrt(1.0 - 0.75 * min(max(share, 0.0), 1.0))


def advise_on_scale(rig: Rig, moment: Quantity) -> tuple[str, ...]:
    """A word on the scale's own adjustment in air, where 0.015 % begins to count."""
    if rig.suspension.kind not in ON_STRINGS or moment.u == 0.0 or moment.relative_u > 3.0 * SCALE_AIR:
        return ()
    return (
        "At this uncertainty the scale's adjustment in air counts: write the mass as 0.99985 of its reading "
        "(steel weights of 8000 kg/m³ in air of 1.2 kg/m³).",
    )


def advise_on_linearity(moment: Quantity, drawn: MonteCarlo) -> tuple[str, ...]:
    """A word where the linear law misses what the distributions do."""
    if moment.u == 0.0 or math.isnan(drawn.u):
        return ()
    if abs(drawn.u / moment.u - 1.0) <= NONLINEAR and abs(drawn.value - moment.value) <= SHIFTED * moment.u:
        return ()
    low, high = drawn.interval_95
    return (
        f"The formula bends within these doubts: Monte Carlo gives u = {drawn.u:.3g} kg m² where the linear law gives "
        f"{moment.u:.3g}; take its interval, {low:.4g} to {high:.4g} kg m².",
    )
