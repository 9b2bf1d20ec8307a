"""Is there a swing in it at all, and at about what frequency?"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from swingtrack.errors import NothingToMeasure
from swingtrack.records import ExpectedMode, Floats
from swingtrack.signal.spectrum import Spectrum, amplitude_spectrum, background, refine_peak

# A line has to top the running median of the spectrum by this factor in amplitude. White noise of 20 000 samples
# tops it by 5.2 once in a thousand records; coloured noise by little more, as the median runs with its colour.
LEAST_HEIGHT = 6.5
# The record has to hold this many swings before anything is said of a period.
FEWEST_CYCLES = 1.5
# A line that the rig predicts for another motion gives way to any other of at least this share of its height.
RIVAL_SHARE = 0.2
# Harmonics of a line are no motion of their own; lines lower or higher than these shares of it are looked past.
NEIGHBOURS = (0.3, 3.5)
LINE_BINS = 3.0  # a tapered line is four bins wide at its foot


@dataclass(frozen=True)
class Line:
    """The swing's line in the spectrum: frequency, height over the background, and larger lines that are not it."""

    hz: float
    height: float
    larger_hz: tuple[float, ...] = ()


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
    larger: tuple[float, ...] = ()
    if _is_expected(float(found.hz[best]), found.resolution_hz, expected):
        other = _other_line(found, order, amplitude, expected)
        if other is not None:
            larger = (refine_peak(t, z, float(found.hz[best]), found.resolution_hz),)
            best = other
    hz = refine_peak(t, without_lines(t, z, larger), float(found.hz[best]), found.resolution_hz)
    return Line(hz, float(height[best]), larger)


def _other_line(
    found: Spectrum, order: NDArray[np.intp], amplitude: Floats, expected: tuple[ExpectedMode, ...]
) -> int | None:
    """The next line that is neither predicted for another motion, nor a foot or harmonic of the highest."""
    top_hz = float(found.hz[order[0]])
    for top in order[1:]:
        if amplitude[top] < RIVAL_SHARE * amplitude[order[0]]:
            return None
        hz = float(found.hz[top])
        ratio = hz / top_hz
        foot = abs(hz - top_hz) < LINE_BINS * found.resolution_hz
        harmonic = round(ratio) > 1 and abs(hz - round(ratio) * top_hz) < LINE_BINS * found.resolution_hz
        near = NEIGHBOURS[0] < ratio < NEIGHBOURS[1]
        if near and not foot and not harmonic and not _is_expected(hz, found.resolution_hz, expected):
            return int(top)
    return None


def without_lines(t: Floats, y: Floats, lines_hz: tuple[float, ...]) -> Floats:
    """`y` less the sinusoids at these frequencies, each free to fade as a parabola over the record."""
    if not lines_hz:
        return y
    u = 2 * (t - t[0]) / (t[-1] - t[0]) - 1
    columns = [np.ones_like(t)]
    for hz in lines_hz:
        turn = 2 * np.pi * hz * t
        columns += [wave * u**power for wave in (np.cos(turn), np.sin(turn)) for power in (0, 1, 2)]
    design = np.column_stack(columns)
    found, *_ = np.linalg.lstsq(design, y, rcond=None)
    return np.asarray(y - design[:, 1:] @ found[1:])


def _is_expected(hz: float, resolution_hz: float, expected: tuple[ExpectedMode, ...]) -> bool:
    return any(
        abs(hz - mode.frequency_hz) < max(2 * mode.relative_u * mode.frequency_hz, resolution_hz / 2)
        for mode in expected
    )
