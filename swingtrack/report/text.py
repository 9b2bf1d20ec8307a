"""The terminal summaries: short, aligned, rounded to the uncertainty, warnings with advice. No computing."""

from __future__ import annotations

import math
import textwrap

from ..records import Doubt, Inertia, Measurement, Path, Stopwatch, Swing
from .rounding import rounded, show

WIDTH = 96
MOST_LINES = 25
DEGREES = 180.0 / math.pi


def summary_text(measurement: Measurement, *, written_to: str = "") -> str:
    """What `measure` and `fit` print: the answer first, at most 25 lines."""
    rows: list[tuple[str, str]] = []
    if measurement.inertia is not None:
        rows += _inertia_rows(measurement.inertia)
    if measurement.swing is not None:
        rows += _swing_rows(measurement.swing)
    if measurement.path is not None:
        rows += _path_rows(measurement.path)
    if measurement.stopwatch is not None:
        rows += _stopwatch_rows(measurement.stopwatch)
    if written_to:
        rows.append(("written to", written_to))
    return _page(rows, measurement.doubts)


def inertia_text(measurement: Measurement) -> str:
    """What `inertia` prints: the moment, its budget, corrections, advice."""
    inertia = measurement.inertia
    assert inertia is not None
    lines = [table(_inertia_rows(inertia)), "", _budget_table(inertia), "", "corrections"]
    for item in inertia.corrections:
        state = "applied" if item.applied else "not applied"
        lines.append(f"  {item.name:<14}{100 * item.relative:+9.4f} %  {state:<12} {item.reason}")
    lines += [f"advice: {line}" for line in inertia.advice]
    return "\n".join(lines) + "\n" + doubt_lines(measurement.doubts, most=20)


def stopwatch_text(measurement: Measurement) -> str:
    """What `stopwatch` prints: the period, each trial's verdict, the verdict on the whole."""
    stopwatch = measurement.stopwatch
    assert stopwatch is not None
    rows = _inertia_rows(measurement.inertia) if measurement.inertia is not None else []
    rows += _stopwatch_rows(stopwatch)
    lines = [table(rows), "", "  trial  swings   seconds    period s  verdict"]
    for number, trial in enumerate(stopwatch.trials, start=1):
        fits = f" (fits {trial.swings_that_fit} swings)" if trial.swings_that_fit is not None else ""
        lines.append(
            f"  {number:>5}{trial.swings:>8}{trial.seconds:>10.2f}{trial.period_s:>12.4f}  {trial.verdict}{fits}"
        )
    return "\n".join(lines) + "\n" + doubt_lines(measurement.doubts, most=20)


def audit_text(path: Path, *, written_to: str = "") -> str:
    """What `follow` prints: the timing audit of the clip, and how the dot was followed."""
    rows = _path_rows(path)
    clip = path.clip
    if clip is not None:
        stored = "not known" if clip.stored_rate_hz is None else f"{clip.stored_rate_hz:.4f} frames/s"
        true = (
            "as stored"
            if clip.time_scale == 1.0
            else f"{clip.capture_rate_hz:.4f} frames/s (times x {clip.time_scale:.6g})"
        )
        rows = [
            (
                "clip",
                f"{clip.codec}, {clip.width}x{clip.height}, turned {clip.rotation_deg}°, {clip.duration_s:.3f} s",
            ),
            ("stored rate", stored),
            ("true rate", true),
            ("interval", f"spread {clip.interval_spread_ms:.3f} ms"),
            ("dropped", f"{clip.dropped_frames} frames"),
            ("repeated", f"{clip.repeated_frames} images under a new time"),
            *[("", note) for note in clip.notes],
            *rows,
        ]
    if path.marker is not None and len(path.marker.candidates) > 1:
        for spot in path.marker.candidates:
            rows.append(
                (
                    "spot",
                    f"{spot.number}: at ({spot.x_px:.0f}, {spot.y_px:.0f}), {spot.diameter_px:.0f} px, score {spot.score:.2f}",
                )
            )
    if written_to:
        rows.append(("written to", written_to))
    return _page(rows, path.doubts, most_lines=60)


def _inertia_rows(inertia: Inertia) -> list[tuple[str, str]]:
    rows = [
        (
            "moment of inertia",
            f"{show(inertia.moment, 'kg m²', k=inertia.k)}   (k = {inertia.k:.2f}, about 95 %)",
        )
    ]
    small = abs(inertia.moment.value) < 0.01
    rows.append(
        (
            "",
            show(inertia.moment, "g cm²", scale=1e7, k=inertia.k)
            if small
            else show(inertia.moment, "kg cm²", scale=1e4, k=inertia.k),
        )
    )
    rows.append(("about", inertia.about))
    if inertia.moment_about_edge is not None:
        rows.append(("about the edge", show(inertia.moment_about_edge, "kg m²", k=inertia.k)))
    if inertia.radius_of_gyration is not None:
        rows.append(("radius of gyration", show(inertia.radius_of_gyration, "mm", scale=1e3, k=inertia.k)))
    if inertia.budget:
        ranked = sorted(inertia.budget, key=lambda line: -line.share)[:3]
        parts = ", ".join(f"{line.input.replace('_', ' ')} {100 * line.share:.0f} %" for line in ranked)
        rows.append(("doubt comes from", parts))
    return rows


