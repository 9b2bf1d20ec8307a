"""Which figures a measurement has, each with a title and a text for those who can't see it; one figure a file.

Every drawing function takes axes and returns them; nothing is computed but scales and places on the page.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from ..records import Measurement
from .figure_amplitude import amplitude_figure
from .figure_budget import budget_figure
from .figure_period import period_figure
from .figure_spectrum import spectrum_figure
from .figure_stopwatch import stopwatch_figure
from .figure_swing import swing_figure
from .figure_timing import timing_figure
from .look import our_settings, save


@dataclass(frozen=True)
class Drawing:
    """A figure by its file name, what it is called on a page, and what it shows in words."""

    name: str
    title: str
    description: str
    figure: Any


def drawings(measurement: Measurement) -> tuple[Drawing, ...]:
    """All figures for which the measurement has something to draw, in the order of a reader's questions."""
    with our_settings():
        return tuple(_drawings(measurement))


def all_figures(measurement: Measurement) -> dict[str, Any]:
    """Matplotlib figures by name: swing, amplitude, period-amplitude, spectrum, timing, budget, stopwatch."""
    return {drawing.name: drawing.figure for drawing in drawings(measurement)}


def figure_files(measurement: Measurement) -> dict[str, bytes]:
    """All figures that the measurement has, as file name → bytes, PNG and SVG of each."""
    return {
        f"{drawing.name}.{kind}": save(drawing.figure, kind)
        for drawing in drawings(measurement)
        for kind in ("png", "svg")
    }


def _drawings(measurement: Measurement) -> Iterator[Drawing]:
    swing, inertia, stopwatch, path = (
        measurement.swing,
        measurement.inertia,
        measurement.stopwatch,
        measurement.path,
    )
    if swing is not None:
        yield Drawing(
            "swing",
            "The swing, its fit and what is left",
            "Upper part: the measured swing as points and the fitted swing as a line against time. "
            "Lower part: measured less fitted on the same time axis.",
            swing_figure(swing.trace),
        )
        yield Drawing(
            "amplitude",
            "Amplitude against time",
            f"The swing against time inside the fitted amplitude, which falls by {swing.damping_law} damping.",
            amplitude_figure(swing),
        )
        yield Drawing(
            "period-amplitude",
            "Period against amplitude",
            "The period of each single cycle as points against its amplitude"
            + ("" if swing.law is None else f", the exact law of the {swing.law.name} suspension as a line")
            + ", and the period of small swings at zero amplitude.",
            period_figure(swing),
        )
        others = ", ".join(mode.kind for mode in swing.other_modes)
        yield Drawing(
            "spectrum",
            "What else moved",
            "Amplitude spectrum of the residual on logarithmic axes; a line marks the swing's own frequency"
            + (f", dashed lines mark: {others}." if others else "; no other motion was found."),
            spectrum_figure(swing),
        )
    if path is not None and path.t_s.size > 1:
        yield Drawing(
            "timing",
            "Timing of the frames",
            "The interval before each frame against time in the clip, with the median as a line; gaps are crossed.",
            timing_figure(path),
        )
    if inertia is not None and inertia.budget:
        yield Drawing(
            "budget",
            "Where the uncertainty comes from",
            "Bars of each input's share of the variance of the moment of inertia, the largest on top; "
            "the table of inputs has the same numbers.",
            budget_figure(inertia.budget),
        )
    if stopwatch is not None:
        clip_period = None if swing is None else swing.period_in_clip
        yield Drawing(
            "stopwatch",
            "Stopwatch against clip" if swing is not None else "Stopwatch runs",
            "The period of each hand-timed run as a point, with bands for the mean of the runs"
            + (" and the clip's own period." if swing is not None else "."),
            stopwatch_figure(stopwatch, clip_period),
        )
