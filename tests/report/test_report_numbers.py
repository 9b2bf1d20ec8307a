"""Every number in the report is the number in result.json, rounded by the rule, and there are no others."""

from __future__ import annotations

import json
import math
import re
from collections.abc import Mapping
from decimal import ROUND_HALF_EVEN, Decimal
from html.parser import HTMLParser
from typing import Any

import pytest

from swingtrack.records import Measurement
from swingtrack.report import render_report
from swingtrack.result_file import dump, result_document
from tests.report.paddles import a_measurement, a_path, a_small_picture, a_swing, an_inertia

SILENT = {"script", "style", "svg", "title"}
# What the page itself says in figures: the level of confidence, the sum's name, the rule's source.
OWN_WORDS = ("95 %", "SHA-256", "GUM, JCGM 100:2008, 7.2.6")


class Page(HTMLParser):
    """Collects what stands in <data>, what is quoted from the document, and the text that is neither."""

    def __init__(self) -> None:
        super().__init__()
        self.numbers: list[tuple[dict[str, str], str]] = []
        self.said: list[tuple[str, str]] = []
        self.rest = ""
        self._open: list[tuple[str, dict[str, str]]] = []
        self._text = ""

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        given = {name: value or "" for name, value in attrs}
        if tag in ("meta", "img", "br", "link", "input"):
            return
        if tag == "data" or "data-said" in given:
            self._text = ""
        self._open.append((tag, given))

    def handle_endtag(self, tag: str) -> None:
        while self._open:
            name, given = self._open.pop()
            if name == "data":
                self.numbers.append((given, self._text))
            elif "data-said" in given:
                self.said.append((given["data-said"], self._text))
            if name == tag:
                return

    def handle_data(self, data: str) -> None:
        tags = [name for name, _ in self._open]
        marks = [given for _, given in self._open]
        if SILENT & set(tags):
            return
        if "data" in tags or any("data-said" in given for given in marks):
            self._text += data
        elif not any("data-row" in given or given.get("class") == "given" for given in marks):
            self.rest += data + " "


def stored(document: Mapping[str, Any], place: str) -> Any:
    found: Any = document
    for part in place.split("."):
        found = found[int(part)] if isinstance(found, list) else found[part]
    return found


def two_digits(u: float) -> int:
    """Place of the second digit of an uncertainty, by its scientific notation: another way than the program's."""
    return int(f"{u:.1e}".split("e")[1]) - 1


def at_place(value: float, place: int) -> str:
    return format(Decimal(value).quantize(Decimal((0, (1,), place)), ROUND_HALF_EVEN), "f")


def read_number(text: str) -> tuple[float, float | None, str]:
    """Value, what stands behind ±, and the unit of a shown quantity."""
    text = text.replace("−", "-").replace("\u202f", "")
    found = re.fullmatch(r"\(?(-?[\d.]+)(?: ± ([\d.]+))?\)?(?:·10([⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+))? ?(.*)", text)
    assert found, text
    power = 0
    if found[3]:
        power = int(found[3].translate(str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "-0123456789")))
    u = None if found[2] is None else float(f"{found[2]}e{power}")
    return float(f"{found[1]}e{power}"), u, found[4]


