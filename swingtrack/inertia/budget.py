"""Propagation of uncertainty after the GUM, with the part of each input; the law of propagation is GTC's."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

from ..records import BudgetLine, Quantity
from .correlation import Correlations, correlation, groups_of

MANY_DOF = 1e5  # Student's t is the normal distribution to six digits from here on
COVERAGE = 95.44997361036416  # percent: k = 2 where the degrees of freedom are many, as is usual
Function = Callable[[Mapping[str, Any]], Any]


@dataclass(frozen=True)
class Propagated:
    """A result with its budget; `k` is the coverage factor for about 95 %."""

    quantity: Quantity
    k: float
    lines: tuple[BudgetLine, ...]


def propagate(
    function: Function,
    inputs: Mapping[str, Quantity],
    unit: str,
    *,
    correlations: Correlations | None = None,
) -> Propagated:
    """Law of propagation of uncertainty, u²(y) = Σ Σ cᵢ cⱼ u(xᵢ) u(xⱼ) r(xᵢ, xⱼ), cᵢ = ∂f/∂xᵢ.

    Inputs that are one and the same number appear once, so that what they share is never counted as independent.
    Degrees of freedom after Welch and Satterthwaite (GUM, JCGM 100:2008, G.4.1); k from Student's t at 95.45 %.

    Parameters
    ----------
    function : callable
        Takes a mapping of names to numbers; plain arithmetic only.
    inputs : mapping of name to Quantity
    unit : str
        Of the result.
    correlations : mapping of (name, name) to float, optional
        r of two inputs, where they were measured together. Inputs that are correlated must have the same degrees of
        freedom, as they come from one set of readings.

    Returns
    -------
    Propagated
        `lines` in the order of the inputs. Their shares add up to one: correlated inputs carry their part of the cross
        terms, cᵢ uᵢ Σⱼ r cⱼ uⱼ / u², which may be negative; `contribution` stays |cᵢ| uᵢ.

    Examples
    --------
    >>> both = {"a": Quantity(1.0, 0.1, "m"), "b": Quantity(1.0, 0.1, "m")}
    >>> apart = propagate(lambda x: x["a"] - x["b"], both, "m")
    >>> alike = propagate(lambda x: x["a"] - x["b"], both, "m", correlations={("a", "b"): 0.5})
    >>> round(apart.quantity.u, 6), round(alike.quantity.u, 6)
    (0.141421, 0.1)
    """
    import GTC

    related = correlations or {}
    uncertain = _uncertain(inputs, related)
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
        slope = components[name] / q.u if q.u > 0.0 else _slope(function, inputs, name)
        shared = math.fsum(correlation(related, name, other) * components[other] for other in inputs)
        share = components[name] * shared / u**2 if u > 0.0 else 0.0
        lines.append(BudgetLine(name, q.value, q.u, q.unit, slope, abs(components[name]), share, q.dof))
    return Propagated(Quantity(value, u, unit, dof=dof), coverage_factor(dof), tuple(lines))


def correlation_of(
    first: Propagated, second: Propagated, *, correlations: Correlations | None = None
) -> float:
    """Correlation of two results that depend on the same inputs: r = Σ Σ cᵢ dⱼ u(xᵢ) u(xⱼ) r(xᵢ, xⱼ) / (u₁ u₂).

    GUM F.1.2.3, equation (F.2). Both must come of `propagate` with the same inputs and correlations.
    """
    total = math.fsum(
        a.sensitivity * a.u * b.sensitivity * b.u * correlation(correlations or {}, a.input, b.input)
        for a in first.lines
        for b in second.lines
    )
    return total / (first.quantity.u * second.quantity.u)


def second_order_u(function: Function, inputs: Mapping[str, Quantity]) -> float:
    """Standard uncertainty with the next terms of the Taylor series, for independent normal inputs.

    u² + Σ Σ [½ (∂²f/∂xᵢ∂xⱼ)² + ∂f/∂xᵢ ∂³f/∂xᵢ∂xⱼ²] u²(xᵢ) u²(xⱼ) (GUM, JCGM 100:2008, 5.1.2, note), the derivatives by
    central differences over one standard uncertainty. For the cases in which all first slopes vanish.
    """
    names = [name for name, q in inputs.items() if q.u > 0.0]
    plain = {name: q.value for name, q in inputs.items()}

    def at(**steps: float) -> float:
        moved = {name: plain[name] + steps.get(name, 0.0) * inputs[name].u for name in names}
        return float(function({**plain, **moved}))

    middle = at()
    total = 0.0
    for a in names:
        up, down = at(**{a: 1.0}), at(**{a: -1.0})
        slope, curve = 0.5 * (up - down), up - 2.0 * middle + down
        far = 0.5 * (at(**{a: 2.0}) - at(**{a: -2.0}))
        third = far - 2.0 * slope  # ∂³f/∂a³ u³ by the differences at one and two u
        slope -= third / 6.0
        total += slope**2 + 0.5 * curve**2 + slope * third
        for b in names:
            if b == a:
                continue
            corner = {(i, j): at(**{a: i, b: j}) for i in (1.0, -1.0) for j in (1.0, -1.0)}
            mixed = 0.25 * (corner[1, 1] - corner[1, -1] - corner[-1, 1] + corner[-1, -1])
            bent = 0.5 * (corner[1, 1] + corner[1, -1] - corner[-1, 1] - corner[-1, -1]) - (up - down)
            total += 0.5 * mixed**2 + slope * bent
    return math.sqrt(max(total, 0.0))


def coverage_factor(dof: float, percent: float = COVERAGE) -> float:
    """Two-sided Student t factor for the coverage probability (GUM Table G.2)."""
    from scipy.special import ndtri, stdtrit

    p = 0.5 * (1.0 + percent / 100.0)
    # GUM G.4.1: effective degrees of freedom are rounded down to an integer before the table is entered
    return float(ndtri(p) if math.isinf(dof) else stdtrit(max(1.0, math.floor(dof + 1e-9)), p))


def _uncertain(inputs: Mapping[str, Quantity], related: Correlations) -> dict[str, Any]:
    """GTC's uncertain numbers; correlated ones are made together."""
    import GTC

    found: dict[str, Any] = {
        name: GTC.ureal(q.value, q.u, df=q.dof, label=name) if q.u > 0.0 else q.value
        for name, q in inputs.items()
    }
    for group in groups_of(inputs, related):
        together = [inputs[name] for name in group]
        made = GTC.multiple_ureal(
            [q.value for q in together], [q.u for q in together], together[0].dof, label_seq=list(group)
        )
        found.update(zip(group, made, strict=True))
        for i, first in enumerate(group):
            for second in group[i + 1 :]:
                GTC.set_correlation(correlation(related, first, second), found[first], found[second])
    return {name: found[name] for name in inputs}


def _slope(function: Function, inputs: Mapping[str, Quantity], name: str) -> float:
    """Central difference, for an input without uncertainty, which GTC does not track."""
    plain = {key: q.value for key, q in inputs.items()}
    step = 1e-6 * (abs(plain[name]) or 1.0)
    up, down = function(plain | {name: plain[name] + step}), function(plain | {name: plain[name] - step})
    return float((up - down) / (2.0 * step))
