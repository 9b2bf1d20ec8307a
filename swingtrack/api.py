"""The functions that a notebook uses: each takes file names or records and returns records."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path as FilePath
from typing import Any

from . import measure as pipeline
from .measure import MeasureSettings
from .records import Inertia, Measurement, Path, Quantity, Rig, Series, Stopwatch, Swing
from .rig import read_rig

__all__ = [
    "combine_results",
    "fit_series",
    "follow_clip",
    "judge_trials",
    "measure_clip",
    "moment_from_period",
    "read_rig",
]

AnyRig = Rig | str | FilePath | None


def measure_clip(
    clip: str | FilePath, *, rig: AnyRig = None, trials: str | FilePath | None = None, **options: Any
) -> Measurement:
    """Measure a clip; `options` are the fields of `measure.MeasureSettings`.

    Returns
    -------
    Measurement
        With `path`, `swing`, and where they were asked for `inertia` and `stopwatch`.
    """
    return pipeline.measure_clip(clip, rig=_rig(rig), trials=trials, settings=MeasureSettings(**options))


def follow_clip(clip: str | FilePath, **options: Any) -> Path:
    """Follow the dot through a clip."""
    return pipeline.follow_clip(clip, settings=MeasureSettings(**options))


def fit_series(series: Path | Series | str | FilePath, *, rig: AnyRig = None) -> Swing:
    """Fit period and damping to a path, a series, or a CSV of either.

    Examples
    --------
    >>> import numpy as np
    >>> from swingtrack.records import Series
    >>> t = np.arange(600) / 30.0
    >>> noise = 0.001 * np.random.default_rng(1).standard_normal(600)
    >>> swing = fit_series(Series(t, 0.1 * np.exp(-0.02 * t) * np.cos(2.0 * np.pi * t / 1.25) + noise))
    >>> round(swing.period_in_clip.value, 3)
    1.25
    """
    from .series_file import read_series

    data = series if isinstance(series, Path | Series) else read_series(series)
    swing = pipeline.measure_path(data, rig=_rig(rig)).swing
    assert swing is not None
    return swing


def moment_from_period(rig: Rig | str | FilePath, period: Quantity | str) -> Inertia:
    """Moment of inertia from a small-swing period such as "1.128 s ± 0.2 ms k=1"."""
    from .quantity import parse_quantity

    known = _rig(rig)
    assert known is not None
    found = pipeline.inertia_of_period(
        known, period if isinstance(period, Quantity) else parse_quantity(period, "time")
    ).inertia
    assert found is not None
    return found


def judge_trials(trials: str | FilePath) -> Stopwatch:
    """Judge the runs of a trial sheet."""
    found = pipeline.measure_trials(trials).stopwatch
    assert found is not None
    return found


def combine_results(results: Sequence[str | FilePath], **options: Any) -> Any:
    """Combine result files; `options` as in `combining.combine_results`."""
    from . import combining

    return combining.combine_results(results, **options)


def _rig(rig: AnyRig) -> Rig | None:
    return rig if rig is None or isinstance(rig, Rig) else read_rig(rig)


def _show_in_notebooks() -> None:
    """Give the records their notebook tables. It is done here because records know nothing of report/."""

    def table(record: Any) -> str:
        from .report.notebook import notebook_html

        return notebook_html(record)

    for kind in (Measurement, Swing, Inertia, Stopwatch, Path, Quantity):
        setattr(kind, "_repr_html_", table)  # noqa: B010 - to a type checker the records have no such attribute


_show_in_notebooks()
