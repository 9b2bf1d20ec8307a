"""The terminal pages of a measurement: short, aligned, rounded to the uncertainty, the answer first. No computing."""

from __future__ import annotations

import textwrap
from collections.abc import Sequence

from ..records import BudgetLine, Inertia, Measurement, Path, Stopwatch, Swing
from .layout import WIDTH, Rows, advice_lines, clean, columns, doubt_lines, page, short, table
from .rounding import bare, change, count, percent, rounded, show
from .units import second_moment_unit, shown_in

FROM_RAD = shown_in("rad", 1.0)[1]
EVEN_MS = 1e-3  # unevenness of the frames below it is dust of the arithmetic
CAUSES = 3  # inputs named in the summary as where the doubt comes from


def summary_text(measurement: Measurement, *, written_to: str = "") -> str:
    """What `measure` and `fit` print: the answer first, at most 25 lines."""
    rows: Rows = []
    if measurement.inertia is not None:
        rows += inertia_rows(measurement.inertia)
    if measurement.swing is not None:
        rows += swing_rows(measurement.swing)
    if measurement.path is not None:
        rows += path_rows(measurement.path)
    if measurement.stopwatch is not None:
        rows += stopwatch_rows(measurement.stopwatch)
    if written_to:
        rows.append(("written to", written_to))
    return page(rows, measurement.doubts)


def inertia_text(measurement: Measurement) -> str:
    """What `inertia` prints: the moment, its budget, corrections, advice."""
    inertia = measurement.inertia
    assert inertia is not None
    lines = [table(inertia_rows(inertia)), "", *_budget_lines(inertia)]
    if inertia.corrections:
        lines += ["", *_correction_lines(inertia)]
    lines += advice_lines(inertia.advice)
    return "\n".join(lines) + "\n" + doubt_lines(measurement.doubts)


def stopwatch_text(measurement: Measurement) -> str:
    """What `stopwatch` prints: the period, each trial's verdict, the verdict on the whole."""
    stopwatch = measurement.stopwatch
    assert stopwatch is not None
    rows = inertia_rows(measurement.inertia) if measurement.inertia is not None else []
    rows += stopwatch_rows(stopwatch)
    body = []
    for number, trial in enumerate(stopwatch.trials, start=1):
        fits = f", fits {trial.swings_that_fit} swings" if trial.swings_that_fit is not None else ""
        body.append(
            [
                str(number),
                count(trial.swings),
                bare(trial.seconds, 4),
                bare(trial.period_s, 5),
                trial.verdict + fits,
            ]
        )
    lines = columns(["trial", "swings", "seconds", "period, s", "verdict"], body, left=(4,))
    return "\n".join([table(rows), "", *lines]) + "\n" + doubt_lines(measurement.doubts)


def audit_text(path: Path, *, written_to: str = "") -> str:
    """What `follow` prints: the timing audit of the clip, and how the dot was followed."""
    rows: Rows = []
    clip = path.clip
    if clip is not None:
        turned = f", turned by {clip.rotation_deg}°" if clip.rotation_deg else ""
        true = bare(clip.capture_rate_hz, 6, "frames/s")
        rows = [
            (
                "clip",
                f"{clip.codec}, {clip.width} × {clip.height} px{turned}, {bare(clip.duration_s, 4, 's')}, {count(clip.frames)} frames",
            ),
            ("stored rate", bare(clip.stored_rate_hz, 6, "frames/s")),
            (
                "true rate",
                "as stored"
                if clip.time_scale == 1.0
                else f"{true} (stored times times {bare(clip.time_scale, 6)})",
            ),
            ("unevenness", bare(clip.interval_spread_ms, 2, "ms", floor=EVEN_MS)),
            ("dropped", f"{count(clip.dropped_frames)} frames"),
            ("repeated", f"{count(clip.repeated_frames)} images under a new time"),
            *[("", note) for note in clip.notes],
        ]
    rows += path_rows(path)
    if path.marker is not None and len(path.marker.candidates) > 1:
        for spot in path.marker.candidates:
            rows.append(
                (
                    f"spot {spot.number}",
                    f"at ({spot.x_px:.0f}, {spot.y_px:.0f}), {bare(spot.diameter_px, 2, 'px')}, score {spot.score:.2f}",
                )
            )
    if written_to:
        rows.append(("written to", written_to))
    return page(rows, path.doubts, most_lines=60)


def inertia_rows(inertia: Inertia) -> Rows:
    """The answer with its expanded uncertainty, in two units, and what it owes it to."""
    unit, scale = second_moment_unit(inertia.moment.value)
    rows = [
        (
            "moment of inertia",
            f"{show(inertia.moment, 'kg m²', k=inertia.k)}   (k = {inertia.k:.2f}, about 95 %)",
        ),
        ("", show(inertia.moment, unit, scale=scale, k=inertia.k)),
        ("about", inertia.about),
    ]
    if inertia.moment_about_edge is not None:
        rows.append(("about the edge", show(inertia.moment_about_edge, "kg m²", k=inertia.k)))
    if inertia.radius_of_gyration is not None:
        rows.append(("radius of gyration", show(inertia.radius_of_gyration, "mm", scale=1e3, k=inertia.k)))
    if inertia.budget:
        rows.append(("doubt comes from", causes(inertia.budget)))
    return rows


