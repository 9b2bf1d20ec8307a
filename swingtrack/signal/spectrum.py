"""Amplitude spectra at uneven times, for start values and for looking at residuals."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from swingtrack.records import Floats

# Zero padding: four points a natural bin keep the loss between two points under 3 %.
PADDING = 4
# The background that a line has to top is a running median over this share of the spectrum, and no fewer natural
# bins than these on either side, so that the foot of a line is not its own background.
BACKGROUND_SHARE = 0.1
BACKGROUND_BINS = 20


@dataclass(frozen=True, eq=False)
class Spectrum:
    """Amplitude against frequency: a steady sinusoid of amplitude A in the record makes a peak of height A.

    Parameters
    ----------
    hz, amplitude : (m,) float
    resolution_hz : float
        One over the record's length.
    """

    hz: Floats
    amplitude: Floats
    resolution_hz: float


def amplitude_spectrum(t: Floats, y: Floats, *, padding: int = PADDING, tapered: bool = False) -> Spectrum:
    """Spectrum of `y` (n,) at uneven times `t` (n,), s: samples laid on an even grid, gaps left at the mean.

    |Y(f)| = (2/n) |Σ y_i e^(−2πi f t_i)|, the times rounded to half the median interval's grid; the rounding
    loses sinc²(f Δ/2) of a line, under 10 % up to the highest frequency shown. `tapered` applies a Hann window (and
    keeps the height of a steady line): a line twice as wide, without the side lobes that hide weak neighbours.

    Examples
    --------
    >>> import numpy as np
    >>> t = np.arange(400) / 20
    >>> found = amplitude_spectrum(t, 3 * np.cos(2 * np.pi * 1.25 * t))
    >>> round(float(found.hz[found.amplitude.argmax()]), 6)
    1.25
    """
    step = float(np.median(np.diff(t))) / 2
    place = np.rint((t - t[0]) / step).astype(int)
    size = int(place[-1]) + 1
    z = y - y.mean()
    weight = np.ones(len(t))
    if tapered:
        weight = 1 - np.cos(2 * np.pi * (t - t[0]) / float(t[-1] - t[0]))
    grid = np.bincount(place, weights=z * weight, minlength=size)
    length = _quick_length(size * padding)
    power = np.asarray(np.abs(np.fft.rfft(grid, length)) * 2 / float(weight.sum()), dtype=float)
    hz = np.fft.rfftfreq(length, step)
    shown = hz <= 0.25 / step
    return Spectrum(np.asarray(hz[shown], dtype=float), power[shown], 1 / float(t[-1] - t[0] + 2 * step))


def _quick_length(n: int) -> int:
    """The next length that the transform does quickly: a power of two, or three quarters of one."""
    power = 1 << max(n - 1, 1).bit_length()
    return 3 * power // 4 if 3 * power // 4 >= n else power


def refine_peak(t: Floats, y: Floats, hz: float, resolution_hz: float) -> float:
    """Frequency near `hz` whose sine, cosine and constant fit best (three-parameter fit, IEEE Std 1057)."""
    around, width = hz, resolution_hz / 2
    for _ in range(3):
        tried = around + width * np.linspace(-1, 1, 9)
        tried = tried[tried > 0]
        left = [_left_over(t, y, f) for f in tried]
        around, width = float(tried[int(np.argmin(left))]), width / 4
    return around


def _left_over(t: Floats, y: Floats, hz: float) -> float:
    phase = 2 * np.pi * hz * t
    basis = np.column_stack([np.ones_like(t), np.cos(phase), np.sin(phase)])
    _, rest, *_ = np.linalg.lstsq(basis, y, rcond=None)
    return float(rest[0]) if len(rest) else 0.0


def background(spectrum: Spectrum) -> Floats:
    """Running median of the amplitude: what a line must stand out from, whatever the noise's colour."""
    amplitude = spectrum.amplitude
    bin_points = spectrum.resolution_hz / max(float(spectrum.hz[1]), 1e-300)
    half = max(int(len(spectrum.hz) * BACKGROUND_SHARE / 2), int(BACKGROUND_BINS * bin_points))
    centres = np.arange(0, len(amplitude), max(half // 4, 1))
    medians = [np.median(amplitude[max(c - half, 0) : c + half + 1]) for c in centres]
    return np.asarray(np.interp(np.arange(len(amplitude)), centres, medians))
