"""The article: painted plates that follow every turn of the body, their texture warped into the picture."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import cv2
import numpy as np

from ..records import Floats
from .bench import Image, Rng, as_levels, fill, stroke
from .body import Bodies
from .camera import Camera
from .settings import Stage

LONGEST_TEXTURE_PX = 3000
TEXTURE_FINER = 1.4  # texels a pixel: enough that warping does not soften the edges
RING_SHARE = 1.5  # of a ring's diameter to its dot's
SHADOW_SCALE = 4  # a shadow is soft: it is drawn at a quarter of the size
SHADOW_DEPTH = 0.36  # of the camera's distance, from the article down to the bench
BAR_M = 0.02
BAR_BGR = (118, 152, 178)  # the batten that the strings hold


@dataclass(frozen=True, eq=False)
class Plate:
    """A painted rectangle on the article.

    Plane coordinates (u, v), m, count from `origin` by `across` and `along`, all in the article's frame; the texture
    covers |u| <= half[0], |v| <= half[1]. `texture` is premultiplied BGRA.
    """

    origin: Floats
    across: Floats
    along: Floats
    half: tuple[float, float]
    texture: Image

    @property
    def from_texel(self) -> Floats:
        """(3, 3): texel (column, row) to (u, v)."""
        height, width = self.texture.shape[:2]
        x, y = 2.0 * self.half[0] / width, 2.0 * self.half[1] / height
        return np.array([[x, 0.0, 0.5 * x - self.half[0]], [0.0, y, 0.5 * y - self.half[1]], [0.0, 0.0, 1.0]])

    def plane(self, camera: Camera, bodies: Bodies, offset: Floats | None = None) -> Floats:
        """Homographies (..., 3, 3) from (u, v) to pixels; `offset` moves the plate in the world."""
        turned = np.einsum("...ij,kj->...ki", bodies.turn, np.stack([self.origin, self.across, self.along]))
        origin = turned[..., 0, :] + bodies.shift + (0.0 if offset is None else offset)
        return camera.plane(origin, turned[..., 1, :], turned[..., 2, :])


@dataclass(frozen=True, eq=False)
class Painted:
    """The article with its dots: plates from back to front, and where each dot lies on the last of them."""

    plates: tuple[Plate, ...]
    dots: tuple[tuple[float, float], ...]

    @property
    def face(self) -> Plate:
        """The plate that the dots are painted on."""
        return self.plates[-1]


def paint_article(stage: Stage, camera: Camera, rng: Rng, feet: Floats) -> Painted:
    """A paddle seen from above or obliquely, a shaft blank end on from the side.

    Parameters
    ----------
    feet : (n, 2) float
        Ends of the bars that the strings hold, m across and along the article (x, y); none where n is 0.
    """
    reach = stage.dot_diameter_m * (RING_SHARE if stage.ring else 1.0)
    density = (
        TEXTURE_FINER * camera.focal_px / max(stage.distance_m - stage.dot_radius_m, 0.2 * stage.distance_m)
    )
    x, y, z = np.eye(3)
    if stage.camera == "side":
        half = (max(0.17 * stage.dot_radius_m, 0.8 * reach), max(0.1 * stage.dot_radius_m, 0.7 * reach))
        end = _board(stage, half, density, rng)
        top = _board(stage, (half[0], stage.dot_radius_m), density, rng, tone=1.25)
        plates = [Plate(half[1] * z, x, -y, (half[0], stage.dot_radius_m), top)]
        if len(feet):
            bar = (float(np.abs(feet[:, 0]).max()) + BAR_M, 0.5 * BAR_M)
            plates.append(
                Plate(
                    0.5 * BAR_M * z,
                    x,
                    -z,
                    bar,
                    _board(replace(stage, article="wood", article_bgr=BAR_BGR), bar, density, rng),
                )
            )
        plates.append(Plate(-stage.dot_radius_m * y, x, -z, half, end))
        return Painted(tuple(plates), ((0.0, 0.0),))
    half = (max(0.2 * stage.dot_radius_m, 0.75 * reach), 1.12 * stage.dot_radius_m + 0.2 * reach)
    wide = _reach(half, feet)
    dots = ((0.0, stage.dot_radius_m), (0.0, -stage.dot_radius_m))[: stage.dots]
    return Painted((Plate(np.zeros(3), x, -y, wide, _paddle(stage, half, feet, density, rng)),), dots)


def _reach(half: tuple[float, float], feet: Floats) -> tuple[float, float]:
    """Half sides of a texture that holds the paddle and its bars, m."""
    far = np.abs(feet).max(axis=0) + 2.0 * BAR_M if len(feet) else np.zeros(2)
    return max(half[0], float(far[0])), max(half[1], float(far[1]))


def _canvas(half: tuple[float, float], density: float) -> tuple[int, int, float]:
    """Texture width and height and texels per metre, held below a size that memory likes."""
    density = min(density, 0.5 * LONGEST_TEXTURE_PX / max(half))
    return max(8, round(2 * half[0] * density)), max(8, round(2 * half[1] * density)), density


def _skin(stage: Stage, size: tuple[int, int], rng: Rng, tone: float = 1.0) -> Image:
    """The material over the whole texture, BGR."""
    width, height = size
    base = np.array(stage.article_bgr, dtype=np.float32) * tone
    yy, xx = np.mgrid[0:height, 0:width].astype(np.float32)
    if stage.article == "carbon":
        cell = 5.0  # texels a tow
        twill = np.sign(np.sin((xx + yy) * (math.pi / cell)) * np.sin((xx - yy) * (math.pi / (4 * cell))))
        shade = 5.0 * twill + 10.0 * np.cos((xx / width - 0.4) * 3.0)
    elif stage.article == "wood":
        rings = np.sin(xx / width * 40.0 + 1.5 * np.sin(yy / height * 5.0))
        grain = cv2.GaussianBlur(
            rng.normal(0.0, 1.0, (height, width)).astype(np.float32), (0, 0), 1.2, sigmaY=14
        )
        shade = 9.0 * rings + 70.0 * grain
    else:
        shade = np.zeros((height, width), dtype=np.float32)
    return as_levels(base + shade[..., None])


def _premultiplied(skin: Image, mask: Image) -> Image:
    alpha = mask.astype(np.float32)[..., None] / 255.0
    return np.concatenate([np.rint(skin * alpha).astype(np.uint8), mask[..., None]], axis=2)


def _board(stage: Stage, half: tuple[float, float], density: float, rng: Rng, tone: float = 1.0) -> Image:
    """A plain rectangular face, its rim inside the texture so that its edge is smooth."""
    width, height, _ = _canvas(half, density)
    mask = np.zeros((height, width), dtype=np.uint8)
    mask[1:-1, 1:-1] = 255
    return _premultiplied(_skin(stage, (width, height), rng, tone), mask)


def _paddle(stage: Stage, half: tuple[float, float], feet: Floats, density: float, rng: Rng) -> Image:
    """A double-bladed paddle, lying along the texture's rows."""
    wide = _reach(half, feet)
    width, height, scale = _canvas(wide, density)
    skin = _skin(stage, (width, height), rng)
    mask = np.zeros((height, width), dtype=np.uint8)
    middle = np.array([0.5 * width - 0.5, 0.5 * height - 0.5])
    share = np.linspace(0.0, 1.0, 60)
    shaft = 0.04 * stage.dot_radius_m
    # a blade: from the shaft at 0.45 it widens to its full at 0.72 and rounds off at the tip
    opening = np.clip((share - 0.45) / 0.27, 0.0, 1.0)
    rounding = np.sqrt(np.clip(1.0 - ((share - 0.86) / 0.14).clip(0.0) ** 2, 0.0, 1.0))
    breadth = (shaft + (half[0] * 0.98 - shaft) * opening**2 * (3.0 - 2.0 * opening)) * rounding
    along = share * half[1] * 0.995
    for sign in (1.0, -1.0):
        rim = np.concatenate([np.stack([breadth, along], 1), np.stack([-breadth, along], 1)[::-1]])
        fill(mask, middle + scale * rim * [1.0, sign], (255, 255, 255))
        ridge = middle + scale * np.array([[0.0, 0.4 * half[1]], [0.0, 0.62 * half[1]]]) * [1.0, sign]
        stroke(skin, ridge, tuple(int(min(v + 26, 255)) for v in stage.article_bgr), max(1.0, 0.012 * scale))  # type: ignore[arg-type]
    for x, y in feet:
        way = np.array([x, -y]) / max(math.hypot(x, y), 1e-9)
        across = np.array([-way[1], way[0]]) * 0.5 * BAR_M
        end = way * (math.hypot(x, y) + 0.5 * BAR_M)
        corners = middle + scale * np.array([-across, across, end + across, end - across])
        fill(mask, corners, (255, 255, 255))
        fill(skin, corners, BAR_BGR)
    return _premultiplied(skin, mask)


