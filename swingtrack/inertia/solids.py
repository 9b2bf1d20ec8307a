"""Expected moment of inertia and centre of mass of an article put together from simple solids.

`read_parts` (solids_file) makes an `Assembly` of a TOML file; `assemble` works it out: every part's mass, first and second
moments about the origin are summed, and moved to the centre of mass.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

import numpy as np

from ..errors import BadRig
from ..records import BudgetLine, Doubt, Floats, Quantity
from .budget import coverage_factor
from .combine_adjust import COMPLEX_STEP, budget_lines, effective_dof
from .combine_draws import judge_draws
from .monte_carlo import SEED, draw
from .solids_compare import compare
from .solids_parts import Assembly, Axis
from .solids_result import Comparison, SolidLine, SolidResult
from .solids_sum import Amounts, amounts_of, centre_of

DRAWS = 20_000  # ends of a 95 % interval to about 2 % of u


def assemble(assembly: Assembly) -> SolidResult:
    """Mass, centre of mass, inertia matrix and moment about an axis, with uncertainties.

    Each part gives its mass m, m r and J₀ = R diag(Iₓ, I_y, I_z) Rᵀ + m (r² 1 − r rᵀ) about the origin, with R its turns and
    r its centre of mass; holes count negative. With the sums: c = Σ m r/M, J = ΣJ₀ − M (c² 1 − c cᵀ). Uncertainties
    by the law of propagation with derivatives by complex step; Monte Carlo of the moment beside it. A density that
    several parts share is one input.

    Raises
    ------
    BadRig
        A part without mass, density or material, holes that outweigh the rest, a hole in a part that is not there.
    """
    amounts = amounts_of(assembly.parts)
    sums, slopes = _sums(amounts)
    if not sums[0] > 0.0:
        raise BadRig(
            f"The parts add up to a mass of {sums[0]:.4g} kg.",
            "Needed: more matter than holes.",
            "Check the dimensions of the holes.",
        )
    outputs = _outputs(list(sums), assembly.axis)
    chain = _slopes_of_outputs(sums, assembly.axis) @ slopes
    found = [
        _quantity(amounts, value, slope, unit) for (value, unit), slope in zip(outputs, chain, strict=True)
    ]
    mass, centre, elements, (moment, lines) = found[0][0], found[1:4], found[4:10], found[10]
    xx, yy, zz, yz, xz, xy = (element for element, _ in elements)
    matrix = ((xx, xy, xz), (xy, yy, yz), (xz, yz, zz))
    drawn = _draw_moment(amounts, assembly.axis)
    k = coverage_factor(moment.dof)
    return SolidResult(
        name=assembly.name,
        mass=mass,
        centre=tuple(place for place, _ in centre),
        matrix=matrix,
        moment=moment,
        k=k,
        about=_about(assembly.axis),
        budget=lines,
        principal=_principal(matrix),
        parts=_table(amounts, assembly.axis, sums),
        monte_carlo=judge_draws(drawn, moment),
        comparisons=_comparisons(assembly, moment, mass),
        doubts=_doubts(amounts, matrix),
    )


def _sums(amounts: Amounts) -> tuple[Floats, Floats]:
    """Sums (10,) of mass, m r and J₀ over the parts, and their slopes (10, n) with respect to all inputs.

    Each part is stepped in its own inputs alone, so that the work grows with the number of parts and not its square.
    """
    names = {name: column for column, name in enumerate(amounts.inputs)}
    plain = {name: quantity.value for name, quantity in amounts.inputs.items()}
    sums, slopes = np.zeros(10), np.zeros((10, len(names)))
    for index, own in enumerate(amounts.names):
        x: dict[str, Any] = {name: plain[name] + np.zeros(len(own) + 1, dtype=complex) for name in own}
        for column, name in enumerate(own):
            x[name][column] += 1j * COMPLEX_STEP
        for row, value in enumerate(amounts.part(index, x)):
            spread = np.broadcast_to(np.asarray(value, dtype=complex), (len(own) + 1,))
            sums[row] += spread[-1].real
            for column, name in enumerate(own):
                slopes[row, names[name]] += spread[column].imag / COMPLEX_STEP
    return sums, slopes


def _outputs(sums: Sequence[Any], axis: Axis) -> list[tuple[Any, str]]:
    """Mass, centre (3), matrix about the centre (6), moment about the axis; each with its unit."""
    mass = sums[0]
    c = [first / mass for first in sums[1:4]]
    moved = [second - mass * term for second, term in zip(sums[4:10], _steiner(c), strict=True)]
    n = np.asarray(axis.direction) / np.linalg.norm(axis.direction)
    row = [n[0] ** 2, n[1] ** 2, n[2] ** 2, 2 * n[1] * n[2], 2 * n[0] * n[2], 2 * n[0] * n[1]]
    moment = sum(weight * element for weight, element in zip(row, moved, strict=True))
    if axis.through is not None:
        off = [centre - point.value for centre, point in zip(c, axis.through, strict=True)]
        along = sum(part * direction for part, direction in zip(off, n, strict=True))
        moment = moment + mass * (sum(part * part for part in off) - along * along)
    units = ["kg", *["m"] * 3, *["kg m^2"] * 7]
    return list(zip([mass, *c, *moved, moment], units, strict=True))


def _steiner(r: Sequence[Any]) -> list[Any]:
    """r² 1 − r rᵀ in xx, yy, zz, yz, xz, xy."""
    x, y, z = r
    return [y * y + z * z, x * x + z * z, x * x + y * y, -y * z, -x * z, -x * y]


def _slopes_of_outputs(sums: Floats, axis: Axis) -> Floats:
    stepped = sums[:, None] + 1j * COMPLEX_STEP * np.eye(len(sums))
    rows = [value for value, _ in _outputs(list(stepped), axis)]
    return np.array([np.imag(row) / COMPLEX_STEP for row in rows])


def _quantity(
    amounts: Amounts, value: Any, slopes: Floats, unit: str
) -> tuple[Quantity, tuple[BudgetLine, ...]]:
    lines = budget_lines(amounts.inputs, slopes)
    u = math.sqrt(math.fsum(line.contribution**2 for line in lines))
    doubtful = tuple(
        line for line in lines if line.u > 0.0
    )  # places left out are exact, and no part of a budget
    return Quantity(float(np.real(value)), u, unit, dof=effective_dof(lines, u)), doubtful


def _draw_moment(amounts: Amounts, axis: Axis) -> Floats:
    rng = np.random.default_rng(SEED)
    x = {name: draw(quantity, DRAWS, rng) for name, quantity in amounts.inputs.items()}
    sums = [np.zeros(DRAWS) for _ in range(10)]
    for index in range(len(amounts.parts)):
        sums = [total + value for total, value in zip(sums, amounts.part(index, x), strict=True)]
    return np.asarray(_outputs(sums, axis)[10][0], dtype=np.float64)


def _about(axis: Axis) -> str:
    direction = ", ".join(f"{part:g}" for part in axis.direction)
    if axis.through is None:
        return f"axis ({direction}) through the centre of mass"
    return f"axis ({direction}) through ({', '.join(f'{q.value:g} m' for q in axis.through)})"


def _principal(matrix: Sequence[Sequence[Quantity]]) -> tuple[tuple[float, tuple[float, float, float]], ...]:
    moments, vectors = np.linalg.eigh(np.array([[q.value for q in row] for row in matrix]))
    found = []
    for moment, vector in zip(moments, vectors.T, strict=True):
        x, y, z = (vector * (1.0 if vector[int(np.argmax(np.abs(vector)))] >= 0.0 else -1.0)).tolist()
        found.append((float(moment), (float(x), float(y), float(z))))
    return tuple(found)


def _table(amounts: Amounts, axis: Axis, sums: Floats) -> tuple[SolidLine, ...]:
    """Each part's share of the moment about the axis asked for, its own centre of mass off that axis included."""
    plain = {name: quantity.value for name, quantity in amounts.inputs.items()}
    centre = sums[1:4] / sums[0]
    n = np.asarray(axis.direction) / np.linalg.norm(axis.direction)
    point = centre if axis.through is None else np.array([q.value for q in axis.through])
    whole = float(np.real(_outputs(list(sums), axis)[10][0]))
    lines = []
    for index, part in enumerate(amounts.parts):
        m, *rest = (float(value) for value in amounts.part(index, plain))
        first, second = np.array(rest[:3]), np.array(rest[3:])
        xx, yy, zz, yz, xz, xy = second
        about_origin = np.array([[xx, xy, xz], [xy, yy, yz], [xz, yz, zz]])
        # J about a point p: J₀ − 2 (p·S) 1 + p Sᵀ + S pᵀ + m (p² 1 − p pᵀ), S = m r
        moved = (
            about_origin
            + (m * point @ point - 2.0 * point @ first) * np.eye(3)
            + np.outer(point, first)
            + np.outer(first, point)
            - m * np.outer(point, point)
        )
        moment = float(n @ moved @ n)
        x, y, z = centre_of(amounts, index)
        lines.append(
            SolidLine(part.name, part.kind, amounts.mass_quantity(index), (x, y, z), moment, moment / whole)
        )
    return tuple(lines)


