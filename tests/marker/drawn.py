"""Drawn pictures of a swinging dot with known truth, before any compression.

The dot is a soft-edged ellipse, anti-aliased by supersampling in space and over the exposure; planes are 4:2:0
with left-sited chroma (as H.264 has it unless it says otherwise). The same drawing serves for the Cramér–Rao
bound: its derivative with respect to the place is taken numerically on the noise-free picture.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass, field, replace

import numpy as np

from swingtrack.records import Floats, Frame

Colour = tuple[float, float, float]  # luma, chroma u, chroma v, 8-bit levels

RED: Colour = (90.0, 105.0, 205.0)
GREY: Colour = (150.0, 128.0, 128.0)
WOOD: Colour = (120.0, 118.0, 140.0)
WHITE: Colour = (225.0, 128.0, 128.0)
BLACK: Colour = (35.0, 128.0, 128.0)


@dataclass(frozen=True)
class Drawing:
    """What is drawn. Lengths in pixels of the stored picture, angles in radians.

    `exposure` is the share of the frame interval during which the shutter is open.
    """

    width: int = 480
    height: int = 270
    frames: int = 120
    rate_hz: float = 60.0
    diameter: float = 24.0
    squash: float = 1.0  # minor over major axis
    slant: float = 0.0  # of the major axis
    inside: Colour = RED
    around: Colour = GREY
    ring: Colour | None = None  # a ring of this colour, 1.5 times the dot's diameter
    bench: Colour = GREY
    noise: float = 2.0
    exposure: float = 0.0
    softness: float = 0.7  # standard deviation of the edge's blur
    amplitude: tuple[float, float] = (90.0, 0.0)
    centre: tuple[float, float] = (240.0, 135.0)
    period_s: float = 1.3
    phase: float = 0.3
    decay_per_s: float = 0.02
    light_slope: tuple[float, float] = (0.0, 0.0)  # levels per pixel across the picture
    occluded: tuple[tuple[float, float], ...] = ()  # spans of time in which something hides the dot
    rotation_deg: int = 0
    depth: int = 8
    shake: Callable[[float], tuple[float, float]] | None = None
    texture: float = 0.0  # spread of a fixed pattern on the bench
    seed: int = 1


def place(drawing: Drawing, t_s: Floats | float) -> tuple[Floats, Floats]:
    """Where the dot's centre is at an instant, without shake."""
    t = np.asarray(t_s, float)
    swing = np.exp(-drawing.decay_per_s * t) * np.cos(2 * np.pi * t / drawing.period_s + drawing.phase)
    bow = swing**2
    ax, ay = drawing.amplitude
    return drawing.centre[0] + ax * swing, drawing.centre[1] + ay * bow


def mean_place(drawing: Drawing, t_s: Floats | float) -> tuple[Floats, Floats]:
    """Where the dot's picture is: its place averaged over the exposure, which lags behind in a turn by a τ² / 24."""
    t = np.asarray(t_s, float)
    open_s = drawing.exposure / drawing.rate_hz
    instants = t[..., None] + (np.arange(65) - 32) / 65 * open_s
    x, y = place(drawing, instants)
    return x.mean(axis=-1), y.mean(axis=-1)


def coverage(
    drawing: Drawing, points: tuple[Floats, Floats], centres: tuple[Floats, Floats], radius: float
) -> Floats:
    """Share of the exposure for which each point lies within the soft-edged ellipse, (…) over (k,) centres."""
    x, y = points
    c, s = np.cos(drawing.slant), np.sin(drawing.slant)
    total = np.zeros(np.broadcast(x, y).shape)
    for cx, cy in zip(*centres, strict=True):
        along, across = (x - cx) * c + (y - cy) * s, -(x - cx) * s + (y - cy) * c
        rho = np.hypot(along, across / drawing.squash)
        total += 1.0 / (1.0 + np.exp(np.clip(1.7 * (rho - radius) / drawing.softness, -40, 40)))
    return total / len(centres[0])


