"""What the clip is taken to show: the exact swing seen through the camera, other modes beside it.

    y(t) = B + D τ + R (q(t) + g₂ q² + g₃ q³) + Σ e^(−δ τ) (a cos ω τ + b sin ω τ)        angle seen (R = 1)
    y(t) = B + D τ + R (sin(q + q₀) + g₃ q³) + Σ …                                   seen from the side

with τ the time from the first sample and q the exact motion (`exact`). g₂, g₃ take up what a camera askew does to
the waveform; the rest place may wander slowly, Σ wⱼ cos(π j τ/τ_end). Both are only let free where the clip shows
them.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace

import numpy as np

from swingtrack.records import Floats
from swingtrack.signal.exact import Motion, SwingState, move
from swingtrack.signal.half_swing import Damping
from swingtrack.signal.restoring import Restoring

SWING = ("amplitude", "phase", "omega0", "zeta", "beta", "dry", "shape")
VIEW = ("rest", "drift", "bend2", "bend3", "radius", "turned")
# Slow wander of the rest place: cosines of j half-turns over the record.
SLOW = tuple(f"slow{j}" for j in range(1, 13))
MODE = ("cos", "sin", "omega", "decay")


def mode_name(number: int, part: str) -> str:
    """Name of a parameter of the other mode `number` (from 1)."""
    return f"mode{number}_{part}"


@dataclass(frozen=True)
class Prior:
    """What is known of a parameter beforehand, as one more observation: value and standard uncertainty."""

    value: float
    u: float


@dataclass(frozen=True, eq=False)
class SwingModel:
    """A model with its parameter values, free or held.

    Parameters
    ----------
    t : (n,) float
        s from the first sample, ascending.
    restoring : Restoring
    values : mapping of every parameter's name to its value
    free : names of the parameters to be fitted, in order
    modes : int
        Number of other modes.
    side : int
        +1 or −1, of the first turning point.
    sine : bool
        Seen from the side: y = R sin(q + q₀).
    priors : mapping of names to what is known beforehand
    length_s : float
        Length of the part fitted, over which the slow wander's cosines run.
    """

    t: Floats
    restoring: Restoring
    values: dict[str, float]
    free: tuple[str, ...]
    modes: int = 0
    side: int = 1
    sine: bool = False
    priors: dict[str, Prior] | None = None
    length_s: float = 1.0

    def vector(self) -> Floats:
        """Values of the free parameters."""
        return np.array([self.values[name] for name in self.free])

    def with_vector(self, p: Floats) -> SwingModel:
        """The same model at other values of the free parameters."""
        return replace(self, values={**self.values, **dict(zip(self.free, p.tolist(), strict=True))})

    def with_free(self, names: Iterable[str], **values: float) -> SwingModel:
        """The same model with other parameters free, and some values set."""
        return replace(self, free=tuple(names), values={**self.values, **values})

    def state(self) -> SwingState:
        """The swing's part of the values."""
        v = self.values
        damping = Damping(v["zeta"], v["beta"], v["dry"], v["shape"])
        return SwingState(v["amplitude"], v["phase"], v["omega0"], damping, self.side)

    def motion(self, t: Floats | None = None) -> Motion:
        """The exact motion at the model's times, or at others."""
        return move(self.t if t is None else t, self.state(), self.restoring)

    def seen(self, t: Floats | None = None) -> Floats:
        """y at the model's times, or at others."""
        at = self.t if t is None else t
        return self._view(self.motion(at).q) + self.rest(at)

    def rest(self, t: Floats) -> Floats:
        """What there is beside the swing: resting place, drift and the other modes."""
        v = self.values
        y = v["rest"] + v["drift"] * t
        for j, name in enumerate(SLOW, start=1):
            if v[name]:
                y = y + v[name] * self._slow(j, t)
        for number in range(1, self.modes + 1):
            y = y + self._mode(number, t)[0]
        return np.asarray(y)

    def _slow(self, j: int, t: Floats) -> Floats:
        return np.asarray(np.cos(np.pi * j / self.length_s * t))

    def _view(self, q: Floats) -> Floats:
        v = self.values
        if self.sine:
            return np.asarray(v["radius"] * (np.sin(q + v["turned"]) + v["bend3"] * q**3))
        return np.asarray(v["radius"] * (q + v["bend2"] * q**2 + v["bend3"] * q**3))

    def _mode(self, number: int, t: Floats) -> tuple[Floats, dict[str, Floats]]:
        a, b, omega, decay = (self.values[mode_name(number, part)] for part in MODE)
        fade = np.exp(np.clip(-decay * t, -50, 50))
        c, s = fade * np.cos(omega * t), fade * np.sin(omega * t)
        y = a * c + b * s
        return y, {"cos": c, "sin": s, "omega": t * (b * c - a * s), "decay": -t * y}

    def evaluate(self) -> tuple[Floats, Floats] | None:
        """y (n,) and its derivatives to the free parameters (n, p); None where the motion can't be had."""
        v, t = self.values, self.t
        if not (v["amplitude"] > 0 and v["omega0"] > 0 and abs(v["zeta"]) < 0.7 and v["phase"] > -1.0):
            return None
        motion = self.motion()
        if not motion.valid:
            return None
        q = motion.q
        columns: dict[str, Floats] = {"rest": np.ones_like(t), "drift": t}
        if self.sine:
            s, c = np.sin(q + v["turned"]), np.cos(q + v["turned"])
            on_q = v["radius"] * (c + 3 * v["bend3"] * q**2)
            columns["radius"], columns["turned"] = s + v["bend3"] * q**3, v["radius"] * c
            columns["bend3"] = v["radius"] * q**3
        else:
            on_q = v["radius"] * (1 + 2 * v["bend2"] * q + 3 * v["bend3"] * q**2)
            columns["radius"] = q + v["bend2"] * q**2 + v["bend3"] * q**3
            columns["bend2"], columns["bend3"] = v["radius"] * q**2, v["radius"] * q**3
        slopes = motion.slopes * on_q[:, None]
        columns.update({name: slopes[:, i] for i, name in enumerate(SWING)})
        y = self._view(q) + v["rest"] + v["drift"] * t
        for j, name in enumerate(SLOW, start=1):
            if name in self.free or v[name]:
                columns[name] = self._slow(j, t)
                y = y + v[name] * columns[name]
        for number in range(1, self.modes + 1):
            part, derivatives = self._mode(number, t)
            y = y + part
            columns.update({mode_name(number, name): d for name, d in derivatives.items()})
        return y, np.column_stack([columns[name] for name in self.free])


def blank_values(modes: int = 0) -> dict[str, float]:
    """Every parameter's name with the value that makes it vanish."""
    values = dict.fromkeys((*SWING, *VIEW, *SLOW), 0.0)
    values["radius"] = 1.0
    for number in range(1, modes + 1):
        values.update({mode_name(number, part): 0.0 for part in MODE})
    return values
