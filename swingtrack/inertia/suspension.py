"""What every suspension offers; each kind is one file beside this one.

A suspension is a `Model`: the inputs of its formula as quantities, the formula as plain arithmetic (so that it
takes floats, arrays of draws and GTC's uncertain numbers alike), and its exact dynamics at any amplitude.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any, Protocol

from ..errors import BadRig
from ..records import Doubt, ExpectedMode, Floats, Quantity, Rig


@dataclass(frozen=True, eq=False)
class Dynamics:
    """Exact free motion of a suspension: v(q), m(q) as in `records.SwingLaw`, valid for |q| < q_limit_rad."""

    potential: Callable[[Floats], Floats]
    inertia: Callable[[Floats], Floats]
    q_limit_rad: float


class Model(Protocol):
    """One kind of suspension."""

    about: str

    def inputs(self, rig: Rig) -> dict[str, Quantity]:
        """The quantities that enter the formula, but for the period, by their names in the budget."""
        ...

    def check(self, rig: Rig) -> tuple[Doubt, ...]:
        """BadRig for what cannot hang like this; doubts for what is plausible but dubious."""
        ...

    def moment(self, x: Mapping[str, Any]) -> Any:
        """Moment of inertia, kg m², from the inputs and x["period"], by the small-swing formula."""
        ...

    def period(self, x: Mapping[str, Any], moment: float) -> float:
        """Small-swing period, s, of a given moment of inertia: the inverse of `moment`."""
        ...

    def dynamics(self, rig: Rig, moment: float | None) -> Dynamics:
        """Exact dynamics; without a moment the bounce of the article is left out."""
        ...

    def modes(self, rig: Rig) -> tuple[ExpectedMode, ...]:
        """Other motions that the rig predicts."""
        ...


def model_of(kind: str) -> Model:
    """The model of a suspension kind as named in the rig file."""
    from .bifilar import BIFILAR
    from .circle import CIRCLE
    from .knife_edge import KNIFE_EDGE
    from .torsion_wire import TORSION_WIRE
    from .two_edge import TWO_EDGE

    models: dict[str, Model] = {
        "bifilar": BIFILAR,
        "trifilar": CIRCLE,
        "torsion-wire": TORSION_WIRE,
        "knife-edge": KNIFE_EDGE,
        "two-edge": TWO_EDGE,
    }
    if kind not in models:
        raise BadRig(f"A suspension of kind {kind!r} is not known.", f"Needed: one of {', '.join(models)}.")
    return models[kind]


def need_mass(rig: Rig) -> Quantity:
    """Mass of all that hangs there, weights added to the article included; BadRig where the rig gives none."""
    mass = rig.article.mass
    if mass is None:
        raise BadRig(
            "article.mass is missing.",
            "Needed: the mass as a scale reads it.",
            'Write mass = "0.912 kg ± 0.5 g".',
        )
    if not rig.article.added:
        return mass
    parts = [mass, *(weight.mass for weight in rig.article.added)]
    u = math.sqrt(math.fsum(part.u**2 for part in parts))
    return Quantity(
        math.fsum(part.value for part in parts), u, "kg", stated=all(part.stated for part in parts)
    )
