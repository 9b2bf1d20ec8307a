"""Options that several commands share, and the progress bar."""

from __future__ import annotations

import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Annotated

import typer

from ..errors import BadInput, WouldOverwrite

Json = Annotated[bool, typer.Option("--json", help="Print the result document on stdout and nothing else.")]
Again = Annotated[bool, typer.Option("--again", help="Replace output that is there already.")]
Out = Annotated[Path | None, typer.Option("--out", help="Folder for the output (default: beside the input).")]
Quiet = Annotated[bool, typer.Option("--quiet", "-q", help="Print nothing but errors.")]
Strict = Annotated[bool, typer.Option("--strict", help="End with status 4 where the result has warnings.")]
RigFile = Annotated[
    Path | None, typer.Option("--rig", help="Rig file (TOML): how and where the article hangs.")
]
Dot = Annotated[
    str | None, typer.Option("--dot", metavar="X,Y", help="Where the dot is, pixels in the first frame used.")
]
Dots = Annotated[int, typer.Option("--dots", min=1, max=2, help="How many dots to follow.")]
Choose = Annotated[
    int | None,
    typer.Option("--choose", min=1, help="Take the spot with this number, as an earlier run listed them."),
]
From = Annotated[float | None, typer.Option("--from", metavar="S", help="Use the clip from this second on.")]
To = Annotated[float | None, typer.Option("--to", metavar="S", help="Use the clip up to this second.")]
CaptureRate = Annotated[
    float | None,
    typer.Option(
        "--capture-rate", metavar="HZ", help="True frame rate of a slow-motion clip with stretched times."
    ),
]
Readout = Annotated[
    float | None,
    typer.Option("--readout-ms", metavar="MS", help="Time the sensor takes from its first row to its last."),
]


def read_dot(text: str | None) -> tuple[float, float] | None:
    """`X,Y` as two numbers."""
    if text is None:
        return None
    try:
        x, y = (float(part) for part in text.replace(" ", "").split(","))
    except ValueError:
        raise BadInput(
            f"--dot {text} is not a place.", "Needed: two pixel numbers.", "Write --dot 640,360."
        ) from None
    return x, y


@contextmanager
def progress_bar(wanted: bool = True) -> Iterator[Callable[[str, float], None] | None]:
    """A bar with the time left on stderr where a person is watching, None where the output is piped."""
    if not (wanted and sys.stderr.isatty()):
        yield None
        return
    from rich.console import Console
    from rich.progress import BarColumn, Progress, TextColumn, TimeRemainingColumn

    columns = (TextColumn("{task.description:>10}"), BarColumn(30), TextColumn("{task.percentage:3.0f} %"))
    with Progress(*columns, TimeRemainingColumn(), console=Console(stderr=True), transient=True) as bar:
        task = bar.add_task("", total=1.0)

        def show(what: str, share: float) -> None:
            bar.update(task, description=what, completed=share)

        yield show


def refuse_existing(place: Path, *, again: bool) -> None:
    """Say before any work that its output is there already."""
    if place.exists() and not again:
        raise WouldOverwrite(
            f"{place} exists already.",
            "Nothing was done or overwritten.",
            "Add --again to replace it, or --out for another place.",
        )
