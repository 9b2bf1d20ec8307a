"""Hand-timed runs: miscounts, coverage, published series, and how they stand beside a clip."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from scipy import stats

from swingtrack.errors import BadSeries
from swingtrack.records import Quantity
from swingtrack.signal.stopwatch import Run, TrialSheet, assess_trials, compare_with_clip, read_trials
from swingtrack.signal.stopwatch_counts import find_outlier, grubbs_critical
from tests.benchmarks.stopwatch_sheets import judge_sheets


def sheet(*runs: tuple[int, float]) -> TrialSheet:
    return TrialSheet(tuple(Run(n, t) for n, t in runs))


def test_miscounts_and_coverage_over_random_sheets() -> None:
    figures = judge_sheets(count=400, seed=7)
    assert figures.detected_share >= 0.98
    assert figures.accused_share <= 0.02  # 1 % and two standard deviations of 400 sheets
    assert 0.92 <= figures.coverage <= 0.975  # 400 sheets: 95 % ± 2.2 % at two standard deviations


def test_a_constant_bias_drops_out_of_the_line() -> None:
    # seconds = 0.25 + 1.8 n exactly: NIST StRD-style exactness of a straight line
    found = assess_trials(sheet((5, 9.25), (10, 18.25), (20, 36.25), (40, 72.25)))
    assert found.method == "line"
    assert found.period.value == pytest.approx(1.8, rel=1e-12)
    assert found.offset is not None
    assert found.offset.value == pytest.approx(0.25, abs=1e-9)


def test_slope_and_its_uncertainty_against_scipy() -> None:
    rng = np.random.default_rng(3)
    counts = np.array([5, 10, 20, 30, 40, 50])
    seconds = 0.2 + 1.37 * counts + rng.normal(0, 0.1, counts.size)
    found = assess_trials(sheet(*zip(counts.tolist(), seconds.tolist(), strict=True)))
    reference = stats.linregress(counts, seconds)
    assert found.period.value == pytest.approx(reference.slope, rel=1e-12)
    assert found.period.u == pytest.approx(reference.stderr, rel=1e-9)
    assert found.period.dof == 4


def test_one_miscount_is_named_with_the_count_that_fits() -> None:
    found = assess_trials(sheet((10, 21.05), (10, 20.93), (10, 18.92)))
    verdicts = [(trial.verdict, trial.swings_that_fit) for trial in found.trials]
    assert verdicts == [("ok", None), ("ok", None), ("miscount", 9)]
    assert "not 10" in found.doubts[0].message


def test_published_quadcopter_laps() -> None:
    # posts of 9 Oct 2014, marcv81-test-pages: stamps every 20 swings; the first group is the longest (0.6656 s against
    # 0.6572 s a swing), the author's mean is 0.65845 s.
    stamps = [2.555, 15.867, 29.010, 42.154, 55.231]
    laps = TrialSheet(tuple(Run(20 * (i + 1), t) for i, t in enumerate(stamps)), laps=True)
    found = assess_trials(laps)
    assert (stamps[-1] - stamps[0]) / 80 == pytest.approx(0.65845, abs=1e-5)
    assert found.period.value == pytest.approx(0.65845, abs=2.0 * found.period.u)


@pytest.mark.parametrize(
    ("n", "level", "expected"),
    # NIST/SEMATECH e-Handbook 1.3.5.17.1: N = 8, α = 0.05 → 2.127 (two-sided 2.032 is one-sided 0.05); scipy's t agrees
    [(8, 0.05, 2.1266), (10, 0.05, 2.2900)],
)
def test_grubbs_critical_values(n: int, level: float, expected: float) -> None:
    assert grubbs_critical(n, level) == pytest.approx(expected, abs=2e-4)


def test_grubbs_finds_the_handbook_outlier() -> None:
    # NIST/SEMATECH e-Handbook 1.3.5.17.1: Tietjen and Moore's uranium isotope data, 245.57 is the outlier
    data = np.array([199.31, 199.53, 200.19, 200.82, 201.92, 201.95, 202.18, 245.57])
    assert find_outlier(data) == 7
    assert find_outlier(data[:-1]) is None


@pytest.mark.parametrize(
    ("clip_period", "factor", "said"),
    [(16.0, 8, "slow motion"), (8.0, 4, "slow motion"), (4.0, 2, "half swings"), (1.0, 2, "count again")],
)
def test_a_factor_between_stopwatch_and_clip_is_named(clip_period: float, factor: int, said: str) -> None:
    runs = assess_trials(sheet((10, 20.1), (10, 19.9), (10, 20.05)))
    against = compare_with_clip(runs, Quantity(clip_period, 1e-4, "s")).against_clip
    assert against is not None
    assert against.factor == factor
    assert said in against.verdict


def test_agreement_and_bias_of_the_hand() -> None:
    runs = assess_trials(sheet((10, 20.12), (10, 20.05), (10, 20.2), (10, 20.03)))
    against = compare_with_clip(runs, Quantity(2.0, 1e-4, "s")).against_clip
    assert against is not None
    assert against.bias_s is not None
    assert against.bias_s.value == pytest.approx(0.1)
    far = compare_with_clip(runs, Quantity(1.95, 1e-4, "s"))
    assert far.against_clip is not None
    assert abs(far.against_clip.normalised_error) > 1.0
    assert "stopwatch-disagrees" in {doubt.code for doubt in far.doubts}


def test_further_trials_follow_the_square_root_law() -> None:
    runs = sheet((10, 20.1), (10, 19.9), (10, 20.05), (10, 19.97))
    plain = assess_trials(runs)
    wanted = plain.period.relative_u / 2.0
    assert assess_trials(runs, target_relative_u=wanted).further_trials_for_target == 12


def test_trials_need_not_be_in_order() -> None:
    runs = [(10, 20.1), (20, 40.2), (30, 60.1), (10, 19.9)]
    assert assess_trials(sheet(*runs)).period == assess_trials(sheet(*reversed(runs))).period


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("", "empty"),
        ("swings,seconds\n", "no runs"),
        ("count,time\n10,20\n", "header"),
        ("swings,seconds\n10.5,20\n", "line 2"),
        ("swings,seconds\n10,20\n10,x\n", "line 3, column seconds"),
        ("swings,seconds\n10,-20\n", "over zero"),
        ("swings,stamp_s\n10,20\n20,15\n30,60\n", "increase"),
    ],
)
def test_faulty_sheets_are_refused(tmp_path: Path, text: str, said: str) -> None:
    file = tmp_path / "trials.csv"
    file.write_text(text)
    with pytest.raises(BadSeries) as caught:
        read_trials(file)
    assert said in str(caught.value)
