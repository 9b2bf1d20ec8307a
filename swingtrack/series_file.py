"""Paths and series to and from CSV.

path.csv has the columns `t_s,x_px,y_px,u_x_px,u_y_px,seen` (and `x2_px …` for a second dot). A series for `fit`
has `t_s` and one more column: `angle_rad`, `angle_deg`, or any other name (a unit that nobody knows). Where a
file counts frames in place of seconds, the frame rate has to be given.
"""

from __future__ import annotations

import csv
import io
import math
from dataclasses import dataclass
from pathlib import Path as FilePath

import numpy as np

from .errors import BadSeries
from .records import Floats, Path, Series, Track

LARGEST_SERIES_BYTES = 500_000_000  # an hour at 1 kHz with nine columns is a quarter of this
FEWEST_ROWS = 8  # a damped swing has five parameters; fewer rows than this can't show a misfit

_PATH_COLUMNS = ("x_px", "y_px", "u_x_px", "u_y_px", "seen")


@dataclass(frozen=True)
class SeriesColumns:
    """Which columns to read: `value` by name (None: the only one there is), frames per second for `frame`.

    `unit` ("rad", "deg" or None) overrides what the column's name says.
    """

    value: str | None = None
    rate_hz: float | None = None
    unit: str | None = None


def path_csv(path: Path) -> str:
    """The text of path.csv: one row a frame, times to a tenth of a microsecond, empty cells where not seen."""
    names = ["t_s"]
    for number in range(1, len(path.tracks) + 1):
        names += [name if number == 1 else name.replace("_px", f"{number}_px") for name in _PATH_COLUMNS[:4]]
        names.append("seen" if number == 1 else f"seen{number}")
    lines = [",".join(names)]
    for i, t in enumerate(path.t_s):
        cells = [f"{t:.7f}"]
        for track in path.tracks:
            numbers = (track.x_px[i], track.y_px[i], track.u_x_px[i], track.u_y_px[i])
            cells += [f"{number:.5f}" if math.isfinite(number) else "" for number in numbers]
            cells.append("1" if track.seen[i] else "0")
        lines.append(",".join(cells))
    return "\n".join(lines) + "\n"


def read_series(file: str | FilePath, columns: SeriesColumns | None = None) -> Path | Series:
    """Read a CSV of a path or of one coordinate against time.

    Returns
    -------
    Path
        Where the file has x_px and y_px and no other column was asked for.
    Series
        Otherwise; `unit` "rad" for angles, "" for a column in an unknown unit.

    Raises
    ------
    BadSeries
        Naming the line and column at fault.
    """
    columns = columns or SeriesColumns()
    name = str(file)
    header, table = _read_table(FilePath(file))
    t_s = _times(name, header, table, columns.rate_hz)
    if columns.value is None and {"x_px", "y_px"} <= set(header):
        return _path_of(name, header, table, t_s)
    chosen = _value_column(name, header, columns)
    unit = columns.unit or {"angle_rad": "rad", "angle_deg": "deg"}.get(chosen, "")
    y = table[:, header.index(chosen)] * (math.pi / 180.0 if unit == "deg" else 1.0)
    kept = np.isfinite(y)
    if np.count_nonzero(kept) < FEWEST_ROWS:
        raise BadSeries(
            f"{name}: column {chosen} has {np.count_nonzero(kept)} numbers.",
            f"Needed: {FEWEST_ROWS} or more.",
        )
    return Series(t_s=t_s[kept], y=y[kept], unit="rad" if unit else "", name=FilePath(file).stem)


def _read_table(file: FilePath) -> tuple[list[str], Floats]:
    """Header and numbers (n_rows, n_columns) of a CSV; NaN for empty cells."""
    needed = "Needed: CSV with a header, t_s and one column more."
    try:
        if file.stat().st_size > LARGEST_SERIES_BYTES:
            raise BadSeries(
                f"{file} is {file.stat().st_size} bytes long.", needed, "Cut it to the free swing."
            )
        text = file.read_bytes().decode("utf-8-sig")
    except FileNotFoundError:
        raise BadSeries(f"There is no file {file}.", needed, "Check the name and the folder.") from None
    except OSError as error:
        raise BadSeries(f"{file} can't be read: {error.strerror}.", needed) from None
    except UnicodeDecodeError:
        raise BadSeries(f"{file} is not a text file.", needed, "For a video use measure or follow.") from None
    lines = [line for line in text.splitlines() if line.strip() and not line.lstrip().startswith("#")]
    if not lines:
        raise BadSeries(f"{file} is empty.", needed)
    separator = next((mark for mark in ",;\t" if mark in lines[0]), ",")
    header = [cell.strip().strip('"') for cell in lines[0].split(separator)]
    if len(header) > 200 or all(_is_number(cell) for cell in header):
        raise BadSeries(
            f"{file} has no header: its first line is {lines[0][:40]!r}.", needed, "Put t_s,angle_rad on top."
        )
    rows = []
    try:
        for number, cells in enumerate(
            csv.reader(io.StringIO("\n".join(lines[1:])), delimiter=separator), start=2
        ):
            if len(cells) != len(header):
                raise BadSeries(
                    f"{file}: line {number} has {len(cells)} cells, the header {len(header)}.", needed
                )
            rows.append(
                [_number(file, number, column, cell) for column, cell in zip(header, cells, strict=True)]
            )
    except csv.Error as error:
        raise BadSeries(f"{file} is not CSV: {error}.", needed) from None
    if len(rows) < FEWEST_ROWS:
        raise BadSeries(
            f"{file} has {len(rows)} rows of numbers.", f"Needed: {FEWEST_ROWS} or more, some full swings."
        )
    return header, np.array(rows, dtype=np.float64)


