"""The measured inputs of several runs as one set, in which an input that runs share appears once.

Two runs share an input where their rigs state the very same number for it (value, uncertainty and text): the same
bench, measured once. The mass and the place of the centre of mass are shared between runs of the same article (about
the same axis) alone.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Collection, Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Any

from ..records import Doubt, Quantity
from .air import added_moment
from .combine import Run
from .combine_adjust import SCATTER
from .corrections import air_correction
from .suspension import Model, model_of

OF_WHAT_HANGS = {"period", "second_period", "clock", "mass", "air factor", "centre_offset", "pivot_to_centre"}


@dataclass(frozen=True)
class JointInputs:
    """Inputs of all runs.

    Parameters
    ----------
    runs : tuple of Run
    models : the model of each run's suspension
    quantities : mapping of name to Quantity
        Every independent input once.
    names : for each run, the joint name of each key of its formula
    air : for each run, the added moment of the air, kg m², by which the input "air factor" is multiplied
    rule : callable, optional
        (run, x) → what stands for the run's moment in tables and scatter, where the formula of the suspension is not used.
    """

    runs: tuple[Run, ...]
    models: tuple[Model, ...]
    quantities: Mapping[str, Quantity]
    names: tuple[Mapping[str, str], ...]
    air: tuple[float, ...]
    rule: Callable[[int, Mapping[str, Any]], Any] | None = None

    def local(self, run: int, x: Mapping[str, Any]) -> dict[str, Any]:
        """The inputs of one run's formula out of the joint ones, the clock's error in the period."""
        here = {key: x[name] for key, name in self.names[run].items()}
        if "clock" in here:
            here["period"] = here["period"] * (1.0 + here["clock"])
        return here

    def moment(self, run: int, x: Mapping[str, Any]) -> Any:
        """Moment of inertia of one run alone, kg m², less its air; with its part of the scatter between runs."""
        if self.rule is not None:
            return self.rule(run, x) * self.scatter(run, x)
        here = self.local(run, x)
        moment = self.models[run].moment(here)
        return (moment - self.carried_air(run, x)) * self.scatter(run, x)

    def carried_air(self, run: int, x: Mapping[str, Any]) -> Any:
        """Moment of the air that swings along, kg m²; 0 where the rig names no shape."""
        name = self.names[run].get("air factor")
        return 0.0 if name is None else self.air[run] * x[name]

    def scatter(self, run: int, x: Mapping[str, Any]) -> Any:
        """1 + the scatter of this run, where such an input was added."""
        return 1.0 + x.get(SCATTER + self.runs[run].name, 0.0)

    def values(self) -> dict[str, float]:
        """The inputs as measured."""
        return {name: quantity.value for name, quantity in self.quantities.items()}

    def with_inputs(self, more: Mapping[str, Quantity]) -> JointInputs:
        """The same with further inputs."""
        return replace(self, quantities={**self.quantities, **more})

    def not_shared(self) -> tuple[str, ...]:
        """Keys of the bench itself (not of what hangs there) for which the runs state different numbers."""
        keys = {key for names in self.names for key in names} - OF_WHAT_HANGS
        return tuple(sorted(k for k in keys if len({names.get(k) for names in self.names}) > 1))


def join_inputs(runs: Sequence[Run], *, keys: Collection[str] | None = None) -> JointInputs:
    """Collect the inputs of all runs.

    Parameters
    ----------
    runs : sequence of Run
    keys : collection of str, optional
        Of the suspension's inputs take only these; period, clock and air are always taken.

    Raises
    ------
    BadRig
        A run's rig can't hang as described.
    """
    models = tuple(model_of(run.rig.suspension.kind) for run in runs)
    owners: dict[tuple[Any, ...], list[str]] = {}
    found: dict[tuple[Any, ...], Quantity] = {}
    marks: list[dict[str, tuple[Any, ...]]] = []
    air: list[float] = []
    for run, model in zip(runs, models, strict=True):
        model.check(run.rig)
        here = {}
        own = _inputs_of(run, model, keys)
        air.append(_air_moment(run))
        for key, quantity in own.items():
            mark = _mark(run, key, quantity)
            found.setdefault(mark, quantity)
            owners.setdefault(mark, []).append(run.name)
            here[key] = mark
        marks.append(here)
    titles = _titles(found, owners)
    return JointInputs(
        runs=tuple(runs),
        models=models,
        quantities={titles[mark]: quantity for mark, quantity in found.items()},
        names=tuple({key: titles[mark] for key, mark in here.items()} for here in marks),
        air=tuple(air),
    )


def doubts_of(runs: Sequence[Run]) -> tuple[Doubt, ...]:
    """Doubts of the runs' own results and rigs, each once, the message naming the runs."""
    said: dict[tuple[str, str], tuple[Doubt, list[str]]] = {}
    for run in runs:
        of_rig = model_of(run.rig.suspension.kind).check(run.rig)
        for doubt in dict.fromkeys((*run.doubts, *of_rig)):
            said.setdefault((doubt.code, doubt.message), (doubt, []))[1].append(run.name)
    return tuple(
        replace(doubt, message=f"{', '.join(names)}: {doubt.message}") for doubt, names in said.values()
    )


