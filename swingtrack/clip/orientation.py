"""How the stored picture is turned (and perhaps mirrored) to stand upright, and coordinates both ways.

The container's display matrix (ISO/IEC 14496-12 `tkhd`, QuickTime File Format "Matrices") maps stored pixels to
shown ones: x' = a x + c y, y' = b x + d y, with x to the right and y down. Phones write one of the eight
matrices that keep the pixel grid; of any other matrix the nearest of the eight is taken.
"""

from __future__ import annotations

import struct
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..records import Floats

# (a, b, c, d) of the clockwise turns 0°, 90°, 180°, 270°
_TURNS = ((1, 0, 0, 1), (0, 1, -1, 0), (-1, 0, 0, -1), (0, -1, 1, 0))
# …and of the same after a left-right mirror of the stored picture
_MIRRORED = tuple((-a, -b, c, d) for a, b, c, d in _TURNS)


@dataclass(frozen=True)
class Orientation:
    """Turn of the stored picture of `width` × `height` pixels that makes it upright.

    Parameters
    ----------
    width, height : int
        Of the stored picture, px.
    clockwise_deg : int
        0, 90, 180 or 270: by how much the stored picture is turned clockwise to stand upright.
    mirrored : bool
        The stored picture is mirrored left to right before the turn.
    """

    width: int
    height: int
    clockwise_deg: int = 0
    mirrored: bool = False

    @property
    def shown_size(self) -> tuple[int, int]:
        """Width and height of the upright picture, px."""
        if self.clockwise_deg % 180:
            return self.height, self.width
        return self.width, self.height

    def upright(self, x_px: Floats, y_px: Floats) -> tuple[Floats, Floats]:
        """Coordinates in the upright picture of points of the stored one (pixel centres at whole numbers).

        Examples
        --------
        >>> Orientation(1920, 1080, 90).upright(np.array([0.0]), np.array([1079.0]))
        (array([0.]), array([0.]))
        """
        right, bottom = float(self.width - 1), float(self.height - 1)
        if self.mirrored:
            x_px = right - x_px
        match self.clockwise_deg:
            case 90:
                return bottom - y_px, x_px
            case 180:
                return right - x_px, bottom - y_px
            case 270:
                return y_px, right - x_px
        return x_px, y_px

    def stored(self, x_px: Floats, y_px: Floats) -> tuple[Floats, Floats]:
        """Coordinates in the stored picture of points of the upright one: the inverse of `upright`."""
        right, bottom = float(self.width - 1), float(self.height - 1)
        match self.clockwise_deg:
            case 90:
                x_px, y_px = y_px, bottom - x_px
            case 180:
                x_px, y_px = right - x_px, bottom - y_px
            case 270:
                x_px, y_px = right - y_px, x_px
        return (right - x_px if self.mirrored else x_px), y_px

    def turn(self, picture: Any) -> Any:
        """The stored picture (height, width, …) as an upright one, contiguous."""
        if self.mirrored:
            picture = picture[:, ::-1]
        return np.ascontiguousarray(np.rot90(picture, k=-(self.clockwise_deg // 90)))


def read_orientation(matrix: bytes | None, width: int, height: int) -> tuple[Orientation, bool]:
    """Orientation from the 36 bytes of a display matrix, and whether the matrix was exactly one of the eight.

    Parameters
    ----------
    matrix : bytes or None
        Nine native 32-bit integers a b u c d v x y w, as the demuxer hands them over; None: not turned.
    """
    if matrix is None or len(matrix) < 36:
        return Orientation(width, height), True
    a, b, _, c, d = (value / 65536.0 for value in struct.unpack("=5i", matrix[:20]))
    size = float(np.hypot(np.hypot(a, b), np.hypot(c, d))) / np.sqrt(2.0)
    if size == 0.0:
        return Orientation(width, height), False
    eight = [(turn, False) for turn in _TURNS] + [(turn, True) for turn in _MIRRORED]
    off = [float(np.hypot.reduce(np.array(turn) - np.array((a, b, c, d)) / size)) for turn, _ in eight]
    best = int(np.argmin(off))
    return Orientation(width, height, 90 * (best % 4), best >= 4), off[best] < 1e-3
