"""The goal file of `plan`: its schema and its reading; docs/files.md has every key."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Annotated, Any

from pydantic import BaseModel, ConfigDict, Field, model_validator

from .inertia.planning import Goal
from .rig import Force, Gravity, Length, Mass, Moment, _reader, read_toml, validate_tables

Share = Annotated[Any, _reader("number", "positive")]
Frequency = Annotated[Any, _reader("frequency", "positive")]


class _Table(BaseModel):
    model_config = ConfigDict(extra="forbid", arbitrary_types_allowed=True)


class _Article(_Table):
    name: str = Field(default="article", max_length=200)
    mass: Mass
    moment: Moment | None = None  # a guess, from solids or an earlier run
    size: Length | None = None  # across the swing axis, end to end

    @model_validator(mode="after")
    def _moment_or_size(self) -> _Article:
        if self.moment is None and self.size is None:
            raise ValueError("needs moment (a guess) or size (end to end, across the swing axis)")
        return self


class _Room(_Table):
    height: Length  # from the hook to where the article may hang
    width: Length


class _Wanted(_Table):
    uncertainty: Share  # of the moment, relative, about 95 %


class _Bench(_Table):
    tape: Length | None = None  # limits of a length by tape
    scale: Mass | None = None  # limits of the scale
    gravity: Gravity | None = None
    string_load_limit: Force | None = None


class _Camera(_Table):
    rate: Frequency | None = None
    width_px: int = Field(default=1920, ge=320, le=8192)
    height_px: int = Field(default=1080, ge=240, le=8192)
    longest_clip: Annotated[Any, _reader("time", "positive")] = None


class _GoalFile(_Table):
    article: _Article
    room: _Room
    goal: _Wanted
    bench: _Bench = _Bench()
    camera: _Camera = _Camera()


def read_goal(file: str | Path) -> Goal:
    """Read a goal file.

    Raises
    ------
    BadRig
        It can't be read, or a key is missing, unknown, of a wrong unit or impossible.
    """
    checked = validate_tables(_GoalFile, read_toml(file), name=str(file))
    article, bench, camera = checked.article, checked.bench, checked.camera
    mass = article.mass.value
    size = (
        article.size.value if article.size else math.sqrt(12.0 * article.moment.value / mass)
    )  # a uniform rod's
    return Goal(
        name=article.name,
        mass=article.mass,
        moment_kg_m2=article.moment.value
        if article.moment
        else article.mass.value * (size / math.sqrt(12.0)) ** 2,
        size_m=size,
        room_height_m=checked.room.height.value,
        room_width_m=checked.room.width.value,
        wanted_relative=checked.goal.uncertainty.value,
        tape_limit_m=bench.tape.value if bench.tape else 1e-3,
        scale_limit_kg=bench.scale.value if bench.scale else article.mass.u * math.sqrt(3.0),
        gravity=bench.gravity,
        string_load_limit_n=bench.string_load_limit.value if bench.string_load_limit else None,
        rate_hz=camera.rate.value if camera.rate else 30.0,
        width_px=camera.width_px,
        height_px=camera.height_px,
        longest_clip_s=camera.longest_clip.value if camera.longest_clip else 120.0,
    )
