"""From what the camera saw to the swing's own coordinate.

- looking along the swing axis ("above"; for a knife edge: along the edge) the dot runs on an arc, and the angle about
  the arc's centre is the swing angle, with no scale needed;
- two dots on the article: the direction of the line between them;
- at a slant the arc is part of an ellipse, and the angle that on the circle behind it;
- from the side the dot runs to and fro as R sin q; R in pixels from dot radius and dot diameter, where both are known;
- a series from elsewhere: taken as it is.

Where nobody said where the camera stood, the path decides: an arc that is significantly bent is seen along the axis,
a straight one from the side.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from swingtrack.errors import BadSeries, NothingToMeasure
from swingtrack.records import Doubt, Floats, Path, Series, Track, View
from swingtrack.signal.circle import Circle, fit_circle
from swingtrack.signal.ellipse import Ellipse, fit_ellipse

# The arc's rise over its own uncertainty from which a path counts as bent; well beyond chance, so that a straight
# path with a little drift is not taken for the arc of a huge circle.
BENT = 8.0
# An arc that turns through less than this about its centre is hardly bent; its radius, and so the amplitude, is poor.
LEAST_ARC_RAD = 0.02
# The camera's axis is taken to be within about 5° of the swing axis (common practice, no source): the arc's radius is
# then out by 1.5 ε² at most.
SKEW_RELATIVE_U = 0.01
# The slanted view's own simplifications (camera level, far off, no bounce) are worth some 3 % (from drawn clips).
SLANT_RELATIVE_U = 0.03
# How well a dot's diameter in pixels gives the scale (blur, threshold): 3 % (judgment from drawn clips).
DIAMETER_RELATIVE_U = 0.03
FEWEST_SAMPLES = 20


@dataclass(frozen=True, eq=False)
class Coordinate:
    """The coordinate that is fitted.

    Parameters
    ----------
    t, y, u : (n,) float
        Times as in the input, s; values; standard uncertainties (relative to one another).
    unit : str
        "rad" (the angle), "px" (a displacement as R sin q or of unknown scale) or "".
    camera : str
        "above", "side", "oblique", "two dots" or "series".
    radius_px : float or None
        Pixels a radian; in the sine of a side view the R of R sin q.
    amplitude_relative_u : float
        Doubt of the angle's scale.
    sine : bool
        y = R sin q with `radius_px` for R.
    """

    t: Floats
    y: Floats
    u: Floats
    unit: str
    camera: str
    radius_px: float | None = None
    amplitude_relative_u: float = 0.0
    sine: bool = False
    doubts: tuple[Doubt, ...] = ()

    @property
    def amplitude_known(self) -> bool:
        """Whether the coordinate tells the swing angle."""
        return self.unit == "rad" or self.sine


def find_coordinate(data: Path | Series, view: View | None, *, facing: bool = False) -> Coordinate:
    """The swing coordinate of a path or a series.

    `facing`: the swing axis is level (a knife edge), so that a camera at the side looks along it.

    Raises
    ------
    BadSeries
        Times that do not rise, or arrays of unequal length.
    NothingToMeasure
        Too few usable samples.
    """
    if isinstance(data, Series):
        return _from_series(data)
    if len(data.tracks) >= 2:
        return _from_two_dots(data, view)
    if not data.tracks:
        raise NothingToMeasure(
            "The path holds no dot.", "One dot's places are needed.", "Follow the clip again."
        )
    return _from_one_dot(data, data.tracks[0], view, facing)


def _from_series(series: Series) -> Coordinate:
    u = np.ones(len(series.y)) if series.u is None else np.asarray(series.u, dtype=float)
    t, y, u = _clean(series.t_s, (np.asarray(series.y, dtype=float),), u, np.ones(len(series.y), dtype=bool))
    doubts = ()
    if series.unit not in ("rad", ""):
        raise BadSeries(
            f"The series is in {series.unit!r}.",
            "The unit has to be rad, or unknown.",
            "Convert it to radians.",
        )
    return Coordinate(t, y[0], u, series.unit, "series", doubts=doubts)


def _clean(
    t: Floats, columns: tuple[Floats, ...], u: Floats, seen: np.ndarray
) -> tuple[Floats, tuple[Floats, ...], Floats]:
    """Finite samples at rising times; those at a time that was there already are dropped."""
    t = np.asarray(t, dtype=float)
    if any(len(column) != len(t) for column in (*columns, u, seen)):
        raise BadSeries(
            "Times and values differ in number.", "One value a time is needed.", "Look at the columns."
        )
    usable = np.asarray(seen, dtype=bool) & np.isfinite(t) & np.isfinite(u) & (u > 0)
    for column in columns:
        usable &= np.isfinite(column)
    t, columns, u = t[usable], tuple(column[usable] for column in columns), u[usable]
    backwards = np.flatnonzero(np.diff(t) < 0)
    if len(backwards):
        i = int(backwards[0])
        raise BadSeries(
            f"Time runs backwards: {t[i]:.6g} s is followed by {t[i + 1]:.6g} s.",
            "Times have to rise.",
            "Sort the rows, or cut the file where the clock was reset.",
        )
    if len(t) < FEWEST_SAMPLES:
        raise NothingToMeasure(
            f"Only {len(t)} usable samples.",
            f"At least {FEWEST_SAMPLES} are needed.",
            "Give a longer record.",
        )
    fresh = np.concatenate([[True], np.diff(t) > 0])
    return t[fresh], tuple(column[fresh] for column in columns), u[fresh]


def _from_two_dots(path: Path, view: View | None) -> Coordinate:
    a, b = path.tracks[0], path.tracks[1]
    u = np.sqrt((a.u_x_px**2 + a.u_y_px**2 + b.u_x_px**2 + b.u_y_px**2) / 2)
    t, (dx, dy), u = _clean(path.t_s, (b.x_px - a.x_px, b.y_px - a.y_px), u, a.seen & b.seen)
    if view is not None and view.camera == "side":
        radius = _known_radius(path, view)
        return _from_side(t, dx, u, None if radius is None else (2 * radius[0], radius[1]))
    distance = np.hypot(dx, dy)
    far = float(np.median(distance))
    angle = np.unwrap(np.arctan2(-dy, dx))
    return Coordinate(
        t,
        angle,
        u / np.maximum(distance, 1e-9),
        "rad",
        "two dots",
        far,
        float(np.std(distance) / max(far, 1e-9) / 2),
    )


def _from_one_dot(path: Path, track: Track, view: View | None, facing: bool) -> Coordinate:
    u = np.hypot(track.u_x_px, track.u_y_px) / np.sqrt(2)
    t, (x, y), u = _clean(path.t_s, (track.x_px, track.y_px), u, track.seen)
    camera = view.camera if view is not None else None
    weight = float(np.median(u)) / u * _near(x, y)
    circle = fit_circle(x, y, weight)
    bent = circle is not None and circle.sagitta_px > BENT * circle.sagitta_u_px
    radius = _known_radius(path, view)
    doubts: tuple[Doubt, ...] = ()
    if camera == "side" and facing and bent:
        camera = "above"  # a knife edge is seen along its axis from the side
    if camera is None:
        camera = "above" if bent else "side"
        if bent and circle is not None and radius is not None and _disagree(circle, radius):
            camera = "oblique"
        doubts = (_unsaid(camera),)
    if camera == "oblique" and bent:
        seen = fit_ellipse(
            x, y, weight, radius_px=radius and radius[0], radius_relative_u=radius[1] if radius else 0.1
        )
        if seen is not None:
            return _from_ellipse(t, (x, y), u, seen, doubts)
    if camera == "above" and circle is not None and bent:
        return _from_arc(t, (x, y), u, circle, doubts)
    if camera == "above":
        doubts += (
            Doubt(
                "amplitude-unknown",
                "The dot's path is too straight to show the arc's centre, so the swing's angle is unknown.",
                "Let it swing farther, or paint the dot farther out.",
            ),
        )
        return Coordinate(t, _principal(x, y), u, "px", "above", doubts=doubts)
    return _from_side(t, _principal(x, y), u, radius, doubts)


def _unsaid(camera: str) -> Doubt:
    seen = {
        "above": "an arc, so it is taken as seen along the swing axis (from above)",
        "side": "straight, so it is taken as seen from the side",
        "oblique": "an arc flatter than the dot's radius makes, so it is taken as seen at a slant",
    }[camera]
    return Doubt(
        "camera-not-said",
        f"Nobody said where the camera stood; the dot's path is {seen}.",
        'Say it in the rig file: [view] from = "above", "side" or "oblique".',
    )


def _disagree(circle: Circle, radius: tuple[float, float]) -> bool:
    """Whether the arc's radius is clearly not the dot's own."""
    away = abs(np.log(circle.radius_px / radius[0]))
    return bool(away > max(0.15, 4 * np.hypot(circle.u_radius_px / circle.radius_px, radius[1])))


def _known_radius(path: Path, view: View | None) -> tuple[float, float] | None:
    """Dot radius in pixels, by the dot's own size in the picture, and its relative standard uncertainty."""
    diameter_px = path.marker.diameter_px if path.marker is not None else None
    if view is None or view.dot_radius_m is None or view.dot_diameter_m is None or not diameter_px:
        return None
    relative = np.sqrt(
        view.dot_radius_m.relative_u**2 + view.dot_diameter_m.relative_u**2 + DIAMETER_RELATIVE_U**2
    )
    return view.dot_radius_m.value * diameter_px / view.dot_diameter_m.value, float(relative)


