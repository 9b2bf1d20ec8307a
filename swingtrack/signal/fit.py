"""The door of stage 2: from a path or a series to the swing's period and damping.

In order: the coordinate (`coordinate`), the line in the spectrum (`search`), the free part (`windows`, `free_part`),
start values from the averaged motion (`start`), the exact fit (`model`, `fitting`), its terms by evidence (`choose`),
the noise (`noise`), and what is reported (`quantities`, `trace`, `doubts`).
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from swingtrack.errors import NothingToMeasure
from swingtrack.records import Doubt, ExpectedMode, Mode, Path, Quantity, Series, Swing, SwingLaw, View
from swingtrack.signal import quantities as q
from swingtrack.signal.choose import (
    Choices,
    all_damping,
    choose_terms,
    cramped_fit,
    first_model,
    noise_of,
    unresolved_modes,
)
from swingtrack.signal.coordinate import Coordinate, find_coordinate
from swingtrack.signal.doubts import Findings, find_doubts
from swingtrack.signal.fitting import Fitted, Samples, fit_robustly
from swingtrack.signal.free_part import find_free_part
from swingtrack.signal.model import SwingModel, blank_values, mode_name
from swingtrack.signal.modes import name_mode
from swingtrack.signal.noise import Noise
from swingtrack.signal.priors import shape_prior
from swingtrack.signal.restoring import FromLaw, PendulumLike
from swingtrack.signal.search import find_line
from swingtrack.signal.settings import FitSettings
from swingtrack.signal.span import settle_span
from swingtrack.signal.start import start_values
from swingtrack.signal.trace import envelope_at, make_trace
from swingtrack.signal.windows import Windows, fit_windows

# Amplitude over its own uncertainty below which there is no swing that deserves the name.
LEAST_SIGNIFICANCE = 4.0
# A period known no better than this is none.
WORST_RELATIVE = 0.03


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
    coordinate = find_coordinate(data, view)
    coordinate = _within(coordinate, settings)
    line = find_line(coordinate.t, coordinate.y, expected_modes)
    used_law = law if coordinate.amplitude_known else None
    windows = fit_windows(coordinate.t, coordinate.y, line.hz)
    span = _free_span(coordinate, windows, settings)
    fitted, span = _fit_plain(coordinate, windows, span, (law, used_law), settings)
    _check_significance(q.estimate(fitted, _colour_only(noise_of(fitted))))
    choices = Choices(settings.damping, settings.most_modes, settings.view_shape, settings.outlier_limit)
    fitted = choose_terms(fitted, choices)
    final = fit_robustly(fitted.model, fitted.samples, settings.outlier_limit, sigma=fitted.sigma)
    fitted = final or fitted
    rivals = [*unresolved_modes(fitted, choices), cramped_fit(fitted)]
    spread = max((_spread(fitted, rival) for rival in rivals if rival is not None), default=0.0)
    return _report(coordinate, fitted, span, (law, used_law), expected_modes, spread)


def _within(coordinate: Coordinate, settings: FitSettings) -> Coordinate:
    low = -np.inf if settings.from_s is None else settings.from_s
    high = np.inf if settings.to_s is None else settings.to_s
    inside = (coordinate.t >= low) & (coordinate.t <= high)
    if inside.all():
        return coordinate
    if inside.sum() < 20:
        raise NothingToMeasure(
            f"Only {int(inside.sum())} samples lie between {low:g} s and {high:g} s.",
            "Several swings are needed.",
            "Widen --from and --to.",
        )
    return replace(coordinate, t=coordinate.t[inside], y=coordinate.y[inside], u=coordinate.u[inside])


def _free_span(coordinate: Coordinate, windows: Windows, settings: FitSettings) -> tuple[float, float]:
    whole = (float(coordinate.t[0]), float(coordinate.t[-1]))
    if not settings.trim:
        return whole
    found = find_free_part(windows)
    if found is None:
        raise NothingToMeasure(
            "No stretch of the record swings freely for a few cycles.",
            "A swing that is left alone is needed.",
            "Release the article and leave it alone, then film for a minute.",
        )
    return max(found[0], whole[0]), min(found[1], whole[1])


def _samples(coordinate: Coordinate, span: tuple[float, float]) -> Samples:
    inside = (coordinate.t >= span[0]) & (coordinate.t <= span[1])
    weight = 1 / coordinate.u[inside]
    weight = weight / np.sqrt(np.mean(weight**2))
    return Samples(
        coordinate.t[inside] - span[0], coordinate.y[inside], weight, np.ones(int(inside.sum()), bool)
    )


def _fit_plain(
    coordinate: Coordinate,
    windows: Windows,
    span: tuple[float, float],
    laws: tuple[SwingLaw | None, SwingLaw | None],
    settings: FitSettings,
) -> tuple[Fitted, tuple[float, float]]:
    """The plainest exact model over the free part."""
    law, used_law = laws
    span = (float(coordinate.t[np.searchsorted(coordinate.t, span[0])]), span[1])
    scale = 1.0
    if coordinate.sine and coordinate.radius_px:
        scale = coordinate.radius_px
    inside = (windows.t >= span[0]) & (windows.t <= span[1])
    chosen = Windows(
        windows.t[inside],
        windows.amplitude[inside] / scale,
        windows.rest[inside],
        windows.misfit[inside],
        windows.phase[inside],
    )
    if np.isfinite(chosen.amplitude).sum() < 3:
        raise NothingToMeasure(
            "Fewer than two free swings.", "A few free swings are needed.", "Film for longer."
        )
    if coordinate.sine:
        reach = float(np.nanmax(chosen.amplitude))
        chosen = replace(
            chosen, amplitude=np.arcsin(np.clip(chosen.amplitude, 0, 0.999)) if reach else chosen.amplitude
        )
    prior = shape_prior(coordinate, law, used_law, float(np.nanmax(chosen.amplitude)))
    shape = prior.value if prior is not None else 0.0
    start = start_values(chosen, span[0], used_law, shape)
    values = blank_values()
    values.update(
        amplitude=start.amplitude,
        phase=start.phase,
        omega0=start.omega0,
        zeta=start.zeta,
        rest=start.rest,
        shape=shape,
        radius=coordinate.radius_px or 1.0,
    )
    samples = _samples(coordinate, span)
    model = SwingModel(
        samples.t,
        FromLaw(used_law) if used_law is not None else PendulumLike(),
        values,
        (),
        side=start.side,
        sine=coordinate.sine,
        priors=None if prior is None else {"shape": prior},
    )
    model = first_model(model, settings.damping)
    sigma = float(np.nanmedian(windows.misfit))

    def fit_on(model: SwingModel, part: tuple[float, float]) -> Fitted | None:
        model = replace(model, length_s=part[1] - part[0])
        return fit_robustly(model, _samples(coordinate, part), settings.outlier_limit, sigma=sigma)

    fitted = fit_on(model, span)
    if fitted is not None and settings.trim:
        fitted, span = settle_span(coordinate.t, coordinate.y, span, fitted, fit_on)
    if fitted is not None and settings.damping is not None and len(settings.damping) > 1:
        fitted = fit_on(all_damping(fitted.model, settings.damping), span)
    if fitted is None:
        raise NothingToMeasure(
            "The record follows no swing.", "A swing that is left alone is needed.", "Look at the dot's path."
        )
    return fitted, span


def _report(
    coordinate: Coordinate,
    fitted: Fitted,
    span: tuple[float, float],
    laws: tuple[SwingLaw | None, SwingLaw | None],
    expected: tuple[ExpectedMode, ...],
    spread: float,
) -> Swing:
    law, used_law = laws
    noise = noise_of(fitted)
    _check_significance(q.estimate(fitted, _colour_only(noise)))
    found = q.estimate(fitted, noise)
    values = fitted.model.values
    length = float(fitted.samples.t[-1])
    grid = np.linspace(0, length, 200)
    envelope = envelope_at(fitted, grid)
    mean = float(np.mean(envelope))
    in_clip = q.period_in_clip(found, length)
    period = _with_systematics(q.period(found), in_clip.shift, coordinate, used_law, spread)
    rate = q.decay_rate(found, mean)
    ratio = q.damping_ratio(rate, values["omega0"])
    modes = _modes(fitted, found, length, expected)
    rms, rms_unit = _rms(fitted, coordinate)
    terms = q.damping_terms(found, float(envelope[0]), float(envelope[-1]))
    known = coordinate.amplitude_known
    used = _used(coordinate, fitted, span)
    trace = make_trace(coordinate.t, coordinate.y, used, fitted, span, coordinate.unit)
    kept = fitted.samples.kept
    findings = Findings(
        fitted, found, noise, coordinate, law, used_law, span, in_clip, modes, period, length, spread
    )
    doubts = (*data_doubts(coordinate), *find_doubts(findings))
    return Swing(
        period=period,
        period_in_clip=in_clip.period,
        decay_rate=rate,
        half_life=q.half_life(rate),
        damping_ratio=ratio,
        quality_factor=q.quality_factor(ratio),
        log_decrement=q.log_decrement(ratio),
        amplitude_start=_amplitude(found, float(envelope[0]), coordinate) if known else None,
        amplitude_end=_amplitude(found, float(envelope[-1]), coordinate) if known else None,
        cycles=in_clip.cycles,
        damping_law="+".join(term.kind for term in terms) or "none",
        damping_terms=terms,
        other_modes=modes,
        fit_rms=rms,
        fit_rms_unit=rms_unit,
        noise_correlation_time_s=noise.correlation_time_s,
        amplitude_shift=in_clip.shift if known else None,
        outliers=int((~kept).sum()),
        trace=trace,
        solved=fitted.outcome.settled,
        usable=fitted.outcome.usable,
        law=law,
        doubts=doubts,
    )


def _colour_only(noise: Noise) -> Noise:
    """Without the lines near the swing: they make the period doubtful, not the swing's existence."""
    return replace(noise, inflation=noise.colour_inflation)


