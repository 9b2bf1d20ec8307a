"""Long series made short keep what the eye would have seen."""

from __future__ import annotations

import numpy as np
from hypothesis import given
from hypothesis import strategies as st

from swingtrack.report.decimate import keep_extremes


def test_short_series_stay_whole() -> None:
    assert keep_extremes(np.zeros(7), 10).tolist() == list(range(7))


@given(st.integers(101, 5000), st.integers(0, 10_000), st.integers(0, 2**31))
def test_extremes_stay_and_order_holds(count: int, spike: int, seed: int) -> None:
    y = np.random.default_rng(seed).standard_normal(count)
    y[spike % count] = 50.0
    kept = keep_extremes(y, 100)
    assert len(kept) <= 100
    assert np.all(np.diff(kept) > 0)
    assert y[kept].max() == 50.0
    assert y[kept].min() == y.min()


def test_every_stretch_keeps_its_own_extremes() -> None:
    y = np.sin(np.linspace(0.0, 400.0, 100_000)) * np.linspace(1.0, 0.1, 100_000)
    kept = keep_extremes(y, 2000)
    for part in np.array_split(np.arange(len(y)), 50):
        inside = kept[(kept >= part[0]) & (kept <= part[-1])]
        assert y[inside].max() > 0.995 * y[part].max()


def test_gaps_stay_gaps() -> None:
    y = np.ones(1000)
    y[300:700] = np.nan
    kept = keep_extremes(y, 100)
    assert np.isnan(y[kept]).any()
    assert np.isfinite(y[kept]).any()
