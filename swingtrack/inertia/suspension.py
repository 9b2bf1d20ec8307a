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

    def judge(self, x: Mapping[str, Any], moment: float) -> tuple[Doubt, ...]:
        """What can be said only once the period is known; `x` holds plain numbers, x["period"] among them.

        BadRig where the period contradicts the rig; called before the moment is found to be over zero.
        """
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


def need_dimensions(rig: Rig, *required: str, not_negative: tuple[str, ...] = ()) -> None:
    """BadRig where a dimension that the formula needs is missing, zero, negative or no number.

    The rig file's reader refuses most of this by itself; rigs are made in other ways too.
    """
    given = rig.suspension.dimensions
    for key in required:
        if key not in given:
            raise BadRig(
                f"suspension.{key} is missing.",
                f"Needed: the {key.replace('_', ' ')} of the {rig.suspension.kind} suspension.",
                "docs/files.md lists the keys of each suspension.",
            )
    for key, quantity in given.items():
        where, may_be_zero = f"suspension.{key}", key in not_negative
        _need_sign(quantity, where, may_be_zero=may_be_zero)


def _need_sign(quantity: Quantity, where: str, *, may_be_zero: bool = False) -> None:
    value = quantity.value
    if not (math.isfinite(value) and math.isfinite(quantity.u) and quantity.u >= 0.0):
        raise BadRig(f"{where} = {value:g} ± {quantity.u:g} {quantity.unit}.", "Needed: finite numbers.")
    if value < 0.0 or (value == 0.0 and not may_be_zero):
        raise BadRig(
            f"{where} = {value:g} {quantity.unit} is {'negative' if value < 0.0 else 'zero'}.",
            f"Needed: a value {'of zero or more' if may_be_zero else 'over zero'}.",
            "Check the number and its sign.",
        )


def need_mass(rig: Rig) -> Quantity:
    """Mass of all that hangs there, weights added to the article included; BadRig where the rig gives none."""
    mass = rig.article.mass
    if mass is None:
        raise BadRig(
            "article.mass is missing.",
            "Needed: the mass as a scale reads it.",
            'Write mass = "0.912 kg ± 0.5 g".',
        )
    _need_sign(mass, "article.mass")
    if not rig.article.added:
        return mass
    parts = [mass, *(weight.mass for weight in rig.article.added)]
    u = math.sqrt(math.fsum(part.u**2 for part in parts))
    return Quantity(
        math.fsum(part.value for part in parts), u, "kg", stated=all(part.stated for part in parts)
    )
