"""The first exact fit: the plainest model over the free part, from start values of the local phases."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from swingtrack.errors import NothingToMeasure
from swingtrack.records import Floats, SwingLaw
from swingtrack.signal import priors
from swingtrack.signal.choose import all_damping, first_model
from swingtrack.signal.coordinate import Coordinate
from swingtrack.signal.fitting import Fitted, Samples, fit_robustly
from swingtrack.signal.free_part import find_free_part
from swingtrack.signal.model import SwingModel, blank_values
from swingtrack.signal.priors import Knowledge, gather
from swingtrack.signal.search import Line, without_lines
from swingtrack.signal.settings import FitSettings
from swingtrack.signal.span import settle_span
from swingtrack.signal.start import StartValues, start_values
from swingtrack.signal.windows import Windows, fit_windows


@dataclass(frozen=True, eq=False)
class Opening:
    """The plain fit, its span (s, times as in the input) and what it took for granted."""

    fitted: Fitted
    span: tuple[float, float]
    knowledge: Knowledge


def open_fit(coordinate: Coordinate, line: Line, law: SwingLaw | None, settings: FitSettings) -> Opening:
    """Find the free part about the swing's line and fit the plainest exact model over it.

    Raises
    ------
    NothingToMeasure
        If no part swings freely, or no motion fits.
    """
    windows = fit_windows(coordinate.t, without_lines(coordinate.t, coordinate.y, line.larger_hz), line.hz)
    span = _free_span(coordinate, windows, settings)
    inside = _between(windows, span)
    if np.isfinite(inside.amplitude).sum() < 3:
        raise NothingToMeasure(
            "Fewer than two free swings.", "A few free swings are needed.", "Film for longer."
        )
    inside = _in_radians(inside, coordinate)
    knowledge = gather(coordinate, law, float(np.nanmax(inside.amplitude)))
    model = _model(coordinate, span, inside, knowledge)
    sigma = float(np.nanmedian(windows.misfit))

    def fit_on(model: SwingModel, part: tuple[float, float]) -> Fitted | None:
        model = replace(model, length_s=part[1] - part[0])
        return fit_robustly(model, samples_of(coordinate, part), settings.outlier_limit, sigma=sigma)

    fitted = fit_on(first_model(model, settings.damping, knowledge.free), span)
    if fitted is not None and settings.trim:
        fitted, span = settle_span(_record(coordinate), span, fitted, fit_on)
    if fitted is not None and settings.damping is not None and len(settings.damping) > 1:
        fitted = fit_on(all_damping(fitted.model, settings.damping), span)
    if fitted is None:
        raise NothingToMeasure(
            "The record follows no swing.", "A swing that is left alone is needed.", "Look at the dot's path."
        )
    return Opening(fitted, span, knowledge)


def samples_of(coordinate: Coordinate, span: tuple[float, float]) -> Samples:
    """The coordinate's samples in a span, times counted from its start, weights of unit mean square."""
    inside = (coordinate.t >= span[0]) & (coordinate.t <= span[1])
    weight = 1 / coordinate.u[inside]
    weight = weight / np.sqrt(np.mean(weight**2))
    return Samples(
        coordinate.t[inside] - span[0], coordinate.y[inside], weight, np.ones(int(inside.sum()), bool)
    )


def _record(coordinate: Coordinate) -> tuple[Floats, Floats, Floats]:
    """Times, values and weights of unit mean square over the whole record."""
    weight = 1 / coordinate.u
    return coordinate.t, coordinate.y, weight / np.sqrt(np.mean(weight**2))


def _free_span(coordinate: Coordinate, windows: Windows, settings: FitSettings) -> tuple[float, float]:
    whole = (float(coordinate.t[0]), float(coordinate.t[-1]))
    if not settings.trim:
        return whole
    found = find_free_part(windows)
    if found is None:
        raise NothingToMeasure(
            "No stretch of the record swings freely for a few cycles.",
            "A swing that is left alone is needed.",
            "Release the article and leave it alone, then film for a minute.",
        )
    first = int(np.searchsorted(coordinate.t, max(found[0], whole[0])))
    return float(coordinate.t[first]), min(found[1], whole[1])


def _between(windows: Windows, span: tuple[float, float]) -> Windows:
    inside = (windows.t >= span[0]) & (windows.t <= span[1])
    return Windows(
        windows.t[inside],
        windows.amplitude[inside],
        windows.rest[inside],
        windows.misfit[inside],
        windows.phase[inside],
    )


def _in_radians(windows: Windows, coordinate: Coordinate) -> Windows:
    """The sine of a side view undone; other coordinates as they are."""
    if not (coordinate.sine and coordinate.radius_px):
        return windows
    return replace(windows, amplitude=np.arcsin(np.clip(windows.amplitude / coordinate.radius_px, 0, 0.999)))


def _model(
    coordinate: Coordinate, span: tuple[float, float], windows: Windows, knowledge: Knowledge
) -> SwingModel:
    """The model at its start values, the open shape or amplitude chosen by the local phases."""
    start, shape, scale = _best_start(span[0], windows, knowledge)
    if coordinate.sine and coordinate.radius_px:
        radius = coordinate.radius_px
    elif knowledge.amplitude_open:
        radius = 1 / scale
    else:
        radius = 1.0
    values = blank_values()
    values.update(
        amplitude=start.amplitude,
        phase=start.phase,
        omega0=start.omega0,
        zeta=start.zeta,
        rest=start.rest,
        shape=shape,
        radius=radius,
    )
    return SwingModel(
        np.zeros(0),
        knowledge.restoring,
        values,
        (),
        side=start.side,
        sine=knowledge.sine,
        priors=knowledge.priors,
        length_s=span[1] - span[0],
    )


def _best_start(t0: float, windows: Windows, knowledge: Knowledge) -> tuple[StartValues, float, float]:
    """Start values, shape, and radians a unit of the coordinate."""
    if knowledge.amplitude_open:
        top = float(np.nanmax(windows.amplitude))
        tries = [
            (
                0.0,
                a / top,
                start_values(replace(windows, amplitude=windows.amplitude * a / top), t0, knowledge.law, 0.0),
            )
            for a in priors.AMPLITUDES_TRIED
        ]
    elif "shape" in knowledge.priors:
        prior = knowledge.priors["shape"]
        unit = 1.0 if prior.value else prior.u / 0.5
        tries = [(s * unit, 1.0, start_values(windows, t0, None, s * unit)) for s in priors.SHAPES_TRIED]
    else:
        tries = [(0.0, 1.0, start_values(windows, t0, knowledge.law, 0.0))]
    shape, scale, start = min(tries, key=lambda one: one[2].misfit)
    return start, shape, scale
