"""How and where the article hangs: from rig.py to inertia/."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from .basic import Quantity
from .path import View


@dataclass(frozen=True)
class AddedWeight:
    """A weight fixed to the article for the added-weights method."""

    mass: Quantity
    distance: Quantity  # from the swing axis to the weight's centre of mass
    own_moment: Quantity | None = None  # about its own centre of mass, axis parallel to the swing axis


@dataclass(frozen=True)
class Article:
    """What hangs there. `axis` is the swing axis in the article's own frame (unit vector), for the tensor."""

    name: str
    mass: Quantity | None
    axis: tuple[float, float, float] | None = None
    expected_moment: Quantity | None = None  # known or computed beforehand, kg m^2
    added: tuple[AddedWeight, ...] = ()


@dataclass(frozen=True)
class Suspension:
    """How it hangs: the kind and its dimensions by their rig-file key, in SI.

    `lower_spacing` is absent where the user left it out: it then is one and the same measured number as
    `upper_spacing`.
    """

    kind: str
    dimensions: Mapping[str, Quantity]
    strings: int = 2
    string_material: str | None = None


@dataclass(frozen=True)
class Air:
    """The shape by which the surrounding air is carried along; see inertia/corrections."""

    shape: str
    dimensions: Mapping[str, Quantity] = field(default_factory=dict)
    density: Quantity | None = None
    face: str | None = None  # "broadside" | "edgewise"


@dataclass(frozen=True)
class Rig:
    """Everything the user said of the bench. `gravity` None: a mean gravity with its whole range on Earth.

    `source` is the rig file as read (plain dict), kept in the result so that it can be made again.
    """

    article: Article
    suspension: Suspension
    gravity: Quantity | None = None
    latitude: Quantity | None = None  # rad
    altitude: Quantity | None = None  # m
    view: View = field(default_factory=View)
    air: Air | None = None
    source: Mapping[str, Any] = field(default_factory=dict)
