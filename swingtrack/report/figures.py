"""The figures of a measurement. Each function takes axes and returns them; nothing is computed but scales."""

from __future__ import annotations

from typing import Any

import numpy as np

from ..records import Inertia, Measurement, Swing, SwingTrace
from .look import DATA, FAINT, FIT, INK, MOST_POINTS, SHADE, THIRD, new_figure, plain, save

DEGREES = 180.0 / np.pi


def figure_files(measurement: Measurement) -> dict[str, bytes]:
    """All figures that the measurement has, as file name → bytes, PNG and SVG of each."""
    files = {}
    for name, figure in all_figures(measurement).items():
        for kind in ("png", "svg"):
            files[f"{name}.{kind}"] = save(figure, kind)
    return files


def all_figures(measurement: Measurement) -> dict[str, Any]:
    """Figures by name: swing, amplitude, spectrum, budget, where there is something to draw."""
    figures: dict[str, Any] = {}
    swing, inertia = measurement.swing, measurement.inertia
    if swing is not None:
        figures["swing"] = swing_figure(swing.trace)
        figures["amplitude"] = _single(lambda ax: draw_amplitude(ax, swing))
        figures["spectrum"] = _single(lambda ax: draw_spectrum(ax, swing))
        if swing.law is not None:
            figures["period-amplitude"] = _single(lambda ax: draw_period_amplitude(ax, swing))
    if inertia is not None and inertia.budget:
        figures["budget"] = _single(lambda ax: draw_budget(ax, inertia))
    return figures


def swing_figure(trace: SwingTrace) -> Any:
    """Data with the fit above, residuals below, on one time axis."""
    figure = new_figure(7.2, 5.0)
    upper, lower = figure.subplots(2, 1, sharex=True, height_ratios=[3, 1.2])
    draw_swing(upper, trace)
    draw_residual(lower, trace)
    upper.tick_params(labelbottom=False)
    upper.set_xlabel("")
    return figure


def draw_swing(ax: Any, trace: SwingTrace) -> Any:
    """Data and fit against time; parts left out are shaded."""
    scale, unit = _scale(trace.unit)
    pick = _thin(trace.t_s.size)
    ax.plot(trace.t_s[pick], scale * trace.measured[pick], ".", ms=2.2, color=DATA, label="measured")
    ax.plot(trace.t_s[pick], scale * trace.fitted[pick], "-", lw=0.8, color=FIT, label="fit")
    out = ~trace.used & np.isfinite(trace.measured)
    inside = out & (trace.t_s >= trace.free_from_s) & (trace.t_s <= trace.free_to_s)
    if inside.any():
        ax.plot(trace.t_s[inside], scale * trace.measured[inside], "x", ms=5, color=INK, label="set aside")
    for start, end in ((trace.t_s[0], trace.free_from_s), (trace.free_to_s, trace.t_s[-1])):
        if end - start > 1e-6:
            ax.axvspan(start, end, color=SHADE, zorder=0)
    ax.legend(loc="upper right", fontsize=8, frameon=False, ncols=3)
    return plain(ax, "time, s", f"swing, {unit}")


def draw_residual(ax: Any, trace: SwingTrace) -> Any:
    """Measured less fitted, for the samples that the fit used."""
    scale, unit = _scale(trace.unit)
    kept = np.flatnonzero(trace.used)[_thin(int(trace.used.sum()))]
    ax.axhline(0.0, color=FAINT, lw=0.8)
    ax.plot(trace.t_s[kept], scale * (trace.measured - trace.fitted)[kept], ".", ms=2.0, color=DATA)
    return plain(ax, "time, s", f"residual, {unit}")


def draw_amplitude(ax: Any, swing: Swing) -> Any:
    """Envelope of the fit over the data's absolute value."""
    trace = swing.trace
    scale, unit = _scale(trace.unit)
    kept = np.flatnonzero(trace.used)[_thin(int(trace.used.sum()))]
    ax.plot(
        trace.t_s[kept], scale * np.abs(trace.measured[kept]), ".", ms=1.6, color=FAINT, label="|measured|"
    )
    ax.plot(
        trace.t_s[kept],
        scale * trace.amplitude[kept],
        "-",
        lw=1.6,
        color=FIT,
        label=f"amplitude, {swing.damping_law} damping",
    )
    ax.set_ylim(bottom=0.0)
    ax.legend(fontsize=8, frameon=False)
    return plain(ax, "time, s", f"amplitude, {unit}")


def draw_spectrum(ax: Any, swing: Swing) -> Any:
    """Amplitude spectrum of the residual, with the swing and other motions named."""
    trace = swing.trace
    scale, unit = _scale(trace.unit)
    ax.semilogy(
        trace.spectrum_hz, np.maximum(scale * trace.spectrum_residual, 1e-12), "-", lw=0.9, color=DATA
    )
    ax.axvline(1.0 / swing.period_in_clip.value, color=FIT, lw=1.0, label="swing")
    for mode in swing.other_modes:
        ax.axvline(mode.frequency_hz, color=THIRD, lw=1.0, ls="--", label=mode.kind)
    ax.legend(fontsize=8, frameon=False)
    return plain(ax, "frequency, Hz", f"amplitude in the residual, {unit}")


def draw_period_amplitude(ax: Any, swing: Swing) -> Any:
    """Periods of single cycles against amplitude, and what the suspension predicts."""
    law, trace = swing.law, swing.trace
    assert law is not None
    if swing.amplitude_start is None:
        ax.text(0.5, 0.5, "the amplitude is not known", ha="center", transform=ax.transAxes, color=INK)
        return plain(ax, "amplitude, °", "period, s")
    at = np.interp(trace.cycle_t_s, trace.t_s, np.nan_to_num(trace.amplitude))
    if trace.unit == "rad":
        ax.plot(DEGREES * at, trace.cycle_period_s, ".", color=DATA, label="single cycles")
    reach = law.amplitude_rad <= 1.15 * swing.amplitude_start.value
    ax.plot(
        DEGREES * law.amplitude_rad[reach],
        swing.period.value * law.period_ratio[reach],
        "-",
        color=FIT,
        label=f"{law.name}, exact",
    )
    ax.legend(fontsize=8, frameon=False)
    return plain(ax, "amplitude, °", "period, s")


def draw_budget(ax: Any, inertia: Inertia) -> Any:
    """Share of each input in the variance of the moment of inertia."""
    lines = sorted(inertia.budget, key=lambda line: line.share)
    ax.barh(
        [line.input.replace("_", " ") for line in lines],
        [100.0 * line.share for line in lines],
        color=DATA,
        height=0.6,
    )
    return plain(ax, "share of the variance, %", "input")


def _single(draw: Any) -> Any:
    figure = new_figure(7.2, 3.2)
    draw(figure.subplots())
    return figure


def _scale(unit: str) -> tuple[float, str]:
    """Angles are shown in degrees; an unknown unit says so."""
    return (DEGREES, "°") if unit == "rad" else (1.0, unit or "unit of the series")


def _thin(count: int) -> Any:
    """Indices of at most `MOST_POINTS` points, evenly."""
    if count <= MOST_POINTS:
        return np.arange(count)
    return np.unique(np.linspace(0, count - 1, MOST_POINTS).astype(int))
