"""Opening a video file: what is refused and why, which track is taken."""

from __future__ import annotations

import os
from pathlib import Path as FilePath
from typing import Any

import av
from av.stream import Disposition

from ..errors import BadClip

# Containers that carry frame times, or a constant frame interval (AVI). A list, not "anything": a play list or a
# text file posing as a clip would make the library open other files or draw letters.
CONTAINERS = "mov,mp4,matroska,webm,avi,mpegts"
CONTAINER_NAMES = "MP4, MOV, 3GP, MKV, WebM, AVI or MPEG-TS"
SMALLEST_SIDE_PX = 16  # a dot to be followed has 8 px at the least, and must have room to move
MOST_PIXELS = 8192 * 4608  # 8K, 57 MB a picture; decoders hold some ten of them
COPY_AGAIN = "Copy the file again straight from the phone (cable or shared folder), or film again."


def check_file(file: FilePath) -> None:
    """Refuse what is not a readable, non-empty file.

    Raises
    ------
    BadClip
    """
    if not file.exists():
        raise BadClip(f"There is no file {file}.", "Needed: a video file.", "Check the name and the folder.")
    if file.is_dir():
        raise BadClip(f"{file} is a folder.", "Needed: a video file.", "Name the clip inside it.")
    if not file.is_file():
        raise BadClip(
            f"{file} is not an ordinary file.", "Needed: a video file.", "Copy the clip to a disk first."
        )
    if not os.access(file, os.R_OK):
        raise BadClip(
            f"{file} may not be read.", "Needed: permission to read it.", "Change its permissions or copy it."
        )
    if file.stat().st_size == 0:
        raise BadClip(f"{file} is empty (0 bytes).", f"Needed: a video, {CONTAINER_NAMES}.", COPY_AGAIN)


def open_container(file: FilePath) -> Any:
    """Open a clip for reading; the caller closes it.

    Raises
    ------
    BadClip
        It is no video container that carries frame times, or it is broken.
    """
    try:
        # the "file:" keeps a name such as "concat:a" from being taken for a command to the library
        return av.open(
            "file:" + os.fspath(file),
            options={"format_whitelist": CONTAINERS, "protocol_whitelist": "file"},
            metadata_errors="replace",
        )
    except av.ArgumentError as error:
        raise BadClip(
            f"{file} is not a video file of a known kind.",
            f"Needed: {CONTAINER_NAMES}.",
            "Give the clip as the phone wrote it; a bare picture, sound, text or stream file has no frame times.",
        ) from error
    except (av.FFmpegError, OSError) as error:
        raise BadClip(_unreadable(file, error), "Needed: a whole video file.", COPY_AGAIN) from error


def pick_video(container: Any, file: FilePath) -> tuple[Any, list[str]]:
    """The first video track that is not a cover picture, with notes on what was passed over.

    Raises
    ------
    BadClip
        There is no video track, its codec is unknown, or its picture is too small or too large.
    """
    films = [s for s in container.streams.video if not s.disposition & Disposition.attached_pic]
    if not films:
        other = sorted({s.type for s in container.streams if s.type != "video"})
        holds = ", ".join({"audio": "sound"}.get(kind, kind) for kind in other) or "nothing that can be shown"
        if container.streams.video:
            holds = f"a cover picture and {holds}" if other else "a still picture"
        raise BadClip(
            f"{file} holds {holds}, no moving picture.", "Needed: a video track.", "Give the clip itself."
        )
    stream = films[0]
    if stream.codec_context is None:
        raise BadClip(
            f"The video track of {file} is in a coding that is not known here.",
            "Needed: H.264, HEVC, VP9, AV1 or MPEG-4 video.",
            "Film in the phone's ordinary mode, or convert the clip to H.264 with its frame times kept.",
        )
    check_size(stream.width, stream.height, file)
    notes = []
    if len(films) > 1:
        notes.append(f"{len(films)} video tracks; the first was used")
    return stream, notes


def check_size(width: int, height: int, file: FilePath) -> None:
    """Refuse pictures with no room for a dot, and ones that would fill the memory.

    Raises
    ------
    BadClip
    """
    if min(width, height) < SMALLEST_SIDE_PX:
        raise BadClip(
            f"The picture of {file} has {width} by {height} pixels.",
            f"Needed: at least {SMALLEST_SIDE_PX} each way.",
            "Film at 720p or better.",
        )
    if width * height > MOST_PIXELS:
        raise BadClip(
            f"The picture of {file} has {width} by {height} pixels.",
            f"Needed: at most {MOST_PIXELS // 10**6} million pixels (8K).",
            "Film at 1080p or 4K.",
        )


def ready_decoder(stream: Any) -> None:
    """Set the decoder for frame threads and for the largest picture that is taken."""
    stream.thread_type = "AUTO"
    stream.codec_context.options = {"max_pixels": str(MOST_PIXELS)}


def _unreadable(file: FilePath, error: Exception) -> str:
    if isinstance(error, av.InvalidDataError) and _cut_before_index(file):
        return f"{file} was cut off before its index was written: no frame of it can be found."
    return f"{file} can't be read as a video: {getattr(error, 'strerror', None) or error}."


def _cut_before_index(file: FilePath) -> bool:
    """Whether an MP4 or MOV lacks the `moov` box, which recorders write when they stop."""
    from .boxes import top_boxes

    kinds = [box.kind for box in top_boxes(file)]
    return b"ftyp" in kinds and b"moov" not in kinds
