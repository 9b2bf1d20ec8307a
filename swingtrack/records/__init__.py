"""The hand-offs between the stages: frozen records, SI units, radians.

    frames ──► Path ──► Swing ──► Inertia ──► report
               marker/  signal/   inertia/

`measure.py` is the only place where stages meet; they know one another by these records alone. What stage 2
needs of stage 3 (how the period grows with amplitude in this suspension) travels as a `SwingLaw`.

Arrays are float64 unless said otherwise. Records with arrays compare by identity (`eq=False`): `==` on arrays
has no single truth value.
"""

from __future__ import annotations

from .arrays import Bools, Floats
from .basic import Doubt, Quantity
from .frames import ClipFacts, Frame, FrameSource
from .inertia import BudgetLine, Correction, Inertia, MonteCarlo
from .path import Candidate, ExpectedMode, MarkerFacts, Path, Series, SwingLaw, Track, View
from .rig import AddedWeight, Air, Article, Rig, Suspension
from .stopwatch import AgainstClip, Measurement, Stopwatch, Trial
from .swing import DampingTerm, Mode, Swing, SwingTrace

__all__ = [
    "AddedWeight",
    "AgainstClip",
    "Air",
    "Article",
    "Bools",
    "BudgetLine",
    "Candidate",
    "ClipFacts",
    "Correction",
    "DampingTerm",
    "Doubt",
    "ExpectedMode",
    "Floats",
    "Frame",
    "FrameSource",
    "Inertia",
    "MarkerFacts",
    "Measurement",
    "Mode",
    "MonteCarlo",
    "Path",
    "Quantity",
    "Rig",
    "Series",
    "Stopwatch",
    "Suspension",
    "Swing",
    "SwingLaw",
    "SwingTrace",
    "Track",
    "Trial",
    "View",
]
