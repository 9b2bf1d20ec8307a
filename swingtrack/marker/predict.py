"""Where the dot will be in the next frame, from its last places and, once known, the swing's frequency."""

from __future__ import annotations

from collections import deque

import numpy as np

# Above this angle of swing per frame a parabola through three places is no longer near enough to a sinusoid.
PARABOLA_RAD = 0.15

# A local fit after an occlusion uses at most this many places.
LONGEST_MEMORY = 600


class Predictor:
    """Keeps the last places of a dot and says where to look next.

    While the dot is seen: the parabola through the last three places, or, where a frame is a large part of a
    swing, the sinusoid about the known centre through the last two,
    y(t + h) = y cos ωh + (y cos ωτ − y₋) sin ωh / sin ωτ. After a gap: least squares of
    c + a cos ωt + b sin ωt on the last swing and a half.
    """

    def __init__(self) -> None:
        self.omega: float | None = None
        self.places: deque[tuple[float, float, float]] = deque(maxlen=LONGEST_MEMORY)
        self._centre: tuple[float, float] | None = None

    def add(self, t_s: float, x_px: float, y_px: float) -> None:
        """Remember a place."""
        self.places.append((t_s, x_px, y_px))

    def set_swing(self, omega: float, centre: tuple[float, float]) -> None:
        """Tell the angular frequency (rad/s) and the middle of the swing."""
        self.omega, self._centre = omega, centre

    def next(self, t_s: float) -> tuple[float, float, float, float]:
        """(x, y, vx, vy) expected at a time: px and px/s."""
        p = self.places
        t2, x2, y2 = p[-1]
        h = t_s - t2
        if len(p) == 1:
            return x2, y2, 0.0, 0.0
        t1, x1, y1 = p[-2]
        gap = t2 - t1
        w = self.omega
        if (
            w is not None
            and self._centre is not None
            and w * gap > PARABOLA_RAD
            and abs(np.sin(w * gap)) > 0.1
        ):
            cx, cy = self._centre
            cg, sg, ch, sh = np.cos(w * gap), np.sin(w * gap), np.cos(w * h), np.sin(w * h)
            out = []
            for last, before in ((x2 - cx, x1 - cx), (y2 - cy, y1 - cy)):
                quadrature = (last * cg - before) / sg
                out.append((last * ch + quadrature * sh, w * (quadrature * ch - last * sh)))
            return float(cx + out[0][0]), float(cy + out[1][0]), float(out[0][1]), float(out[1][1])
        vx, vy = (x2 - x1) / gap, (y2 - y1) / gap
        if len(p) == 2 or h > 3 * gap:
            return x2 + vx * h, y2 + vy * h, vx, vy
        t0, x0, y0 = p[-3]
        span = 0.5 * (t2 - t0)
        ax, ay = (vx - (x1 - x0) / (t1 - t0)) / span, (vy - (y1 - y0) / (t1 - t0)) / span
        # Newton's form: the slope between the last two belongs to their middle.
        reach = h * (h + gap) / 2
        return (
            x2 + vx * h + ax * reach,
            y2 + vy * h + ay * reach,
            vx + ax * (h + gap / 2),
            vy + ay * (h + gap / 2),
        )

    def after_gap(self, t_s: float) -> tuple[float, float, float, float]:
        """As `next`, from the last swing and a half as a whole; holds over a long gap."""
        w = self.omega
        if w is None or len(self.places) < 8:
            _t, x, y = self.places[-1]
            return x, y, 0.0, 0.0
        data = np.array(self.places)
        # The pictures just before a loss are the ones that may have been led astray.
        recent = data[data[:, 0] > data[-1, 0] - 3 * np.pi / w]
        recent = recent[:-2] if len(recent) > 10 else recent
        base = np.column_stack([np.ones(len(recent)), np.cos(w * recent[:, 0]), np.sin(w * recent[:, 0])])
        coefficients = np.linalg.lstsq(base, recent[:, 1:], rcond=None)[0]
        c, s = np.cos(w * t_s), np.sin(w * t_s)
        x, y = np.array([1.0, c, s]) @ coefficients
        vx, vy = w * (np.array([0.0, -s, c]) @ coefficients)
        return float(x), float(y), float(vx), float(vy)

    def box(self, margin_px: float) -> tuple[float, float, float, float]:
        """Rectangle (x0, y0, x1, y1) round all remembered places."""
        data = np.array(self.places)[:, 1:]
        low, high = data.min(axis=0) - margin_px, data.max(axis=0) + margin_px
        return float(low[0]), float(low[1]), float(high[0]), float(high[1])


def dominant_frequency(t_s: np.ndarray, xy_px: np.ndarray) -> tuple[float, tuple[float, float], float] | None:
    """Angular frequency of a sinusoid common to both axes, its centre, and the share of the variance it explains.

    Least squares of 1, cos ωt, sin ωt over a grid of frequencies, refined by a parabola through the best three.
    None where the places span too little or hardly move.
    """
    span = float(t_s[-1] - t_s[0]) if len(t_s) else 0.0
    if len(t_s) < 10 or span <= 0:
        return None
    t = t_s - t_s.mean()
    data = xy_px - xy_px.mean(axis=0)
    total = float(np.sum(data**2))
    if total <= 0:
        return None
    shortest = 2.5 * span / (len(t_s) - 1)
    highest = min(6.0, 1.0 / shortest)
    grid = np.arange(0.5 / span, highest, 0.12 / span)
    if len(grid) < 3:
        return None
    explained = _explained(t, data, 2 * np.pi * grid) / total
    best = int(np.argmax(explained))
    f = grid[best]
    if 0 < best < len(grid) - 1:
        a, b, c = explained[best - 1 : best + 2]
        if a - 2 * b + c < 0:
            f += 0.5 * (a - c) / (a - 2 * b + c) * (grid[1] - grid[0])
    w = 2 * np.pi * f
    base = np.column_stack([np.ones_like(t), np.cos(w * t), np.sin(w * t)])
    coefficients = np.linalg.lstsq(base, xy_px, rcond=None)[0]
    share = 1.0 - float(np.sum((xy_px - base @ coefficients) ** 2)) / total
    return float(w), (float(coefficients[0, 0]), float(coefficients[0, 1])), share


def _explained(t: np.ndarray, data: np.ndarray, w: np.ndarray) -> np.ndarray:
    """Sum of squares that 1, cos ωt, sin ωt explain of centred data (n, 2), for each of the frequencies (m,).

    The normal equations of all frequencies are solved together; they are well conditioned from half a cycle on.
    """
    c, s = np.cos(np.outer(w, t)), np.sin(np.outer(w, t))
    n = float(len(t))
    normal = np.empty((len(w), 3, 3))
    normal[:, 0, 0] = n
    normal[:, 0, 1] = normal[:, 1, 0] = c.sum(axis=1)
    normal[:, 0, 2] = normal[:, 2, 0] = s.sum(axis=1)
    normal[:, 1, 1] = np.einsum("ij,ij->i", c, c)
    normal[:, 2, 2] = n - normal[:, 1, 1]
    normal[:, 1, 2] = normal[:, 2, 1] = np.einsum("ij,ij->i", c, s)
    normal += 1e-9 * n * np.eye(3)
    right = np.stack([np.broadcast_to(data.sum(axis=0), (len(w), 2)), c @ data, s @ data], axis=1)
    return np.asarray(np.einsum("ijk,ijk->i", right, np.linalg.solve(normal, right)))
