"""Propagation of uncertainty after the GUM, with the part of each input; the law of propagation is GTC's."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

from ..records import BudgetLine, Quantity

MANY_DOF = 1e5  # Student's t is the normal distribution to six digits from here on
COVERAGE = 95.44997361036416  # percent: k = 2 where the degrees of freedom are many, as is usual


@dataclass(frozen=True)
class Propagated:
    """A result with its budget; `k` is the coverage factor for about 95 %."""

    quantity: Quantity
    k: float
    lines: tuple[BudgetLine, ...]


def propagate(
    function: Callable[[Mapping[str, Any]], Any], inputs: Mapping[str, Quantity], unit: str
) -> Propagated:
    """Law of propagation of uncertainty, u²(y) = Σ (∂f/∂xᵢ)² u²(xᵢ), for independent inputs.

    Inputs that are one and the same number appear once, so that what they share is never counted as independent.
    Degrees of freedom after Welch and Satterthwaite (GUM, JCGM 100:2008, G.4.1); k from Student's t at 95.45 %.

    Parameters
    ----------
    function : callable
        Takes a mapping of names to numbers; plain arithmetic only.
    inputs : mapping of name to Quantity
    unit : str
        Of the result.

    Returns
    -------
    Propagated
        `lines` in the order of the inputs; their contributions squared sum to u².
    """
    import GTC

    uncertain = {
        name: GTC.ureal(q.value, q.u, df=q.dof, label=name) if q.u > 0.0 else q.value
        for name, q in inputs.items()
    }
    y = function(uncertain)
    value, u = float(GTC.value(y)), float(GTC.uncertainty(y))
    dof = float(GTC.dof(y)) if u > 0.0 else math.inf
    components = {
        name: float(GTC.reporting.u_component(y, x)) if inputs[name].u > 0.0 and u > 0.0 else 0.0
        for name, x in uncertain.items()
    }
    dof = dof if dof < MANY_DOF else math.inf
    lines = []
    for name, q in inputs.items():
        contribution = abs(components[name])
        slope = components[name] / q.u if q.u > 0.0 else _slope(function, inputs, name)
        share = (contribution / u) ** 2 if u > 0.0 else 0.0
        lines.append(BudgetLine(name, q.value, q.u, q.unit, slope, contribution, share, q.dof))
    return Propagated(Quantity(value, u, unit, dof=dof), coverage_factor(dof), tuple(lines))


def coverage_factor(dof: float, percent: float = COVERAGE) -> float:
    """Two-sided Student t factor for the coverage probability (GUM Table G.2)."""
    from scipy.special import ndtri, stdtrit

    p = 0.5 * (1.0 + percent / 100.0)
    # GUM G.4.1: effective degrees of freedom are rounded down to an integer before the table is entered
    return float(ndtri(p) if math.isinf(dof) else stdtrit(max(1.0, math.floor(dof + 1e-9)), p))


def _slope(function: Callable[[Mapping[str, Any]], Any], inputs: Mapping[str, Quantity], name: str) -> float:
    """Central difference, for an input without uncertainty, which GTC does not track."""
    plain = {key: q.value for key, q in inputs.items()}
    step = 1e-6 * (abs(plain[name]) or 1.0)
    up, down = function(plain | {name: plain[name] + step}), function(plain | {name: plain[name] - step})
    return float((up - down) / (2.0 * step))
