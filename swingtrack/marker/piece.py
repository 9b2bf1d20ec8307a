"""A piece of a picture: three planes and where their first samples lie, as stored or cut out and kept."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..records import Frame


@dataclass(frozen=True, eq=False)
class Piece:
    """Planes of a picture or of a rectangle of it, without conversion.

    Parameters
    ----------
    luma : (rows, columns) uint8 or uint16
    chroma_u, chroma_v : the same rectangle at the chroma's own resolution, or None
    x0, y0 : int
        Stored luma pixel of the first luma sample; multiples of the chroma spacing.
    spacing_x, spacing_y : int
        Luma pixels from one chroma sample to the next.
    scale : float
        Takes samples to 8-bit levels.
    """

    luma: NDArray[Any]
    chroma_u: NDArray[Any] | None
    chroma_v: NDArray[Any] | None
    x0: int
    y0: int
    spacing_x: int
    spacing_y: int
    scale: float


def whole(frame: Frame) -> Piece:
    """The frame itself as a piece; views, nothing is copied."""
    sx = sy = 2
    if frame.chroma_u is not None:
        sy = round(frame.luma.shape[0] / frame.chroma_u.shape[0])
        sx = round(frame.luma.shape[1] / frame.chroma_u.shape[1])
    return Piece(frame.luma, frame.chroma_u, frame.chroma_v, 0, 0, sx, sy, 1.0 / (1 << (frame.depth - 8)))


def cut(piece: Piece, x_px: float, y_px: float, half_px: float) -> Piece | None:
    """A copy of the square of ±half_px round a place, cut off at the picture's border; None where it is outside."""
    height, width = piece.luma.shape
    sx, sy = piece.spacing_x, piece.spacing_y
    half = int(half_px)
    c0 = max(0, (int(x_px) - piece.x0 - half) // sx)
    r0 = max(0, (int(y_px) - piece.y0 - half) // sy)
    c1 = min(width // sx, (int(x_px) - piece.x0 + half) // sx + 1)
    r1 = min(height // sy, (int(y_px) - piece.y0 + half) // sy + 1)
    if c1 - c0 < 3 or r1 - r0 < 3:
        return None
    u, v = piece.chroma_u, piece.chroma_v
    return Piece(
        piece.luma[r0 * sy : r1 * sy, c0 * sx : c1 * sx].copy(),
        None if u is None else u[r0:r1, c0:c1].copy(),
        None if v is None else v[r0:r1, c0:c1].copy(),
        piece.x0 + c0 * sx,
        piece.y0 + r0 * sy,
        sx,
        sy,
        piece.scale,
    )


def colours(piece: Piece) -> NDArray[np.float32]:
    """(3, rows, columns): the piece at half resolution in 8-bit levels, luma averaged over 2×2 pixels.

    Sample (r, c) covers the stored pixels x0 + 2c … x0 + 2c + 1, y0 + 2r … y0 + 2r + 1.
    """
    rows, columns = piece.luma.shape[0] // 2, piece.luma.shape[1] // 2
    luma = piece.luma[: 2 * rows, : 2 * columns]
    planes = np.empty((3, rows, columns), np.float32)
    np.add(luma[::2, ::2], luma[1::2, 1::2], out=planes[0], dtype=np.float32)
    planes[0] += luma[::2, 1::2]
    planes[0] += luma[1::2, ::2]
    planes[0] *= 0.25 * piece.scale
    if piece.chroma_u is None or piece.chroma_v is None:
        planes[1:] = 128.0
        return planes
    for index, chroma in ((1, piece.chroma_u), (2, piece.chroma_v)):
        if (piece.spacing_x, piece.spacing_y) == (2, 2):
            planes[index] = chroma[:rows, :columns]
        else:  # 4:2:2 and 4:4:4
            planes[index] = chroma[:: 2 // piece.spacing_y, :: 2 // piece.spacing_x][:rows, :columns]
        planes[index] *= piece.scale
    return planes
