"""The inertia matrix drawn on its axes: the article's frame, the axes that were swung about, the principal axes.

A parallel projection, looking from above and to one side; lengths of principal axes go with √(moment), so that the
three ellipses are sections of the surface n·J·n = const turned inside out: long where the article is hard to turn.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from ..records import Floats
from .look import DATA, FAINT, FIT, INK, THIRD, key, new_figure, plain
from .rounding import show

AZIMUTH, HEIGHT = (
    math.radians(35.0),
    math.radians(24.0),
)  # of the eye; no two axes of the frame then fall together
PRINCIPAL = ((FIT, "-"), (DATA, "--"), (THIRD, ":"))


def axes_figure(result: Any) -> Any:
    """`draw_axes` as a figure of its own."""
    figure = new_figure((5.4, 5.2))
    draw_axes(figure.subplots(), result)
    return figure


def principal_figure(result: Any) -> Any:
    """`draw_principal` as a figure of its own."""
    figure = new_figure((5.4, 2.6))
    draw_principal(figure.subplots(), result)
    return figure


def draw_axes(ax: Any, result: Any) -> Any:
    """Directions in the article's frame, in one picture; all pass through the centre of mass."""
    for name, unit in zip("xyz", np.eye(3), strict=True):
        tip = project(1.18 * unit)
        ax.plot([0.0, tip[0]], [0.0, tip[1]], "-", color=FAINT, lw=1.0)
        ax.annotate(
            name,
            tip,
            xytext=_outward(tip, 8),
            textcoords="offset points",
            ha="center",
            va="center",
            color=INK,
        )
    for number, axis in enumerate(result.axes, start=1):
        direction = np.asarray(axis, dtype=np.float64)
        ends = np.array([project(-0.8 * direction), project(0.8 * direction)])
        ax.plot(
            ends[:, 0],
            ends[:, 1],
            "-",
            color=INK,
            lw=0.7,
            alpha=0.55,
            label="axes swung about" if number == 1 else None,
        )
        ax.annotate(
            str(number),
            ends[1],
            xytext=_outward(ends[1], 6),
            textcoords="offset points",
            ha="center",
            va="center",
            fontsize=8,
            color=INK,
        )
    lengths = _lengths(result.principal)
    vectors = [
        length * np.asarray(axis.direction) for length, axis in zip(lengths, result.principal, strict=True)
    ]
    for (colour, dash), vector, axis in zip(PRINCIPAL, vectors, result.principal, strict=True):
        ends = np.array([project(-vector), project(vector)])
        ax.plot(
            ends[:, 0], ends[:, 1], dash, color=colour, lw=2.6, label=show(axis.moment, "kg m²", k=axis.k)
        )
    turn = np.linspace(0.0, 2.0 * math.pi, 91)
    for i, j in ((0, 1), (1, 2), (0, 2)):
        ring = np.array([project(math.cos(a) * vectors[i] + math.sin(a) * vectors[j]) for a in turn])
        ax.plot(ring[:, 0], ring[:, 1], "-", color=FAINT, lw=0.7)
    ax.set_aspect("equal")
    ax = plain(ax, "directions through the centre of mass, in the article's frame (no unit)", "")
    ax.set_xticks([])
    ax.set_yticks([])
    for side in ("left", "bottom"):
        ax.spines[side].set_visible(False)
    ax.margins(0.08)
    key(ax, loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=2, borderaxespad=0.2)
    return ax


def draw_principal(ax: Any, result: Any) -> Any:
    """The three principal moments with ± U."""
    names = ("smallest", "middle", "largest")
    for place, ((colour, _), axis) in enumerate(zip(PRINCIPAL, result.principal, strict=True)):
        ax.barh([2 - place], [axis.moment.value], height=0.5, color=colour)
        ax.errorbar(
            [axis.moment.value],
            [2 - place],
            xerr=[axis.k * axis.moment.u],
            fmt="none",
            ecolor=INK,
            capsize=4,
            lw=1.4,
        )
    ax.set_yticks([2, 1, 0], names)
    ax.set_xlim(left=0.0)
    return plain(ax, "principal moment, kg m² (± U at about 95 %)", "")


def project(point: Floats) -> Floats:
    """A point (3,) in the article's frame on the page (2,): x to the right and towards the reader, z up."""
    x, y, z = point
    right = -math.sin(AZIMUTH) * x + math.cos(AZIMUTH) * y
    away = math.cos(AZIMUTH) * x + math.sin(AZIMUTH) * y
    return np.array([right, math.cos(HEIGHT) * z - math.sin(HEIGHT) * away])


def _lengths(principal: Any) -> list[float]:
    largest = max(axis.moment.value for axis in principal)
    return [math.sqrt(max(axis.moment.value, 0.0) / largest) if largest > 0.0 else 1.0 for axis in principal]


def _outward(place: Floats, by: float) -> tuple[float, float]:
    size = float(np.hypot(*place)) or 1.0
    return float(by * place[0] / size), float(by * place[1] / size)