def _near(x: Floats, y: Floats) -> Floats:
    """1 for places within reach of the rest, 0 for wild ones that would bend the circle."""
    cx, cy = np.median(x), np.median(y)
    d = np.hypot(x - cx, y - cy)
    return np.asarray((d <= 4 * np.percentile(d, 75) + 1e-9).astype(float))


def _principal(x: Floats, y: Floats) -> Floats:
    """Displacement along the direction of largest extent, positive to the right (or up)."""
    points = np.column_stack([x - np.median(x), y - np.median(y)])
    _, vectors = np.linalg.eigh(points.T @ points)
    direction = vectors[:, 1]
    if direction[0] < 0 or (direction[0] == 0 and direction[1] > 0):
        direction = -direction
    return np.asarray(points @ direction)


def _from_arc(
    t: Floats, xy: tuple[Floats, Floats], u: Floats, circle: Circle, doubts: tuple[Doubt, ...]
) -> Coordinate:
    x, y = xy
    dx, dy = x - circle.x_px, -(y - circle.y_px)  # y up: counter-clockwise as seen is positive
    rest = np.arctan2(np.median(dy), np.median(dx))
    angle = np.angle(np.exp(1j * (np.arctan2(dy, dx) - rest)))
    relative = float(np.hypot(circle.u_radius_px / circle.radius_px, SKEW_RELATIVE_U))
    return Coordinate(
        t, angle, u / circle.radius_px, "rad", "above", circle.radius_px, relative, doubts=doubts
    )


