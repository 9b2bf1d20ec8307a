"""The terminal pages: short, aligned, the answer first, rounded by the rule, safe to print."""

from __future__ import annotations

import re
from dataclasses import replace

import numpy as np
import pytest

from swingtrack.records import Candidate, Doubt, Measurement, Path
from swingtrack.report.layout import MOST_LINES, WIDTH, columns, doubt_lines, table
from swingtrack.report.text import audit_text, inertia_text, stopwatch_text, summary_text
from tests.report.paddles import a_measurement, a_path, a_swing, an_inertia

ALL_LENGTHS = (0, 1, 3, 12, 60)


def doubts(count: int, words: int = 40) -> tuple[Doubt, ...]:
    return tuple(
        Doubt(f"reason-number-{k}", "something was seen " * (words // 4), "do this " * words)
        for k in range(count)
    )


def test_the_answer_comes_first_with_its_factor() -> None:
    first, second, *_ = summary_text(a_measurement()).splitlines()
    assert first == "moment of inertia     0.11320 ± 0.00029 kg m²   (k = 1.96, about 95 %)"
    assert second.strip() == "1132.0 ± 2.9 kg cm²"


def test_period_decay_amplitude_and_causes_are_there() -> None:
    text = summary_text(a_measurement())
    for part in (
        "3.10211 ± 0.00011 s",
        "0.0080185 ± 0.0000090 1/s",
        "86.444 ± 0.097 s",
        "Q 126.30 ± 0.14",
        "7.994° to 6.285° in 6.10 cycles",
        "upper spacing 80 %, length 14 %, mass 6 %",
        "sway at 0.4541 Hz, 1.2 %",
        "E_n = 0.39",
    ):
        assert part in text, part


@pytest.mark.parametrize("count", ALL_LENGTHS)
def test_never_more_lines_than_a_small_window(count: int) -> None:
    text = summary_text(a_measurement(doubts=doubts(count)), written_to="results/paddle-12 evening.swing")
    assert len(text.splitlines()) <= MOST_LINES
    assert max(map(len, text.splitlines())) <= WIDTH


@pytest.mark.parametrize("count", ALL_LENGTHS)
def test_every_warning_is_at_least_named(count: int) -> None:
    text = summary_text(a_measurement(doubts=doubts(count, words=4)))
    named = re.findall(r"reason-number-\d+", text)
    left = re.search(r"(\d+) (?:more|warnings): ", text)
    if count <= 3:
        assert len(set(named)) == count
    elif left:
        assert text.count("\n! ") - 1 + int(left[1]) == count
    assert ("no warnings" in text) == (count == 0)


def test_a_warning_bears_its_advice() -> None:
    text = summary_text(a_measurement(swing=None, stopwatch=None))
    assert "! Only 6.1 cycles were seen. (few-cycles)\n  → Film 15 or more." in text


def test_without_amplitude_and_rig() -> None:
    text = summary_text(
        a_measurement(
            inertia=None,
            stopwatch=None,
            swing=a_swing(amplitude_start=None, amplitude_end=None, half_life=None, quality_factor=None),
        )
    )
    assert text.startswith("period, small swings")
    assert re.search(r"^amplitude +not known; 6.10 cycles$", text, re.M)
    assert re.search(r"^half-life +not known$", text, re.M)


def test_columns_are_aligned() -> None:
    text = summary_text(a_measurement(doubts=()))
    body = text.splitlines()[:-1]
    starts = {
        len(line) - len(line.lstrip()) if line.startswith(" ") else len(re.match(r"\S.*?  +", line)[0])
        for line in body
    }  # type: ignore[index]
    assert len(starts) == 1


def test_control_signs_do_not_reach_the_terminal() -> None:
    evil = "paddle\x1b[2J\x1b]0;owned\x07\nline\r"
    path = a_path()
    path = replace(
        path,
        clip=replace(path.clip, codec=evil, notes=(evil,)),  # type: ignore[type-var]
        marker=replace(path.marker, found_by=evil),  # type: ignore[type-var]
    )
    measured = a_measurement(
        path=path, doubts=(Doubt("odd", evil, evil),), inertia=an_inertia(about=evil, advice=(evil,))
    )
    for text in (
        summary_text(measured, written_to=evil),
        audit_text(path, written_to=evil),
        inertia_text(measured),
        stopwatch_text(measured),
    ):
        assert not re.search(r"[\x00-\x09\x0b-\x1f\x7f-\x9f]", text)


def test_inertia_page_has_budget_corrections_and_advice() -> None:
    text = inertia_text(a_measurement(swing=None, path=None, stopwatch=None, doubts=()))
    assert re.search(r"upper spacing +500\.00 +0\.29  mm +79\.9 %", text)
    assert re.search(r"amplitude +−0\.18 %  applied", text)
    assert re.search(r"buoyancy +\(−0\.0150 ± 0\.0015\) %  not applied", text)
    assert re.search(r"string mass +not known  not applied", text)
    assert "95 % in 0.11293 to 0.11347 kg m²; agrees" in text
    assert "advice: upper spacing makes 80 %" in text
    assert text.endswith("no warnings")
    assert max(map(len, text.splitlines())) <= WIDTH


def test_stopwatch_page_names_the_miscount() -> None:
    text = stopwatch_text(a_measurement(swing=None, path=None, inertia=None))
    assert text.startswith("stopwatch         3.1092 ± 0.0039 s   (mean of 5 trials)")
    assert re.search(r"3 +10 +28\.07 +2\.8070  miscount, fits 9 swings", text)
    assert re.search(r"for the target +3 more trials", text)


def test_audit_page_shows_times_and_spots() -> None:
    path = a_path()
    spots = tuple(Candidate(k, 100.0 * k, 50.0, 20.0, 1.0 / k) for k in (1, 2))
    path = replace(path, marker=replace(path.marker, candidates=spots))  # type: ignore[type-var]
    text = audit_text(path, written_to="x.path")
    assert "h264, 1280 × 720 px, turned by 90°, 19.97 s, 598 frames" in text
    assert re.search(r"true rate +as stored", text)
    assert re.search(r"unevenness +0\.57 ms", text)
    assert re.search(r"spot 2 +at \(200, 50\), 20 px, score 0\.50", text)
    slow = replace(path, clip=replace(path.clip, time_scale=0.125, capture_rate_hz=240.0))  # type: ignore[type-var]
    assert "240.000 frames/s (stored times times 0.125000)" in audit_text(slow)


def test_layout_of_a_table() -> None:
    assert table([("a", "one"), ("longer", "two")]) == "a       one\nlonger  two"
    assert columns(["name", "n"], [["x", "12"], ["yy", "3"]]) == ["  name   n", "  x     12", "  yy     3"]
    assert doubt_lines(()) == "no warnings"


def test_an_empty_measurement_says_so_little() -> None:
    assert summary_text(Measurement(None, None, None, None, None, {})) == "\nno warnings"
    assert audit_text(Path(np.zeros(1), ())) == "\nno warnings"