def _spread(fitted: Fitted, rival: Fitted) -> float:
    """How far an unresolved second motion may have moved the period, s: the change it makes and its own doubt."""
    here, there = fitted.model.values["omega0"], rival.model.values["omega0"]
    joint = q.period(q.estimate(rival, noise_of(rival)))
    return float(np.hypot(2 * np.pi * (1 / here - 1 / there), joint.u))


def _check_significance(found: q.Estimate) -> None:
    """Refuse a swing that is lost in its own doubt, or that does not come back."""
    amplitude, u = found.value("amplitude"), found.spread({"amplitude": 1.0})
    if not amplitude > LEAST_SIGNIFICANCE * u:
        raise NothingToMeasure(
            f"What swings is no larger than {amplitude / max(u, 1e-300):.1f} times its own doubt.",
            f"It has to be {LEAST_SIGNIFICANCE:g} times that at least.",
            "Let the article swing farther or film for longer.",
        )
    omega0, omega_u = found.value("omega0"), found.spread({"omega0": 1.0})
    if omega_u > WORST_RELATIVE * omega0:
        raise NothingToMeasure(
            f"The period can't be told to better than {100 * omega_u / omega0:.0f} %.",
            "A regular swing of several periods is needed.",
            "Film for longer; look at the dot's path.",
        )


