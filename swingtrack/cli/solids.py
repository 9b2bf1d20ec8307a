"""`swingtrack solids`: expected moment of inertia of an article built of simple solids."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from . import shared


def solids(
    parts: Annotated[
        Path, typer.Argument(metavar="PARTS.toml", help="The parts: shapes, sizes, places, materials.")
    ],
    json: shared.Json = False,
    quiet: shared.Quiet = False,
    strict: shared.Strict = False,
) -> None:
    """Work out mass, centre of mass and moment of inertia of an article built of simple solids."""
    from ..inertia.solids import assemble
    from ..inertia.solids_file import read_parts
    from ..report import solids_text
    from ..result_file import combined_document, dump

    result = assemble(read_parts(parts))
    if json:
        typer.echo(dump(combined_document(result, [str(parts)], name="solids"), indent=None))
    elif not quiet:
        typer.echo(solids_text(result))
    if strict and result.doubts:
        raise typer.Exit(4)
