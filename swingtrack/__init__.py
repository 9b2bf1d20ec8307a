"""Moment of inertia, period and damping of a hanging article from a clip of its swing.

>>> import swingtrack
>>> swingtrack.__all__[3]
'combine_results'
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .api import (
        combine_results,
        fit_series,
        follow_clip,
        judge_trials,
        measure_clip,
        moment_from_period,
        read_rig,
    )
    from .records import Measurement, Quantity, Rig

_HOMES = {
    "Measurement": "records",
    "Quantity": "records",
    "Rig": "records",
    "combine_results": "api",
    "fit_series": "api",
    "follow_clip": "api",
    "judge_trials": "api",
    "measure_clip": "api",
    "moment_from_period": "api",
    "read_rig": "api",
}

__all__ = [
    "Measurement",
    "Quantity",
    "Rig",
    "combine_results",
    "fit_series",
    "follow_clip",
    "judge_trials",
    "measure_clip",
    "moment_from_period",
    "read_rig",
]


def __getattr__(name: str) -> Any:
    """Load each name's module on first use, so that importing the package costs nothing."""
    if name in _HOMES:
        return getattr(import_module(f".{_HOMES[name]}", __name__), name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
