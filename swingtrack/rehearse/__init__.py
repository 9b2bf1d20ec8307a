"""Simulated swings and drawn clips with known truth, to try before filming; the tests use it too."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .motion import Damping, mechanism_of, simulate_swing
    from .rehearsal import Truth, rehearse_clip
    from .settings import Film, RehearsalSettings, Stage, Sway

_HOMES = {
    "Damping": "motion",
    "mechanism_of": "motion",
    "simulate_swing": "motion",
    "Truth": "rehearsal",
    "rehearse_clip": "rehearsal",
    "Film": "settings",
    "RehearsalSettings": "settings",
    "Stage": "settings",
    "Sway": "settings",
}

__all__ = [
    "Damping",
    "Film",
    "RehearsalSettings",
    "Stage",
    "Sway",
    "Truth",
    "mechanism_of",
    "rehearse_clip",
    "simulate_swing",
]


def __getattr__(name: str) -> Any:
    """Load each name's module on first use."""
    if name in _HOMES:
        return getattr(import_module(f".{_HOMES[name]}", __name__), name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
