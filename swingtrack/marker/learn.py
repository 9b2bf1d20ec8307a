"""Learning a dot's model from the first stretch of the clip: ellipse, profile, exposure, noise, weights.

Sharp pictures are those in which the dot is slow; every swing has them at its turning points. The radial
profile is the mean of their pixels by elliptical radius, each about its own located centre. The exposure follows
from the fast pictures: the dot's second moment along its way grows by (v τ)² / 12 (variance of a uniform
distribution over the way v τ), and is then chosen among a few values by what the template leaves over.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ..records import Floats
from .appearance import Appearance
from .coarse import Coarse
from .locate import Located, chroma_step, locate, luma_step
from .model import KNOT_PX, DotModel
from .piece import Piece

# A share of the pictures taken as sharp, and the least number.
SLOW_SHARE = 0.25
FEWEST_SLOW = 8
MOST_SLOW = 40
SHARP_PX = 1.2

# The shutter may be open all the time between two frames, and a lens's own blur may look like a little more.
LONGEST_EXPOSURE = 1.05

# Below this chroma contrast in levels a dot counts as grey.
LEAST_CHROMA = 6.0


@dataclass(frozen=True, eq=False)
class Glimpse:
    """One kept picture of the dot: its piece of the frame, the time and the coarse place."""

    t_s: float
    piece: Piece
    coarse: Coarse


def learn_dot(
    glimpses: list[Glimpse], look: Appearance, frame_interval_s: float
) -> tuple[DotModel, list[Located | None], Floats]:
    """Model of the dot, its places in the glimpses by that model, and its velocities there (n, 2) in px/s."""
    t = np.array([g.t_s for g in glimpses])
    places = np.array([(g.coarse.x_px, g.coarse.y_px) for g in glimpses])
    velocity = _velocities(t, places)
    speed = np.hypot(velocity[:, 0], velocity[:, 1])
    order = np.argsort(speed, kind="stable")
    slow = order[: max(FEWEST_SLOW, int(SLOW_SHARE * len(order)))]
    moments = np.median([glimpses[i].coarse.moments for i in slow], axis=0)
    model = _first_model(moments, look, glimpses[0].piece)
    model.exposure_s = _exposure_by_moments(glimpses, velocity, moments, frame_interval_s)
    # From here on the sharp pictures are those drawn out by little more than a pixel.
    sharp = int(np.searchsorted(speed[order] * model.exposure_s, SHARP_PX))
    slow = order[: int(np.clip(sharp, FEWEST_SLOW, MOST_SLOW))]
    for _ in range(2):
        _measure_profile(model, glimpses, slow, places)
        places = _relocate(model, glimpses, slow, places, velocity)
    _measure_profile(model, glimpses, slow, places)
    _choose_exposure(model, glimpses, order, places, velocity, frame_interval_s)
    _measure_offset(model, glimpses, slow, places, velocity)
    located = _locate_all(model, glimpses, places, velocity)
    places = np.array([(p.x_px, p.y_px) if p else tuple(q) for p, q in zip(located, places, strict=True)])
    velocity = _velocities(t, places)
    _measure_spread(model, glimpses, places, velocity)
    located = _locate_all(model, glimpses, places, velocity)
    return model, located, velocity


def _velocities(t: Floats, places: Floats) -> Floats:
    """Central differences over the true times; one-sided at the ends."""
    if len(t) < 3:
        return np.zeros_like(places)
    result: Floats = np.gradient(places, t, axis=0)
    return result


def _first_model(moments: Floats, look: Appearance, piece: Piece) -> DotModel:
    """Ellipse from the second moments of a uniform ellipse, a²/4 and b²/4 along its axes."""
    values, vectors = np.linalg.eigh(moments)
    axes = 2.0 * np.sqrt(np.maximum(values, 0.25))
    # The mask's soft edge and noise make round dots a little oval; below this it is taken for round.
    if axes[1] / axes[0] < 1.08:
        axes[:] = np.sqrt(axes[0] * axes[1])
    radius = max(float(np.sqrt(axes[0] * axes[1])), 0.4 * look.diameter_px)
    radius = min(radius, 0.65 * look.diameter_px)
    metric = vectors @ np.diag(np.sqrt(axes[0] * axes[1]) / axes) @ vectors.T
    chroma = (look.inside - look.around)[1:]
    size = float(np.linalg.norm(chroma))
    knots = int(np.ceil(_window(radius) / KNOT_PX)) + 1
    return DotModel(
        radius_px=radius,
        metric=metric,
        luma=np.zeros(knots),
        chroma=np.zeros(knots) if size >= LEAST_CHROMA else None,
        chroma_axis=chroma / size if size >= LEAST_CHROMA else np.array([1.0, 0.0]),
        # H.264 and HEVC put chroma on the even luma columns and between the rows unless they say otherwise.
        chroma_offset=np.array([0.0, 0.5 * (piece.spacing_y - 1)]),
        spacing=(piece.spacing_x, piece.spacing_y),
    )


def _window(radius: float) -> float:
    """Radius of the window: the edge and enough round it to know the surroundings, no more of the bench than that."""
    return radius + max(3.0, min(0.35 * radius, 10.0))


def _exposure_by_moments(
    glimpses: list[Glimpse], velocity: Floats, moments: Floats, longest_s: float
) -> float:
    speed2 = np.sum(velocity**2, axis=1)
    fast = speed2 > 0.25 * float(np.max(speed2, initial=0.0))
    if not fast.any() or float(np.max(speed2)) * longest_s**2 < 4.0:
        return 0.0
    along = velocity / np.sqrt(np.maximum(speed2, 1e-12))[:, None]
    grown = np.array([a @ (g.coarse.moments - moments) @ a for a, g in zip(along, glimpses, strict=True)])
    square = 12.0 * float(np.median(grown[fast] / speed2[fast]))
    return min(float(np.sqrt(max(square, 0.0))), longest_s)


def _measure_profile(model: DotModel, glimpses: list[Glimpse], which: Floats, places: Floats) -> None:
    """Mean level by elliptical radius, each pixel shared between its two nearest knots."""
    knots = len(model.luma)
    sums = np.zeros((2, knots))
    weights = np.zeros((2, knots))
    for i in which:
        piece = glimpses[i].piece
        planes = [(piece.luma.astype(np.float64) * piece.scale, (1, 1), (0.0, 0.0))]
        if model.chroma is not None and piece.chroma_u is not None and piece.chroma_v is not None:
            axis = model.chroma_axis * piece.scale
            chroma = piece.chroma_u * axis[0] + piece.chroma_v * axis[1]
            planes.append((chroma, (piece.spacing_x, piece.spacing_y), tuple(model.chroma_offset)))
        for index, (plane, spacing, offset) in enumerate(planes):
            x = piece.x0 + offset[0] + spacing[0] * np.arange(plane.shape[1]) - places[i, 0]
            y = piece.y0 + offset[1] + spacing[1] * np.arange(plane.shape[0]) - places[i, 1]
            m = model.metric
            rho = np.hypot(
                m[0, 0] * x[None, :] + m[0, 1] * y[:, None], m[1, 0] * x[None, :] + m[1, 1] * y[:, None]
            )
            position = rho.ravel() / KNOT_PX
            inside = position < knots - 1
            low = position[inside].astype(int)
            part = position[inside] - low
            values = plane.ravel()[inside]
            for k, w in ((low, 1 - part), (low + 1, part)):
                sums[index] += np.bincount(k, w * values, minlength=knots)[:knots]
                weights[index] += np.bincount(k, w, minlength=knots)[:knots]
    model.luma = _filled(sums[0], weights[0], 1.0)
    if model.chroma is not None:
        model.chroma = _filled(sums[1], weights[1], 2.0)
    model.forget()


def _filled(sums: Floats, weights: Floats, smooth_px: float) -> Floats:
    """Weighted means, smoothed a little; knots that no pixel fell near take their neighbours' level."""
    half = max(1, round(0.4 * smooth_px / KNOT_PX))
    kernel = np.hanning(2 * half + 3)[1:-1]
    # Mirrored about ρ = 0, where the profile is even; the last knot is carried on outward.
    s = np.concatenate([sums[half:0:-1], sums, np.zeros(half)])
    w = np.concatenate([weights[half:0:-1], weights, np.zeros(half)])
    top, bottom = np.convolve(s, kernel, "valid"), np.convolve(w, kernel, "valid")
    known = bottom > 1e-9
    at = np.arange(len(sums))
    profile: Floats = np.interp(at, at[known], top[known] / bottom[known])
    # The last pixel of the window is level: what the template takes for the surroundings.
    tail = max(2, round(1.0 / KNOT_PX))
    profile[-tail:] = profile[-tail:].mean()
    return profile


