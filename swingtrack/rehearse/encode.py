"""Writes drawn pictures as a clip with the true, uneven times in it."""

from __future__ import annotations

import os
import tempfile
from collections.abc import Iterable
from fractions import Fraction
from pathlib import Path as FilePath
from typing import Any

import av
import numpy as np

from ..errors import BadInput
from .settings import Film

TIME_BASE = Fraction(1, 90_000)


def write_clip(file: FilePath, pictures: Iterable[tuple[float, Any]], film: Film) -> None:
    """Encode (time in s, BGR picture) pairs; whole or not at all.

    With `film.rotation_deg` the pictures are stored turned and the file's display matrix turns them back.
    """
    handle, aside = tempfile.mkstemp(dir=file.parent or ".", prefix=f".{file.stem}.", suffix=file.suffix)
    os.close(handle)
    try:
        _encode(aside, pictures, film)
        os.chmod(aside, 0o644)
        os.replace(aside, file)
    except av.FFmpegError as error:
        raise BadInput(
            f"{file} can't be encoded: {error}.", "Needed: a name ending in .mp4 or .mov."
        ) from error
    finally:
        FilePath(aside).unlink(missing_ok=True)


def _encode(name: str, pictures: Iterable[tuple[float, Any]], film: Film) -> None:
    turned = film.rotation_deg in (90, 270)
    with av.open(name, "w", options={"movflags": "+faststart"}) as container:
        stream = container.add_stream(film.codec, rate=Fraction(film.rate_hz).limit_denominator(1001))
        stream.width, stream.height = (film.height, film.width) if turned else (film.width, film.height)
        stream.pix_fmt = "yuv420p"
        stream.time_base = TIME_BASE
        stream.codec_context.time_base = TIME_BASE
        stream.codec_context.thread_type = "FRAME"  # the default writes many slices a picture
        stream.options = {"crf": str(film.crf), "preset": "veryfast"}
        if film.codec == "libx265":
            stream.options |= {"x265-params": "log-level=error"}
        for t_s, picture in pictures:
            stored = np.rot90(picture, k=film.rotation_deg // 90) if film.rotation_deg else picture
            frame = av.VideoFrame.from_ndarray(np.ascontiguousarray(stored), format="bgr24")
            frame.pts = round(t_s / TIME_BASE)
            frame.time_base = TIME_BASE
            container.mux(stream.encode(frame))
        container.mux(stream.encode())
