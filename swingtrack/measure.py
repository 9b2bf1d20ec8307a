"""The pipeline: clip in, measurement out. The one place where the stages meet.

    clip ──► marker ──► signal ──► inertia
              Path       Swing      Inertia

The signal stage needs one thing of the inertia stage, how the period grows with amplitude in this suspension;
that law in turn needs the radius of gyration, hence the period. So the swing is fitted once with the law of a
first period and once more with the law of the period found: the law's own part moves by the square of a small
correction, and a second pass settles it below 1e-9.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import asdict, dataclass, replace
from pathlib import Path as FilePath
from typing import Any

import numpy as np

from .errors import BadInput, Doubtful
from .records import Doubt, Inertia, Measurement, Path, Quantity, Rig, Series, Stopwatch, Swing, SwingLaw

Progress = Callable[[str, float], None]

CLOCK_LIMITS_PPM = 50.0  # phones are usually within 20, computers' median is 78: docs/uncertainty.md
HAND_AMPLITUDE_RAD = math.radians(10.0)  # what a hand starts as a rule: common practice, no source
LAW_BEYOND_AMPLITUDE = (
    1.25  # how far past the largest swing seen the law is worked out, so that a fit can roam
)


@dataclass(frozen=True)
class MeasureSettings:
    """What a user may ask of a measurement beside the files.

    Parameters
    ----------
    dot : (x, y) or None
        Where the dot is, upright pixels in the first frame used; None: found.
    dots : int
        1 or 2.
    choose : int or None
        Number of a candidate offered by an earlier run.
    from_s, to_s : float or None
        The part of the clip to use, in real seconds.
    capture_rate_hz : float or None
        True frame rate of a slow-motion clip whose stored times are stretched.
    readout_ms : float or None
        Time the sensor takes from its first row to its last.
    clock_ppm : float
        Limits (half-width) of the camera clock's relative error, parts per million.
    """

    dot: tuple[float, float] | None = None
    dots: int = 1
    choose: int | None = None
    from_s: float | None = None
    to_s: float | None = None
    capture_rate_hz: float | None = None
    readout_ms: float | None = None
    clock_ppm: float = CLOCK_LIMITS_PPM


def measure_clip(
    file: str | FilePath,
    *,
    rig: Rig | None = None,
    trials: str | FilePath | None = None,
    settings: MeasureSettings | None = None,
    progress: Progress | None = None,
) -> Measurement:
    """Measure one clip: period, damping and, with a rig, the moment of inertia.

    Parameters
    ----------
    file : path of the clip
    rig : Rig, optional
        As read by `rig.read_rig`; without it there is no moment of inertia.
    trials : path, optional
        A trial sheet of stopwatch runs to hold against the clip.
    settings : MeasureSettings, optional
    progress : callable, optional
        Called with what is being done and the share of it, 0 to 1.

    Raises
    ------
    BadClip, BadSeries
        The clip or the trial sheet can't be used.
    NothingToMeasure
        No dot is found, or nothing swings.
    """
    settings = settings or MeasureSettings()
    sheet = None
    if trials is not None:
        from .signal.stopwatch import read_trials

        sheet = read_trials(trials)  # before the clip: a fault in the sheet is known at once
    path = follow_clip(file, settings=settings, progress=progress)
    _tell(progress, "fitting", 0.0)
    measurement = measure_path(path, rig=rig, sheet=sheet, clock_ppm=settings.clock_ppm)
    _tell(progress, "fitting", 1.0)
    return replace(measurement, inputs=_inputs(file, rig, trials, settings))


def follow_clip(
    file: str | FilePath, *, settings: MeasureSettings | None = None, progress: Progress | None = None
) -> Path:
    """Follow the dot through a clip: stage 1 alone, with the timing audit in `Path.clip`."""
    from .clip import open_clip
    from .marker import MarkerSettings, follow_marker

    settings = settings or MeasureSettings()
    wanted = MarkerSettings(
        dot=settings.dot,
        dots=settings.dots,
        from_s=settings.from_s,
        to_s=settings.to_s,
        readout_ms=settings.readout_ms,
        choose=settings.choose,
    )
    with open_clip(file, capture_rate_hz=settings.capture_rate_hz) as clip:
        path = follow_marker(
            clip, settings=wanted, progress=lambda share: _tell(progress, "following", share)
        )
        repeated = clip.repeated_times()
        facts, clip_doubts = clip.facts(), clip.doubts()
    return replace(_without(path, repeated), clip=facts, doubts=(*clip_doubts, *path.doubts))


def measure_path(
    data: Path | Series, *, rig: Rig | None = None, sheet: Any = None, clock_ppm: float | None = None
) -> Measurement:
    """Stages 2 and 3 on a path or series from anywhere; `sheet` as read by `signal.stopwatch.read_trials`.

    `clock_ppm` None takes the times as they are given.
    """
    swing = fit_with_law(data, rig)
    inertia = None if rig is None else _inertia(rig, swing, clock_ppm)
    if clock_ppm is not None:
        swing = _with_clock(swing, clock_ppm)
    stopwatch = None if sheet is None else _stopwatch(sheet, swing)
    doubts = _together(data, swing, inertia, stopwatch)
    path = data if isinstance(data, Path) else None
    return Measurement(path, swing, inertia, stopwatch, rig, {}, doubts)


def fit_with_law(data: Path | Series, rig: Rig | None) -> Swing:
    """Fit the swing with the exact law of the rig's suspension, or without a law where there is no rig."""
    from .inertia import expected_modes, swing_law
    from .signal import FitSettings, fit_swing

    if rig is None:
        return fit_swing(data)
    reach = _largest_swing(data)
    # The radius of gyration that the law needs asks little of the period: a plain fit will do.
    plain = FitSettings(damping=("viscous",), most_modes=0, view_shape=False)
    first = fit_swing(data, law=swing_law(rig, period_s=None, q_max_rad=reach), view=rig.view, settings=plain)
    law = _law_for(rig, first, reach)
    return fit_swing(
        data, law=law, view=rig.view, expected_modes=tuple(expected_modes(rig, first.period.value))
    )


