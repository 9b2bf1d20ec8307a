"""Swings by integration of the equation of motion, written apart from `inertia/` so that one can test the other.

Everything here is in plain mechanics (masses, heights, torques), never in the reduced form that the fit uses.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np
from scipy.integrate import solve_ivp

from ..errors import BadInput, BadRig
from ..records import Floats, Rig

TIGHT = {"rtol": 1e-11, "atol": 1e-13, "method": "DOP853"}


@dataclass(frozen=True)
class Damping:
    """Loss of speed, over the moment of inertia: 2γ q' + β q'|q'| + d sign(q').

    `rate_per_s` is γ, `quadratic` β (dimensionless), `dry_rad_per_s2` d.
    """

    rate_per_s: float = 0.01
    quadratic: float = 0.0
    dry_rad_per_s2: float = 0.0


@dataclass(frozen=True, eq=False)
class Mechanism:
    """A body with one coordinate q: torque(q) from height or wire, inertia(q), and half its slope.

    I(q) q'' + ½ I'(q) q'² = torque(q) − losses · I(0).
    """

    inertia: Callable[[float], float]
    half_slope: Callable[[float], float]
    torque: Callable[[float], float]
    at_rest: float
    stiffness: float

    @property
    def period_s(self) -> float:
        """Small undamped swings: 2π √(I(0)/stiffness)."""
        return 2.0 * math.pi * math.sqrt(self.at_rest / self.stiffness)


def mechanism_of(rig: Rig, moment: float) -> Mechanism:
    """The plain mechanics of the rig with an article of the given moment of inertia, kg m²."""
    x = {key: q.value for key, q in rig.suspension.dimensions.items()}
    kind = rig.suspension.kind
    if kind == "torsion-wire":
        kappa = x["stiffness"] if "stiffness" in x else _wire(x)
        return Mechanism(lambda q: moment, lambda q: 0.0, lambda q: -kappa * q, moment, kappa)
    if rig.article.mass is None:
        raise BadRig("article.mass is missing.", "Needed: the mass of the article that is rehearsed.")
    mass = rig.article.mass.value + math.fsum(weight.mass.value for weight in rig.article.added)
    g = _gravity(rig)
    if kind == "knife-edge":
        arm = x["pivot_to_centre"]
        about_edge = moment + mass * arm**2
        pull = mass * g * arm
        return Mechanism(lambda q: about_edge, lambda q: 0.0, lambda q: -pull * math.sin(q), about_edge, pull)
    if kind in ("bifilar", "trifilar"):
        return _on_strings(x, mass, g, moment)
    raise BadRig(
        f"A {kind} suspension can't be rehearsed.", "Needed: bifilar, trifilar, torsion-wire or knife-edge."
    )


def _on_strings(x: dict[str, float], mass: float, g: float, moment: float) -> Mechanism:
    """A body on equal strings between circles of radii a and b: it turns by q and rises by z(q)."""
    if "upper_spacing" in x:
        a, b = 0.5 * x["upper_spacing"], 0.5 * x.get("lower_spacing", x["upper_spacing"])
    else:
        a, b = x["upper_radius"], x.get("lower_radius", x["upper_radius"])
    length_2 = x["drop"] ** 2 + (a - b) ** 2 if "drop" in x else x["length"] ** 2
    if length_2 <= (a - b) ** 2:
        raise BadRig("The strings are shorter than the spacings allow.", "Needed: longer strings.")
    offset = x.get("centre_offset", 0.0)
    if offset:
        factor = math.sqrt((a * b - offset**2) / (a * b))
        length_2 += (a * factor - b * factor) ** 2 - (a - b) ** 2
        a, b = a * factor, b * factor

    def height(q: float) -> float:
        return math.sqrt(length_2 - a * a - b * b + 2.0 * a * b * math.cos(q))

    def slope(q: float) -> float:  # dz/dq of the body's height z = −height
        return a * b * math.sin(q) / height(q)

    def curve(q: float) -> float:
        h = height(q)
        return a * b * math.cos(q) / h + (a * b * math.sin(q)) ** 2 / h**3

    return Mechanism(
        inertia=lambda q: moment + mass * slope(q) ** 2,
        half_slope=lambda q: mass * slope(q) * curve(q),
        torque=lambda q: -mass * g * slope(q),
        at_rest=moment,
        stiffness=mass * g * a * b / math.sqrt(length_2 - (a - b) ** 2),
    )


def _wire(x: dict[str, float]) -> float:
    return math.pi * x["shear_modulus"] * x["wire_diameter"] ** 4 / (32.0 * x["length"])


def _gravity(rig: Rig) -> float:
    """Gravity of the rehearsed place: as given, by the 1980 formula at a latitude, or 9.81."""
    if rig.gravity is not None:
        return rig.gravity.value
    if rig.latitude is None:
        return 9.81
    s = math.sin(rig.latitude.value)
    s2 = math.sin(2.0 * rig.latitude.value)
    height = rig.altitude.value if rig.altitude is not None else 0.0
    return 9.780327 * (1.0 + 0.0053024 * s * s - 0.0000058 * s2 * s2) - 3.086e-6 * height


@dataclass(frozen=True, eq=False)
class SimulatedSwing:
    """A swing let go at rest at `release_s`; `angle(t)` in rad for any times, held still before release."""

    period_s: float
    amplitude_rad: float
    damping: Damping
    release_s: float
    pieces: tuple[tuple[float, Callable[[Floats], Floats]], ...] = field(repr=False)
    ends_s: float = math.inf

    def angle(self, t_s: Floats) -> Floats:
        """Angle, rad, at times (n,)."""
        t = np.atleast_1d(np.asarray(t_s, dtype=np.float64)) - self.release_s
        angle = np.full(t.shape, self.amplitude_rad)
        starts = np.array([start for start, _ in self.pieces])
        which = np.searchsorted(starts, t, side="right") - 1
        for number in np.unique(which[which >= 0]):
            inside = which == number
            angle[inside] = self.pieces[number][1](t[inside])
        return angle


def simulate_swing(
    mechanism: Mechanism, *, amplitude_rad: float, damping: Damping, duration_s: float, release_s: float = 0.0
) -> SimulatedSwing:
    """Integrate the swing from rest at `amplitude_rad` for `duration_s` after the release.

    Dry friction is integrated piece by piece between turning points, where its sign changes; the body sticks where
    the torque at a turning point is below the friction.
    """
    if not (math.isfinite(duration_s) and duration_s > 0.0):
        raise BadInput(f"A swing of {duration_s:g} s was asked for.", "Needed: a duration over zero.")

    def rates(_t: float, state: Floats, sign: float) -> list[float]:
        q, v = float(state[0]), float(state[1])
        loss = 2.0 * damping.rate_per_s * v + damping.quadratic * v * abs(v) + damping.dry_rad_per_s2 * sign
        torque = mechanism.torque(q) - mechanism.half_slope(q) * v * v - mechanism.at_rest * loss
        return [v, torque / mechanism.inertia(q)]

    pieces: list[tuple[float, Callable[[Floats], Floats]]] = []
    if damping.dry_rad_per_s2 == 0.0:
        solved = solve_ivp(
            rates, (0.0, duration_s), [amplitude_rad, 0.0], args=(0.0,), dense_output=True,
            max_step=mechanism.period_s / 8.0, **TIGHT,
        )  # fmt: skip
        pieces.append((0.0, lambda t, s=solved.sol: s(t)[0]))
    else:
        pieces = _dry_pieces(mechanism, damping, rates, amplitude_rad, duration_s)
    return SimulatedSwing(mechanism.period_s, amplitude_rad, damping, release_s, tuple(pieces))


def _dry_pieces(
    mechanism: Mechanism,
    damping: Damping,
    rates: Callable[..., list[float]],
    amplitude: float,
    duration: float,
) -> list[tuple[float, Callable[[Floats], Floats]]]:
    def turned(_t: float, state: Floats, _sign: float) -> float:
        return float(state[1])

    turned.terminal = True  # type: ignore[attr-defined]
    pieces: list[tuple[float, Callable[[Floats], Floats]]] = []
    t, q = 0.0, amplitude
    while t < duration:
        pull = mechanism.torque(q) / mechanism.at_rest
        if abs(pull) <= damping.dry_rad_per_s2:
            pieces.append((t, lambda times, stuck=q: np.full(times.shape, stuck)))
            break
        sign = math.copysign(1.0, pull)
        turned.direction = -sign  # type: ignore[attr-defined]
        solved = solve_ivp(
            rates, (t, duration + mechanism.period_s), [q, 0.0], args=(sign,), dense_output=True, events=turned,
            max_step=mechanism.period_s / 8.0, first_step=mechanism.period_s * 1e-4, **TIGHT,
        )  # fmt: skip
        pieces.append((t, lambda times, s=solved.sol: s(times)[0]))
        if not solved.t_events[0].size:
            break
        t, q = float(solved.t_events[0][0]), float(solved.y_events[0][0][0])
    return pieces
