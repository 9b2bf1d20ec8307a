"""Parallel-axis moves: Huygens and Steiner's rule for moments and tensors, and one article swung on several parallel edges."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from ..errors import BadInput
from ..records import Doubt, Floats, Quantity
from .budget import propagate
from .combine import CombinedResult, NamedQuantity, Run, need_kind, need_runs, need_same
from .combine_adjust import derive
from .combine_draws import check_by_draws
from .combine_inputs import doubts_of, join_inputs
from .combine_scatter import own_moments, run_lines, settle, stored_moment_doubts
from .moment import advise

FOUR_PI_2 = 4.0 * math.pi**2
CENTRE_TOLERANCE = 3.0  # standard uncertainties of the distances within which the centre of mass should lie where it was said


def shift_from_centre(moment: Quantity, mass: Quantity, distance: Quantity) -> Quantity:
    """Moment about an axis at `distance` from the parallel one through the centre of mass: I + m d², kg m².

    Examples
    --------
    >>> exact = lambda value, unit: Quantity(value, 0.0, unit)
    >>> round(shift_from_centre(exact(0.02, "kg m^2"), exact(2.0, "kg"), exact(0.1, "m")).value, 6)
    0.04
    """
    return _shift(moment, mass, distance, 1.0)


def shift_to_centre(moment: Quantity, mass: Quantity, distance: Quantity) -> Quantity:
    """Moment about the parallel axis through the centre of mass: I − m d², kg m².

    Raises
    ------
    BadInput
        m d² is not smaller than the moment.
    """
    shifted = _shift(moment, mass, distance, -1.0)
    if not shifted.value > 0.0:
        raise BadInput(
            f"m d² = {mass.value * distance.value**2:.4g} kg m² is not smaller than the moment of {moment.value:.4g} kg m².",
            "Needed: a distance from the centre of mass that fits the moment.",
            "Check distance, mass and their units.",
        )
    return shifted


def shift_tensor(tensor: Floats, mass: float, offset: Sequence[float] | Floats) -> Floats:
    """Inertia matrix about a point at `offset` from the centre of mass: J + m (r·r 1 − r rᵀ).

    Parameters
    ----------
    tensor : (3, 3) float
        About the centre of mass, kg m², products of inertia with the sign of the matrix (J_xy = −∫ x y dm).
    mass : float
        kg.
    offset : (3,) float
        m.
    """
    r = np.asarray(offset, dtype=np.float64)
    return np.asarray(tensor, dtype=np.float64) + mass * (r @ r * np.eye(3) - np.outer(r, r))


def fit_parallel_edges(runs: Sequence[Run]) -> CombinedResult:
    """Moment about the centre of mass from swings of one article on several parallel edges on one side of it.

    The edges' distances from one another are known well, the place of the centre of mass is not: with e its offset
    from where it was said to be, common to all runs, each run says
        g (lᵢ + e) Tᵢ²/4π² − (lᵢ + e)² = k²,
    with unknown k² and e; I = m k². The stated doubt of each lᵢ counts as that of its own edge.

    Parameters
    ----------
    runs : sequence of Run
        Two or more on a knife edge, of different `pivot_to_centre`.

    Raises
    ------
    BadInput
        Other suspensions, fewer than two edges, or edges that contradict one another.
    """
    need_runs(runs, at_least=2, role="runs on edges")
    need_kind(runs, ("knife-edge",), why="it is the distance from the edge that is moved")
    need_same(runs, "article", [run.rig.article.name for run in runs])
    need_same(runs, "axis", [run.rig.article.axis for run in runs])
    joint = join_inputs(runs)
    if len({names["pivot_to_centre"] for names in joint.names}) < 2:
        raise BadInput(
            "All runs state the same pivot_to_centre.",
            "Needed: at least two edges at different distances.",
            "Take them as repeats instead.",
        )

    def conditions(p: Sequence[Any], x: Mapping[str, Any]) -> list[Any]:
        found = []
        for i in range(len(runs)):
            here = joint.local(i, x)
            arm = here["pivot_to_centre"] + p[1]
            pulled = here["mass"] * here["gravity"] * arm * here["period"] ** 2 / FOUR_PI_2
            found.append(pulled * joint.scatter(i, x) - here["mass"] * (arm**2 + p[0]))
        return found

    mass_name = joint.names[0]["mass"]

    def answer(p: Sequence[Any], x: Mapping[str, Any]) -> Any:
        return x[mass_name] * p[0]

    single, _ = own_moments(joint)
    mass = joint.quantities[mass_name].value
    settled = settle(joint, conditions, [float(single.mean()) / mass, 0.0])
    adjusted = settled.adjusted
    if not adjusted.values[0] > 0.0:
        raise BadInput(
            f"The edges give k² = {adjusted.values[0]:.3g} m².",
            "Needed: distances and periods that go together, all edges on one side of the centre of mass.",
            "Check the distances and their units.",
        )
    result = derive(adjusted, answer, "kg m^2")
    offset = derive(adjusted, lambda p, x: p[1], "m").quantity
    return CombinedResult(
        method="parallel edges",
        article=runs[0].rig.article.name,
        moment=result.quantity,
        k=result.k,
        about=joint.models[0].about,
        budget=result.lines,
        runs=run_lines(joint, settled, ["edge"] * len(runs), [1.0 / (mass * adjusted.values[0]) * mass, 0.0]),
        consistency=settled.consistency,
        monte_carlo=check_by_draws(adjusted, answer, result.quantity),
        by_products=(
            NamedQuantity(
                "offset of the centre of mass",
                offset,
                "farther from the edges than it was said to be",
            ),
        ),
        advice=(*advise(result.lines), *settled.advice),
        doubts=(
            *settled.doubts,
            *_centre_doubts(runs, offset),
            *stored_moment_doubts(joint),
            *doubts_of(runs),
        ),
    )


def _shift(moment: Quantity, mass: Quantity, distance: Quantity, sign: float) -> Quantity:
    inputs = {"moment": moment, "mass": mass, "distance": distance}
    return propagate(lambda x: x["moment"] + sign * x["mass"] * x["distance"] ** 2, inputs, "kg m^2").quantity


def _centre_doubts(runs: Sequence[Run], offset: Quantity) -> tuple[Doubt, ...]:
    claimed = max(run.rig.suspension.dimensions["pivot_to_centre"].u for run in runs)
    if abs(offset.value) <= CENTRE_TOLERANCE * math.hypot(offset.u, claimed):
        return ()
    return (
        Doubt(
            "centre-of-mass-off",
            f"The periods put the centre of mass {1e3 * offset.value:+.2g} mm from where it was said to be.",
            "Balance the article on an edge again; this result does not depend on it, single runs do.",
        ),
    )
