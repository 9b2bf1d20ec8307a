"""Frames of a clip with their true times, planes as they are stored (first version)."""

from __future__ import annotations

import hashlib
from collections.abc import Iterator
from pathlib import Path as FilePath
from typing import Any

import av
import numpy as np

from ..errors import BadClip
from ..records import ClipFacts, Doubt, Floats, Frame


def open_clip(file: str | FilePath, *, capture_rate_hz: float | None = None) -> Clip:
    return Clip(FilePath(file), capture_rate_hz)


class Clip:
    def __init__(self, file: FilePath, capture_rate_hz: float | None) -> None:
        self.file = file
        try:
            with av.open(str(file)) as container:
                stream = container.streams.video[0]
                first = next(container.decode(stream))
                self.width, self.height = first.width, first.height
                self.rotation_deg = int(first.rotation) % 360
                self._rate = float(stream.average_rate or 30)
                self._codec = stream.codec_context.name
                self._count = stream.frames
        except (av.FFmpegError, IndexError, StopIteration, OSError) as error:
            raise BadClip(f"{file} can't be read as a video: {error}.", "Needed: a clip.", "") from error
        self._times: list[float] = []

    def __enter__(self) -> Clip:
        return self

    def __exit__(self, *_: object) -> None:
        return None

    def frames(self, from_s: float | None = None, to_s: float | None = None) -> Iterator[Frame]:
        with av.open(str(self.file)) as container:
            stream = container.streams.video[0]
            stream.thread_type = "AUTO"
            t0 = None
            for index, frame in enumerate(container.decode(stream)):
                pts = frame.pts * frame.time_base
                t0 = pts if t0 is None else t0
                t = float(pts - t0)
                if from_s is not None and t < from_s:
                    continue
                if to_s is not None and t > to_s:
                    break
                planes = [_plane(p) for p in frame.planes[:3]]
                self._times.append(t)
                yield Frame(index, t, planes[0], planes[1], planes[2], 8)

    def upright(self, x_px: Floats, y_px: Floats) -> tuple[Floats, Floats]:
        w, h = self.width - 1, self.height - 1
        match self.rotation_deg:
            case 90:
                return y_px, w - x_px
            case 180:
                return w - x_px, h - y_px
            case 270:
                return h - y_px, x_px
        return x_px, y_px

    def stored(self, x_px: Floats, y_px: Floats) -> tuple[Floats, Floats]:
        w, h = self.width - 1, self.height - 1
        match self.rotation_deg:
            case 90:
                return w - y_px, x_px
            case 180:
                return w - x_px, h - y_px
            case 270:
                return y_px, h - x_px
        return x_px, y_px

    def first_image(self) -> Any:
        """The first picture, upright, (height, width, 3) BGR uint8."""
        with av.open(str(self.file)) as container:
            frame = next(container.decode(container.streams.video[0]))
            image = frame.to_ndarray(format="bgr24")
        return np.ascontiguousarray(np.rot90(image, k=-(self.rotation_deg // 90) % 4))

    def facts(self) -> ClipFacts:
        sha = hashlib.sha256(self.file.read_bytes()).hexdigest()
        t = np.array(self._times)
        return ClipFacts(
            str(self.file),
            sha,
            self._codec,
            self.width,
            self.height,
            self.rotation_deg,
            self._count,
            float(t[-1] if t.size else 0),
            self._rate,
            None,
            1.0,
            0,
            0,
            0.0,
        )

    def doubts(self) -> tuple[Doubt, ...]:
        return ()

    def repeated_times(self) -> list[float]:
        return []


def _plane(plane: Any) -> Any:
    array = np.frombuffer(plane, np.uint8).reshape(plane.height, plane.line_size)
    return array[:, : plane.width]
