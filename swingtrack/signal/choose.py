"""Which terms the clip speaks for: damping laws, the camera's skew, drift and other modes, one by one by evidence.

A term joins when it lowers the misfit by more than its price: Schwarz's criterion (G. Schwarz, Ann. Statist. 6,
1978, 461; from memory) with the noise's own spectral density at the swing in place of its variance, and the number
of samples that correlated noise leaves. It leaves again when it no longer pays, or where its value is impossible
(a damping that drives).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from swingtrack.records import Floats
from swingtrack.signal.fitting import Fitted, fit_model, fit_robustly
from swingtrack.signal.model import SLOW, SwingModel, mode_name
from swingtrack.signal.modes import RESOLVED_BEATS, SAME_BEATS, ModeFound, add_mode, find_mode, floor_at_swing
from swingtrack.signal.noise import Noise, measure_noise

# A step with less than this in hand is not taken: "strong" evidence (difference of 6 in the criterion).
EVIDENCE = 6.0
DAMPING_PARAMETERS = {"viscous": "zeta", "quadratic": "beta", "dry": "dry"}
MOST_TERMS = 12
# Residuals below this share of the amplitude are finer than any record; terms found in them are the solver's own.
FINE_ENOUGH = 1e-7
# A swarm of wander reaches this far about the swing: turns of the beat, and share of the swing's frequency.
SWARM_BEATS = 6.0
SWARM_REACH = 0.12
# A swarm that lowers the residuals to less than this is more than wander.
SWARM_GAIN = 0.6
# A mode near the swing, with its four parameters, can stand in for a wrong damping law: that comes first unless the
# mode has this much more in hand.
NEAR_DISCOUNT = 0.25
# A mode that is hardly resolved and larger than this share of the swing is the swing itself, in two parts.
LARGEST_NEAR = 0.6
# Two motions whose beat makes fewer turns than this in the clip are hardly told apart.
CRAMPED_BEATS = 2.0
# The rest place may wander at up to this share of the swing's frequency.
SLOWEST_SHARE = 0.3


@dataclass(frozen=True)
class Choices:
    """What may be chosen: damping kinds held fixed (or None), most other modes, the camera's skew, outlier limit."""

    damping: tuple[str, ...] | None
    most_modes: int
    view_shape: bool
    outlier_limit: float
    nearest_beats: float = RESOLVED_BEATS


def noise_of(fitted: Fitted) -> Noise:
    """Colour of a fit's residuals about the swing's frequency."""
    kept = fitted.samples.kept
    hz = fitted.model.values["omega0"] / (2 * np.pi)
    taken, _ = np.linalg.qr(fitted.jacobian / np.linalg.norm(fitted.jacobian, axis=0))
    return measure_noise(
        fitted.samples.t[kept], fitted.kept_residuals, hz, parameters=len(fitted.model.free), taken=taken
    )


def choose_terms(fitted: Fitted, choices: Choices) -> Fitted:
    """Add the terms that pay, drop those that do not, and return the fit with them.

    A phase that wanders (a clock that runs unevenly) looks like a swarm of modes close about the swing. Modes there
    are believed only when they leave nothing of the kind behind, or explain most of it.
    """
    found = _choose(fitted, choices)
    if np.isfinite(_nearest_beats(found)) and noise_of(found).structured:
        without = _choose(fitted, beyond_swarm(choices, fitted))
        if found.sigma > SWARM_GAIN * without.sigma:
            return without
    return found


def beyond_swarm(choices: Choices, fitted: Fitted) -> Choices:
    """The same choices with modes looked for only beyond the reach of a phase that wanders."""
    reach = SWARM_REACH * fitted.model.values["omega0"] / (2 * np.pi) * fitted.model.length_s
    return replace(choices, nearest_beats=max(SWARM_BEATS, reach))


def _nearest_beats(fitted: Fitted) -> float:
    """Turns that the beat of the nearest other mode makes with the swing in the clip."""
    values = fitted.model.values
    apart = [
        abs(values[mode_name(number, "omega")] - values["omega0"]) / (2 * np.pi) * fitted.model.length_s
        for number in range(1, fitted.model.modes + 1)
    ]
    return min(apart, default=np.inf)


def _choose(fitted: Fitted, choices: Choices) -> Fitted:
    for _ in range(MOST_TERMS):
        if fitted.sigma < FINE_ENOUGH * fitted.model.values["amplitude"] * fitted.model.values["radius"]:
            break
        better = _best_step(fitted, choices)
        if better is None:
            break
        fitted = better
    return _drop_idle(fitted, choices)


