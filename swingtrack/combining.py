"""Several stored results → one answer: reads the runs and calls the method asked for."""

from __future__ import annotations

import math
from collections.abc import Sequence
from pathlib import Path
from typing import Any

from .errors import BadInput
from .inertia.combine import CombinedResult, Run
from .records import Quantity
from .result_file import StoredResult, read_result

METHODS = ("repeats", "added-weights", "axes", "edges", "sway")


def combine_results(
    files: Sequence[str | Path],
    *,
    method: str = "repeats",
    tare: Sequence[str | Path] = (),
    reference: Sequence[str | Path] = (),
) -> Any:
    """Combine result files.

    Parameters
    ----------
    files : result.json files or result folders of the article's swings
    method : str
        "repeats", "added-weights", "axes" (the whole tensor), "edges" (parallel-axis moves) or "sway"; left at
        "repeats" where `tare` or `reference` is given.
    tare : results of the cradle swung alone
    reference : results of an article of known moment on the same strings

    Returns
    -------
    CombinedResult or TensorResult

    Raises
    ------
    BadInput
        A file is no result, has no rig, or the runs do not go together.
    """
    runs = _runs(files)
    if (tare or reference) and method != "repeats":
        raise BadInput(f"--tare and --reference do not go with {method}.", "Needed: one way of combining.")
    if reference:
        from .inertia.combine_reference import compare_with_reference

        return compare_with_reference(runs, _runs(reference), cradle=_runs(tare))
    if tare:
        from .inertia.combine_tare import subtract_tare

        return subtract_tare(runs, _runs(tare))
    return _method(method)(runs)


def _method(name: str) -> Any:
    match name:
        case "repeats":
            from .inertia.combine_repeats import combine_repeats

            return combine_repeats
        case "added-weights":
            from .inertia.combine_added_weights import fit_added_weights

            return fit_added_weights
        case "axes":
            from .inertia.tensor import fit_tensor

            return fit_tensor
        case "edges":
            from .inertia.parallel_axis import fit_parallel_edges

            return fit_parallel_edges
        case "sway":
            from .inertia.sway_gyration import gyration_by_sway

            return _one_run(gyration_by_sway)
    raise BadInput(f"A way of combining {name!r} is not known.", f"Needed: one of {', '.join(METHODS)}.")


def _one_run(function: Any) -> Any:
    def of_one(runs: Sequence[Run]) -> CombinedResult:
        if len(runs) != 1:
            raise BadInput(f"{len(runs)} results were given.", "Needed: one, with sway seen in its clip.")
        result: CombinedResult = function(runs[0])
        return result

    return of_one


def _runs(files: Sequence[str | Path]) -> list[Run]:
    """Runs of result files, with names that tell them apart."""
    stored = [read_result(file) for file in files]
    names = [_name(result) for result in stored]
    for number, name in enumerate(names):
        if names.count(name) > 1:
            names[number] = f"{name} {number + 1}"
    return [_run(result, name) for result, name in zip(stored, names, strict=True)]


def _name(result: StoredResult) -> str:
    path = Path(result.file)
    return (path.parent.name if path.name == "result.json" else path.stem).removesuffix(".swing") or path.stem


def _run(result: StoredResult, name: str) -> Run:
    if result.rig is None or result.period is None:
        raise BadInput(
            f"{result.file} has no {'rig' if result.rig is None else 'period'}.",
            "Needed: results of swingtrack measure with --rig.",
            "Measure the clip again with its rig file.",
        )
    settings = result.document.get("inputs", {}).get("settings") or {}
    clock = float(settings.get("clock_ppm", 0.0)) * 1e-6 / math.sqrt(3.0)
    return Run(
        name=name,
        rig=result.rig,
        period=result.period,
        moment=result.moment,
        sway_period=_sway(result),
        clock_relative_u=clock,
        source=result.file,
        doubts=result.doubts,
    )


def _sway(result: StoredResult) -> Quantity | None:
    """Period of sway seen beside the swing; its doubt is that of a line found in the same record."""
    swing = result.document.get("swing") or {}
    for mode in swing.get("other_modes", []):
        if mode.get("kind") == "sway" and mode.get("frequency_hz"):
            period = 1.0 / float(mode["frequency_hz"])
            stated = mode.get("frequency_u_hz")
            u = period**2 * float(stated) if stated else 0.01 * period
            return Quantity(period, u, "s")
    return None
