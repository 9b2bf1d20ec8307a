"""The one least-squares solver of this stage: Levenberg–Marquardt with analytic derivatives.

Minimises S(p) = Σ rᵢ(p)² over the parameters p. Steps solve the damped linear problem by QR of the stacked
[J D⁻¹; √λ I] with the columns scaled to unit length (J. J. Moré, The Levenberg–Marquardt algorithm:
implementation and theory, 1978; from memory), so that parameters of any size and unit are treated alike.
The outcome says three things apart: did it settle, is the covariance of use, and why it ended.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from swingtrack.records import Floats

# Residuals (n,) and derivatives (n, p) at parameters (p,); None where the model can't be had there.
Residuals = Callable[[Floats], tuple[Floats, Floats] | None]

MOST_STEPS = 200
# Share of the unit matrix added at first: larger is slower and surer from a poor start.
FIRST_DAMPING = 1e-5
POLISHING_STEPS = 40
# Relative size of a scaled step, and predicted relative gain in S, below which the search has settled.
STEP_TOLERANCE = 1e-13
GAIN_TOLERANCE = 1e-14
# Condition number of the scaled normal equations' root beyond which the covariance means nothing.
WORST_CONDITION = 1e10


@dataclass(frozen=True, eq=False)
class LeastSquares:
    """Outcome of a fit.

    Parameters
    ----------
    parameters : (p,) float
    residuals : (n,) float
    jacobian : (n, p) float
    sum_of_squares : float
    settled : bool
        The search ended at a minimum.
    usable : bool
        The derivatives have full rank, so the covariance is of use.
    message : str
        Why the search ended.
    steps : int
    """

    parameters: Floats
    residuals: Floats
    jacobian: Floats
    sum_of_squares: float
    settled: bool
    usable: bool
    message: str
    steps: int

    def unscaled_covariance(self) -> Floats:
        """(JᵀJ)⁻¹, (p, p); a pseudo-inverse where the rank is short."""
        scale = _column_lengths(self.jacobian)
        _, s, vt = np.linalg.svd(self.jacobian / scale, full_matrices=False)
        inverse = np.where(s > s[0] / WORST_CONDITION, 1 / np.maximum(s, 1e-300), 0.0)
        root = vt.T * inverse
        return np.asarray(root @ root.T / np.outer(scale, scale), dtype=float)

    def covariance(self) -> Floats:
        """Covariance for independent residuals of one variance, S/(n − p) · (JᵀJ)⁻¹."""
        n, p = self.jacobian.shape
        return np.asarray(self.unscaled_covariance() * (self.sum_of_squares / max(n - p, 1)), dtype=float)


def minimise(
    residuals: Residuals,
    start: Floats,
    *,
    most_steps: int = MOST_STEPS,
    gain: float = GAIN_TOLERANCE,
    first_damping: float = FIRST_DAMPING,
    polish: bool = True,
) -> LeastSquares:
    """Minimise the sum of squared residuals from `start` (p,).

    Parameters
    ----------
    residuals : callable
        p ↦ (r (n,), J (n, p)), or None outside the model's domain.
    start : (p,) float
    most_steps : int
        Steps tried at most, refused ones included.
    gain : float
        Predicted relative fall of S at which the search has settled.
    polish : bool
        Go on to the last digit once settled.
    first_damping : float
        Share of the unit matrix in the first step; 100 for start values that are far off.

    Raises
    ------
    ValueError
        If the model can't be had at `start`.

    Examples
    --------
    >>> import numpy as np
    >>> x = np.linspace(0, 1, 20)
    >>> def decay(p):
    ...     return p[0] * np.exp(-p[1] * x) - 2 * np.exp(-3 * x), np.column_stack(
    ...         [np.exp(-p[1] * x), -p[0] * x * np.exp(-p[1] * x)])
    >>> minimise(decay, np.array([1.0, 1.0])).parameters.round(9).tolist()
    [2.0, 3.0]
    """
    p = np.array(start, dtype=float)
    now = residuals(p)
    if now is None or not np.all(np.isfinite(now[0])):
        raise ValueError("the model can't be evaluated at its start values")
    r, jacobian = now
    total = float(r @ r)
    damping, growth = first_damping, 2.0
    scale = _column_lengths(jacobian)
    message, settled = f"no minimum within {most_steps} steps", False
    steps = 0
    while steps < most_steps:
        scale = np.maximum(scale * 0.9, _column_lengths(jacobian))
        triangle, projected = _reduce(jacobian / scale, r)
        grown = np.linalg.norm(p * scale)
        accepted = False
        while steps < most_steps:
            steps += 1
            scaled_step = _damped_step(triangle, projected, damping)
            tried = p + scaled_step / scale
            predicted = float(
                2 * scaled_step @ -(triangle.T @ projected) - np.sum((triangle @ scaled_step) ** 2)
            )
            small = np.linalg.norm(scaled_step) <= STEP_TOLERANCE * (grown + STEP_TOLERANCE)
            if predicted <= gain * total or small or total == 0.0:
                # The last small step is still taken if it helps: it brings the final digits.
                settled, message = True, "settled at a minimum"
            new = residuals(tried)
            fall = -1.0
            if new is not None and np.all(np.isfinite(new[0])):
                new_total = float(new[0] @ new[0])
                fall = (total - new_total) / predicted if predicted > 0 else -1.0
                if new_total <= total:
                    p, (r, jacobian), total = tried, new, new_total
                    accepted = True
            if settled:
                break
            if accepted:
                damping *= max(1 / 3, 1 - (2 * fall - 1) ** 3)
                growth = 2.0
                break
            damping = max(damping, 1e-12) * growth
            growth = min(growth * 2, 1e3)
            if damping > 1e15:
                settled, message = _is_flat(triangle, projected, total), "no step makes it better"
                break
        if settled or damping > 1e15:
            break
    if settled and polish:
        p, r, jacobian = _polish(residuals, p, r, jacobian)
        total = float(r @ r)
    singular = np.linalg.svd(jacobian / _column_lengths(jacobian), compute_uv=False)
    full = bool(len(r) >= len(p) and singular[-1] > singular[0] / WORST_CONDITION)
    return LeastSquares(p, r, jacobian, total, settled, settled and full, message, steps)


def _polish(residuals: Residuals, p: Floats, r: Floats, jacobian: Floats) -> tuple[Floats, Floats, Floats]:
    """Undamped Gauss–Newton steps while they shorten: S itself is flat to rounding long before p is."""
    shortest = np.inf
    for _ in range(POLISHING_STEPS):
        scale = _column_lengths(jacobian)
        step, _, rank, _ = np.linalg.lstsq(jacobian / scale, -r, rcond=1 / WORST_CONDITION)
        length = float(np.linalg.norm(step))
        if rank < len(p) or length >= 0.95 * shortest or length <= 1e-15 * np.linalg.norm(p * scale):
            break
        new = residuals(p + step / scale)
        if new is None or not np.all(np.isfinite(new[0])) or new[0] @ new[0] > (r @ r) * (1 + 1e-9):
            break
        p, (r, jacobian), shortest = p + step / scale, new, length
    return p, r, jacobian


def _column_lengths(jacobian: Floats) -> Floats:
    lengths = np.sqrt(np.einsum("ij,ij->j", jacobian, jacobian))
    return np.where((lengths > 0) & np.isfinite(lengths), lengths, 1.0)


def _reduce(jacobian: Floats, r: Floats) -> tuple[Floats, Floats]:
    """R and Qᵀr of J = QR: every damped step then costs p³, not n p²."""
    q, triangle = np.linalg.qr(jacobian)
    return np.asarray(triangle), np.asarray(q.T @ r)


def _damped_step(triangle: Floats, projected: Floats, damping: float) -> Floats:
    p = triangle.shape[1]
    stacked = np.vstack([triangle, np.sqrt(damping) * np.eye(p)])
    right = np.concatenate([-projected, np.zeros(p)])
    return np.asarray(np.linalg.lstsq(stacked, right, rcond=None)[0])


def _is_flat(triangle: Floats, projected: Floats, total: float) -> bool:
    """Whether the residuals stand square on every column: a minimum to rounding (cosine below 1e-6)."""
    gradient = triangle.T @ projected
    return bool(np.max(np.abs(gradient)) <= 1e-6 * np.sqrt(max(total, 1e-300)))
