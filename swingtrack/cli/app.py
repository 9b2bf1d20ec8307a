"""The commands, one file each; this page only puts them together."""

from __future__ import annotations

from typing import Annotated

import typer

from . import combine, fit, follow, inertia, measure, plan, rehearse, solids, stopwatch

app = typer.Typer(
    name="swingtrack",
    no_args_is_help=True,
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
    context_settings={"help_option_names": ["-h", "--help"]},
    help="Moment of inertia, period and damping of a hanging article from a clip of its swing.\n\n"
    "Hang the article, paint a dot on it, film the swing, then: swingtrack measure CLIP --rig RIG.toml.",
)


def _show_version(wanted: bool) -> None:
    if wanted:
        from ..result_file import program_version

        typer.echo(f"swingtrack {program_version()}")
        raise typer.Exit


@app.callback()
def options(
    _version: Annotated[
        bool,
        typer.Option("--version", callback=_show_version, is_eager=True, help="Print the version and end."),
    ] = False,
    _debug: Annotated[
        bool,
        typer.Option("--debug", help="Show the whole traceback of an error. Taken anywhere on the line."),
    ] = False,
) -> None:
    """Options of the program as a whole; --debug is acted on before the line is parsed (see edge.py)."""


for command in (measure, follow, fit, inertia, stopwatch, solids, combine, plan, rehearse):
    app.command()(getattr(command, command.__name__.rsplit(".", 1)[1]))
