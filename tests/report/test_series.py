"""Reports of several runs, made from results of the combining stage."""

from __future__ import annotations

import json
import math
import re
from typing import Any

import numpy as np
import pytest

from swingtrack.inertia import small_swing_period
from swingtrack.inertia.combine import Run
from swingtrack.inertia.combine_repeats import combine_repeats
from swingtrack.inertia.tensor import fit_tensor
from swingtrack.records import Article, Quantity, Rig, Suspension
from swingtrack.report import combined_text, render_series, series_files, tensor_text
from swingtrack.report.figure_tensor import project
from swingtrack.report.series import series_drawings
from swingtrack.result_file import combined_document, dump, result_document
from tests.report.paddles import a_measurement
from tests.report.test_report_numbers import OWN_WORDS, Page, check

BENCH = {"length": Quantity(1.2, 5e-4, "m"), "upper_spacing": Quantity(0.3, 3e-4, "m")}
TRUE = np.array([[0.030, 0.004, -0.002], [0.004, 0.042, 0.001], [-0.002, 0.001, 0.060]])
HALF = math.sqrt(0.5)
AXES = ((1, 0, 0), (0, 1, 0), (0, 0, 1), (HALF, HALF, 0), (HALF, 0, HALF), (0, HALF, HALF), (HALF, -HALF, 0))


def swing_about(axis: tuple[float, float, float], name: str, error: float) -> Run:
    article = Article("touring paddle <12>", Quantity(0.912, 3e-4, "kg"), axis=axis)
    rig = Rig(article, Suspension("bifilar", BENCH), gravity=Quantity(9.8094, 1.2e-4, "m/s^2"))
    n = np.array(axis)
    period = small_swing_period(rig, float(n @ TRUE @ n)) * (1.0 + error)
    return Run(name, rig, Quantity(period, 1e-4 * period, "s"), source=f"{name}.swing/result.json")


@pytest.fixture(scope="module")
def repeats() -> Any:
    rng = np.random.default_rng(4)
    return combine_repeats(
        [swing_about((0, 0, 1), f"run {k}", 1e-4 * rng.standard_normal()) for k in range(1, 6)]
    )


@pytest.fixture(scope="module")
def tensor() -> Any:
    rng = np.random.default_rng(5)
    return fit_tensor(
        [swing_about(axis, f"axis {k}", 1e-4 * rng.standard_normal()) for k, axis in enumerate(AXES, start=1)]
    )


def page_of(result: Any) -> tuple[Page, dict[str, Any], str]:
    files = [run.source for run in result.runs]
    document = json.loads(dump(combined_document(result, files)))
    html = render_series(result, document=document, runs=[result_document(a_measurement())])
    page = Page()
    page.feed(html)
    return page, document, html


@pytest.mark.parametrize("which", ["repeats", "tensor"])
def test_every_number_is_that_of_the_documents(which: str, request: pytest.FixtureRequest) -> None:
    page, document, html = page_of(request.getfixturevalue(which))
    documents = {"": document, "0": json.loads(dump(result_document(a_measurement())))}
    assert len(page.numbers) > 20
    for given, text in page.numbers:
        if given["data-form"] == "deviation":
            assert float(text.split(" ")[0].replace("−", "-")) == pytest.approx(
                100.0 * float(given["value"]), abs=5.1e-4
            )
        else:
            check(documents[given.get("data-document", "")], given, text)
    rest = page.rest
    for words in OWN_WORDS:
        rest = rest.replace(words, "")
    assert re.findall(r"\d+", re.sub(r"Run \d|of \d runs", "", rest)) == []
    assert "touring paddle <12>" not in html


def test_repeats_show_each_run_the_band_and_the_answer(repeats: Any) -> None:
    figures = {d.name: d.figure for d in series_drawings(repeats)}
    assert list(figures) == ["moments", "deviations", "budget"]
    ax = figures["moments"].axes[0]
    assert ax.get_ylabel() == "moment of inertia, kg m²"
    points = [line.get_ydata()[0] for line in ax.lines if line.get_marker() == "o"]
    assert points == [run.moment.value for run in repeats.runs]
    text = combined_text(repeats)
    assert text.startswith("moment by repeats")
    assert abs(repeats.moment.value - 0.060) < repeats.expanded


def test_tensor_is_drawn_on_its_axes(tensor: Any) -> None:
    figures = {d.name: d.figure for d in series_drawings(tensor)}
    assert list(figures) == ["axes", "principal", "deviations"]
    ax = figures["axes"].axes[0]
    thick = [line for line in ax.lines if line.get_linewidth() > 2.0]
    for line, axis in zip(thick, tensor.principal, strict=True):
        (x0, x1), (y0, y1) = line.get_xdata(), line.get_ydata()
        largest = tensor.principal[-1].moment.value
        tip = project(math.sqrt(axis.moment.value / largest) * np.array(axis.direction))
        assert (x1, y1) == pytest.approx(tuple(tip))
        assert (x0, y0) == pytest.approx(tuple(-tip))
    assert "condition of the axes" in tensor_text(tensor)


def test_projection_is_of_a_view_without_perspective() -> None:
    """Sum of squares of the three projected unit vectors: two, for any parallel projection on a plane across it."""
    assert sum(float(project(unit) @ project(unit)) for unit in np.eye(3)) == pytest.approx(2.0)


def test_files_of_a_series(repeats: Any) -> None:
    files = series_files(repeats)
    assert sorted(files) == [f"{n}.{k}" for n in ("budget", "deviations", "moments") for k in ("png", "svg")]
