"""Simulated swings and drawn clips with known truth, to try before filming; the tests use it too."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .mechanism import mechanism_of
    from .motion import Damping, SwingTruth, simulate_swing
    from .random_scenes import RandomScene, random_scene
    from .rehearsal import Truth, rehearse_clip
    from .settings import Film, RehearsalSettings, Roll, Stage, Sway

_HOMES = {
    "Damping": "motion",
    "Film": "settings",
    "RandomScene": "random_scenes",
    "RehearsalSettings": "settings",
    "Roll": "settings",
    "Stage": "settings",
    "Sway": "settings",
    "SwingTruth": "motion",
    "Truth": "rehearsal",
    "mechanism_of": "mechanism",
    "random_scene": "random_scenes",
    "rehearse_clip": "rehearsal",
    "simulate_swing": "motion",
}

__all__ = [
    "Damping",
    "Film",
    "RandomScene",
    "RehearsalSettings",
    "Roll",
    "Stage",
    "Sway",
    "SwingTruth",
    "Truth",
    "mechanism_of",
    "random_scene",
    "rehearse_clip",
    "simulate_swing",
]


def __getattr__(name: str) -> Any:
    """Load each name's module on first use."""
    if name in _HOMES:
        return getattr(import_module(f".{_HOMES[name]}", __name__), name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
