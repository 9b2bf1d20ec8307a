"""When the frames are taken, and what times the file holds for them."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path as FilePath

import numpy as np

from ..errors import BadInput
from ..records import Bools, Floats
from .settings import Film

FIRST_FRAME_S = 0.05  # phones start neither at zero nor on a tick
FINE_BASE_HZ = (
    10_000  # at and above this, frames are taken exactly on a tick, so that the file's times are true
)
MATROSKA_BASE_HZ = 1000  # the container keeps milliseconds whatever the encoder had


@dataclass(frozen=True, eq=False)
class FrameTimes:
    """Of each frame in the file (n,): when it was taken, the tick stored for it, whether it repeats the one before."""

    taken_s: Floats
    ticks: np.ndarray
    base_hz: int
    repeated: Bools

    @property
    def stored_s(self) -> Floats:
        """The file's times from its first frame, s."""
        return np.asarray((self.ticks - self.ticks[0]) / self.base_hz, dtype=np.float64)


def base_of(file: FilePath, film: Film) -> int:
    """Ticks a second that this container can hold."""
    if file.suffix.lower() in (".mkv", ".webm"):
        return MATROSKA_BASE_HZ
    return min(film.time_base_hz, 60_000) if film.codec == "mpeg4" else film.time_base_hz


def frame_times(film: Film, base_hz: int, rng: np.random.Generator) -> FrameTimes:
    """Uneven instants with frames dropped and repeated as the film says.

    Raises
    ------
    BadInput
        Fewer than two frames are left.
    """
    even = FIRST_FRAME_S + np.arange(round(film.duration_s * film.rate_hz)) / film.rate_hz
    taken = np.sort(even + rng.normal(0.0, film.uneven_ms * 1e-3, even.size))
    taken = np.maximum(taken, 0.0)
    kept = rng.random(taken.size) >= film.dropped_share
    repeats = rng.random(taken.size) < film.repeated_share
    kept[0] = True
    for start, end in film.gaps:
        kept &= ~((taken >= start) & (taken < end))
    ticks = np.rint(taken * film.stretch * base_hz).astype(np.int64)
    # two frames can't share a tick; the later one is lost, as in a phone that falls behind
    order = np.flatnonzero(kept)
    order = order[np.concatenate([[True], np.diff(ticks[order]) > 0])] if order.size else order
    if order.size < 2:
        raise BadInput(
            f"{order.size} frames are left of the clip.",
            "Needed: two or more.",
            "Drop fewer, or film longer.",
        )
    ticks, taken, repeats = ticks[order], taken[order], repeats[order]
    if base_hz >= FINE_BASE_HZ and film.stretch == 1.0:
        taken = ticks / base_hz
    repeats[0] = False
    return FrameTimes(taken, ticks, base_hz, repeats)
