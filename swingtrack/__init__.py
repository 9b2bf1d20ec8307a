"""Moment of inertia, period and damping of a hanging article from a clip of its swing.

>>> import swingtrack
>>> sorted(swingtrack.__all__)[:4]
['Measurement', 'Quantity', 'Rig', 'combine']
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .api import combine, fit, follow, inertia, measure, read_rig, stopwatch
    from .records import Measurement, Quantity, Rig

_HOMES = {
    "Measurement": "records",
    "Quantity": "records",
    "Rig": "records",
    "combine": "api",
    "fit": "api",
    "follow": "api",
    "inertia": "api",
    "measure": "api",
    "read_rig": "api",
    "stopwatch": "api",
}

__all__ = [
    "Measurement",
    "Quantity",
    "Rig",
    "combine",
    "fit",
    "follow",
    "inertia",
    "measure",
    "read_rig",
    "stopwatch",
]


def __getattr__(name: str) -> Any:
    """Load each name's module on first use, so that importing the package costs nothing."""
    if name in _HOMES:
        value = getattr(import_module(f".{_HOMES[name]}", __name__), name)
        globals()[name] = value  # a submodule of the same name must not take its place later
        return value
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
