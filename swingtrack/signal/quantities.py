"""From fitted parameters to what is reported: period, decay and what follows from them, each with its uncertainty.

With δ the decay rate (amplitude ~ e^(−δt)) and ω0 = 2π/T: half-life ln 2/δ, damping ratio ζ = δ/ω0, quality factor
Q = 1/(2ζ), logarithmic decrement Λ = 2π ζ/√(1 − ζ²) (any text on the damped oscillator).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from swingtrack.records import DampingTerm, Floats, Quantity
from swingtrack.signal.choose import DAMPING_PARAMETERS
from swingtrack.signal.envelope import Losses
from swingtrack.signal.fitting import Fitted
from swingtrack.signal.model import SWING
from swingtrack.signal.noise import Noise

# An amplitude that falls by less than twice its uncertainty has no half-life to speak of.
LEAST_DECAY = 2.0


@dataclass(frozen=True, eq=False)
class Estimate:
    """A fit with the covariance that counts: parameters' values by name, covariance (p, p), degrees of freedom."""

    fitted: Fitted
    covariance: Floats
    dof: float

    def value(self, name: str) -> float:
        """A parameter's value, free or held."""
        return self.fitted.model.values[name]

    def spread(self, slopes: dict[str, float]) -> float:
        """Standard uncertainty of a quantity with these derivatives to parameters (held ones count for nothing)."""
        free = self.fitted.model.free
        g = np.array([slopes.get(name, 0.0) for name in free])
        return float(np.sqrt(max(g @ self.covariance @ g, 0.0)))

    def quantity(self, value: float, slopes: dict[str, float], unit: str) -> Quantity:
        """The quantity with its uncertainty and degrees of freedom."""
        return Quantity(value, self.spread(slopes), unit, self.dof)


def estimate(fitted: Fitted, noise: Noise) -> Estimate:
    """Covariance of the parameters for noise of the colour measured.

    The fit's rows of prior knowledge have to be weighed against that same noise (`fit_model`'s `sigma`).
    """
    jacobian = fitted.outcome.jacobian
    lengths = np.linalg.norm(jacobian, axis=0)
    lengths[lengths == 0] = 1.0
    normal = (jacobian / lengths).T @ (jacobian / lengths)
    inverse = np.linalg.pinv(normal, rcond=1e-15, hermitian=True) / np.outer(lengths, lengths)
    # The fit takes S(f), not the mean density, out of the residuals for every parameter it has at the swing.
    free = len(fitted.model.free)
    kept = int(fitted.samples.kept.sum())
    dof = max(noise.effective - free, 1.0)
    sigma2 = fitted.sigma**2 * max(kept - free, 1) / max(kept - free * max(noise.inflation, 1.0), 0.5 * kept)
    return Estimate(fitted, inverse * sigma2 * noise.inflation, dof)


def period(found: Estimate) -> Quantity:
    """T = 2π/ω0, s."""
    omega0 = found.value("omega0")
    return found.quantity(2 * np.pi / omega0, {"omega0": -2 * np.pi / omega0**2}, "s")


def coordinate_amplitude(found: Estimate) -> Quantity:
    """First amplitude in the coordinate's own unit, R A: what the clip shows, whatever angle that may be."""
    a, r = found.value("amplitude"), found.value("radius")
    return found.quantity(a * r, {"amplitude": r, "radius": a}, "1")


def losses(found: Estimate) -> Losses:
    """The averaged losses of the fitted coefficients."""
    return Losses.from_coefficients(*(found.value(name) for name in ("omega0", "zeta", "beta", "dry")))


def decay_rate(found: Estimate, mean_amplitude: float) -> Quantity:
    """δ = γ + 4 β ω0 Ā/(3π) + 2 f ω0/(π Ā) at the mean amplitude Ā, 1/s."""
    omega0 = found.value("omega0")
    rate = float(losses(found).rate(mean_amplitude))
    slopes = {
        "omega0": rate / omega0,
        "zeta": omega0,
        "beta": 4 * omega0 * mean_amplitude / (3 * np.pi),
        "dry": 2 * omega0 / (np.pi * mean_amplitude),
    }
    return found.quantity(rate, slopes, "1/s")


