"""What a rehearsal can be asked for."""

from __future__ import annotations

from dataclasses import dataclass, field

from ..errors import BadInput
from .motion import Damping


@dataclass(frozen=True)
class Sway:
    """A second motion: the article's sideways sway, m at the start, its frequency and decay."""

    amplitude_m: float
    frequency_hz: float
    decay_per_s: float = 0.01
    direction_rad: float = 0.0
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
        Shutter time over which the dot is smeared.
    readout_s : float
        Rolling shutter: time from the first row to the last.
    noise : float
        Standard deviation of a pixel, grey levels.
    flicker, drift : float
        Relative swing of the light at 100 Hz, and its change over the clip.
    shake_px : float
        Amplitude of slow camera movement.
    rotation_deg : int
        Stored turned, with the flag that turns it back.
    codec : str
        "libx264" or "libx265"; `crf` its quality.
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
    dot_bgr, article_bgr : (b, g, r)
    ring : bool
        A black ring round the dot.
    clutter : int
        Number of objects that lie about.
    alike : int
        How many of them are spots of the dot's colour that stand still.
    strings, hand, mover : bool
        Strings in front; a hand that holds and lets go; a second thing that moves.
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


@dataclass(frozen=True)
class RehearsalSettings:
    """A rehearsal: the article's true moment of inertia, its swing, and how it is filmed.

    `moment_kg_m2` None takes the rig's expected_moment. `release_s` is how long the article is held first.
    """

    moment_kg_m2: float | None = None
    amplitude_rad: float = 0.14
    damping: Damping = field(default_factory=Damping)
    sway: tuple[Sway, ...] = ()
    release_s: float = 0.0
    film: Film = field(default_factory=Film)
    stage: Stage = field(default_factory=Stage)
    seed: int = 1

    def __post_init__(self) -> None:
        film = self.film
        if film.width % 2 or film.height % 2 or not (64 <= film.width <= 7680 and 64 <= film.height <= 7680):
            raise BadInput(
                f"A picture of {film.width}x{film.height} was asked for.", "Needed: even, 64 to 7680."
            )
        if not (1.0 <= film.rate_hz <= 1000.0 and 0.5 <= film.duration_s <= 7200.0):
            raise BadInput(
                f"A clip of {film.duration_s:g} s at {film.rate_hz:g} frames/s was asked for.",
                "Needed: 0.5 s to 7200 s at 1 to 1000 frames/s.",
            )
        if not 0.0 < self.amplitude_rad < 3.0:
            raise BadInput(
                f"An amplitude of {self.amplitude_rad:g} rad was asked for.", "Needed: 0 to 3 rad."
            )
