"""Planning a bifilar rig and its clip for a wanted uncertainty of the moment of inertia."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from ..errors import BadInput
from ..records import Article, Bools, Doubt, Floats, Inertia, Quantity, Rig, Suspension
from .moment import SwingFacts, moment_of_inertia

SWAY_BAND = (
    0.80,
    1.25,
)  # T_yaw/T_sway between which the two are too near to be told apart well (D = 2k is 1)
PERIOD_S = (
    1.0,
    4.0,
)  # shorter is hard to film, longer takes long and is easily disturbed: common practice, no source
WIDEST = 0.6  # spacing over length beyond which the bounce makes up much of the motion: our judgment
SHORTEST_M = 0.3
LOAD_MARGIN = 5.0  # common practice, no source
AMPLITUDE_RAD = math.radians(
    8.0
)  # the period grows by 0.12 %, known to a percent of that; the arc is still large
POSITION_NOISE_PX = 0.06  # of a 16 px dot after ordinary compression: docs/benchmarks.md
DECAY_TIME_S = 60.0  # how long a swing of this kind lasts as a rule; recording past three of it gains nothing
ARC_SHARE = 0.36  # of the picture's height that the dot's radius should fill
FIELD_OF_VIEW = math.radians(
    65.0
)  # across, of a phone's main camera (26 mm equivalent): common practice, no source
DOT_PX = 28.0
PERIOD_SHARE = 0.1  # of the variance that the period may make up before a longer clip is asked for
GRID = 60


@dataclass(frozen=True)
class Goal:
    """What is wanted and what is at hand; lengths m, the uncertainty relative and for about 95 %."""

    name: str
    mass: Quantity
    moment_kg_m2: float
    size_m: float
    room_height_m: float
    room_width_m: float
    wanted_relative: float
    tape_limit_m: float
    scale_limit_kg: float
    gravity: Quantity | None
    string_load_limit_n: float | None
    rate_hz: float
    width_px: int
    height_px: int
    longest_clip_s: float


@dataclass(frozen=True, eq=False)
class Plan:
    """A rig, a clip, and what to expect of them.

    Parameters
    ----------
    rig : Rig
    expected : Inertia
        Budget of the result to expect.
    met : bool
        Whether the wanted uncertainty is reached.
    standing_in_the_way : str
        Why not, "" where it is met.
    period_s, sway_period_s : float
    clip_s, distance_m, dot_radius_m, dot_diameter_m, dot_diameter_px : float
    amplitude_rad : float
    spacing_m, length_m : (n,) float
        Axes of `relative_u` (n_lengths, n_spacings), relative expanded uncertainty, NaN where `allowed` is False.
    clip_lengths_s, period_relative_u : (m,) float
        u(T)/T over the length of the clip.
    """

    rig: Rig
    expected: Inertia
    met: bool
    standing_in_the_way: str
    period_s: float
    sway_period_s: float
    clip_s: float
    distance_m: float
    dot_radius_m: float
    dot_diameter_m: float
    dot_diameter_px: float
    amplitude_rad: float
    spacing_m: Floats
    length_m: Floats
    relative_u: Floats
    allowed: Bools
    clip_lengths_s: Floats
    period_relative_u: Floats
    doubts: tuple[Doubt, ...]

    def rig_toml(self) -> str:
        """The planned rig as a rig file, to be corrected with what was really built and measured."""
        article, given = self.rig.article, self.rig.suspension.dimensions
        assert article.mass is not None
        lines = [
            "# A plan: put in what you really built and measured before you believe a number.",
            "[article]",
            f"name = {_toml_text(article.name)}",
            f'mass = "{article.mass.value:.6g} kg ± {_limits(article.mass):.3g} kg"',
            f'expected_moment = "{self.expected.moment.value:.6g} kg m^2 ± 10 %"',
            "",
            "[suspension]",
            'kind = "bifilar"',
            *(f'{key} = "{q.value:.4f} m ± {1e3 * _limits(q):.3g} mm"' for key, q in given.items()),
            "",
            "[view]",
            'from = "above"',
            f'dot_radius = "{self.dot_radius_m:.4f} m ± 1 mm"',
            f'dot_diameter = "{1e3 * self.dot_diameter_m:.1f} mm ± 0.2 mm"',
        ]
        if self.rig.gravity is not None:
            lines += [
                "",
                "[place]",
                f'gravity = "{self.rig.gravity.value:.6g} m/s^2 ± {_limits(self.rig.gravity):.2g} m/s^2"',
            ]
        return "\n".join(lines) + "\n"


def plan_rig(goal: Goal) -> Plan:
    """Spacing and length with the least u(I) among those that can be hung and told from sway, and the clip to film.

    Raises
    ------
    BadInput
        No rig at all fits: it says what stands in the way.
    """
    _check_load(goal)
    spacing = np.linspace(0.03, min(goal.room_width_m, 1.2 * goal.size_m), GRID)
    length = np.linspace(SHORTEST_M, max(goal.room_height_m, SHORTEST_M), GRID)
    d, long = np.meshgrid(spacing, length)
    gravity = 9.8 if goal.gravity is None else goal.gravity.value
    k = math.sqrt(goal.moment_kg_m2 / goal.mass.value)
    period = 2.0 * math.pi * k * 2.0 / d * np.sqrt(long / gravity)
    ratio = 2.0 * k / d
    reasons = {
        "the room's height": long <= goal.room_height_m,
        "the period (1 to 4 s)": (period >= PERIOD_S[0]) & (period <= PERIOD_S[1]),
        "sway too near the swing": (ratio <= SWAY_BAND[0]) | (ratio >= SWAY_BAND[1]),
        "strings too short for the spacing": d <= WIDEST * long,
    }
    allowed = np.logical_and.reduce(list(reasons.values()))
    if not allowed.any():
        raise BadInput(
            f"No rig fits: {_what_blocks(reasons)} can't be met together.",
            "Needed: a higher or wider room, or an article hung another way.",
            "Try a trifilar suspension or a torsion wire, or a cradle that spreads the strings.",
        )
    relative = np.where(allowed, _relative_u(goal, d, long, period), np.nan)
    row, column = np.unravel_index(int(np.nanargmin(relative)), relative.shape)
    best_d, best_l = float(spacing[column]), float(length[row])
    return _plan_for(goal, best_d, best_l, (spacing, length, relative, allowed))


def _plan_for(goal: Goal, spacing: float, length: float, grid: tuple[Floats, Floats, Floats, Bools]) -> Plan:
    gravity = 9.8 if goal.gravity is None else goal.gravity.value
    k = math.sqrt(goal.moment_kg_m2 / goal.mass.value)
    period = 4.0 * math.pi * k / spacing * math.sqrt(length / gravity)
    rig = _rig(goal, round(spacing, 3), round(length, 3))
    clips = (
        np.arange(10.0, goal.longest_clip_s + 1e-9, 1.0)
        if goal.longest_clip_s > 10.0
        else np.array([goal.longest_clip_s])
    )
    by_clip = np.array([period_relative_u(goal, period, seconds) for seconds in clips])
    others = _without_period(rig, period)
    enough = np.flatnonzero((2.0 * by_clip) ** 2 <= PERIOD_SHARE * others**2)
    chosen = int(enough[0]) if enough.size else int(np.argmin(by_clip))
    seconds = max(float(clips[chosen]), min(15.0 * period, float(clips[-1])))
    u_period = period_relative_u(goal, period, seconds)
    expected = moment_of_inertia(rig, Quantity(period, u_period * period, "s"), facts=SwingFacts())
    reached = expected.k * expected.moment.relative_u
    met = reached <= goal.wanted_relative
    focal = 0.5 * goal.width_px / math.tan(0.5 * FIELD_OF_VIEW)
    # The dot sits near the article's end, but no farther out than a camera under the hook can see.
    highest = 0.9 * min(goal.room_height_m, length + SHORTEST_M)
    radius = min(0.45 * goal.size_m, ARC_SHARE * goal.height_px * highest / focal)
    distance = focal * radius / (ARC_SHARE * goal.height_px)
    return Plan(
        rig=rig,
        expected=expected,
        met=met,
        standing_in_the_way="" if met else _in_the_way(expected, reached, goal),
        period_s=period,
        sway_period_s=2.0 * math.pi * math.sqrt(length / gravity),
        clip_s=seconds,
        distance_m=distance,
        dot_radius_m=radius,
        dot_diameter_m=DOT_PX * distance / focal,
        dot_diameter_px=DOT_PX,
        amplitude_rad=AMPLITUDE_RAD,
        spacing_m=grid[0],
        length_m=grid[1],
        relative_u=grid[2],
        allowed=grid[3],
        clip_lengths_s=clips,
        period_relative_u=by_clip,
        doubts=_doubts(goal, met, reached),
    )


def period_relative_u(goal: Goal, period_s: float, seconds: float) -> float:
    """Relative standard uncertainty of the period to expect of a clip, by the Cramér–Rao bound of a damped tone.

    var ω = (2 s² Δt/A²) I0/(I0 I2 − I1²), I_n = ∫ tⁿ e^(−2γt) dt over the clip (docs/theory.md, Frequency
    estimation), with s the position noise over the arc's radius; plus what the amplitude's correction leaves.
    """
    noise = POSITION_NOISE_PX / (ARC_SHARE * goal.height_px)
    t = np.linspace(0.0, seconds, 801)
    weight = np.exp(-2.0 * t / DECAY_TIME_S)
    i0, i1, i2 = (float(np.trapezoid(t**n * weight, t)) for n in range(3))
    variance = 2.0 * (noise / AMPLITUDE_RAD) ** 2 / goal.rate_hz * i0 / (i0 * i2 - i1**2)
    omega = 2.0 * math.pi / period_s
    amplitude_left = 0.004 * AMPLITUDE_RAD**2 / 16.0  # from above the arc tells the amplitude to 0.2 %
    return math.hypot(math.sqrt(variance) / omega, amplitude_left)


def _relative_u(goal: Goal, d: Floats, long: Floats, period: Floats) -> Floats:
    """Relative expanded uncertainty (k = 2) over the grid, the longest clip taken."""
    tape = goal.tape_limit_m / math.sqrt(3.0)
    mass = goal.scale_limit_kg / math.sqrt(3.0) / goal.mass.value
    gravity = 0.002 if goal.gravity is None else goal.gravity.relative_u
    u_period = np.vectorize(lambda t: period_relative_u(goal, t, goal.longest_clip_s))(
        np.clip(period, 0.1, 20.0)
    )
    return np.asarray(
        2.0
        * np.sqrt((2.0 * tape / d) ** 2 + (tape / long) ** 2 + mass**2 + gravity**2 + (2.0 * u_period) ** 2)
    )


def _rig(goal: Goal, spacing: float, length: float) -> Rig:
    tape = goal.tape_limit_m / math.sqrt(3.0)
    mass = Quantity(goal.mass.value, goal.scale_limit_kg / math.sqrt(3.0), "kg", shape="rectangular")
    dimensions = {
        "length": Quantity(length, tape, "m", shape="rectangular"),
        "upper_spacing": Quantity(spacing, tape, "m", shape="rectangular"),
    }
    return Rig(Article(goal.name, mass), Suspension("bifilar", dimensions), gravity=goal.gravity)


def _without_period(rig: Rig, period: float) -> float:
    """Relative u(I) that all but the period make up."""
    return moment_of_inertia(rig, Quantity(period, 0.0, "s")).moment.relative_u


def _check_load(goal: Goal) -> None:
    if goal.string_load_limit_n is None:
        return
    load = goal.mass.value * 9.80665 / 2.0
    if load * LOAD_MARGIN > goal.string_load_limit_n:
        raise BadInput(
            f"Each string would carry {load:.3g} N; {LOAD_MARGIN:.0f} times that is over its limit of {goal.string_load_limit_n:.3g} N.",
            "Needed: stronger strings.",
            "Nobody under a hanging load; local codes come first.",
        )


def _what_blocks(reasons: dict[str, Bools]) -> str:
    """The fewest conditions that leave nothing: those without which something would be left."""
    blocking = []
    for name in reasons:
        rest = [mask for other, mask in reasons.items() if other != name]
        if np.logical_and.reduce(rest).any():
            blocking.append(name)
    return " and ".join(blocking or reasons)


def _in_the_way(expected: Inertia, reached: float, goal: Goal) -> str:
    worst = max(expected.budget, key=lambda line: line.share)
    return (
        f"the best within reach is {100 * reached:.2g} %, not {100 * goal.wanted_relative:.2g} %: "
        f"{worst.input.replace('_', ' ')} makes {100 * worst.share:.0f} % of the variance"
    )


def _doubts(goal: Goal, met: bool, reached: float) -> tuple[Doubt, ...]:
    doubts = [
        Doubt(
            "plan-caution",
            f"{goal.mass.value:.3g} kg will hang and swing.",
            "Nobody under it; strings and hook with a margin; heads and hands out of the way. Local codes come first.",
        )
    ]
    if not met:
        doubts.append(
            Doubt(
                "goal-not-met",
                f"The plan reaches {100 * reached:.2g} %, the goal is {100 * goal.wanted_relative:.2g} %.",
                "Measure spacing and length with a better tool, or use added weights or a reference article: they need no geometry.",
            )
        )
    if goal.gravity is None:
        doubts.append(
            Doubt(
                "gravity-unknown",
                "No gravity was given: Earth's whole range is in the doubt.",
                "Give gravity, or latitude in the rig.",
            )
        )
    return tuple(doubts)


def _limits(quantity: Quantity) -> float:
    return quantity.u * math.sqrt(3.0)


def _toml_text(text: str) -> str:
    import json

    return json.dumps(text)