def causes(budget: Sequence[BudgetLine], most: int = CAUSES) -> str:
    """The inputs that make up most of the variance, the largest first."""
    ranked = sorted(budget, key=lambda line: -line.share)[:most]
    return ", ".join(f"{line.input.replace('_', ' ')} {percent(line.share, decimals=0)}" for line in ranked)


def swing_rows(swing: Swing) -> Rows:
    """Period, damping, amplitude, and what else moved."""
    quality = "" if swing.quality_factor is None else f"   Q {show(swing.quality_factor)}"
    rows = [
        ("period, small swings", f"{show(swing.period)}   (± is one standard uncertainty)"),
        ("period in the clip", show(swing.period_in_clip)),
        ("decay rate", f"{show(swing.decay_rate)}   ({swing.damping_law})"),
        ("half-life", show(swing.half_life)),
        ("damping ratio", show(swing.damping_ratio) + quality),
        ("log decrement", show(swing.log_decrement)),
    ]
    cycles = f"{bare(swing.cycles, 3)} cycles"
    if swing.amplitude_start is not None and swing.amplitude_end is not None:
        start, end = (
            rounded(angle.value * FROM_RAD, angle.u * FROM_RAD)[0]
            for angle in (swing.amplitude_start, swing.amplitude_end)
        )
        rows.append(("amplitude", f"{start}° to {end}° in {cycles}"))
    else:
        rows.append(("amplitude", f"not known; {cycles}"))
    if swing.other_modes:
        found = "; ".join(
            f"{mode.kind} at {bare(mode.frequency_hz, 4, 'Hz')}, {percent(mode.share)}"
            for mode in swing.other_modes
        )
        rows.append(("other motion", found))
    rows.append(("residual", bare(swing.fit_rms, 3, swing.fit_rms_unit)))
    return rows


def path_rows(path: Path) -> Rows:
    """How the dot was found and followed."""
    marker = path.marker
    if marker is None:
        return []
    size = "" if marker.diameter_px is None else f", {bare(marker.diameter_px, 2, 'px')} across"
    return [
        (
            "dot",
            f"{marker.found_by}{size}, followed in {count(marker.frames_followed)} frames, lost in {count(marker.frames_lost)}",
        )
    ]


def stopwatch_rows(stopwatch: Stopwatch) -> Rows:
    """The hand-timed period and what the clip says of it."""
    rows = [
        ("stopwatch", f"{show(stopwatch.period)}   ({stopwatch.method} of {len(stopwatch.trials)} trials)")
    ]
    against = stopwatch.against_clip
    if against is not None:
        rows.append(("against the clip", f"E_n = {bare(against.normalised_error, 2)}: {against.verdict}"))
    if stopwatch.further_trials_for_target is not None:
        rows.append(("for the target", f"{count(stopwatch.further_trials_for_target)} more trials"))
    return rows


def _correction_lines(inertia: Inertia) -> list[str]:
    body, reasons = [], []
    for item in inertia.corrections:
        known = item.applied or item.relative or item.u
        size = change(item.relative, item.u) if known else "not known"
        body.append([item.name, size, "applied" if item.applied else "not applied"])
        reasons.append(item.reason)
    head, *rows = columns(["correction", "change", ""], body, left=(0, 2))
    wide = max(len(row) for row in rows) + 2
    lines = [head]
    for row, reason in zip(rows, reasons, strict=True):
        folded = textwrap.wrap(clean(reason), max(30, WIDTH - wide)) or [""]
        lines.append(f"{row:<{wide}}{folded[0]}")
        lines += [" " * wide + more for more in folded[1:]]
    return lines


def _budget_lines(inertia: Inertia) -> list[str]:
    body = []
    for line in inertia.budget:
        unit, scale = shown_in(line.unit, line.value)
        value, u = rounded(line.value * scale, line.u * scale)
        body.append([short(line.input.replace("_", " "), 40), value, u, unit, percent(line.share)])
    lines = columns(["input", "value", "u", "unit", "share"], body, left=(0, 3))
    drawn = inertia.monte_carlo
    if drawn is not None:
        low, high = drawn.interval_95
        says = "agrees" if drawn.agrees else "does not agree: take the Monte Carlo interval"
        ends = f"{rounded(low, drawn.u)[0]} to {rounded(high, drawn.u)[0]}"
        lines.append(f"  Monte Carlo, {count(drawn.draws)} draws: 95 % in {ends} kg m²; {says}")
    return lines
