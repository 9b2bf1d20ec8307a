"""Every figure names quantity and unit on its axes, survives odd measurements, and comes out the same each time."""

from __future__ import annotations

import subprocess
import sys
import xml.etree.ElementTree as ElementTree
from dataclasses import replace

import numpy as np
import pytest

from swingtrack.records import BudgetLine, Measurement, Mode
from swingtrack.report.figures import all_figures, drawings, figure_files
from swingtrack.report.look import save
from tests.report.paddles import a_measurement, a_path, a_swing, a_trace, an_inertia

UNITS = ("°", "s", "ms", "Hz", "%", "px", "unit of the series", "number in the sheet")


@pytest.fixture(scope="module")
def whole() -> Measurement:
    return a_measurement()


def test_all_the_figures_are_there(whole: Measurement) -> None:
    assert list(all_figures(whole)) == [
        "swing",
        "amplitude",
        "period-amplitude",
        "spectrum",
        "timing",
        "budget",
        "stopwatch",
    ]


def test_quantity_and_unit_on_every_axis(whole: Measurement) -> None:
    for name, figure in all_figures(whole).items():
        lowest = figure.axes[-1]
        for ax in figure.axes:
            if name == "budget":  # its bars are named one by one
                assert ax.get_xlabel() == "share of the variance, %"
                assert next(t.get_text() for t in ax.get_yticklabels()) == "upper spacing"
                continue
            labels = [ax.get_ylabel(), lowest.get_xlabel()]
            for label in labels:
                quantity, _, unit = label.rpartition(", ")
                assert quantity, (name, label)
                assert unit in UNITS, (name, label)


def test_files_are_whole_and_the_same_each_time(whole: Measurement) -> None:
    first, second = figure_files(whole), figure_files(whole)
    assert first == second
    for name, content in first.items():
        if name.endswith(".svg"):
            assert ElementTree.fromstring(content).tag.endswith("svg")
        else:
            assert content.startswith(b"\x89PNG")


def test_every_figure_says_what_it_shows(whole: Measurement) -> None:
    for drawing in drawings(whole):
        assert len(drawing.description) > 40
        assert drawing.title


def test_the_law_passes_through_the_small_period(whole: Measurement) -> None:
    ax = all_figures(whole)["period-amplitude"].axes[0]
    line = next(line for line in ax.lines if "exact" in str(line.get_label()))
    assert line.get_ydata()[0] == whole.swing.period.value  # type: ignore[union-attr]
    # small swings: T/T0 = 1 + A²/16 at 8°, as the made-up law says
    at_eight = np.interp(8.0, line.get_xdata(), line.get_ydata())
    assert at_eight / whole.swing.period.value - 1.0 == pytest.approx(np.radians(8.0) ** 2 / 16.0, rel=0.05)  # type: ignore[union-attr]


def test_residual_is_measured_less_fitted_and_outliers_are_crossed(whole: Measurement) -> None:
    trace = whole.swing.trace  # type: ignore[union-attr]
    upper, lower = all_figures(whole)["swing"].axes
    dots = next(line for line in lower.lines if line.get_marker() == ".")
    expected = np.degrees(trace.measured - trace.fitted)[trace.used]
    assert dots.get_ydata() == pytest.approx(expected)
    crosses = next(line for line in upper.lines if line.get_marker() == "x")
    assert crosses.get_xdata().tolist() == trace.t_s[[300, 411]].tolist()


@pytest.mark.parametrize(
    "swing",
    [
        a_swing(law=None),
        a_swing(amplitude_start=None, amplitude_end=None, trace=a_trace(unit="", scale=3.7)),
        a_swing(trace=a_trace(unit="px", scale=900.0), other_modes=()),
        a_swing(half_life=None, quality_factor=None, outliers=0),
        a_swing(trace=a_trace(samples=90)),
        a_swing(
            trace=replace(
                a_trace(),
                cycle_t_s=np.zeros(0),
                cycle_period_s=np.zeros(0),
                spectrum_hz=np.zeros(0),
                spectrum_residual=np.zeros(0),
            )
        ),
        a_swing(
            other_modes=(Mode(0.33, 0.2, "sway"), Mode(0.331, 0.1, "unnamed"), Mode(14.9, 0.1, "bounce"))
        ),
    ],
    ids=["no law", "no amplitude", "pixels", "no decay", "short", "nothing single", "modes alike"],
)
def test_odd_swings_are_drawn(swing: object) -> None:
    drawn = all_figures(a_measurement(swing=swing, stopwatch=None, inertia=None))
    assert len(drawn) == 5
    for figure in drawn.values():
        assert save(figure, "svg")


def test_parts_that_are_missing_are_not_drawn() -> None:
    nothing = Measurement(None, None, None, None, None, {})
    assert figure_files(nothing) == {}
    assert list(all_figures(Measurement(a_path(), None, None, None, None, {}))) == ["timing"]


def test_names_are_text_and_no_formulas() -> None:
    budget = (BudgetLine("mass of $x^", 1.0, 0.1, "kg", 1.0, 0.1, 1.0),)
    figure = all_figures(a_measurement(inertia=an_inertia(budget=budget)))["budget"]
    assert "mass of $x^" in save(figure, "svg").decode()


def test_a_long_record_makes_no_long_file() -> None:
    """Ten hours at 60 frames a second are drawn in about the size of a minute: extremes of stretches alone are kept."""
    count = 200_000
    t = np.arange(count) / 60.0
    y = 0.1 * np.exp(-t / 2000.0) * np.cos(t)
    short = a_trace()
    long = replace(
        short,
        t_s=t,
        measured=y,
        fitted=y,
        used=np.ones(count, dtype=np.bool_),
        amplitude=0.1 * np.exp(-t / 2000.0),
        free_from_s=0.0,
        free_to_s=float(t[-1]),
    )
    drawn = all_figures(a_measurement(swing=a_swing(trace=long), inertia=None, stopwatch=None))
    assert len(save(drawn["swing"], "svg")) < 2_500_000
    assert len(save(drawn["amplitude"], "svg")) < 600_000


def test_nothing_needs_a_screen() -> None:
    code = (
        "import sys; from tests.report.paddles import a_measurement; from swingtrack.report import figure_files; "
        "figure_files(a_measurement()); print('matplotlib.pyplot' in sys.modules)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "False"
