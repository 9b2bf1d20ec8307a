"""The hand-offs between the stages: frozen records, SI units, radians.

    frames ──► Path ──► Swing ──► Inertia ──► report
               marker/  signal/   inertia/

`measure.py` is the only place where stages meet; they know one another by these records alone. What stage 2
needs of stage 3 (how the period grows with amplitude in this suspension) travels as a `SwingLaw`.

Arrays are float64 unless said otherwise. Records with arrays compare by identity (`eq=False`): `==` on arrays
has no single truth value.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from typing import Any, Protocol

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]


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


# ---------------------------------------------------------------- frames, from clip/ to marker/


@dataclass(frozen=True, eq=False)
class Frame:
    """One decoded picture as it is stored (before the rotation flag), planes without conversion.

    Parameters
    ----------
    index : int
        Counts decoded frames from 0.
    t_s : float
        Time from the clip's first frame in real seconds (slow motion undone).
    luma : (height, width) uint8 or uint16
    chroma_u, chroma_v : (height / sy, width / sx) uint8 or uint16, or None for a grey clip
        Views into the decoder's memory: valid until the next frame is asked for.
    depth : int
        Bits per sample (8, 10, …).
    """

    index: int
    t_s: float
    luma: NDArray[Any]
    chroma_u: NDArray[Any] | None
    chroma_v: NDArray[Any] | None
    depth: int = 8


class FrameSource(Protocol):
    """What the marker stage needs of a clip: pictures in order, as often as asked, and their geometry.

    `width` and `height` are those of the stored picture; `upright` turns stored pixel coordinates into those
    of the picture as it is shown (rotation applied), arrays in, arrays out.
    """

    @property
    def width(self) -> int: ...
    @property
    def height(self) -> int: ...
    @property
    def rotation_deg(self) -> int: ...
    def frames(self, from_s: float | None = None, to_s: float | None = None) -> Iterator[Frame]: ...
    def upright(self, x_px: Floats, y_px: Floats) -> tuple[Floats, Floats]: ...
    def stored(self, x_px: Floats, y_px: Floats) -> tuple[Floats, Floats]: ...


@dataclass(frozen=True)
class ClipFacts:
    """What the file says of itself and what its frame times were found to be (the timing audit)."""

    file: str
    sha256: str
    codec: str
    width: int
    height: int
    rotation_deg: int
    frames: int
    duration_s: float
    stored_rate_hz: float | None
    capture_rate_hz: float | None
    time_scale: float
    dropped_frames: int
    repeated_frames: int
    interval_spread_ms: float
    notes: tuple[str, ...] = ()


# ---------------------------------------------------------------- the path, from marker/ to signal/


@dataclass(frozen=True, eq=False)
class Track:
    """Where one spot was: pixels of the upright picture, x right, y down, (0, 0) the top-left pixel's centre.

    Parameters
    ----------
    x_px, y_px : (n_frames,) float
        NaN where not seen.
    u_x_px, u_y_px : (n_frames,) float
        Standard uncertainty of each.
    seen : (n_frames,) bool
    """

    x_px: Floats
    y_px: Floats
    u_x_px: Floats
    u_y_px: Floats
    seen: Bools


@dataclass(frozen=True)
class Candidate:
    """A spot that swings, offered by number: where it is in the first frame used, and how good it looks."""

    number: int
    x_px: float
    y_px: float
    diameter_px: float
    score: float


@dataclass(frozen=True)
class MarkerFacts:
    """How the dot was found and how well it was followed."""

    found_by: str
    frames_followed: int
    frames_lost: int
    diameter_px: float | None
    position_noise_px: float | None
    candidates: tuple[Candidate, ...] = ()
    shake_removed: bool = False


@dataclass(frozen=True, eq=False)
class Path:
    """The path of one dot or two: the hand-off from stage 1 to stage 2.

    Parameters
    ----------
    t_s : (n_frames,) float
        True frame times from the clip's first frame, strictly increasing, real seconds.
    tracks : one `Track` a dot, each of n_frames
    """

    t_s: Floats
    tracks: tuple[Track, ...]
    clip: ClipFacts | None = None
    marker: MarkerFacts | None = None
    doubts: tuple[Doubt, ...] = ()


@dataclass(frozen=True, eq=False)
class Series:
    """A swing as one coordinate against time, from an encoder, a gyro or another tracker.

    `unit` is "rad" where the coordinate is the swing angle, "" where it is proportional to it in a unit that
    nobody knows (the amplitude is then unknown).
    """

    t_s: Floats
    y: Floats
    unit: str = "rad"
    u: Floats | None = None
    name: str = ""
    doubts: tuple[Doubt, ...] = ()


@dataclass(frozen=True)
class View:
    """Where the camera stood and what in the picture has a known size; what is None has to be worked out."""

    camera: str | None = None  # "above" | "side" | "oblique"
    dot_radius_m: Quantity | None = None
    dot_diameter_m: Quantity | None = None


@dataclass(frozen=True, eq=False)
class SwingLaw:
    """How a suspension swings freely at any amplitude: the hand-off from stage 3 to stage 2.

    With q the angle and ω0 the small-swing angular frequency, the free motion is
    m(q) q'' + ½ m'(q) q'² + ω0² v'(q) = 0,  v(q) = q²/2 + O(q⁴),  m(q) = 1 + O(q²),
    with v the potential energy over I ω0² and m the inertia over its value at rest (the bounce of the article
    makes it vary). Both are even, and are kept as Chebyshev series in s = 2 (q / q_max)² − 1:
    v(q) = q²/2 · Σ potential[j] T_j(s) and m(q) = Σ inertia[j] T_j(s).

    Parameters
    ----------
    name : str
        Of the suspension, as in the rig file.
    q_max_rad : float
        The series hold for |q| <= q_max_rad.
    potential, inertia : (n,) float
        Chebyshev coefficients as above.
    amplitude_rad, period_ratio : (n,) float
        Table of the exact T(A) / T(0), by the energy integral, for readers and figures.
    ratio_relative_u : float
        Standard uncertainty of (T/T0 − 1), relative to it, from the doubt of the geometry.
    """

    name: str
    q_max_rad: float
    potential: Floats
    inertia: Floats
    amplitude_rad: Floats
    period_ratio: Floats
    ratio_relative_u: float = 0.0


@dataclass(frozen=True)
class ExpectedMode:
    """A frequency that the rig predicts for a motion other than the swing ("sway", "roll", "bounce")."""

    kind: str
    frequency_hz: float
    relative_u: float


# ---------------------------------------------------------------- the swing, from signal/ to inertia/


@dataclass(frozen=True)
class Mode:
    """Another motion found beside the swing; `share` is its amplitude over the swing's in the same record."""

    frequency_hz: float
    share: float
    kind: str


