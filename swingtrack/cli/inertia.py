"""`swingtrack inertia`: stage 3 alone."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from . import shared


def inertia(
    rig: Annotated[Path, typer.Argument(help="Rig file (TOML).")],
    period: Annotated[
        str,
        typer.Option(
            "--period", help='Small-swing period with its uncertainty, such as "1.128 s ± 0.2 ms k=1".'
        ),
    ],
    json: shared.Json = False,
    quiet: shared.Quiet = False,
    strict: shared.Strict = False,
) -> None:
    """Turn a period into a moment of inertia with its uncertainty budget."""
    from ..measure import inertia_of_period
    from ..quantity import parse_quantity
    from ..report import inertia_text
    from ..result_file import dump, result_document
    from ..rig import read_rig

    measurement = inertia_of_period(read_rig(rig), parse_quantity(period, "time", key="--period"))
    if json:
        typer.echo(dump(result_document(measurement), indent=None))
    elif not quiet:
        typer.echo(inertia_text(measurement))
    if strict and measurement.doubts:
        raise typer.Exit(4)
