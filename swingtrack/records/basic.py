"""Numbers with uncertainties, and doubts."""

from __future__ import annotations

import math
from dataclasses import dataclass


@dataclass(frozen=True)
class Quantity:
    """One measured number.

    Parameters
    ----------
    value : float
        In `unit`, an SI unit (pixels for image quantities).
    u : float
        Standard uncertainty, same unit, >= 0.
    unit : str
        SI spelling: "s", "1/s", "kg", "m", "kg m^2", "rad", "1", "px".
    dof : float
        Degrees of freedom of `u`; infinite where `u` is not estimated from a sample.
    shape : str
        Distribution of the doubt: "normal" or "rectangular" (limits, half-width u·√3).
    stated : bool
        False where the user gave no ± and half a unit of the last digit was assumed.
    text : str
        As the user typed it; "" where it was computed.
    """

    value: float
    u: float
    unit: str
    dof: float = math.inf
    shape: str = "normal"
    stated: bool = True
    text: str = ""

    @property
    def relative_u(self) -> float:
        """u / |value|; infinite for a value of zero."""
        return self.u / abs(self.value) if self.value else math.inf


@dataclass(frozen=True)
class Doubt:
    """One reason to doubt a result: a stable kebab-case code, what was seen, what to do about it."""

    code: str
    message: str
    advice: str
