"""Sway seen in the same clip, held against the moment: k = D/2 · T_yaw/T_sway needs neither length, gravity nor mass."""

from __future__ import annotations

import math

from ..records import Doubt, Quantity, Rig

SWAY_TOLERANCE = 3.0  # the two radii of gyration should agree within this many standard uncertainties
SWAY_RELATIVE_U = 5e-3  # of a sway period that was not excited on purpose: a few faint cycles, our judgment


def moment_by_sway(rig: Rig, period: Quantity, sway_period_s: float) -> Quantity | None:
    """Moment of inertia by yaw and sway along the line of two parallel strings, kg m²; None for other suspensions.

    I = m (D²/4 − e²) (T_yaw/T_sway)² (docs/theory.md, Other modes of the bifilar). The yaw period and the mass are the
    ones that the moment itself uses.
    """
    given, mass = rig.suspension.dimensions, rig.article.mass
    if rig.suspension.kind != "bifilar" or "lower_spacing" in given or mass is None:
        return None
    spacing, offset = given["upper_spacing"], given.get("centre_offset")
    arm = 0.25 * spacing.value**2 - (0.0 if offset is None else offset.value**2)
    value = mass.value * arm * (period.value / sway_period_s) ** 2
    by_spacing = 0.5 * spacing.value * spacing.u / arm
    by_offset = 0.0 if offset is None else 2.0 * offset.value * offset.u / arm
    relative = math.hypot(
        mass.relative_u, by_spacing, by_offset, 2.0 * SWAY_RELATIVE_U, 2.0 * period.relative_u
    )
    return Quantity(value, relative * value, "kg m^2")


def check_sway(
    rig: Rig, moment: Quantity, period: Quantity, sway_period_s: float | None
) -> tuple[tuple[str, ...], tuple[Doubt, ...]]:
    """(one line that states the comparison, a doubt where the two disagree)."""
    by_sway = None if sway_period_s is None else moment_by_sway(rig, period, sway_period_s)
    if by_sway is None:
        return (), ()
    difference = by_sway.value / moment.value - 1.0
    # Mass, spacing and period enter both; leaving that out of account errs on the side of agreement.
    doubt = SWAY_TOLERANCE * math.hypot(by_sway.u, moment.u) / moment.value
    said = f"{by_sway.value:.4g} kg m² ({100 * difference:+.1f} %, with a doubt of {100 * doubt:.1f} %)"
    if abs(difference) <= doubt:
        return (f"Sway in the same clip, which needs neither length nor gravity, agrees: {said}.",), ()
    return (), (
        Doubt(
            "sway-disagrees",
            f"The sway seen in the clip gives another moment: {said}.",
            "Check string length, spacing and mass; measure the spacing at the knots.",
        ),
    )