def not_shared_doubts(joint: JointInputs, advice: str) -> tuple[Doubt, ...]:
    """Where the bench differs from run to run nothing cancels."""
    differing = ", ".join(key.replace("_", " ") for key in joint.not_shared())
    if not differing:
        return ()
    message = f"The runs do not state the same {differing}: nothing cancels there."
    return (Doubt("suspension-not-shared", message, advice),)


def own_period(run: Run) -> Quantity:
    """The period with the clock's part, which runs share, taken out of its uncertainty."""
    clock = run.clock_relative_u * run.period.value
    return replace(run.period, u=math.sqrt(max(run.period.u**2 - clock**2, 0.0)))


def _inputs_of(run: Run, model: Model, keys: Collection[str] | None) -> dict[str, Quantity]:
    inputs = {k: q for k, q in model.inputs(run.rig).items() if keys is None or k in keys}
    inputs["period"] = own_period(run)
    if run.clock_relative_u > 0.0:
        inputs["clock"] = Quantity(0.0, run.clock_relative_u, "1", shape="rectangular")
    carried = _air_moment(run)
    if carried > 0.0:
        # a correction of the whole of what it corrects: its u is the relative doubt of the coefficient
        u = air_correction(run.rig, carried).u
        inputs["air factor"] = Quantity(1.0, u, "1", shape="rectangular")
    return inputs


def _air_moment(run: Run) -> float:
    return 0.0 if run.rig.air is None else added_moment(run.rig.air)


def _mark(run: Run, key: str, quantity: Quantity) -> tuple[Any, ...]:
    """What makes an input one and the same number in two runs."""
    if key in ("period", "second_period"):
        return (key, run.name)
    stated = (key, quantity.value, quantity.u, quantity.shape, quantity.text)
    if key == "clock":
        return (*stated, run.clock)
    if key == "mass":
        return (*stated, run.rig.article.name)
    if key in ("centre_offset", "pivot_to_centre"):
        return (*stated, run.rig.article.name, run.rig.article.axis)
    if key == "air factor":
        return (*stated, run.rig.air.shape if run.rig.air else "")
    return stated


def _titles(
    found: Mapping[tuple[Any, ...], Quantity], owners: Mapping[tuple[Any, ...], list[str]]
) -> dict[tuple[Any, ...], str]:
    """A name for each input: the key alone where there is only one of it, else with the runs that it belongs to."""
    counts: dict[str, int] = {}
    for mark in found:
        counts[mark[0]] = counts.get(mark[0], 0) + 1
    return {
        mark: mark[0]
        if counts[mark[0]] == 1 and mark[0] != "period"
        else f"{mark[0]} ({', '.join(owners[mark])})"
        for mark in found
    }
