"""What a rehearsal can be asked for."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

from ..errors import BadInput
from .motion import Damping

CAMERAS = ("above", "side", "oblique")
BENCHES = ("wood", "mat", "concrete", "white")
ARTICLES = ("carbon", "wood", "plain")
MOVERS = ("person", "swinging", "fan")
CODECS = ("libx264", "libx265", "libvpx-vp9", "libsvtav1", "mpeg4")
LARGEST_PX = 7680


@dataclass(frozen=True)
class Sway:
    """A second motion: the article's sideways sway, m at the start, its frequency and decay."""

    amplitude_m: float
    frequency_hz: float
    decay_per_s: float = 0.01
    direction_rad: float = 0.0
    phase_rad: float = 0.7


@dataclass(frozen=True)
class Roll:
    """A second motion: the article tips about a level axis through its centre, rad at the start.

    `axis_rad` is the axis' direction from the world's x, the article at rest lying along −y.
    """

    tilt_rad: float
    frequency_hz: float
    decay_per_s: float = 0.01
    axis_rad: float = 0.0
    phase_rad: float = 0.7


@dataclass(frozen=True)
class Film:
    """How it is filmed.

    Parameters
    ----------
    width, height : int
        Upright picture, even numbers.
    rate_hz, duration_s : float
    uneven_ms : float
        Standard deviation of the true capture instants about the even raster; the file holds the true ones.
    dropped_share, repeated_share : float
        Share of frames that are missing, or that show the one before under a new time.
    exposure_s : float
        Shutter time over which everything that moves is smeared.
    readout_s : float
        Rolling shutter: time from the first row of the stored picture to the last; a frame's time is its middle's.
    noise : float
        Standard deviation of luma at mid-grey, grey levels.
    flicker, drift : float
        Relative swing of the light at `mains_hz` × 2, and its change over the clip.
    shake_px : float
        Amplitude of slow camera movement.
    rotation_deg : int
        Stored turned; the file's flag has the player turn it clockwise by this.
    codec : str
        "libx264", "libx265", "libvpx-vp9", "libsvtav1" or "mpeg4"; `crf` its quality, unless `bitrate_mbps` is given.
    time_base_hz : int
        Ticks a second of the stored times. Below 10 000 the frames are taken at instants between the ticks.
    stretch : float
        Slow motion: the stored times are the true ones times this, and nothing in the file says so.
    gaps : (start, end) in s
        Spans without a single frame.
    softness_px : float
        Standard deviation of the lens's blur.
    b_frames : int
        Of "libx264" and "mpeg4": pictures in a row that are stored out of order.
    """

    width: int = 1280
    height: int = 720
    rate_hz: float = 30.0
    duration_s: float = 20.0
    uneven_ms: float = 0.3
    dropped_share: float = 0.0
    repeated_share: float = 0.0
    exposure_s: float = 1.0 / 120.0
    readout_s: float = 0.0
    noise: float = 3.0
    flicker: float = 0.0
    drift: float = 0.0
    shake_px: float = 0.0
    rotation_deg: int = 0
    codec: str = "libx264"
    crf: int = 21
    bitrate_mbps: float | None = None
    ten_bit: bool = False
    time_base_hz: int = 90_000
    stretch: float = 1.0
    gaps: tuple[tuple[float, float], ...] = ()
    mains_hz: float = 50.0
    softness_px: float = 0.7
    b_frames: int = 0

    def __post_init__(self) -> None:
        sides = (self.width, self.height)
        if any(side % 2 or not 64 <= side <= LARGEST_PX for side in sides):
            raise BadInput(
                f"A picture of {self.width}x{self.height} was asked for.",
                f"Needed: even numbers, 64 to {LARGEST_PX}.",
            )
        if not (1.0 <= self.rate_hz <= 1000.0 and 0.5 <= self.duration_s <= 7200.0):
            raise BadInput(
                f"A clip of {self.duration_s:g} s at {self.rate_hz:g} frames/s was asked for.",
                "Needed: 0.5 s to 7200 s at 1 to 1000 frames/s.",
            )
        if self.rotation_deg not in (0, 90, 180, 270):
            raise BadInput(f"A turn of {self.rotation_deg}° was asked for.", "Needed: 0, 90, 180 or 270.")
        _one_of("codec", self.codec, CODECS)
        for name in ("dropped_share", "repeated_share"):
            if not 0.0 <= getattr(self, name) < 0.9:
                raise BadInput(f"{name} = {getattr(self, name):g} was asked for.", "Needed: 0 to 0.9.")


