"""What a user may ask of the fit; everything has a default."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class FitSettings:
    """Choices for `fit_swing`.

    Parameters
    ----------
    from_s, to_s : float or None
        Look only at this part of the record; times as in the input.
    damping : tuple of "viscous", "quadratic", "dry", or None
        Terms to fit; None chooses them by evidence.
    most_modes : int
        Other modes looked for at most.
    trim : bool
        Find the held, released and disturbed parts and leave them out.
    outlier_limit : float
        Residuals beyond this many robust standard deviations are set aside as bad frames.
    view_shape : bool
        Let the camera's skew bend the waveform (q² and q³ terms) where the clip shows it.
    mend_times : bool
        Where the swing itself jumps by whole frames, move the later times accordingly. By default the file's times
        stand, and what mending would change is in the uncertainty and said.
    """

    from_s: float | None = None
    to_s: float | None = None
    damping: tuple[str, ...] | None = None
    most_modes: int = 3
    trim: bool = True
    outlier_limit: float = 5.0
    view_shape: bool = True
    mend_times: bool = False
