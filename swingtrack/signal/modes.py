"""Other motions beside the swing: sway in two directions, roll and bounce, found in the residual.

A mode is looked for on a grid of frequencies as a pair of sinusoids with a linear fade, freed of what the swing's own
parameters could take up: near the swing's frequency most of a mode hides in those, and a plain spectrum of the
residual would miss it.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from swingtrack.records import ExpectedMode, Floats
from swingtrack.signal.fitting import Fitted
from swingtrack.signal.model import MODE, SwingModel, mode_name
from swingtrack.signal.spectrum import amplitude_spectrum, background

# The grid: from a fifth of the swing's frequency to five times it, at this many points a natural bin close by.
LOWEST_SHARE, HIGHEST_SHARE = 0.2, 5.0
FINE_STEP, FINE_REACH = 0.25, 6.0
COARSE_CANDIDATES = 6
# A clip resolves two motions when their beat makes a whole turn in it; less than a tenth of one is the same motion.
RESOLVED_BEATS = 1.0
SAME_BEATS = 0.1
LEAST_FLOOR = 0.02


@dataclass(frozen=True)
class ModeFound:
    """A mode offered: its start values, the first-order gain, the noise there over its mean, frequencies tried."""

    omega: float
    cos: float
    sin: float
    decay: float
    gain: float
    inflation: float
    tried: int


def find_mode(fitted: Fitted, *, beats: tuple[float, float], side: int = 0) -> ModeFound | None:
    """The frequency whose sinusoid would lower the misfit most; None where the record is too short for any.

    `beats`: look only where the beat with the swing makes between so many turns in the clip. `side` +1 or −1: only
    above or below the swing's frequency.
    """
    kept = fitted.samples.kept
    t, r = fitted.samples.t[kept], fitted.kept_residuals
    weight = fitted.samples.weight[kept]
    length = float(t[-1] - t[0])
    hz = fitted.model.values["omega0"] / (2 * np.pi)
    spectrum = amplitude_spectrum(t, r)
    shown = (spectrum.hz > max(LOWEST_SHARE * hz, 1.5 / length)) & (spectrum.hz < HIGHEST_SHARE * hz)
    if shown.sum() < 8:
        return None
    floor = background(spectrum)[shown]
    height = spectrum.amplitude[shown] / np.maximum(floor, 1e-300)
    tops = np.flatnonzero((height[1:-1] >= height[:-2]) & (height[1:-1] >= height[2:])) + 1
    tops = tops[np.argsort(-height[tops])][:COARSE_CANDIDATES]
    near = hz + np.arange(-FINE_REACH, FINE_REACH + FINE_STEP / 2, FINE_STEP) / length
    grid = np.concatenate([near[near > 0], spectrum.hz[shown][tops]])
    turns = np.abs(grid - hz) * length
    grid = grid[(turns >= beats[0]) & (turns < beats[1])]
    if side:
        grid = grid[(grid - hz) * side > 0]
    if len(grid) == 0:
        return None
    q, _ = np.linalg.qr(fitted.jacobian / np.linalg.norm(fitted.jacobian, axis=0))
    gains = np.array([_gain(t, r, weight, q, 2 * np.pi * f)[0] for f in grid])
    i = int(np.argmax(gains))
    gain, a, b, decay = _gain(t, r, weight, q, 2 * np.pi * grid[i])
    inflation = _over_white(float(np.interp(grid[i], spectrum.hz[shown], floor)), r)
    tried = int(shown.sum() / 4) + 10
    return ModeFound(2 * np.pi * float(grid[i]), a, b, decay, gain, inflation, tried)


def floor_at_swing(fitted: Fitted) -> float:
    """Noise density at the swing's frequency over the mean density, by the running median of the residual's spectrum.

    Lines that are not yet in the model do not raise a median, as they would an autoregression.
    """
    kept = fitted.samples.kept
    t, r = fitted.samples.t[kept], fitted.kept_residuals
    spectrum = amplitude_spectrum(t, r)
    hz = fitted.model.values["omega0"] / (2 * np.pi)
    return _over_white(float(np.interp(hz, spectrum.hz, background(spectrum))), r)


def _over_white(median: float, r: Floats) -> float:
    """Mean power by the median amplitude (Rayleigh: median² = ln 2 · mean square) over that of white residuals."""
    white = 4 * float(np.mean(r**2)) / len(r)
    return max(median**2 / float(np.log(2)) / max(white, 1e-300), LEAST_FLOOR)


def _gain(t: Floats, r: Floats, weight: Floats, q: Floats, omega: float) -> tuple[float, float, float, float]:
    """Gain of e^(iωt) with a linear fade, square on the columns q; and a, b and a decay from the fade."""
    middle = (t[0] + t[-1]) / 2
    c, s = np.cos(omega * t) * weight, np.sin(omega * t) * weight
    scale = max(t[-1] - t[0], 1e-12)
    fade = (t - middle) / scale
    columns = np.column_stack([c, s, c * fade, s * fade])
    own = columns - q @ (q.T @ columns)
    coefficients, *_ = np.linalg.lstsq(own, r, rcond=1e-6)
    gain = float(r @ r - np.sum((r - own @ coefficients) ** 2))
    a, b, a1, b1 = coefficients.tolist()
    size = max(a * a + b * b, 1e-300)
    decay = float(np.clip(-(a * a1 + b * b1) / size / scale, -1 / scale, 4 / scale))
    return gain, a * float(np.exp(decay * middle)), b * float(np.exp(decay * middle)), decay


def add_mode(model: SwingModel, found: ModeFound) -> SwingModel:
    """The model with one mode more, at the values found."""
    number = model.modes + 1
    start = dict(zip(MODE, (found.cos, found.sin, found.omega, found.decay), strict=True))
    values = {**model.values, **{mode_name(number, part): start[part] for part in MODE}}
    free = (*model.free, *(mode_name(number, part) for part in MODE))
    return replace(model, values=values, free=free, modes=number)


def name_mode(hz: float, swing_hz: float, resolution_hz: float, expected: tuple[ExpectedMode, ...]) -> str:
    """Kind of a mode by the frequency that the rig predicts for it, or by its place beside the swing's."""
    best, least = "", 3.0
    for mode in expected:
        width = max(mode.relative_u * mode.frequency_hz, resolution_hz / 2, 0.01 * mode.frequency_hz)
        away = abs(hz - mode.frequency_hz) / width
        if away < least:
            best, least = mode.kind, away
    if best:
        return best
    for order in (2, 3, 4):
        if abs(hz - order * swing_hz) < max(resolution_hz, 0.01 * order * swing_hz):
            return f"harmonic {order}"
    return "unknown"
