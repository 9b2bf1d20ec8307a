"""Decoded pictures in the order they are shown, each with its stored time; what is broken is counted, not used."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path as FilePath
from typing import Any

import av
import numpy as np

from .container import open_container, pick_video, ready_decoder
from .packets import PacketTable

# A frame this many seconds after the one before it, and after the ones behind it, has a wrong time: the
# time runs ahead and comes back. A pause of the camera is no shorter, but does not come back.
LEAP_S = 2.0
LOOK_AHEAD = 2


@dataclass
class Losses:
    """Pictures that one reading of the file did not use, by reason."""

    broken: int = 0  # could not be decoded
    not_whole: int = 0  # built on one that was broken, or marked as damaged by the decoder
    without_time: int = 0
    out_of_order: int = 0  # time not after that of the picture before
    other_size: bool = False  # the picture changed its size: reading ended there
    ended_early: bool = False

    @property
    def damaged(self) -> int:
        """Pictures lost to damage."""
        return self.broken + self.not_whole


def decode(
    file: FilePath, table: PacketTable, losses: Losses, *, from_tick: int | None = None
) -> Iterator[tuple[int, Any]]:
    """Yield (time in ticks, `av.VideoFrame`) with strictly increasing times.

    With `from_tick` decoding starts at the last key picture at or before it, if the file can be entered there:
    the pictures in between come too.
    """
    with open_container(file) as container:
        stream, _ = pick_video(container, file)
        ready_decoder(stream)
        entered = _enter(container, stream, table, from_tick)
        timed = _in_order(_timed(_whole_pictures(container, stream, losses), table, losses), table, losses)
        first = next(timed, None)
        if entered is None or (first is not None and first[0] <= entered):
            if first is not None:
                yield first
                yield from timed
            return
    # the index misled: read from the start instead, which is slower and right
    yield from decode(file, table, losses)


def _enter(container: Any, stream: Any, table: PacketTable, from_tick: int | None) -> int | None:
    """Move to the last key picture at or before `from_tick`; its time, or None where reading starts at 0."""
    if from_tick is None or table.by_order or table.without_time:
        return None
    place = int(np.searchsorted(table.key_ticks, from_tick, side="right")) - 1
    if place <= 0:
        return None
    try:
        container.seek(int(table.key_dts[place]), stream=stream, backward=True)
    except (av.FFmpegError, OSError):
        container.seek(0)
        return None
    return int(table.key_ticks[place])


def _whole_pictures(container: Any, stream: Any, losses: Losses) -> Iterator[Any]:
    """Pictures that are whole: after a broken one, none up to the next key picture."""
    size = (stream.width, stream.height)
    waiting = False
    for packet in _packets(container, stream, losses):
        try:
            pictures = packet.decode()
        except (av.FFmpegError, OSError):
            losses.broken += 1
            waiting = True
            continue
        for picture in pictures:
            if picture.is_corrupt:
                waiting = True
            elif picture.key_frame:
                waiting = False
            if (picture.width, picture.height) != size:
                losses.other_size = True
                return
            if waiting:
                losses.not_whole += 1
                continue
            yield picture


def _packets(container: Any, stream: Any, losses: Losses) -> Iterator[Any]:
    try:
        for packet in container.demux(stream):
            # an empty packet in the middle (AVI: "the same picture again") would tell the decoder that all is over
            if packet.size or packet.dts is None:
                yield packet
    except (av.FFmpegError, OSError):
        losses.ended_early = True
        return


def _timed(pictures: Iterator[Any], table: PacketTable, losses: Losses) -> Iterator[tuple[int, Any]]:
    if table.by_order:
        for tick, picture in zip(table.ticks.tolist(), pictures, strict=False):
            if losses.damaged:  # without times of their own, pictures after a lost one can't be placed
                losses.not_whole += 1
                continue
            yield tick, picture
        return
    for picture in pictures:
        if picture.pts is None:
            losses.without_time += 1
        else:
            yield picture.pts, picture


def _in_order(
    timed: Iterator[tuple[int, Any]], table: PacketTable, losses: Losses
) -> Iterator[tuple[int, Any]]:
    """Leave out what does not come after the picture before, and single times that run ahead."""
    leap = LEAP_S / float(table.time_base)
    last: int | None = None
    ahead: list[tuple[int, Any]] = []
    while True:
        item = ahead.pop(0) if ahead else next(timed, None)
        if item is None:
            return
        tick = item[0]
        if last is not None and tick <= last:
            losses.out_of_order += 1
            continue
        if last is None or tick - last > leap:
            while len(ahead) < LOOK_AHEAD and (more := next(timed, None)) is not None:
                ahead.append(more)
            behind = [later for later, _ in ahead if later < tick and (last is None or later > last)]
            if len(behind) == LOOK_AHEAD:
                losses.out_of_order += 1
                continue
        yield item
        last = tick