def require_no_doubts(measurement: Measurement) -> None:
    """Strict mode: raise `Doubtful`, which carries the measurement, where it has warnings."""
    if measurement.doubts:
        codes = ", ".join(doubt.code for doubt in measurement.doubts)
        raise Doubtful(
            f"Measured, but doubtful: {codes}.", try_this="Each warning says what to do.", result=measurement
        )


def inertia_of_period(rig: Rig, period: Quantity) -> Measurement:
    """Stage 3 alone: the moment of inertia of a small-swing period that is known from elsewhere."""
    from .inertia import SwingFacts, moment_of_inertia

    inertia = moment_of_inertia(rig, period, facts=SwingFacts(clock_relative_u=0.0))
    inputs = {"rig": rig.source, "period": period.text or str(period.value), "period_s": period}
    return Measurement(None, None, inertia, None, rig, inputs, inertia.doubts)


def measure_trials(
    trials: str | FilePath,
    *,
    rig: Rig | None = None,
    against: Any = None,
    target_relative_u: float | None = None,
) -> Measurement:
    """Stopwatch runs alone, with a rig (gives the moment of inertia), or against a stored clip result.

    `against` is a `result_file.StoredResult` of a clip of the same swing.
    """
    from .signal.stopwatch import assess_trials, compare_with_clip, read_trials

    stopwatch = assess_trials(read_trials(trials), target_relative_u=target_relative_u)
    inputs: dict[str, Any] = {"stopwatch": str(trials)}
    if against is not None:
        stopwatch = compare_with_clip(stopwatch, _period_in_clip(against))
        inputs["against"] = against.file
    if rig is None:
        return Measurement(None, None, None, stopwatch, None, inputs, stopwatch.doubts)
    inertia = moment_by_hand(rig, stopwatch.period)
    inputs["rig"] = rig.source
    return Measurement(None, None, inertia, stopwatch, rig, inputs, (*inertia.doubts, *stopwatch.doubts))


def moment_by_hand(rig: Rig, period: Quantity) -> Inertia:
    """The moment of inertia from a hand-timed period, whose amplitude nobody recorded.

    A swing of A rad lengthens the period by about A²/16 (pendulum, T/T0 = 1 + A²/16 + …); up to `HAND_AMPLITUDE`
    is allowed for, as limits.
    """
    from .inertia import SwingFacts, moment_of_inertia

    stretch = HAND_AMPLITUDE_RAD**2 / 16.0 / math.sqrt(3.0)
    widened = replace(period, u=math.hypot(period.u, stretch * period.value), text="")
    inertia = moment_of_inertia(rig, widened, facts=SwingFacts(clock_relative_u=0.0))
    doubt = Doubt(
        "amplitude-unknown",
        "Nobody recorded the amplitude of the hand-timed swings; up to 10° is allowed for in the period.",
        "Film the swing, or keep below 5°, where the period is 0.05 % too long at most.",
    )
    return replace(inertia, doubts=(*inertia.doubts, doubt))


def _period_in_clip(stored: Any) -> Quantity:
    entry = (stored.document.get("swing") or {}).get("period_in_clip_s")
    if entry is None:
        raise BadInput(
            f"{stored.file} has no period of a clip.", "Needed: the result of swingtrack measure or fit."
        )
    return Quantity(float(entry["value"]), float(entry["u"]), "s", dof=float(entry.get("dof", math.inf)))


