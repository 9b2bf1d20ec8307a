"""The frame times that a file states, read from its packets without decoding one picture."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from pathlib import Path as FilePath
from typing import Any

import av
import numpy as np
from numpy.typing import NDArray

from ..errors import BadClip
from .container import COPY_AGAIN, open_container, pick_video

FEWEST_FRAMES = 2  # one frame has no time but its own
# More than half of the packets without a presentation time: those that are there are not trusted either.
FEWEST_TIMED = 0.5
NONE = np.iinfo(np.int64).min


@dataclass(frozen=True, eq=False)
class PacketTable:
    """What the packets of the video track say.

    Parameters
    ----------
    ticks : (n_frames,) int64
        Times of the frames in ascending order, each once, in `time_base`.
    key_ticks, key_dts : (n_keys,) int64
        Presentation and decoding times of the packets that decoding can start at, ascending.
    time_base : Fraction
        Seconds a tick.
    by_order : bool
        The file states no presentation times (AVI): the n-th picture shown has the n-th packet's time.
    claimed : int
        Number of frames that the file's index claims; 0 where it does not say.
    without_time, repeated_times, cut_away, damaged : int
        Packets without a time; with a time that an earlier one had; outside of the edit list; incomplete.
    ended_early : bool
        The file ends inside a packet, or before the last that its index names.
    size_bytes : int
        Of all packets together.
    """

    ticks: NDArray[np.int64]
    key_ticks: NDArray[np.int64]
    key_dts: NDArray[np.int64]
    time_base: Fraction
    by_order: bool
    claimed: int
    without_time: int
    repeated_times: int
    cut_away: int
    damaged: int
    ended_early: bool
    size_bytes: int

    @property
    def intervals_s(self) -> NDArray[np.float64]:
        """Stored intervals between neighbouring frames, (n_frames − 1,) s."""
        return np.asarray(np.diff(self.ticks) * float(self.time_base), dtype=np.float64)


@dataclass
class _Tally:
    """Packet by packet, in the order of the file."""

    pts: list[int]
    dts: list[int]
    keys: list[tuple[int, int]]
    cut_away: int = 0
    damaged: int = 0
    ended_early: bool = False
    size_bytes: int = 0

    def add(self, packet: Any) -> None:
        if packet.size == 0:  # the end, or (AVI) "show the last picture again": no picture of its own
            return
        self.size_bytes += packet.size
        self.damaged += packet.is_corrupt
        if packet.is_discard:
            self.cut_away += 1
            return
        pts = NONE if packet.pts is None else packet.pts
        dts = NONE if packet.dts is None else packet.dts
        self.pts.append(pts)
        self.dts.append(dts)
        if packet.is_keyframe and pts != NONE:
            self.keys.append((pts, pts if dts == NONE else dts))


def scan_packets(file: FilePath) -> PacketTable:
    """Read all packets of the video track.

    Raises
    ------
    BadClip
        No packet has a time, or there are fewer than two frames.
    """
    tally = _Tally([], [], [])
    with open_container(file) as container:
        stream, _ = pick_video(container, file)
        time_base, claimed = Fraction(stream.time_base), int(stream.frames)
        in_order = container.format.name == "avi"
        try:
            for packet in container.demux(stream):
                tally.add(packet)
        except (av.FFmpegError, OSError):
            tally.ended_early = True
    if claimed > len(tally.pts) + tally.cut_away:
        tally.ended_early = True
    return _table(tally, file, (time_base, claimed, in_order))


def _table(tally: _Tally, file: FilePath, said: tuple[Fraction, int, bool]) -> PacketTable:
    time_base, claimed, in_order = said
    pts = np.array(tally.pts, dtype=np.int64)
    dts = np.array(tally.dts, dtype=np.int64)
    by_order = in_order or int((pts != NONE).sum()) < FEWEST_TIMED * len(pts)
    times = dts if by_order else pts
    timed = times[times != NONE]
    ticks = np.unique(timed)
    if len(ticks) < FEWEST_FRAMES:
        raise BadClip(
            f"{file} has {len(pts)} video frames with {len(ticks)} different times.",
            f"Needed: at least {FEWEST_FRAMES} frames that have times.",
            COPY_AGAIN,
        )
    keys = np.array(sorted(tally.keys), dtype=np.int64).reshape(-1, 2)
    return PacketTable(
        ticks=ticks,
        key_ticks=keys[:, 0],
        key_dts=keys[:, 1],
        time_base=time_base,
        by_order=by_order,
        claimed=claimed,
        without_time=len(times) - len(timed),
        repeated_times=len(timed) - len(ticks),
        cut_away=tally.cut_away,
        damaged=tally.damaged,
        ended_early=tally.ended_early,
        size_bytes=tally.size_bytes,
    )
