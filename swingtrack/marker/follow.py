"""Following one dot from frame to frame: predict, locate in a window, learn, lose, find again."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from ..records import Floats
from .appearance import Appearance
from .coarse import Coarse, centroid, search
from .learn import Glimpse, learn_dot
from .locate import Located, locate
from .model import DotModel
from .piece import Piece, cut
from .predict import Predictor, dominant_frequency

# A dot's model is learnt from this many pictures at most, and this many at least.
MOST_GLIMPSES = 150
FEWEST_GLIMPSES = 24

# A match with less or more contrast than this share of the model's is not the dot, or the dot half hidden.
GAIN_RANGE = (0.55, 1.6)

# What the template leaves over may grow to this multiple of the usual before the match is refused.
WORST_MISFIT = 2.5


@dataclass(frozen=True, eq=False)
class Spot:
    """A dot to follow: how it looks, and where it was at the times the finder saw it (stored pixels)."""

    look: Appearance
    t_s: Floats
    x_px: Floats
    y_px: Floats
    omega: float | None = None


@dataclass(eq=False)
class Sightings:
    """Places of one dot frame by frame, stored pixels."""

    t_s: list[float] = field(default_factory=list)
    x_px: list[float] = field(default_factory=list)
    y_px: list[float] = field(default_factory=list)
    var_x: list[float] = field(default_factory=list)
    var_y: list[float] = field(default_factory=list)
    cov_xy: list[float] = field(default_factory=list)

    def add(self, t_s: float, found: Located | None) -> None:
        """Append one frame's place, NaN where it was not seen."""
        nan = float("nan")
        self.t_s.append(t_s)
        self.x_px.append(found.x_px if found else nan)
        self.y_px.append(found.y_px if found else nan)
        self.var_x.append(found.var_x if found else nan)
        self.var_y.append(found.var_y if found else nan)
        self.cov_xy.append(found.cov_xy if found else nan)