def _from_ellipse(
    t: Floats, xy: tuple[Floats, Floats], u: Floats, ellipse: Ellipse, doubts: tuple[Doubt, ...]
) -> Coordinate:
    x, y = xy
    raw = ellipse.angle(x, y)
    rest = float(np.angle(np.mean(np.exp(1j * raw))))
    angle = np.angle(np.exp(1j * (raw - rest)))
    relative = float(np.hypot(ellipse.relative_u(x, y), SLANT_RELATIVE_U))
    # The pixel's worth of angle along the ellipse, which is shorter where the circle runs towards the camera.
    stretch = ellipse.radius_px * np.hypot(np.cos(raw), ellipse.slant * np.sin(raw))
    return Coordinate(
        t, angle, u / stretch, "rad", "oblique", float(np.median(stretch)), relative, doubts=doubts
    )


def _from_side(
    t: Floats, along: Floats, u: Floats, radius: tuple[float, float] | None, doubts: tuple[Doubt, ...] = ()
) -> Coordinate:
    """Displacement seen from the side; `radius` R in pixels and its relative uncertainty, where known."""
    if radius is not None and np.ptp(along) < 1.98 * radius[0]:
        return Coordinate(t, along, u, "px", "side", radius[0], radius[1], True, doubts)
    if radius is not None:
        doubts += (
            Doubt(
                "view-disagrees",
                f"The dot runs over {np.ptp(along):.0f} px, more than a circle of {radius[0]:.0f} px allows.",
                "Check dot_radius and dot_diameter, and that the camera looks from the side.",
            ),
        )
    return Coordinate(t, along, u, "px", "side", doubts=doubts)