def _stopwatch(sheet: Any, swing: Swing) -> Stopwatch:
    """Judge the runs and hold each against the clip at the amplitude at which it was timed, where that is known."""
    from .signal.stopwatch import assess_trials, compare_with_clip

    trace, mean = swing.trace, swing.period_in_clip.value

    def period_between(start_s: float, end_s: float) -> float:
        inside = (trace.cycle_t_s >= start_s) & (trace.cycle_t_s <= end_s)
        return float(trace.cycle_period_s[inside].mean()) if inside.any() else mean

    return compare_with_clip(assess_trials(sheet), swing.period_in_clip, period_between=period_between)


def _largest_swing(data: Path | Series) -> float:
    """How far the law must reach, rad: the largest angle in the series; for a path, where it is not known yet, a right angle."""
    if isinstance(data, Series) and data.unit == "rad":
        seen = float(np.nanmax(np.abs(data.y - np.nanmedian(data.y))))
        return min(max(LAW_BEYOND_AMPLITUDE * seen, 0.2), math.pi)
    return math.pi / 2


def _law_for(rig: Rig, first: Swing, reach: float) -> SwingLaw:
    """The suspension's law for the period and the amplitude of a first fit."""
    from .inertia import swing_law

    amplitude = first.amplitude_start
    if amplitude is not None and amplitude.value > 0.0:
        reach = min(max(LAW_BEYOND_AMPLITUDE * amplitude.value, 0.1), math.pi)
    return swing_law(rig, period_s=first.period.value, q_max_rad=reach)


def _inertia(rig: Rig, swing: Swing, clock_ppm: float | None) -> Inertia:
    from .inertia import SwingFacts, moment_of_inertia

    sway = next((mode for mode in swing.other_modes if mode.kind == "sway"), None)
    facts = SwingFacts(
        clock_relative_u=_clock_u(clock_ppm),
        amplitude_rad=None if swing.amplitude_start is None else swing.amplitude_start.value,
        amplitude_shift=swing.amplitude_shift,
        damping_ratio=swing.damping_ratio.value,
        sway_period_s=None if sway is None else 1.0 / sway.frequency_hz,
    )
    return moment_of_inertia(rig, swing.period, facts=facts)


def _clock_u(clock_ppm: float | None) -> float:
    """Relative standard uncertainty of the clock from its limits: a/√3 (GUM 4.3.7)."""
    return 0.0 if clock_ppm is None else clock_ppm * 1e-6 / math.sqrt(3.0)


def _with_clock(swing: Swing, clock_ppm: float) -> Swing:
    """Put the clock into the uncertainty of every number that is a time or a rate."""
    relative = _clock_u(clock_ppm)

    def widened(quantity: Quantity | None) -> Any:
        if quantity is None:
            return None
        clock = relative * abs(quantity.value)
        u = math.hypot(quantity.u, clock)
        # Welch–Satterthwaite (GUM G.4.1) with a clock of infinite degrees of freedom
        dof = quantity.dof * (u / quantity.u) ** 4 if quantity.u > 0.0 else math.inf
        return replace(quantity, u=u, dof=dof)

    return replace(
        swing,
        period=widened(swing.period),
        period_in_clip=widened(swing.period_in_clip),
        decay_rate=widened(swing.decay_rate),
        half_life=widened(swing.half_life),
    )


def _without(path: Path, repeated: Any) -> Path:
    """Mark frames whose image only repeats the one before as not seen: their time is not their image's."""
    stale = np.isin(np.round(path.t_s, 7), np.round(np.asarray(sorted(repeated), dtype=np.float64), 7))
    if not stale.any():
        return path
    tracks = tuple(replace(track, seen=track.seen & ~stale) for track in path.tracks)
    return replace(path, tracks=tracks)


def _together(
    data: Path | Series, swing: Swing, inertia: Inertia | None, stopwatch: Stopwatch | None
) -> tuple[Doubt, ...]:
    """All doubts of a measurement, in the order of the stages, each code and message once."""
    parts = (data, swing, inertia, stopwatch)
    return tuple(dict.fromkeys(doubt for part in parts if part is not None for doubt in part.doubts))


def _inputs(
    file: str | FilePath, rig: Rig | None, trials: str | FilePath | None, settings: MeasureSettings
) -> Mapping[str, Any]:
    asked = {key: value for key, value in asdict(settings).items() if value is not None}
    given: dict[str, Any] = {"clip": str(file), "settings": asked}
    if rig is not None:
        given["rig"] = rig.source
    if trials is not None:
        given["stopwatch"] = str(trials)
    return given


def _tell(progress: Progress | None, what: str, share: float) -> None:
    if progress is not None:
        progress(what, share)
