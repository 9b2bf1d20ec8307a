"""The plan's page and figures."""

from __future__ import annotations

import re
from typing import Any

import numpy as np
import pytest

from swingtrack.inertia.planning import Goal, plan_rig
from swingtrack.records import Quantity
from swingtrack.report import plan_figures, plan_text
from swingtrack.report.figure_plan import draw_clip_length, draw_reach
from swingtrack.report.look import new_figure


@pytest.fixture(scope="module")
def plan() -> Any:
    return plan_rig(
        Goal(
            name="touring paddle 12",
            mass=Quantity(0.912, 3e-4, "kg"),
            moment_kg_m2=0.113,
            size_m=1.2,
            room_height_m=2.2,
            room_width_m=1.5,
            wanted_relative=0.005,
            tape_limit_m=5e-4,
            scale_limit_kg=5e-4,
            gravity=Quantity(9.8094, 1.2e-4, "m/s^2"),
            string_load_limit_n=None,
            rate_hz=60.0,
            width_px=1920,
            height_px=1080,
            longest_clip_s=90.0,
        )
    )


def test_page_says_what_to_build_and_film(plan: Any) -> None:
    text = plan_text(plan)
    reached = float(re.findall(r"known to ([\d.]+) %", text)[0]) / 100.0
    assert reached == pytest.approx(plan.expected.expanded / plan.expected.moment.value, abs=5e-5)
    length = float(re.findall(r"length ([\d.]+) mm", text)[0]) / 1e3
    assert length == pytest.approx(plan.rig.suspension.dimensions["length"].value, abs=6e-4)
    assert len(text.splitlines()) <= 25


def test_figures_show_the_plan_where_it_is_allowed(plan: Any) -> None:
    ax = draw_reach(new_figure().subplots(), plan)
    mark = next(line for line in ax.lines if line.get_label() == "the plan")
    x, y = mark.get_xdata()[0] / 1e3, mark.get_ydata()[0] / 1e3
    row, column = (int(np.argmin(np.abs(a - v))) for a, v in ((plan.length_m, y), (plan.spacing_m, x)))
    assert plan.allowed[row, column]
    assert (ax.get_xlabel(), ax.get_ylabel()) == ("string spacing, mm", "string length, mm")


def test_clip_length_is_drawn_in_parts_per_million(plan: Any) -> None:
    ax = draw_clip_length(new_figure().subplots(), plan)
    line = next(line for line in ax.lines if "expected" in str(line.get_label()))
    assert line.get_ydata() == pytest.approx(1e6 * plan.period_relative_u)
    assert ax.get_ylim()[0] == 0.0


def test_files(plan: Any) -> None:
    files = plan_figures(plan)
    assert sorted(files) == ["plan-clip.png", "plan-clip.svg", "plan-rig.png", "plan-rig.svg"]
    assert files == plan_figures(plan)