@dataclass
class Drawn:
    """A `FrameSource` of a `Drawing`; `truth(t)` gives upright coordinates."""

    drawing: Drawing
    _noise: np.ndarray = field(init=False, repr=False)
    _bench: list[np.ndarray] = field(init=False, repr=False)

    def __post_init__(self) -> None:
        d = self.drawing
        rng = np.random.default_rng(d.seed)
        self._noise = rng.standard_normal(d.width * d.height * 4).astype(np.float32) * d.noise
        yy, xx = np.mgrid[: d.height, : d.width].astype(np.float32)
        pattern = _smooth_pattern(rng, d.height, d.width) * d.texture
        luma = (
            d.bench[0]
            + pattern
            + d.light_slope[0] * (xx - d.width / 2)
            + d.light_slope[1] * (yy - d.height / 2)
        )
        half = (d.height // 2, d.width // 2)
        self._bench = [luma, np.full(half, d.bench[1], np.float32), np.full(half, d.bench[2], np.float32)]

    @property
    def width(self) -> int:
        return self.drawing.width

    @property
    def height(self) -> int:
        return self.drawing.height

    @property
    def rotation_deg(self) -> int:
        return self.drawing.rotation_deg

    def upright(self, x_px: Floats, y_px: Floats) -> tuple[Floats, Floats]:
        """Stored to shown: the picture is turned counter-clockwise by `rotation_deg`."""
        x, y, w, h = np.asarray(x_px, float), np.asarray(y_px, float), self.width - 1, self.height - 1
        return {0: (x, y), 90: (y, w - x), 180: (w - x, h - y), 270: (h - y, x)}[self.rotation_deg]

    def stored(self, x_px: Floats, y_px: Floats) -> tuple[Floats, Floats]:
        """Shown to stored."""
        x, y, w, h = np.asarray(x_px, float), np.asarray(y_px, float), self.width - 1, self.height - 1
        return {0: (x, y), 90: (w - y, x), 180: (w - x, h - y), 270: (y, h - x)}[self.rotation_deg]

    def times(self) -> Floats:
        return np.arange(self.drawing.frames) / self.drawing.rate_hz

    def truth(self, t_s: Floats) -> tuple[Floats, Floats]:
        return self.upright(*mean_place(self.drawing, t_s))

    def frames(self, from_s: float | None = None, to_s: float | None = None) -> Iterator[Frame]:
        for index, t in enumerate(self.times()):
            if (from_s is not None and t < from_s - 1e-9) or (to_s is not None and t > to_s + 1e-9):
                continue
            yield self._frame(index, float(t))

    def _frame(self, index: int, t: float) -> Frame:
        d = self.drawing
        start = np.random.default_rng((d.seed, index)).integers(0, self._noise.size // 2)
        planes, at = [], int(start)
        clean = self.clean(t)
        scale = 1 << (d.depth - 8)
        for plane in clean:
            grain = self._noise[at : at + plane.size].reshape(plane.shape)
            at += plane.size
            values = np.rint((plane + grain) * scale)
            planes.append(np.clip(values, 0, 256 * scale - 1).astype(np.uint8 if d.depth == 8 else np.uint16))
        return Frame(index, t, planes[0], planes[1], planes[2], d.depth)

    def clean(self, t: float) -> list[np.ndarray]:
        """The three planes without noise or rounding."""
        d = self.drawing
        planes = [plane.copy() for plane in self._bench]
        if d.shake is not None:
            move = d.shake(t)
            planes = [_shifted(p, move[0] / k, move[1] / k) for p, k in zip(planes, (1, 2, 2), strict=True)]
        if any(a <= t <= b for a, b in d.occluded):
            return planes
        _x, _y, patches = draw_dot(d, t, margin=6.0)
        for plane, (rows, columns, values) in zip(planes, patches, strict=True):
            plane[rows, columns] += values
        return planes


def draw_dot(
    drawing: Drawing, t: float, *, margin: float, shift: tuple[float, float] = (0.0, 0.0), bench: bool = True
):
    """Centre of the dot and, for each plane, (row slice, column slice, what the dot adds to the bench)."""
    d = drawing
    open_s = d.exposure / d.rate_hz
    steps = 1
    if open_s:
        (x0, x1), (y0, y1) = place(d, np.array([t - open_s / 2, t + open_s / 2]))
        steps = max(3, int(2 * np.hypot(x1 - x0, y1 - y0)) | 1)
    instants = t + (np.arange(steps) - (steps - 1) / 2) / steps * open_s
    cx, cy = (np.asarray(v, float) + s for v, s in zip(place(d, instants), shift, strict=True))
    if d.shake is not None:
        move = np.array([d.shake(float(i)) for i in instants])
        cx, cy = cx + move[:, 0], cy + move[:, 1]
    middle = float(cx.mean()), float(cy.mean())
    reach = d.diameter * (0.75 if d.ring else 0.5) + margin + max(np.ptp(cx), np.ptp(cy)) / 2 + 4 * d.softness
    patches = []
    for plane, spacing in enumerate((1, 2, 2)):
        size = (d.height // spacing, d.width // spacing)
        r0, r1 = (int(np.clip((middle[1] + k * reach) // spacing, 0, size[0] - 1)) for k in (-1, 1))
        c0, c1 = (int(np.clip((middle[0] + k * reach) // spacing, 0, size[1] - 1)) for k in (-1, 1))
        rows, columns = np.arange(r0, r1 + 1), np.arange(c0, c1 + 1)
        values = np.zeros((len(rows), len(columns)))
        fine = 3 * spacing
        offsets = (np.arange(fine) - (fine - 1) / 2) / fine * spacing
        # Left-sited chroma: on the even luma columns, between the rows.
        x_at, y_at = columns * spacing, rows * spacing + (spacing - 1) / 2
        for oy in offsets:
            for ox in offsets:
                points = (x_at[None, :] + ox, y_at[:, None] + oy)
                inner = coverage(d, points, (cx, cy), d.diameter / 2)
                add = (d.inside[plane] - d.bench[plane]) * inner
                if d.ring is not None:
                    outer = coverage(d, points, (cx, cy), d.diameter * 0.75)
                    add += (d.ring[plane] - d.bench[plane]) * (outer - inner)
                values += add
        patches.append((slice(r0, r1 + 1), slice(c0, c1 + 1), values / fine**2))
    return *middle, patches


def cramer_rao(drawing: Drawing, t: float, *, step: float = 0.05) -> tuple[float, float]:
    """Least standard deviation of an unbiased estimate of (x, y) from one picture with white noise.

    The inverse of the Fisher information Σ (∂I/∂x_a)(∂I/∂x_b) / σ² over all three planes, the rounding to whole
    levels counted as noise of variance 1/12 (S. M. Kay, Fundamentals of Statistical Signal Processing: Estimation
    Theory, 1993, section 3.9: a signal in white Gaussian noise).
    """
    slopes = []
    for shift in ((step, 0.0), (0.0, step)):
        ahead = draw_dot(drawing, t, margin=8.0, shift=shift)
        back = draw_dot(drawing, t, margin=8.0, shift=(-shift[0], -shift[1]))
        slopes.append((ahead[2], back[2]))
    information = np.zeros((2, 2))
    for plane in range(3):
        whole = []
        for ahead, back in slopes:
            frame = np.zeros((drawing.height, drawing.width))
            for patch, sign in ((ahead[plane], 1), (back[plane], -1)):
                frame[patch[0], patch[1]] += sign * patch[2]
            whole.append(frame / (2 * step))
        for a in range(2):
            for b in range(2):
                information[a, b] += np.sum(whole[a] * whole[b]) / (drawing.noise**2 + 1 / 12)
    bound = np.linalg.inv(information)
    return float(np.sqrt(bound[0, 0])), float(np.sqrt(bound[1, 1]))


def redrawn(source: Drawn, **changes: object) -> Drawn:
    """The same drawing with some parameters changed."""
    return Drawn(replace(source.drawing, **changes))  # type: ignore[arg-type]


def _smooth_pattern(rng: np.random.Generator, height: int, width: int) -> np.ndarray:
    import cv2

    coarse = rng.standard_normal((height // 6 + 2, width // 6 + 2)).astype(np.float32)
    return cv2.resize(coarse, (width, height), interpolation=cv2.INTER_CUBIC)


def _shifted(plane: np.ndarray, dx: float, dy: float) -> np.ndarray:
    import cv2

    move = np.array([[1, 0, dx], [0, 1, dy]], np.float32)
    return cv2.warpAffine(
        plane, move, plane.shape[::-1], flags=cv2.INTER_CUBIC, borderMode=cv2.BORDER_REPLICATE
    )
