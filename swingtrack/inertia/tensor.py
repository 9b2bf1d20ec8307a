"""The whole tensor: swings about six or more axes of one article → inertia matrix, principal moments and axes."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..errors import BadInput
from ..records import Doubt, Floats, Quantity
from .combine import Consistency, Run, RunLine, need_runs, need_same
from .combine_adjust import TILT, Adjusted, derive
from .combine_inputs import doubts_of, join_inputs
from .combine_scatter import own_moments, run_lines, settle, stored_moment_doubts
from .moment import advise
from .tensor_axes import NextAxis, axis_row, condition_of, sideways, suggest_axis
from .tensor_principal import PrincipalAxis, alike_doubts, principal_axes, sense_doubts, triangle_margin

UNKNOWNS = ("xx", "yy", "zz", "yz", "xz", "xy")
# An axis marked on an article and hung by eye stands within about a degree of where it was meant to: as a standard
# uncertainty half a degree in each direction. Common practice, no source.
AXIS_U_RAD = np.radians(0.5)
# Six axes spread as evenly as can be have 1.6; at ten the worst element is known six times worse.
POOR_CONDITION = 10.0


@dataclass(frozen=True)
class TensorResult:
    """The inertia matrix about the centre of mass, in the article's own frame.

    Parameters
    ----------
    article : str
    matrix : 3 × 3 of Quantity
        kg m², symmetric; off the diagonal with the matrix's sign (J_xy = −∫ x y dm).
    covariance : 6 × 6 of float
        Of xx, yy, zz, yz, xz, xy, (kg m²)².
    principal : three, the smallest moment first
    triangle_margin : Quantity
        Sum of the two smaller principal moments less the largest: 0 for a flat plate, never negative for a body.
    condition : float
        Condition number of the set of axes; 1.6 at best.
    next_axis : NextAxis
        Where one more swing would help most.
    runs : tuple of RunLine
    axes : the axis of each run
    consistency : Consistency
    doubts, advice
    """

    article: str
    matrix: tuple[tuple[Quantity, ...], ...]
    covariance: tuple[tuple[float, ...], ...]
    principal: tuple[PrincipalAxis, ...]
    triangle_margin: Quantity
    condition: float
    next_axis: NextAxis
    runs: tuple[RunLine, ...]
    axes: tuple[tuple[float, float, float], ...]
    consistency: Consistency
    method: str = "tensor"
    advice: tuple[str, ...] = ()
    doubts: tuple[Doubt, ...] = ()


def fit_tensor(runs: Sequence[Run], *, axis_u_rad: float = float(AXIS_U_RAD)) -> TensorResult:
    """Inertia matrix J about the centre of mass from swings about six or more axes n of one article.

    Each run says I_i(x) = nᵢᵀ J nᵢ, adjusted for all inputs together, so that a scale error which all runs share
    (spacing, gravity, mass) scales J as a whole. Each axis may be tilted from where it was meant to be.

    Parameters
    ----------
    runs : sequence of Run
        Of one article, with `rig.article.axis` (unit vector, the article's frame). All axes through the centre of mass.
    axis_u_rad : float
        Standard uncertainty of each axis' direction, in each of the two directions across it.

    Raises
    ------
    BadInput
        Fewer than six axes, or axes that leave an element open.
    """
    need_runs(runs, at_least=len(UNKNOWNS), role="runs about different axes")
    need_same(runs, "article", [run.rig.article.name for run in runs])
    axes = _axes_of(runs)
    condition = condition_of(axes)
    if condition > 1e4:
        raise BadInput(
            f"The {len(runs)} axes leave an element of the matrix open (condition {condition:.2g}).",
            "Needed: six axes that do not all lie on one cone or plane pair, such as x, y, z and the three diagonals between them.",
            f"Swing it about an axis such as {suggest_axis(axes, np.ones(len(runs)), np.eye(3), 0.0).axis}.",
        )
    joint = join_inputs(runs)
    tilts = {
        f"{TILT}{run.name}, {way}": Quantity(0.0, axis_u_rad, "rad")
        for run in runs
        for way in ("one way", "across")
    }
    joint = joint.with_inputs(tilts if axis_u_rad > 0.0 else {})

    def conditions(p: Sequence[Any], x: Mapping[str, Any]) -> list[Any]:
        found = []
        for i, run in enumerate(runs):
            row = axis_row(_tilted(axes[i], run.name, x))
            found.append(joint.moment(i, x) - sum(c * v for c, v in zip(row, p, strict=True)))
        return found

    single, own = own_moments(joint)
    design = np.array([axis_row(axis) for axis in axes], dtype=np.float64)
    start = np.linalg.lstsq(design, single, rcond=None)[0]
    settled = settle(joint, conditions, start.tolist())
    adjusted = settled.adjusted
    matrix = as_matrix(adjusted.values)
    principal = principal_axes(adjusted)
    margin = triangle_margin(adjusted)
    own_u = np.hypot(own, settled.consistency.extra_relative_u) * single
    following = suggest_axis(axes, own_u, matrix, axis_u_rad)
    middle = principal[1]
    return TensorResult(
        article=runs[0].rig.article.name,
        matrix=_matrix_quantities(adjusted),
        covariance=tuple(tuple(float(c) for c in row) for row in adjusted.covariance),
        principal=principal,
        triangle_margin=margin,
        condition=condition,
        next_axis=following,
        runs=run_lines(joint, settled, ["axis"] * len(runs), list(_trace_gradient(matrix))),
        axes=tuple((float(a[0]), float(a[1]), float(a[2])) for a in axes),
        consistency=settled.consistency,
        advice=(*_axis_advice(following), *advise(middle.budget), *settled.advice),
        doubts=(
            *settled.doubts,
            *sense_doubts(principal, margin),
            *alike_doubts(principal),
            *_condition_doubts(condition),
            *stored_moment_doubts(joint),
            *doubts_of(runs),
        ),
    )


def moment_about(tensor: TensorResult, axis: Sequence[float]) -> Quantity:
    """Moment about any axis through the centre of mass: nᵀ J n, kg m²."""
    n = np.asarray(axis, dtype=np.float64)
    length = float(np.linalg.norm(n))
    if not (np.isfinite(length) and length > 0.0):
        raise BadInput(f"axis = {list(axis)} has no direction.", "Needed: three numbers, not all zero.")
    row = np.array(axis_row(n / length))
    values = [tensor.matrix[i][j].value for i, j in ((0, 0), (1, 1), (2, 2), (1, 2), (0, 2), (0, 1))]
    variance = float(row @ np.array(tensor.covariance) @ row)
    return Quantity(float(row @ values), float(np.sqrt(variance)), "kg m^2")


def as_matrix(values: Sequence[float] | Floats) -> Floats:
    """xx, yy, zz, yz, xz, xy as a symmetric matrix (3, 3)."""
    xx, yy, zz, yz, xz, xy = values
    return np.array([[xx, xy, xz], [xy, yy, yz], [xz, yz, zz]], dtype=np.float64)


def _axes_of(runs: Sequence[Run]) -> list[Floats]:
    axes = []
    for run in runs:
        if run.rig.article.axis is None:
            raise BadInput(
                f"Run {run.name!r} does not say about which axis the article swung.",
                "Needed: article.axis in its rig, three numbers in the article's own frame.",
                "Write axis = [0, 0, 1] for the article's z axis.",
            )
        n = np.asarray(run.rig.article.axis, dtype=np.float64)
        axes.append(n / np.linalg.norm(n))
    return axes


def _tilted(axis: Floats, name: str, x: Mapping[str, Any]) -> list[Any]:
    """The axis turned by the two small tilts of its run."""
    one, across = x.get(f"{TILT}{name}, one way", 0.0), x.get(f"{TILT}{name}, across", 0.0)
    e1, e2 = sideways(axis)
    moved = [axis[k] + one * e1[k] + across * e2[k] for k in range(3)]
    length = sum(part * part for part in moved) ** 0.5
    return [part / length for part in moved]


def _matrix_quantities(adjusted: Adjusted) -> tuple[tuple[Quantity, ...], ...]:
    def element(index: int) -> Quantity:
        return derive(adjusted, lambda p, x: p[index], "kg m^2").quantity

    xx, yy, zz, yz, xz, xy = (element(index) for index in range(len(UNKNOWNS)))
    return ((xx, xy, xz), (xy, yy, yz), (xz, yz, zz))


def _trace_gradient(matrix: Floats) -> Floats:
    """∂ln(trace)/∂(xx, yy, zz, yz, xz, xy): a run's weight in the table is its pull on the trace."""
    return np.array([1.0, 1.0, 1.0, 0.0, 0.0, 0.0]) / float(np.trace(matrix))


def _axis_advice(following: NextAxis) -> tuple[str, ...]:
    at = ", ".join(f"{part:+.2f}" for part in following.axis)
    return (
        f"One more swing would help most about the axis ({at}): it takes {100 * following.gain:.0f} % off what the "
        "runs' own doubts leave of the matrix.",
    )


def _condition_doubts(condition: float) -> tuple[Doubt, ...]:
    if condition <= POOR_CONDITION:
        return ()
    return (
        Doubt(
            "axes-too-alike",
            f"The set of axes has a condition number of {condition:.0f} (1.6 at best): some elements are known poorly.",
            "Swing it about the axis that the advice names.",
        ),
    )


__all__ = ["TensorResult", "as_matrix", "fit_tensor", "moment_about"]
