"""Stage 1: find the dot, follow it through the clip, locate it to a fraction of a pixel.

`follow_marker` is the door: frames in, a `records.Path` out.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from .settings import MarkerSettings

if TYPE_CHECKING:
    from .stage import follow_marker

__all__ = ["MarkerSettings", "follow_marker"]


def __getattr__(name: str) -> Any:
    # OpenCV takes a quarter of a second to load; only following needs it.
    if name == "follow_marker":
        from .stage import follow_marker

        return follow_marker
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
