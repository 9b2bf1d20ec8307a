"""Finding the dot without a click: compact spots that swing, ranked.

On a small copy of a stretch of the clip, compact spots are searched where anything moves, joined into short
tracks, and scored by how well one sinusoid explains their path. A spot is good if it swings as nothing but a swing
does, stands out, stands out all round (the end of a bar does not), and was seen most of the time.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from ..errors import NothingToMeasure
from ..records import Floats, FrameSource
from .appearance import Appearance, look_at
from .blobs import find_blobs
from .follow import Spot
from .predict import dominant_frequency
from .small import SmallClip, read_small
from .tracks import ShortTrack, join_blobs

# Stretches looked at, in turn, until one shows a clear swing: start in seconds after the first frame used, and length.
# The hand that holds and lets go is often in the first; what swings there may be the article's own outline.
STRETCHES = ((0.0, 6.0), (6.0, 8.0), (14.0, 10.0), (0.0, 20.0))

# A path counts as a swing if a sinusoid explains this share of its variance …
LEAST_EXPLAINED = 0.85
# … over this part of a period at least.
LEAST_CYCLES = 0.7

# A spot of this score is a dot beyond doubt (drawn scenes: 0.99 for dots, 0.7 at most for anything else) …
CLEAR = 0.9

# A second spot within this share of the best one's score is worth a word.
ALIKE = 0.6


@dataclass(frozen=True, eq=False)
class Found:
    """A candidate: the spot to follow, its score and what it is made of."""

    spot: Spot
    score: float
    explained: float
    cycles: float


def find_spots(
    source: FrameSource,
    from_s: float | None,
    to_s: float | None,
    *,
    progress: Callable[[float], None] | None = None,
) -> list[Found]:
    """Spots that swing, best first; raises `NothingToMeasure` where there are none."""
    start = 0.0 if from_s is None else from_s
    seen = Seen()
    best: list[Found] = []
    for offset, lasting in STRETCHES:
        begin = start + offset
        end = begin + lasting if to_s is None else min(begin + lasting, to_s)
        if end - begin < 0.3:
            continue
        small = read_small(
            source.frames(begin if begin > 0 else from_s, end + 0.2),
            source.width,
            source.height,
            lasting,
            progress=progress,
        )
        if small is None:
            break
        found = rank_spots(small, seen)
        if found and (not best or found[0].score > best[0].score):
            best = found
        if best and best[0].score >= CLEAR:
            return best
        if small.ended and offset > 0:
            break
    if best:
        return best
    raise NothingToMeasure(
        seen.sentence(),
        "A compact spot that stands out from what is round it and swings to and fro is needed.",
        "Paint or stick a dot of a colour of its own on the article, film it free of the hand for ten swings or more, "
        "or point at the dot with --dot X,Y.",
    )


@dataclass
class Seen:
    """What was seen while looking, for the message where nothing was found."""

    pictures: int = 0
    blobs: int = 0
    tracks: int = 0
    moving_share: float = 0.0

    def sentence(self) -> str:
        if not self.pictures:
            return "The part of the clip to be used has fewer than a dozen frames."
        if self.moving_share < 1e-4:
            return f"Nothing moves in the {self.pictures} pictures looked at."
        return (
            f"In the {self.pictures} pictures looked at, {100 * self.moving_share:.0f} % of the scene changes and "
            f"{self.tracks} compact spots were followed, but none of them swings."
        )


def rank_spots(small: SmallClip, seen: Seen) -> list[Found]:
    """Candidates of one stretch, best first."""
    threshold = max(2.5, 2.0 * small.noise)
    blobs = [find_blobs(p, small.moving, threshold) for p in small.pictures]
    seen.pictures += len(blobs)
    seen.blobs += sum(map(len, blobs))
    seen.moving_share = max(seen.moving_share, float(small.moving.mean()))
    reach = max(4.0, 0.02 * small.pictures[0].shape[1])
    tracks = join_blobs(blobs, reach)
    seen.tracks += len(tracks)
    candidates = [c for c in (_score(small, blobs, t) for t in tracks) if c is not None]
    candidates.sort(key=lambda c: -c.score)
    return _distinct(candidates)[:6]


def _score(small: SmallClip, blobs: list[Floats], track: ShortTrack) -> Found | None:
    index, rows = np.array(track.index), np.array(track.rows)
    t, places = small.t_s[index], rows[:, :2]
    if np.hypot(*places.std(axis=0)) < 0.5:
        return None
    swing = dominant_frequency(t, places)
    if swing is None or swing[2] < LEAST_EXPLAINED:
        return None
    omega = swing[0]
    # Take in the spot's other tracks: whatever in the stretch lies where the swing puts it and looks alike.
    for _ in range(2):
        index, rows = _gather(small, blobs, index, rows, omega)
        t, places = small.t_s[index], rows[:, :2]
        swing = dominant_frequency(t, places)
        if swing is None:
            return None
        omega = swing[0]
    cycles = omega / (2 * np.pi) * float(t[-1] - t[0])
    explained = swing[2]
    if cycles < LEAST_CYCLES or explained < LEAST_EXPLAINED:
        return None
    share = len(index) / len(small.t_s)
    amplitude = float(np.sqrt(2.0) * np.hypot(*places.std(axis=0)))
    look = _closer_look(small, index, rows, omega)
    if look is None:
        return None
    strength = float(np.median(rows[:, 3]))
    x, y = small.stored(rows[:, 0], rows[:, 1])
    score = (
        (explained - 0.5)
        / 0.5
        * min(1.0, cycles / 2)
        * share
        * min(1.0, amplitude / 2.0)
        * min(strength / 25.0, 1.0) ** 0.5
        * min(look.contrast / 60.0, 1.0) ** 0.5
        * float(np.clip(look.evenness / 0.6, 0.1, 1.0))
    )
    return Found(Spot(look, t, x, y, omega), float(score), explained, cycles)


def _gather(
    small: SmallClip, blobs: list[Floats], index: Floats, rows: Floats, omega: float
) -> tuple[Floats, Floats]:
    """Spots near the swing's own path and alike in look, one a picture."""
    t = small.t_s[index]
    second = omega * (t[-1] - t[0]) > 3 * np.pi
    base = _base(t, omega, second)
    coefficients, *_ = np.linalg.lstsq(base, rows[:, :2], rcond=None)
    spread = float(np.sqrt(np.mean(np.sum((rows[:, :2] - base @ coefficients) ** 2, axis=1))))
    path = _base(small.t_s, omega, second) @ coefficients
    look = np.median(rows, axis=0)
    gate = max(2.5, 3.0 * spread)
    picked_index, picked_rows = [], []
    own = dict(zip(index.tolist(), rows, strict=True))
    for i, spots in enumerate(blobs):
        if not len(spots):
            continue
        far = np.hypot(spots[:, 0] - path[i, 0], spots[:, 1] - path[i, 1])
        unlike = np.linalg.norm(spots[:, 4:7] - look[4:7], axis=1) / look[3]
        size = np.abs(np.log(spots[:, 2] / look[2]))
        cost = far / gate + unlike + 0.7 * size
        cost[(far > gate) | (unlike > 0.7) | (size > 0.9)] = 1e9
        best = int(np.argmin(cost))
        if cost[best] < 1e6:
            picked_index.append(i)
            picked_rows.append(spots[best])
        elif i in own and np.hypot(*(own[i][:2] - path[i])) < 3 * gate:
            picked_index.append(i)
            picked_rows.append(own[i])
    if len(picked_index) < len(index) // 2 or len(picked_index) < 8:
        return index, rows
    return np.array(picked_index), np.array(picked_rows)


