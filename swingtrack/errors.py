"""The error tree.

SwingtrackError            anything this package raises on purpose
├── BadInput (ValueError)  the user can mend it: wrong use, a file that is not what it should be
│   ├── BadClip            a video that can't be read or whose times can't be known
│   ├── BadRig             a rig, goal or parts file with a key missing, wrong or impossible
│   ├── BadSeries          a CSV of a path, a series or trials that can't be used
│   └── WouldOverwrite     the output is there already and was not asked to be replaced
├── NothingToMeasure       the input is sound, but there is no dot or no swing in it
└── Doubtful               strict mode only: measured, but with warnings; carries the result

Every message has three parts: what was found, what is needed, what to try.
"""

from __future__ import annotations

from typing import Any


class SwingtrackError(Exception):
    """Base of all errors raised on purpose, with the exit status that the command line gives it.

    Parameters
    ----------
    found, needed, try_this : str
        The three parts of the message: what was found (with the number, the frame or the time), what is
        needed, what to try. `str()` of the error joins them.
    """

    exit_status = 1

    def __init__(self, found: str, needed: str = "", try_this: str = "") -> None:
        self.found = found
        self.needed = needed
        self.try_this = try_this
        super().__init__(found, needed, try_this)

    def __str__(self) -> str:
        return " ".join(part for part in (self.found, self.needed, self.try_this) if part)


class BadInput(SwingtrackError, ValueError):
    """Wrong use or input that the user can mend."""

    exit_status = 2


class BadClip(BadInput):
    """A video that can't be read, or whose frame times can't be known."""


class BadRig(BadInput):
    """A rig, goal or parts file with a key that is missing, wrong or physically impossible."""


class BadSeries(BadInput):
    """A path, series or trial sheet that can't be used."""


class WouldOverwrite(BadInput):
    """Output that exists already and was not asked to be replaced."""


class NothingToMeasure(SwingtrackError):
    """Sound input with no dot to be found or no swing in it."""

    exit_status = 3


class Doubtful(SwingtrackError):
    """Raised in strict mode for a result with warnings; `result` holds it."""

    exit_status = 4

    def __init__(self, found: str, needed: str = "", try_this: str = "", *, result: Any = None) -> None:
        super().__init__(found, needed, try_this)
        self.result = result