def _relocate(
    model: DotModel, glimpses: list[Glimpse], which: Floats, places: Floats, velocity: Floats
) -> Floats:
    places = places.copy()
    for i in which:
        found = locate(glimpses[i].piece, model, places[i, 0], places[i, 1], (velocity[i, 0], velocity[i, 1]))
        if (
            found is not None
            and np.hypot(found.x_px - places[i, 0], found.y_px - places[i, 1]) < 0.5 * model.radius_px + 1
        ):
            places[i] = found.x_px, found.y_px
    return places


def _locate_all(
    model: DotModel, glimpses: list[Glimpse], places: Floats, velocity: Floats
) -> list[Located | None]:
    return [
        locate(g.piece, model, float(p[0]), float(p[1]), (float(v[0]), float(v[1])))
        for g, p, v in zip(glimpses, places, velocity, strict=True)
    ]


def _choose_exposure(
    model: DotModel,
    glimpses: list[Glimpse],
    order: Floats,
    places: Floats,
    velocity: Floats,
    longest_s: float,
) -> None:
    """The exposure that leaves least over in the fastest pictures, near the one by moments first."""
    fast = order[-max(4, len(order) // 12) :][::2][:6]
    way = float(np.max(np.hypot(*velocity[fast].T), initial=0.0)) * longest_s
    if way < 1.0:
        model.exposure_s = 0.0
        return

    def left(exposure: float) -> float:
        model.exposure_s = exposure
        model.forget()
        found = [
            locate(glimpses[i].piece, model, places[i, 0], places[i, 1], (velocity[i, 0], velocity[i, 1]))
            for i in fast
        ]
        misfits = [f.misfit if f is not None and f.gain > 0.2 else 9.0 for f in found]
        return float(np.median(misfits))

    trials: dict[float, float] = {}

    def tried(exposure: float) -> float:
        if exposure not in trials:
            trials[exposure] = left(exposure)
        return trials[exposure]

    best, step = model.exposure_s, 0.12 * longest_s
    tried(best)
    while step * way / longest_s > 0.4:
        nearest = [e for e in (best - step, best + step) if 0.0 <= e <= LONGEST_EXPOSURE * longest_s]
        better = min([best, *nearest], key=tried)
        if better == best:
            # The parabola through three trials says where between them the least lies.
            if len(nearest) == 2:
                low, high = tried(nearest[0]) ** 2, tried(nearest[1]) ** 2
                bend = low + high - 2 * tried(best) ** 2
                if bend > 0:
                    middle = best + 0.5 * step * float(np.clip((low - high) / bend, -0.9, 0.9))
                    best = min([best, middle], key=tried)
            step *= 0.4
        else:
            best = better
    model.exposure_s = float(best)
    model.forget()


def _measure_offset(
    model: DotModel, glimpses: list[Glimpse], which: Floats, places: Floats, velocity: Floats
) -> None:
    """Where chroma is sampled: the mean step of the chroma's own place from the luma's, where both know theirs well."""
    if model.chroma is None:
        return
    luma_only = replace(model, chroma=None, _cache={}, _bytes=0)
    steps, sizes = [], []
    for i in which:
        piece = glimpses[i].piece
        luma = locate(piece, luma_only, places[i, 0], places[i, 1], (velocity[i, 0], velocity[i, 1]))
        alone = locate_chroma(piece, model, places[i, 0], places[i, 1], (velocity[i, 0], velocity[i, 1]))
        if luma is not None and alone is not None and luma.settled:
            steps.append((alone[0] - luma.x_px, alone[1] - luma.y_px))
            sizes.append(np.sqrt(luma.var_x + luma.var_y))
    if len(steps) < FEWEST_SLOW:
        return
    step = np.median(steps, axis=0)
    scatter = 1.4826 * np.median(np.abs(np.array(steps) - step), axis=0) / np.sqrt(len(steps))
    if np.all(scatter < 0.08) and np.all(np.abs(step) < 1.2):
        model.chroma_offset = model.chroma_offset - step
        model.forget()


def locate_chroma(
    piece: Piece, model: DotModel, x: float, y: float, velocity: tuple[float, float]
) -> tuple[float, float] | None:
    """The place by chroma alone."""
    template = model.template(*velocity)
    for _ in range(3):
        step = chroma_step(piece, model, template, x, y)
        if step is None or float(np.hypot(step.dx, step.dy)) > model.radius_px:
            return None
        x, y = x + step.dx, y + step.dy
    return x, y


def _measure_spread(model: DotModel, glimpses: list[Glimpse], places: Floats, velocity: Floats) -> None:
    """What the template leaves over in luma and in chroma, the median over the pictures."""
    luma, chroma = [], []
    for g, (x, y), v in zip(glimpses, places, velocity, strict=True):
        template = model.template(*v)
        step = luma_step(g.piece, model, template, x, y)
        if step is not None:
            luma.append(step.spread)
        step = chroma_step(g.piece, model, template, x, y)
        if step is not None:
            chroma.append(step.spread)
    if luma:
        model.spread_luma = max(float(np.median(luma)), 0.3)
    if chroma:
        model.spread_chroma = max(float(np.median(chroma)), 0.3)
