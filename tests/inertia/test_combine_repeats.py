"""Repeats: what is each run's own averages down, what they share does not, and scatter over the claim is added."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from swingtrack.errors import BadInput, BadRig
from swingtrack.inertia.combine import Run
from swingtrack.inertia.combine_repeats import combine_repeats
from swingtrack.inertia.moment import SwingFacts, moment_of_inertia
from swingtrack.records import Air, Article, Quantity, Rig, Suspension


def q(value: float, u: float, unit: str, text: str = "") -> Quantity:
    return Quantity(value, u, unit, text=text)


BENCH = {"length": q(1.2, 5e-4, "m"), "upper_spacing": q(0.3, 3e-4, "m")}
RIG = Rig(
    Article("paddle", q(0.912, 3e-4, "kg")), Suspension("bifilar", BENCH), gravity=q(9.81, 1e-4, "m/s^2")
)


def run(name: str, period: float, u: float = 1e-3, *, rig: Rig = RIG, clock: float = 0.0) -> Run:
    return Run(name, rig, Quantity(period, math.hypot(u, clock * period), "s"), clock_relative_u=clock)


def one_line(result: object, name: str) -> float:
    return next(line.contribution for line in result.budget if line.input == name)  # type: ignore[attr-defined]


def test_own_doubt_averages_down_and_the_shared_does_not() -> None:
    alone = moment_of_inertia(RIG, q(1.5, 1e-3, "s"), facts=SwingFacts(clock_relative_u=0.0))
    parts = {line.input: line.contribution for line in alone.budget}
    result = combine_repeats([run(f"run {n}", 1.5) for n in range(4)])
    assert result.moment.value == pytest.approx(alone.moment.value)
    for key in ("mass", "gravity", "length", "upper_spacing"):
        assert one_line(result, key) == pytest.approx(parts[key], rel=1e-9)
    periods = [line.contribution for line in result.budget if line.input.startswith("period")]
    assert math.hypot(*periods) == pytest.approx(parts["period"] / 2, rel=1e-9)
    assert result.expanded == pytest.approx(result.k * result.moment.u)


def test_clock_of_one_phone_is_shared_and_of_two_phones_is_not() -> None:
    one = [run(f"run {n}", 1.5, 1e-5, clock=1e-3) for n in range(4)]
    several = [replace(r, clock=f"phone {n}") for n, r in enumerate(one)]
    alone = 2.0 * 1e-3  # I goes with T²
    shared = one_line(combine_repeats(one), "clock")
    result = combine_repeats(several)
    apart = math.hypot(*(line.contribution for line in result.budget if line.input.startswith("clock")))
    assert shared / result.moment.value == pytest.approx(alone, rel=1e-6)
    assert apart / result.moment.value == pytest.approx(alone / 2, rel=1e-6)


def test_runs_count_by_their_own_doubt() -> None:
    result = combine_repeats([run("good", 1.500, 1e-3), run("poor", 1.503, 2e-3)])
    # weighted mean with 1/u²: 4 to 1 (GUM, JCGM 100:2008, H.5 and any text on least squares)
    assert [line.weight for line in result.runs] == pytest.approx([0.8, 0.2], rel=0.01)


def test_chi2_and_birge_ratio_of_known_runs() -> None:
    periods = [1.499, 1.500, 1.501, 1.502]
    result = combine_repeats([run(f"run {n}", t) for n, t in enumerate(periods)])
    # closed form for equal u: chi² = Σ (T − T̄)²/u² to first order, Birge ratio √(chi²/(n − 1))
    chi2 = float(np.sum((np.array(periods) - 1.5005) ** 2)) / 1e-6
    assert result.consistency.chi2 == pytest.approx(chi2, rel=0.01)
    assert result.consistency.birge == pytest.approx(math.sqrt(chi2 / 3), rel=0.01)
    assert result.consistency.scatter_relative == pytest.approx(2 * math.sqrt(5e-6 / 3) / 1.5005, rel=0.01)
    assert result.consistency.claimed_relative == pytest.approx(2e-3 / 1.5005, rel=0.01)
    assert result.consistency.extra_relative_u == 0.0
    assert result.doubts == ()


def test_scatter_over_the_claim_is_added() -> None:
    periods = 1.5 * (1 + np.array([-0.004, 0.002, 0.005, -0.003, 0.001]))
    result = combine_repeats([run(f"run {n}", float(t), 1e-4) for n, t in enumerate(periods)])
    # equal claims: the added variance is that of the sample less the claim (Mandel and Paule in closed form)
    sample = float(np.var(2 * np.log(periods), ddof=1))
    assert result.consistency.extra_relative_u == pytest.approx(
        math.sqrt(sample - (2e-4 / 1.5) ** 2), rel=0.01
    )
    (line,) = (line for line in result.budget if line.input == "scatter between runs")
    assert line.contribution / result.moment.value == pytest.approx(math.sqrt(sample / 5), rel=0.02)
    assert line.dof == 4
    assert result.doubts[0].code == "scatter-over-claim"


def test_quiet_runs_are_told() -> None:
    result = combine_repeats([run(f"run {n}", 1.5 + 1e-6 * n, 1e-2) for n in range(8)])
    assert any("less than they claim" in line for line in result.advice)
    assert result.doubts == ()


def test_repeats_that_gain_nothing_are_told() -> None:
    sharp = combine_repeats([run("a", 1.5, 1e-5), run("b", 1.5, 1e-5)])
    assert any("further repeats gain nothing" in line for line in sharp.advice)
    blunt = combine_repeats([run("a", 1.5, 1e-2), run("b", 1.5, 1e-2)])
    assert not any("further repeats gain nothing" in line for line in blunt.advice)


def test_order_of_the_runs_does_not_matter() -> None:
    runs = [run("a", 1.5), run("b", 1.503, 2e-3), run("c", 1.499)]
    forth, back = combine_repeats(runs), combine_repeats(runs[::-1])
    assert forth.moment.value == pytest.approx(back.moment.value, rel=1e-12)
    assert forth.moment.u == pytest.approx(back.moment.u, rel=1e-10)


def test_air_is_taken_off_as_in_a_single_run() -> None:
    foam = replace(
        RIG, air=Air("plate", {"width": q(0.4, 0, "m"), "height": q(0.2, 0, "m")}, face="broadside")
    )
    alone = moment_of_inertia(foam, q(1.5, 1e-3, "s"), facts=SwingFacts(clock_relative_u=0.0))
    result = combine_repeats([run("a", 1.5, rig=foam), run("b", 1.5, rig=foam)])
    assert result.moment.value == pytest.approx(alone.moment.value)
    air = next(line.contribution for line in alone.budget if line.input == "air")
    assert one_line(result, "air factor") == pytest.approx(air)


def test_stored_moment_that_differs_is_doubted() -> None:
    odd = replace(run("a", 1.5), moment=Quantity(0.03, 1e-4, "kg m^2"))
    codes = [doubt.code for doubt in combine_repeats([odd, run("b", 1.5)]).doubts]
    assert codes == ["stored-moment-differs"]


@pytest.mark.parametrize(
    ("runs", "said"),
    [
        ([run("a", 1.5)], "at least 2"),
        ([run("a", 1.5), run("a", 1.5)], "more than one run"),
        ([run("a", 1.5), run("b", -1.5)], "period over zero"),
        ([run("a", 1.5), run("b", math.nan)], "period over zero"),
        (
            [run("a", 1.5), run("b", 1.5, rig=replace(RIG, article=Article("oar", RIG.article.mass)))],
            "the same article",
        ),
        ([run("a", 1.5), replace(run("b", 1.5), clock_relative_u=0.1)], "clock"),
    ],
)
def test_what_is_no_repeat_is_refused(runs: list[Run], said: str) -> None:
    with pytest.raises(BadInput, match=said):
        combine_repeats(runs)


def test_rig_that_cannot_hang_is_refused() -> None:
    short = Suspension("bifilar", {**BENCH, "lower_spacing": q(3.0, 1e-3, "m")})
    rig = replace(RIG, suspension=short)
    with pytest.raises(BadRig):
        combine_repeats([run("a", 1.5, rig=rig), run("b", 1.5, rig=rig)])
