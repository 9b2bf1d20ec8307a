"""The law by which a suspension's period grows with amplitude: exact, as a record for the signal stage."""

from __future__ import annotations

import numpy as np
from numpy.polynomial import chebyshev

from ..errors import BadRig
from ..records import Quantity, Rig, SwingLaw
from .energy_integral import period_ratio
from .suspension import Dynamics, Model, model_of

DEGREE = 40  # of the Chebyshev series in (q/q_max)²; cut where the coefficients reach rounding
NEAR_LIMIT = (
    0.98  # of the largest angle a suspension allows: beyond, the strings cross or the article goes over
)
TABLE_POINTS = 25


def swing_law(rig: Rig, *, period_s: float | None, q_max_rad: float) -> SwingLaw:
    """The exact law of the rig's suspension.

    Parameters
    ----------
    rig : Rig
    period_s : float or None
        Small-swing period, from which the radius of gyration and so the bounce follow; None leaves the bounce out.
    q_max_rad : float
        Largest angle at which the law is asked for; cut where the suspension allows less.

    Returns
    -------
    SwingLaw
        Chebyshev series good to about 1e-12 of v and m.
    """
    model = model_of(rig.suspension.kind)
    model.check(rig)
    dynamics = _dynamics(model, rig, period_s)
    reach = min(q_max_rad, NEAR_LIMIT * dynamics.q_limit_rad)
    if not reach > 0.0:
        raise BadRig(f"The law was asked for up to {q_max_rad:g} rad.", "Needed: a positive angle.")
    amplitude = np.linspace(0.0, reach, TABLE_POINTS)
    ratio = np.array([1.0] + [period_ratio(a, dynamics.potential, dynamics.inertia) for a in amplitude[1:]])
    return SwingLaw(
        name=rig.suspension.kind,
        q_max_rad=reach,
        potential=_series(lambda q: dynamics.potential(q) / (0.5 * q**2), reach),
        inertia=_series(dynamics.inertia, reach),
        amplitude_rad=amplitude,
        period_ratio=ratio,
        ratio_relative_u=_ratio_doubt(model, rig, period_s, reach, ratio[-1]),
    )


def exact_period(rig: Rig, moment: float, amplitude_rad: float) -> float:
    """Period, s, of an undamped swing of the given amplitude (half swing, rad)."""
    model = model_of(rig.suspension.kind)
    small = small_swing_period(rig, moment)
    if amplitude_rad == 0.0:
        return small
    dynamics = model.dynamics(rig, moment)
    if not 0.0 < amplitude_rad < dynamics.q_limit_rad:
        raise BadRig(
            f"An amplitude of {np.degrees(amplitude_rad):.4g} degrees is beyond what this suspension allows.",
            f"Needed: below {np.degrees(dynamics.q_limit_rad):.4g} degrees.",
        )
    return small * period_ratio(amplitude_rad, dynamics.potential, dynamics.inertia)


def small_swing_period(rig: Rig, moment: float) -> float:
    """Period, s, of small undamped swings of an article of the given moment of inertia, kg m²."""
    model = model_of(rig.suspension.kind)
    model.check(rig)
    return model.period({key: q.value for key, q in model.inputs(rig).items()}, moment)


def _dynamics(model: Model, rig: Rig, period_s: float | None) -> Dynamics:
    if period_s is None:
        return model.dynamics(rig, None)
    x = {key: q.value for key, q in model.inputs(rig).items()} | {"period": period_s}
    moment = float(model.moment(x))
    return model.dynamics(rig, moment if moment > 0.0 else None)


def _series(function: object, reach: float) -> np.ndarray:
    """Chebyshev coefficients in s = 2 (q/reach)² − 1, trailing ones at rounding level cut off."""
    s = np.cos(np.pi * (np.arange(DEGREE + 1) + 0.5) / (DEGREE + 1))
    q = reach * np.sqrt(0.5 * (s + 1.0))
    values = function(q)  # type: ignore[operator]
    coefficients = chebyshev.chebfit(s, values, DEGREE)
    large = np.flatnonzero(np.abs(coefficients) > 1e-15 * np.abs(coefficients).max())
    return np.asarray(coefficients[: large[-1] + 1], dtype=np.float64)


def _ratio_doubt(model: Model, rig: Rig, period_s: float | None, reach: float, ratio: float) -> float:
    """Relative standard uncertainty of T/T0 − 1 from the doubt of the geometry, each input moved by its u."""
    if ratio == 1.0:
        return 0.0
    total = 0.0
    for key, quantity in rig.suspension.dimensions.items():
        if not isinstance(quantity, Quantity) or quantity.u == 0.0:
            continue
        moved = _moved(rig, key)
        dynamics = _dynamics(model, moved, period_s)
        if reach >= dynamics.q_limit_rad:
            continue
        total += (period_ratio(reach, dynamics.potential, dynamics.inertia) - ratio) ** 2
    return float(np.sqrt(total) / abs(ratio - 1.0))


def _moved(rig: Rig, key: str) -> Rig:
    from dataclasses import replace

    quantity = rig.suspension.dimensions[key]
    dimensions = {**rig.suspension.dimensions, key: replace(quantity, value=quantity.value + quantity.u)}
    return replace(rig, suspension=replace(rig.suspension, dimensions=dimensions))
