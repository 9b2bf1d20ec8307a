"""Films a moving article: works out the dot's path exactly, then draws frame after frame."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Any

import cv2
import numpy as np

from ..errors import BadInput
from ..records import Floats
from . import people
from .article import RING_SHARE, SHADOW_DEPTH, Painted, draw_plate, draw_shadow, paint_article
from .bench import Image, as_levels, draw_bench
from .body import Bodies, Motion
from .camera import Camera, camera_for, sized_stage
from .clock import FrameTimes
from .disc import Ellipses, project_disc, soft_cover
from .mechanism import Strings
from .picture import Planes, SensorNoise, light_of_rows, lit, to_planes
from .settings import Film, RehearsalSettings, Stage

SMEAR_STEP_PX = 1.2  # between sub-exposures: with the lens's blur no steps are left
FEWEST_STEPS, MOST_STEPS = 3, 33
PLATE_STEPS = 5  # sub-exposures of the article itself, whose edges nobody measures
RING_BGR = (22, 22, 22)


@dataclass(frozen=True, eq=False)
class Shooting:
    """All that is known of a clip before a pixel is drawn.

    Parameters
    ----------
    bodies : (n_frames, n_sub) poses over each exposure
    ellipses : for each dot, (n_frames, n_sub), camera shake included
    shake_px : (n_frames, 2)
    """

    stage: Stage
    film: Film
    camera: Camera
    painted: Painted
    times: FrameTimes
    bodies: Bodies
    ellipses: tuple[Ellipses, ...]
    shake_px: Floats
    strings: Strings | None
    release_s: float
    period_s: float
    seed: int

    def places(self, dot: int = 0) -> Floats:
        """Where the dot is in each frame of the file (n_frames, 2), upright px: the centroid of its picture."""
        places = self.ellipses[dot].centroid
        for frame in np.flatnonzero(self.times.repeated):
            places[frame] = places[frame - 1]
        return places

    @property
    def diameter_px(self) -> float:
        """Geometric mean of the ellipse's axes in the first frame."""
        return float(2.0 * math.sqrt(self.ellipses[0].areas[0, 0] / math.pi))


def set_up(
    settings: RehearsalSettings, motion: Motion, times: FrameTimes, strings: Strings | None
) -> Shooting:
    """Place the camera, pose the article over every exposure and project its dots.

    Raises
    ------
    BadInput
        The dot would leave the picture, or two dots are asked for where one hides the other.
    """
    film = settings.film
    camera = camera_for(settings.stage, film)
    stage = sized_stage(settings.stage, camera)
    if stage.dots == 2 and stage.camera == "side":
        raise BadInput(
            "Two dots were asked for from the side.",
            "Needed: a view that shows both ends.",
            "Film from above.",
        )
    rng = np.random.default_rng((settings.seed, 1))
    painted = paint_article(stage, camera, rng, _feet(stage, strings))
    shake = _shake(film, times.taken_s, rng)
    instants = times.taken_s + _row_delay(film, stage, camera, painted, motion, times.taken_s)
    bodies = motion.at(instants[:, None] + _exposure(film, stage, camera, painted, motion, instants))
    ellipses = []
    for middle in painted.dots:
        seen = project_disc(painted.face.plane(camera, bodies), 0.5 * stage.dot_diameter_m, middle)
        seen = Ellipses(seen.centres + shake[:, None, :], seen.shapes)
        ellipses.append(_sheared(seen, film, times.taken_s))
    shooting = Shooting(
        stage, film, camera, painted, times, bodies, tuple(ellipses), shake, strings, settings.release_s,
        motion.swing.period_s, settings.seed,
    )  # fmt: skip
    _check_inside(shooting)
    return shooting


