"""Compact spots in one small picture: peaks of the difference of Gaussians over place and size.

The response of luma and both chroma is taken as one vector, so that a spot may stand out by its brightness, its
colour or both; its length is what is searched for peaks. Peaks that are drawn out like an edge are dropped by
the ratio of the principal curvatures, tr² / det of the Hessian (D. G. Lowe, Int. J. Computer Vision 60 (2004) 91,
section 4.1; the limit is looser here, as a dot may be seen obliquely).
"""

from __future__ import annotations

import cv2
import numpy as np
from numpy.typing import NDArray

from ..records import Floats

# Standard deviations of the Gaussians; a disc of radius r answers most at about r / √2.
SIGMAS = (0.8, 1.1, 1.6, 2.2, 3.2, 4.5, 6.4, 9.0, 12.7)
SIZES = len(SIGMAS) - 1

# Weights of luma, u and v: chroma is quieter than luma and seldom changes across a wall.
WEIGHTS = np.array([1.0, 1.5, 1.5], np.float32)

LONGEST_SHAPE = 4.5  # principal curvatures' ratio above which a peak counts as an edge or a bar
MOST_PEAKS = 48


def find_blobs(picture: NDArray[np.uint8], moving: NDArray[np.bool_], threshold: float) -> Floats:
    """Peaks of one picture, strongest first.

    Returns
    -------
    (n, 7) float
        x, y, diameter (samples), strength (levels), and the response in luma, u, v.
    """
    rows, columns = np.nonzero(moving)
    if not len(rows):
        return np.empty((0, 7))
    margin = 14
    r0, r1 = max(0, rows.min() - margin), min(moving.shape[0], rows.max() + margin + 1)
    c0, c1 = max(0, columns.min() - margin), min(moving.shape[1], columns.max() + margin + 1)
    window = np.ascontiguousarray(picture[r0:r1, c0:c1]).astype(np.float32) * WEIGHTS
    inside = moving[r0:r1, c0:c1]
    responses = _responses(window)
    found: list[NDArray[np.float64]] = []
    previous_strengths = [np.zeros(0)]
    strengths = [s for s, _, _ in responses]
    for level, (strength, signed, step) in enumerate(responses):
        top = cv2.dilate(strength, np.ones((3, 3), np.uint8))
        peak = (
            (strength >= top)
            & (strength > threshold)
            & (inside[::step, ::step][: strength.shape[0], : strength.shape[1]])
        )
        ys, xs = np.nonzero(peak)
        for y, x in zip(ys, xs, strict=True):
            if not (1 <= y < strength.shape[0] - 1 and 1 <= x < strength.shape[1] - 1):
                continue
            value = strength[y, x]
            if _beaten(strengths, responses, level, int(x) * step, int(y) * step, float(value)):
                continue
            place = _refine(strength, int(x), int(y))
            if place is None:
                continue
            px, py = place
            found.append(
                np.array(
                    [
                        (px * step) + (step - 1) / 2 * 0 + c0,
                        (py * step) + r0,
                        2.0 * np.sqrt(2.0) * SIGMAS[level] * 1.1,
                        float(value),
                        *(signed[y, x] / WEIGHTS),
                    ]
                )
            )
    del previous_strengths
    if not found:
        return np.empty((0, 7))
    peaks = np.array(found)
    peaks = peaks[np.argsort(-peaks[:, 3], kind="stable")]
    return _apart(peaks)[:MOST_PEAKS]


def _responses(window: NDArray[np.float32]) -> list[tuple[NDArray[np.float32], NDArray[np.float32], int]]:
    """For each size: strength, signed response by plane, and samples a step (coarser for large sizes)."""
    out = []
    step = 1
    current = window
    blurred = cv2.GaussianBlur(current, (0, 0), SIGMAS[0])
    done = SIGMAS[0]
    for sigma in SIGMAS[1:]:
        more = float(np.sqrt(sigma**2 - done**2)) / step
        wider = cv2.GaussianBlur(blurred, (0, 0), more)
        signed = blurred - wider
        strength = np.sqrt(np.einsum("ijk,ijk->ij", signed, signed))
        out.append((strength, signed, step))
        blurred, done = wider, sigma
        if done / step > 3.0 and min(blurred.shape[:2]) > 24:
            blurred = np.ascontiguousarray(blurred[::2, ::2])
            step *= 2
    return out


def _beaten(
    strengths: list[NDArray[np.float32]],
    responses: list[tuple[NDArray[np.float32], NDArray[np.float32], int]],
    level: int,
    x: int,
    y: int,
    value: float,
) -> bool:
    """True where the next smaller or larger size answers more at the same place."""
    for other in (level - 1, level + 1):
        if not 0 <= other < len(responses):
            continue
        strength, step = strengths[other], responses[other][2]
        oy, ox = y // step, x // step
        near = strength[max(0, oy - 1) : oy + 2, max(0, ox - 1) : ox + 2]
        if near.size and float(near.max()) > value:
            return True
    return False


def _refine(strength: NDArray[np.float32], x: int, y: int) -> tuple[float, float] | None:
    """Sub-sample place by parabolas; None for a peak drawn out like an edge."""
    p = strength[y - 1 : y + 2, x - 1 : x + 2]
    dx, dy = 0.5 * (p[1, 2] - p[1, 0]), 0.5 * (p[2, 1] - p[0, 1])
    dxx = p[1, 2] - 2 * p[1, 1] + p[1, 0]
    dyy = p[2, 1] - 2 * p[1, 1] + p[0, 1]
    dxy = 0.25 * (p[2, 2] - p[2, 0] - p[0, 2] + p[0, 0])
    det = dxx * dyy - dxy * dxy
    trace = dxx + dyy
    if det <= 0 or trace * trace / det > (LONGEST_SHAPE + 1) ** 2 / LONGEST_SHAPE:
        return None
    ox = -(dyy * dx - dxy * dy) / det
    oy = -(dxx * dy - dxy * dx) / det
    return x + float(np.clip(ox, -0.6, 0.6)), y + float(np.clip(oy, -0.6, 0.6))


def _apart(peaks: Floats) -> Floats:
    """Drop peaks within a third of the diameter of a stronger one."""
    kept: list[int] = []
    for i, p in enumerate(peaks):
        if all(
            (p[0] - peaks[k, 0]) ** 2 + (p[1] - peaks[k, 1]) ** 2 > (0.35 * max(p[2], peaks[k, 2])) ** 2
            for k in kept
        ):
            kept.append(i)
        if len(kept) >= MOST_PEAKS:
            break
    return peaks[kept]
