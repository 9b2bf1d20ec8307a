"""Miscounts and outliers among hand-timed runs."""

from __future__ import annotations

import math

import numpy as np
from scipy.special import stdtrit

from ..records import Bools, Floats

# Start-and-stop difference of one run of a practised hand: normal with standard deviation 0.10 s over 4304
# timings (Am. J. Phys. 87 (2) 110, abstract). Few trials can't say their own scatter well, so the published one
# counts like this many more degrees of freedom when a miscount is judged (not in the uncertainty that is reported).
PUBLISHED_SCATTER_S = 0.10
PUBLISHED_DOF = 3.0
MISCOUNT_ODDS = 1.0 / 30.0  # prior chance that a run is miscounted: one sheet in three of about ten runs
OUTLIER_LEVEL = 0.01  # significance of Grubbs' test
LARGEST_MISCOUNT = 3


def count_errors(swings: Floats, seconds: Floats) -> tuple[Floats, float]:
    """Whole swings by which each run is likely miscounted, and the period that goes with the corrected counts.

    A residual r = seconds − n T is laid to a miscount of k swings where that is likelier than chance: with scatter
    σ and prior odds p, where (r² − (r − kT)²)/(2σ²) > ln(1/p).

    Parameters
    ----------
    swings, seconds : (n_trials,) float

    Returns
    -------
    (n_trials,) float, float
        Corrections k (0 for most), s.
    """
    period = float(np.median(seconds / swings))
    off = np.zeros(swings.size)
    for _ in range(8):
        residual = seconds - swings * period
        whole = np.clip(np.rint(residual / period), -LARGEST_MISCOUNT, LARGEST_MISCOUNT)
        inner = residual - whole * period
        scatter = _scatter(inner)
        gain = (residual**2 - inner**2) / (2.0 * scatter**2)
        new = np.where((whole != 0.0) & (gain > -math.log(MISCOUNT_ODDS)) & (swings + whole > 0), whole, 0.0)
        if 2 * np.count_nonzero(new) >= swings.size and swings.size > 1:
            # When as many runs as not are off, nobody can say which are right: accuse none.
            new = np.zeros(swings.size)
        counted = swings + new
        period = float((counted * seconds).sum() / (counted**2).sum())
        if np.array_equal(new, off):
            break
        off = new
    return off, period


def _scatter(residual: Floats) -> float:
    """Scatter of one run, s, from robust residuals and the published figure."""
    n = residual.size
    centred = np.abs(residual - np.median(residual))
    own = 1.4826 * float(np.median(centred)) if n > 4 else float(np.sqrt((centred**2).sum() / max(n - 1, 1)))
    dof = max(n - 1, 0)
    return math.sqrt((dof * own**2 + PUBLISHED_DOF * PUBLISHED_SCATTER_S**2) / (dof + PUBLISHED_DOF))


def find_outlier(values: Floats, level: float = OUTLIER_LEVEL) -> int | None:
    """Index of the one outlier by Grubbs' two-sided test, or None.

    G = max|x − mean|/s against (N − 1)/√N · √(t²/(N − 2 + t²)), t at level/(2N) with N − 2 degrees of freedom
    (NIST/SEMATECH e-Handbook of Statistical Methods, 1.3.5.17.1).
    """
    n = values.size
    spread = float(values.std(ddof=1)) if n > 2 else 0.0
    if n < 3 or spread == 0.0:
        return None
    distance = np.abs(values - values.mean()) / spread
    at = int(np.argmax(distance))
    return at if distance[at] > grubbs_critical(n, level) else None


def grubbs_critical(n: int, level: float = OUTLIER_LEVEL) -> float:
    """Critical value of Grubbs' two-sided test for n values."""
    t = float(stdtrit(n - 2, 1.0 - level / (2.0 * n)))
    return (n - 1) / math.sqrt(n) * math.sqrt(t**2 / (n - 2 + t**2))


def set_outliers_aside(values: Floats) -> Bools:
    """True where a value is kept; outliers are taken out one by one, never more than a third."""
    kept = np.ones(values.size, dtype=bool)
    for _ in range(values.size // 3):
        at = find_outlier(values[kept])
        if at is None:
            break
        kept[np.flatnonzero(kept)[at]] = False
    return kept