def _base(t: Floats, omega: float, second: bool) -> Floats:
    columns = [np.ones_like(t), np.cos(omega * t), np.sin(omega * t)]
    if second:
        columns += [np.cos(2 * omega * t), np.sin(2 * omega * t)]
    return np.column_stack(columns)


def _closer_look(small: SmallClip, index: Floats, rows: Floats, omega: float) -> Appearance | None:
    """The spot in the kept whole pictures: the one in which it is sharpest, colours and evenness the medians."""
    t = small.t_s[index]
    looks = []
    for when, piece in small.kept:
        nearest = int(np.argmin(np.abs(t - when)))
        if abs(t[nearest] - when) > 0.02:
            continue
        x, y = small.stored(rows[nearest, 0], rows[nearest, 1])
        look = look_at(piece, float(x), float(y), float(rows[nearest, 2]) * small.factor)
        if (
            look is not None
            and np.hypot(look.x_px - x, look.y_px - y) < 0.7 * rows[nearest, 2] * small.factor + 3
        ):
            looks.append(look)
    if not looks:
        return None
    best = max(looks, key=lambda a: a.contrast * max(a.evenness, 0.05))
    return Appearance(
        best.x_px,
        best.y_px,
        float(np.median([a.diameter_px for a in looks])),
        best.inside,
        best.around,
        float(np.median([a.evenness for a in looks])),
    )


def _distinct(candidates: list[Found]) -> list[Found]:
    """Drop candidates that are the same spot as a better one."""
    kept: list[Found] = []
    for c in candidates:
        if not any(_same(c, k) for k in kept):
            kept.append(c)
    return kept


def _same(a: Found, b: Found) -> bool:
    common, ia, ib = np.intersect1d(a.spot.t_s, b.spot.t_s, return_indices=True)
    if len(common) < 5:
        return False
    far = np.hypot(a.spot.x_px[ia] - b.spot.x_px[ib], a.spot.y_px[ia] - b.spot.y_px[ib])
    return float(np.median(far)) < 0.5 * min(a.spot.look.diameter_px, b.spot.look.diameter_px) + 2