def _price(parameters: int, noise: Noise, extra: float = 0.0) -> float:
    return parameters * float(np.log(max(noise.effective, 8.0))) + EVIDENCE + extra


def _best_step(fitted: Fitted, choices: Choices) -> Fitted | None:
    """The one more term with the most in hand, fitted; None where none pays."""
    noise = noise_of(fitted)
    level = fitted.sigma**2 * floor_at_swing(fitted)
    offers: list[tuple[float, tuple[str, ...] | ModeFound]] = []
    candidates = _candidates(fitted, choices)
    for names, fall in zip(candidates, projected_gains(fitted, candidates), strict=True):
        gain = fall / level
        offers.append((gain - _price(len(names), noise), names))
    if fitted.model.modes < choices.most_modes:
        found = find_mode(fitted, beats=(choices.nearest_beats, np.inf))
        if found is not None:
            hand = found.gain / (fitted.sigma**2 * found.inflation) - _price(
                4, noise, 2 * float(np.log(found.tried))
            )
            near = abs(found.omega / fitted.model.values["omega0"] - 1) < SWARM_REACH
            offers.append((hand * (NEAR_DISCOUNT if near else 1.0), found))
    offers.sort(key=lambda offer: -offer[0])
    for hand, what in offers:
        if hand <= 0:
            break
        if isinstance(what, ModeFound):
            model = add_mode(fitted.model, what)
        else:
            model = fitted.model.with_free((*fitted.model.free, *what))
        new = fit_robustly(model, fitted.samples, choices.outlier_limit, sigma=fitted.sigma)
        if new is None or not _possible(new, what):
            continue
        if _common_gain(fitted, new) / level > _price(4 if isinstance(what, ModeFound) else len(what), noise):
            return new
    return None


def _common_gain(old: Fitted, new: Fitted) -> float:
    """Fall of the sum of squares over the samples that both fits kept."""
    both = old.samples.kept & new.samples.kept
    return float(np.sum(old.residuals[both] ** 2) - np.sum(new.residuals[both] ** 2))


def _candidates(fitted: Fitted, choices: Choices) -> list[tuple[str, ...]]:
    free = fitted.model.free
    names: list[tuple[str, ...]] = []
    if choices.damping is None:
        names += [(name,) for name in DAMPING_PARAMETERS.values() if name not in free]
        if "beta" not in free and "dry" not in free:
            names.append(("beta", "dry"))
    if choices.view_shape:
        shapes = ("turned", "bend3") if fitted.model.sine else ("bend2", "bend3")
        names += [(name,) for name in shapes if name not in free]
    if "drift" not in free:
        names.append(("drift",))
    fastest = SLOWEST_SHARE * fitted.model.values["omega0"] / np.pi * fitted.model.length_s
    slow = [name for j, name in enumerate(SLOW, start=1) if name not in free and j < fastest]
    if slow:
        names += [(slow[0],), tuple(slow[:4])]
    return names


def projected_gains(fitted: Fitted, candidates: Sequence[tuple[str, ...]]) -> list[float]:
    """Fall of the sum of squares that freeing each set of names would bring to first order."""
    kept = fitted.samples.kept
    names = tuple(dict.fromkeys(name for candidate in candidates for name in candidate))
    seen = replace(fitted.model, t=fitted.samples.t[kept]).with_free(names).evaluate() if names else None
    if seen is None:
        return [0.0] * len(candidates)
    q, _ = np.linalg.qr(fitted.jacobian / np.linalg.norm(fitted.jacobian, axis=0))
    columns = seen[1] * fitted.samples.weight[kept][:, None]
    lengths = np.linalg.norm(columns, axis=0)
    own = columns - q @ (q.T @ columns)
    own -= q @ (q.T @ own)
    return [
        _gain_of_columns(
            own[:, [names.index(name) for name in candidate]],
            lengths[[names.index(name) for name in candidate]],
            fitted.kept_residuals,
        )
        for candidate in candidates
    ]


def _gain_of_columns(own: Floats, lengths: Floats, residuals: Floats) -> float:
    """‖projection of the residuals on columns already square on the Jacobian‖²; `lengths` before that."""
    left = np.linalg.norm(own, axis=0)
    real = left > 1e-9 * lengths
    if not real.any():
        return 0.0
    base, _ = np.linalg.qr(own[:, real] / left[real])
    return float(np.sum((base.T @ residuals) ** 2))


