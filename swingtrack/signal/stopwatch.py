"""Hand-timed runs: the period they give, whether they can be trusted, and how they stand beside a clip."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from scipy.special import stdtrit

from ..records import AgainstClip, Bools, Doubt, Floats, Quantity, Stopwatch, Trial
from .stopwatch_counts import PUBLISHED_SCATTER_S, count_errors, set_outliers_aside
from .stopwatch_sheet import Run, TrialSheet, read_trials

__all__ = ["Run", "TrialSheet", "assess_trials", "compare_with_clip", "read_trials"]

LEVER = 0.4  # (largest − smallest)/largest count from which a line says more than a mean of ratios
FEWEST_TO_JUDGE = 5  # below, a line's residuals leave too little freedom for a test of outliers
FACTOR_TOLERANCE = 0.06  # how near to 2, 4, 8 a ratio of periods must be to be laid to that
AGREE = 1.0  # |E_n| up to which two results agree (ISO/IEC 17043)


@dataclass(frozen=True)
class _Line:
    """seconds = offset + counts · period, with standard uncertainties; `scatter_s` of one run."""

    period: Quantity
    offset: Quantity | None
    scatter_s: float
    method: str


def assess_trials(sheet: TrialSheet, *, target_relative_u: float | None = None) -> Stopwatch:
    """Period, scatter and verdict of hand-timed runs.

    Where the counts differ enough, the period is the slope of seconds against count, from which a constant bias of
    starting and stopping drops out; otherwise seconds over counts. u is that of the mean (slope), with its degrees
    of freedom for Student's t; a single run takes the published scatter of a hand.

    Parameters
    ----------
    sheet : TrialSheet
    target_relative_u : float, optional
        Wanted relative standard uncertainty of the period, for `further_trials_for_target`.
    """
    swings = np.array([run.swings for run in sheet.runs], dtype=np.float64)
    seconds = np.array([run.seconds for run in sheet.runs])
    if sheet.laps:
        swings, seconds = swings - swings[0], seconds - seconds[0]
        off, _ = np.zeros(swings.size), 0.0
        off[1:], _ = count_errors(swings[1:], seconds[1:])
    else:
        off, _ = count_errors(swings, seconds)
    counts = swings + off
    kept = np.ones(counts.size, dtype=bool)
    if counts.size >= FEWEST_TO_JUDGE:
        first = _fit(counts, seconds, kept, laps=sheet.laps)
        offset = first.offset.value if first.offset is not None else 0.0
        kept = set_outliers_aside(seconds - offset - counts * first.period.value)
    line = _fit(counts, seconds, kept, laps=sheet.laps)
    trials = tuple(
        Trial(
            swings=run.swings,
            seconds=run.seconds,
            period_s=run.seconds / run.swings,
            verdict="miscount" if off[i] else "ok" if kept[i] else "outlier",
            swings_that_fit=run.swings + int(off[i]) if off[i] else None,
            start_s=run.start_s,
        )
        for i, run in enumerate(sheet.runs)
    )
    return Stopwatch(
        period=line.period,
        trials=trials,
        scatter_s=line.scatter_s,
        method=line.method,
        offset=line.offset,
        further_trials_for_target=_further(line, counts[kept], target_relative_u),
        doubts=_doubts(trials, line, counts, target_relative_u),
    )


def compare_with_clip(
    stopwatch: Stopwatch,
    period_in_clip: Quantity,
    *,
    period_between: Callable[[float, float], float] | None = None,
) -> Stopwatch:
    """The same with `against_clip`: the runs held against the clip's period.

    Parameters
    ----------
    stopwatch : Stopwatch
    period_in_clip : Quantity
        Mean period over the clip, s.
    period_between : callable, optional
        Mean period, s, between two times in the clip: for runs that say when they began, so that each is compared
        at the amplitude at which it was timed.

    Notes
    -----
    E_n = (x − X)/√(U² + U_ref²) with expanded uncertainties; |E_n| ≤ 1 is agreement (ISO/IEC 17043).
    """
    expected = [_expected(trial, period_in_clip, period_between) for trial in stopwatch.trials]
    used = [i for i, trial in enumerate(stopwatch.trials) if trial.verdict != "outlier"]
    ratio = float(np.median([period_in_clip.value / stopwatch.trials[i].period_s for i in used]))
    factor = next((f for f in (2, 4, 8) if abs(max(ratio, 1.0 / ratio) / f - 1.0) < FACTOR_TOLERANCE), None)
    if factor is not None:
        verdict, doubt = _factor_verdict(factor, clip_longer=ratio > 1.0)
        against = AgainstClip(_normalised(stopwatch.period, period_in_clip), None, verdict, factor)
        return replace(stopwatch, against_clip=against, doubts=(*stopwatch.doubts, doubt))
    late = np.array(
        [
            trial.seconds - (trial.swings_that_fit or trial.swings) * expected[i]
            for i, trial in enumerate(stopwatch.trials)
            if i in used
        ]
    )
    n = late.size
    spread = float(late.std(ddof=1)) if n > 1 else PUBLISHED_SCATTER_S
    bias = Quantity(float(late.mean()), spread / math.sqrt(n), "s", dof=n - 1 if n > 1 else math.inf)
    e_n = _normalised(stopwatch.period, period_in_clip)
    against = AgainstClip(e_n, bias, _verdict(stopwatch, e_n), None)
    doubts = stopwatch.doubts
    if abs(e_n) > AGREE:
        difference = stopwatch.period.value / period_in_clip.value - 1.0
        doubts = (
            *doubts,
            Doubt(
                "stopwatch-disagrees",
                f"The stopwatch's period is {100 * difference:+.2f} % off the clip's (E_n = {e_n:.1f}).",
                "Look for a wrong count, a larger swing than in the clip, or a clip with stretched times.",
            ),
        )
    return replace(stopwatch, against_clip=against, doubts=doubts)


def _fit(counts: Floats, seconds: Floats, kept: Bools, *, laps: bool) -> _Line:
    n, t = counts[kept], seconds[kept]
    size = n.size
    different = laps or (size >= 3 and (n.max() - n.min()) >= LEVER * n.max())
    if different and size >= 2 and n.max() > n.min():
        centred = n - n.mean()
        lever = float((centred**2).sum())
        slope = float((centred * t).sum() / lever)
        offset = float(t.mean() - slope * n.mean())
        dof = size - 2
        scatter = _rms(t - offset - slope * n, dof)
        u_offset = scatter * math.sqrt(1.0 / size + n.mean() ** 2 / lever)
        shown = None if laps else Quantity(offset, u_offset, "s", dof=dof or math.inf)
        return _Line(
            Quantity(slope, scatter / math.sqrt(lever), "s", dof=dof or math.inf), shown, scatter, "line"
        )
    # Runs of about the same count: each has the same scatter in seconds, so that total time over total count is best.
    weight = float((n**2).sum())
    period = float((n * t).sum() / weight)
    dof = size - 1
    scatter = _rms(t - n * period, dof)
    return _Line(
        Quantity(period, scatter / math.sqrt(weight), "s", dof=dof or math.inf), None, scatter, "mean"
    )


def _rms(residual: Floats, dof: int) -> float:
    """Scatter of one run, s; the published one where a single run can't tell."""
    return math.sqrt(float((residual**2).sum()) / dof) if dof > 0 else PUBLISHED_SCATTER_S


