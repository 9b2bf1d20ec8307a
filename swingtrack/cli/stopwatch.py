"""`swingtrack stopwatch`: hand-timed runs, alone or against a clip's result."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from . import shared


def stopwatch(
    trials: Annotated[
        Path, typer.Argument(metavar="TRIALS.csv", help="Trial sheet: swings,seconds (and start_s).")
    ],
    rig: shared.RigFile = None,
    against: Annotated[
        Path | None,
        typer.Option("--against", help="Result folder or result.json of a clip of the same swing."),
    ] = None,
    target: Annotated[
        float | None,
        typer.Option(
            "--target", min=1e-9, max=1.0, help="Wanted relative uncertainty of the period, such as 0.001."
        ),
    ] = None,
    json: shared.Json = False,
    quiet: shared.Quiet = False,
    strict: shared.Strict = False,
) -> None:
    """Judge stopwatch runs: period, scatter, miscounts, and whether they can be trusted.

    With --rig the same sheet gives the moment of inertia; with --against it is held against a clip's result.
    """
    from ..measure import measure_trials
    from ..report import stopwatch_text
    from ..result_file import dump, read_result, result_document
    from ..rig import read_rig

    measurement = measure_trials(
        trials,
        rig=None if rig is None else read_rig(rig),
        against=None if against is None else read_result(against),
        target_relative_u=target,
    )
    if json:
        typer.echo(dump(result_document(measurement), indent=None))
    elif not quiet:
        typer.echo(stopwatch_text(measurement))
    if strict and measurement.doubts:
        raise typer.Exit(4)
