"""A pinhole camera that looks at the swing axis from above, from the side or obliquely."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from ..errors import BadInput
from ..records import Floats
from .settings import Film, Stage

ARC_SHARE = 0.36  # of the picture's height that the dot's radius fills, seen from above


@dataclass(frozen=True, eq=False)
class Camera:
    """Projects world points (x, y across, z up, the axis at the origin) to pixels: x right, y down.

    `turn` rows are the camera's right, down and forward directions; `focal_px` the focal length in pixels.
    """

    place: Floats
    turn: Floats
    focal_px: float
    centre: tuple[float, float]

    def project(self, points: Floats) -> Floats:
        """Pixels (..., 2) of world points (..., 3), m."""
        seen = (points - self.place) @ self.turn.T
        scale = self.focal_px / seen[..., 2]
        return np.stack(
            [self.centre[0] + scale * seen[..., 0], self.centre[1] + scale * seen[..., 1]], axis=-1
        )


ELEVATION = {"above": 90.0, "side": 4.0, "oblique": 48.0}


def camera_for(stage: Stage, film: Film) -> Camera:
    """A camera placed so that the dot's arc fills the picture well.

    Seen from above counter-clockwise in the world is counter-clockwise in the picture.
    """
    if stage.camera not in ELEVATION:
        raise BadInput(f"A camera {stage.camera!r} was asked for.", f"Needed: {', '.join(ELEVATION)}.")
    up = math.radians(ELEVATION[stage.camera])
    # The camera stands on the dot's side of the axis (the dot rests towards −y in the world).
    out = np.array([0.0, -math.cos(up), math.sin(up)])
    target = np.array([0.0, 0.0, 0.0]) if stage.camera != "side" else np.array([0.0, 0.0, 0.02])
    place = target + stage.distance_m * out
    forward = -out
    right = np.array([1.0, 0.0, 0.0])
    down = np.cross(forward, right)
    turn = np.stack([right, down, forward])
    focal = ARC_SHARE * film.height * stage.distance_m / stage.dot_radius_m
    return Camera(place, turn, focal, (0.5 * (film.width - 1) + 3.3, 0.5 * (film.height - 1) + 1.7))
