"""Reading a trial sheet: hand-timed runs, or the lap times of one run."""

from __future__ import annotations

import csv
import io
import math
from dataclasses import dataclass
from itertools import pairwise
from pathlib import Path as FilePath

from ..errors import BadSeries

MOST_TRIALS = 10_000
LARGEST_BYTES = 1_000_000
NEEDED = "Needed: a CSV with the header swings,seconds (and start_s), one run a line; or swings,stamp_s for the laps of one run."


@dataclass(frozen=True)
class Run:
    """One line of a sheet: swings counted, seconds, and when in the clip it began (None: not known)."""

    swings: int
    seconds: float
    start_s: float | None = None


@dataclass(frozen=True)
class TrialSheet:
    """All runs of a sheet. `laps`: they are stamps of one run, counted from an unknown start."""

    runs: tuple[Run, ...]
    laps: bool = False
    name: str = ""


def read_trials(file: str | FilePath) -> TrialSheet:
    """Read a trial sheet.

    Raises
    ------
    BadSeries
        Naming the line and column at fault.
    """
    name = str(file)
    lines = _lines(FilePath(file))
    header = [cell.strip().lower() for cell in lines[0][1]]
    column = "stamp_s" if "stamp_s" in header else "seconds"
    if "swings" not in header or column not in header:
        raise BadSeries(f"{name}: the header is {','.join(header)[:80]!r}.", NEEDED)
    runs = []
    for number, cells in lines[1:]:
        if len(cells) != len(header):
            raise BadSeries(
                f"{name}: line {number} has {len(cells)} cells, the header {len(header)}.", NEEDED
            )
        row = dict(zip(header, cells, strict=True))
        swings = _number(name, number, "swings", row["swings"])
        seconds = _number(name, number, column, row[column])
        if swings is None or swings != int(swings) or not 0 < swings <= 1e6:
            raise BadSeries(
                f"{name}: line {number}: swings = {row['swings']!r}.",
                "Needed: a whole number of full swings, to and fro.",
                NEEDED,
            )
        if seconds is None or not 0.0 < seconds < 1e7:
            raise BadSeries(
                f"{name}: line {number}: {column} = {row[column]!r}.", "Needed: seconds, over zero."
            )
        start = _number(name, number, "start_s", row["start_s"]) if row.get("start_s", "").strip() else None
        runs.append(Run(int(swings), seconds, start))
    if not runs:
        raise BadSeries(f"{name} has no runs.", NEEDED)
    if len(runs) > MOST_TRIALS:
        raise BadSeries(
            f"{name} has {len(runs)} runs.", f"Needed: {MOST_TRIALS} at most.", "Is it the right file?"
        )
    laps = column == "stamp_s"
    if laps and (
        len(runs) < 3 or any(b.swings <= a.swings or b.seconds <= a.seconds for a, b in pairwise(runs))
    ):
        raise BadSeries(
            f"{name}: lap times must be three or more, with counts and stamps that increase.", NEEDED
        )
    return TrialSheet(tuple(runs), laps, FilePath(file).stem)


def _lines(file: FilePath) -> list[tuple[int, list[str]]]:
    """(line number, cells) of every line that is not empty or a comment."""
    try:
        if file.stat().st_size > LARGEST_BYTES:
            raise BadSeries(f"{file} is {file.stat().st_size} bytes long.", NEEDED, "Is it the right file?")
        text = file.read_bytes().decode("utf-8-sig")
    except FileNotFoundError:
        raise BadSeries(f"There is no file {file}.", NEEDED, "Check the name and the folder.") from None
    except OSError as error:
        raise BadSeries(f"{file} can't be read: {error.strerror}.", NEEDED) from None
    except UnicodeDecodeError:
        raise BadSeries(f"{file} is not a text file.", NEEDED) from None
    separator = ";" if ";" in text.split("\n", 1)[0] else ","
    try:
        rows = [
            (number, next(csv.reader(io.StringIO(line), delimiter=separator)))
            for number, line in enumerate(text.splitlines(), start=1)
            if line.strip() and not line.lstrip().startswith("#")
        ]
    except (csv.Error, StopIteration) as error:
        raise BadSeries(f"{file} is not CSV: {error}.", NEEDED) from None
    if not rows:
        raise BadSeries(f"{file} is empty.", NEEDED)
    return rows


def _number(name: str, line: int, column: str, cell: str) -> float | None:
    try:
        value = float(cell)
    except ValueError:
        raise BadSeries(
            f"{name}: line {line}, column {column}: {cell[:40]!r} is not a number.", NEEDED
        ) from None
    return value if math.isfinite(value) else None
