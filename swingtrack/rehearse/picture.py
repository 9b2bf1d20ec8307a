"""From the drawn picture to what a phone stores: the light's flicker, the sensor's noise, planes with half the chroma."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import cv2
import numpy as np

from ..records import Floats
from .bench import Image, Rng, as_levels
from .settings import Film

# BT.709, limited range: luma, u, v of blue, green, red (Rec. ITU-R BT.709-6, items 3.2 to 3.5).
_KR, _KB = 0.2126, 0.0722
_KG = 1.0 - _KR - _KB
TO_YUV = np.array(
    [
        [_KB * 219 / 255, _KG * 219 / 255, _KR * 219 / 255, 16.0],
        [224 / 255 * 0.5, -224 / 255 * 0.5 * _KG / (1 - _KB), -224 / 255 * 0.5 * _KR / (1 - _KB), 128.0],
        [-224 / 255 * 0.5 * _KB / (1 - _KR), -224 / 255 * 0.5 * _KG / (1 - _KR), 224 / 255 * 0.5, 128.0],
    ]
)
LEFT_SITED = np.array([[0.25, 0.5, 0.25]], dtype=np.float32)

NOISE_FIELDS = (
    6  # drawn once, laid down with random shifts: a fresh field each frame would take most of the time
)
FIELD_MARGIN = 96
FIELD_UNIT = 64.0  # counts of a field for one standard deviation
CHROMA_NOISE = 0.5  # of luma's: phones smooth chroma harder; common practice, no source
READ_NOISE_SHARE = 0.25  # of the noise at mid-grey that does not come from counting photons; a judgment


@dataclass(frozen=True, eq=False)
class Planes:
    """One picture as it goes to the encoder: (height, width) luma and quarter-size chroma, uint8."""

    luma: Image
    chroma_u: Image
    chroma_v: Image

    def stacked(self) -> Image:
        """The (3/2 height, width) layout that the encoder's frames are made from."""
        rest = np.concatenate([self.chroma_u.ravel(), self.chroma_v.ravel()])
        return np.concatenate([self.luma.ravel(), rest]).reshape(-1, self.luma.shape[1])


def to_planes(picture: Image) -> Planes:
    """BGR to 4:2:0, chroma left-sited: on the even columns and between the rows, as H.264 has it by default."""
    luma, u, v = cv2.split(cv2.transform(picture, TO_YUV))
    halves = []
    for plane in (u, v):
        smooth = cv2.filter2D(plane, -1, LEFT_SITED, borderType=cv2.BORDER_REPLICATE)[:, ::2]
        # Each value is the mean of two rows; rounding the sum up and down by turns would only add pattern.
        halves.append(cv2.addWeighted(smooth[::2], 0.5, smooth[1::2], 0.5, 0.0))
    return Planes(luma, halves[0], halves[1])


def light_of_rows(film: Film, taken_s: float, rows: int) -> Floats | float:
    """Gain of the picture: the drift, and the mains' flicker as each row's own exposure averages it."""
    gain = 1.0 + film.drift * taken_s / film.duration_s
    if film.flicker == 0.0:
        return gain
    hz = 2.0 * film.mains_hz
    smoothed = film.flicker * float(np.sinc(hz * film.exposure_s))
    if film.readout_s == 0.0:
        return gain * (1.0 + smoothed * math.sin(2.0 * math.pi * hz * taken_s))
    at = taken_s + film.readout_s * ((np.arange(rows) + 0.5) / rows - 0.5)
    return np.asarray(gain * (1.0 + smoothed * np.sin(2.0 * math.pi * hz * at)), dtype=np.float64)


def lit(planes: Planes, gain: Floats | float) -> Planes:
    """The planes under another light: luma about black, chroma about grey."""
    if isinstance(gain, float):
        if abs(gain - 1.0) < 1e-6:
            return planes
        levels = np.arange(256.0)
        luma = as_levels(16.0 + gain * (levels - 16.0))
        chroma = as_levels(128.0 + gain * (levels - 128.0))
        return Planes(
            cv2.LUT(planes.luma, luma), cv2.LUT(planes.chroma_u, chroma), cv2.LUT(planes.chroma_v, chroma)
        )
    rows = gain.astype(np.float32)[:, None]
    halves = 0.5 * (rows[::2] + rows[1::2])
    return Planes(
        _about(planes.luma, rows, 16.0),
        _about(planes.chroma_u, halves, 128.0),
        _about(planes.chroma_v, halves, 128.0),
    )


def _about(plane: Image, gain: Any, zero: float) -> Image:
    return as_levels(zero + gain * (plane.astype(np.float32) - zero))


class SensorNoise:
    """Noise of a sensor that counts photons, as it looks after the tone curve.

    In linear light its variance is read² + shot · light; a tone curve of gamma 1/2.2 divides it by the curve's slope.
    What is left grows towards the dark. It is scaled to `film.noise` at mid-grey.
    """

    def __init__(self, film: Film, rows: int, columns: int, rng: Rng) -> None:
        self._rng = rng
        fields = NOISE_FIELDS if film.noise > 0.0 else 0
        half = (rows // 2, columns // 2)
        colour = film.noise * CHROMA_NOISE
        self._luma = [self._field(rows, columns, FIELD_UNIT) for _ in range(fields)]
        self._chroma = [(self._field(*half, colour), self._field(*half, colour)) for _ in range(fields)]
        self._strength = np.rint(film.noise * noise_curve() * FIELD_UNIT).astype(np.int16)

    def _field(self, rows: int, columns: int, scale: float) -> Any:
        shape = (rows + FIELD_MARGIN, columns + FIELD_MARGIN)
        return np.rint(self._rng.standard_normal(shape, dtype=np.float32) * scale).astype(np.int16)

    def added(self, planes: Planes) -> Planes:
        """The planes with fresh noise."""
        if not self._luma:
            return planes
        field = int(self._rng.integers(NOISE_FIELDS))
        strength = cv2.LUT(planes.luma, self._strength)
        unit = self._window(self._luma[field], planes.luma)
        grain = cv2.multiply(strength, unit, scale=FIELD_UNIT**-2, dtype=cv2.CV_16S)
        u, v = self._chroma[field]
        return Planes(
            cv2.add(planes.luma, grain, dtype=cv2.CV_8U),
            cv2.add(planes.chroma_u, self._window(u, planes.chroma_u), dtype=cv2.CV_8U),
            cv2.add(planes.chroma_v, self._window(v, planes.chroma_v), dtype=cv2.CV_8U),
        )

    def _window(self, field: Any, plane: Image) -> Any:
        y, x = (int(n) for n in self._rng.integers(0, FIELD_MARGIN, 2))
        height, width = plane.shape
        return field[y : y + height, x : x + width]


def noise_curve() -> Floats:
    """Standard deviation of luma at each stored level (256,), over that at mid-grey."""
    encoded = np.clip((np.arange(256.0) - 16.0) / 219.0, 0.02, 1.0)
    light = encoded**2.2
    slope = encoded ** (1.0 - 2.2) / 2.2
    middle = 0.5**2.2
    variance = slope**2 * (READ_NOISE_SHARE * middle + (1.0 - READ_NOISE_SHARE) * light)
    at_middle = (0.5 ** (1.0 - 2.2) / 2.2) ** 2 * middle
    # Phones crush the deep shadows, and with them their noise.
    return np.asarray(np.minimum(np.sqrt(variance / at_middle), 2.0), dtype=np.float64)
