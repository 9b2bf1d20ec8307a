"""Long series made short for drawing: the smallest and the largest of each stretch are kept.

A stretch then looks as it did, spikes included; taking every n-th sample would lose them.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from ..records import Floats

MOST_POINTS = 4000  # several to each pixel of a page's width: beyond it the picture stays and the file grows


def keep_extremes(y: Floats, most: int = MOST_POINTS) -> NDArray[np.intp]:
    """Indices, ascending, of at most `most` samples of `y` (n,), with both extremes of every stretch among them.

    NaN are passed over; a stretch of nothing else keeps its first, so that gaps stay gaps.

    Examples
    --------
    >>> keep_extremes(np.array([0.0, 5.0, 1.0, 0.0, -3.0, 0.0]), 4).tolist()
    [0, 1, 3, 4]
    """
    count = len(y)
    if count <= most:
        return np.arange(count)
    stretch = -(-count // (most // 2))
    padded = np.full(-(-count // stretch) * stretch, np.nan)
    padded[:count] = y
    rows = padded.reshape(-1, stretch)
    start = np.arange(len(rows)) * stretch
    low = start + np.argmin(np.where(np.isnan(rows), np.inf, rows), axis=1)
    high = start + np.argmax(np.where(np.isnan(rows), -np.inf, rows), axis=1)
    return np.unique(np.concatenate([low, high]))
