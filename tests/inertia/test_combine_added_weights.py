"""Added weights: moment and suspension constant from a straight line, whatever the tape measure says."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from swingtrack.errors import BadInput
from swingtrack.inertia.air import added_moment
from swingtrack.inertia.combine import Run
from swingtrack.inertia.combine_added_weights import fit_added_weights
from swingtrack.inertia.suspension import model_of
from swingtrack.records import AddedWeight, Air, Article, Quantity, Rig, Suspension

MASS, MOMENT, PAIR = 0.9, 0.02, 0.2
TRUE: dict[str, dict[str, float]] = {
    "bifilar": {"length": 1.207, "upper_spacing": 0.2963, "lower_spacing": 0.25, "gravity": 9.8123},
    "trifilar": {"length": 1.207, "upper_radius": 0.1471, "gravity": 9.8123},
    "torsion-wire": {"stiffness": 0.0213},
}


def q(value: float, u: float, unit: str, text: str = "") -> Quantity:
    return Quantity(value, u, unit, text=text)


def steps(
    kind: str = "bifilar",
    *,
    distances: tuple[float | None, ...] = (None, 0.1, 0.2),
    tape: float = 1.02,
    strings: dict[str, float] | None = None,
    own: float | None = None,
    u: float = 1e-4,
) -> list[Run]:
    """Runs with a pair of weights at each distance; every length is written down `tape` times too long."""
    true = TRUE[kind] | (strings or {})
    written = {
        key: q(
            value * (tape if key.split("_")[-1] in ("length", "spacing", "radius", "stiffness") else 1.0),
            1e-3 * value,
            "",
        )
        for key, value in true.items()
        if key != "gravity"
    }
    moment_of_its_own = None if own is None else q(own, 1e-6, "kg m^2")
    runs = []
    for number, distance in enumerate(distances):
        added = (
            ()
            if distance is None
            else tuple(
                AddedWeight(
                    q(PAIR, 1e-5, "kg", f"200 g {side}"),
                    q(distance, 1e-4, "m", f"{distance} {side}"),
                    moment_of_its_own,
                )
                for side in "LR"
            )
        )
        x = {**true, "mass": MASS + PAIR * len(added)}
        moment = MOMENT + (2 * PAIR * distance**2 + 2 * (own or 0.0) if distance else 0.0)
        period = model_of(kind).period(x, moment)
        article = Article("paddle", q(MASS, 1e-4, "kg"), added=added)
        rig = Rig(article, Suspension(kind, written), gravity=q(9.81, 1e-3, "m/s^2"))
        runs.append(Run(f"step {number}", rig, q(period, u * period, "s")))
    return runs


@pytest.mark.parametrize("kind", TRUE)
@pytest.mark.parametrize("tape", [1.0, 1.3])
def test_geometry_does_not_enter(kind: str, tape: float) -> None:
    """Exact runs give the true moment to rounding, with any dimensions in the rig (Must hold: no geometry entered)."""
    result = fit_added_weights(steps(kind, tape=tape))
    assert result.moment.value == pytest.approx(MOMENT, rel=1e-10)
    t = TRUE[kind]
    if kind == "torsion-wire":
        constant = t["stiffness"]
    elif kind == "trifilar":
        constant = (
            t["gravity"] * t["upper_radius"] ** 2 / t["length"]
        )  # I = m g R² T²/(4π² L), parallel strings
    else:
        a, b = t["upper_spacing"] / 2, t["lower_spacing"] / 2
        constant = (
            t["gravity"] * a * b / math.sqrt(t["length"] ** 2 - (a - b) ** 2)
        )  # I = m g a b T²/(4π² h0)
    assert result.by_products[0].quantity.value == pytest.approx(constant, rel=1e-9)
    assert not {line.input for line in result.budget} & {
        "length",
        "upper_spacing",
        "gravity",
        "stiffness",
        "upper_radius",
    }


def test_strings_mass_and_twist_are_allowed_for() -> None:
    result = fit_added_weights(steps(tape=1.0, strings={"string_mass": 0.02, "string_stiffness": 1e-3}))
    assert result.moment.value == pytest.approx(MOMENT, rel=1e-10)


def test_two_runs_in_closed_form() -> None:
    """Torsion wire, one pair: I = A T₀²/(T₁² − T₀²), and its sensitivities by hand."""
    empty, loaded = steps("torsion-wire", distances=(None, 0.2), u=1e-3)
    t0, t1 = empty.period.value, loaded.period.value
    added = 2 * PAIR * 0.2**2
    result = fit_added_weights([empty, loaded])
    assert result.moment.value == pytest.approx(added * t0**2 / (t1**2 - t0**2), rel=1e-12)
    lever = t1**2 / (t1**2 - t0**2)
    shares = {line.input: line.contribution / MOMENT for line in result.budget}
    assert shares["period (step 0)"] == pytest.approx(2 * 1e-3 * lever, rel=1e-6)
    assert shares["period (step 1)"] == pytest.approx(2 * 1e-3 * lever, rel=1e-6)
    assert shares["distance of weight 1"] == pytest.approx(2 * 1e-4 / 0.2 / 2, rel=1e-6)
    assert shares["mass of weight 1"] == pytest.approx(1e-5 / PAIR / 2, rel=1e-6)


def test_clock_drops_out() -> None:
    runs = [replace(run, clock_relative_u=5e-5) for run in steps()]
    clock = next(line for line in fit_added_weights(runs).budget if line.input == "clock")
    assert clock.contribution / MOMENT < 1e-12


def test_weight_used_in_every_step_is_one_input() -> None:
    names = [line.input for line in fit_added_weights(steps(distances=(None, 0.1, 0.15, 0.2))).budget]
    assert sum(name.startswith("mass of weight") for name in names) == 2
    assert sum(name.startswith("distance of weight") for name in names) == 6


def test_weights_with_moments_of_their_own() -> None:
    assert fit_added_weights(steps(own=1e-4)).moment.value == pytest.approx(MOMENT, rel=1e-10)


def test_air_carried_along_is_taken_off() -> None:
    plate = Air("plate", {"width": q(0.4, 0, "m"), "height": q(0.2, 0, "m")}, face="broadside")
    runs = [replace(run, rig=replace(run.rig, air=plate)) for run in steps()]
    assert fit_added_weights(runs).moment.value == pytest.approx(MOMENT - added_moment(plate), rel=1e-9)


def test_tape_that_errs_shows_in_the_constant() -> None:
    assert [d.code for d in fit_added_weights(steps(tape=1.0)).doubts] == []
    assert [d.code for d in fit_added_weights(steps(tape=1.1)).doubts] == ["suspension-constant-off"]


def test_small_steps_and_lopsided_weights_are_doubted() -> None:
    small = fit_added_weights(steps(distances=(None, 0.03, 0.05), tape=1.0))
    assert [d.code for d in small.doubts] == ["added-weights-small"]
    runs = steps(tape=1.0)
    article = runs[2].rig.article
    lopsided = replace(
        article, added=(article.added[0], replace(article.added[1], distance=q(0.1, 1e-4, "m")))
    )
    result = fit_added_weights([*runs[:2], replace(runs[2], rig=replace(runs[2].rig, article=lopsided))])
    assert "added-weights-unbalanced" in [d.code for d in result.doubts]


def test_bad_step_is_found() -> None:
    runs = steps(distances=(None, 0.1, 0.15, 0.2, 0.22), tape=1.0, u=1e-5)
    wrong = replace(runs[3], period=replace(runs[3].period, value=runs[3].period.value * 1.01))
    result = fit_added_weights([*runs[:3], wrong, runs[4]])
    assert result.doubts[0].code == "scatter-over-claim"
    deviations = {line.name: abs(line.deviation or 0.0) for line in result.runs}
    assert max(deviations, key=lambda name: deviations[name]) == "step 3"


@pytest.mark.parametrize(
    ("runs", "said"),
    [
        (steps(distances=(None,)), "at least 2"),
        (steps(distances=(0.1, 0.1)), "same added moment"),
        (steps(distances=(None, 0.2))[::-1] + steps(distances=(None, 0.1))[1:], "more than one run"),
    ],
)
def test_what_is_no_line_is_refused(runs: list[Run], said: str) -> None:
    with pytest.raises(BadInput, match=said):
        fit_added_weights(runs)


def test_weights_that_make_it_faster_are_refused() -> None:
    empty, loaded = steps("torsion-wire", distances=(None, 0.2))
    swapped = [replace(empty, period=loaded.period), replace(loaded, period=empty.period)]
    with pytest.raises(BadInput, match="grow with the added moment"):
        fit_added_weights(swapped)


def test_edge_is_refused() -> None:
    runs = [
        replace(
            run,
            rig=replace(run.rig, suspension=Suspension("knife-edge", {"pivot_to_centre": q(0.3, 1e-3, "m")})),
        )
        for run in steps()
    ]
    with pytest.raises(BadInput, match="knife-edge"):
        fit_added_weights(runs)