@dataclass(frozen=True, eq=False)
class SwingTrace:
    """What the figures draw: data, fit and residual of the swing on the clip's own times.

    Parameters
    ----------
    t_s, measured, fitted : (n,) float
        In `unit` ("rad", "px" or ""). Covers every usable sample, the parts left out included (fitted is NaN
        there).
    used : (n,) bool
        Samples that the fit used (in the free part, not an outlier).
    amplitude : (n,) float
        Envelope of the fit.
    cycle_t_s, cycle_period_s : (n_cycles,) float
        Periods of single cycles, for the eye.
    free_from_s, free_to_s : float
        The part that swings freely.
    spectrum_hz, spectrum_residual : (m,) float
        Amplitude spectrum of the residual.
    """

    t_s: Floats
    measured: Floats
    fitted: Floats
    used: Bools
    amplitude: Floats
    unit: str
    cycle_t_s: Floats
    cycle_period_s: Floats
    free_from_s: float
    free_to_s: float
    spectrum_hz: Floats
    spectrum_residual: Floats


@dataclass(frozen=True)
class DampingTerm:
    """One cause of the damping ("viscous", "quadratic", "dry") and its share of the loss at start and end."""

    kind: str
    value: Quantity
    share_start: float
    share_end: float


@dataclass(frozen=True, eq=False)
class Swing:
    """Period and damping: the hand-off from stage 2 to stage 3.

    `period` is THE period: the limit of small swings without damping. `period_in_clip` is the mean over the
    part that was fitted, as a stopwatch would see it. What can't be known is None.
    `solved`, `usable` and the doubts are three separate facts: did the solver finish, do the uncertainties
    mean anything, which checks failed.
    """

    period: Quantity
    period_in_clip: Quantity
    decay_rate: Quantity
    half_life: Quantity | None
    damping_ratio: Quantity
    quality_factor: Quantity | None
    log_decrement: Quantity
    amplitude_start: Quantity | None
    amplitude_end: Quantity | None
    cycles: float
    damping_law: str
    damping_terms: tuple[DampingTerm, ...]
    other_modes: tuple[Mode, ...]
    fit_rms: float
    fit_rms_unit: str
    noise_correlation_time_s: float
    amplitude_shift: float | None  # T in clip / T small − 1 that the amplitude made; None where unknown
    outliers: int
    trace: SwingTrace
    solved: bool = True
    usable: bool = True
    law: SwingLaw | None = None
    doubts: tuple[Doubt, ...] = ()


