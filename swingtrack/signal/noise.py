"""The noise as it is: its colour, what it does to the uncertainties, and the samples that are not noise.

Residuals of a followed dot are correlated (a codec repeats itself, a phone is shaken). For a parameter of the swing
only the noise near the swing's own frequency counts, so the covariance of independent residuals is multiplied by
S(f)/S̄, the noise's spectral density there over its mean. S comes from an autoregression AR(p) of the residuals,
its order chosen by Schwarz's criterion, and from the residuals' own periodogram near the swing's frequency where
that is significantly higher (a residual that is not noise).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from swingtrack.records import Floats

MOST_ORDER = 6
# The periodogram near the swing overrules the autoregression only beyond what chance does once in a thousand.
PERIODOGRAM_BINS = 10


@dataclass(frozen=True, eq=False)
class Noise:
    """Colour of the residuals.

    Parameters
    ----------
    coefficients : (p,) float
        φ of r_k = Σ φ_j r_(k−j) + e_k on the record's median interval.
    inflation : float
        S(f)/S̄ at the swing's frequency: factor on the variance of period and decay.
    correlation_time_s : float
        Integral time of the autocorrelation, half the median interval for white noise.
    effective : float
        Number of independent samples that carry as much about the variance.
    structured : bool
        The periodogram near the swing's frequency is significantly above the autoregression.
    colour_inflation : float
        `inflation` by the autoregression alone.
    """

    coefficients: Floats
    inflation: float
    correlation_time_s: float
    effective: float
    structured: bool
    colour_inflation: float = 1.0


def measure_noise(
    t: Floats, r: Floats, hz: float, *, parameters: int = 5, taken: Floats | None = None
) -> Noise:
    """Find the colour of residuals `r` (n,), standardised, at uneven times `t` (n,), about frequency `hz`.

    `parameters` were fitted; `taken` (n, p) are orthonormal columns of what they could take up.
    """
    interval = float(np.median(np.diff(t)))
    place = np.rint((t - t[0]) / interval).astype(int)
    covariance = _autocovariance(place, r, MOST_ORDER)
    n = len(r)
    coefficients = _choose_order(covariance, n)
    coefficients = _undo_bias(coefficients, n, parameters)
    density = _density(coefficients, hz * interval)
    correlation = _autocorrelation(coefficients, 4000)
    squares = float(np.sum(correlation[1:] ** 2))
    effective = n / (1 + 2 * squares)
    time = interval * (0.5 + float(np.sum(correlation[1:])))
    local, structured = _periodogram_ratio(t, r, hz, (coefficients, interval), taken)
    inflation = density * (local if structured else 1.0)
    return Noise(coefficients, inflation, max(time, 0.0), effective, structured, density)


def _autocovariance(place: np.ndarray, r: Floats, most: int) -> Floats:
    """Mean of r_k r_(k+l) over the pairs there are, l = 0 … most; gaps and doubled places do no harm."""
    size = int(place[-1]) + 1
    if size > 50 * len(r):  # times with no grid to speak of: neighbours count as one step
        place, size = np.arange(len(r)), len(r)
    sums, counts = np.zeros(size), np.zeros(size)
    np.add.at(sums, place, r)
    np.add.at(counts, place, 1.0)
    value = np.where(counts > 0, sums / np.maximum(counts, 1), 0.0)
    there = counts > 0
    result = np.zeros(most + 1)
    for lag in range(most + 1):
        both = there[lag:] & there[: size - lag]
        if both.any():
            result[lag] = np.mean(value[lag:][both] * value[: size - lag][both])
    return result


def _choose_order(covariance: Floats, n: int) -> Floats:
    """Levinson–Durbin recursion, the order with the least n ln(variance) + p ln n."""
    best = np.zeros(0)
    variance = covariance[0]
    if variance <= 0 or not np.isfinite(variance):
        return best
    coefficients = np.zeros(0)
    least = n * np.log(variance)
    for order in range(1, len(covariance)):
        reflect = (covariance[order] - coefficients @ covariance[order - 1 : 0 : -1][: order - 1]) / variance
        if not abs(reflect) < 0.9999:
            break
        coefficients = np.concatenate([coefficients - reflect * coefficients[::-1], [reflect]])
        variance = variance * (1 - reflect**2)
        criterion = n * np.log(variance) + order * np.log(n)
        if criterion < least:
            least, best = criterion, coefficients
    return best


def _undo_bias(coefficients: Floats, n: int, parameters: int) -> Floats:
    """First-order bias of an estimated AR(1), −(1 + 3φ)/n (Marriott and Pope 1954; from memory)."""
    if len(coefficients) != 1:
        return coefficients
    phi = float(coefficients[0])
    return np.array([min(phi + (1 + 3 * phi) / n, 0.999)]) if phi > 0 else coefficients


def _density(coefficients: Floats, cycles_per_step: float) -> float:
    """S(f) over its mean for the autoregression."""
    if len(coefficients) == 0:
        return 1.0
    lags = np.arange(1, len(coefficients) + 1)
    transfer = 1 - np.sum(coefficients * np.exp(-2j * np.pi * cycles_per_step * lags))
    f = np.linspace(0, 0.5, 2049)
    all_transfer = 1 - np.exp(-2j * np.pi * np.outer(f, lags)) @ coefficients
    density = 1 / np.abs(all_transfer) ** 2
    mean = float(np.sum((density[1:] + density[:-1]) / 2) / (len(f) - 1))
    return float(1 / abs(transfer) ** 2 / mean)


def _autocorrelation(coefficients: Floats, most: int) -> Floats:
    """ρ_l from the density by a Fourier transform."""
    if len(coefficients) == 0:
        return np.array([1.0])
    lags = np.arange(1, len(coefficients) + 1)
    f = np.arange(2 * most) / (2 * most)
    density = 1 / np.abs(1 - np.exp(-2j * np.pi * np.outer(f, lags)) @ coefficients) ** 2
    covariance = np.fft.ifft(density).real
    return np.asarray(covariance[:most] / covariance[0])


def _periodogram_ratio(
    t: Floats, r: Floats, hz: float, colour: tuple[Floats, float], taken: Floats | None
) -> tuple[float, bool]:
    """Mean periodogram of the bins around `hz` over the autoregression's density there, and whether that is chance.

    `taken` (n, p) are orthonormal columns of what the fit could take up: each bin counts by the part of it that
    the fit left.
    """
    coefficients, interval = colour
    length = float(t[-1] - t[0])
    reach = np.arange(1, 1 + PERIODOGRAM_BINS // 2)
    bins = hz * length + np.concatenate([-reach[::-1], reach])
    bins = bins[bins >= 1]
    if len(bins) < PERIODOGRAM_BINS // 2:
        return 1.0, False
    phase = 2 * np.pi * np.outer(bins / length, t - t[0])
    density = np.array([_density(coefficients, b / length * interval) for b in bins])
    power = expected = freedom = 0.0
    for wave in (np.cos(phase), np.sin(phase)):
        left = np.sum(wave**2, axis=1)
        if taken is not None:
            left = np.maximum(left - np.sum((wave @ taken) ** 2, axis=1), 0.0)
        power += float(np.sum((wave @ r) ** 2))
        expected += float(np.sum(left * density)) * float(np.mean(r**2))
        freedom += float(np.sum(2 * left)) / len(t)
    ratio = power / max(expected, 1e-300)
    return ratio, ratio > _chance_limit(freedom)


def _chance_limit(freedom: float) -> float:
    """99.9 % point of a mean square with these degrees of freedom (E. B. Wilson and M. M. Hilferty 1931)."""
    spread = 2 / (9 * max(freedom, 1.0))
    return float((1 - spread + 3.09 * spread**0.5) ** 3)
