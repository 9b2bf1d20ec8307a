"""Planes of a decoded picture as numpy views into the decoder's memory: no copy, no conversion."""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np
from numpy.typing import NDArray

# bits per sample of the formats whose planes are taken as they are
_PLANAR = {
    **dict.fromkeys(
        ("yuv420p", "yuvj420p", "yuv422p", "yuvj422p", "yuv444p", "yuvj444p", "yuv440p", "yuvj440p"), 8
    ),
    **dict.fromkeys(("yuv411p", "yuv410p"), 8),
    **dict.fromkeys(("yuv420p10le", "yuv422p10le", "yuv444p10le", "yuv440p10le"), 10),
    **dict.fromkeys(("yuv420p12le", "yuv422p12le", "yuv444p12le"), 12),
}
_GREY = {"gray": 8, "gray10le": 10, "gray12le": 12, "gray16le": 16}
_INTERLEAVED = {"nv12": 8, "nv16": 8, "nv24": 8, "nv21": 8, "p010le": 16, "p016le": 16}  # p010: bits on top
FALLBACK = "yuv420p"


class Planes(NamedTuple):
    """Luma (h, w), the two chroma planes or None, bits per sample."""

    luma: NDArray[Any]
    chroma_u: NDArray[Any] | None
    chroma_v: NDArray[Any] | None
    depth: int


def is_direct(pixel_format: str) -> bool:
    """Whether pictures of this format are used without conversion."""
    return pixel_format in _PLANAR or pixel_format in _GREY or pixel_format in _INTERLEAVED


def view_planes(picture: Any) -> Planes:
    """Views on the planes of an `av.VideoFrame`; other formats are brought to 8-bit 4:2:0 first.

    The views keep the decoder's buffer alive; the decoder does not write into it while they live.
    """
    name = picture.format.name
    if not is_direct(name) or any(plane.line_size <= 0 for plane in picture.planes):
        picture, name = picture.reformat(format=FALLBACK), FALLBACK
    planes = picture.planes
    if name in _PLANAR:
        depth = _PLANAR[name]
        return Planes(_view(planes[0], depth), _view(planes[1], depth), _view(planes[2], depth), depth)
    if name in _GREY:
        return Planes(_view(planes[0], _GREY[name]), None, None, _GREY[name])
    depth = _INTERLEAVED[name]
    both = _view(planes[1], depth, samples=2)
    u, v = both[:, 0::2], both[:, 1::2]
    if name == "nv21":
        u, v = v, u
    return Planes(_view(planes[0], depth), u, v, depth)


def _view(plane: Any, depth: int, *, samples: int = 1) -> NDArray[Any]:
    """One plane without the padding at the end of its lines; `samples` per position (2 where interleaved)."""
    kind = np.dtype(np.uint8) if depth <= 8 else np.dtype("<u2")
    lines = np.frombuffer(plane, kind, count=plane.height * plane.line_size // kind.itemsize)
    return lines.reshape(plane.height, -1)[:, : plane.width * samples]
