"""Opens a clip: frames in order with their true times, and what was found out about them on the way."""

from __future__ import annotations

import hashlib
from collections.abc import Iterator
from dataclasses import dataclass, field
from fractions import Fraction
from pathlib import Path as FilePath
from types import TracebackType
from typing import Any

import av
import numpy as np

from ..errors import BadClip
from ..records import ClipFacts, Doubt, Floats, Frame
from .planes import is_direct, view_planes
from .slow_motion import CaptureRate, capture_rate, looks_stretched
from .timing import TimingAudit, audit_times, find_repeats, timing_doubts

LARGEST_SIDE = 16_384  # pixels; no phone films more, and a forged size must not eat the memory
LARGEST_PICTURE = 80_000_000  # pixels: 8K has 33 million
SPARSE = 8  # every eighth pixel in both directions tells whether an image repeats the one before
NEEDED = "Needed: a clip as a phone films it (MP4, MOV, 3GP, MKV, WebM or AVI)."


def open_clip(file: str | FilePath, *, capture_rate_hz: float | None = None) -> Clip:
    """Open a clip.

    Parameters
    ----------
    file : path
    capture_rate_hz : float, optional
        True frame rate of a slow-motion clip with stretched times.

    Raises
    ------
    BadClip
        It is not there, not a video, has no picture that can be decoded, or is out of all size.
    """
    return Clip(FilePath(file), capture_rate_hz)


@dataclass
class _Seen:
    """What was noticed of the frames while they were read."""

    times: list[float] = field(default_factory=list)
    changes: list[float] = field(default_factory=list)
    backward: int = 0
    undated: int = 0
    corrupt: int = 0
    interlaced: bool = False
    converted: str = ""
    broken_at: float | None = None