def draw_plate(picture: Image, plate: Plate, planes: Floats) -> None:
    """Lay a plate over the picture, the mean over the exposure's homographies (n, 3, 3)."""
    region = _region(plate, planes, picture)
    if region is None:
        return
    x0, y0, x1, y1 = region
    to_region = np.array([[1.0, 0.0, -x0], [0.0, 1.0, -y0], [0.0, 0.0, 1.0]])
    size = (x1 - x0, y1 - y0)
    warped = [
        cv2.warpPerspective(plate.texture, to_region @ plane @ plate.from_texel, size, flags=cv2.INTER_LINEAR)
        for plane in planes
    ]
    layer = warped[0]
    if len(warped) > 1:
        layer = np.rint(np.mean(warped, axis=0)).astype(np.uint8)
    blue, green, red, alpha = cv2.split(layer)
    rest = cv2.bitwise_not(alpha)
    under = picture[y0:y1, x0:x1]
    kept = cv2.multiply(under, cv2.merge([rest, rest, rest]), scale=1.0 / 255.0)
    picture[y0:y1, x0:x1] = cv2.add(kept, cv2.merge([blue, green, red]))


def draw_shadow(picture: Image, plate: Plate, plane: Floats, strength: float = 0.4) -> None:
    """Darken the bench under the plate: `plane` (3, 3) is that of the plate let down onto the bench."""
    region = _region(plate, plane[None], picture, margin=16 * SHADOW_SCALE)
    if region is None:
        return
    x0, y0, x1, y1 = region
    k = SHADOW_SCALE
    size = (max(1, (x1 - x0) // k), max(1, (y1 - y0) // k))
    shrink = np.array([[1.0 / k, 0.0, -x0 / k], [0.0, 1.0 / k, -y0 / k], [0.0, 0.0, 1.0]])
    # half the texture's size is plenty here, and saves most of the reading
    alpha = cv2.warpPerspective(
        plate.texture[..., 3], shrink @ plane @ plate.from_texel, size, flags=cv2.INTER_AREA
    )
    soft = cv2.GaussianBlur(alpha, (0, 0), 4.0)
    dark = cv2.resize(255 - cv2.convertScaleAbs(soft, alpha=strength), (x1 - x0, y1 - y0))
    under = picture[y0:y1, x0:x1]
    picture[y0:y1, x0:x1] = cv2.multiply(under, cv2.merge([dark, dark, dark]), scale=1.0 / 255.0)


def _region(
    plate: Plate, planes: Floats, picture: Image, margin: int = 2
) -> tuple[int, int, int, int] | None:
    """The part of the picture that the plate touches: x0, y0, x1, y1; None where it is out of it."""
    u, v = plate.half
    corners = np.array([[-u, -v, 1.0], [u, -v, 1.0], [u, v, 1.0], [-u, v, 1.0]])
    seen = np.einsum("nij,kj->nki", planes, corners)
    if (seen[..., 2] <= 1e-6).any():
        return None  # partly behind the camera
    points = (seen[..., :2] / seen[..., 2:]).reshape(-1, 2)
    height, width = picture.shape[:2]
    x0, y0 = (int(n) for n in np.clip(np.floor(points.min(axis=0)) - margin, 0, (width, height)))
    x1, y1 = (int(n) for n in np.clip(np.ceil(points.max(axis=0)) + margin + 1, 0, (width, height)))
    return (x0, y0, x1, y1) if x1 > x0 and y1 > y0 else None
