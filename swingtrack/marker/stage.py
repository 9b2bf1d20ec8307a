"""`follow_marker`: from frames to the path of one dot or two."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from ..errors import NothingToMeasure
from ..records import Doubt, Floats, FrameSource, MarkerFacts, Path, Track
from . import doubts
from .choose import Choice, choose_spots
from .follow import Follower, Spot
from .piece import whole
from .rows import row_delay, shift_in_time
from .scatter import uncertainty_scale
from .settings import MarkerSettings
from .shake import Motion, Steadier, motion_at

Progress = Callable[[float], None]

# Share of the bar that finding gets.
FINDING_SHARE = 0.3

FEWEST_SEEN = 10


def follow_marker(
    source: FrameSource, *, settings: MarkerSettings | None = None, progress: Progress | None = None
) -> Path:
    """Find the dot (or take the one pointed at) and follow it through the clip.

    Parameters
    ----------
    source : FrameSource
        Frames in order, as often as asked.
    settings : MarkerSettings
        None: one dot, found by its swing, in the whole clip.
    progress : callable
        Called with the share done, 0 to 1.

    Returns
    -------
    Path
        Upright pixels, `clip` None; `marker` says how the dot was found and how well it was followed.

    Raises
    ------
    NothingToMeasure
        No spot swings, or the dot can't be followed.
    BadInput
        The place given for the dot is outside of the picture, or there is no such candidate.
    """
    settings = settings or MarkerSettings()
    choice = choose_spots(source, settings, _part(progress, 0.0, FINDING_SHARE))
    followers, steadier, times = _run(source, settings, choice, _part(progress, FINDING_SHARE, 1.0))
    return _assemble(source, settings, choice, (followers, steadier, times))


def _run(
    source: FrameSource, settings: MarkerSettings, choice: Choice, progress: Progress | None
) -> tuple[list[Follower], Steadier | None, Floats]:
    """One pass over the frames."""
    followers = [Follower(spot) for spot in choice.spots]
    steadier: Steadier | None = None
    times: list[float] = []
    end = settings.to_s or getattr(source, "duration_s", None)
    for frame in source.frames(settings.from_s, settings.to_s):
        picture = whole(frame)
        if not times and settings.steady:
            steadier = Steadier(picture, [_swept(spot) for spot in choice.spots])
        times.append(frame.t_s)
        for follower in followers:
            follower.step(frame.t_s, picture)
        if steadier is not None:
            steadier.step(picture)
        if progress is not None and end and len(times) % 16 == 0:
            progress(min(1.0, (frame.t_s - times[0]) / max(end - times[0], 1e-9)))
    for follower in followers:
        follower.finish()
    return followers, steadier, np.array(times)


def _assemble(
    source: FrameSource,
    settings: MarkerSettings,
    choice: Choice,
    followed: tuple[list[Follower], Steadier | None, Floats],
) -> Path:
    followers, steadier, t = followed
    readout_s = None if settings.readout_ms is None else settings.readout_ms * 1e-3
    tracks, said, removed = [], list(choice.doubts), False
    path_t = t
    for number, follower in enumerate(followers):
        s = follower.sightings
        x, y = np.array(s.x_px), np.array(s.y_px)
        var_x, var_y = np.array(s.var_x), np.array(s.var_y)
        seen = np.isfinite(x)
        if int(seen.sum()) < FEWEST_SEEN:
            raise NothingToMeasure(
                f"The {'second ' if number else ''}dot could be followed in {int(seen.sum())} of {len(t)} frames.",
                f"It must be seen in at least {FEWEST_SEEN}.",
                "Film with more light and the dot free of strings and hands, or point at it with --dot X,Y.",
            )
        rows = y.copy()
        motion = None if steadier is None else _motion(steadier, x, y, source.width)
        if motion is not None and motion.size_px >= doubts.SHAKE_PX:
            x, y, removed = x - motion.dx, y - motion.dy, True
            var_x, var_y = var_x + motion.u_px**2, var_y + motion.u_px**2
            if number == 0:
                _say(said, doubts.camera_moved(motion.size_px, True))
        scale = uncertainty_scale(t, x, y, np.sqrt(var_x), np.sqrt(var_y))
        if scale is not None:
            var_x, var_y = var_x * scale[0] ** 2, var_y * scale[1] ** 2
        if readout_s is not None:
            delay = row_delay(rows, source.height, readout_s)
            if len(followers) == 1:
                path_t = t + delay
            else:
                x, y = shift_in_time(t, x, delay), shift_in_time(t, y, delay)
        elif number == 0:
            _say(said, _rolling(follower, rows[seen], source.height))
        tracks.append(_upright(source, (x, y), (var_x, var_y), seen))
    said += _said_of(source, followers[0], t, tracks[0])
    return Path(path_t, tuple(tracks), None, _facts(choice, followers[0], tracks, removed), tuple(said))


def _facts(choice: Choice, follower: Follower, tracks: list[Track], removed: bool) -> MarkerFacts:
    seen = tracks[0].seen
    noise = np.sqrt(0.5 * (tracks[0].u_x_px[seen] ** 2 + tracks[0].u_y_px[seen] ** 2))
    diameter = 2.0 * follower.model.radius_px if follower.model is not None else None
    return MarkerFacts(
        found_by=choice.found_by,
        frames_followed=int(seen.sum()),
        frames_lost=int((~seen).sum()),
        diameter_px=diameter,
        position_noise_px=float(np.median(noise)),
        candidates=choice.candidates,
        shake_removed=removed,
    )


def _said_of(source: FrameSource, follower: Follower, t: Floats, track: Track) -> list[Doubt]:
    said: list[Doubt] = []
    _say(said, doubts.dot_lost(t, track.seen))
    if follower.model is not None:
        _say(said, doubts.dot_small(2 * follower.model.radius_px))
        x, y = source.stored(track.x_px[track.seen], track.y_px[track.seen])
        edge = follower.model.radius_px + 1
        outside = (x < edge) | (y < edge) | (x > source.width - 1 - edge) | (y > source.height - 1 - edge)
        _say(said, doubts.swing_cut_off(float(np.mean(outside))))
    _say(said, doubts.dot_faint(follower.spot.look.contrast))
    return said


def _say(said: list[Doubt], doubt: Doubt | None) -> None:
    if doubt is not None:
        said.append(doubt)


def _rolling(follower: Follower, rows: Floats, height: int) -> Doubt | None:
    omega = follower.predictor.omega
    if omega is None:
        return None
    low, high = np.percentile(rows, [1, 99])
    return doubts.rolling_shutter(float(high - low) / 2, height, omega)


def _motion(steadier: Steadier, x: Floats, y: Floats, width: int) -> Motion | None:
    known = np.isfinite(x)
    at = np.arange(len(x))
    return motion_at(steadier, np.interp(at, at[known], x[known]), np.interp(at, at[known], y[known]), width)


def _swept(spot: Spot) -> tuple[float, float, float, float]:
    """Box that the dot is known to sweep, with room for the article round it."""
    room = 3.0 * spot.look.diameter_px + 40
    x, y = spot.x_px, spot.y_px
    return float(x.min() - room), float(y.min() - room), float(x.max() + room), float(y.max() + room)


def _upright(
    source: FrameSource, place: tuple[Floats, Floats], variance: tuple[Floats, Floats], seen: np.ndarray
) -> Track:
    x, y = source.upright(*place)
    u = [np.sqrt(v) for v in variance]
    if source.rotation_deg % 180:
        u.reverse()
    return Track(x, y, u[0], u[1], seen)


def _part(progress: Progress | None, start: float, end: float) -> Progress | None:
    """The bar's stretch from `start` to `end` for one part of the work."""
    if progress is None:
        return None
    return lambda share: progress(start + (end - start) * min(max(share, 0.0), 1.0))