def check(document: Mapping[str, Any], given: Mapping[str, str], text: str) -> None:
    entry, form = stored(document, given["data-key"]), given["data-form"]
    scale = float(given.get("data-scale", "1.0"))
    if form == "quantity":
        assert given["value"] == repr(entry["value"])
        k = float(given["data-k"])
        value, u, unit = read_number(text)
        exact_u = entry["u"] * scale * k
        place = two_digits(exact_u)
        assert value == pytest.approx(
            float(at_place(entry["value"] * scale, place)), rel=1e-12, abs=1e-300
        ), given
        assert u == pytest.approx(float(at_place(exact_u, place)), rel=1e-12), given
        assert unit == {"1": "", "kg m^2": "kg m²", "m/s^2": "m/s²"}.get(
            given.get("data-unit", ""), given.get("data-unit", "")
        )
        return
    if form == "length":
        assert text == str(len(entry)) == given["value"]
        return
    assert given["value"] == repr(entry), given
    value = (
        read_number(text.replace("< 0.1 %", "0.0001 %").removeprefix("< "))[0] if form != "change" else 0.0
    )
    if form == "count":
        assert value == entry
    elif form == "percent":
        assert value / 100.0 == pytest.approx(entry, abs=0.51 * 10.0 ** -(2 + int(given["data-digits"])))
    elif form == "bare" and text.startswith("< "):
        assert entry * scale < read_number(text.removeprefix("< "))[0]
    elif form == "bare":
        digits = int(given["data-digits"])
        assert value == pytest.approx(entry * scale, rel=0.51 * 10.0 ** (1 - digits))
    elif form == "change":
        line = stored(document, given["data-key"].removesuffix(".relative"))
        percent, u, unit = read_number(text)
        assert unit == "%"
        size = line["u"] or abs(line["relative"])
        if size:
            place = two_digits(100.0 * size)
            assert percent == pytest.approx(float(at_place(100.0 * line["relative"], place)))
        assert (u is None) == (line["u"] == 0.0)
    else:
        raise AssertionError(form)


def page_of(measurement: Measurement) -> tuple[Page, dict[str, Any]]:
    document = json.loads(dump(result_document(measurement)))  # as it is read back from the file
    page = Page()
    page.feed(render_report(measurement, result=document, still_png=a_small_picture()))
    return page, document


CASES = {
    "everything": a_measurement(),
    "no rig": a_measurement(inertia=None, rig=None, stopwatch=None, doubts=()),
    "stopwatch alone": a_measurement(path=None, swing=None, inertia=None),
    "inertia alone": a_measurement(path=None, swing=None, stopwatch=None),
    "path alone": Measurement(a_path(), None, None, None, None, {"clip": "a.mp4"}),
    "unknown parts": a_measurement(
        swing=a_swing(
            half_life=None, quality_factor=None, amplitude_start=None, amplitude_end=None, law=None
        ),
        inertia=an_inertia(radius_of_gyration=None, monte_carlo=None, corrections=(), advice=()),
    ),
}


@pytest.mark.parametrize("case", CASES)
def test_every_number_is_that_of_the_document(case: str) -> None:
    page, document = page_of(CASES[case])
    assert len(page.numbers) > 5
    for given, text in page.numbers:
        check(document, given, text)


@pytest.mark.parametrize("case", CASES)
def test_every_quoted_word_is_that_of_the_document(case: str) -> None:
    page, document = page_of(CASES[case])
    for place, text in page.said:
        words = stored(document, place)
        full = ", ".join(map(str, words)) if isinstance(words, list) else str(words)
        assert text
        assert full.endswith(text) or full.replace("_", " ") == text, place


@pytest.mark.parametrize("case", CASES)
def test_there_are_no_other_numbers(case: str) -> None:
    page, _ = page_of(CASES[case])
    rest = page.rest
    for words in OWN_WORDS:
        rest = rest.replace(words, "")
    assert re.findall(r"\d+", rest) == []


def test_a_wrong_digit_would_be_seen() -> None:
    page, document = page_of(CASES["everything"])
    given, text = next(
        (g, t)
        for g, t in page.numbers
        if g["data-key"] == "inertia.moment_kg_m2" and g["data-unit"] == "kg m²"
    )
    assert text == "0.11320 ± 0.00029 kg m²"
    with pytest.raises(AssertionError):
        check(document, given, "0.11321 ± 0.00029 kg m²")
    with pytest.raises(AssertionError):
        check(document, given, "0.1132 ± 0.0003 kg m²")


def test_the_answer_stands_with_its_expanded_uncertainty() -> None:
    page, document = page_of(CASES["everything"])
    first = next(g for g, _ in page.numbers)
    moment = document["inertia"]["moment_kg_m2"]
    assert first["data-key"] == "inertia.moment_kg_m2"
    assert float(first["data-k"]) == moment["k"]
    assert math.isclose(moment["k"] * moment["u"], moment["expanded"])
