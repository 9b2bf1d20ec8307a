"""What to doubt about a fit, and what to do about it: stable codes, one sentence each."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from swingtrack.records import Doubt, Mode, Quantity
from swingtrack.signal.choose import CRAMPED_BEATS
from swingtrack.signal.coordinate import Coordinate
from swingtrack.signal.fitting import Fitted
from swingtrack.signal.noise import Noise
from swingtrack.signal.opening import Opening
from swingtrack.signal.quantities import Estimate, InClip

# Judgments, common practice unless a reason is given.
FEW_CYCLES = 8.0
MANY_OUTLIERS_SHARE = 0.01
LOW_SIGNAL = 5.0  # amplitude at the end over the noise of one sample
LEAST_SAMPLES_A_PERIOD = 6.0
HEAVY_DAMPING = 0.05  # damping ratio from which the word "period" begins to lose its meaning
LARGE_AMPLITUDE_RAD = 0.6  # beyond some 35° the law's own geometry has to be right to a part in a thousand
COLOURED = (
    30.0  # noise at the swing's frequency over its mean from which it is more of a motion than of a noise
)
LEFT_OUT_SHARE = 0.02
UNDETERMINED_SHARE = 0.5  # of the prior's u that the clip has to take away before it counts as determined


@dataclass(frozen=True, eq=False)
class Findings:
    """All that the checks look at; `spread_s` is the doubt from motions not resolved, s."""

    found: Estimate
    noise: Noise
    coordinate: Coordinate
    opening: Opening
    in_clip: InClip
    modes: tuple[Mode, ...]
    period: Quantity
    spread_s: float
    amplitude_known: bool

    @property
    def fitted(self) -> Fitted:
        """The final fit."""
        return self.found.fitted

    @property
    def span(self) -> tuple[float, float]:
        """The part fitted, s."""
        return self.opening.span

    @property
    def length_s(self) -> float:
        """Its length."""
        return self.fitted.model.length_s


def find_doubts(f: Findings) -> tuple[Doubt, ...]:
    """Every doubt that applies, in the order of their weight."""
    checks = (
        _cycles,
        _amplitude,
        _modes_too_near,
        _residual,
        _large,
        _left_out,
        _outliers,
        _signal,
        _sampling,
        _heavy,
        _solver,
    )
    return tuple(doubt for check in checks for doubt in check(f))


def _cycles(f: Findings) -> tuple[Doubt, ...]:
    if f.in_clip.cycles >= FEW_CYCLES:
        return ()
    return (
        Doubt(
            "too-few-cycles",
            f"Only {f.in_clip.cycles:.1f} swings were fitted; other motions can't be told from the swing in so few.",
            "Film 20 swings or more.",
        ),
    )


def _amplitude(f: Findings) -> tuple[Doubt, ...]:
    percent = 100 * f.period.relative_u
    knowledge = f.opening.knowledge
    if knowledge.law is not None and (f.coordinate.amplitude_known or not knowledge.amplitude_open):
        return ()
    if f.coordinate.amplitude_known:
        prior = knowledge.priors.get("shape")
        if prior is None or f.found.spread({"shape": 1.0}) < UNDETERMINED_SHARE * prior.u:
            return ()
        return (
            Doubt(
                "amplitude-law-unknown",
                "Without a rig it is not known how the period grows with the amplitude, and the clip does not show "
                f"it; the period's uncertainty ({percent:.2g} %) covers a torsion wire to wide-set strings.",
                "Give the rig file, or let the swing die down further while filming.",
            ),
        )
    told = f.amplitude_known or (
        "shape" in knowledge.priors
        and f.found.spread({"shape": 1.0}) < UNDETERMINED_SHARE * knowledge.priors["shape"].u
    )
    seen = "the change of the period along the clip was used instead" if told else "it is in the uncertainty"
    return (
        Doubt(
            "amplitude-unknown",
            f"The swing's angle is not seen, so how far the amplitude lengthens the period is not either; {seen} "
            f"({percent:.2g} %).",
            "Film from above, or give dot_radius and dot_diameter in [view]; keep the swing below 5°.",
        ),
    )


def _modes_too_near(f: Findings) -> tuple[Doubt, ...]:
    advice = "Film for longer, change the strings' spacing, or paint two dots."
    hz = 1 / f.period.value
    near = [m for m in f.modes if abs(m.frequency_hz - hz) * f.length_s < CRAMPED_BEATS]
    if not near and f.spread_s > 0:
        return (
            Doubt(
                "modes-too-near",
                f"Amplitude and phase wander as if another motion lay within {1 / f.length_s:.2g} Hz of the swing's "
                f"{hz:.4g} Hz, too near to be told apart in {f.length_s:.3g} s; the period's uncertainty allows for it.",
                advice,
            ),
        )
    if not near:
        return ()
    return (
        Doubt(
            "modes-too-near",
            f"Another motion at {near[0].frequency_hz:.4g} Hz ({100 * near[0].share:.2g} % of the swing) is so near "
            f"to the swing's {hz:.4g} Hz that a clip of {f.length_s:.3g} s hardly tells them apart.",
            advice,
        ),
    )


def _residual(f: Findings) -> tuple[Doubt, ...]:
    if not f.noise.structured and f.noise.inflation < COLOURED:
        return ()
    return (
        Doubt(
            "residual-not-noise",
            "What is left after the fit is not noise: it has a line near the swing's own frequency. The uncertainty "
            "was widened accordingly.",
            "Look at the residual plot; check the rig file, the camera's steadiness and the times.",
        ),
    )


def _large(f: Findings) -> tuple[Doubt, ...]:
    if not f.amplitude_known or f.fitted.model.values["amplitude"] < LARGE_AMPLITUDE_RAD:
        return ()
    degrees = np.degrees(f.fitted.model.values["amplitude"])
    law = f.opening.knowledge.law
    beyond = law is not None and f.fitted.model.values["amplitude"] > law.q_max_rad
    more = " That is beyond what the rig's law was made for." if beyond else ""
    return (
        Doubt(
            "amplitude-large",
            f"The swing starts at {degrees:.0f}°; the period there is {100 * f.in_clip.shift:.2g} % longer in the mean "
            f"than that of small swings, and rests on the law of the suspension.{more}",
            "Start at 5° to 10°.",
        ),
    )


def _left_out(f: Findings) -> tuple[Doubt, ...]:
    t = f.coordinate.t
    before, after = f.span[0] - t[0], t[-1] - f.span[1]
    if before + after <= max(LEFT_OUT_SHARE * (t[-1] - t[0]), 0.5 * f.period.value):
        return ()
    return (
        Doubt(
            "part-left-out",
            f"Only {f.span[0]:.2f} s to {f.span[1]:.2f} s swings freely; {before:.2f} s before and {after:.2f} s after "
            "were left out.",
            "See the figure; --from and --to choose the part yourself.",
        ),
    )


def _outliers(f: Findings) -> tuple[Doubt, ...]:
    kept = f.fitted.samples.kept
    number = int((~kept).sum())
    if number <= max(MANY_OUTLIERS_SHARE * len(kept), 2):
        return ()
    return (
        Doubt(
            "outliers-set-aside",
            f"{number} of {len(kept)} samples lie far from the fit and were set aside.",
            "Look at the marked clip where they are.",
        ),
    )


def _signal(f: Findings) -> tuple[Doubt, ...]:
    scale = f.fitted.model.values["radius"]
    ratio = scale * f.fitted.model.values["amplitude"] / f.fitted.sigma
    if ratio >= LOW_SIGNAL:
        return ()
    return (
        Doubt(
            "low-signal",
            f"The swing is only {ratio:.1f} times the noise of a single sample.",
            "Film closer, use a larger dot with more contrast, or start wider.",
        ),
    )


def _sampling(f: Findings) -> tuple[Doubt, ...]:
    per_period = f.period.value / float(np.median(np.diff(f.coordinate.t)))
    if per_period >= LEAST_SAMPLES_A_PERIOD:
        return ()
    return (
        Doubt(
            "sampling-too-slow",
            f"Only {per_period:.1f} samples a swing: a motion twice as fast would look the same.",
            "Use a higher frame rate.",
        ),
    )


def _heavy(f: Findings) -> tuple[Doubt, ...]:
    omega0 = 2 * np.pi / f.period.value
    ratio = f.fitted.model.values["zeta"]
    if ratio < HEAVY_DAMPING:
        return ()
    return (
        Doubt(
            "damping-heavy",
            f"The swing dies down within a few cycles (damping ratio {ratio:.3f}, {ratio * omega0:.3g} 1/s).",
            "Look for something that brakes it; a longer or heavier suspension helps.",
        ),
    )


def _solver(f: Findings) -> tuple[Doubt, ...]:
    if f.fitted.outcome.settled and f.fitted.outcome.usable:
        return ()
    return (
        Doubt(
            "fit-not-settled",
            f"The fit did not end at a well-determined minimum ({f.fitted.outcome.message}).",
            "Give a longer record, or fewer terms.",
        ),
    )
