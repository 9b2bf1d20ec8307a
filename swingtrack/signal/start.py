"""Start values for the exact fit, from the local amplitudes and phases of the free part.

The phase runs at ω0/ρ(A) with ρ the period ratio at the local amplitude, so ω0 is the slope of the measured phase
against ∫ dt/ρ(A(t)): the averaged model, which is right to some 1e-4 and so far inside the exact fit's catch.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from swingtrack.records import Floats, SwingLaw
from swingtrack.signal.windows import Windows


@dataclass(frozen=True)
class StartValues:
    """Values of the swing's parameters at t = `t0_s`; `side` is that of the turning point before it.

    `misfit` is the rms of what the local phases leave, weighted by amplitude, rad.
    """

    t0_s: float
    amplitude: float
    phase: float
    omega0: float
    zeta: float
    rest: float
    side: int
    misfit: float = 0.0


def period_ratio(amplitude: Floats, law: SwingLaw | None, shape: float) -> Floats:
    """T(A)/T(0): by the law's table, else 1 + Λ A²/16 of the pendulum-like family."""
    if law is None:
        return np.asarray(1 + np.clip(shape * amplitude**2 / 16, -0.5, 2.0))
    table_a = np.concatenate([[0.0], law.amplitude_rad])
    table_r = np.concatenate([[1.0], law.period_ratio])
    return np.asarray(np.interp(amplitude**2, table_a**2, table_r))


def start_values(windows: Windows, t0: float, law: SwingLaw | None, shape: float) -> StartValues:
    """From windows that lie in the free part (at least three) to start values at `t0`, s."""
    known = np.isfinite(windows.amplitude)
    t = windows.t[known]
    amplitude = windows.amplitude[known]
    ratio = period_ratio(amplitude, law, shape)
    slow = np.concatenate([[0.0], np.cumsum(np.diff(t) * (1 / ratio[1:] + 1 / ratio[:-1]) / 2)])
    weight = amplitude / amplitude.max()
    omega0, phase = np.polyfit(slow, windows.phase[known], 1, w=weight)
    left = (windows.phase[known] - phase - omega0 * slow) * weight
    decline, level = np.polyfit(t - t[0], np.log(amplitude), 1, w=weight)
    gamma = float(np.clip(-decline, -0.05 * omega0, 0.5 * omega0))
    at_start = float(np.exp(level + gamma * (t[0] - t0)))
    ratio0 = float(period_ratio(np.array([at_start]), law, shape)[0])
    turned = float(phase - omega0 * (t[0] - t0) / ratio0)
    halves = int(np.floor(turned / np.pi))
    since = (turned - halves * np.pi) * ratio0
    return StartValues(
        t0,
        at_start * float(np.exp(gamma * since / omega0)),
        since,
        float(omega0),
        gamma / float(omega0),
        float(np.average(windows.rest[known], weights=weight)),
        1 if halves % 2 == 0 else -1,
        float(np.sqrt(np.mean(left**2))),
    )
