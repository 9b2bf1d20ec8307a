"""Writes drawn pictures as a clip with the true, uneven times in it."""

from __future__ import annotations

import os
import struct
import tempfile
from collections.abc import Iterable
from fractions import Fraction
from pathlib import Path as FilePath
from typing import Any

import av

from ..errors import BadInput
from .clock import FrameTimes
from .picture import Planes
from .settings import Film

SUFFIXES = (".mp4", ".mov", ".m4v", ".3gp", ".mkv", ".webm")
TURNED_IN_FILE = (".mp4", ".mov", ".m4v", ".3gp")
# Fast settings: a rehearsal is drawn while somebody waits, and phones encode in real time as well.
SPEED = {
    "libx264": {"preset": "veryfast", "refs": "1"},
    "libx265": {"preset": "ultrafast", "x265-params": "log-level=error"},
    "libvpx-vp9": {"deadline": "realtime", "cpu-used": "8", "row-mt": "0"},
    "libsvtav1": {"preset": "10", "svtav1-params": "lp=1"},
    "mpeg4": {},
}
# Rows a, b, c, d of the display matrix for a clockwise turn by 0°, 90°, 180°, 270° (QuickTime File Format, "Matrices").
TURNS = {0: (1, 0, 0, 1), 90: (0, 1, -1, 0), 180: (-1, 0, 0, -1), 270: (0, -1, 1, 0)}


def check_name(file: FilePath, film: Film) -> None:
    """Refuse early what the encoder would refuse after minutes of drawing."""
    suffix = file.suffix.lower()
    if suffix not in SUFFIXES:
        raise BadInput(
            f"A clip named {file.name} was asked for.", f"Needed: a name ending in {', '.join(SUFFIXES)}."
        )
    if suffix == ".webm" and film.codec not in ("libvpx-vp9", "libsvtav1"):
        raise BadInput(
            f"{film.codec} does not go into {suffix}.", "Needed: libvpx-vp9 or libsvtav1, or a .mp4 name."
        )
    if film.rotation_deg and suffix not in TURNED_IN_FILE:
        raise BadInput(f"A turn is not written into {suffix}.", "Needed: .mp4 or .mov, or rotation_deg = 0.")
    if not (file.parent.exists() or str(file.parent) == ""):
        raise BadInput(f"There is no folder {file.parent}.", "Needed: a folder that exists.")


def write_clip(file: FilePath, pictures: Iterable[Planes], film: Film, times: FrameTimes) -> None:
    """Encode stored pictures under the ticks of `times`; whole or not at all.

    Raises
    ------
    BadInput
        The encoder or the container refuses.
    """
    try:
        handle, aside = tempfile.mkstemp(dir=file.parent or ".", prefix=f".{file.stem}.", suffix=file.suffix)
    except OSError as error:
        raise BadInput(
            f"{file} can't be written: {error.strerror}.", "Needed: a folder one may write to."
        ) from error
    os.close(handle)
    try:
        _encode(aside, pictures, film, times)
        if film.rotation_deg:
            _write_turn(FilePath(aside), film.rotation_deg)
        os.chmod(aside, 0o644)
        os.replace(aside, file)
    except av.FFmpegError as error:
        raise BadInput(
            f"{file} can't be encoded: {error}.",
            "Needed: a codec that this container takes.",
            "Try a name in .mp4.",
        ) from error
    finally:
        FilePath(aside).unlink(missing_ok=True)


def _encode(name: str, pictures: Iterable[Planes], film: Film, times: FrameTimes) -> None:
    turned = film.rotation_deg in (90, 270)
    base = Fraction(1, times.base_hz)
    faststart = {"movflags": "+faststart"} if FilePath(name).suffix.lower() in TURNED_IN_FILE else {}
    with av.open(
        name, "w", options={"video_track_timescale": str(times.base_hz), **faststart} if faststart else {}
    ) as out:
        stream: Any = out.add_stream(film.codec, rate=Fraction(film.rate_hz).limit_denominator(1001))
        stream.width, stream.height = (film.height, film.width) if turned else (film.width, film.height)
        stream.pix_fmt = "yuv420p10le" if film.ten_bit else "yuv420p"
        stream.time_base = stream.codec_context.time_base = base
        context = stream.codec_context
        context.thread_type = "FRAME"  # the default writes many slices a picture
        context.color_primaries = context.color_trc = context.colorspace = 1  # BT.709
        context.color_range = 1  # limited
        context.gop_size = max(1, round(film.rate_hz))  # a phone writes a whole picture about once a second
        stream.options = {**SPEED[film.codec], **_quality(film, stream), **_b_frames(film)}
        for tick, picture in zip(times.ticks, pictures, strict=True):
            frame = av.VideoFrame.from_ndarray(picture.stacked(), format="yuv420p")
            if film.ten_bit:
                frame = frame.reformat(format="yuv420p10le")
            frame.pts, frame.time_base = int(tick), base
            out.mux(stream.encode(frame))
        out.mux(stream.encode())


def _quality(film: Film, stream: Any) -> dict[str, str]:
    if film.bitrate_mbps is not None:
        stream.bit_rate = round(film.bitrate_mbps * 1e6)
        return {}
    if film.codec == "mpeg4":
        stream.bit_rate = round(0.25 * film.width * film.height * film.rate_hz)
        return {}
    if film.codec == "libvpx-vp9":
        stream.bit_rate = 0
    return {"crf": str(film.crf)}


def _b_frames(film: Film) -> dict[str, str]:
    """Pictures stored out of order, as some phones do and most do not."""
    return {"bf": str(film.b_frames)} if film.codec in ("libx264", "mpeg4") else {}


def _write_turn(file: FilePath, clockwise_deg: int) -> None:
    """Put the display matrix into the track header (ISO/IEC 14496-12, 8.3.2), for players to turn the picture."""
    a, b, c, d = (value << 16 for value in TURNS[clockwise_deg])
    matrix = struct.pack(">9i", a, b, 0, c, d, 0, 0, 0, 1 << 30)
    with file.open("r+b") as stream:
        start, end = _find_box(stream, (b"moov", b"trak", b"tkhd"), (0, file.stat().st_size))
        stream.seek(start)
        version = stream.read(1)[0]
        # version and flags 4, then times, track, duration (20 or 32), reserved 8, layer to reserved 8: then the matrix
        place = start + 4 + (32 if version == 1 else 20) + 16
        if place + 36 > end:
            raise BadInput(f"{file} has no room for a turn.", "Needed: an ordinary MP4 or MOV.")
        stream.seek(place)
        stream.write(matrix)


def _find_box(stream: Any, names: tuple[bytes, ...], within: tuple[int, int]) -> tuple[int, int]:
    """First byte and end of the contents of nested boxes."""
    start, end = within
    for name in names:
        place = start
        while place + 8 <= end:
            stream.seek(place)
            size, kind = struct.unpack(">I4s", stream.read(8))
            head = 8
            if size == 1:
                size, head = struct.unpack(">Q", stream.read(8))[0], 16
            if kind == name:
                start, end = place + head, place + size
                break
            place += size if size >= 8 else end
        else:
            raise BadInput("The written clip has no track header.", "Needed: an ordinary MP4 or MOV.")
    return start, end