def _possible(fitted: Fitted, what: tuple[str, ...] | ModeFound) -> bool:
    """No damping that drives, beyond what its own uncertainty leaves open."""
    free, values = fitted.model.free, fitted.model.values
    u = np.sqrt(np.diag(fitted.outcome.covariance()))
    if isinstance(what, ModeFound):
        # A mode whose size is not determined only stands in for another term (the second harmonic for g₂).
        number = fitted.model.modes
        a, b = (values[mode_name(number, part)] for part in ("cos", "sin"))
        beats = _nearest_beats(fitted)
        if beats < 0.8 * RESOLVED_BEATS:
            return False
        if beats < CRAMPED_BEATS and np.hypot(a, b) > LARGEST_NEAR * values["amplitude"] * values["radius"]:
            return False
        worst = max(u[free.index(mode_name(number, part))] for part in ("cos", "sin"))
        return bool(np.hypot(a, b) > 3 * worst)
    return all(values[name] > -2 * u[free.index(name)] for name in ("beta", "dry") if name in free)


def _drop_idle(fitted: Fitted, choices: Choices) -> Fitted:
    """Take out damping terms that no longer pay, or that came out negative."""
    if choices.damping is not None:
        return fitted
    for _ in range(3):
        free = fitted.model.free
        present = [name for name in ("zeta", "beta", "dry") if name in free]
        if len(present) < 2:
            return fitted
        noise = noise_of(fitted)
        covariance = fitted.outcome.unscaled_covariance()
        level = fitted.sigma**2 * floor_at_swing(fitted)
        losses = {}
        for name in present:
            i = free.index(name)
            value = fitted.model.values[name]
            cost = value**2 / covariance[i, i] / level
            losses[name] = -1.0 if value < 0 else cost
        idle = min(losses, key=lambda name: losses[name])
        if losses[idle] > float(np.log(max(noise.effective, 8.0))) + EVIDENCE:
            return fitted
        rest = tuple(name for name in free if name != idle)
        new = fit_robustly(
            fitted.model.with_free(rest, **{idle: 0.0}),
            fitted.samples,
            choices.outlier_limit,
            sigma=fitted.sigma,
        )
        if new is None:
            return fitted
        fitted = new
    return fitted


def first_model(model: SwingModel, damping: tuple[str, ...] | None, more: tuple[str, ...]) -> SwingModel:
    """The plainest model: one law of damping (the first of those asked for), no skew, no other mode; `more` free beside."""
    kinds = ("viscous",) if damping is None else damping[:1]
    wanted = tuple(DAMPING_PARAMETERS[kind] for kind in kinds)
    values = {name: (model.values[name] if name in wanted else 0.0) for name in ("zeta", "beta", "dry")}
    if "zeta" not in wanted and wanted:
        # The start's loss rate goes to the first law asked for, at the start amplitude.
        a, zeta = model.values["amplitude"], model.values["zeta"]
        values[wanted[0]] = zeta * 3 * np.pi / (4 * a) if wanted[0] == "beta" else zeta * np.pi * a / 2
    return model.with_free(("amplitude", "phase", "omega0", *wanted, "rest", *more), **values)


def all_damping(model: SwingModel, damping: tuple[str, ...] | None) -> SwingModel:
    """The model with every damping law that was asked for free."""
    wanted = tuple(DAMPING_PARAMETERS[kind] for kind in damping or ())
    return model.with_free((*model.free, *(name for name in wanted if name not in model.free)))


def unresolved_modes(fitted: Fitted, choices: Choices) -> list[Fitted]:
    """Fits with a second motion too near to be told apart, below and above, where the clip speaks for one.

    Such a fit is never the answer: amplitude and phase that wander for any other reason look the same. They tell how
    far off the answer may be.
    """
    if choices.most_modes == 0:
        return []
    noise = noise_of(fitted)
    level = fitted.sigma**2 * floor_at_swing(fitted)
    rivals = []
    for side in (-1, 1):
        found = find_mode(fitted, beats=(SAME_BEATS, RESOLVED_BEATS), side=side)
        if found is None or found.gain / level < _price(4, noise, 2 * float(np.log(found.tried))):
            continue
        rival = fit_model(add_mode(fitted.model, found), fitted.samples, sigma=fitted.sigma, quick=True)
        if rival is not None:
            rivals.append(rival)
    return rivals


def cramped_fit(fitted: Fitted) -> Fitted | None:
    """Where another mode is hardly resolved: the fit with every damping law free; None where there is none.

    The beat of a near mode looks much like a change of the damping law, so its choice is part of the doubt.
    """
    if _nearest_beats(fitted) >= CRAMPED_BEATS:
        return None
    missing = [name for name in DAMPING_PARAMETERS.values() if name not in fitted.model.free]
    wider = fitted.model.with_free((*fitted.model.free, *missing))
    return fit_model(wider, fitted.samples, sigma=fitted.sigma, quick=True)
