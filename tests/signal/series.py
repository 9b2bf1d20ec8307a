"""Swings of known truth for the tests of the fit, seeded and noisy."""

from __future__ import annotations

import numpy as np

from swingtrack.records import MarkerFacts, Path, Quantity, Track
from tests.signal.truth import Losses, bifilar, integrate

PERIOD = 1.1
RIG = bifilar(1.0, 0.15, 0.15, 0.15)
START = 0.17
USUAL = Losses(0.02, 0.02, 0)
NOISE = 0.002


def swing(seconds: float = 40.0, *, losses: Losses = USUAL) -> tuple[np.ndarray, np.ndarray]:
    """Times at 30 Hz and the noise-free angle of a bifilar from rest at 0.17 rad."""
    t = np.arange(int(seconds * 30)) / 30
    return t, integrate(t, RIG, PERIOD, START, losses)


def noise(n: int, seed: int, size: float = NOISE) -> np.ndarray:
    """White noise."""
    return size * np.random.default_rng(seed).standard_normal(n)


def path(
    places: list[tuple[np.ndarray, np.ndarray]], rate: float, seed: int, *, diameter_px: float = 20.0
) -> Path:
    """A path of one dot or two with 0.05 px of noise."""
    random = np.random.default_rng(seed)
    n = len(places[0][0])
    u = np.full(n, 0.05)
    tracks = tuple(
        Track(
            x + 0.05 * random.standard_normal(n),
            y + 0.05 * random.standard_normal(n),
            u,
            u,
            np.ones(n, dtype=bool),
        )
        for x, y in places
    )
    return Path(np.arange(n) / rate, tracks, marker=MarkerFacts("drawn", n, 0, diameter_px, 0.05))


def length(value: float, relative: float = 0.002) -> Quantity:
    """A measured length."""
    return Quantity(value, value * relative, "m")
