"""What the figures draw of a fit: data, model, residual spectrum, and the period of every single cycle."""

from __future__ import annotations

import numpy as np

from swingtrack.records import Bools, Floats, SwingTrace
from swingtrack.signal.coordinate import Coordinate
from swingtrack.signal.fitting import Fitted
from swingtrack.signal.spectrum import amplitude_spectrum


def envelope_at(fitted: Fitted, t: Floats) -> Floats:
    """Amplitude through the turning points at times `t` (n,), s from the fit's own start; linear beyond none."""
    values = fitted.model.values
    motion = fitted.model.motion(np.array([0.0, max(float(t[-1]), 0.0)]))
    turning = (motion.turning_x - values["phase"]) / values["omega0"]
    logs = np.log(np.maximum(motion.turning_amplitude, 1e-300))
    return np.asarray(np.exp(np.interp(t, turning, logs)))


def cycle_periods(fitted: Fitted) -> tuple[Floats, Floats]:
    """Time and length of every cycle, s: the model's, moved by what the residuals say of each half-swing.

    A shift δ of a half-swing in time shows as −δ q' in the residual; δ = −Σ r q'/Σ q'² over it.
    """
    kept = fitted.samples.kept
    t = fitted.samples.t[kept]
    values = fitted.model.values
    motion = fitted.model.motion(t)
    turning = (motion.turning_x - values["phase"]) / values["omega0"]
    residual = fitted.kept_residuals / fitted.samples.weight[kept]
    speed = motion.velocity * (values["radius"])
    half = np.clip(np.searchsorted(turning, t, side="right") - 1, 0, len(turning) - 2)
    size = len(turning) - 1
    power = np.bincount(half, weights=speed**2, minlength=size)
    push = np.bincount(half, weights=residual * speed, minlength=size)
    number = np.bincount(half, minlength=size)
    enough = (number >= 4) & (power > 0.3 * np.median(power[power > 0]) if np.any(power > 0) else power > 0)
    shift = np.where(enough, -push / np.where(power > 0, power, 1.0), np.nan)
    crossing = (turning[1:] + turning[:-1]) / 2 + shift
    if len(crossing) < 3:
        return np.zeros(0), np.zeros(0)
    length = crossing[2:] - crossing[:-2]
    middle = (crossing[2:] + crossing[:-2]) / 2
    there = np.isfinite(length)
    return middle[there], length[there]


def make_trace(coordinate: Coordinate, used: Bools, fitted: Fitted, span: tuple[float, float]) -> SwingTrace:
    """The whole record with the fit on its free part; `span` its start and end, s, times as in the input."""
    t, y, unit = coordinate.t, coordinate.y, coordinate.unit
    inside = (t >= span[0]) & (t <= span[1])
    seen = np.full(len(t), np.nan)
    amplitude = np.full(len(t), np.nan)
    local = t[inside] - span[0]
    seen[inside] = fitted.model.seen(local)
    scale = fitted.model.values["radius"]
    amplitude[inside] = scale * envelope_at(fitted, local)
    kept = fitted.samples.kept
    spectrum = amplitude_spectrum(
        fitted.samples.t[kept], fitted.kept_residuals / fitted.samples.weight[kept], padding=2
    )
    middle, length = cycle_periods(fitted)
    return SwingTrace(
        t,
        y,
        seen,
        used,
        amplitude,
        unit,
        middle + span[0],
        length,
        span[0],
        span[1],
        spectrum.hz,
        spectrum.amplitude,
    )