def draw_frames(shooting: Shooting, progress: Callable[[float], None] | None = None) -> Iterator[Planes]:
    """The stored pictures, one for each frame of the file."""
    film, times = shooting.film, shooting.times
    rng = np.random.default_rng((shooting.seed, 2))
    bench = draw_bench(shooting.stage, film, rng, shooting.ellipses[0].centroid)
    if film.softness_px > 0.0:
        bench = cv2.GaussianBlur(bench, (0, 0), film.softness_px)
    noise: SensorNoise | None = None
    last: Planes | None = None
    for frame in range(times.taken_s.size):
        if progress is not None and frame % 10 == 0:
            progress(frame / times.taken_s.size)
        if last is None or not times.repeated[frame]:
            picture = draw_picture(shooting, bench, frame)
            if film.rotation_deg:
                picture = np.ascontiguousarray(np.rot90(picture, k=film.rotation_deg // 90))
            planes = to_planes(picture)
            if noise is None:
                noise = SensorNoise(film, planes.luma.shape[0], planes.luma.shape[1], rng)
            light = light_of_rows(film, float(times.taken_s[frame]), planes.luma.shape[0])
            last = noise.added(lit(planes, light))
        yield last
    if progress is not None:
        progress(1.0)


def draw_picture(shooting: Shooting, bench: Image, frame: int) -> Image:
    """One upright BGR picture without noise, from the back to the front."""
    stage, film, shift = shooting.stage, shooting.film, shooting.shake_px[frame]
    camera = shooting.camera.moved(shift)
    bodies = shooting.bodies.at(frame)
    middle = bodies.at(bodies.angle_rad.size // 2)
    t = float(shooting.times.taken_s[frame])
    picture = _shifted(bench, shift) if film.shake_px else bench.copy()
    steps = np.unique(
        np.linspace(0, bodies.angle_rad.size - 1, _plate_steps(shooting, frame)).round().astype(int)
    )
    if stage.shadow and stage.camera != "side":
        below = np.array([0.10, 0.07, -SHADOW_DEPTH]) * stage.distance_m
        draw_shadow(picture, shooting.painted.face, shooting.painted.face.plane(camera, middle, below))
    for plate in shooting.painted.plates:
        draw_plate(picture, plate, plate.plane(camera, bodies.at((steps,))))
    for dot in shooting.ellipses:
        draw_dot(picture, dot.at(frame), stage, film.softness_px)
    if stage.strings and shooting.strings is not None:
        over = stage.string_over_dot and stage.camera != "side"
        people.draw_strings(picture, camera, shooting.strings, middle, over)
    if stage.string_over_dot and stage.camera == "side":
        people.draw_line_in_front(picture, shooting.camera.centre[0] + float(shift[0]))
    if stage.hand:
        people.draw_hand(picture, camera, stage, middle, people.Hand.at(t, shooting.release_s))
    if stage.mover:
        people.draw_mover(picture, stage, film, t, shooting.period_s)
    return picture


def draw_dot(picture: Image, ellipses: Ellipses, stage: Stage, softness_px: float) -> None:
    """Paint the dot, and its ring, smeared over the exposure's ellipses (n,)."""
    if stage.ring:
        wide = Ellipses(ellipses.centres, ellipses.shapes * RING_SHARE**2)
        _lay(picture, soft_cover(wide, softness_px), RING_BGR)
    _lay(picture, soft_cover(ellipses, softness_px), stage.dot_bgr)


def _lay(picture: Image, patch: tuple[Any, int, int], colour: tuple[int, int, int]) -> None:
    """Lay a colour over the picture by coverage, cut at the picture's edge."""
    cover, x0, y0 = patch
    height, width = picture.shape[:2]
    x1, y1 = min(x0 + cover.shape[1], width), min(y0 + cover.shape[0], height)
    left, top = max(x0, 0), max(y0, 0)
    if left >= x1 or top >= y1:
        return
    part = cover[top - y0 : y1 - y0, left - x0 : x1 - x0, None]
    under = picture[top:y1, left:x1].astype(np.float32)
    paint = np.array(colour, dtype=np.float32)
    picture[top:y1, left:x1] = as_levels(under + part * (paint - under))


def _feet(stage: Stage, strings: Strings | None) -> Floats:
    """Where the strings hold the article (n, 2), m: on bars, unless two of them are tied to the shaft itself."""
    if not stage.strings or strings is None or (stage.string_over_dot and strings.count == 2):
        return np.zeros((0, 2))
    turn = people.string_directions(strings.count, stage.string_over_dot and stage.camera != "side")
    return np.asarray(strings.lower_m * np.stack([np.cos(turn), np.sin(turn)], axis=1), dtype=np.float64)


def _shake(film: Film, t: Floats, rng: np.random.Generator) -> Floats:
    """Slow movement of a phone on a wobbly stand, px (n, 2)."""
    phase = rng.uniform(0.0, 2.0 * math.pi, 4)
    x = np.sin(1.1 * t + phase[0]) + 0.4 * np.sin(5.3 * t + phase[1])
    y = 0.7 * np.sin(0.8 * t + phase[2]) + 0.3 * np.sin(6.7 * t + phase[3])
    return np.asarray(film.shake_px * np.stack([x, y], axis=1), dtype=np.float64)


def _shifted(bench: Image, shift: Floats) -> Image:
    matrix = np.array([[1.0, 0.0, shift[0]], [0.0, 1.0, shift[1]]])
    size = (bench.shape[1], bench.shape[0])
    return cv2.warpAffine(bench, matrix, size, flags=cv2.INTER_LINEAR, borderMode=cv2.BORDER_REPLICATE)


def _centres(camera: Camera, painted: Painted, motion: Motion, t: Floats) -> Floats:
    """Projected middle of the first dot at times of any shape (..., 2)."""
    u, v = painted.dots[0]
    seen = painted.face.plane(camera, motion.at(t)) @ np.array([u, v, 1.0])
    return np.asarray(seen[..., :2] / seen[..., 2:], dtype=np.float64)


def _stored_row(film: Film, places: Floats) -> Floats:
    """Row in the stored picture as a share of its rows, 0 to 1, of upright places (..., 2)."""
    x, y = (places[..., 0] + 0.5) / film.width, (places[..., 1] + 0.5) / film.height
    return {0: y, 90: 1.0 - x, 180: 1.0 - y, 270: x}[film.rotation_deg]


def _row_delay(
    film: Film, stage: Stage, camera: Camera, painted: Painted, motion: Motion, t: Floats
) -> Floats:
    """By how much later than the frame's time the dot's own row is read, s (n,)."""
    delay = np.zeros(t.shape)
    if film.readout_s == 0.0:
        return delay
    for _ in range(
        4
    ):  # the dot moves while its row is waited for: a fixed point, each step gains a factor of 30
        row = _stored_row(film, _centres(camera, painted, motion, t + delay))
        delay = film.readout_s * (row - 0.5)
    return delay


def _exposure(
    film: Film, stage: Stage, camera: Camera, painted: Painted, motion: Motion, t: Floats
) -> Floats:
    """Instants (n_sub,) within the exposure, centred on the row's time, close enough for a smooth smear."""
    before, after = (
        _centres(camera, painted, motion, t + sign * 0.5 * film.exposure_s) for sign in (-1.0, 1.0)
    )
    smear = float(np.hypot(*(after - before).T).max())
    steps = int(np.clip(math.ceil(smear / SMEAR_STEP_PX), FEWEST_STEPS, MOST_STEPS)) | 1
    return ((np.arange(steps) + 0.5) / steps - 0.5) * film.exposure_s


def _sheared(seen: Ellipses, film: Film, t: Floats) -> Ellipses:
    """A rolling shutter shears what moves: a point `d` rows below the dot's middle is seen d·R/H later."""
    if film.readout_s == 0.0 or t.size < 3:
        return seen
    speed = np.gradient(seen.centroid, t, axis=0)
    turned = film.rotation_deg in (90, 270)
    axis = 0 if turned else 1  # the upright coordinate that runs with the stored rows
    sign = {0: 1.0, 90: -1.0, 180: -1.0, 270: 1.0}[film.rotation_deg]
    a_row = sign * film.readout_s / (film.width if turned else film.height)
    shear = np.tile(np.eye(2), (t.size, 1, 1))
    stretch = 1.0 / (1.0 - speed[:, axis] * a_row)
    shear[:, :, axis] += speed * (a_row * stretch)[:, None]
    shapes = shear[:, None] @ seen.shapes @ np.swapaxes(shear, -1, -2)[:, None]
    return Ellipses(seen.centres, np.asarray(shapes, dtype=np.float64))


def _plate_steps(shooting: Shooting, frame: int) -> int:
    """One drawing of the article does while it hardly moves."""
    centres = shooting.ellipses[0].centres[frame]
    return PLATE_STEPS if float(np.hypot(*(centres[-1] - centres[0]))) > 1.0 else 1


def _check_inside(shooting: Shooting) -> None:
    film = shooting.film
    for dot in range(len(shooting.ellipses)):
        x, y = shooting.places(dot).T
        edge = 0.5 * shooting.diameter_px
        if (
            min(x.min(), y.min()) < edge
            or x.max() > film.width - 1 - edge
            or y.max() > film.height - 1 - edge
        ):
            raise BadInput(
                f"The dot would leave the picture: it comes to ({x.min():.0f}…{x.max():.0f}, {y.min():.0f}…{y.max():.0f}) "
                f"in one of {film.width}x{film.height}.",
                "Needed: the whole arc in the picture.",
                "Film from further away (a smaller arc_share), with a smaller amplitude, or with less shake.",
            )