def _comparisons(assembly: Assembly, moment: Quantity, mass: Quantity) -> tuple[Comparison, ...]:
    found = []
    for what, expected, measured in (
        ("moment", moment, assembly.measured_moment),
        ("mass", mass, assembly.measured_mass),
    ):
        if measured is not None:
            found.append(compare(what, measured, expected))
    return tuple(found)


def _doubts(amounts: Amounts, matrix: Sequence[Sequence[Quantity]]) -> tuple[Doubt, ...]:
    doubts = []
    moments = [moment for moment, _ in _principal(matrix)]
    if moments[0] < -1e-12 * moments[2] or moments[0] + moments[1] < moments[2] * (1.0 - 1e-9):
        doubts.append(
            Doubt(
                "solids-unphysical",
                "The parts add up to an inertia matrix that no body has: a hole lies outside the matter that it was made in.",
                "Check where the holes are placed, and their dimensions.",
            )
        )
    if amounts.assumed:
        doubts.append(
            Doubt(
                "uncertainty-assumed",
                f"No ± was given for {len(amounts.assumed)} inputs ({', '.join(amounts.assumed[:4])}"
                f"{' …' if len(amounts.assumed) > 4 else ''}): half a unit of the last digit was taken.",
                "Write what your caliper or scale can really do, such as ± 0.5 mm.",
            )
        )
    return tuple(doubts)
