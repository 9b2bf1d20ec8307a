"""Which spot to follow: the one pointed at, the one asked for by number, or the best that swings."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from ..errors import BadInput, NothingToMeasure
from ..records import Candidate, Doubt, Frame, FrameSource
from .appearance import Appearance, look_at
from .doubts import several_spots
from .find import ALIKE, Found, find_spots
from .follow import Spot
from .piece import Piece, whole
from .settings import MarkerSettings

# Sizes tried round a place that was pointed at, in pixels.
TRIED_DIAMETERS = (8.0, 14.0, 24.0, 40.0, 64.0, 90.0)

# Two dots on one article swing at one frequency; their found frequencies agree to this share.
SAME_RHYTHM = 0.06


@dataclass(frozen=True, eq=False)
class Choice:
    """The spots to follow, how they were found, what else there was, and what is to be said of it."""

    spots: tuple[Spot, ...]
    found_by: str
    candidates: tuple[Candidate, ...]
    doubts: tuple[Doubt, ...]


def choose_spots(
    source: FrameSource, settings: MarkerSettings, progress: Callable[[float], None] | None = None
) -> Choice:
    """Spots to follow after the settings; raises `NothingToMeasure` or `BadInput` with the reason."""
    first: Spot | None = None
    if settings.dot is not None:
        first = _pointed_at(source, settings)
        if settings.dots == 1:
            return Choice((first,), "place given", (), ())
    found = find_spots(source, settings.from_s, settings.to_s, progress=progress)
    candidates = tuple(_candidate(source, n, f) for n, f in enumerate(found, 1))
    how = "place given"
    if first is None:
        number = settings.choose or 1
        if number > len(found):
            raise BadInput(
                f"Candidate {number} was asked for.",
                f"{len(found)} {'spot swings' if len(found) == 1 else 'spots swing'} in this clip.",
                f"Use --choose 1{f' to {len(found)}' if len(found) > 1 else ''}, or point at the dot with --dot X,Y.",
            )
        first = found[number - 1].spot
        how = "number given" if settings.choose else "its swing"
    if settings.dots == 2:
        return Choice((first, _second(first, found)), how, candidates, ())
    doubt = several_spots(candidates, ALIKE) if settings.choose is None else None
    return Choice((first,), how, candidates, (doubt,) if doubt else ())


def _second(first: Spot, found: list[Found]) -> Spot:
    """The best other spot that swings in the first one's rhythm."""
    for other in found:
        near = np.hypot(
            np.interp(first.t_s, other.spot.t_s, other.spot.x_px) - first.x_px,
            np.interp(first.t_s, other.spot.t_s, other.spot.y_px) - first.y_px,
        )
        if float(np.median(near)) < 0.7 * first.look.diameter_px:
            continue
        if (
            first.omega is None
            or other.spot.omega is None
            or abs(other.spot.omega / first.omega - 1) < SAME_RHYTHM
        ):
            return other.spot
    raise NothingToMeasure(
        "Only one dot that swings was found.",
        "Two were asked for.",
        "Use --dots 1, or give the second dot the size and contrast of the first.",
    )


def _candidate(source: FrameSource, number: int, found: Found) -> Candidate:
    x, y = source.upright(found.spot.x_px[:1], found.spot.y_px[:1])
    return Candidate(number, float(x[0]), float(y[0]), found.spot.look.diameter_px, found.score)


def _pointed_at(source: FrameSource, settings: MarkerSettings) -> Spot:
    assert settings.dot is not None
    x, y = (float(v[0]) for v in source.stored(np.array([settings.dot[0]]), np.array([settings.dot[1]])))
    if not (0 <= x < source.width and 0 <= y < source.height):
        turned = source.rotation_deg in (90, 270)
        width, height = (source.height, source.width) if turned else (source.width, source.height)
        raise BadInput(
            f"The place {settings.dot[0]:g},{settings.dot[1]:g} lies outside of the picture.",
            f"The upright picture has {width} by {height} pixels.",
            "Read the place off a still of the first frame used, x to the right and y down.",
        )
    frame: Frame | None = next(iter(source.frames(settings.from_s, settings.to_s)), None)
    if frame is None:
        raise NothingToMeasure(
            "The part of the clip to be used has no frames.",
            "At least ten are needed.",
            "Check --from and --to.",
        )
    look = best_look(whole(frame), x, y)
    if look is None:
        raise NothingToMeasure(
            f"Nothing stands out at {settings.dot[0]:g},{settings.dot[1]:g} in the first frame used.",
            "A spot of its own colour, 8 pixels across or more, is needed there.",
            "Point at the middle of the dot in the first frame used, or leave out --dot to have it found.",
        )
    return Spot(look, np.array([frame.t_s]), np.array([look.x_px]), np.array([look.y_px]))


def best_look(picture: Piece, x: float, y: float) -> Appearance | None:
    """The spot about a place, of whatever size: the one that stands out most and all round."""
    best: tuple[float, Appearance] | None = None
    for diameter in TRIED_DIAMETERS:
        look = look_at(picture, x, y, diameter)
        if look is None or np.hypot(look.x_px - x, look.y_px - y) > 0.7 * look.diameter_px + 2:
            continue
        merit = look.contrast * float(np.clip(look.evenness, 0.02, 1.0))
        if best is None or merit > 1.15 * best[0]:
            best = merit, look
    return best[1] if best else None
