"""How much each picture differs from the one before, in two cheap numbers, and what that says of the times.

Two kinds of faults leave no trace in the stored times: an image that was shown twice under two times, and an
image that was lost while the times claim an even interval. Both come from copies that force a constant rate.
"""

from __future__ import annotations

from typing import Any, NamedTuple

import cv2
import numpy as np
from numpy.typing import NDArray

from ..records import Floats

ROW_STEP = 4  # every fourth row: 2 % of the cost of decoding 1080p, and two rows even through an 8 px dot
# Grey levels (8 bit) that a codec's touching-up of a standing picture does not exceed: judged on H.264 at crf 18–30.
GATE = 10.0
# A repeated image differs by less than this part of what its neighbours' motion lets expect. A copy's own
# coding leaves 1 to 10 %, the slowest real motion next to ordinary one (a turning point) is caught by the
# expectation, which follows the slope on both sides.
REPEAT_SHARE = 0.25
# A lost image doubles the change. Between 1.6 and 2.6 it is taken for one; a cut or a knock is more.
JUMP_LOW, JUMP_HIGH = 1.6, 3.6
QUIET = 0.25  # below this part of the clip's usual change the picture stands: nothing can be said there


class Changes:
    """Change from picture to picture, filled while frames are read; index as in `Frame.index`.

    Parameters
    ----------
    frames : int
        Number of frames that the clip has.
    """

    def __init__(self, frames: int) -> None:
        self.moved = np.full(frames, np.nan)
        self.differs = np.full(frames, np.nan)
        self._last_index = -2
        self._last: NDArray[Any] | None = None

    def see(self, index: int, luma: NDArray[Any], depth: int) -> None:
        """Compare a picture with the one seen before, where that was its neighbour."""
        rows = luma[::ROW_STEP]
        if index < len(self.moved) and index == self._last_index + 1 and self._last is not None:
            if np.isnan(self.moved[index]):
                self.moved[index], self.differs[index] = _difference(rows, self._last, depth)
        self._last, self._last_index = rows, index

    def forget(self) -> None:
        """Let go of the last picture (the reading ended or starts anew)."""
        self._last, self._last_index = None, -2


def _difference(rows: NDArray[Any], before: NDArray[Any], depth: int) -> tuple[float, float]:
    """Mean grey levels by which pixels differ beyond the gate, and at all; 8-bit levels."""
    scale = 2.0 ** (depth - 8)
    apart = cv2.absdiff(rows, before)
    beyond = cv2.subtract(apart, (GATE * scale, 0.0, 0.0, 0.0))
    return cv2.mean(beyond)[0] / scale, cv2.mean(apart)[0] / scale


class Suspects(NamedTuple):
    """Frame indices: images that repeat the one before; images that moved on by more than one step."""

    repeated: NDArray[np.int64]
    jumped: NDArray[np.int64]
    steps: Floats


def find_suspects(changes: Changes, intervals: Floats) -> Suspects:
    """Frames whose image contradicts their time.

    Parameters
    ----------
    changes : Changes
    intervals : (n_frames,) float
        Time since the frame before over the usual interval (first: NaN): a gap in the stored times is no jump.
    """
    rate = changes.moved / intervals
    plain = changes.differs / intervals
    if int(np.isfinite(rate).sum()) < 8:
        none = np.zeros(0, dtype=np.int64)
        return Suspects(none, none, np.zeros(0))
    usual = _usual(rate)
    expected = _expected(rate)
    loud = expected > QUIET * usual
    with np.errstate(invalid="ignore", divide="ignore"):
        share = rate / expected
        plain_share = plain / _expected(plain)
    repeated = loud & (share < REPEAT_SHARE) & (plain_share < 0.5)
    jump = loud & (share > JUMP_LOW) & (share < JUMP_HIGH) & (plain_share > 1.1)
    where = np.flatnonzero(jump)
    return Suspects(np.flatnonzero(repeated), where, share[where])


def _usual(values: Floats) -> float:
    return float(np.nanquantile(values, 0.75))


def _expected(values: Floats) -> Floats:
    """What a frame's change should be from the slope on both sides; the smaller of the two, never negative.

    From the left 2 v[i−1] − v[i−2], from the right 2 v[i+1] − v[i+2]: at a turning point, where the change
    falls to nothing and rises again on a straight line, both are about zero, so standing still there is no fault.
    """
    padded = np.concatenate([np.full(2, np.nan), values, np.full(2, np.nan)])
    left = 2.0 * padded[1:-3] - padded[:-4]
    right = 2.0 * padded[3:-1] - padded[4:]
    return np.maximum(np.fmin(left, right), 0.0)
