"""`swingtrack measure`: the main job, all stages."""

from __future__ import annotations

import sys
from dataclasses import dataclass
from pathlib import Path
from typing import Annotated, Any

import typer

from ..errors import BadInput, NothingToMeasure, SwingtrackError
from . import shared
from .edge import tell


@dataclass(frozen=True)
class _Task:
    """One clip's job, as it is handed to a worker process."""

    clip: Path
    rig: Any
    trials: Path | None
    settings: Any
    folder: Path
    again: bool


def measure(
    clips: Annotated[
        list[Path], typer.Argument(metavar="CLIP...", help="Video files, as the phone gave them.")
    ],
    rig: shared.RigFile = None,
    stopwatch: Annotated[
        Path | None,
        typer.Option("--stopwatch", help="Trial sheet (CSV) of hand-timed runs to hold against the clip."),
    ] = None,
    out: shared.Out = None,
    dot: shared.Dot = None,
    dots: shared.Dots = 1,
    choose: shared.Choose = None,
    from_s: shared.From = None,
    to_s: shared.To = None,
    capture_rate: shared.CaptureRate = None,
    readout_ms: shared.Readout = None,
    clock_ppm: Annotated[
        float,
        typer.Option(
            "--clock-ppm", min=0.0, max=1e5, help="Limits of the camera clock's error, parts per million."
        ),
    ] = 50.0,
    jobs: Annotated[
        int, typer.Option("--jobs", min=1, max=256, help="How many clips to work on at once.")
    ] = 1,
    json: shared.Json = False,
    quiet: shared.Quiet = False,
    strict: shared.Strict = False,
    again: shared.Again = False,
) -> None:
    """Measure period, damping and moment of inertia from clips of a swing.

    Writes CLIP.swing/ with result.json, path.csv, report.html and the figures. Without --rig it gives period
    and damping alone.
    """
    from ..measure import MeasureSettings
    from ..rig import read_rig

    settings = MeasureSettings(
        dot=shared.read_dot(dot),
        dots=dots,
        choose=choose,
        from_s=from_s,
        to_s=to_s,
        capture_rate_hz=capture_rate,
        readout_ms=readout_ms,
        clock_ppm=clock_ppm,
    )
    bench = None if rig is None else read_rig(rig)
    tasks = [_Task(clip, bench, stopwatch, settings, _folder(clip, out), again) for clip in clips]
    _refuse_clashes(tasks)
    status = 0
    for task, outcome in _work(tasks, jobs, bar=not (json or quiet)):
        if isinstance(outcome, SwingtrackError):
            tell(outcome, about=str(task.clip) if len(tasks) > 1 else "")
            status = max(status, outcome.exit_status)
            continue
        document, text, doubtful = outcome
        if strict and doubtful:
            status = max(status, 4)
        if json:
            sys.stdout.write(document + "\n")
        elif not quiet:
            sys.stdout.write(text + "\n")
        sys.stdout.flush()
    if status:
        raise typer.Exit(status)


def _folder(clip: Path, out: Path | None) -> Path:
    return (clip.parent if out is None else out) / f"{clip.stem or 'clip'}.swing"


def _refuse_clashes(tasks: list[_Task]) -> None:
    """Say before any work what would be overwritten at its end."""
    seen: dict[Path, Path] = {}
    for task in tasks:
        if task.folder in seen:
            raise BadInput(
                f"{seen[task.folder]} and {task.clip} would both be written to {task.folder}.",
                "Needed: one result folder a clip.",
                "Rename one of them, or measure them one by one with --out.",
            )
        seen[task.folder] = task.clip
        shared.refuse_existing(task.folder, again=task.again)


def _work(tasks: list[_Task], jobs: int, *, bar: bool) -> Any:
    """Yield (task, outcome) in the order given; outcomes are results or the error that ended them."""
    if jobs == 1 or len(tasks) == 1:
        for task in tasks:
            with shared.progress_bar(bar) as progress:
                outcome = _measure_one(task, progress)
            yield task, outcome
        return
    from concurrent.futures import ProcessPoolExecutor
    from multiprocessing import get_context

    # Spawned, not forked: the decoder and the linear algebra start threads of their own.
    with ProcessPoolExecutor(min(jobs, len(tasks)), mp_context=get_context("spawn")) as pool:
        yield from zip(tasks, pool.map(_measure_one, tasks), strict=True)


def _measure_one(task: _Task, progress: Any = None) -> Any:
    """Measure a clip and write its folder: (document line, summary text, doubtful), or the error."""
    from ..measure import measure_clip
    from ..report import summary_text
    from ..result_file import dump, result_document
    from ..result_folder import write_result_folder

    try:
        measurement = measure_clip(
            task.clip, rig=task.rig, trials=task.trials, settings=task.settings, progress=progress
        )
        folder = write_result_folder(task.folder, measurement, clip_file=task.clip, again=task.again)
    except (BadInput, NothingToMeasure) as error:
        return error
    text = summary_text(measurement, written_to=str(folder))
    return dump(result_document(measurement), indent=None), text, bool(measurement.doubts)
