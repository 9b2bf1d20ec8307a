"""`swingtrack follow`: stage 1 alone, with the timing audit."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from . import shared


def follow(
    clip: Annotated[Path, typer.Argument(help="Video file.")],
    out: shared.Out = None,
    dot: shared.Dot = None,
    dots: shared.Dots = 1,
    choose: shared.Choose = None,
    from_s: shared.From = None,
    to_s: shared.To = None,
    capture_rate: shared.CaptureRate = None,
    readout_ms: shared.Readout = None,
    marked: Annotated[
        bool, typer.Option("--marked/--no-marked", help="Write the clip with the dot and its path drawn.")
    ] = True,
    json: shared.Json = False,
    quiet: shared.Quiet = False,
    again: shared.Again = False,
) -> None:
    """Follow the dot through a clip and audit its frame times.

    Writes CLIP.path/ with path.csv, a still and the marked clip.
    """
    from ..measure import MeasureSettings, follow_clip
    from ..records import Measurement
    from ..report import audit_text
    from ..result_file import dump, result_document
    from ..result_folder import write_path_folder

    settings = MeasureSettings(
        dot=shared.read_dot(dot),
        dots=dots,
        choose=choose,
        from_s=from_s,
        to_s=to_s,
        capture_rate_hz=capture_rate,
        readout_ms=readout_ms,
    )
    folder = (clip.parent if out is None else out) / f"{clip.stem or 'clip'}.path"
    shared.refuse_existing(folder, again=again)
    with shared.progress_bar(not (json or quiet)) as progress:
        path = follow_clip(clip, settings=settings, progress=progress)
        write_path_folder(folder, path, clip_file=clip, marked=marked, again=again, progress=progress)
    if json:
        inputs = {"clip": str(clip)}
        typer.echo(
            dump(result_document(Measurement(path, None, None, None, None, inputs, path.doubts)), indent=None)
        )
    elif not quiet:
        typer.echo(audit_text(path, written_to=str(folder)))
