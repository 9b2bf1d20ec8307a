"""How the amplitude falls: viscous, velocity-squared and dry damping, alone and together, averaged over a swing.

    dA/dt = −γ A − c A² − d,   γ viscous, 1/s;  c = 4 β ω0 / (3π), 1/(rad s);  d = 2 f ω0 / π, rad/s

β is the velocity-squared coefficient of θ'' + β θ'|θ'| + …, 1/rad; f the static angle that the dry friction is worth,
rad (the amplitude drops by 4 f a cycle). First-order averaging; the closed form is that of a Riccati equation.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from swingtrack.records import Floats

KINDS = ("viscous", "quadratic", "dry")


@dataclass(frozen=True)
class Losses:
    """γ (1/s), c (1/(rad s)) and d (rad/s) of dA/dt = −γ A − c A² − d."""

    viscous: float = 0.0
    quadratic: float = 0.0
    dry: float = 0.0

    @classmethod
    def from_coefficients(cls, omega0: float, zeta: float, beta: float, dry: float) -> Losses:
        """From the equation's own coefficients, see the module's head."""
        return cls(zeta * omega0, 4 * beta * omega0 / (3 * np.pi), 2 * dry * omega0 / np.pi)

    def rate(self, amplitude: Floats | float) -> Floats | float:
        """Local decay rate δ = −(dA/dt)/A, 1/s."""
        return self.viscous + self.quadratic * amplitude + self.dry / amplitude

    def shares(self, amplitude: float) -> tuple[float, float, float]:
        """Part of each cause in the loss at an amplitude; they add up to 1."""
        parts = np.array([self.viscous, self.quadratic * amplitude, self.dry / amplitude])
        whole = float(parts.sum())
        if whole == 0:
            return (0.0, 0.0, 0.0)
        a, b, c = (parts / whole).tolist()
        return a, b, c


def amplitude_at(t: Floats, start: float, losses: Losses) -> Floats:
    """A(t) from A(0) = `start`, in closed form; 0 once the swing has come to rest.

    With u = tanh(h t)/h, h² = γ²/4 − c d (tan for h² < 0, t for h = 0):

        A(t) = [A₀ (1 − u γ/2) − d u] / [1 + u (γ/2 + c A₀)]

    Examples
    --------
    Viscous and squared together (γ = 0.01, β = 0.05, ω0 = 1) after ten cycles, against the published form
    γ A E / (γ + c A (1 − E)):

    >>> import numpy as np
    >>> losses = Losses.from_coefficients(1.0, 0.01, 0.05, 0.0)
    >>> round(float(amplitude_at(np.array([20 * np.pi]), 1.0, losses)[0]), 4)
    0.2681
    """
    g, c, d = losses.viscous, losses.quadratic, losses.dry
    # tanh(h t)/h, analytic through Δ = 0, avoids every special case.
    z = (g * g / 4 - c * d) * t * t
    root = np.sqrt(np.abs(z))
    safe = np.where(root < 1e-6, 1.0, root)
    with np.errstate(all="ignore"):
        ratio = np.where(z >= 0, np.tanh(safe), np.tan(np.minimum(safe, np.pi / 2 - 1e-9))) / safe
    slowed = t * np.where(root < 1e-6, 1 - z / 3, ratio)
    stopped = (z < 0) & (root >= np.pi / 2)
    top = start * (1 - slowed * g / 2) - d * slowed
    bottom = 1 + slowed * (g / 2 + c * start)
    # Losses that drive (negative ones, tried on the way of a fit) may run away in finite time.
    running = np.where(bottom > 0, np.maximum(top, 0.0) / np.where(bottom > 0, bottom, 1.0), np.inf)
    return np.asarray(np.where(stopped | (top < 0), 0.0, running))