@dataclass(frozen=True)
class Stage:
    """What is in the picture.

    Parameters
    ----------
    camera : str
        "above", "side" or "oblique".
    distance_m : float
        From the camera to the swing axis at the dot's height.
    dot_radius_m, dot_diameter_m : float
    dot_diameter_px : float, optional
        Instead of `dot_diameter_m`: across in the picture, at rest.
    dot_bgr, article_bgr : (b, g, r)
    ring : bool
        A black ring round the dot, half again as wide.
    dots : int
        1, or 2: another one at the article's other end.
    clutter : int
        Number of objects that lie about.
    alike : int
        How many spots of the dot's colour and about its size stand still there.
    strings, hand, mover, shadow : bool
        Strings; a hand that holds and lets go; a second thing that moves; the article's moving shadow.
    string_over_dot : bool
        The strings are tied along the article, so that they pass over the dot's path (from the side: one hangs in
        front of it).
    bench : str
        "wood", "mat", "concrete" or "white".
    article : str
        "carbon", "wood" or "plain": its look; the colour is `article_bgr`.
    mover_kind : str
        "person" (comes and goes unevenly), "swinging" (a thing on a string, its period near the article's) or "fan".
    arc_share : float
        The dot's radius in the picture over the picture's height: how near one films.
    elevation_deg : float, optional
        Of an oblique camera above the level; None: 48°.
    aside_deg : float
        How far round the axis the camera stands from the line through the dot at rest.
    """

    camera: str = "above"
    distance_m: float = 1.0
    dot_radius_m: float = 0.30
    dot_diameter_m: float = 0.020
    dot_bgr: tuple[int, int, int] = (40, 120, 245)
    article_bgr: tuple[int, int, int] = (70, 62, 58)
    ring: bool = False
    clutter: int = 12
    alike: int = 0
    strings: bool = True
    hand: bool = False
    mover: bool = False
    shadow: bool = True
    string_over_dot: bool = False
    bench: str = "wood"
    article: str = "carbon"
    mover_kind: str = "person"
    dots: int = 1
    dot_diameter_px: float | None = None
    arc_share: float = 0.36
    elevation_deg: float | None = None
    aside_deg: float = 0.0

    def __post_init__(self) -> None:
        _one_of("camera", self.camera, CAMERAS)
        _one_of("bench", self.bench, BENCHES)
        _one_of("article", self.article, ARTICLES)
        _one_of("mover", self.mover_kind, MOVERS)
        if self.dots not in (1, 2):
            raise BadInput(f"{self.dots} dots were asked for.", "Needed: 1 or 2.")
        for name in ("distance_m", "dot_radius_m", "dot_diameter_m", "dot_diameter_px", "arc_share"):
            value = getattr(self, name)
            if value is not None and not (math.isfinite(value) and value > 0.0):
                raise BadInput(f"{name} = {value:g} was asked for.", "Needed: a number over zero.")
        if self.distance_m < 1.2 * self.dot_radius_m:
            raise BadInput(
                f"The camera would stand {self.distance_m:.3g} m from the axis, the dot swings {self.dot_radius_m:.3g} m from it.",
                "Needed: a distance at least 1.2 times the dot's radius.",
            )


@dataclass(frozen=True)
class RehearsalSettings:
    """A rehearsal: the article's true moment of inertia, its swing, and how it is filmed.

    Parameters
    ----------
    moment_kg_m2 : float, optional
        None takes the one that belongs to `period_s`, or else the rig's expected_moment.
    period_s : float, optional
        Of small undamped swings, instead of the moment.
    amplitude_rad : float
        At the release.
    release_s : float
        How long the article is held first; `tremble_rad` how much the hand trembles meanwhile.
    sway, roll : other motions beside the swing, each its own damped oscillation from the release on
    seed : int
        The same seed gives the same clip.
    """

    moment_kg_m2: float | None = None
    amplitude_rad: float = 0.14
    damping: Damping = field(default_factory=Damping)
    sway: tuple[Sway, ...] = ()
    release_s: float = 0.0
    film: Film = field(default_factory=Film)
    stage: Stage = field(default_factory=Stage)
    seed: int = 1
    period_s: float | None = None
    roll: tuple[Roll, ...] = ()
    tremble_rad: float = 0.0

    def __post_init__(self) -> None:
        if not 0.0 < self.amplitude_rad < 3.0:
            raise BadInput(
                f"An amplitude of {self.amplitude_rad:g} rad was asked for.", "Needed: 0 to 3 rad."
            )
        if not (math.isfinite(self.release_s) and self.release_s >= 0.0):
            raise BadInput(f"A release at {self.release_s:g} s was asked for.", "Needed: zero or later.")
        if self.moment_kg_m2 is not None and self.period_s is not None:
            raise BadInput(
                "Both a moment of inertia and a period were asked for.",
                "Needed: one; the rig gives the other.",
            )
        for name in ("moment_kg_m2", "period_s"):
            value = getattr(self, name)
            if value is not None and not (math.isfinite(value) and value > 0.0):
                raise BadInput(f"{name} = {value:g} was asked for.", "Needed: a number over zero.")


def _one_of(name: str, value: str, known: tuple[str, ...]) -> None:
    if value not in known:
        raise BadInput(f"A {name} {value!r} was asked for.", f"Needed: {', '.join(known)}.")