def _further(line: _Line, counts: Floats, target: float | None) -> int | None:
    """More trials of the same kind until u(T)/T falls to the target."""
    if target is None:
        return None
    needed = (line.period.relative_u / target) ** 2 * counts.size
    return max(0, math.ceil(needed - 1e-9) - counts.size)


def _doubts(
    trials: tuple[Trial, ...], line: _Line, counts: Floats, target: float | None
) -> tuple[Doubt, ...]:
    doubts = []
    for number, trial in enumerate(trials, start=1):
        if trial.verdict == "miscount":
            doubts.append(
                Doubt(
                    "miscount",
                    f"Trial {number} fits {trial.swings_that_fit} swings, not {trial.swings}; it was taken as {trial.swings_that_fit}.",
                    "Count from zero at the start, and once for a full swing to and fro.",
                )
            )
        elif trial.verdict == "outlier":
            doubts.append(
                Doubt(
                    "trial-outlier",
                    f"Trial {number} ({trial.seconds:g} s for {trial.swings} swings) stands apart (Grubbs' test, 1 %) and was set aside.",
                    "Time it again.",
                )
            )
    good = sum(trial.verdict != "outlier" for trial in trials)
    if good < 3:
        doubts.append(
            Doubt(
                "trials-few",
                f"{good} usable trial{'s' if good != 1 else ''} can't show the scatter of the hand; the published {PUBLISHED_SCATTER_S:g} s a run was taken where needed.",
                "Time at least five runs.",
            )
        )
    elif line.scatter_s > 3.0 * PUBLISHED_SCATTER_S:
        doubts.append(
            Doubt(
                "hand-scatters",
                f"The runs scatter by {line.scatter_s:.2f} s each; a practised hand scatters by {PUBLISHED_SCATTER_S:g} s.",
                "Start and stop as the dot passes the middle, where it is fastest, and count down to it.",
            )
        )
    if target is not None and line.period.relative_u > target:
        more = _further(line, counts, target)
        swings = math.ceil(float(counts.mean()) * line.period.relative_u / target)
        doubts.append(
            Doubt(
                "target-not-met",
                f"u(T)/T is {line.period.relative_u:.2g}, over the wanted {target:.2g}.",
                f"{more} more trials like these, or as many as now with {swings} swings each.",
            )
        )
    return tuple(doubts)


