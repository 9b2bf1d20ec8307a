"""A pinhole camera that looks at the swing axis from above, from the side or obliquely."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from ..records import Floats
from .settings import Film, Stage

ELEVATION = {"above": 90.0, "side": 4.0, "oblique": 48.0}
OFF_CENTRE_PX = (3.3, 1.7)  # nobody centres the axis exactly, and whole numbers hide errors of half a pixel


@dataclass(frozen=True, eq=False)
class Camera:
    """Projects world points (x, y across, z up, the axis at the origin) to pixels: x right, y down.

    `turn` rows are the camera's right, down and forward directions; `focal_px` the focal length in pixels.
    """

    place: Floats
    turn: Floats
    focal_px: float
    centre: tuple[float, float]

    @property
    def matrix(self) -> Floats:
        """(3, 3): world direction from the camera to homogeneous pixels."""
        inside = np.array(
            [[self.focal_px, 0.0, self.centre[0]], [0.0, self.focal_px, self.centre[1]], [0, 0, 1]]
        )
        return np.asarray(inside @ self.turn, dtype=np.float64)

    def project(self, points: Floats) -> Floats:
        """Pixels (..., 2) of world points (..., 3), m."""
        seen = (points - self.place) @ self.matrix.T
        return np.asarray(seen[..., :2] / seen[..., 2:], dtype=np.float64)

    def plane(self, origin: Floats, across: Floats, along: Floats) -> Floats:
        """Homography (..., 3, 3) from a plane's own coordinates (m, from `origin` by the two directions) to pixels."""
        columns = np.stack([across, along, origin - self.place], axis=-1)
        return np.asarray(self.matrix @ columns, dtype=np.float64)

    def moved(self, shift: Floats) -> Camera:
        """The camera shaken: the whole picture shifted by `shift` (2,), px."""
        return replace(self, centre=(self.centre[0] + float(shift[0]), self.centre[1] + float(shift[1])))


def camera_for(stage: Stage, film: Film) -> Camera:
    """A camera placed so that the dot's arc fills the picture as `stage.arc_share` says.

    Seen from above counter-clockwise in the world is counter-clockwise in the picture. The camera stands on the
    dot's side of the axis (the dot rests towards −y in the world), `aside_deg` round it.
    """
    elevation = ELEVATION[stage.camera]
    if stage.camera == "oblique" and stage.elevation_deg is not None:
        elevation = stage.elevation_deg
    up, round_ = math.radians(elevation), math.radians(stage.aside_deg)
    level = np.array([math.sin(round_), -math.cos(round_), 0.0])
    out = math.cos(up) * level + np.array([0.0, 0.0, math.sin(up)])
    target = np.array([0.0, 0.0, 0.02]) if stage.camera == "side" else np.zeros(3)
    right = np.array([math.cos(round_), math.sin(round_), 0.0])
    turn = np.stack([right, np.cross(-out, right), -out])
    # in an upright picture the width bounds the arc: a paddle is half as wide again as its dot's radius
    frame = min(film.height, 1.25 * film.width)
    focal = stage.arc_share * frame * stage.distance_m / stage.dot_radius_m
    centre = (0.5 * (film.width - 1) + OFF_CENTRE_PX[0], 0.5 * (film.height - 1) + OFF_CENTRE_PX[1])
    return Camera(target + stage.distance_m * out, turn, focal, centre)


def sized_stage(stage: Stage, camera: Camera) -> Stage:
    """The stage with the dot's size in both units, at rest."""
    at_rest = np.array([0.0, -stage.dot_radius_m, 0.0])
    scale = camera.focal_px / float((at_rest - camera.place) @ camera.turn[2])
    if stage.dot_diameter_px is not None:
        return replace(stage, dot_diameter_m=stage.dot_diameter_px / scale)
    return replace(stage, dot_diameter_px=stage.dot_diameter_m * scale)
