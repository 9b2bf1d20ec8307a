"""Least squares where every measured input has errors: conditions between inputs and unknowns (Gauss–Helmert).

All methods of combining are of this kind: F(p, x) = 0 with unknowns p and independent measured inputs x, where an
input that several runs share appears once. What is correlated, cancels or fails to average down follows from that.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..errors import BadInput
from ..records import BudgetLine, Floats, Quantity
from .budget import MANY_DOF, Propagated, coverage_factor

Conditions = Callable[[Sequence[Any], Mapping[str, Any]], Sequence[Any]]
Function = Callable[[Sequence[Any], Mapping[str, Any]], Any]

COMPLEX_STEP = 1e-30
ROUNDING = 1e-12  # relative; keeps the weights finite where a run claims no uncertainty at all
MAX_STEPS = 60
SCATTER = "scatter of "
TILT = "tilt of "
# Inputs of these names, one or two a run, make one budget line together.
GROUPED = {SCATTER: "scatter between runs", TILT: "directions of the axes"}


@dataclass(frozen=True, eq=False)
class Adjusted:
    """Unknowns that fit the conditions best.

    Parameters
    ----------
    inputs : mapping of name to Quantity
        n of them; those with u = 0 are exact.
    values : (q,) float
    sensitivity : (q, n) float
        ∂p/∂x, every change of an input followed by a new fit.
    covariance : (q, q) float
    projector : (q, m) float
        H of the estimating equation H F(p, x) = 0.
    misfit, misfit_u : (m,) float
        What the measured inputs leave of F at the solution, and its standard uncertainty (less what the fit took).
    chi2 : float
    dof : int
    """

    conditions: Conditions
    inputs: Mapping[str, Quantity]
    values: Floats
    sensitivity: Floats
    covariance: Floats
    projector: Floats
    misfit: Floats
    misfit_u: Floats
    chi2: float
    dof: int


class Unsettled(BadInput):
    """The measured values contradict one another so far that the adjustment runs away."""


def adjust(
    conditions: Conditions,
    inputs: Mapping[str, Quantity],
    start: Sequence[float],
    *,
    at_measured: bool = False,
) -> Adjusted:
    """Adjust inputs and unknowns so that Σ ((x − x₀)/u)² is least while F(p, x) = 0.

    Linearised and repeated at the adjusted values: with A = ∂F/∂p, B = ∂F/∂x, Σ = diag(u²), V = B Σ Bᵀ and
    w = F + B (x₀ − x): δp = −(Aᵀ V⁻¹ A)⁻¹ Aᵀ V⁻¹ w, x = x₀ − Σ Bᵀ V⁻¹ (w + A δp). Jacobians by complex step.

    Parameters
    ----------
    conditions : callable
        (p, x) → m values of F, by plain arithmetic that takes arrays and complex numbers.
    inputs : mapping of name to Quantity
        Independent of one another.
    start : (q,) float
    at_measured : bool
        Weigh and linearise at the measured inputs and the start throughout: for runs that contradict one another far beyond their claims.

    Raises
    ------
    BadInput
        The conditions leave an unknown open; `Unsettled` where the steps do not settle.

    Notes
    -----
    Evaluating A and B at the adjusted inputs keeps a scale error that all runs share from dragging the answer
    down (Peelle's puzzle), and a straight line with errors in both variables from being flattened.
    The method is the classical adjustment of conditions with unknowns (F. R. Helmert, 1872; from memory).
    """
    names = list(inputs)
    measured = np.array([inputs[name].value for name in names])
    variance = np.array([inputs[name].u ** 2 for name in names])
    x, p = measured.copy(), np.asarray(start, dtype=np.float64)
    first_b: Floats | None = None
    for _ in range(MAX_STEPS):
        f, a, b = _linearise(conditions, names, p, x)
        if len(f) < len(p) or not np.all(np.isfinite(a)) or not np.all(np.isfinite(b)):
            raise _undetermined()
        first_b = b if first_b is None or not at_measured else first_b
        w = f + b @ (measured - x)
        floor = ROUNDING * (np.abs(a) @ np.abs(p) + np.abs(b) @ np.abs(x))
        v = (first_b * variance) @ first_b.T + np.diag(np.maximum(floor, np.finfo(float).tiny ** 0.25) ** 2)
        scale = np.sqrt(np.diag(v))
        whitened = np.linalg.cholesky(v / np.outer(scale, scale))
        rows = np.linalg.solve(whitened, a / scale[:, None])
        size = np.linalg.norm(rows, axis=0)
        if np.any(size == 0.0) or np.linalg.cond(rows / size) > 1e7:
            raise _undetermined()
        inverse = np.linalg.pinv(rows)
        whiten_w = np.linalg.solve(whitened, w / scale)
        step = -inverse @ whiten_w
        left = whiten_w + rows @ step
        pull = np.linalg.solve(whitened.T, left) / scale
        moved = measured - variance * (b.T @ pull)
        spread = np.sqrt(np.sum(inverse**2, axis=1))
        settled = np.all(np.abs(step) <= 1e-7 * spread + 1e-13 * np.abs(p)) and (
            at_measured or np.all(np.abs(moved - x) <= 1e-6 * np.sqrt(variance) + 1e-13 * np.abs(x))
        )
        p, x = p + step, x if at_measured else moved
        if settled:
            projector = inverse @ np.linalg.inv(whitened) / scale
            unwhiten = scale[:, None] * whitened
            free = np.eye(len(f)) - rows @ inverse
            return Adjusted(
                conditions=conditions,
                inputs=dict(inputs),
                values=p,
                sensitivity=-projector @ b,
                covariance=inverse @ inverse.T,
                projector=projector,
                misfit=unwhiten @ left,
                misfit_u=np.sqrt(np.maximum(np.einsum("ij,jk,ik->i", unwhiten, free, unwhiten), 0.0)),
                chi2=float(left @ left),
                dof=len(f) - len(p),
            )
    raise Unsettled(
        "The runs contradict one another so far that no answer settles.",
        "Needed: runs of one article whose periods and dimensions go together.",
        "Check the units and which run is which.",
    )


def derive(adjusted: Adjusted, function: Function, unit: str) -> Propagated:
    """A quantity y(p, x) of the unknowns (and of inputs beside them) with its budget, every input once.

    ∂y/∂x is taken with a new fit: ∂y/∂x|ₚ + ∂y/∂p · ∂p/∂x. Effective degrees of freedom after Welch and
    Satterthwaite (GUM, JCGM 100:2008, G.4.1).
    """
    names = list(adjusted.inputs)
    at = np.array([adjusted.inputs[name].value for name in names])
    y, dp, dx = _linearise(lambda p, x: [function(p, x)], names, adjusted.values, at)
    slopes = dx[0] + dp[0] @ adjusted.sensitivity
    lines = budget_lines(adjusted.inputs, slopes, scatter_dof=adjusted.dof)
    u = math.sqrt(sum(line.contribution**2 for line in lines))
    dof = effective_dof(lines, u)
    return Propagated(Quantity(float(y[0]), u, unit, dof=dof), coverage_factor(dof), lines)


def budget_lines(
    inputs: Mapping[str, Quantity], slopes: Floats, *, scatter_dof: int = 0
) -> tuple[BudgetLine, ...]:
    """Budget lines of sensitivities (n,); the runs' scatter, one number estimated once, is a single line.

    So are the tilts of the axes; for both the sensitivity is the root of the sum of squares.
    """
    contributions = {name: abs(slope) * q.u for (name, q), slope in zip(inputs.items(), slopes, strict=True)}
    total = math.fsum(c**2 for c in contributions.values())
    lines = []
    grouped: dict[str, list[tuple[float, float]]] = {}
    for (name, q), slope in zip(inputs.items(), slopes, strict=True):
        part = contributions[name] ** 2
        title = next((title for start, title in GROUPED.items() if name.startswith(start)), None)
        if title is not None:
            grouped.setdefault(title, []).append((part, q.u))
            continue
        share = part / total if total > 0.0 else 0.0
        lines.append(BudgetLine(name, q.value, q.u, q.unit, float(slope), contributions[name], share, q.dof))
    for title, parts in grouped.items():
        root, u = math.sqrt(math.fsum(part for part, _ in parts)), max(u for _, u in parts)
        scattered = title == GROUPED[SCATTER]
        dof = float(max(scatter_dof, 1)) if scattered else math.inf
        slope, share = (root / u, root**2 / total) if u > 0.0 and total > 0.0 else (0.0, 0.0)
        lines.append(BudgetLine(title, 0.0, u, "1" if scattered else "rad", slope, root, share, dof))
    return tuple(lines)


def effective_dof(lines: Sequence[BudgetLine], u: float) -> float:
    """Welch–Satterthwaite: u⁴ / Σ (cᵢ⁴/νᵢ); infinite where no line has finite degrees of freedom."""
    spread = math.fsum(line.contribution**4 / line.dof for line in lines if math.isfinite(line.dof))
    dof = u**4 / spread if spread > 0.0 else math.inf
    return dof if dof < MANY_DOF else math.inf


def _linearise(
    conditions: Conditions, names: Sequence[str], p: Floats, x: Floats
) -> tuple[Floats, Floats, Floats]:
    """F (m,), ∂F/∂p (m, q) and ∂F/∂x (m, n) by complex steps, all in one evaluation."""
    q, n = len(p), len(x)
    stepped = np.concatenate([p, x])[:, None] + 1j * COMPLEX_STEP * np.eye(q + n)
    values = conditions(list(stepped[:q]), dict(zip(names, stepped[q:], strict=True)))
    f = np.array([np.broadcast_to(np.asarray(value, dtype=complex), (q + n,)) for value in values])
    slopes = f.imag / COMPLEX_STEP
    return f[:, 0].real.copy(), slopes[:, :q], slopes[:, q:]


def _undetermined() -> BadInput:
    return BadInput(
        "The runs are too much alike: they leave an unknown of this method open.",
        "Needed: runs that differ in what the method varies (weights, distances or axes).",
        "Add a run that differs more.",
    )
