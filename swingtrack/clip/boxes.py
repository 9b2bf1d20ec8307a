"""The few boxes of an MP4 or MOV file that the demuxer keeps to itself.

ISO/IEC 14496-12: a box is a 32-bit big-endian size (with itself; 1: a 64-bit size follows; 0: to the end of the
file) and four letters. Only box heads are read, and the small boxes asked for: the film itself is stepped over.
"""

from __future__ import annotations

import struct
from collections.abc import Iterator
from pathlib import Path as FilePath
from typing import BinaryIO, NamedTuple

MOST_BOXES = 4096  # a file with more on one level is hostile
MOST_EDITS = 4096


class Box(NamedTuple):
    """Kind, and where its content starts and ends in the file."""

    kind: bytes
    start: int
    end: int


class Edit(NamedTuple):
    """One line of an edit list (`elst`, 8.6.6): media_time −1 is a wait; rate 1 is the film's own speed."""

    duration: int
    media_time: int
    rate: float


def top_boxes(file: FilePath) -> list[Box]:
    """Boxes of the file's top level; an empty list for what has none."""
    try:
        with open(file, "rb") as stream:
            return list(_boxes(stream, 0, stream.seek(0, 2)))
    except OSError:
        return []


def video_edits(file: FilePath) -> list[Edit]:
    """Edit list of the first video track; empty where there is none."""
    try:
        with open(file, "rb") as stream:
            whole = Box(b"", 0, stream.seek(0, 2))
            for track in _within(stream, whole, b"moov", b"trak"):
                if any(
                    _read(stream, box, 16)[8:12] == b"vide"
                    for box in _within(stream, track, b"mdia", b"hdlr")
                ):
                    return [
                        e for box in _within(stream, track, b"edts", b"elst") for e in _edits(stream, box)
                    ]
    except (OSError, struct.error):
        return []
    return []


def _within(stream: BinaryIO, box: Box, *kinds: bytes) -> Iterator[Box]:
    """All boxes below `box` by the given kinds, one level each."""
    for inner in _boxes(stream, box.start, box.end):
        if inner.kind == kinds[0]:
            if len(kinds) == 1:
                yield inner
            else:
                yield from _within(stream, inner, *kinds[1:])


def _boxes(stream: BinaryIO, start: int, end: int) -> Iterator[Box]:
    for _ in range(MOST_BOXES):
        if start + 8 > end:
            return
        stream.seek(start)
        head = stream.read(16)
        if len(head) < 8:
            return
        size, kind = struct.unpack(">I4s", head[:8])
        content = start + 8
        if size == 1 and len(head) == 16:
            size, content = struct.unpack(">Q", head[8:])[0], start + 16
        stop = end if size == 0 else start + size
        if stop < content:
            return
        yield Box(kind, content, min(stop, end))
        start = stop


def _read(stream: BinaryIO, box: Box, most: int) -> bytes:
    stream.seek(box.start)
    return stream.read(min(most, box.end - box.start))


def _edits(stream: BinaryIO, box: Box) -> Iterator[Edit]:
    content = _read(stream, box, 8 + 20 * MOST_EDITS)
    if len(content) < 8:
        return
    line = struct.Struct(">Qqi" if content[0] == 1 else ">Iii")
    count = min(struct.unpack(">I", content[4:8])[0], (len(content) - 8) // line.size, MOST_EDITS)
    for number in range(count):
        duration, media_time, rate = line.unpack_from(content, 8 + number * line.size)
        yield Edit(duration, media_time, rate / 65536.0)
