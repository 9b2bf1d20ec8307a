"""A rehearsal: the user's own rig swung and filmed on paper, with its truth."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import asdict, dataclass
from pathlib import Path as FilePath
from typing import Any

import numpy as np

from ..errors import BadRig
from ..records import Bools, Floats, Rig
from .body import Motion
from .clock import base_of, frame_times
from .encode import check_name, write_clip
from .filming import Shooting, draw_frames, set_up
from .mechanism import Strings, mechanism_of, strings_of
from .motion import SwingTruth, simulate_swing
from .settings import RehearsalSettings

SPARE_S = 0.5  # integrated beyond the last frame: late frames, long exposures and the last rows need it


@dataclass(frozen=True, eq=False)
class Truth:
    """What is true of a rehearsed clip.

    Parameters
    ----------
    period_s : float
        Of small undamped swings.
    decay_rate_per_s : float
        Of the viscous damping; `swing.damping.local_rate` gives the whole at an amplitude.
    moment_kg_m2, amplitude_rad, release_s : float
    t_s, taken_s : (n_frames,) float
        The file's times from its first frame, and the true instants of the pictures on the same clock; they differ
        where the file's time base is coarse, or stretched.
    angle_rad : (n_frames,) float
        At the file's frames, whatever picture they show.
    x_px, y_px : (n_frames,) float
        Centroid of the dot's picture, upright pixels, camera shake included.
    x2_px, y2_px : (n_frames,) float or None
        Of the second dot.
    shake_px : (n_frames, 2) float
    repeated : (n_frames,) bool
        Frames that show the one before.
    dot_diameter_px : float
        In the first frame, geometric mean over an ellipse.
    swing : SwingTruth
    settings : RehearsalSettings
    """

    period_s: float
    decay_rate_per_s: float
    moment_kg_m2: float
    amplitude_rad: float
    release_s: float
    t_s: Floats
    taken_s: Floats
    angle_rad: Floats
    x_px: Floats
    y_px: Floats
    shake_px: Floats
    repeated: Bools
    dot_diameter_px: float
    swing: SwingTruth
    settings: RehearsalSettings
    x2_px: Floats | None = None
    y2_px: Floats | None = None

    @property
    def decay_rate_in_clip_per_s(self) -> float:
        """Mean relative loss of amplitude per second, all causes, from the release to the end of the clip.

        The last swing's height is read off the integrated motion.
        """
        end = float(self.taken_s[-1])
        free = max(end - self.release_s, self.period_s)
        near = np.linspace(max(self.release_s, end - self.period_s), end, 2001)
        height = float(np.abs(self.swing.angle(near)).max())
        middle = free - 0.5 * self.period_s
        return math.log(self.amplitude_rad / height) / middle if height > 0.0 and middle > 0.0 else math.inf

    def to_dict(self) -> dict[str, Any]:
        """Plain numbers for a JSON file: the truth without the path."""
        return {
            "period_s": self.period_s,
            "decay_rate_per_s": self.decay_rate_per_s,
            "moment_kg_m2": self.moment_kg_m2,
            "amplitude_start_deg": math.degrees(self.amplitude_rad),
            "release_s": self.release_s,
            "frames": int(self.t_s.size),
            "dot_diameter_px": self.dot_diameter_px,
            "dot_first_px": [float(self.x_px[0]), float(self.y_px[0])],
            "settings": asdict(self.settings),
        }


def rehearse_clip(
    rig: Rig,
    out_file: str | FilePath,
    *,
    settings: RehearsalSettings | None = None,
    progress: Callable[[float], None] | None = None,
) -> Truth:
    """Swing the rig's article, film it, and write the clip.

    Parameters
    ----------
    rig : Rig
    out_file : path
        Ending in .mp4, .mov, .m4v, .3gp, .mkv or .webm; written whole or not at all.
    settings : RehearsalSettings, optional
    progress : share done (0 to 1) → None, optional

    Raises
    ------
    BadRig
        Neither the settings nor the rig say the article's moment of inertia.
    BadInput
        The clip can't be drawn as asked (the dot leaves the picture) or can't be written.
    """
    settings = settings or RehearsalSettings()
    file = FilePath(out_file)
    check_name(file, settings.film)
    shooting, swing = prepare_shooting(rig, settings, file)
    write_clip(file, draw_frames(shooting, progress), shooting.film, shooting.times)
    return truth_of(shooting, swing, settings)


def prepare_shooting(
    rig: Rig, settings: RehearsalSettings, file: FilePath = FilePath("clip.mp4")
) -> tuple[Shooting, SwingTruth]:
    """Everything but the drawing: the integrated swing, the frames' times, the dot's exact path."""
    film = settings.film
    mechanism = mechanism_of(rig, true_moment(rig, settings))
    # a generator each, so that a change of the scene leaves the times alone
    times = frame_times(film, base_of(file, film), np.random.default_rng((settings.seed, 0)))
    last = float(times.taken_s[-1]) + SPARE_S + film.readout_s
    swing = simulate_swing(
        mechanism,
        amplitude_rad=settings.amplitude_rad,
        damping=settings.damping,
        duration_s=max(last - settings.release_s, 0.1),
        release_s=settings.release_s,
    )
    return set_up(settings, Motion(swing, settings, mechanism.rise), times, _drawn_strings(rig)), swing


def true_moment(rig: Rig, settings: RehearsalSettings) -> float:
    """The article's moment of inertia: asked for, or from the period asked for, or the rig's expected one.

    Raises
    ------
    BadRig
        Nothing says it.
    """
    if settings.moment_kg_m2 is not None:
        return settings.moment_kg_m2
    if settings.period_s is not None:
        return moment_for_period(rig, settings.period_s)
    if rig.article.expected_moment is not None:
        return rig.article.expected_moment.value
    raise BadRig(
        "Nothing says the article's moment of inertia.",
        'Needed: expected_moment under [article], such as "0.021 kg m^2", or --moment.',
        "A guess will do for a rehearsal; swingtrack solids works one out from simple shapes.",
    )


def moment_for_period(rig: Rig, period_s: float) -> float:
    """The moment of inertia with which small undamped swings take `period_s`: T² grows in a straight line with it."""
    one = mechanism_of(rig, 1.0)
    wanted = one.stiffness * (period_s / (2.0 * math.pi)) ** 2
    moment = 1.0 + wanted - one.at_rest
    if moment <= 0.0:
        raise BadRig(
            f"On this rig even an article without any moment of inertia takes longer than {period_s:g} s.",
            "Needed: a longer period, or another suspension.",
        )
    return moment


def truth_of(shooting: Shooting, swing: SwingTruth, settings: RehearsalSettings) -> Truth:
    """Gather what is true of a clip."""
    places, times = shooting.places(), shooting.times
    second = shooting.places(1) if len(shooting.ellipses) > 1 else None
    return Truth(
        period_s=swing.period_s,
        decay_rate_per_s=swing.decay_rate_per_s,
        moment_kg_m2=swing.moment_kg_m2,
        amplitude_rad=settings.amplitude_rad,
        release_s=settings.release_s,
        t_s=times.stored_s,
        taken_s=times.taken_s,
        angle_rad=swing.angle(times.taken_s),
        x_px=places[:, 0],
        y_px=places[:, 1],
        shake_px=shooting.shake_px,
        repeated=times.repeated,
        dot_diameter_px=shooting.diameter_px,
        swing=swing,
        settings=settings,
        x2_px=None if second is None else second[:, 0],
        y2_px=None if second is None else second[:, 1],
    )


def _drawn_strings(rig: Rig) -> Strings | None:
    """What holds the article in the picture; None where no string is seen."""
    x = rig.suspension.dimensions
    if rig.suspension.kind in ("bifilar", "trifilar"):
        return strings_of(rig)
    if rig.suspension.kind == "torsion-wire":
        return Strings(0.0, 0.0, x["length"].value if "length" in x else 1.0, 1)
    return None
