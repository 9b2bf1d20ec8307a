"""An expected and a measured number side by side: the normalised error E_n."""

from __future__ import annotations

import math

from ..errors import BadInput
from ..records import Quantity
from .budget import coverage_factor
from .solids_result import Comparison

AGREES = 1.0  # |E_n| up to which two results agree (ISO/IEC 17043)


def compare(what: str, measured: Quantity, expected: Quantity) -> Comparison:
    """E_n of a measured number against what the solids add up to, each with its own factor k for about 95 %."""
    wide = [coverage_factor(quantity.dof) * quantity.u for quantity in (measured, expected)]
    e_n = normalised_error(measured.value, wide[0], expected.value, wide[1])
    return Comparison(what, expected, measured, e_n, abs(e_n) <= AGREES)


def normalised_error(x: float, expanded_x: float, reference: float, expanded_reference: float) -> float:
    """E_n = (x − X)/√(U² + U_ref²); |E_n| <= 1 is satisfactory (ISO/IEC 17043).

    Parameters
    ----------
    x, expanded_x : float
        A result and its expanded uncertainty (about 95 %).
    reference, expanded_reference : float

    Examples
    --------
    >>> round(normalised_error(10.3, 0.3, 10.0, 0.4), 6)
    0.6
    """
    both = math.hypot(expanded_x, expanded_reference)
    if not (math.isfinite(both) and both > 0.0):
        raise BadInput(
            "Both numbers were given without uncertainty.",
            "Needed: an expanded uncertainty of at least one.",
            "Write it behind ±.",
        )
    return (x - reference) / both
