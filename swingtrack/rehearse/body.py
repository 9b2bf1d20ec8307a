"""Where the article is at any instant: its turn, its sway and roll, its rise on the strings, the hand's trembling."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..records import Floats
from .motion import SwingTruth
from .settings import RehearsalSettings, Roll, Sway

TREMBLE_HZ = (3.1, 7.3)  # a held hand trembles slowly and at about 8 Hz; common knowledge, no source
QUIET_S = 0.3  # the trembling dies away over this before the release, so that the swing starts from rest


@dataclass(frozen=True, eq=False)
class Bodies:
    """Poses: world = turn @ article point + shift. Shapes (..., 3, 3) and (..., 3), and the angles (...)."""

    turn: Floats
    shift: Floats
    angle_rad: Floats

    def at(self, index: Any) -> Bodies:
        """One of them, or a slice of the leading axes."""
        return Bodies(self.turn[index], self.shift[index], np.asarray(self.angle_rad[index]))

    def points(self, article: Floats) -> Floats:
        """World places (..., n, 3) of article points (n, 3)."""
        return np.asarray(
            np.einsum("...ij,nj->...ni", self.turn, article) + self.shift[..., None, :], dtype=np.float64
        )


@dataclass(frozen=True, eq=False)
class Motion:
    """All that the article does, from the settings and the integrated swing."""

    swing: SwingTruth
    settings: RehearsalSettings
    rise: Callable[[float], float]

    def angle(self, t_s: Floats) -> Floats:
        """Angle about the swing axis, rad, the trembling of the hand included."""
        t = np.asarray(t_s, dtype=np.float64)
        angle = self.swing.angle(t)
        if self.settings.tremble_rad:
            calm = np.clip((self.settings.release_s - t) / QUIET_S, 0.0, 1.0)
            shake = sum(np.sin(2.0 * math.pi * hz * t + hz) for hz in TREMBLE_HZ)
            angle = angle + self.settings.tremble_rad * 0.5 * shake * calm**2
        return angle

    def at(self, t_s: Floats) -> Bodies:
        """Poses at times of any shape."""
        t = np.asarray(t_s, dtype=np.float64)
        angle = self.angle(t)
        since = t - self.settings.release_s
        shift = np.zeros((*t.shape, 3))
        for sway in self.settings.sway:
            out = sway.amplitude_m * _decaying(sway, since)
            shift[..., 0] += out * math.cos(sway.direction_rad)
            shift[..., 1] += out * math.sin(sway.direction_rad)
        lift = np.array([self.rise(float(q)) for q in angle.ravel()]).reshape(angle.shape)
        shift[..., 2] += lift - self.rise(0.0)
        turn = _about_z(angle)
        for roll in self.settings.roll:
            turn = _about_level(roll.axis_rad, roll.tilt_rad * _decaying(roll, since)) @ turn
        return Bodies(turn, shift, angle)


def _decaying(mode: Sway | Roll, since: Floats) -> Floats:
    """Unit damped oscillation that begins at the release, at zero unless its phase says otherwise."""
    free = np.maximum(since, 0.0)
    wave = np.exp(-mode.decay_per_s * free) * np.sin(
        2.0 * math.pi * mode.frequency_hz * free + mode.phase_rad
    )
    return np.asarray(np.where(since > 0.0, wave, 0.0), dtype=np.float64)


def _about_z(angle: Floats) -> Floats:
    c, s, o = np.cos(angle), np.sin(angle), np.zeros_like(angle)
    rows = [[c, -s, o], [s, c, o], [o, o, o + 1.0]]
    return np.stack([np.stack(row, axis=-1) for row in rows], axis=-2)


def _about_level(axis_rad: float, tilt: Floats) -> Floats:
    """Rotation about the level axis (cos, sin, 0), by Rodrigues' formula."""
    x, y = math.cos(axis_rad), math.sin(axis_rad)
    cross = np.array([[0.0, 0.0, y], [0.0, 0.0, -x], [-y, x, 0.0]])
    sine, rest = np.sin(tilt)[..., None, None], (1.0 - np.cos(tilt))[..., None, None]
    return np.asarray(np.eye(3) + sine * cross + rest * (cross @ cross), dtype=np.float64)