def _is_number(cell: str) -> bool:
    try:
        float(cell)
    except ValueError:
        return False
    return True


def _number(file: FilePath, line: int, column: str, cell: str) -> float:
    text = cell.strip().strip('"')
    if not text:
        return math.nan
    try:
        number = float(text)
    except ValueError:
        found = f"{file}: line {line}, column {column}: {text[:40]!r} is not a number."
        raise BadSeries(
            found, "Needed: numbers with a decimal point.", "Leave a cell empty where nothing is known."
        ) from None
    return number if math.isfinite(number) else math.nan


def _times(name: str, header: list[str], table: Floats, rate_hz: float | None) -> Floats:
    """Strictly increasing times, s, counted from the file's own zero."""
    if "t_s" in header:
        t_s = table[:, header.index("t_s")]
    elif "frame" in header and rate_hz is not None:
        t_s = table[:, header.index("frame")] / rate_hz
    elif "frame" in header:
        raise BadSeries(
            f"{name} counts frames and has no t_s.", "Needed: times.", "Give the rate: --rate-hz 60."
        )
    else:
        raise BadSeries(
            f"{name} has the columns {', '.join(header)[:120]}.",
            "Needed: t_s, in seconds.",
            "Name the time column t_s.",
        )
    if not np.all(np.isfinite(t_s)):
        raise BadSeries(
            f"{name}: row {int(np.flatnonzero(~np.isfinite(t_s))[0]) + 1} has no time.",
            "Needed: a time in each row.",
        )
    if np.abs(t_s).max() > 1e9:
        raise BadSeries(
            f"{name}: times reach {np.abs(t_s).max():.3g} s.",
            "Needed: seconds.",
            "Are they milliseconds or dates?",
        )
    back = np.flatnonzero(np.diff(t_s) <= 0.0)
    if back.size:
        row = int(back[0]) + 2
        found = f"{name}: the time of row {row} ({t_s[row - 1]:g} s) is not after the one before it ({t_s[row - 2]:g} s)."
        raise BadSeries(found, "Needed: increasing times.", "Sort the rows and drop those with a time twice.")
    return t_s


def _value_column(name: str, header: list[str], columns: SeriesColumns) -> str:
    if columns.value is not None:
        if columns.value not in header:
            raise BadSeries(f"{name} has no column {columns.value!r}.", f"It has {', '.join(header)[:120]}.")
        return columns.value
    for known in ("angle_rad", "angle_deg"):
        if known in header:
            return known
    others = [column for column in header if column not in {"t_s", "frame"}]
    if len(others) != 1:
        found = f"{name} has {len(others)} columns beside the time: {', '.join(others)[:120] or 'none'}."
        raise BadSeries(found, "Needed: one.", "Say which: --column NAME.")
    return others[0]


def _path_of(name: str, header: list[str], table: Floats, t_s: Floats) -> Path:
    tracks = []
    for number in range(1, 3):
        mark = "" if number == 1 else str(number)
        if f"x{mark}_px" not in header or f"y{mark}_px" not in header:
            continue

        def column(stem: str, otherwise: float, mark: str = mark) -> Floats:
            key = f"{stem}{mark}" if stem == "seen" else f"{stem}{mark}_px"
            return table[:, header.index(key)] if key in header else np.full(t_s.size, otherwise)

        x, y = column("x", math.nan), column("y", math.nan)
        # Without stated uncertainties every row weighs alike; the fit then measures the noise from the residual.
        u_x, u_y = column("u_x", 1.0), column("u_y", 1.0)
        seen = (column("seen", 1.0) > 0.5) & np.isfinite(x) & np.isfinite(y)
        tracks.append(Track(x, y, u_x, u_y, seen))
    if max(int(np.count_nonzero(track.seen)) for track in tracks) < FEWEST_ROWS:
        raise BadSeries(
            f"{name}: the dot is seen in fewer than {FEWEST_ROWS} rows.", "Needed: some full swings."
        )
    return Path(t_s=t_s, tracks=tuple(tracks))
