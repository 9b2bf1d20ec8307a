"""What is taken as known before the fit: the suspension's law, the angle's scale, and what may vary how far.

The period of a swing of amplitude A is longer than that of small swings, so whatever leaves A or the law of growth open
leaves the period open too. Each such doubt is a parameter with what is known of it; where the clip itself tells more
(the period changes as the swing dies down, the waveform bends), the fit takes it from there.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from swingtrack.records import Doubt, SwingLaw
from swingtrack.signal.coordinate import Coordinate
from swingtrack.signal.model import Prior
from swingtrack.signal.restoring import FromLaw, PendulumLike, Restoring, is_isochronous

# T/T0 − 1 = Λ A²/16: a torsion wire has Λ = 0, a pendulum 1, strings on widely spaced points with a compact article
# up to 2.3 and in the extreme 3 (energy integrals of eight bifilar geometries: 0.96 to 3.0). Centre and standard
# uncertainty that cover that range.
SHAPE_CENTRE, SHAPE_U = 1.0, 0.7
# Where neither amplitude nor law is known: half-swings up to some 25° are usual, so the period may be longer than that
# of small swings by Λ A²/16 = 0.0625 · 0.44² = 1.2 %; taken as limits, about none (judgment).
UNKNOWN_SHIFT_U = 0.012 / 3**0.5
# Where the law is known and the amplitude is not: half-swing in rad that people start with (judgment).
AMPLITUDE_CENTRE, AMPLITUDE_U = 0.2, 0.15
# A law's series are carried on by no more than this beyond the angle that they were made for.
BEYOND = 1.1
# Shapes and amplitudes tried for the start; the local phases choose.
SHAPES_TRIED = (0.0, 0.5, 1.0, 1.5, 2.5)
AMPLITUDES_TRIED = (0.03, 0.1, 0.2, 0.35, 0.5, 0.75, 1.0)


@dataclass(frozen=True, eq=False)
class Knowledge:
    """What the fit starts from.

    Parameters
    ----------
    restoring : Restoring
    law : SwingLaw or None
        The law in use; None where the growth of the period is open.
    priors : mapping of parameter names
    free : names that are free from the start, beside amplitude, phase, period, damping and rest
    sine : bool
        Fit y = R sin q.
    doubts : what had to be given up
    """

    restoring: Restoring
    law: SwingLaw | None
    priors: dict[str, Prior]
    free: tuple[str, ...]
    sine: bool
    doubts: tuple[Doubt, ...] = ()

    @property
    def amplitude_open(self) -> bool:
        """Whether the amplitude is a guess that the clip has to mend."""
        return "amplitude" in self.priors


def gather(coordinate: Coordinate, law: SwingLaw | None, reach: float) -> Knowledge:
    """What is known of a coordinate whose amplitude is `reach` (in its own unit; sine: in rad)."""
    doubts: tuple[Doubt, ...] = ()
    if law is not None and coordinate.amplitude_known and reach > BEYOND * law.q_max_rad:
        doubts = (
            Doubt(
                "amplitude-beyond-law",
                f"The swing reaches {np.degrees(reach):.0f}°, the rig's law only {np.degrees(law.q_max_rad):.0f}°; "
                "the growth of the period was taken from the clip alone.",
                "Use the part of the clip with smaller swings (--from).",
            ),
        )
        law = None
    if law is not None and is_isochronous(law):
        return Knowledge(PendulumLike(), law, {}, (), coordinate.sine)
    if law is None:
        if coordinate.amplitude_known:
            prior = Prior(SHAPE_CENTRE, SHAPE_U)
        else:
            prior = Prior(0.0, 16 * UNKNOWN_SHIFT_U / reach**2)
        return Knowledge(PendulumLike(), None, {"shape": prior}, ("shape",), coordinate.sine, doubts)
    if not coordinate.amplitude_known:
        guess = Prior(AMPLITUDE_CENTRE, AMPLITUDE_U)
        return Knowledge(FromLaw(law), law, {"amplitude": guess}, ("radius",), coordinate.camera == "side")
    if coordinate.amplitude_relative_u > 0:
        scale = coordinate.radius_px if coordinate.sine and coordinate.radius_px else 1.0
        prior = Prior(scale, scale * coordinate.amplitude_relative_u)
        return Knowledge(FromLaw(law), law, {"radius": prior}, ("radius",), coordinate.sine)
    return Knowledge(FromLaw(law), law, {}, (), coordinate.sine)
