"""The marked clip: every picture with the path so far and a ring round the located dot; plays in a browser."""

from __future__ import annotations

import os
import tempfile
from collections.abc import Callable, Iterator
from fractions import Fraction
from pathlib import Path as FilePath
from typing import Any

import av
import cv2
import numpy as np

from ..errors import BadInput
from ..records import Floats, Path
from .reader import open_clip
from .still import PATH_BGR, RING_BGR, SHIFT

TRAIL_S = 2.5  # length of the path drawn behind the dot
LARGEST_WIDTH = 1280  # of the marked clip: it is for looking at, not for measuring
MATCH_S = 2e-6  # path times come back from a file rounded to a tenth of a microsecond
TIME_BASE = Fraction(1, 90_000)


def write_marked_clip(
    source_file: str | FilePath,
    path: Path,
    out_file: str | FilePath,
    *,
    progress: Callable[[float], None] | None = None,
) -> None:
    """Write the clip with the dot and its path drawn, H.264 in MP4; whole or not at all.

    Raises
    ------
    BadInput
        It can't be written.
    """
    out = FilePath(out_file)
    handle, aside = tempfile.mkstemp(dir=out.parent or ".", prefix=f".{out.stem[:40]}.", suffix=".mp4")
    os.close(handle)
    try:
        _encode(aside, _marked(FilePath(source_file), path, progress))
        os.chmod(aside, 0o644)
        os.replace(aside, out)
    except (av.FFmpegError, OSError) as error:
        raise BadInput(f"{out} can't be written: {error.strerror}.", "Needed: a folder with room.") from error
    finally:
        FilePath(aside).unlink(missing_ok=True)


def _marked(
    source: FilePath, path: Path, progress: Callable[[float], None] | None
) -> Iterator[tuple[float, Any]]:
    """(time, picture) with the marks drawn, upright, at most `LARGEST_WIDTH` wide."""
    scale_times = 1.0 if path.clip is None else path.clip.time_scale
    rate = None if path.clip is None or scale_times == 1.0 else path.clip.capture_rate_hz
    end = float(path.t_s[-1])
    with open_clip(source, capture_rate_hz=rate) as clip:
        size = min(1.0, LARGEST_WIDTH / max(clip.width, clip.height))
        for frame in clip.frames():
            at = int(np.searchsorted(path.t_s, frame.t_s - MATCH_S))
            picture = np.ascontiguousarray(np.rot90(_to_bgr(frame), k=clip.rotation_deg // 90))
            height, width = (round(side * size) // 2 * 2 for side in picture.shape[:2])
            picture = cv2.resize(picture, (width, height), interpolation=cv2.INTER_AREA)
            for track_number in range(len(path.tracks)):
                _mark(picture, path, track_number, at, size)
            if progress is not None and frame.index % 15 == 0 and end > 0.0:
                progress(min(frame.t_s / end, 1.0))
            # slow motion is shown at the speed at which it is stored
            yield frame.t_s / scale_times, picture


def _to_bgr(frame: Any) -> Any:
    """8-bit BGR of a frame's planes."""
    shift = frame.depth - 8
    luma = (frame.luma >> shift).astype(np.uint8)
    if frame.chroma_u is None or frame.chroma_v is None:
        return cv2.cvtColor(luma, cv2.COLOR_GRAY2BGR)
    whole = luma.shape[1::-1]
    chroma = [
        cv2.resize((plane >> shift).astype(np.uint8), whole) for plane in (frame.chroma_v, frame.chroma_u)
    ]
    return cv2.cvtColor(cv2.merge([luma, *chroma]), cv2.COLOR_YCrCb2BGR)


def _mark(picture: Any, path: Path, number: int, at: int, size: float) -> None:
    """Draw one track's trail up to frame `at`, and its ring if it is seen there."""
    track = path.tracks[number]
    if at >= path.t_s.size:
        return
    first = int(np.searchsorted(path.t_s, path.t_s[at] - TRAIL_S))
    part = np.flatnonzero(track.seen[first : at + 1]) + first
    if part.size > 1:
        places = np.stack([track.x_px[part], track.y_px[part]], axis=1) * size
        cv2.polylines(picture, [_fixed(places)], False, PATH_BGR, 1, cv2.LINE_AA, SHIFT)
    if track.seen[at]:
        diameter = path.marker.diameter_px if path.marker is not None and path.marker.diameter_px else 16.0
        x, y = _fixed(np.array([track.x_px[at], track.y_px[at]]) * size)
        radius = round((0.5 * diameter * size + 5.0) * (1 << SHIFT))
        cv2.circle(picture, (int(x), int(y)), radius, RING_BGR, 2, cv2.LINE_AA, SHIFT)


def _fixed(places: Floats) -> Any:
    return np.rint(places * (1 << SHIFT)).astype(np.int32)


def _encode(name: str, pictures: Iterator[tuple[float, Any]]) -> None:
    with av.open(name, "w", options={"movflags": "+faststart"}) as container:
        stream: Any = None
        last = -1
        for t_s, picture in pictures:
            if stream is None:
                stream = container.add_stream("libx264", rate=Fraction(30))
                stream.height, stream.width = picture.shape[:2]
                stream.pix_fmt = "yuv420p"
                stream.time_base = stream.codec_context.time_base = TIME_BASE
                stream.codec_context.thread_type = "FRAME"  # the default writes many slices a picture
                stream.options = {"crf": "23", "preset": "veryfast"}
            frame = av.VideoFrame.from_ndarray(picture, format="bgr24")
            last = max(round(t_s / TIME_BASE), last + 1)
            frame.pts, frame.time_base = last, TIME_BASE
            container.mux(stream.encode(frame))
        if stream is not None:
            container.mux(stream.encode())
