"""Joining the spots of successive pictures into short tracks."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from ..records import Floats

LONGEST_GAP = 4  # pictures without the spot before its track ends
SHORTEST = 10  # pictures a track must have to be looked at


@dataclass(eq=False)
class ShortTrack:
    """One spot over several pictures: picture numbers and rows of `blobs.find_blobs`."""

    index: list[int] = field(default_factory=list)
    rows: list[Floats] = field(default_factory=list)

    @property
    def last(self) -> Floats:
        return self.rows[-1]

    def ahead(self, index: int) -> tuple[float, float]:
        """Where it should be in picture `index` by its last two places."""
        x, y = float(self.last[0]), float(self.last[1])
        if len(self.index) < 2:
            return x, y
        gap = self.index[-1] - self.index[-2]
        h = (index - self.index[-1]) / gap
        return x + h * (x - float(self.rows[-2][0])), y + h * (y - float(self.rows[-2][1]))


def join_blobs(blobs: list[Floats], reach: float) -> list[ShortTrack]:
    """Greedy joining: nearest to where each track is going, alike in size and colour.

    Parameters
    ----------
    blobs : one (n, 7) array a picture
    reach : float
        Farthest a spot may be from its predicted place, samples; three times that for a track's second picture.
    """
    active: list[ShortTrack] = []
    done: list[ShortTrack] = []
    for index, spots in enumerate(blobs):
        still = []
        for track in active:
            (still if index - track.index[-1] <= LONGEST_GAP else done).append(track)
        active = still
        taken = np.zeros(len(spots), bool)
        if len(spots) and active:
            cost = _costs(active, spots, index, reach)
            order = np.argsort(cost, axis=None, kind="stable")
            used = np.zeros(len(active), bool)
            for flat in order:
                a, b = divmod(int(flat), len(spots))
                if cost[a, b] >= 1e6:
                    break
                if used[a] or taken[b]:
                    continue
                used[a] = taken[b] = True
                active[a].index.append(index)
                active[a].rows.append(spots[b])
        for b in np.nonzero(~taken)[0]:
            active.append(ShortTrack([index], [spots[b]]))
    return [t for t in done + active if len(t.index) >= SHORTEST]


def _costs(tracks: list[ShortTrack], spots: Floats, index: int, reach: float) -> Floats:
    ahead = np.array([t.ahead(index) for t in tracks])
    last = np.array([t.last for t in tracks])
    young = np.array([len(t.index) < 2 for t in tracks])
    gone = np.array([index - t.index[-1] for t in tracks])
    far = np.hypot(ahead[:, None, 0] - spots[None, :, 0], ahead[:, None, 1] - spots[None, :, 1])
    limit = np.where(young, 3.0, 1.0 + 0.5 * (gone - 1)) * reach
    colour = np.linalg.norm(last[:, None, 4:7] - spots[None, :, 4:7], axis=2)
    strength = 0.5 * (last[:, None, 3] + spots[None, :, 3])
    size = np.abs(np.log(last[:, None, 2] / spots[None, :, 2]))
    cost = far / limit[:, None] + colour / strength + 0.7 * size
    cost[(far > limit[:, None]) | (colour > 0.8 * strength) | (size > 0.9)] = 1e9
    result: Floats = cost
    return result
