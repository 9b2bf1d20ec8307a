"""The plan of a rig and its clip as a terminal page and as figures.

The record, `Plan`, comes from inertia/planning.py, which this folder does not import.
"""

from __future__ import annotations

from typing import Any

from .layout import Rows, doubt_lines, table
from .rounding import bare, percent, show
from .text import causes
from .units import shown_in


def plan_text(plan: Any) -> str:
    """What rig to build, what clip to film, what to expect."""
    expected, given = plan.expected, plan.rig.suspension.dimensions
    reached = percent(expected.k * expected.moment.relative_u, decimals=2)
    verdict = "goal met" if plan.met else plan.standing_in_the_way
    rows: Rows = [
        ("expect", f"moment known to {reached} (k = {expected.k:.2f}, about 95 %); {verdict}"),
        ("", show(expected.moment, "kg m²", k=expected.k)),
        ("doubt comes from", causes(expected.budget)),
        ("strings", ", ".join(f"{key.replace('_', ' ')} {show_limits(q)}" for key, q in given.items())),
        (
            "periods",
            f"swing {bare(plan.period_s, 3, 's')}, sway {bare(plan.sway_period_s, 3, 's')}",
        ),
        ("start at", f"{bare(plan.amplitude_rad * shown_in('rad', 1.0)[1], 1)}° to either side"),
        (
            "clip",
            f"{bare(plan.clip_s, 2, 's')}, some {plan.clip_s / plan.period_s:.0f} swings",
        ),
        ("camera", f"{bare(plan.distance_m, 2, 'm')} away, looking along the swing axis"),
        (
            "dot",
            f"{bare(1e3 * plan.dot_diameter_m, 2, 'mm')} across, {bare(1e3 * plan.dot_radius_m, 3, 'mm')} from the axis: "
            f"{bare(plan.dot_diameter_px, 2, 'px')} in the picture",
        ),
    ]
    return table(rows) + "\n" + doubt_lines(plan.doubts, most=10)


def show_limits(length: Any) -> str:
    """A length to be built, in mm, without its uncertainty: that comes with measuring it."""
    return bare(1e3 * length.value, 4, "mm")


def plan_figures(plan: Any) -> dict[str, bytes]:
    """Files plan-rig and plan-clip, PNG and SVG: u(I) over spacing and length, u(T) over the length of the clip."""
    from .figure_plan import plan_clip_figure, plan_rig_figure
    from .look import our_settings, save

    with our_settings():
        drawn = {"plan-rig": plan_rig_figure(plan), "plan-clip": plan_clip_figure(plan)}
    return {f"{name}.{kind}": save(figure, kind) for name, figure in drawn.items() for kind in ("png", "svg")}
