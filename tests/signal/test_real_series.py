"""Real angle series of a rod on two strings (data folder, not part of the repository).

A uniform rod's I/m = L²/12 + R²/4 = 3.198e-3 m² from its own dimensions; half spacing 75.0 mm, strings of
0.494025 + 0.08 (k − 1) m, g = 9.788 m/s². The frames were timed by their number over 60 per second.
"""

from __future__ import annotations

from functools import cache
from pathlib import Path

import numpy as np
import pytest

from swingtrack.records import Series, Swing
from swingtrack.signal import FitSettings, fit_swing
from tests.signal.truth import bifilar

GRAVITY, HALF, ROD = 9.788, 0.075, 3.198e-3


def strings(k: int) -> float:
    return 0.494025 + 0.08 * (k - 1)


@cache
def fitted(file: Path, k: int, settings: FitSettings = FitSettings()) -> Swing:  # noqa: B008 - frozen
    data = np.genfromtxt(file, delimiter=",", names=True)
    law = bifilar(strings(k), HALF, HALF, np.sqrt(ROD)).law(1.7)
    return fit_swing(Series(data["frame"] / 60, data["angle"], "rad"), law=law, settings=settings)


def moment_over_mass(swing: Swing, k: int) -> float:
    return GRAVITY * HALF**2 * swing.period.value**2 / (4 * np.pi**2 * strings(k))


@pytest.mark.slow
@pytest.mark.parametrize("k", range(1, 8))
def test_each_series_gives_the_rod_within_two_percent(real_data, k):
    swing = fitted(real_data / "bifilar_rod" / f"2.{k}.csv", k)
    assert moment_over_mass(swing, k) == pytest.approx(ROD, rel=0.02)
    assert swing.solved
    assert swing.usable
    # the amplitudes are 0.57 to 1.5 rad, and the period in the clip is 1 to 4 % longer for it
    assert "amplitude-large" in {doubt.code for doubt in swing.doubts}
    assert swing.amplitude_shift is not None
    assert 0.01 < swing.amplitude_shift < 0.05
    # what the fit leaves is the jitter of frames shown up to half an interval early or late: 8 ms of swing
    assert swing.fit_rms < 0.02


@pytest.mark.slow
def test_the_exact_law_holds_from_large_swings_to_small_ones(real_data):
    """Small-swing periods of the first and the last part of a series agree, though the periods there differ by 7 %."""
    file = real_data / "bifilar_rod" / "2.4.csv"
    plain = {"most_modes": 0, "view_shape": False}
    early = fitted(file, 4, FitSettings(from_s=2, to_s=40, **plain))
    late = fitted(file, 4, FitSettings(from_s=90, to_s=155, **plain))
    assert early.period_in_clip.value / late.period_in_clip.value > 1.05
    assert early.period.value == pytest.approx(late.period.value, rel=1.5e-3)
