"""Series and paths to and from CSV."""

from __future__ import annotations

from pathlib import Path as FilePath

import numpy as np
import pytest

from swingtrack.errors import BadSeries
from swingtrack.records import Path, Series, Track
from swingtrack.series_file import SeriesColumns, path_csv, read_series


def write(folder: FilePath, text: str) -> FilePath:
    file = folder / "series.csv"
    file.write_text(text, encoding="utf-8")
    return file


ROWS = "\n".join(f"{0.1 * i:.1f},{i % 3}" for i in range(12))


def test_degrees_become_radians(tmp_path: FilePath) -> None:
    series = read_series(write(tmp_path, "t_s,angle_deg\n" + ROWS))
    assert isinstance(series, Series)
    assert series.unit == "rad"
    assert series.y[2] == pytest.approx(np.deg2rad(2.0))


def test_a_column_of_another_name_has_an_unknown_unit(tmp_path: FilePath) -> None:
    series = read_series(write(tmp_path, "t_s,volts\n" + ROWS))
    assert isinstance(series, Series)
    assert series.unit == ""


def test_frames_need_a_rate(tmp_path: FilePath) -> None:
    file = write(tmp_path, "frame,angle\n" + "\n".join(f"{660 + i},{i % 3}" for i in range(12)))
    with pytest.raises(BadSeries, match="--rate-hz"):
        read_series(file)
    series = read_series(file, SeriesColumns(rate_hz=60.0, unit="rad"))
    assert isinstance(series, Series)
    assert series.t_s[0] == pytest.approx(11.0)
    assert series.unit == "rad"


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("", "empty"),
        ("0.0,1.0\n" + ROWS, "no header"),
        ("t_s,angle_rad\n" + ROWS.replace("0.3,", "0.2,"), "row 4"),
        ("t_s,angle_rad\n" + ROWS.replace("0.3,", "x,"), "line 5, column t_s"),
        ("t_s,angle_rad\n" + ROWS.replace("0.3,", ","), "row 4 has no time"),
        ("t_s,angle_rad\n0,1\n1,2\n", "2 rows"),
        ("t_s,a,b\n" + "\n".join(f"{i},1,2" for i in range(12)), "--column"),
        ("seconds,angle_rad\n" + ROWS, "t_s"),
        ("t_s,angle_rad\n" + ROWS + ",7", "cells"),
    ],
)
def test_faults_are_named(tmp_path: FilePath, text: str, said: str) -> None:
    with pytest.raises(BadSeries) as caught:
        read_series(write(tmp_path, text))
    assert said in str(caught.value)


def test_a_path_comes_back_as_it_was(tmp_path: FilePath) -> None:
    rng = np.random.default_rng(4)
    n = 20
    tracks = []
    for _ in range(2):
        x, y = rng.uniform(0, 1000, (2, n)).round(5)
        x[3], y[3] = np.nan, np.nan
        tracks.append(Track(x, y, np.full(n, 0.05), np.full(n, 0.06), np.isfinite(x)))
    path = Path(t_s=np.arange(n) / 30.0, tracks=tuple(tracks))
    back = read_series(write(tmp_path, path_csv(path)))
    assert isinstance(back, Path)
    np.testing.assert_allclose(back.t_s, path.t_s, atol=5e-8)
    for one, other in zip(back.tracks, path.tracks, strict=True):
        np.testing.assert_array_equal(one.x_px, other.x_px)
        np.testing.assert_array_equal(one.seen, other.seen)
        np.testing.assert_array_equal(one.u_y_px, other.u_y_px)
