"""Plans keep out of the forbidden band, under the load and in the room, and say what stands in the way."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from swingtrack.errors import BadInput
from swingtrack.goal import read_goal
from swingtrack.inertia.planning import PERIOD_S, SWAY_BAND, Goal, period_relative_u, plan_rig
from swingtrack.rig import read_rig

SAMPLES = Path(__file__).resolve().parents[2] / "samples"


@pytest.fixture
def goal() -> Goal:
    return read_goal(SAMPLES / "paddle.goal.toml")


def test_plans_of_random_goals_can_be_hung_and_told_from_sway(goal: Goal) -> None:
    rng = np.random.default_rng(5)
    planned = 0
    for _ in range(25):
        size, mass = rng.uniform(0.2, 2.5), rng.uniform(0.1, 3.0)
        asked = replace(
            goal,
            size_m=size,
            moment_kg_m2=mass * size**2 / 12.0,
            mass=replace(goal.mass, value=mass),
            room_height_m=rng.uniform(0.5, 3.0),
            room_width_m=rng.uniform(0.3, 2.0),
        )
        try:
            plan = plan_rig(asked)
        except BadInput:
            continue  # no rig fits such an article in such a room; that is refused, and told of below
        planned += 1
        given = plan.rig.suspension.dimensions
        ratio = 2.0 * math.sqrt(asked.moment_kg_m2 / mass) / given["upper_spacing"].value
        assert not SWAY_BAND[0] * 1.01 < ratio < SWAY_BAND[1] * 0.99
        assert PERIOD_S[0] * 0.99 <= plan.period_s <= PERIOD_S[1] * 1.01
        assert given["length"].value <= asked.room_height_m + 1e-3
        assert given["upper_spacing"].value <= asked.room_width_m + 1e-3
        assert plan.met == (plan.standing_in_the_way == "")
    assert planned >= 10


def test_a_goal_out_of_reach_says_what_the_best_is(goal: Goal) -> None:
    plan = plan_rig(replace(goal, wanted_relative=1e-6))
    assert not plan.met
    assert "the best within reach" in plan.standing_in_the_way
    assert "goal-not-met" in {doubt.code for doubt in plan.doubts}


def test_weak_strings_and_small_rooms_are_refused(goal: Goal) -> None:
    with pytest.raises(BadInput, match="over its limit"):
        plan_rig(replace(goal, string_load_limit_n=5.0))
    with pytest.raises(BadInput, match="can't be met together"):
        plan_rig(replace(goal, room_height_m=0.31, room_width_m=0.05))


def test_the_planned_rig_file_can_be_read(goal: Goal, tmp_path: Path) -> None:
    file = tmp_path / "rig.toml"
    file.write_text(plan_rig(goal).rig_toml(), encoding="utf-8")
    rig = read_rig(file)
    assert rig.article.expected_moment is not None
    assert rig.article.expected_moment.value == pytest.approx(goal.moment_kg_m2, rel=0.01)


def test_the_period_gets_surer_with_a_longer_clip(goal: Goal) -> None:
    # long records against γ: var ω falls with the cube of the length while the swing lasts (Rife and Boorstyn 1974)
    short, long = (period_relative_u(goal, 2.0, seconds) for seconds in (5.0, 20.0))
    assert short > 4.0 * long
