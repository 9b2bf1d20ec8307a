"""The timing audit: what a clip's frame times are worth, and what each fault means for the period."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..records import Doubt, Floats

REPEAT_SHARE = 0.04  # of the usual change: true repeats show 0.02 and less, starved encoders 0.05 and more
MOVING_SHARE = 0.5  # of the clip's usual change, below which the scene is taken to stand still
GAP = 1.5  # intervals longer than this many usual ones have frames missing in them
UNEVEN_SHARE = (
    0.02  # spread over usual interval above which frames are called uneven: a tenth of common phone jitter
)


@dataclass(frozen=True)
class TimingAudit:
    """What the frame times were found to be.

    Parameters
    ----------
    stored_rate_hz : float or None
        One over the usual (median) stored interval; None below three frames.
    interval_spread_ms : float
        Standard deviation of the intervals about the usual one, gaps left out, in stored milliseconds.
    dropped_frames : int
        Frames missing in gaps of two usual intervals and more.
    repeated_frames : int
        Images that only repeat the one before under a new time.
    backward_frames : int
        Frames whose time did not go forward; they are left out.
    even : bool
        All intervals alike to the file's own resolution.
    """

    stored_rate_hz: float | None
    interval_spread_ms: float
    dropped_frames: int
    repeated_frames: int
    backward_frames: int
    even: bool

    def notes(self) -> tuple[str, ...]:
        """The audit in sentences, each with what it means for the period."""
        said = []
        if self.stored_rate_hz is not None:
            kind = "all alike" if self.even else f"uneven by {self.interval_spread_ms:.2f} ms"
            said.append(
                f"Frames are {1000.0 / self.stored_rate_hz:.3f} ms apart as a rule, {kind}; the file's own times are used, "
                "so that uneven frames do not touch the period."
            )
        if self.dropped_frames:
            said.append(
                f"{self.dropped_frames} frames are missing; the times around the gaps are true, so that the period does not suffer."
            )
        if self.repeated_frames:
            said.append(
                f"{self.repeated_frames} images only repeat the one before under a new time; they are left out, and where an image was "
                "lost instead its neighbours may be a frame late."
            )
        if self.backward_frames:
            said.append(
                f"{self.backward_frames} frames had a time that did not go forward and were left out."
            )
        return tuple(said)


def audit_times(times_s: Floats, repeated: Floats, backward: int) -> TimingAudit:
    """Audit stored times.

    Parameters
    ----------
    times_s : (n_frames,) float
        Stored times, strictly increasing.
    repeated : (n_frames,) bool
    backward : int
    """
    steps = np.diff(times_s)
    if steps.size < 2:
        return TimingAudit(None, 0.0, 0, int(np.count_nonzero(repeated)), backward, True)
    usual = float(np.median(steps))
    whole = np.maximum(np.rint(steps / usual), 1.0)
    gaps = steps > GAP * usual
    single = steps[~gaps]
    spread = float(np.std(single))
    return TimingAudit(
        stored_rate_hz=1.0 / _mean_interval(single, usual),
        interval_spread_ms=1e3 * spread,
        dropped_frames=int((whole[gaps] - 1.0).sum()),
        repeated_frames=int(np.count_nonzero(repeated)),
        backward_frames=backward,
        even=bool(np.ptp(single) < UNEVEN_SHARE * usual) if single.size else True,
    )


def _mean_interval(single: Floats, usual: float) -> float:
    """Mean of the intervals without gaps: the median alone carries the rounding of a coarse time base."""
    return float(single.mean()) if single.size else usual


def find_repeats(differences: Floats) -> Floats:
    """Which images repeat the one before, from the mean change of each image against it.

    A repeat changes by next to nothing while its neighbours change as usual. After a second compression it is no
    longer bit for bit the same, so it is judged against the changes around it; near a turning point all changes are
    small together, and none stands out.

    Parameters
    ----------
    differences : (n_frames,) float
        Mean absolute change of a sparse sample of the luma; the first is NaN.

    Returns
    -------
    (n_frames,) bool
    """
    count = differences.size
    repeated = np.zeros(count, dtype=bool)
    if count < 7:
        return repeated
    reach = 3
    padded = np.pad(np.nan_to_num(differences, nan=np.inf), reach, mode="edge")
    around = np.stack([padded[i : i + count] for i in range(2 * reach + 1) if i != reach])
    # the second smallest of the neighbours: another repeat nearby must not hide this one
    usual = np.sort(around, axis=0)[2]
    usual = np.where(np.isfinite(usual), usual, 0.0)
    # Where nothing much moves, at a turning point, an encoder may leave a picture as it was: no time is wrong there.
    moving = usual > MOVING_SHARE * float(np.nanmedian(differences))
    repeated[1:] = (differences[1:] < REPEAT_SHARE * usual[1:]) & moving[1:] & (usual[1:] > 0.0)
    return repeated


def timing_doubts(audit: TimingAudit, *, stretched: str) -> tuple[Doubt, ...]:
    """Doubts that the audit gives cause for; `stretched` says why the times look stretched, "" where they do not."""
    doubts = []
    if audit.repeated_frames:
        doubts.append(
            Doubt(
                "file-retimed",
                f"{audit.repeated_frames} images repeat the one before under a new time: the file is not as the camera wrote it.",
                "Send the file itself, not through a messenger or a photo service.",
            )
        )
    if audit.backward_frames:
        doubts.append(
            Doubt(
                "times-backward",
                f"{audit.backward_frames} frames have times that do not go forward; they were left out.",
                "Copy the file from the phone again.",
            )
        )
    if stretched:
        doubts.append(
            Doubt(
                "times-look-stretched",
                f"{stretched} A clip taken at 240 and stored at 30 frames/s makes the period 8 times too long, the inertia 64 times too large.",
                "Time ten swings by hand. If it is slow motion, give the true rate with --capture-rate.",
            )
        )
    return tuple(doubts)
