"""`swingtrack combine`: several results, one answer."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated, Any, Literal

import typer

from . import shared


def combine(
    results: Annotated[
        list[Path],
        typer.Argument(metavar="RESULT...", help="Result folders or result.json files of the article."),
    ],
    method: Annotated[
        Literal["repeats", "added-weights", "axes", "edges", "sway"],
        typer.Option(
            "--as",
            help="repeats: one article swung again; added-weights: known weights in steps; axes: the whole tensor; "
            "edges: one pendulum on several edges; sway: radius of gyration from sway in one clip.",
        ),
    ] = "repeats",
    tare: Annotated[
        list[Path] | None,
        typer.Option("--tare", help="Result of the cradle swung alone; may be given again."),
    ] = None,
    reference: Annotated[
        list[Path] | None,
        typer.Option(
            "--reference", help="Result of an article of known moment (its rig has expected_moment)."
        ),
    ] = None,
    out: Annotated[
        Path | None,
        typer.Option("--out", help="Folder for a report of the series and its figures (default: none)."),
    ] = None,
    json: shared.Json = False,
    quiet: shared.Quiet = False,
    strict: shared.Strict = False,
    again: shared.Again = False,
) -> None:
    """Combine results: repeats, cradle subtracted, reference article, added weights, the whole tensor."""
    from ..combining import combine_results
    from ..report import combined_text, tensor_text
    from ..result_file import combined_document, dump

    if out is not None:
        shared.refuse_existing(out, again=again)
    result = combine_results(results, method=method, tare=tare or (), reference=reference or ())
    document = combined_document(result, [str(file) for file in results])
    if out is not None:
        _write(out, result, document, [*results, *(tare or ()), *(reference or ())], again=again)
    if json:
        typer.echo(dump(document, indent=None))
    elif not quiet:
        typer.echo(tensor_text(result) if method == "axes" else combined_text(result))
    if strict and result.doubts:
        raise typer.Exit(4)


def _write(out: Path, result: Any, document: dict[str, Any], files: list[Path], *, again: bool) -> None:
    from ..files import fill_folder
    from ..report import render_series, series_files
    from ..result_file import dump, read_result

    runs = [read_result(file).document for file in files]
    page = render_series(result, document=document, runs=runs)
    fill_folder(
        out,
        {"combined.json": dump(document) + "\n", "report.html": page, **series_files(result)},
        again=again,
    )
