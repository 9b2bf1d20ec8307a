"""Stage 2: from a dot's path, or any series, to the swing's period and damping."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from swingtrack.signal.fit import fit_swing
    from swingtrack.signal.settings import FitSettings

__all__ = ["FitSettings", "fit_swing"]


def __getattr__(name: str) -> Any:
    """Load the doors on first use."""
    if name == "fit_swing":
        from swingtrack.signal.fit import fit_swing

        return fit_swing
    if name == "FitSettings":
        from swingtrack.signal.settings import FitSettings

        return FitSettings
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
