"""Names and texts from outside stay text, and the page can reach nothing but itself."""

from __future__ import annotations

import base64
import hashlib
import re
from dataclasses import replace

import numpy as np
import pytest

from swingtrack.records import BudgetLine, Doubt, Measurement, Mode
from swingtrack.report import render_report
from swingtrack.result_file import result_document
from tests.report.paddles import (
    a_measurement,
    a_path,
    a_rig,
    a_small_picture,
    a_swing,
    a_trace,
    an_inertia,
)

EVIL = "\"><script>alert(1)</script><img src=x onerror=alert(2)> &amp; ' </style></title> $x^"


def page_of(measurement: Measurement, *, picture: bytes | None = None) -> str:
    return render_report(measurement, result=result_document(measurement), still_png=picture)


@pytest.fixture(scope="module")
def hostile() -> str:
    """A measurement in which every word that comes from outside is an attack."""
    rig = a_rig(article=EVIL)
    inertia = an_inertia(
        budget=(
            BudgetLine(f"period ({EVIL})", 3.0, 0.1, "s", 1.0, 0.1, 0.9),
            BudgetLine("mass", 1.0, 0.1, "kg", 1.0, 0.1, 0.1),
        ),
        about=EVIL,
        advice=(EVIL,),
    )
    swing = a_swing(damping_law=EVIL, other_modes=(Mode(0.4, 0.1, EVIL),), fit_rms_unit=EVIL)
    path = a_path(name=f"/clips/{EVIL}.mp4")
    clip = replace(path.clip, codec=EVIL, notes=(EVIL,), sha256=EVIL)  # type: ignore[type-var]
    marker = replace(path.marker, found_by=EVIL)  # type: ignore[type-var]
    measured = a_measurement(
        rig=rig,
        inertia=inertia,
        swing=swing,
        path=replace(path, clip=clip, marker=marker),
        inputs={EVIL: {EVIL: [EVIL, 1]}, "rig": rig.source},
        doubts=(Doubt(EVIL, EVIL, EVIL),),
    )
    return page_of(measured, picture=a_small_picture())


def test_no_markup_gets_in(hostile: str) -> None:
    assert "<script>alert" not in hostile
    assert "<img src=x" not in hostile
    assert hostile.count("<script") == 2  # the swing's data and the plot
    assert hostile.count("</style>") == 1
    assert hostile.count("</title>") == 1 + hostile.count("<title id=")


def test_words_are_still_to_be_read(hostile: str) -> None:
    assert "&lt;script&gt;alert(1)" in hostile


def test_unit_of_a_series_does_not_leave_the_data() -> None:
    swing = a_swing(trace=replace(a_trace(), unit="</script><script>alert(3)</script>"))
    page = page_of(a_measurement(swing=swing, inertia=None, stopwatch=None))
    assert "<script>alert(3)" not in page


def test_the_page_fetches_nothing(hostile: str) -> None:
    for page in (hostile, page_of(a_measurement(), picture=a_small_picture())):
        policy = re.search(r'http-equiv="Content-Security-Policy" content="([^"]*)"', page)
        assert policy
        assert policy[1].startswith("default-src &#39;none&#39;")
        for attribute in re.findall(r'\b(?:src|href|xlink:href|action|data|poster)="([^"]*)"', page):
            assert attribute.startswith(("#", "data:image/")), attribute
        assert "@import" not in page
        assert not re.search(r"url\((?!#)", page)


def test_only_the_page_s_own_script_may_run(hostile: str) -> None:
    scripts = re.findall(r"<script>(.*?)</script>", hostile, re.S)
    assert len(scripts) == 1
    said = base64.b64encode(hashlib.sha256(scripts[0].encode()).digest()).decode()
    assert f"script-src &#39;sha256-{said}&#39;" in hostile
    assert " onclick=" not in hostile
    assert " onload=" not in hostile


def test_ids_are_used_once_and_all_references_lead_somewhere() -> None:
    page = page_of(a_measurement(), picture=a_small_picture())
    ids = re.findall(r'\sid="([^"]+)"', page)
    assert len(ids) == len(set(ids))
    wanted = re.findall(r'(?:xlink:)?href="#([^"]+)"', page) + re.findall(r"url\(#([^)]+)\)", page)
    wanted += [name for names in re.findall(r'aria-labelledby="([^"]+)"', page) for name in names.split()]
    assert len(wanted) > 50
    assert set(wanted) <= set(ids)


def test_the_same_measurement_gives_the_same_page() -> None:
    assert page_of(a_measurement()) == page_of(a_measurement())


def test_a_jpeg_is_taken_for_one() -> None:
    page = page_of(a_measurement(inertia=None, stopwatch=None), picture=b"\xff\xd8\xff\xe0 a picture")
    assert 'src="data:image/jpeg;base64,' in page


def test_headings_go_down_one_step_at_a_time() -> None:
    page = page_of(a_measurement(), picture=a_small_picture())
    levels = [int(level) for level in re.findall(r"<h([1-6])", page)]
    assert levels[0] == 1
    assert levels.count(1) == 1
    assert max(np.diff(levels)) <= 1


def test_a_long_record_makes_no_heavy_page() -> None:
    count = 120_000
    t = np.arange(count) / 60.0
    y = 0.1 * np.exp(-t / 900.0) * np.cos(2.0 * t)
    trace = replace(
        a_trace(),
        t_s=t,
        measured=y,
        fitted=y,
        used=np.ones(count, dtype=np.bool_),
        amplitude=np.abs(y),
        free_from_s=0.0,
        free_to_s=float(t[-1]),
    )
    page = page_of(a_measurement(path=None, swing=a_swing(trace=trace), inertia=None, stopwatch=None))
    assert len(page) < 4_000_000
    assert "The record is long" in page
