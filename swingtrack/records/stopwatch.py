"""Hand-timed runs, and all that one measurement found."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from .basic import Doubt, Quantity
from .inertia import Inertia
from .path import Path
from .rig import Rig
from .swing import Swing


@dataclass(frozen=True)
class Trial:
    """One hand-timed run. `verdict`: "ok", "miscount" or "outlier"; `swings_that_fit` where another fits."""

    swings: int
    seconds: float
    period_s: float
    verdict: str
    swings_that_fit: int | None = None
    start_s: float | None = None


@dataclass(frozen=True)
class AgainstClip:
    """Stopwatch runs beside a clip: normalised error E_n, bias of the hand in seconds a run, verdict."""

    normalised_error: float
    bias_s: Quantity | None
    verdict: str
    factor: int | None = None  # 2, 4 or 8 where the two differ by that


@dataclass(frozen=True)
class Stopwatch:
    """What the hand-timed runs say of the period."""

    period: Quantity
    trials: tuple[Trial, ...]
    scatter_s: float
    method: str  # "mean" | "line"
    offset: Quantity | None
    further_trials_for_target: int | None
    against_clip: AgainstClip | None = None
    doubts: tuple[Doubt, ...] = ()


@dataclass(frozen=True, eq=False)
class Measurement:
    """All that one `measure` run found, for report/ and files.py."""

    path: Path | None
    swing: Swing | None
    inertia: Inertia | None
    stopwatch: Stopwatch | None
    rig: Rig | None
    inputs: Mapping[str, Any]
    doubts: tuple[Doubt, ...] = ()