def half_life(rate: Quantity) -> Quantity | None:
    """ln 2/δ, s; None where no decay is established."""
    if rate.value <= LEAST_DECAY * rate.u or rate.value <= 0:
        return None
    return Quantity(np.log(2) / rate.value, np.log(2) * rate.u / rate.value**2, "s", rate.dof)


def damping_ratio(rate: Quantity, omega0: float) -> Quantity:
    """ζ = δ/ω0."""
    return Quantity(rate.value / omega0, rate.u / omega0, "1", rate.dof)


def quality_factor(ratio: Quantity) -> Quantity | None:
    """Q = 1/(2ζ); None where no decay is established."""
    if ratio.value <= LEAST_DECAY * ratio.u or ratio.value <= 0:
        return None
    return Quantity(1 / (2 * ratio.value), ratio.u / (2 * ratio.value**2), "1", ratio.dof)


def log_decrement(ratio: Quantity) -> Quantity:
    """Λ = 2π ζ/√(1 − ζ²)."""
    root = float(np.sqrt(max(1 - ratio.value**2, 1e-12)))
    return Quantity(2 * np.pi * ratio.value / root, 2 * np.pi * ratio.u / root**3, "1", ratio.dof)


def damping_terms(found: Estimate, start: float, end: float) -> tuple[DampingTerm, ...]:
    """Each fitted cause: γ (1/s), β (1/rad), f (rad), with its share of the loss at both ends of the clip."""
    omega0 = found.value("omega0")
    first, last = losses(found).shares(start), losses(found).shares(end)
    values = {
        "viscous": found.quantity(
            found.value("zeta") * omega0, {"zeta": omega0, "omega0": found.value("zeta")}, "1/s"
        ),
        "quadratic": found.quantity(found.value("beta"), {"beta": 1.0}, "1"),
        "dry": found.quantity(found.value("dry"), {"dry": 1.0}, "rad"),
    }
    return tuple(
        DampingTerm(kind, values[kind], first[i], last[i])
        for i, kind in enumerate(DAMPING_PARAMETERS)
        if DAMPING_PARAMETERS[kind] in found.fitted.model.free
    )


@dataclass(frozen=True)
class InClip:
    """Mean period over the fitted part, and how far the amplitude lengthened it."""

    period: Quantity
    shift: float
    cycles: float


def period_in_clip(found: Estimate, length_s: float) -> InClip:
    """Mean time between turning points on one side that lie in the fitted part, as a stopwatch sees it."""
    model = found.fitted.model
    omega0, phase = found.value("omega0"), found.value("phase")
    motion = model.motion(np.array([0.0, length_s]))
    t = (motion.turning_x - phase) / omega0
    inside = np.flatnonzero((t >= -1e-9) & (t <= length_s + 1e-9))
    cycles = _cycles(t, length_s)
    if len(inside) < 2:
        inside = np.arange(len(t))[-2:]
    first, last = int(inside[0]), int(inside[-1])
    if (last - first) >= 2 and (last - first) % 2:
        last -= 1
    count = (last - first) / 2
    mean = float(t[last] - t[first]) / count
    slope = (motion.d_turning_x[last] - motion.d_turning_x[first]) / omega0 / count
    slopes = dict(zip(SWING, slope.tolist(), strict=True))
    slopes["omega0"] -= mean / omega0
    zeta = float(losses(found).rate(float(np.mean(motion.turning_amplitude)))) / omega0
    shift = mean * omega0 / (2 * np.pi) * np.sqrt(max(1 - zeta**2, 0.1)) - 1
    return InClip(found.quantity(mean, slopes, "s"), float(shift), cycles)


def _cycles(t: Floats, length_s: float) -> float:
    """Swings there and back in the fitted part, with their fractions."""
    places = np.arange(len(t)) / 2
    return float(np.interp(length_s, t, places) - np.interp(0.0, t, places))
