"""Swings by integration of the equation of motion, released from rest."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from ..errors import BadInput
from ..records import Floats
from .mechanism import Mechanism

TIGHT = {"rtol": 1e-12, "atol": 1e-15, "method": "DOP853"}
# The solver's interpolation between its steps is of lower order than the steps: short ones keep it to 1e-10 rad.
LONGEST_STEP = 1.0 / 20.0  # of a period

Piece = tuple[float, Callable[[Floats], Floats]]


@dataclass(frozen=True)
class Damping:
    """Loss of speed, over the moment of inertia: 2γ q' + β q'|q'| + d sign(q').

    `rate_per_s` is γ, `quadratic` β (dimensionless), `dry_rad_per_s2` d.
    """

    rate_per_s: float = 0.01
    quadratic: float = 0.0
    dry_rad_per_s2: float = 0.0

    def __post_init__(self) -> None:
        for name in ("rate_per_s", "quadratic", "dry_rad_per_s2"):
            value = getattr(self, name)
            if not (math.isfinite(value) and value >= 0.0):
                raise BadInput(f"A damping {name} of {value:g} was asked for.", "Needed: zero or more.")

    def local_rate(self, amplitude_rad: float, omega: float) -> float:
        """Relative loss of amplitude per second at an amplitude: γ + (4β ω A)/(3π) + 2d/(π ω A).

        First-order averaging: the energy lost in a cycle of a harmonic swing over twice its energy.
        """
        squared = 4.0 * self.quadratic * omega * amplitude_rad / (3.0 * math.pi)
        dry = 2.0 * self.dry_rad_per_s2 / (math.pi * omega * amplitude_rad)
        return self.rate_per_s + squared + dry


@dataclass(frozen=True, eq=False)
class SwingTruth:
    """A swing let go at rest at `release_s`; `angle(t)` in rad for any times, held still before the release.

    Parameters
    ----------
    period_s : float
        Of small undamped swings.
    decay_rate_per_s : float
        γ of the viscous part; `damping.local_rate` gives the whole at an amplitude.
    moment_kg_m2 : float
        Of the article about the axis through its centre of mass.
    amplitude_start_rad : float
    damping : Damping
    release_s, ends_s : float
        The motion is known up to `ends_s`.
    """

    period_s: float
    decay_rate_per_s: float
    moment_kg_m2: float
    amplitude_start_rad: float
    damping: Damping
    release_s: float
    ends_s: float
    pieces: tuple[Piece, ...] = field(repr=False)

    def angle(self, t_s: Floats) -> Floats:
        """Angle, rad, at times of any shape."""
        return self._state(t_s, 0)

    def speed(self, t_s: Floats) -> Floats:
        """Angular speed, rad/s, at times of any shape."""
        return self._state(t_s, 1)

    def _state(self, t_s: Floats, part: int) -> Floats:
        given = np.atleast_1d(np.asarray(t_s, dtype=np.float64))
        if given.size and float(given.max()) > self.ends_s + 1e-9:
            raise BadInput(
                f"The swing at {float(given.max()):.6g} s was asked for.",
                f"Needed: a time up to {self.ends_s:.6g} s, where its integration ends.",
            )
        t = given.ravel() - self.release_s
        found = np.full(t.shape, self.amplitude_start_rad if part == 0 else 0.0)
        starts = np.array([start for start, _ in self.pieces])
        which = np.searchsorted(starts, t, side="right") - 1
        for number in np.unique(which[which >= 0]):
            inside = which == number
            found[inside] = self.pieces[number][1](t[inside])[part]
        return found.reshape(given.shape)


def simulate_swing(
    mechanism: Mechanism, *, amplitude_rad: float, damping: Damping, duration_s: float, release_s: float = 0.0
) -> SwingTruth:
    """Integrate the swing from rest at `amplitude_rad` for `duration_s` after the release.

    I(q) q'' + ½ I'(q) q'² = torque(q) − I(0) (2γ q' + β q'|q'| + d sign q'), by Dormand and Prince's method of
    order 8. Dry friction is integrated piece by piece between turning points, where its sign changes; the body sticks
    where the torque at a turning point is below the friction.

    Raises
    ------
    BadInput
        The duration is not over zero, or the release turns the article beyond what its strings allow.

    Examples
    --------
    >>> from swingtrack.rehearse.mechanism import _torsion
    >>> swing = simulate_swing(
    ...     _torsion(1.0, 1.0, 1.0), amplitude_rad=0.1, damping=Damping(0.0), duration_s=7.0
    ... )
    >>> round(float(swing.angle(np.array([math.pi]))[0]), 12)
    -0.1
    """
    from scipy.integrate import solve_ivp

    if not (math.isfinite(duration_s) and duration_s > 0.0):
        raise BadInput(f"A swing of {duration_s:g} s was asked for.", "Needed: a duration over zero.")
    _check_reach(mechanism, amplitude_rad)

    def rates(_t: float, state: Floats, sign: float) -> list[float]:
        q, v = float(state[0]), float(state[1])
        loss = 2.0 * damping.rate_per_s * v + damping.quadratic * v * abs(v) + damping.dry_rad_per_s2 * sign
        torque = mechanism.torque(q) - mechanism.half_slope(q) * v * v - mechanism.at_rest * loss
        return [v, torque / mechanism.inertia(q)]

    step = mechanism.period_s * LONGEST_STEP
    if damping.dry_rad_per_s2 == 0.0:
        solved = solve_ivp(
            rates, (0.0, duration_s), [amplitude_rad, 0.0], args=(0.0,), dense_output=True, max_step=step, **TIGHT
        )  # fmt: skip
        pieces = [(0.0, _reader(solved.sol))]
    else:
        pieces = _dry_pieces(mechanism, damping, rates, amplitude_rad, duration_s)
    return SwingTruth(
        period_s=mechanism.period_s,
        decay_rate_per_s=damping.rate_per_s,
        moment_kg_m2=mechanism.moment_kg_m2,
        amplitude_start_rad=amplitude_rad,
        damping=damping,
        release_s=release_s,
        ends_s=release_s + duration_s,
        pieces=tuple(pieces),
    )


def _check_reach(mechanism: Mechanism, amplitude_rad: float) -> None:
    """Strings shorter than the spacing go taut before the article is turned that far."""
    try:
        pull = mechanism.torque(amplitude_rad)
    except ValueError:
        pull = math.nan
    if not (math.isfinite(pull) and pull * amplitude_rad < 0.0):
        raise BadInput(
            f"Released at {math.degrees(amplitude_rad):.1f}° the article would not swing back.",
            "Needed: an amplitude within the reach of its strings, under 180°.",
            "Start at 5° to 15°.",
        )


def _reader(solution: Any) -> Callable[[Floats], Floats]:
    return lambda t: np.asarray(solution(t), dtype=np.float64)


def _stuck(angle: float) -> Callable[[Floats], Floats]:
    return lambda t: np.stack([np.full(t.shape, angle), np.zeros(t.shape)])


def _dry_pieces(
    mechanism: Mechanism,
    damping: Damping,
    rates: Callable[..., list[float]],
    amplitude: float,
    duration: float,
) -> list[Piece]:
    from scipy.integrate import solve_ivp

    def turned(_t: float, state: Floats, _sign: float) -> float:
        return float(state[1])

    turned.terminal = True  # type: ignore[attr-defined]
    pieces: list[Piece] = []
    t, q = 0.0, amplitude
    while t < duration:
        pull = mechanism.torque(q) / mechanism.at_rest
        if abs(pull) <= damping.dry_rad_per_s2:
            pieces.append((t, _stuck(q)))
            break
        sign = math.copysign(1.0, pull)
        turned.direction = -sign  # type: ignore[attr-defined]
        solved = solve_ivp(
            rates, (t, duration + mechanism.period_s), [q, 0.0], args=(sign,), dense_output=True, events=turned,
            max_step=mechanism.period_s * LONGEST_STEP, first_step=mechanism.period_s * 1e-4, **TIGHT,
        )  # fmt: skip
        pieces.append((t, _reader(solved.sol)))
        if not solved.t_events[0].size:
            break
        t, q = float(solved.t_events[0][0]), float(solved.y_events[0][0][0])
    return pieces
