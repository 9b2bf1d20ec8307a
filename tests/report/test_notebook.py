"""Records show themselves in a notebook: every kind, escaped, rounded by the one rule."""

from __future__ import annotations

import xml.etree.ElementTree as ElementTree

import pytest

from swingtrack.records import Doubt, Quantity
from swingtrack.report import notebook_html
from tests.report.paddles import a_measurement, a_path, a_rig, a_stopwatch, a_swing, an_inertia


@pytest.mark.parametrize(
    "record",
    [
        a_measurement(),
        a_swing(),
        an_inertia(),
        a_stopwatch(),
        a_path(),
        a_path().clip,
        a_rig(),
        a_swing().trace,
        Doubt("few-cycles", "seen", "do"),
    ],
    ids=lambda record: type(record).__name__,
)
def test_each_record_is_a_well_formed_table(record: object) -> None:
    tree = ElementTree.fromstring(f"<div>{notebook_html(record)}</div>")
    rows = tree.findall(".//tr")
    assert 1 <= len(rows) <= 30
    assert all(row.find("td") is not None for row in rows)


def test_numbers_and_warnings() -> None:
    html = notebook_html(a_measurement())
    assert "0.11320 ± 0.00029 kg m²" in html
    assert "Film 15 or more." in html
    assert notebook_html(Quantity(0.0021, 1.1e-5, "m")) == "<span>2.100 ± 0.011 mm</span>"


def test_names_are_escaped() -> None:
    html = notebook_html(a_measurement(rig=a_rig(article="<script>alert(1)</script>")))
    assert "<script>" not in html
