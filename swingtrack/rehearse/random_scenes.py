"""Scenes drawn at random over everything that a reasonable person may film, each with its truth and its difficulties."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from ..records import Article, Quantity, Rig, Suspension, View
from .bench import Rng
from .camera import camera_for, sized_stage
from .mechanism import strings_of
from .motion import Damping
from .rehearsal import moment_for_period
from .settings import Film, RehearsalSettings, Stage, Sway

GRAVITY = Quantity(9.8094, 2e-4, "m/s^2")
LEAST_ARC_PX = 14.0  # peak to peak: what swings less can't be told from shake by any means
EDGE_PX = 12.0

# Dots as people paint them, with articles that they stand out on: (name, dot BGR, article BGR, look, ring).
PAINTS = (
    ("orange on carbon", (40, 120, 245), (70, 62, 58), "carbon", False),
    ("red on carbon", (45, 40, 225), (66, 60, 56), "carbon", False),
    ("yellow on carbon", (50, 225, 245), (72, 64, 60), "carbon", False),
    ("green on carbon", (70, 200, 60), (66, 60, 58), "carbon", False),
    ("magenta on white", (180, 40, 215), (205, 208, 208), "plain", False),
    ("blue on ash", (190, 80, 30), (134, 172, 196), "wood", False),
    ("red on ash", (40, 36, 205), (138, 176, 200), "wood", False),
    ("green on white", (60, 150, 40), (205, 208, 206), "plain", False),
    ("white on carbon", (236, 238, 238), (64, 58, 54), "carbon", False),
    ("black on white", (26, 26, 26), (210, 212, 212), "plain", False),
    ("black on ash", (28, 28, 30), (142, 180, 204), "wood", False),
    ("white, black ring, on metal", (236, 238, 238), (168, 168, 170), "plain", True),
)


@dataclass(frozen=True)
class RandomScene:
    """A rig, how it is filmed, and the names of the difficulties that are on."""

    rig: Rig
    settings: RehearsalSettings
    labels: tuple[str, ...]


def random_scene(seed: int, *, duration_s: float = 12.0) -> RandomScene:
    """Draw a scene: suspension, dot, view, light, other things that move, timing and codec.

    The same seed gives the same scene and the same clip. The dot stays in the picture and swings visibly; everything
    else is as it comes.

    Examples
    --------
    >>> random_scene(3) == random_scene(3)
    True
    """
    rng = np.random.default_rng((seed, 20))
    labels: list[str] = []
    film = _film(rng, labels, duration_s)
    stage = _stage(rng, labels)
    period = float(rng.uniform(0.9, 2.2))
    rig = _hung(rng, period)
    amplitude = math.radians(math.exp(rng.uniform(math.log(4.0), math.log(22.0))))
    if stage.camera == "side":
        amplitude = max(amplitude, math.radians(6.0))
    stage, film = _fitted(stage, film, amplitude, rng)
    stage = replace(stage, dot_diameter_m=_dot_diameter(rng, stage, film, labels))
    low, high = _arc(stage, film, amplitude)
    across = sized_stage(stage, camera_for(stage, film)).dot_diameter_px or 0.0
    if float(np.hypot(*(high - low))) < across:
        labels.append("arc shorter than the dot")
    sway: tuple[Sway, ...] = ()
    if rng.random() < 0.3:
        labels.append("sway")
        hz = math.sqrt(GRAVITY.value / _drop(rig)) / (2.0 * math.pi)
        size = float(rng.uniform(0.02, 0.1)) * amplitude * stage.dot_radius_m
        sway = (Sway(size, hz, 0.02, float(rng.uniform(0, math.pi)), float(rng.uniform(0, 6.28))),)
    settings = RehearsalSettings(
        amplitude_rad=amplitude,
        damping=Damping(float(rng.uniform(0.002, 0.03)), float(rng.choice([0.0, 0.03]))),
        sway=sway,
        release_s=float(rng.uniform(0.7, 2.2)) if stage.hand else 0.0,
        tremble_rad=0.02 * amplitude if stage.hand else 0.0,
        film=film,
        stage=stage,
        seed=seed,
        period_s=period,
    )
    view = View(
        stage.camera,
        Quantity(stage.dot_radius_m, 5e-4, "m"),
        Quantity(stage.dot_diameter_m, 1e-4, "m"),
    )
    moment = moment_for_period(rig, period)
    article = replace(rig.article, expected_moment=Quantity(moment, 0.0, "kg m^2"))
    return RandomScene(replace(rig, article=article, view=view), settings, tuple(labels))


def _film(rng: Rng, labels: list[str], duration_s: float) -> Film:
    values: dict[str, object] = {
        "duration_s": duration_s,
        "rate_hz": float(rng.choice([24.0, 30.0, 30.0, 30.0, 60.0])),
        "uneven_ms": float(rng.uniform(0.05, 1.2)),
        "exposure_s": float(math.exp(rng.uniform(math.log(1 / 500), math.log(1 / 50)))),
        "noise": float(rng.uniform(1.0, 7.0)),
        "crf": int(rng.integers(18, 28)),
        "codec": "libx264" if rng.random() < 0.8 else "libx265",
    }

    def perhaps(chance: float, label: str, **more: object) -> None:
        if rng.random() < chance:
            labels.append(label)
            values.update(more)

    perhaps(0.25, "flicker", flicker=float(rng.uniform(0.05, 0.25)), exposure_s=1.0 / 400.0)
    perhaps(0.25, "exposure drift", drift=float(rng.choice([-0.35, 0.25])))
    perhaps(0.25, "shake", shake_px=float(rng.uniform(0.5, 3.5)))
    perhaps(0.25, "dropped frames", dropped_share=float(rng.uniform(0.005, 0.04)))
    perhaps(0.15, "repeated images", repeated_share=float(rng.uniform(0.01, 0.06)))
    perhaps(0.5, "rolling shutter", readout_s=float(rng.uniform(0.008, 0.02)))
    perhaps(0.25, "portrait", width=720, height=1280, rotation_deg=90)
    film = Film(**values)  # type: ignore[arg-type]
    # a shutter can't be open longer than a frame lasts, nor the read-out take longer
    return replace(
        film,
        exposure_s=min(film.exposure_s, 0.8 / film.rate_hz),
        readout_s=min(film.readout_s, 0.8 / film.rate_hz),
    )


def _stage(rng: Rng, labels: list[str]) -> Stage:
    name, dot, article, look, ring = PAINTS[int(rng.integers(len(PAINTS)))]
    camera = str(rng.choice(["above", "above", "above", "side", "oblique"]))
    labels += [name, camera]
    radius = float(rng.uniform(0.12, 0.75))
    values: dict[str, object] = {
        "camera": camera,
        "dot_radius_m": radius,
        "distance_m": radius * float(rng.uniform(2.6, 5.0)),
        "dot_bgr": dot,
        "article_bgr": article,
        "article": look,
        "ring": ring,
        "clutter": int(rng.integers(3, 24)),
        "bench": str(rng.choice(["wood", "mat", "concrete", "white"])),
        "shadow": bool(rng.random() < 0.7),
        "elevation_deg": float(rng.uniform(30.0, 65.0)) if camera == "oblique" else None,
        "aside_deg": float(rng.uniform(-25.0, 25.0)) if camera == "oblique" else 0.0,
    }

    def perhaps(chance: float, label: str, **more: object) -> None:
        if rng.random() < chance:
            labels.append(label)
            values.update(more)

    perhaps(0.5, "look-alikes", alike=int(rng.integers(1, 6)))
    perhaps(0.5, "hand", hand=True)
    kind = str(rng.choice(["person", "person", "swinging", "fan"]))
    perhaps(0.4, f"mover: {kind}", mover=True, mover_kind=kind)
    perhaps(0.15, "string over the dot", string_over_dot=True)
    return Stage(**values)  # type: ignore[arg-type]


def _hung(rng: Rng, period: float) -> Rig:
    """A bifilar, three strings or a wire, with which the period belongs to an ordinary article."""
    kind = str(rng.choice(["bifilar", "bifilar", "bifilar", "trifilar", "torsion-wire"]))
    mass = float(rng.uniform(0.3, 2.5))
    length = float(rng.uniform(0.6, 1.6))
    if kind == "torsion-wire":
        moment = mass * 0.12**2
        stiffness = moment * (2.0 * math.pi / period) ** 2
        sizes = {"stiffness": Quantity(stiffness, 1e-3 * stiffness, "N m/rad")}
    else:
        # radius of gyration 60 to 250 mm for half the spacing: the period sets their ratio, T = 2π (k/b) √(L/g)
        half = float(rng.uniform(0.06, 0.16))
        name, size = ("spacing", 2.0 * half) if kind == "bifilar" else ("radius", half)
        sizes = {"length": Quantity(length, 6e-4, "m"), f"upper_{name}": Quantity(size, 3e-4, "m")}
    return Rig(
        Article("blank", Quantity(mass, 3e-4, "kg")),
        Suspension(kind, sizes, strings=3 if kind == "trifilar" else 2),
        gravity=GRAVITY,
    )


def _drop(rig: Rig) -> float:
    return 1.0 if rig.suspension.kind == "torsion-wire" else strings_of(rig).drop_m


def _fitted(stage: Stage, film: Film, amplitude: float, rng: Rng) -> tuple[Stage, Film]:
    """As near as one likes to film, but the whole arc in the picture and visible."""
    share = float(rng.uniform(0.4, 1.3) if stage.camera == "side" else rng.uniform(0.2, 0.4))
    for _ in range(60):
        near = replace(stage, arc_share=share)
        low, high = _arc(near, film, amplitude)
        room = EDGE_PX + 1.5 * film.shake_px + 0.06 * min(film.width, film.height)
        if low.min() > room and high[0] < film.width - room and high[1] < film.height - room:
            break
        share *= 0.95
    if float(np.hypot(*(high - low))) < LEAST_ARC_PX + 4.0 * film.shake_px:
        film = replace(film, shake_px=0.0)
    return near, film


def _arc(stage: Stage, film: Film, amplitude: float) -> tuple[np.ndarray, np.ndarray]:
    """Corners of the box round the dot's middle over the swing, px."""
    q = np.linspace(-amplitude, amplitude, 41)
    points = stage.dot_radius_m * np.stack([np.sin(q), -np.cos(q), np.zeros_like(q)], axis=1)
    places = camera_for(stage, film).project(points)
    return places.min(axis=0), places.max(axis=0)


def _dot_diameter(rng: Rng, stage: Stage, film: Film, labels: list[str]) -> float:
    """In m, of a dot 8 to 80 px across, but with its ring no larger than a ninth of the picture."""
    largest = 0.115 * min(film.width, film.height) / (1.5 if stage.ring else 1.0)
    wanted = math.exp(rng.uniform(math.log(8.0), math.log(80.0)))
    across = min(wanted, largest)
    labels.append(f"{'small' if across < 14 else 'large' if across > 45 else 'middling'} dot")
    camera = camera_for(stage, film)
    return sized_stage(replace(stage, dot_diameter_px=across), camera).dot_diameter_m
