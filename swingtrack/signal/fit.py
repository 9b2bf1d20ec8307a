"""The door of stage 2: from a path or a series to the swing's period and damping.

In order: the coordinate (`coordinate`), the line in the spectrum (`search`), the plainest exact fit over the free part
(`opening`: `windows`, `free_part`, `start`, `priors`, `span`), its terms by evidence (`choose`, `modes`), the noise
(`noise`), and what is reported (`outcome`: `quantities`, `trace`, `doubts`).
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from swingtrack.errors import NothingToMeasure
from swingtrack.records import ExpectedMode, Path, Series, Swing, SwingLaw, View
from swingtrack.signal import quantities as q
from swingtrack.signal.choose import (
    Choices,
    beyond_swarm,
    choose_terms,
    cramped_fit,
    noise_of,
    unresolved_modes,
)
from swingtrack.signal.coordinate import FEWEST_SAMPLES, Coordinate, find_coordinate
from swingtrack.signal.fitting import Fitted, fit_robustly
from swingtrack.signal.noise import Noise
from swingtrack.signal.opening import Opening, open_fit, samples_of
from swingtrack.signal.outcome import Rivals, make_swing
from swingtrack.signal.retime import MOST_JUMPS, Jump, find_jump, has_even_times, jumps_doubt, mend
from swingtrack.signal.search import find_line
from swingtrack.signal.settings import FitSettings

# Amplitude over its own uncertainty below which there is no swing that deserves the name.
LEAST_SIGNIFICANCE = 4.0
# A period known no better than this is none.
WORST_RELATIVE = 0.03
# Fewer free swings than this may be anything.
FEWEST_CYCLES = 2.0
# Unknown motions that add up to more than the swing, in a record that is noisy besides, are the noise's own.
CROWD_SHARE = 1.0


def fit_swing(
    data: Path | Series,
    *,
    law: SwingLaw | None = None,
    view: View | None = None,
    expected_modes: tuple[ExpectedMode, ...] = (),
    settings: FitSettings = FitSettings(),  # noqa: B008 - frozen
) -> Swing:
    """Fit the swing in `data`: period of small undamped swings, damping, and what to doubt.

    Parameters
    ----------
    data : Path or Series
        A dot's path, or one coordinate against time.
    law : SwingLaw, optional
        How the suspension swings at any amplitude. None: the growth of the period with the amplitude is fitted
        where the record determines it, and otherwise carried into the period's uncertainty.
    view : View, optional
        Where the camera stood; None: decided from the path.
    expected_modes : tuple of ExpectedMode
        Frequencies of other motions, by which they are named and told from the swing.
    settings : FitSettings

    Returns
    -------
    Swing

    Raises
    ------
    NothingToMeasure
        If no swing stands out.
    BadSeries
        If times do not rise or lengths differ.

    Examples
    --------
    >>> import numpy as np
    >>> t = np.arange(600) / 30
    >>> noise = 0.001 * np.random.default_rng(1).standard_normal(600)
    >>> y = 0.1 * np.exp(-0.02 * t) * np.cos(2 * np.pi * t / 1.25) + noise
    >>> swing = fit_swing(Series(t, y, "rad"))
    >>> round(swing.period_in_clip.value, 3)
    1.25
    """
    # A knife edge swings about a level axis: a camera at its side looks along that axis.
    facing = law is not None and law.name == "knife-edge"
    coordinate = _within(find_coordinate(data, view, facing=facing), settings)
    line = find_line(coordinate.t, coordinate.y, expected_modes)
    opening = open_fit(coordinate, line, law, settings)
    retimed = _check_times(coordinate, opening, settings)
    coordinate, opening = retimed.coordinate, retimed.opening
    _check_significance(retimed.sound)
    choices = Choices(settings.damping, settings.most_modes, settings.view_shape, settings.outlier_limit)
    if any(retimed.change_s):
        choices = beyond_swarm(choices, opening.fitted)  # a phase that jumps looks like modes close by
    fitted = _finish(choose_terms(opening.fitted, choices), settings)
    if not any(retimed.change_s):
        _check_significance(fitted)
    rivals = [*unresolved_modes(fitted, choices), cramped_fit(fitted)]
    spread = max((_spread(fitted, rival) for rival in rivals if rival is not None), default=0.0)
    settled = Opening(fitted, opening.span, opening.knowledge)
    swing = make_swing(
        coordinate, settled, noise_of(fitted), Rivals(spread, expected_modes, retimed.change_s)
    )
    _check_outcome(swing)
    return swing


def _within(coordinate: Coordinate, settings: FitSettings) -> Coordinate:
    low = -np.inf if settings.from_s is None else settings.from_s
    high = np.inf if settings.to_s is None else settings.to_s
    inside = (coordinate.t >= low) & (coordinate.t <= high)
    if inside.all():
        return coordinate
    if inside.sum() < FEWEST_SAMPLES:
        raise NothingToMeasure(
            f"Only {int(inside.sum())} samples lie between {low:g} s and {high:g} s.",
            "Several swings are needed.",
            "Widen --from and --to.",
        )
    return replace(coordinate, t=coordinate.t[inside], y=coordinate.y[inside], u=coordinate.u[inside])


@dataclass(frozen=True, eq=False)
class _Retimed:
    """What is fitted after the frame times were looked at.

    `sound` is the plain fit to mended times, by which the swing is judged to be one. `change_s`: what mending them would change in the period and in the period in the clip, s.
    """

    coordinate: Coordinate
    opening: Opening
    sound: Fitted
    change_s: tuple[float, float] = (0.0, 0.0)


def _check_times(coordinate: Coordinate, opening: Opening, settings: FitSettings) -> _Retimed:
    """Find whole frames by which the swing jumps, one after the other, each seen in the fit without the last."""
    if coordinate.camera == "series" or not has_even_times(coordinate.t):
        return _Retimed(coordinate, opening, opening.fitted)
    jumps: tuple[Jump, ...] = ()
    mended, fitted, span = coordinate, opening.fitted, opening.span
    while len(jumps) < MOST_JUMPS and (jump := find_jump(fitted, span[0])) is not None:
        jumps = (*jumps, jump)
        mended = mend(mended, jump)
        span = (max(span[0], float(mended.t[0])), float(min(span[1] + abs(jump.frames), mended.t[-1])))
        again = fit_robustly(
            fitted.model, samples_of(mended, span), settings.outlier_limit, sigma=fitted.sigma
        )
        if again is None:
            return _Retimed(coordinate, opening, opening.fitted)
        fitted = replace(again, model=replace(again.model, length_s=span[1] - span[0]))
    if not jumps:
        return _Retimed(coordinate, opening, opening.fitted)
    after, before = (
        q.period_in_clip(q.estimate(one, noise_of(one)), one.model.length_s).period.value
        for one in (fitted, opening.fitted)
    )
    interval = float(np.median(np.diff(coordinate.t)))
    doubts = (*coordinate.doubts, jumps_doubt(jumps, interval, after, moved=settings.mend_times))
    if settings.mend_times:
        return _Retimed(replace(mended, doubts=doubts), replace(opening, fitted=fitted, span=span), fitted)
    small = 2 * np.pi * (1 / fitted.model.values["omega0"] - 1 / opening.fitted.model.values["omega0"])
    return _Retimed(replace(coordinate, doubts=doubts), opening, fitted, (float(small), after - before))


def _finish(fitted: Fitted, settings: FitSettings) -> Fitted:
    """Fit once more to the last digit, prior knowledge weighed against the noise as it is."""
    level = fitted.sigma * float(np.sqrt(noise_of(fitted).inflation))
    return (
        fit_robustly(fitted.model, fitted.samples, settings.outlier_limit, sigma=level, final=True) or fitted
    )


def _colour_only(noise: Noise) -> Noise:
    """Without the lines near the swing: they make the period doubtful, not the swing's existence."""
    return replace(noise, inflation=noise.colour_inflation)