def data_doubts(coordinate: Coordinate) -> tuple[Doubt, ...]:
    """Doubts that arose on the way to the coordinate."""
    return coordinate.doubts


def _with_systematics(
    period: Quantity, shift: float, coordinate: Coordinate, law: SwingLaw | None, spread: float
) -> Quantity:
    """The doubt of the geometry and of the angle's scale, through the amplitude's part in the period."""
    parts = [period.u, spread]
    if law is not None:
        parts += [
            period.value * shift * law.ratio_relative_u,
            period.value * 2 * shift * coordinate.amplitude_relative_u,
        ]
    u = float(np.sqrt(np.sum(np.square(parts))))
    dof = period.dof * (u / period.u) ** 4 if period.u > 0 else period.dof
    return replace(period, u=u, dof=float(dof))


def _amplitude(found: q.Estimate, value: float, coordinate: Coordinate) -> Quantity:
    own = found.spread({"amplitude": 1.0}) * value / found.value("amplitude")
    return Quantity(value, float(np.hypot(own, value * coordinate.amplitude_relative_u)), "rad", found.dof)


def _modes(
    fitted: Fitted, found: q.Estimate, length: float, expected: tuple[ExpectedMode, ...]
) -> tuple[Mode, ...]:
    values = fitted.model.values
    hz = values["omega0"] / (2 * np.pi)
    t = fitted.samples.t
    scale = values["radius"] if fitted.model.sine else 1.0
    swing = scale * float(np.sqrt(np.mean(envelope_at(fitted, np.linspace(0, length, 100)) ** 2)))
    modes = []
    for number in range(1, fitted.model.modes + 1):
        a, b, omega, decay = (values[mode_name(number, part)] for part in ("cos", "sin", "omega", "decay"))
        fade = np.exp(-np.clip(decay * t, -50, 50))
        size = float(np.hypot(a, b) * np.sqrt(np.mean(fade**2)))
        mode_hz = abs(omega) / (2 * np.pi)
        modes.append(Mode(mode_hz, size / swing, name_mode(mode_hz, hz, 1 / length, expected)))
    return tuple(modes)


def _rms(fitted: Fitted, coordinate: Coordinate) -> tuple[float, str]:
    kept = fitted.samples.kept
    r = fitted.kept_residuals / fitted.samples.weight[kept]
    rms = float(np.sqrt(np.mean(r**2)))
    if coordinate.unit == "rad" and coordinate.radius_px is not None:
        return rms * coordinate.radius_px, "px"
    return rms, coordinate.unit


def _used(coordinate: Coordinate, fitted: Fitted, span: tuple[float, float]) -> np.ndarray:
    used = np.zeros(len(coordinate.t), dtype=bool)
    inside = np.flatnonzero((coordinate.t >= span[0]) & (coordinate.t <= span[1]))
    used[inside[fitted.samples.kept]] = True
    return used
