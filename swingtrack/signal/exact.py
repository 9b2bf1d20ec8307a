"""The swing as the exact equation has it, at any times, with its derivatives to every parameter.

    m(q) q'' + ½ m'(q) q'² + ω0² v'(q) + 2 γ q' + β q'|q'| + f ω0² sgn(q') = 0

The chain of half-swings (`half_swing`) is walked on a table over the amplitudes that occur: a Chebyshev interpolant
in the amplitude of the half-swing's waveform, its duration and its next turning amplitude. There is no step-by-step
integration: the cost hardly grows with the length of the record, and the result is exact to some 1e-12.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.polynomial import chebyshev

from swingtrack.records import Floats
from swingtrack.signal.envelope import Losses, amplitude_at
from swingtrack.signal.half_swing import TIME_TERMS, Damping, HalfSwings, solve_half_swings
from swingtrack.signal.restoring import Restoring

# Amplitudes in the table: the interpolant in the amplitude converges geometrically; tested against direct solving.
AMPLITUDE_NODES = 14
# More half-swings than any clip holds; stops a wild trial step of the solver from walking for ever.
MOST_HALF_SWINGS = 200_000


@dataclass(frozen=True)
class SwingState:
    """Where the swing starts and what drives it.

    Parameters
    ----------
    amplitude : float
        |q| at the turning point at or before t = 0, rad.
    phase : float
        ω0 times the time since that turning point at t = 0; dimensionless, >= 0.
    omega0 : float
        Small-swing undamped angular frequency, rad/s.
    damping : Damping
        Dimensionless damping and shape.
    side : int
        +1 or −1: the side of that turning point.
    """

    amplitude: float
    phase: float
    omega0: float
    damping: Damping
    side: int = 1


@dataclass(frozen=True, eq=False)
class Motion:
    """q at the times asked for and its derivatives to (amplitude, phase, ω0, ζ, β, f, Λ).

    `turning_x`, `turning_amplitude` are the turning points, `d_turning_x` (k, 7) and `d_turning_amplitude` (k, 7)
    their derivatives; x = ω0 t + phase counts from the first one.
    """

    q: Floats
    velocity: Floats
    slopes: Floats
    turning_x: Floats
    turning_amplitude: Floats
    d_turning_x: Floats
    d_turning_amplitude: Floats
    valid: bool


PARAMETERS = ("amplitude", "phase", "omega0", "zeta", "beta", "dry", "shape")


def move(t: Floats, state: SwingState, restoring: Restoring) -> Motion:
    """Follow the exact motion at times `t` (n,), s, sorted ascending, t = 0 being the time of `state`."""
    x = state.omega0 * t + state.phase
    table = _tabulate(state, restoring, float(x[-1]))
    n_par = len(PARAMETERS)
    if table is None:
        nothing = np.zeros((0, n_par))
        flat = np.zeros(len(t))
        return Motion(flat, flat, np.zeros((len(t), n_par)), flat[:0], flat[:0], nothing, nothing, False)
    half, low, high, xs, amplitudes, d_xs, d_amplitudes = table
    scaled = (2 * amplitudes[:-1] - low - high) / (high - low)
    in_a = chebyshev.chebvander(scaled, AMPLITUDE_NODES - 1)
    waves = np.einsum("km,mj->kj", in_a, half.coefficients)
    d_waves = np.einsum("km,mjp->kjp", in_a, half.d_coefficients)
    durations = np.diff(xs)
    d_durations = np.diff(d_xs, axis=0)
    # columns: q, dq/ds, dq/dA, dq/dζ, dq/dβ, dq/df, dq/dΛ along s
    stacked = np.empty((len(durations), TIME_TERMS, 7))
    stacked[:, :, 0] = waves
    stacked[:, :-1, 1] = chebyshev.chebder(waves, axis=1)
    stacked[:, -1, 1] = 0.0
    stacked[:, :, 2:] = d_waves
    which = np.clip(np.searchsorted(xs, x, side="right") - 1, 0, len(durations) - 1)
    s = 2 * (x - xs[which]) / durations[which] - 1
    basis = chebyshev.chebvander(s, TIME_TERMS - 1)
    along = np.empty((len(t), 7))
    edges = np.searchsorted(which, np.arange(len(durations) + 1))
    for k in range(len(durations)):
        i, j = edges[k], edges[k + 1]
        if j > i:
            along[i:j] = basis[i:j] @ stacked[k]
    side = state.side * np.where(which % 2 == 0, 1.0, -1.0)
    along *= side[:, None]
    d_a = d_amplitudes[which]
    slopes = along[:, 2:3] * d_a
    slopes[:, 3:] += along[:, 3:]
    d_s = -(2 * d_xs[which] + (s + 1)[:, None] * d_durations[which]) / durations[which][:, None]
    d_s[:, 1] += 2 / durations[which]
    d_s[:, 2] += 2 * t / durations[which]
    slopes += along[:, 1:2] * d_s
    velocity = along[:, 1] * 2 * state.omega0 / durations[which]
    return Motion(along[:, 0], velocity, slopes, xs, amplitudes, d_xs, d_amplitudes, half.solved)


def _tabulate(
    state: SwingState, restoring: Restoring, x_end: float
) -> tuple[HalfSwings, float, float, Floats, Floats, Floats, Floats] | None:
    """Half-swings as Chebyshev series in the amplitude over the range that occurs, and the walk through them."""
    low, high = _range(state, x_end)
    for _ in range(4):
        nodes = chebyshev.chebpts1(AMPLITUDE_NODES)
        amplitudes = (low + high) / 2 + (high - low) / 2 * nodes
        if not np.all(np.isfinite(amplitudes)) or low <= 0:
            return None
        try:
            # A wild trial of the solver may overflow on the way; it is refused by what comes out.
            with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
                solved = solve_half_swings(amplitudes, state.damping, restoring)
        except np.linalg.LinAlgError:
            return None
        if not np.all(np.isfinite(solved.rate)) or np.any(solved.rate <= 0):
            return None
        half = _in_amplitude(solved)
        with np.errstate(over="ignore", invalid="ignore"):
            walk = _walk(state, half, (low, high), x_end)
        if walk is None:
            return None
        xs, found, d_xs, d_found = walk
        if found.min() >= low * 0.999 and found.max() <= high * 1.001:
            return half, low, high, xs, found, d_xs, d_found
        low, high = min(low, 0.9 * max(found.min(), 0.01 * high)), max(high, 1.05 * found.max())
        if high > 50 * state.amplitude:
            return None
    return half, low, high, xs, found, d_xs, d_found


def _range(state: SwingState, x_end: float) -> tuple[float, float]:
    """A first guess of the amplitudes in the record, by the averaged losses."""
    d = state.damping
    losses = Losses.from_coefficients(1.0, d.zeta, d.beta, d.dry)
    last = float(amplitude_at(np.array([max(x_end, 1.0)]), state.amplitude, losses)[0])
    last = min(max(last, 0.02 * state.amplitude), 50 * state.amplitude)
    return min(0.93 * last, 0.9 * state.amplitude), max(1.001 * state.amplitude, 1.1 * last)


def _in_amplitude(half: HalfSwings) -> HalfSwings:
    """From values at the amplitude nodes to Chebyshev coefficients over the amplitude (first axis)."""
    n = len(half.rate)
    transform = chebyshev.chebvander(chebyshev.chebpts1(n), n - 1).T * (2 / n)
    transform[0] /= 2
    durations = 2 / half.rate
    d_durations = -2 * half.d_rate / half.rate[:, None] ** 2
    return HalfSwings(
        transform @ half.coefficients,
        transform @ durations,
        np.einsum("mn,njp->mjp", transform, half.d_coefficients),
        transform @ d_durations,
        half.solved,
    )


def _walk(
    state: SwingState, half: HalfSwings, span: tuple[float, float], x_end: float
) -> tuple[Floats, Floats, Floats, Floats] | None:
    """Turning points from the first to just past `x_end`, with derivatives to the seven parameters.

    `half` holds durations (not rates) as coefficients over the amplitude. Only the chain of amplitudes is walked one
    by one; durations and derivatives follow for all half-swings at once.
    """
    low, high = span
    next_amplitude = -half.coefficients.sum(axis=1)  # −q at s = 1, where every T_j is 1
    found = _chain(state.amplitude, next_amplitude, half.rate, (low, high, x_end))
    if found is None:
        return None
    amplitudes = np.array(found)
    in_a = _chebyshev_rows(
        np.clip((2 * amplitudes[:-1] - low - high) / (high - low), -1.3, 1.3), len(half.rate)
    )
    xs = np.concatenate([[0.0], np.cumsum(in_a @ half.rate)])
    d_next = in_a @ -half.d_coefficients.sum(axis=1)  # (k, 5)
    d_duration = in_a @ half.d_rate
    # a_(k+1) = H(a_k, p): its derivative d_(k+1) = H_a d_k + H_p, solved by the running product of H_a.
    product = np.concatenate([[1.0], np.cumprod(d_next[:, 0])])
    if not np.all(np.isfinite(xs)) or np.any(np.abs(product) < 1e-250):
        return None
    d_amplitudes = np.zeros((len(amplitudes), 7))
    d_amplitudes[:, 0] = product
    d_amplitudes[1:, 3:] = product[1:, None] * np.cumsum(d_next[:, 1:] / product[1:, None], axis=0)
    d_xs = np.zeros((len(amplitudes), 7))
    steps = d_duration[:, :1] * d_amplitudes[:-1]
    steps[:, 3:] += d_duration[:, 1:]
    d_xs[1:] = np.cumsum(steps, axis=0)
    return xs, amplitudes, d_xs, d_amplitudes


def _chain(
    start: float, next_amplitude: Floats, duration: Floats, limits: tuple[float, float, float]
) -> list[float] | None:
    """Amplitudes at the turning points; plain floats, as the loop is short work for them and long for arrays."""
    low, high, x_end = limits
    nexts, durations = next_amplitude.tolist(), duration.tolist()
    x, a = 0.0, start
    found = [a]
    for _ in range(MOST_HALF_SWINGS):
        scaled = min(max((2 * a - low - high) / (high - low), -1.3), 1.3)
        one, two = 0.0, 0.0  # Clenshaw's recurrence, both series together
        length, length_before = 0.0, 0.0
        twice = 2 * scaled
        for c, d in zip(nexts[:0:-1], durations[:0:-1], strict=True):
            one, two = c + twice * one - two, one
            length, length_before = d + twice * length - length_before, length
        a = nexts[0] + scaled * one - two
        step = durations[0] + scaled * length - length_before
        if not (step > 0 and abs(a) < 1e6):
            return None
        x += step
        found.append(a)
        if x > x_end:
            return found
    return None


def _chebyshev_rows(x: Floats, terms: int) -> Floats:
    return np.asarray(chebyshev.chebvander(x, terms - 1))
