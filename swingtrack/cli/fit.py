"""`swingtrack fit`: stage 2 on a path or series from anywhere."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated, Any, Literal

import typer

from ..errors import BadInput, NothingToMeasure, SwingtrackError
from . import shared
from .edge import tell


def fit(
    series: Annotated[
        list[Path], typer.Argument(metavar="CSV...", help="path.csv, or t_s and one column more.")
    ],
    rig: shared.RigFile = None,
    column: Annotated[
        str | None, typer.Option("--column", help="Which column to fit, where there are several.")
    ] = None,
    unit: Annotated[
        Literal["rad", "deg"] | None,
        typer.Option("--unit", help="Unit of that column, where its name does not say it."),
    ] = None,
    rate_hz: Annotated[
        float | None,
        typer.Option("--rate-hz", help="Frames per second, for a file with a frame column and no t_s."),
    ] = None,
    json: shared.Json = False,
    quiet: shared.Quiet = False,
    strict: shared.Strict = False,
) -> None:
    """Fit period and damping to a path or any series of a swing against time.

    Times are taken as given: the clock that made them is not in the uncertainty. A rig gives the exact law of
    amplitude, and the moment of inertia.
    """
    from ..measure import measure_path
    from ..report import summary_text
    from ..result_file import dump, result_document
    from ..rig import read_rig
    from ..series_file import SeriesColumns, read_series

    if rate_hz is not None and not 0.0 < rate_hz < 1e7:
        raise BadInput(
            f"--rate-hz {rate_hz:g} is not a frame rate.", "Needed: frames per second.", "Write --rate-hz 60."
        )
    bench = None if rig is None else read_rig(rig)
    columns = SeriesColumns(value=column, rate_hz=rate_hz, unit=unit)
    status = 0
    for file in series:
        try:
            measurement = measure_path(read_series(file, columns), rig=bench)
        except (BadInput, NothingToMeasure) as error:
            status = max(status, _told(error, file, many=len(series) > 1))
            continue
        measurement = _with_inputs(measurement, file, bench)
        if strict and measurement.doubts:
            status = max(status, 4)
        if json:
            typer.echo(dump(result_document(measurement), indent=None))
        elif not quiet:
            typer.echo(summary_text(measurement))
    if status:
        raise typer.Exit(status)


def _told(error: SwingtrackError, file: Path, *, many: bool) -> int:
    tell(error, about=str(file) if many else "")
    return error.exit_status


def _with_inputs(measurement: Any, file: Path, bench: Any) -> Any:
    from dataclasses import replace

    inputs = {"series": str(file)} | ({} if bench is None else {"rig": bench.source})
    return replace(measurement, inputs=inputs)
