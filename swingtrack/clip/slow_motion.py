"""Slow motion: how the stored times were stretched, where the file says so, and where it only looks like it."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from ..errors import BadClip

CAPTURE_KEYS = ("com.android.capture.fps", "com.apple.quicktime.capture.fps")
SAME_RATE = 1.2  # capture over stored rate below which a file is not slow motion: rates vary by a few percent
PLAYBACK_RATES = (24.0, 25.0, 30.0)  # at which phones store slow motion; above, nothing is stretched
STRETCH_TICKS = (2400, 4800)  # ticks a second in which stretched 240 frames/s files are stored (seen: 2400)


@dataclass(frozen=True)
class CaptureRate:
    """True frame rate (None: as stored), the factor for stored times, and where that was learnt."""

    capture_rate_hz: float | None
    time_scale: float
    learnt_from: str


def capture_rate(
    stored_rate_hz: float | None, given_hz: float | None, metadata: Mapping[str, str]
) -> CaptureRate:
    """Find the factor by which stored times are multiplied to be real ones.

    Parameters
    ----------
    stored_rate_hz : float or None
    given_hz : float or None
        What the user said; it goes before what the file says.
    metadata : mapping
        Keys of the container and the video track.
    """
    if given_hz is not None:
        if not (math.isfinite(given_hz) and 1.0 <= given_hz <= 100_000.0):
            raise BadClip(
                f"A capture rate of {given_hz:g} Hz was given.", "Needed: frames per second.", "Such as 240."
            )
        if stored_rate_hz is None:
            raise BadClip("The clip has too few frames to know its stored rate.", "Needed: a longer clip.")
        return CaptureRate(given_hz, stored_rate_hz / given_hz, "given")
    for key in CAPTURE_KEYS:
        rate = _number(metadata.get(key))
        if rate is not None and stored_rate_hz is not None:
            if rate > SAME_RATE * stored_rate_hz:
                return CaptureRate(rate, stored_rate_hz / rate, key)
            return CaptureRate(None, 1.0, key)
    return CaptureRate(None, 1.0, "")


def looks_stretched(
    stored_rate_hz: float | None,
    *,
    even: bool,
    time_base: Fraction,
    metadata: Mapping[str, str],
    learnt: CaptureRate,
) -> str:
    """Why the times look like stretched slow motion that the file does not own up to; "" where they do not.

    A camera's own times waver; times that are all alike, at a playback rate, on the clock of a faster recording are
    what stretched files look like. A file that says its capture rate is not suspected.
    """
    if learnt.learnt_from or stored_rate_hz is None or not even:
        return ""
    at_playback = any(abs(stored_rate_hz / rate - 1.0) < 2e-3 for rate in PLAYBACK_RATES)
    ticks = time_base.denominator / time_base.numerator
    fast_clock = ticks in STRETCH_TICKS
    intent = any("playback-intent" in key for key in metadata)
    if at_playback and (fast_clock or intent):
        return f"All frames are exactly {1000.0 / stored_rate_hz:.3f} ms apart on a clock of {ticks:.0f} ticks a second, as stretched slow motion is stored."
    return ""


def _number(text: str | None) -> float | None:
    try:
        value = float(text) if text is not None else math.nan
    except ValueError:
        return None
    return value if math.isfinite(value) and value > 0.0 else None