class Follower:
    """Follows one spot; call `step` with each picture in order, then `finish`."""

    def __init__(self, spot: Spot) -> None:
        self.spot = spot
        self.model: DotModel | None = None
        self.sightings = Sightings()
        self.predictor = Predictor()
        self._glimpses: list[Glimpse] = []
        self._waiting: list[tuple[float, Glimpse | None]] = []
        self._lost_since: float | None = None
        self._lost_frames = 0
        self._interval_s = 0.0
        self._previous_t: float | None = None

    # ------------------------------------------------------------ one frame

    def step(self, t_s: float, picture: Piece) -> None:
        """Take in the next frame."""
        if self._previous_t is not None:
            gap = t_s - self._previous_t
            self._interval_s = gap if self._interval_s == 0 else min(self._interval_s, gap)
        self._previous_t = t_s
        if self.model is None:
            self._learning_step(t_s, picture)
            return
        found = self._match(t_s, picture)
        self.sightings.add(t_s, found)
        if found is None:
            if self._lost_since is None:
                self._lost_since = t_s
            self._lost_frames += 1
        else:
            if self._lost_since is not None:
                self._lost_since, self._lost_frames = None, 0
            self.predictor.add(t_s, found.x_px, found.y_px)

    def finish(self) -> Sightings:
        """All places; learns from what there is where the clip ended early."""
        if self.model is None:
            self._learn()
        return self.sightings

    # ------------------------------------------------------------ learning

    def _expected(self, t_s: float) -> tuple[float, float] | None:
        """Where the finder saw the spot at this time; None outside of its track."""
        spot = self.spot
        if not len(spot.t_s) or t_s > spot.t_s[-1] or t_s < spot.t_s[0]:
            return None
        return float(np.interp(t_s, spot.t_s, spot.x_px)), float(np.interp(t_s, spot.t_s, spot.y_px))

    def _learning_step(self, t_s: float, picture: Piece) -> None:
        look, places = self.spot.look, self.predictor.places
        tries: list[tuple[float, float]] = []
        expected = self._expected(t_s)
        if expected is not None:
            tries.append(expected)
        if places and t_s - places[-1][0] < 0.3:
            x, y, _, _ = self.predictor.next(t_s)
            tries.append((x, y))
        if not tries and not places:
            tries.append((float(self.spot.x_px[0]), float(self.spot.y_px[0])))
        found = self._coarse(picture, tries)
        glimpse = None
        if found is not None:
            speed = 0.0
            if places:
                speed = float(np.hypot(found.x_px - places[-1][1], found.y_px - places[-1][2]))
            self.predictor.add(t_s, found.x_px, found.y_px)
            piece = cut(
                picture,
                found.x_px,
                found.y_px,
                0.8 * look.diameter_px + 10 + min(speed, 2 * look.diameter_px),
            )
            if piece is not None:
                glimpse = Glimpse(t_s, piece, found)
        self._waiting.append((t_s, glimpse))
        seen = [g for _, g in self._waiting if g is not None]
        if len(seen) >= self._enough() or len(self._waiting) > 8 * MOST_GLIMPSES:
            self._learn()

    def _enough(self) -> int:
        """Pictures to learn from: three quarters of a swing hold a turning point."""
        if self.spot.omega is None or not self._interval_s:
            return MOST_GLIMPSES
        return int(np.clip(0.75 * 2 * np.pi / self.spot.omega / self._interval_s, 60, MOST_GLIMPSES))

    def _coarse(self, picture: Piece, tries: list[tuple[float, float]]) -> Coarse | None:
        look = self.spot.look
        reach = 0.75 * look.diameter_px + 4
        for x, y in tries:
            found = centroid(picture, look, x, y, reach + 4)
            if found is not None and 0.4 < found.area_px2 / (np.pi / 4 * look.diameter_px**2) < 2.2:
                return found
        for x, y in tries:
            wide = 2.0 * look.diameter_px + 24
            for sx, sy, _ in search(picture, look, (x - wide, y - wide, x + wide, y + wide))[:2]:
                found = centroid(picture, look, sx, sy, reach)
                if found is not None and 0.4 < found.area_px2 / (np.pi / 4 * look.diameter_px**2) < 2.2:
                    return found
        return None

    def _learn(self) -> None:
        """Build the model from the kept glimpses and locate the dot in them."""
        seen = [g for _, g in self._waiting if g is not None]
        if len(seen) < 4:
            for t, _ in self._waiting:
                self.sightings.add(t, None)
            self._waiting.clear()
            return
        model, located, _ = learn_dot(seen, self.spot.look, self._interval_s or 1 / 60)
        self.model = model
        by_time = {g.t_s: found for g, found in zip(seen, located, strict=True)}
        self.predictor.places.clear()
        for t, glimpse in self._waiting:
            found = by_time.get(t) if glimpse is not None else None
            if found is not None and not self._believable(found, lenient=True):
                found = None
            self.sightings.add(t, found)
            if found is not None:
                self.predictor.add(t, found.x_px, found.y_px)
        self._waiting.clear()
        if len(self.predictor.places) >= 3:
            self._find_swing()

    def _find_swing(self) -> None:
        data = np.array(self.predictor.places)
        if self.spot.omega is not None:
            w = self.spot.omega
            base = np.column_stack([np.ones(len(data)), np.cos(w * data[:, 0]), np.sin(w * data[:, 0])])
            centre = np.linalg.lstsq(base, data[:, 1:], rcond=None)[0][0]
            self.predictor.set_swing(w, (float(centre[0]), float(centre[1])))
            return
        swing = dominant_frequency(data[:, 0], data[:, 1:])
        if swing is not None and swing[2] > 0.8:
            self.predictor.set_swing(swing[0], swing[1])

    # ------------------------------------------------------------ matching

    def _believable(self, found: Located, *, lenient: bool = False) -> bool:
        low, high = (0.35, 2.0) if lenient else GAIN_RANGE
        return (
            found.settled
            and low < found.gain < high
            and found.misfit < WORST_MISFIT * (1.6 if lenient else 1.0)
        )

    def _match(self, t_s: float, picture: Piece) -> Located | None:
        model = self.model
        assert model is not None
        if not self.predictor.places:
            return self._search_all(t_s, picture)
        if self._lost_since is not None:
            return self._find_again(t_s, picture)
        x, y, vx, vy = self.predictor.next(t_s)
        found = locate(picture, model, x, y, (vx, vy))
        gate = 0.5 * model.radius_px + 3.0
        if (
            found is not None
            and self._believable(found)
            and abs(found.x_px - x) < gate
            and abs(found.y_px - y) < gate
        ):
            return found
        return self._retry(t_s, picture, (x, y), (vx, vy), model.radius_px * 2 + 8)

    def _retry(
        self, t_s: float, picture: Piece, at: tuple[float, float], velocity: tuple[float, float], reach: float
    ) -> Located | None:
        """Look round a place by colour, then match; the nearest believable one."""
        model = self.model
        assert model is not None
        x, y = at
        spots = search(picture, self.spot.look, (x - reach, y - reach, x + reach, y + reach))
        best: tuple[float, Located] | None = None
        for sx, sy, score in spots:
            found = locate(picture, model, sx, sy, velocity)
            if found is None or not self._believable(found):
                continue
            far = float(np.hypot(found.x_px - x, found.y_px - y))
            if far > reach:
                continue
            cost = far / reach + abs(np.log(found.gain)) + 0.3 * found.misfit - 0.5 * score
            if best is None or cost < best[0]:
                best = cost, found
        return best[1] if best else None

    def _find_again(self, t_s: float, picture: Piece) -> Located | None:
        """After a loss: near where the swing has taken it, later anywhere on its path."""
        model = self.model
        assert model is not None
        assert self._lost_since is not None
        gone = t_s - self._lost_since
        if self._lost_frames > 60 and self._lost_frames % 4:
            return None  # a long absence: every fourth frame is often enough to see it come back
        x, y, vx, vy = self.predictor.after_gap(t_s)
        reach = 2 * model.radius_px + 8
        w = self.predictor.omega
        if w is None:
            reach += 60.0 * self._lost_frames / 6
        else:
            box = self.predictor.box(0.0)
            # Amplitude and phase drift slowly: a tenth of the path's size for each swing gone by.
            reach += 0.1 * max(box[2] - box[0], box[3] - box[1]) * (gone * w / (2 * np.pi))
        return self._retry(t_s, picture, (x, y), (vx, vy), min(reach, 400.0))

    def _search_all(self, t_s: float, picture: Piece) -> Located | None:
        spot = self.spot
        x, y = float(np.mean(spot.x_px)), float(np.mean(spot.y_px))
        reach = float(max(np.ptp(spot.x_px), np.ptp(spot.y_px))) / 2 + 2 * spot.look.diameter_px
        return self._retry(t_s, picture, (x, y), (0.0, 0.0), reach)
