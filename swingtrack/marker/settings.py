"""What the user may ask of the marker stage."""

from __future__ import annotations

from dataclasses import dataclass

from ..errors import BadInput


@dataclass(frozen=True)
class MarkerSettings:
    """Which dot to follow, and through which part of the clip.

    Parameters
    ----------
    dot : (x, y) or None
        Where the dot is, pixels of the upright picture in the first frame used; None: find it.
    dots : int
        1 or 2 dots to follow.
    choose : int or None
        Take the candidate with this number (from 1) instead of the best.
    from_s, to_s : float or None
        Part of the clip to use, seconds from its first frame.
    readout_ms : float or None
        Time the sensor takes from its first row to its last (rolling shutter); None: unknown.
    steady : bool
        False: leave camera shake in, even where a fixed spot shows it.
    """

    dot: tuple[float, float] | None = None
    dots: int = 1
    choose: int | None = None
    from_s: float | None = None
    to_s: float | None = None
    readout_ms: float | None = None
    steady: bool = True

    def __post_init__(self) -> None:
        if self.dots not in (1, 2):
            raise BadInput(
                f"{self.dots} dots were asked for.",
                "One or two can be followed.",
                "Use --dots 1 or --dots 2.",
            )
        if self.dot is not None and self.choose is not None:
            raise BadInput(
                "Both a place and a number were given for the dot.",
                "One of them is needed.",
                "Leave out --dot or --choose.",
            )
        if self.choose is not None and self.choose < 1:
            raise BadInput(
                f"Candidate {self.choose} was asked for.",
                "Candidates count from 1.",
                "Use --choose 1 or above.",
            )
        if self.readout_ms is not None and not 0 <= self.readout_ms <= 100:
            raise BadInput(
                f"A readout time of {self.readout_ms:g} ms was given.",
                "A sensor's readout takes 0 to 100 ms; phones take 5 to 35 ms.",
                "Give the time from the first row to the last in milliseconds.",
            )
        if self.from_s is not None and self.to_s is not None and self.from_s >= self.to_s:
            raise BadInput(
                f"The part from {self.from_s:g} s to {self.to_s:g} s is empty.",
                "The start must lie before the end.",
                "Swap --from and --to.",
            )