# ---------------------------------------------------------------- the rig, from rig.py to inertia/


@dataclass(frozen=True)
class AddedWeight:
    """A weight fixed to the article for the added-weights method."""

    mass: Quantity
    distance: Quantity  # from the swing axis to the weight's centre of mass
    own_moment: Quantity | None = None  # about its own centre of mass, axis parallel to the swing axis


@dataclass(frozen=True)
class Article:
    """What hangs there. `axis` is the swing axis in the article's own frame (unit vector), for the tensor."""

    name: str
    mass: Quantity | None
    axis: tuple[float, float, float] | None = None
    expected_moment: Quantity | None = None  # known or computed beforehand, kg m^2
    added: tuple[AddedWeight, ...] = ()


@dataclass(frozen=True)
class Suspension:
    """How it hangs: the kind and its dimensions by their rig-file key, in SI.

    `lower_spacing` is absent where the user left it out: it then is one and the same measured number as
    `upper_spacing`.
    """

    kind: str
    dimensions: Mapping[str, Quantity]
    strings: int = 2
    string_material: str | None = None


@dataclass(frozen=True)
class Air:
    """The shape by which the surrounding air is carried along; see inertia/corrections."""

    shape: str
    dimensions: Mapping[str, Quantity] = field(default_factory=dict)
    density: Quantity | None = None
    face: str | None = None  # "broadside" | "edgewise"


@dataclass(frozen=True)
class Rig:
    """Everything the user said of the bench. `gravity` None: a mean gravity with its whole range on Earth.

    `source` is the rig file as read (plain dict), kept in the result so that it can be made again.
    """

    article: Article
    suspension: Suspension
    gravity: Quantity | None = None
    latitude: Quantity | None = None  # rad
    altitude: Quantity | None = None  # m
    view: View = field(default_factory=View)
    air: Air | None = None
    source: Mapping[str, Any] = field(default_factory=dict)


# ---------------------------------------------------------------- the inertia, from inertia/ to report/


@dataclass(frozen=True)
class BudgetLine:
    """One input's part in the uncertainty of the result.

    `sensitivity` is ∂result/∂input in SI, `contribution` = |sensitivity| · u, `share` the part of the total
    variance (0 to 1).
    """

    input: str
    value: float
    u: float
    unit: str
    sensitivity: float
    contribution: float
    share: float
    dof: float = math.inf


@dataclass(frozen=True)
class Correction:
    """A correction as a relative change of the result, applied or only stated, with its uncertainty."""

    name: str
    relative: float
    u: float
    applied: bool
    reason: str


@dataclass(frozen=True)
class MonteCarlo:
    """Propagation of distributions (JCGM 101) beside the law of propagation."""

    draws: int
    value: float
    u: float
    interval_95: tuple[float, float]
    agrees: bool


@dataclass(frozen=True)
class Inertia:
    """The answer: moment of inertia about `about`, its budget and its doubts.

    `k` is the coverage factor for about 95 %; `expanded` = k · moment.u.
    """

    moment: Quantity
    k: float
    about: str
    radius_of_gyration: Quantity | None
    budget: tuple[BudgetLine, ...]
    corrections: tuple[Correction, ...] = ()
    monte_carlo: MonteCarlo | None = None
    moment_about_edge: Quantity | None = None
    advice: tuple[str, ...] = ()
    doubts: tuple[Doubt, ...] = ()

    @property
    def expanded(self) -> float:
        """Expanded uncertainty k · u, kg m²."""
        return self.k * self.moment.u


# ---------------------------------------------------------------- stopwatch runs


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