def _expected(
    trial: Trial, period_in_clip: Quantity, period_between: Callable[[float, float], float] | None
) -> float:
    if period_between is None or trial.start_s is None:
        return period_in_clip.value
    return period_between(trial.start_s, trial.start_s + trial.seconds)


def _normalised(mine: Quantity, reference: Quantity) -> float:
    """E_n with about 95 % expanded uncertainties."""
    expanded = math.hypot(_k(mine.dof) * mine.u, _k(reference.dof) * reference.u)
    difference = mine.value - reference.value
    return (
        difference / expanded
        if expanded > 0.0
        else math.copysign(math.inf, difference)
        if difference
        else 0.0
    )


def _k(dof: float) -> float:
    return 1.96 if math.isinf(dof) else float(stdtrit(max(dof, 1.0), 0.975))


def _verdict(stopwatch: Stopwatch, e_n: float) -> str:
    wrong = sum(trial.verdict == "miscount" for trial in stopwatch.trials)
    if abs(e_n) > AGREE:
        return "the runs can't be trusted: they differ from the clip by more than both doubts together"
    if wrong:
        return f"the runs agree with the clip once {wrong} miscount{'s are' if wrong > 1 else ' is'} mended"
    return "the runs can be trusted within their own doubt"


def _factor_verdict(factor: int, *, clip_longer: bool) -> tuple[str, Doubt]:
    if not clip_longer:
        text = f"the stopwatch's period is {factor} times the clip's"
        advice = "Was only every second swing counted? One swing is to and fro. Or were the clip's times squeezed (time lapse)?"
        return f"{text}: count again", Doubt("factor-between", text.capitalize() + ".", advice)
    text = f"the clip's period is {factor} times the stopwatch's"
    if factor == 2:
        advice = (
            "Were half swings counted as whole ones? If not, the clip is slow motion: give --capture-rate."
        )
        return f"{text}: half swings counted as whole ones, or slow motion", Doubt(
            "factor-between", text.capitalize() + ".", advice
        )
    advice = f"The clip is slow motion with stretched times: give the true rate, {factor} times the stored one, with --capture-rate."
    return f"{text}: slow motion", Doubt("factor-between", text.capitalize() + ".", advice)
