"""Small clips with chosen containers, codecs, times and faults, written by PyAV."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from pathlib import Path

import av
import numpy as np


@dataclass(frozen=True)
class Recipe:
    """How a clip is written: `ticks` are presentation stamps in `time_base`, one a picture."""

    ticks: Sequence[int]
    codec: str = "libx264"
    pixel_format: str = "yuv420p"
    time_base: Fraction = Fraction(1, 600)
    size: tuple[int, int] = (160, 96)
    container_options: dict[str, str] = field(default_factory=dict)
    codec_options: dict[str, str] = field(default_factory=dict)
    metadata: dict[str, str] = field(default_factory=dict)
    sound: bool = False
    repeat: frozenset[int] = frozenset()


def even_ticks(count: int = 60, step: int = 20) -> list[int]:
    return [step * i for i in range(count)]


def picture(number: int, size: tuple[int, int]) -> np.ndarray:
    """A bright spot that swings over a fixed texture."""
    width, height = size
    rows, columns = np.mgrid[0:height, 0:width]
    texture = 70 + 20 * np.sin(columns / 7.0) + 15 * np.cos(rows / 5.0)
    x, y = width * (0.5 + 0.25 * np.sin(2 * np.pi * number / 24)), height * 0.5
    spot = 150.0 / (1.0 + np.exp(2.0 * (np.hypot(columns - x, rows - y) - 8.0)))
    noise = np.random.default_rng(number).normal(0.0, 1.5, (height, width))
    grey = np.clip(texture + spot + noise, 0, 255).astype(np.uint8)
    return np.repeat(grey[..., None], 3, axis=2)


def write_clip(file: Path, recipe: Recipe) -> Path:
    with av.open(str(file), "w", options=recipe.container_options) as container:
        container.metadata.update(recipe.metadata)
        stream = container.add_stream(recipe.codec, rate=30)
        stream.width, stream.height = recipe.size
        stream.pix_fmt = recipe.pixel_format
        stream.time_base = stream.codec_context.time_base = recipe.time_base
        stream.options = {"crf": "20"} | recipe.codec_options
        sound = container.add_stream("aac", rate=48_000, layout="mono") if recipe.sound else None
        for number, tick in enumerate(recipe.ticks):
            shown = number - 1 if number in recipe.repeat else number
            frame = av.VideoFrame.from_ndarray(picture(shown, recipe.size), format="bgr24").reformat(
                format=recipe.pixel_format
            )
            frame.pts, frame.time_base = tick, recipe.time_base
            container.mux(stream.encode(frame))
        container.mux(stream.encode())
        if sound is not None:
            for start in range(0, 48_000, 1024):
                samples = av.AudioFrame.from_ndarray(
                    np.zeros((1, 1024), dtype=np.float32), format="fltp", layout="mono"
                )
                samples.sample_rate, samples.pts = 48_000, start
                container.mux(sound.encode(samples))
            container.mux(sound.encode())
    return file
