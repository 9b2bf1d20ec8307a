"""The plan as a terminal page and as figures."""

from __future__ import annotations

from typing import Any

import numpy as np

from .look import DATA, FIT, HALF, INK, SHADE, WIDE, new_figure, plain, save
from .text import doubt_lines, table

DEGREES = 180.0 / np.pi


def plan_text(plan: Any) -> str:
    """What rig to build, what clip to film, what to expect."""
    expected, given = plan.expected, plan.rig.suspension.dimensions
    reached = 100.0 * expected.k * expected.moment.relative_u
    ranked = sorted(expected.budget, key=lambda line: -line.share)[:3]
    rows = [
        (
            "expect",
            f"moment known to {reached:.2g} % (k = {expected.k:.2f}); "
            + ("goal met" if plan.met else plan.standing_in_the_way),
        ),
        (
            "doubt comes from",
            ", ".join(f"{line.input.replace('_', ' ')} {100 * line.share:.0f} %" for line in ranked),
        ),
        (
            "strings",
            f"two, {given['length'].value:.3f} m long, {given['upper_spacing'].value:.3f} m apart above and below",
        ),
        ("periods", f"swing {plan.period_s:.2f} s, sway {plan.sway_period_s:.2f} s"),
        ("start at", f"{plan.amplitude_rad * DEGREES:.0f}° to either side"),
        ("clip", f"{plan.clip_s:.0f} s ({plan.clip_s / plan.period_s:.0f} swings)"),
        ("camera", f"{plan.distance_m:.2f} m above, looking down along the swing axis"),
        (
            "dot",
            f"{1e3 * plan.dot_diameter_m:.0f} mm across, {plan.dot_radius_m:.3f} m from the axis: {plan.dot_diameter_px:.0f} px in the picture",
        ),
    ]
    return table(rows) + "\n" + doubt_lines(plan.doubts, most=10)


def plan_figures(plan: Any) -> dict[str, bytes]:
    """u(I) over spacing and length with what is not allowed, and u(T) over the length of the clip."""
    figure = new_figure(WIDE)
    draw_uncertainty(figure.subplots(), plan)
    other = new_figure(HALF)
    draw_clip_length(other.subplots(), plan)
    return {
        f"{name}.{kind}": save(drawn, kind)
        for name, drawn in (("plan-rig", figure), ("plan-clip", other))
        for kind in ("png", "svg")
    }


def draw_uncertainty(ax: Any, plan: Any) -> Any:
    """Contours of the relative expanded uncertainty; grey where a rig can't be hung or is too near to sway."""
    ax.contourf(
        plan.spacing_m, plan.length_m, (~plan.allowed).astype(float), levels=[0.5, 1.5], colors=[SHADE]
    )
    percent = 100.0 * plan.relative_u
    low, high = np.nanmin(percent), np.nanpercentile(percent, 80)
    if high > low:
        lines = ax.contour(
            plan.spacing_m,
            plan.length_m,
            percent,
            levels=np.geomspace(low * 1.02, high, 6),
            colors=DATA,
            linewidths=0.9,
        )
        ax.clabel(lines, fmt="%.2g %%", fontsize=7)
    given = plan.rig.suspension.dimensions
    ax.plot(given["upper_spacing"].value, given["length"].value, "o", color=FIT, ms=8)
    ax.annotate("the plan", (given["upper_spacing"].value, given["length"].value), xytext=(-8, -14), textcoords="offset points",
                ha="right", color=INK, fontsize=8)  # fmt: skip
    return plain(ax, "string spacing, m", "string length, m")


def draw_clip_length(ax: Any, plan: Any) -> Any:
    """Relative standard uncertainty of the period over the length of the clip."""
    ax.semilogy(plan.clip_lengths_s, plan.period_relative_u, "-", color=DATA)
    ax.axvline(plan.clip_s, color=FIT, lw=1.0)
    return plain(ax, "length of the clip, s", "u(T)/T")
