"""Stage 3: from the period to the moment of inertia, and from the rig to the law of its swing."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .law import exact_period, small_swing_period, swing_law
    from .moment import SwingFacts, expected_modes, moment_of_inertia
    from .units import MOMENT_UNITS

_HOMES = {
    "swing_law": "law",
    "exact_period": "law",
    "small_swing_period": "law",
    "moment_of_inertia": "moment",
    "expected_modes": "moment",
    "SwingFacts": "moment",
    "MOMENT_UNITS": "units",
}

__all__ = [
    "MOMENT_UNITS",
    "SwingFacts",
    "exact_period",
    "expected_modes",
    "moment_of_inertia",
    "small_swing_period",
    "swing_law",
]


def __getattr__(name: str) -> Any:
    """Load each name's module on first use: GTC and scipy take most of a second."""
    if name in _HOMES:
        return getattr(import_module(f".{_HOMES[name]}", __name__), name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
