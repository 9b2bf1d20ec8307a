"""From the final fit to the `Swing` that is handed on."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from swingtrack.records import ExpectedMode, Mode, Quantity, Swing
from swingtrack.signal import quantities as q
from swingtrack.signal.coordinate import Coordinate
from swingtrack.signal.doubts import Findings, find_doubts
from swingtrack.signal.fitting import Fitted
from swingtrack.signal.model import mode_name
from swingtrack.signal.modes import name_mode
from swingtrack.signal.noise import Noise
from swingtrack.signal.opening import Opening
from swingtrack.signal.trace import envelope_at, make_trace

# An amplitude that the clip had to tell by itself counts as known when it is better than this.
KNOWN_TO = 0.25


@dataclass(frozen=True)
class Rivals:
    """What else may move in the clip: doubt of the period from motions not resolved, s; modes that the rig predicts;
    change of period and of period in clip that mended frame times would make, s."""

    spread_s: float
    expected: tuple[ExpectedMode, ...]
    retimed_s: tuple[float, float] = (0.0, 0.0)


def make_swing(coordinate: Coordinate, opening: Opening, noise: Noise, rivals: Rivals) -> Swing:
    """All quantities of the fit with their uncertainties, and the doubts."""
    fitted, span, knowledge = opening.fitted, opening.span, opening.knowledge
    found = q.estimate(fitted, noise)
    values = fitted.model.values
    length = fitted.model.length_s
    envelope = envelope_at(fitted, np.linspace(0, length, 200))
    in_clip = q.period_in_clip(found, length)
    relative = knowledge.law.ratio_relative_u if knowledge.law is not None else 0.0
    parts = (rivals.spread_s, rivals.retimed_s[0], in_clip.period.value * in_clip.shift * relative)
    period = _widened(q.period(found), parts)
    rate = q.decay_rate(found, float(np.mean(envelope)))
    ratio = q.damping_ratio(rate, values["omega0"])
    terms = q.damping_terms(found, float(envelope[0]), float(envelope[-1]))
    modes = _modes(fitted, rivals.expected)
    rms, rms_unit = _rms(fitted, coordinate)
    known = _amplitude_known(found, coordinate, opening)
    used = _used(coordinate, fitted, span)
    findings = Findings(found, noise, coordinate, opening, in_clip, modes, period, rivals.spread_s, known)
    return Swing(
        period=period,
        period_in_clip=_widened(in_clip.period, (rivals.retimed_s[1],)),
        decay_rate=rate,
        half_life=q.half_life(rate),
        damping_ratio=ratio,
        quality_factor=q.quality_factor(ratio),
        log_decrement=q.log_decrement(ratio),
        amplitude_start=_amplitude(found, float(envelope[0]), coordinate, opening) if known else None,
        amplitude_end=_amplitude(found, float(envelope[-1]), coordinate, opening) if known else None,
        cycles=in_clip.cycles,
        damping_law="+".join(term.kind for term in terms) or "none",
        damping_terms=terms,
        other_modes=modes,
        fit_rms=rms,
        fit_rms_unit=rms_unit,
        noise_correlation_time_s=noise.correlation_time_s,
        amplitude_shift=in_clip.shift if known else None,
        outliers=int((~fitted.samples.kept).sum()),
        trace=make_trace(coordinate, used, fitted, span),
        solved=fitted.outcome.settled,
        usable=fitted.outcome.usable,
        law=knowledge.law,
        doubts=(*coordinate.doubts, *knowledge.doubts, *find_doubts(findings)),
    )


def _widened(period: Quantity, parts: tuple[float, ...]) -> Quantity:
    """The period with further, independent doubts; degrees of freedom after Welch and Satterthwaite."""
    u = float(np.sqrt(period.u**2 + sum(part**2 for part in parts)))
    dof = period.dof * (u / period.u) ** 4 if period.u > 0 else period.dof
    return replace(period, u=u, dof=float(dof))


def _amplitude_known(found: q.Estimate, coordinate: Coordinate, opening: Opening) -> bool:
    if not opening.knowledge.amplitude_open:
        return coordinate.amplitude_known
    return found.spread({"amplitude": 1.0}) < KNOWN_TO * found.value("amplitude")


def _amplitude(found: q.Estimate, value: float, coordinate: Coordinate, opening: Opening) -> Quantity:
    """Half-swing where the envelope is `value`; the scale's doubt is in the fit, or added where no law let it in."""
    u = found.spread({"amplitude": 1.0}) * value / found.value("amplitude")
    if "radius" not in found.fitted.model.free:
        u = float(np.hypot(u, value * coordinate.amplitude_relative_u))
    return Quantity(value, u, "rad", found.dof)


def _modes(fitted: Fitted, expected: tuple[ExpectedMode, ...]) -> tuple[Mode, ...]:
    """Each other mode's frequency, its amplitude over the swing's (root mean squares), its kind."""
    values, t, length = fitted.model.values, fitted.samples.t, fitted.model.length_s
    hz = values["omega0"] / (2 * np.pi)
    swing = values["radius"] * float(np.sqrt(np.mean(envelope_at(fitted, np.linspace(0, length, 100)) ** 2)))
    modes = []
    for number in range(1, fitted.model.modes + 1):
        a, b, omega, decay = (values[mode_name(number, part)] for part in ("cos", "sin", "omega", "decay"))
        size = float(np.hypot(a, b) * np.sqrt(np.mean(np.exp(-2 * np.clip(decay * t, -50, 50)))))
        mode_hz = abs(omega) / (2 * np.pi)
        modes.append(Mode(mode_hz, size / swing, name_mode(mode_hz, hz, 1 / length, expected)))
    return tuple(modes)


def _rms(fitted: Fitted, coordinate: Coordinate) -> tuple[float, str]:
    """Root mean square residual, in pixels where it was a clip."""
    r = fitted.kept_residuals / fitted.samples.weight[fitted.samples.kept]
    rms = float(np.sqrt(np.mean(r**2)))
    if coordinate.unit == "rad" and coordinate.radius_px is not None:
        return rms * coordinate.radius_px, "px"
    return rms, coordinate.unit


def _used(coordinate: Coordinate, fitted: Fitted, span: tuple[float, float]) -> np.ndarray:
    used = np.zeros(len(coordinate.t), dtype=bool)
    inside = np.flatnonzero((coordinate.t >= span[0]) & (coordinate.t <= span[1]))
    used[inside[fitted.samples.kept]] = True
    return used
