"""The report in a real browser: silent, self-contained, accessible, and its plot works by mouse, by keys and not at all."""

from __future__ import annotations

import os
import re
import shutil
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from swingtrack.inertia.tensor import fit_tensor
from swingtrack.report import render_report
from swingtrack.result_file import result_document
from tests.report.paddles import a_measurement, a_small_picture
from tests.report.test_series import AXES, page_of, swing_about

pytestmark = pytest.mark.slow

CHROMIUM = (
    os.environ.get("SWINGTRACK_CHROMIUM") or shutil.which("chromium") or shutil.which("chromium-browser")
)
QUIET = (
    "--no-sandbox",
    "--disable-gpu",
    "--disable-background-networking",
    "--no-first-run",
    "--disable-component-update",
    "--disable-sync",
)


@pytest.fixture(scope="module")
def browser() -> Iterator[Any]:
    api = pytest.importorskip("playwright.sync_api", reason="playwright is not installed")
    if CHROMIUM is None:
        pytest.skip("no chromium on this machine (set SWINGTRACK_CHROMIUM to one)")
    with api.sync_playwright() as driver:
        opened = driver.chromium.launch(executable_path=CHROMIUM, args=list(QUIET))
        yield opened
        opened.close()


@pytest.fixture(scope="module")
def axe() -> str:
    package = pytest.importorskip("axe_playwright_python", reason="axe-core is not installed")
    return (Path(package.__file__).parent / "axe.min.js").read_text(encoding="utf-8")


@pytest.fixture(scope="module")
def report(tmp_path_factory: pytest.TempPathFactory) -> Path:
    measured = a_measurement()
    file = tmp_path_factory.mktemp("report") / "report.html"
    file.write_text(
        render_report(measured, result=result_document(measured), still_png=a_small_picture()),
        encoding="utf-8",
    )
    return file


@pytest.fixture(scope="module")
def series(tmp_path_factory: pytest.TempPathFactory) -> Path:
    runs = [swing_about(axis, f"axis {k}", 0.0) for k, axis in enumerate(AXES)]
    file = tmp_path_factory.mktemp("series") / "report.html"
    file.write_text(page_of(fit_tensor(runs))[2], encoding="utf-8")
    return file


def look(browser: Any, file: Path, **kind: Any) -> tuple[Any, list[str]]:
    """An open page and the list in which everything that it complains of or asks for ends up."""
    page = browser.new_page(**kind)
    heard: list[str] = []
    page.on("console", lambda said: heard.append(f"console {said.type}: {said.text}"))
    page.on("pageerror", lambda error: heard.append(f"error: {error}"))
    page.on(
        "request",
        lambda asked: (
            None if asked.url == file.as_uri() or asked.url.startswith("data:") else heard.append(asked.url)
        ),
    )
    page.goto(file.as_uri())
    return page, heard


KINDS = {
    "wide": {"viewport": {"width": 1280, "height": 900}},
    "narrow": {"viewport": {"width": 390, "height": 844}},
    "dark": {"viewport": {"width": 1280, "height": 900}, "color_scheme": "dark"},
}


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("which", ["report", "series"])
def test_silent_self_contained_and_accessible(
    browser: Any, axe: str, which: str, kind: str, request: pytest.FixtureRequest
) -> None:
    page, heard = look(browser, request.getfixturevalue(which), **KINDS[kind])
    assert page.evaluate("document.documentElement.scrollWidth <= innerWidth")
    page.evaluate(axe)
    found = page.evaluate("axe.run(document, { resultTypes: ['violations'] })")
    assert [(v["id"], v["impact"], v["nodes"][0]["html"][:200]) for v in found["violations"]] == []
    assert heard == []
    page.close()


def test_the_plot_is_read_and_zoomed_by_keys(browser: Any, report: Path) -> None:
    page, heard = look(browser, report, **KINDS["wide"])
    canvas = page.locator("canvas")
    canvas.focus()
    page.keyboard.press("Home")
    for _ in range(100):
        page.keyboard.press("ArrowRight")
    text = page.locator(".readout").inner_text()
    trace = a_measurement().swing.trace  # type: ignore[union-attr]
    assert text.startswith(f"{trace.t_s[100]:.3f} s · measured ")
    shown = float(re.findall(r"measured (−?[\d.]+)", text)[0].replace("−", "-"))
    assert shown == pytest.approx(57.29578 * trace.measured[100], abs=6e-4)
    assert canvas.get_attribute("aria-valuetext") == text
    before = canvas.screenshot()
    page.keyboard.press("+")
    assert canvas.screenshot() != before
    page.keyboard.press("Escape")
    assert canvas.screenshot() == before
    assert heard == []
    page.close()


def test_the_plot_is_read_and_zoomed_by_mouse(browser: Any, report: Path) -> None:
    page, heard = look(browser, report, **KINDS["wide"])
    canvas = page.locator("canvas")
    canvas.scroll_into_view_if_needed()
    box = canvas.bounding_box()
    middle = (box["x"] + box["width"] / 2, box["y"] + box["height"] / 3)
    page.mouse.move(*middle)
    assert re.match(r"(9|10)\.\d{3} s", page.locator(".readout").inner_text())
    page.mouse.down()
    page.mouse.move(middle[0] + 100, middle[1])
    page.mouse.up()
    # Zoomed to a tenth of the record: half the width further the reading line moves by less than a twentieth of it.
    page.mouse.move(box["x"] + 70, middle[1])
    left = float(page.locator(".readout").inner_text().split(" s")[0])
    page.mouse.move(box["x"] + box["width"] - 16, middle[1])
    right = float(page.locator(".readout").inner_text().split(" s")[0])
    assert 0.5 < right - left < 4.0
    page.get_by_role("button", name="Whole record").click()
    page.mouse.move(box["x"] + box["width"] - 16, middle[1])
    assert float(page.locator(".readout").inner_text().split(" s")[0]) > 19.0
    assert heard == []
    page.close()


def test_outliers_are_said_to_be_set_aside(browser: Any, report: Path) -> None:
    page, _ = look(browser, report)
    canvas = page.locator("canvas")
    canvas.focus()
    page.keyboard.press("Home")
    for _ in range(30):
        page.keyboard.press("Shift+ArrowRight")
    assert "set aside by the fit" in page.locator(".readout").inner_text()
    page.close()


def test_without_script_the_figure_is_there(browser: Any, report: Path) -> None:
    context = browser.new_context(java_script_enabled=False)
    page = context.new_page()
    page.goto(report.as_uri())
    assert page.locator("#swing-static svg").is_visible()
    assert not page.locator("canvas").is_visible()
    context.close()


def test_in_print_the_figure_takes_the_plot_s_place(browser: Any, report: Path, tmp_path: Path) -> None:
    page, _ = look(browser, report, color_scheme="dark")
    page.emulate_media(media="print", color_scheme="dark")
    assert page.locator("#swing-static svg").is_visible()
    assert not page.locator("canvas").is_visible()
    ink = page.evaluate("getComputedStyle(document.body).color")
    assert ink == "rgb(34, 40, 46)"  # dark on white even where the screen is dark
    for size in ("A4", "Letter"):
        printed = page.pdf(path=str(tmp_path / f"{size}.pdf"), format=size)
        assert 2 <= len(re.findall(rb"/Type\s*/Page\b", printed)) <= 9
    page.close()
