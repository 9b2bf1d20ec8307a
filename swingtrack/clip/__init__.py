"""Reading clips: frames with their true times, and what the file says of itself."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .marked import write_marked_clip
    from .reader import Clip, open_clip
    from .still import draw_still, encode_png

_HOMES = {
    "Clip": "reader",
    "open_clip": "reader",
    "draw_still": "still",
    "encode_png": "still",
    "write_marked_clip": "marked",
}

__all__ = ["Clip", "draw_still", "encode_png", "open_clip", "write_marked_clip"]


def __getattr__(name: str) -> Any:
    """Load each name's module on first use."""
    if name in _HOMES:
        return getattr(import_module(f".{_HOMES[name]}", __name__), name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
