"""Fitting a `SwingModel` to samples: weights, prior knowledge and bad frames."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from swingtrack.records import Bools, Floats
from swingtrack.signal.model import SwingModel
from swingtrack.signal.solver import MOST_STEPS, LeastSquares, minimise

# Rounds of setting outliers aside; the set hardly ever changes after the third. Fewer while terms are still chosen.
ROUNDS, FINAL_ROUNDS = 2, 6
# Noise is never taken for less than this share of the amplitude: rounding of the model itself.
NOISE_FLOOR = 1e-11
# Nothing within this share of the amplitude is a bad frame, however well the rest may fit.
OUTLIER_FLOOR = 1e-6
# A fit that is not the last and has not settled by then is on its way to nowhere.
QUICK_STEPS = 25
SPARE_SAMPLES = 8  # samples beyond the number of parameters, or nothing is left to tell the noise by
MAD_TO_SIGMA = 1.4826  # normal distribution


@dataclass(frozen=True, eq=False)
class Samples:
    """What is fitted: times from the first sample, values, relative weights (mean square 1), which are kept."""

    t: Floats
    y: Floats
    weight: Floats
    kept: Bools


@dataclass(frozen=True, eq=False)
class Fitted:
    """A model at its best values, with the solver's outcome over the kept samples.

    `residuals` (n,) cover all samples, weighted, data minus model; `sigma` is the weighted residuals' standard
    deviation; `prior_rows` rows of prior knowledge stand at the end of the solver's residuals.
    """

    model: SwingModel
    samples: Samples
    outcome: LeastSquares
    residuals: Floats
    sigma: float
    prior_rows: int

    @property
    def kept_residuals(self) -> Floats:
        """Weighted residuals of the kept samples."""
        return np.asarray(self.residuals[self.samples.kept])

    @property
    def jacobian(self) -> Floats:
        """∂y/∂p of the kept samples, weighted, without the rows of prior knowledge (n, p)."""
        return np.asarray(self.outcome.jacobian[: int(self.samples.kept.sum())])


def fit_model(
    model: SwingModel, samples: Samples, *, sigma: float = 0.0, quick: bool = False
) -> Fitted | None:
    """Least squares over the kept samples; None where the model can't be had at its start values.

    `sigma` is the noise by which prior knowledge is weighed against the samples; `quick` stops at three digits
    of the uncertainty, for rounds that are not the last.
    """
    kept = samples.kept
    if kept.sum() < len(model.free) + SPARE_SAMPLES:
        return None
    y, weight = samples.y[kept], samples.weight[kept]
    fitted = replace(model, t=samples.t[kept])
    priors = [
        (model.free.index(name), prior) for name, prior in (model.priors or {}).items() if name in model.free
    ]
    rows = np.zeros((len(priors), len(model.free)))
    for row, (column, prior) in enumerate(priors):
        rows[row, column] = sigma / prior.u

    def residuals(p: Floats) -> tuple[Floats, Floats] | None:
        seen = fitted.with_vector(p).evaluate()
        if seen is None:
            return None
        r, jacobian = (seen[0] - y) * weight, seen[1] * weight[:, None]
        if priors:
            known = np.array([(p[column] - prior.value) * sigma / prior.u for column, prior in priors])
            r, jacobian = np.concatenate([r, known]), np.vstack([jacobian, rows])
        return r, jacobian

    try:
        outcome = minimise(
            residuals,
            fitted.vector(),
            most_steps=QUICK_STEPS if quick else MOST_STEPS,
            gain=1e-7 if quick else 1e-12,
            polish=not quick,
        )
    except ValueError:
        return None
    best = model.with_vector(outcome.parameters)
    left = np.empty(len(samples.t))
    left[kept] = -outcome.residuals[: len(y)]
    if not kept.all():
        left[~kept] = (samples.y[~kept] - _at(best, samples.t, ~kept)) * samples.weight[~kept]
    spare = max(len(y) - len(model.free), 1)
    floor = NOISE_FLOOR * abs(best.values["amplitude"] * best.values["radius"])
    spread = float(np.sqrt(np.sum(left[kept] ** 2) / spare))
    return Fitted(best, samples, outcome, left, max(spread, floor), len(priors))


def _at(model: SwingModel, t: Floats, which: Bools) -> Floats:
    return np.asarray(model.seen(t)[which])


def fit_robustly(
    model: SwingModel, samples: Samples, limit: float, *, sigma: float = 0.0, final: bool = False
) -> Fitted | None:
    """Fit, set aside what lies beyond `limit` robust standard deviations, and fit again until the set stands.

    `final` goes to the last digit in the end.
    """
    fitted = fit_model(model, samples, sigma=sigma, quick=True)
    for _ in range(FINAL_ROUNDS if final else ROUNDS):
        if fitted is None:
            return None
        size = fitted.model.values["amplitude"] * abs(fitted.model.values["radius"])
        kept = _inside(fitted.residuals, limit, OUTLIER_FLOOR * size)
        if np.array_equal(kept, fitted.samples.kept):
            break
        sample_set = replace(fitted.samples, kept=kept)
        fitted = fit_model(fitted.model, sample_set, sigma=sigma, quick=True)
    if final and fitted is not None:
        return fit_model(fitted.model, fitted.samples, sigma=sigma)
    return fitted


def _inside(residuals: Floats, limit: float, floor: float) -> Bools:
    """Residuals within the limit, by themselves and against the mean of their two neighbours.

    The second test finds a bad frame in slow noise, where it is far from its neighbours but not from the rest.
    """
    spread = MAD_TO_SIGMA * float(np.median(np.abs(residuals - np.median(residuals))))
    inside = np.abs(residuals) <= limit * max(spread, floor)
    if len(residuals) > 4:
        bend = residuals[1:-1] - (residuals[:-2] + residuals[2:]) / 2
        usual = MAD_TO_SIGMA * float(np.median(np.abs(bend)))
        # A single bad frame bends its neighbours by half as much: only the largest of the three is set aside.
        size = np.abs(bend)
        top = np.concatenate([[True], size[1:] >= size[:-1]]) & np.concatenate(
            [size[:-1] >= size[1:], [True]]
        )
        inside[1:-1] &= ~((size > limit * 1.2 * max(usual, floor)) & top)
    return np.asarray(inside)