def _swing_rows(swing: Swing) -> list[tuple[str, str]]:
    rows = [
        ("period, small swings", f"{show(swing.period, 's')}   (± is one standard uncertainty)"),
        ("period in the clip", show(swing.period_in_clip, "s")),
        ("decay rate", f"{show(swing.decay_rate, '1/s')}   ({swing.damping_law})"),
        ("half-life", show(swing.half_life, "s")),
        ("damping ratio", f"{show(swing.damping_ratio, '')}   Q {show(swing.quality_factor, '')}"),
        ("log decrement", show(swing.log_decrement, "")),
    ]
    if swing.amplitude_start is not None and swing.amplitude_end is not None:
        start, end = (
            rounded(swing.amplitude_start.value * DEGREES, swing.amplitude_start.u * DEGREES)[0],
            swing.amplitude_end,
        )
        rows.append(
            (
                "amplitude",
                f"{start}° to {rounded(end.value * DEGREES, end.u * DEGREES)[0]}° in {swing.cycles:.1f} cycles",
            )
        )
    else:
        rows.append(("amplitude", f"not known; {swing.cycles:.1f} cycles"))
    if swing.other_modes:
        found = "; ".join(
            f"{mode.kind} at {mode.frequency_hz:.3f} Hz, {100 * mode.share:.1f} %"
            for mode in swing.other_modes
        )
        rows.append(("other motion", found))
    rows.append(("residual", f"{swing.fit_rms:.3g} {swing.fit_rms_unit}".rstrip()))
    return rows


def _path_rows(path: Path) -> list[tuple[str, str]]:
    marker = path.marker
    if marker is None:
        return []
    size = "" if marker.diameter_px is None else f", {marker.diameter_px:.0f} px across"
    return [
        (
            "dot",
            f"{marker.found_by}{size}, followed in {marker.frames_followed} frames, lost in {marker.frames_lost}",
        )
    ]


def _stopwatch_rows(stopwatch: Stopwatch) -> list[tuple[str, str]]:
    rows = [
        (
            "stopwatch",
            f"{show(stopwatch.period, 's')}   ({stopwatch.method} of {len(stopwatch.trials)} trials)",
        )
    ]
    if stopwatch.against_clip is not None:
        rows.append(
            (
                "against the clip",
                f"E_n = {stopwatch.against_clip.normalised_error:.2f}: {stopwatch.against_clip.verdict}",
            )
        )
    if stopwatch.further_trials_for_target is not None:
        rows.append(("for the target", f"{stopwatch.further_trials_for_target} more trials"))
    return rows


def _budget_table(inertia: Inertia) -> str:
    lines: list[str] = [f"  {'input':<16}{'value':>14}{'u':>12}  {'unit':<10}{'share':>8}"]
    lines += [
        f"  {line.input.replace('_', ' '):<16}{line.value:>14.6g}{line.u:>12.2g}  {line.unit:<10}{100 * line.share:>7.1f} %"
        for line in inertia.budget
    ]
    if inertia.monte_carlo is not None:
        low, high = inertia.monte_carlo.interval_95
        says = "agrees" if inertia.monte_carlo.agrees else "does not agree: take the Monte Carlo interval"
        lines.append(
            f"  Monte Carlo, {inertia.monte_carlo.draws} draws: 95 % in {low:.6g} to {high:.6g} kg m²; {says}"
        )
    return "\n".join(lines)


def table(rows: list[tuple[str, str]]) -> str:
    """Two aligned columns; only what is too long for one line is folded."""
    wide = max((len(name) for name, _ in rows), default=0) + 2
    lines = []
    for name, text in rows:
        folded = textwrap.wrap(text, WIDTH - wide) or [""]
        lines.append(f"{name:<{wide}}{folded[0]}")
        lines += [" " * wide + more for more in folded[1:]]
    return "\n".join(lines)


def _page(rows: list[tuple[str, str]], doubts: tuple[Doubt, ...], *, most_lines: int = MOST_LINES) -> str:
    upper = table(rows)
    room = most_lines - upper.count("\n") - 2
    return upper + "\n" + doubt_lines(doubts, most=max(1, room // 2), room=room)


def doubt_lines(doubts: tuple[Doubt, ...], *, most: int, room: int = 60) -> str:
    if not doubts:
        return "no warnings"
    lines = []
    for doubt in doubts[:most]:
        block = textwrap.wrap(f"! {doubt.message} ({doubt.code})", WIDTH, subsequent_indent="  ")
        block += textwrap.wrap(f"→ {doubt.advice}", WIDTH - 2, initial_indent="  ", subsequent_indent="    ")
        if lines and len(lines) + len(block) > room - 1:
            break
        lines += block
    shown = sum(line.startswith("! ") for line in lines)
    if shown < len(doubts):
        rest = ", ".join(doubt.code for doubt in doubts[shown:])
        lines.append(textwrap.shorten(f"! and {len(doubts) - shown} more: {rest}", WIDTH, placeholder=" …"))
    return "\n".join(lines)