def _spread(fitted: Fitted, rival: Fitted) -> float:
    """How far an unresolved second motion may have moved the period, s: the change it makes and its own doubt.

    No more than half a swing over the whole clip: beyond that the two would show.
    """
    period = 2 * np.pi / fitted.model.values["omega0"]
    change = 2 * np.pi / rival.model.values["omega0"] - period
    joint = q.period(q.estimate(rival, noise_of(rival)))
    return float(min(np.hypot(change, joint.u), period**2 / (2 * fitted.model.length_s)))


def _check_outcome(swing: Swing) -> None:
    """Refuse what is hardly a swing there and back, or one of a crowd of motions in as much noise."""
    if swing.cycles < FEWEST_CYCLES:
        raise NothingToMeasure(
            f"Only {swing.cycles:.1f} swings are free of disturbance.",
            f"{FEWEST_CYCLES:g} at least are needed, and 20 for a good result.",
            "Film for longer.",
        )
    codes = {doubt.code for doubt in swing.doubts}
    crowd = sum(mode.share for mode in swing.other_modes if mode.kind == "unknown")
    if "low-signal" in codes and crowd > CROWD_SHARE:
        raise NothingToMeasure(
            f"Several motions of much the same size are lost in noise; together they are {crowd:.1f} times the one "
            "that stands out most.",
            "One regular swing is needed.",
            "Let the article swing farther, and keep the camera and the strings still.",
        )


def _check_significance(fitted: Fitted) -> None:
    """Refuse a swing that is lost in its own doubt, or that does not come back."""
    found = q.estimate(fitted, _colour_only(noise_of(fitted)))
    size = q.coordinate_amplitude(found)
    if not size.value > LEAST_SIGNIFICANCE * size.u:
        raise NothingToMeasure(
            f"What swings is no larger than {size.value / max(size.u, 1e-300):.1f} times its own doubt.",
            f"It has to be {LEAST_SIGNIFICANCE:g} times that at least.",
            "Let the article swing farther or film for longer.",
        )
    relative = q.period_in_clip(found, fitted.model.length_s).period.relative_u
    if relative > WORST_RELATIVE:
        raise NothingToMeasure(
            f"The period can't be told to better than {100 * relative:.0f} %.",
            "A regular swing of several periods is needed.",
            "Film for longer; look at the dot's path.",
        )
