"""Frames and what a clip says of itself: from clip/ to marker/."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any, Protocol

from numpy.typing import NDArray

from .arrays import Floats


@dataclass(frozen=True, eq=False)
class Frame:
    """One decoded picture as it is stored (before the rotation flag), planes without conversion.

    Parameters
    ----------
    index : int
        Counts decoded frames from 0.
    t_s : float
        Time from the clip's first frame in real seconds (slow motion undone).
    luma : (height, width) uint8 or uint16
    chroma_u, chroma_v : (height / sy, width / sx) uint8 or uint16, or None for a grey clip
        Views into the decoder's memory: valid until the next frame is asked for.
    depth : int
        Bits per sample (8, 10, …).
    """

    index: int
    t_s: float
    luma: NDArray[Any]
    chroma_u: NDArray[Any] | None
    chroma_v: NDArray[Any] | None
    depth: int = 8


class FrameSource(Protocol):
    """What the marker stage needs of a clip: pictures in order, as often as asked, and their geometry.

    `width` and `height` are those of the stored picture; `upright` turns stored pixel coordinates into those
    of the picture as it is shown (rotation applied), arrays in, arrays out.
    """

    @property
    def width(self) -> int: ...
    @property
    def height(self) -> int: ...
    @property
    def rotation_deg(self) -> int: ...
    def frames(self, from_s: float | None = None, to_s: float | None = None) -> Iterator[Frame]: ...
    def upright(self, x_px: Floats, y_px: Floats) -> tuple[Floats, Floats]: ...
    def stored(self, x_px: Floats, y_px: Floats) -> tuple[Floats, Floats]: ...


@dataclass(frozen=True)
class ClipFacts:
    """What the file says of itself and what its frame times were found to be (the timing audit)."""

    file: str
    sha256: str
    codec: str
    width: int
    height: int
    rotation_deg: int
    frames: int
    duration_s: float
    stored_rate_hz: float | None
    capture_rate_hz: float | None
    time_scale: float
    dropped_frames: int
    repeated_frames: int
    interval_spread_ms: float
    notes: tuple[str, ...] = ()
