"""Reading clips: frames with their true times, and what the file says of itself."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .reader import Clip, open_clip

__all__ = ["Clip", "open_clip"]


def __getattr__(name: str) -> Any:
    if name in ("Clip", "open_clip"):
        from . import reader

        return getattr(reader, name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
