"""Period, damping and what else moved: from signal/ to inertia/."""

from __future__ import annotations

from dataclasses import dataclass

from .arrays import Bools, Floats
from .basic import Doubt, Quantity
from .path import SwingLaw


@dataclass(frozen=True)
class Mode:
    """Another motion found beside the swing; `share` is its amplitude over the swing's in the same record."""

    frequency_hz: float
    share: float
    kind: str


@dataclass(frozen=True, eq=False)
class SwingTrace:
    """What the figures draw: data, fit and residual of the swing on the clip's own times.

    Parameters
    ----------
    t_s, measured, fitted : (n,) float
        In `unit` ("rad", "px" or ""). Covers every usable sample, the parts left out included (fitted is NaN
        there).
    used : (n,) bool
        Samples that the fit used (in the free part, not an outlier).
    amplitude : (n,) float
        Envelope of the fit.
    cycle_t_s, cycle_period_s : (n_cycles,) float
        Periods of single cycles, for the eye.
    free_from_s, free_to_s : float
        The part that swings freely.
    spectrum_hz, spectrum_residual : (m,) float
        Amplitude spectrum of the residual.
    """

    t_s: Floats
    measured: Floats
    fitted: Floats
    used: Bools
    amplitude: Floats
    unit: str
    cycle_t_s: Floats
    cycle_period_s: Floats
    free_from_s: float
    free_to_s: float
    spectrum_hz: Floats
    spectrum_residual: Floats


@dataclass(frozen=True)
class DampingTerm:
    """One cause of the damping ("viscous", "quadratic", "dry") and its share of the loss at start and end."""

    kind: str
    value: Quantity
    share_start: float
    share_end: float


@dataclass(frozen=True, eq=False)
class Swing:
    """Period and damping: the hand-off from stage 2 to stage 3.

    `period` is THE period: the limit of small swings without damping. `period_in_clip` is the mean over the
    part that was fitted, as a stopwatch would see it. What can't be known is None.
    `solved`, `usable` and the doubts are three separate facts: did the solver finish, do the uncertainties
    mean anything, which checks failed.
    """

    period: Quantity
    period_in_clip: Quantity
    decay_rate: Quantity
    half_life: Quantity | None
    damping_ratio: Quantity
    quality_factor: Quantity | None
    log_decrement: Quantity
    amplitude_start: Quantity | None
    amplitude_end: Quantity | None
    cycles: float
    damping_law: str
    damping_terms: tuple[DampingTerm, ...]
    other_modes: tuple[Mode, ...]
    fit_rms: float
    fit_rms_unit: str
    noise_correlation_time_s: float
    amplitude_shift: float | None  # T in clip / T small − 1 that the amplitude made; None where unknown
    outliers: int
    trace: SwingTrace
    solved: bool = True
    usable: bool = True
    law: SwingLaw | None = None
    doubts: tuple[Doubt, ...] = ()
