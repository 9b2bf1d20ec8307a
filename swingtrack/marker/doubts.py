"""Reasons to doubt a path, each in one function: a code, what was seen, what to do about it."""

from __future__ import annotations

import numpy as np

from ..records import Candidate, Doubt, Floats

# Shares and sizes from which a word is due; judgments, not physics.
LOST_SHARE = 0.02
SMALL_PX = 8.0
FAINT_LEVELS = 15.0
SHAKE_PX = 0.3
TYPICAL_READOUT_S = 0.02  # phones' sensors take 5 to 35 ms from first row to last; common practice, no source
ROW_PHASE_RAD = 0.03


def several_spots(candidates: tuple[Candidate, ...], alike: float) -> Doubt | None:
    """Two candidates that score alike."""
    if len(candidates) < 2 or candidates[1].score < alike * candidates[0].score:
        return None
    names = "; ".join(
        f"{c.number} at ({c.x_px:.0f}, {c.y_px:.0f})"
        for c in candidates
        if c.score >= alike * candidates[0].score
    )
    return Doubt(
        "several-spots-swing",
        f"Several spots swing alike: {names}. Number 1 was followed.",
        "Look at the marked clip; take another one with --choose N or --dot X,Y.",
    )


def dot_lost(t_s: Floats, seen: np.ndarray) -> Doubt | None:
    """A share of the frames without the dot, and where the longest stretch was."""
    lost = int((~seen).sum())
    if lost == 0 or lost / len(seen) < LOST_SHARE:
        return None
    edges = np.flatnonzero(np.diff(np.concatenate([[False], ~seen, [False]]).astype(int)))
    starts, ends = edges[::2], edges[1::2]
    k = int(np.argmax(ends - starts))
    a, b = float(t_s[starts[k]]), float(t_s[min(ends[k], len(t_s) - 1)])
    return Doubt(
        "dot-lost",
        f"The dot was not seen in {lost} of {len(seen)} frames ({100 * lost / len(seen):.0f} %), the longest time from {a:.2f} s to {b:.2f} s.",
        "Keep hands, strings and the edge of the picture away from the dot, or use the good part with --from and --to.",
    )


def dot_small(diameter_px: float) -> Doubt | None:
    """A dot of few pixels."""
    if diameter_px >= SMALL_PX:
        return None
    return Doubt(
        "dot-small",
        f"The dot is {diameter_px:.1f} pixels across.",
        f"Film nearer or paint a larger dot: from {SMALL_PX:.0f} pixels on its place is known well, 16 to 80 are best.",
    )


def dot_faint(contrast_levels: float) -> Doubt | None:
    """A dot that hardly differs from what is round it."""
    if contrast_levels >= FAINT_LEVELS:
        return None
    return Doubt(
        "dot-faint",
        f"The dot differs from what is round it by {contrast_levels:.0f} of 255 levels.",
        "Paint it in a colour of its own, or give it more light.",
    )


def camera_moved(size_px: float, removed: bool) -> Doubt | None:
    """Camera shake that a fixed spot shows."""
    if size_px < SHAKE_PX:
        return None
    done = "it was taken out by fixed spots of the scene" if removed else "it was left in, as asked"
    return Doubt(
        "camera-moved",
        f"The camera moved: fixed spots of the scene wander by {size_px:.1f} pixels (standard deviation); {done}.",
        "Put the phone on a stand, or lean it on something solid.",
    )


def rolling_shutter(row_amplitude_px: float, height: int, omega: float) -> Doubt | None:
    """A swing across the rows of a sensor whose readout time is not known."""
    phase = omega * TYPICAL_READOUT_S * row_amplitude_px / height
    if phase < ROW_PHASE_RAD:
        return None
    return Doubt(
        "rolling-shutter",
        f"The dot swings across the sensor's rows by ±{row_amplitude_px:.0f} of {height} pixels. At a usual readout of "
        f"{1e3 * TYPICAL_READOUT_S:.0f} ms its times are off by up to ±{1e3 * TYPICAL_READOUT_S * row_amplitude_px / height:.1f} ms "
        "in the rhythm of the swing, which bends its shape; the period is hardly touched.",
        "Give the readout time with --readout-ms, or turn the phone so that the dot swings along the picture's long side.",
    )


def swing_cut_off(share: float) -> Doubt | None:
    """A dot that comes close to the picture's border in many frames."""
    if share < 0.01:
        return None
    return Doubt(
        "dot-at-border",
        f"The dot touches the picture's border in {100 * share:.0f} % of the frames.",
        "Film from further away or turn the phone, so that the whole swing stays in the picture.",
    )
