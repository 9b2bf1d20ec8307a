"""What is known beforehand of how the period grows with the amplitude, where no rig says it."""

from __future__ import annotations

from swingtrack.records import SwingLaw
from swingtrack.signal.coordinate import Coordinate
from swingtrack.signal.model import Prior
from swingtrack.signal.restoring import is_isochronous

# T/T0 − 1 = Λ A²/16: a torsion wire has Λ = 0, a pendulum 1, strings on widely spaced points with a compact article
# up to 2.3 and in the extreme 3 (references.md section 4, cases G1 to G8: 0.96 to 3.0). Centre and standard
# uncertainty that cover that range.
SHAPE_CENTRE, SHAPE_U = 1.0, 0.7
# Where the amplitude is unknown: half-swings up to some 25° are usual, so the period may be longer than that of small
# swings by Λ A²/16 = 0.0625 · 0.44² = 1.2 %; taken as limits, about none (judgment).
UNKNOWN_SHIFT_U = 0.012 / 3**0.5


def shape_prior(
    coordinate: Coordinate, law: SwingLaw | None, used_law: SwingLaw | None, amplitude: float
) -> Prior | None:
    """Prior for the shape Λ; None where the suspension's own law is used."""
    if used_law is not None:
        return None
    if law is not None and is_isochronous(law):
        return Prior(0.0, 1e-12)
    if coordinate.amplitude_known:
        return Prior(SHAPE_CENTRE, SHAPE_U)
    return Prior(0.0, 16 * UNKNOWN_SHIFT_U / amplitude**2)
