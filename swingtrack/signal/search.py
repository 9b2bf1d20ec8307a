"""Is there a swing in it at all, and at about what frequency?"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from swingtrack.errors import NothingToMeasure
from swingtrack.records import ExpectedMode, Floats
from swingtrack.signal.spectrum import amplitude_spectrum, background, refine_peak

# A line has to top the running median of the spectrum by this factor in amplitude. White noise of 20 000 samples
# tops it by 5.2 once in a thousand records; coloured noise by little more, as the median runs with its colour.
LEAST_HEIGHT = 6.5
# The record has to hold this many swings before anything is said of a period.
FEWEST_CYCLES = 1.5
# Within this share of the highest line the one nearest to what the rig predicts is taken for the swing.
RIVAL_SHARE = 0.5


@dataclass(frozen=True)
class Line:
    """The swing's line in the spectrum: frequency, and height over the background."""

    hz: float
    height: float


def find_line(t: Floats, y: Floats, expected: tuple[ExpectedMode, ...] = ()) -> Line:
    """The highest line of the record that is not one of the other modes that the rig predicts.

    Raises
    ------
    NothingToMeasure
        If no line stands out.
    """
    straight = np.polynomial.polynomial.polyfit(t - t[0], y, 1)
    z = y - straight[0] - straight[1] * (t - t[0])
    if not np.any(np.abs(z) > 1e-12 * max(float(np.max(np.abs(y))), 1e-300)):
        raise NothingToMeasure("Nothing moves in the record.", "A swing is needed.", "Look at the right dot.")
    found = amplitude_spectrum(t, z, tapered=True)
    length = float(t[-1] - t[0])
    shown = found.hz >= FEWEST_CYCLES / length
    if shown.sum() < 8:
        raise NothingToMeasure("The record is too short.", "Several swings are needed.", "Film for longer.")
    floor = background(found)
    height = np.where(shown, found.amplitude / np.maximum(floor, 1e-300), 0.0)
    amplitude = np.where(shown, found.amplitude, 0.0)
    tops = np.flatnonzero(
        (amplitude[1:-1] > amplitude[:-2])
        & (amplitude[1:-1] >= amplitude[2:])
        & (height[1:-1] > LEAST_HEIGHT)
    )
    tops = tops + 1
    if len(tops) == 0:
        raise NothingToMeasure(
            "No regular swing stands out of the record.",
            f"At least {FEWEST_CYCLES} swings well above the noise are needed.",
            "Let the article swing farther, film for longer, or look at the dot's path.",
        )
    order = tops[np.argsort(-amplitude[tops])]
    best = int(order[0])
    for top in order:
        if amplitude[top] < RIVAL_SHARE * amplitude[best]:
            break
        if not _is_expected(float(found.hz[top]), found.resolution_hz, expected):
            best = int(top)
            break
    hz = refine_peak(t, z, float(found.hz[best]), found.resolution_hz)
    return Line(hz, float(height[best]))


def _is_expected(hz: float, resolution_hz: float, expected: tuple[ExpectedMode, ...]) -> bool:
    return any(
        abs(hz - mode.frequency_hz) < max(2 * mode.relative_u * mode.frequency_hz, resolution_hz / 2)
        for mode in expected
    )
