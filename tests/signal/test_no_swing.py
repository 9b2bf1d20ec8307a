"""Records without a swing must not yield a period."""

from __future__ import annotations

import numpy as np
import pytest

from swingtrack.errors import NothingToMeasure
from swingtrack.records import Series
from swingtrack.signal import fit_swing
from tests.benchmarks.fit_coverage import noise


def records(seed: int, n: int) -> dict[str, np.ndarray]:
    random = np.random.default_rng(seed)
    t = np.arange(n) / 30
    end = t[-1]
    return {
        "white noise": random.standard_normal(n),
        "slow noise": noise(random, n, 0.99),
        "random walk": np.cumsum(random.standard_normal(n)),
        "a step": (t > 0.4 * end) + 0.01 * random.standard_normal(n),
        "a ramp": t + 0.1 * random.standard_normal(n),
        "a decay": np.exp(-5 * t / end) + 0.01 * random.standard_normal(n),
        "a bump": np.exp(-(((t - end / 2) / 0.5) ** 2)) + 0.01 * random.standard_normal(n),
        "half a turn": np.cos(np.pi * t / end) + 0.01 * random.standard_normal(n),
        "nothing": np.full(n, 3.0),
    }


@pytest.mark.parametrize("n", [60, 300, 1500])
@pytest.mark.parametrize("kind", list(records(0, 60)))
def test_no_period_is_made_up(kind, n):
    for seed in range(4):
        with pytest.raises(NothingToMeasure) as caught:
            fit_swing(Series(np.arange(n) / 30, records(seed, n)[kind], ""))
        assert caught.value.needed
        assert caught.value.try_this


def test_a_swing_in_as_much_noise_as_itself_is_still_found():
    t = np.arange(1500) / 30
    y = np.exp(-0.01 * t) * np.cos(5 * t) + np.random.default_rng(1).standard_normal(1500)
    found = fit_swing(Series(t, y, ""))
    assert found.period_in_clip.value == pytest.approx(2 * np.pi / 5, abs=4 * found.period_in_clip.u)
    assert "low-signal" in {doubt.code for doubt in found.doubts}
