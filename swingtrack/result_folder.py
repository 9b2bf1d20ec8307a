"""The folders that commands write: everything of one measurement, whole or not at all."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path as FilePath

from .files import whole_folder, write_whole
from .records import Measurement, Path
from .result_file import dump, result_document
from .series_file import path_csv

Progress = Callable[[str, float], None]


def write_result_folder(
    folder: FilePath, measurement: Measurement, *, clip_file: FilePath | None = None, again: bool = False
) -> FilePath:
    """Write result.json, path.csv, the still, the figures and report.html of a measurement.

    Raises
    ------
    WouldOverwrite, BadInput
        The folder exists and `again` is False, or can't be written; nothing half-written stays.
    """
    from .report import figure_files, render_report

    document = result_document(measurement)
    still = _still(clip_file, measurement.path)
    with whole_folder(folder, again=again) as aside:
        write_whole(aside / "result.json", dump(document) + "\n")
        if measurement.path is not None:
            write_whole(aside / "path.csv", path_csv(measurement.path))
        if still is not None:
            write_whole(aside / "still.png", still)
        for name, content in figure_files(measurement).items():
            write_whole(aside / name, content)
        write_whole(aside / "report.html", render_report(measurement, result=document, still_png=still))
    return folder


def write_path_folder(
    folder: FilePath,
    path: Path,
    *,
    clip_file: FilePath,
    marked: bool = True,
    again: bool = False,
    progress: Progress | None = None,
) -> FilePath:
    """Write path.csv, the still and, if wanted, the marked clip of a path."""
    from .clip import write_marked_clip

    with whole_folder(folder, again=again) as aside:
        write_whole(aside / "path.csv", path_csv(path))
        still = _still(clip_file, path)
        if still is not None:
            write_whole(aside / "still.png", still)
        if marked:
            tell = None if progress is None else (lambda share: progress("drawing", share))
            write_marked_clip(clip_file, path, aside / "marked.mp4", progress=tell)
    return folder


def _still(clip_file: FilePath | None, path: Path | None) -> bytes | None:
    """PNG of the clip's first used picture with the dot and its path drawn on it."""
    if clip_file is None or path is None:
        return None
    from .clip import draw_still, encode_png, open_clip

    with open_clip(clip_file) as clip:
        return encode_png(draw_still(clip.first_image(), path))
