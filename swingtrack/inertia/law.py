"""The law by which a suspension's period grows with amplitude: exact, as a record for the signal stage."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import replace

import numpy as np

from ..errors import BadRig
from ..records import Floats, Rig, SwingLaw
from .air import added_moment
from .energy_integral import period_ratio
from .suspension import Dynamics, Model, model_of

# Degree of the Chebyshev series in (q/q_max)², cut where the coefficients reach rounding. 40 leave 3e-7 near the limit of
# a suspension whose spacing is greater than its drop, 80 leave 1e-12.
DEGREE = 80
NEAR_LIMIT = (
    0.98  # of the largest angle a suspension allows: beyond, the strings cross or the article goes over
)
ROUNDING = 1e-13  # of the largest coefficient: the noise of the coefficients lies at 1e-14
TABLE_POINTS = 25
# Without a period the bounce is left out. Its part of the amplitude law goes with 1/k²; an article whose radius of
# gyration is below this part of √(ab) would hang on strings wider apart than itself: our judgment.
LEAST_GYRATION = 0.5


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
        Chebyshev series good to about 1e-12 of v and m (1e-10 is promised).
    """
    model = model_of(rig.suspension.kind)
    model.check(rig)
    dynamics = _dynamics(model, rig, period_s)
    if not q_max_rad > 0.0:
        raise BadRig(f"The law was asked for up to {q_max_rad:g} rad.", "Needed: a positive angle.")
    reach = min(q_max_rad, NEAR_LIMIT * dynamics.q_limit_rad)
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
    dynamics = model.dynamics(rig, moment + _air(rig))
    if not 0.0 < amplitude_rad < dynamics.q_limit_rad:
        raise BadRig(
            f"An amplitude of {np.degrees(amplitude_rad):.4g} degrees is beyond what this suspension allows.",
            f"Needed: below {np.degrees(dynamics.q_limit_rad):.4g} degrees.",
        )
    return small * period_ratio(amplitude_rad, dynamics.potential, dynamics.inertia)


def small_swing_period(rig: Rig, moment: float) -> float:
    """Period, s, of small undamped swings of an article of the given moment of inertia, kg m².

    The inverse of `moment_of_inertia`: the air that the rig describes swings along.

    Examples
    --------
    >>> from swingtrack.records import Article, Quantity, Suspension
    >>> wire = Suspension("torsion-wire", {"stiffness": Quantity(0.02, 0.0, "N m/rad")})
    >>> round(small_swing_period(Rig(Article("blade", None), wire), 0.02), 6)
    6.283185
    """
    model = model_of(rig.suspension.kind)
    model.check(rig)
    if not (math.isfinite(moment) and moment > 0.0):
        raise BadRig(f"A moment of inertia of {moment:g} kg m² was given.", "Needed: a number over zero.")
    x = {key: q.value for key, q in model.inputs(rig).items()}
    return model.period(x, moment + _air(rig))


def _air(rig: Rig) -> float:
    return 0.0 if rig.air is None else added_moment(rig.air)


def _dynamics(model: Model, rig: Rig, period_s: float | None) -> Dynamics:
    if period_s is None:
        return model.dynamics(rig, None)
    x = {key: q.value for key, q in model.inputs(rig).items()} | {"period": period_s}
    moment = float(model.moment(x))
    return model.dynamics(rig, moment if moment > 0.0 else None)


def _series(function: Callable[[Floats], Floats], reach: float) -> Floats:
    """Chebyshev coefficients in s = 2 (q/reach)² − 1, trailing ones at rounding level cut off."""
    count = DEGREE + 1
    angle = np.pi * (np.arange(count) + 0.5) / count
    values = function(reach * np.sqrt(0.5 * (np.cos(angle) + 1.0)))
    # Discrete orthogonality at the roots of T_count (Numerical Recipes, 5.8): less rounding than a least-squares fit.
    coefficients = 2.0 / count * np.cos(np.outer(np.arange(count), angle)) @ values
    coefficients[0] *= 0.5
    large = np.flatnonzero(np.abs(coefficients) > ROUNDING * np.abs(coefficients).max())
    return np.asarray(coefficients[: large[-1] + 1], dtype=np.float64)


def _ratio_doubt(model: Model, rig: Rig, period_s: float | None, reach: float, ratio: float) -> float:
    """Relative standard uncertainty of T/T0 − 1 from the doubt of the geometry, each input moved by its u.

    Without a period the bounce, which then is left out, is in it: between none and that of `LEAST_GYRATION`, as limits.
    """
    if ratio == 1.0:
        return 0.0
    total = 0.0
    for key, quantity in rig.suspension.dimensions.items():
        if quantity.u == 0.0:
            continue
        dynamics = _dynamics(model, _moved(rig, key), period_s)
        if reach >= dynamics.q_limit_rad:
            continue
        total += (period_ratio(reach, dynamics.potential, dynamics.inertia) - ratio) ** 2
    if period_s is None and rig.article.mass is not None:
        dynamics = model.dynamics(rig, rig.article.mass.value * _least_gyration(rig) ** 2)
        total += (period_ratio(reach, dynamics.potential, dynamics.inertia) - ratio) ** 2 / 3.0
    total += (_off_centre_part(rig) * reach**2) ** 2
    return float(np.sqrt(total) / abs(ratio - 1.0))


def _off_centre_part(rig: Rig) -> float:
    """What a centre of mass off the middle by e may change of (T/T0 − 1)/A²: e²/L².

    The article then tips as it turns: its height and its turning in the tip are each worth up to e²/L² (the fourth
    order of √(L² − 4 d² sin²(q/2)) at the two distances d, and a tip of 2 e q²/L), and depend on what the rig does not say.
    """
    given = rig.suspension.dimensions
    length = given.get("length") or given.get("drop")
    offset = given.get("centre_offset")
    return 0.0 if offset is None or length is None else (offset.value / length.value) ** 2


def _least_gyration(rig: Rig) -> float:
    """Smallest plausible radius of gyration on strings, m; any number serves suspensions that have no bounce."""
    given = rig.suspension.dimensions
    upper = given.get("upper_spacing") or given.get("upper_radius")
    if upper is None:
        return 1.0
    lower = given.get("lower_spacing") or given.get("lower_radius") or upper
    half = 0.5 if "upper_spacing" in given else 1.0
    return LEAST_GYRATION * half * math.sqrt(upper.value * lower.value)


def _moved(rig: Rig, key: str) -> Rig:
    quantity = rig.suspension.dimensions[key]
    dimensions = {**rig.suspension.dimensions, key: replace(quantity, value=quantity.value + quantity.u)}
    return replace(rig, suspension=replace(rig.suspension, dimensions=dimensions))
