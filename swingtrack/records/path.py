"""Where the dots were, and how the suspension swings: from marker/ (and inertia/) to signal/."""

from __future__ import annotations

from dataclasses import dataclass

from .arrays import Bools, Floats
from .basic import Doubt, Quantity
from .frames import ClipFacts


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
