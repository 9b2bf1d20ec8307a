"""One upright picture of the clip with the dot ringed and its whole path drawn on it."""

from __future__ import annotations

import cv2
import numpy as np
from numpy.typing import NDArray

from ..records import Path

Image = NDArray[np.uint8]

RING_BGR = (60, 190, 255)
PATH_BGR = (170, 150, 20)
SHIFT = 4


def draw_still(image: Image, path: Path) -> Image:
    """The picture (height, width, 3) BGR with each track's path and a ring where its dot is first seen."""
    drawn = image.copy()
    thick = max(1, round(image.shape[0] / 540))
    for track in path.tracks:
        seen = np.flatnonzero(track.seen)
        if not seen.size:
            continue
        places = np.stack([track.x_px[seen], track.y_px[seen]], axis=1)
        cv2.polylines(
            drawn,
            [np.rint(places * (1 << SHIFT)).astype(np.int32)],
            False,
            PATH_BGR,
            thick,
            cv2.LINE_AA,
            SHIFT,
        )
        size = path.marker.diameter_px if path.marker is not None and path.marker.diameter_px else 16.0
        middle = tuple(round(v * (1 << SHIFT)) for v in places[0])
        cv2.circle(
            drawn, middle, round((0.5 * size + 5) * (1 << SHIFT)), RING_BGR, 2 * thick, cv2.LINE_AA, SHIFT
        )
    return drawn


def encode_png(image: Image) -> bytes:
    """PNG bytes of a BGR picture."""
    done, data = cv2.imencode(".png", image)
    if not done:
        raise RuntimeError("the picture could not be encoded as PNG")
    return bytes(data)