class Clip:
    """A clip that can be read again and again; satisfies `records.FrameSource`.

    Frames come in stored orientation; `upright` and `stored` turn coordinates. `facts`, `doubts` and
    `repeated_times` tell of the longest reading so far, or of a scan of the file's index where none was made.
    """

    def __init__(self, file: FilePath, capture_rate_hz: float | None) -> None:
        self.file = file
        self._given_rate = capture_rate_hz
        self._read: _Seen | None = None
        with _opened(file) as container:
            stream = _video(container, file)
            _check_size(stream.codec_context.width, stream.codec_context.height, file)
            self._metadata = {**container.metadata, **stream.metadata}
            self._time_base = Fraction(stream.time_base) if stream.time_base else Fraction(1, 90_000)
            self.codec = stream.codec_context.name
            self._index_times = _scan(container, stream)
            self._cut = _reaches_beyond(stream, file.stat().st_size)
        first = self._first_picture()
        self.width, self.height = first.width, first.height
        _check_size(self.width, self.height, file)
        self.rotation_deg = int(first.rotation) % 360 // 90 * 90
        self._rate = capture_rate(
            self._audit_of(self._index_times).stored_rate_hz, capture_rate_hz, self._metadata
        )

    def __enter__(self) -> Clip:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        return None

    def frames(self, from_s: float | None = None, to_s: float | None = None) -> Iterator[Frame]:
        """Decoded frames in order; times are real seconds from the clip's first frame.

        A frame whose time does not go forward is left out; where the file breaks off, what is whole is used.
        """
        seen = _Seen()
        scale = self._rate.time_scale
        before: Any = None
        start: Fraction | None = None
        with _opened(self.file) as container:
            stream = _video(container, self.file)
            stream.thread_type = "AUTO"
            for index, picture in enumerate(_decoded(container, stream, seen)):
                stamp = picture.pts if picture.pts is not None else picture.dts
                if stamp is None:
                    seen.undated += 1
                    continue
                stamp_s = stamp * (picture.time_base or self._time_base)
                start = stamp_s if start is None else start
                t_s = float(stamp_s - start) * scale
                if seen.times and t_s <= seen.times[-1]:
                    seen.backward += 1
                    continue
                if picture.width != self.width or picture.height != self.height:
                    seen.broken_at = t_s
                    break
                if to_s is not None and t_s > to_s:
                    break
                frame = Frame(index, t_s, *view_planes(picture))
                sparse = frame.luma[::SPARSE, ::SPARSE].astype(np.int16)
                seen.changes.append(np.nan if before is None else float(np.abs(sparse - before).mean()))
                before = sparse
                seen.times.append(t_s)
                seen.corrupt += bool(picture.is_corrupt)
                seen.interlaced |= bool(picture.interlaced_frame)
                seen.converted = seen.converted if is_direct(picture.format.name) else picture.format.name
                if from_s is not None and t_s < from_s:
                    continue
                yield frame
            else:
                if self._cut and seen.broken_at is None:
                    seen.broken_at = seen.times[-1] if seen.times else 0.0
        self._keep(seen)

    def upright(self, x_px: Floats, y_px: Floats) -> tuple[Floats, Floats]:
        """Pixels of the picture as shown, from those of the picture as stored."""
        right, bottom = self.width - 1, self.height - 1
        match self.rotation_deg:
            case 90:
                return y_px, right - x_px
            case 180:
                return right - x_px, bottom - y_px
            case 270:
                return bottom - y_px, x_px
        return x_px, y_px

    def stored(self, x_px: Floats, y_px: Floats) -> tuple[Floats, Floats]:
        """Pixels of the picture as stored, from those of the picture as shown."""
        right, bottom = self.width - 1, self.height - 1
        match self.rotation_deg:
            case 90:
                return right - y_px, x_px
            case 180:
                return right - x_px, bottom - y_px
            case 270:
                return y_px, bottom - x_px
        return x_px, y_px

    def first_image(self) -> Any:
        """The first picture, upright, (height, width, 3) BGR uint8."""
        image = self._first_picture().to_ndarray(format="bgr24")
        return np.ascontiguousarray(np.rot90(image, k=self.rotation_deg // 90))

    def audit(self) -> TimingAudit:
        """The timing audit of the frames read, or of the file's index where none was read yet."""
        seen = self._read
        if seen is None:
            return self._audit_of(self._index_times)
        times = np.array(seen.times) / self._rate.time_scale
        return audit_times(times, find_repeats(np.array(seen.changes)), seen.backward)

    def repeated_times(self) -> list[float]:
        """Times, s, of images that only repeat the one before."""
        if self._read is None:
            return []
        repeats = find_repeats(np.array(self._read.changes))
        return [t for t, repeated in zip(self._read.times, repeats, strict=True) if repeated]

    def facts(self) -> ClipFacts:
        """What the file says of itself and what its times were found to be."""
        audit, seen = self.audit(), self._read
        times = seen.times if seen is not None else list(self._index_times * self._rate.time_scale)
        turned = self.rotation_deg in (90, 270)
        return ClipFacts(
            file=str(self.file),
            sha256=_sha256(self.file),
            codec=self.codec,
            width=self.height if turned else self.width,
            height=self.width if turned else self.height,
            rotation_deg=self.rotation_deg,
            frames=len(times),
            duration_s=float(times[-1] - times[0]) if len(times) else 0.0,
            stored_rate_hz=audit.stored_rate_hz,
            capture_rate_hz=self._rate.capture_rate_hz or audit.stored_rate_hz,
            time_scale=self._rate.time_scale,
            dropped_frames=audit.dropped_frames,
            repeated_frames=audit.repeated_frames,
            interval_spread_ms=audit.interval_spread_ms,
            notes=(*self._notes(), *audit.notes()),
        )

    def doubts(self) -> tuple[Doubt, ...]:
        """What in the clip gives cause to doubt a period measured from it."""
        audit, seen = self.audit(), self._read
        stretched = looks_stretched(
            audit.stored_rate_hz,
            even=audit.even,
            time_base=self._time_base,
            metadata=self._metadata,
            learnt=self._rate,
        )
        doubts = list(timing_doubts(audit, stretched=stretched))
        if seen is not None and seen.broken_at is not None:
            doubts.append(
                Doubt(
                    "clip-cut",
                    f"The file breaks off after {seen.broken_at:.2f} s; what is whole was used.",
                    "Copy the file from the phone again if the clip should be longer.",
                )
            )
        if seen is not None and seen.corrupt:
            doubts.append(
                Doubt(
                    "frames-damaged",
                    f"{seen.corrupt} frames are damaged.",
                    "Copy the file from the phone again.",
                )
            )
        if seen is not None and seen.interlaced:
            doubts.append(
                Doubt(
                    "interlaced",
                    "The clip is interlaced: odd and even rows were taken at different times.",
                    "Film in a progressive mode; the name then has a p, such as 1080p.",
                )
            )
        return tuple(doubts)

    def _notes(self) -> list[str]:
        seen, rate = self._read, self._rate
        notes = []
        if rate.learnt_from and rate.time_scale != 1.0:
            source = "as given" if rate.learnt_from == "given" else f"by the file's key {rate.learnt_from}"
            notes.append(
                f"Slow motion: {rate.capture_rate_hz:g} frames/s were taken ({source}); stored times are multiplied by {rate.time_scale:.6g}."
            )
        if seen is not None and seen.undated:
            notes.append(f"{seen.undated} frames bear no time and were left out.")
        if seen is not None and seen.converted:
            notes.append(f"Pictures are stored as {seen.converted} and were converted to be read.")
        return notes

    def _keep(self, seen: _Seen) -> None:
        """Keep the longest reading: a later look at a few frames must not hide what a whole pass found."""
        if self._read is None or len(seen.times) >= len(self._read.times):
            self._read = seen

    def _audit_of(self, times: Floats) -> TimingAudit:
        steps = np.concatenate([[True], np.diff(times) > 0.0])
        return audit_times(times[steps], np.zeros(int(steps.sum()), dtype=bool), int((~steps).sum()))

    def _first_picture(self) -> Any:
        with _opened(self.file) as container:
            stream = _video(container, self.file)
            for picture in _decoded(container, stream, _Seen()):
                return picture
        raise BadClip(
            f"{self.file} has no picture that can be decoded.", NEEDED, "Copy the file from the phone again."
        )


def _opened(file: FilePath) -> Any:
    if file.is_dir():
        raise BadClip(f"{file} is a folder.", NEEDED, "Give the clip itself.")
    try:
        size = file.stat().st_size
        container = av.open(str(file)) if size else None
    except FileNotFoundError:
        raise BadClip(f"There is no file {file}.", NEEDED, "Check the name and the folder.") from None
    except PermissionError:
        raise BadClip(f"{file} may not be read.", NEEDED, "Check its permissions.") from None
    except (av.FFmpegError, OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or type(error).__name__
        found = f"{file} can't be opened as a video ({reason})."
        raise BadClip(found, NEEDED, "Is it the right file, and whole?") from None
    if container is None:
        raise BadClip(f"{file} is empty.", NEEDED, "Copy the file from the phone again.")
    return container


def _video(container: Any, file: FilePath) -> Any:
    """The first video track that is not an attached picture."""
    for stream in container.streams.video:
        if "attached_pic" not in str(getattr(stream, "disposition", "")).lower():
            if stream.codec_context is None:
                break
            return stream
    raise BadClip(f"{file} has no video track that can be read.", NEEDED, "Sound alone can't be measured.")


def _check_size(width: int, height: int, file: FilePath) -> None:
    if max(width, height) > LARGEST_SIDE or width * height > LARGEST_PICTURE:
        raise BadClip(
            f"{file} says that its pictures are {width}x{height}.",
            "Needed: 16k at most.",
            "The file is likely damaged.",
        )


def _scan(container: Any, stream: Any) -> Floats:
    """Presentation times, s, from the packets alone, in order: no picture is decoded."""
    stamps = []
    try:
        for packet in container.demux(stream):
            stamp = packet.pts if packet.pts is not None else packet.dts
            if stamp is not None and packet.size and not packet.is_discard:
                stamps.append(float(stamp * packet.time_base))
    except (av.FFmpegError, ValueError):
        pass  # a cut file: what is whole is used, and reading the frames says where it breaks off
    times = np.sort(np.array(stamps, dtype=np.float64))
    return times - times[0] if times.size else times


def _reaches_beyond(stream: Any, size: int) -> bool:
    """Whether the index lists pictures that lie beyond the end of the file: it was cut."""
    entries = getattr(stream, "index_entries", None)
    if entries is None or not len(entries):
        return False
    last = entries[len(entries) - 1]
    return bool(last.pos + last.size > size)


def _decoded(container: Any, stream: Any, seen: _Seen) -> Iterator[Any]:
    """Pictures until the file ends or breaks off; single broken packets are passed over."""
    broken = 0
    packets = container.demux(stream)
    while True:
        try:
            packet = next(packets)
        except StopIteration:
            return
        except (av.FFmpegError, ValueError):
            seen.broken_at = seen.times[-1] if seen.times else 0.0
            return
        try:
            yield from packet.decode()
        except av.FFmpegError:
            broken += 1
            seen.corrupt += 1
            if broken > 200 and not seen.times:
                return


def _sha256(file: FilePath) -> str:
    with file.open("rb") as stream:
        return hashlib.file_digest(stream, "sha256").hexdigest()


__all__ = ["CaptureRate", "Clip", "open_clip"]
