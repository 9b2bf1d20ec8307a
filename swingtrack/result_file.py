"""result.json: the one document that holds all of a measurement; docs/files.md describes each key.

A quantity is {"value", "u", "dof", "unit"}: u the standard uncertainty, dof left out where infinite; what
can't be known is null. `result_document` writes it, `read_result` reads it back as far as later work needs it.
"""

from __future__ import annotations

import dataclasses
import json
import math
from collections.abc import Mapping
from dataclasses import dataclass
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path
from typing import Any

from .errors import BadInput
from .records import Doubt, Inertia, Measurement, Quantity, Rig, Stopwatch, Swing

SCHEMA = "swingtrack-result/1"
LARGEST_RESULT_BYTES = 50_000_000


def program_version() -> str:
    """The installed version, or "unknown" where the package runs from a folder that was not installed."""
    try:
        return version("swingtrack")
    except PackageNotFoundError:
        return "unknown"


def quantity_entry(
    quantity: Quantity | None, *, scale: float = 1.0, unit: str | None = None
) -> dict[str, Any] | None:
    """A quantity as the document holds it; `scale` and `unit` turn it into the unit that its key names."""
    if quantity is None or not math.isfinite(quantity.value):
        return None
    entry: dict[str, Any] = {"value": quantity.value * scale, "u": _finite(quantity.u * abs(scale))}
    if math.isfinite(quantity.dof):
        entry["dof"] = quantity.dof
    entry["unit"] = unit or quantity.unit
    return entry


def result_document(measurement: Measurement) -> dict[str, Any]:
    """The whole document of a measurement; parts that were not made are left out."""
    document: dict[str, Any] = {
        "schema": SCHEMA,
        "program": {"name": "swingtrack", "version": program_version()},
    }
    path = measurement.path
    if path is not None and path.clip is not None:
        document["clip"] = _plain(path.clip)
    if path is not None and path.marker is not None:
        document["marker"] = _plain(path.marker)
    if measurement.swing is not None:
        document["swing"] = swing_entry(measurement.swing)
    if measurement.inertia is not None:
        document["inertia"] = inertia_entry(measurement.inertia)
    if measurement.stopwatch is not None:
        document["stopwatch"] = stopwatch_entry(measurement.stopwatch)
    document["warnings"] = [_plain(doubt) for doubt in measurement.doubts]
    document["inputs"] = _plain(measurement.inputs)
    return document


def swing_entry(swing: Swing) -> dict[str, Any]:
    """The `swing` part: period, damping, amplitude, and what else moved."""
    return {
        "period_s": quantity_entry(swing.period),
        "period_in_clip_s": quantity_entry(swing.period_in_clip),
        "decay_rate_per_s": quantity_entry(swing.decay_rate),
        "half_life_s": quantity_entry(swing.half_life),
        "damping_ratio": quantity_entry(swing.damping_ratio),
        "quality_factor": quantity_entry(swing.quality_factor),
        "log_decrement": quantity_entry(swing.log_decrement),
        "amplitude_start_deg": _in_degrees(swing.amplitude_start),
        "amplitude_end_deg": _in_degrees(swing.amplitude_end),
        "amplitude_shift": swing.amplitude_shift,
        "cycles": swing.cycles,
        "free_from_s": swing.trace.free_from_s,
        "free_to_s": swing.trace.free_to_s,
        "damping_law": swing.damping_law,
        "damping_terms": [
            {
                "kind": t.kind,
                **(quantity_entry(t.value) or {}),
                "share_start": t.share_start,
                "share_end": t.share_end,
            }
            for t in swing.damping_terms
        ],
        "other_modes": [_plain(mode) for mode in swing.other_modes],
        "fit_rms_px": swing.fit_rms if swing.fit_rms_unit == "px" else None,
        "fit_rms": {"value": swing.fit_rms, "unit": swing.fit_rms_unit},
        "noise_correlation_time_s": swing.noise_correlation_time_s,
        "outliers": swing.outliers,
        "solved": swing.solved,
        "usable": swing.usable,
    }


def _in_degrees(angle: Quantity | None) -> dict[str, Any] | None:
    return quantity_entry(angle, scale=180.0 / math.pi, unit="deg")


def inertia_entry(inertia: Inertia) -> dict[str, Any]:
    """The `inertia` part: the moment with its budget, corrections and Monte Carlo check."""
    moment = quantity_entry(inertia.moment)
    if moment is not None:
        moment |= {"k": inertia.k, "expanded": inertia.expanded}
    entry: dict[str, Any] = {
        "moment_kg_m2": moment,
        "about": inertia.about,
        "radius_of_gyration_m": quantity_entry(inertia.radius_of_gyration),
        "budget": [_plain(line) for line in inertia.budget],
        "corrections": [_plain(correction) for correction in inertia.corrections],
        "monte_carlo": None if inertia.monte_carlo is None else _plain(inertia.monte_carlo),
        "advice": list(inertia.advice),
    }
    if inertia.moment_about_edge is not None:
        entry["moment_about_edge_kg_m2"] = quantity_entry(inertia.moment_about_edge)
    return entry


def stopwatch_entry(stopwatch: Stopwatch) -> dict[str, Any]:
    """The `stopwatch` part: the hand-timed runs and what the clip says of them."""
    against = stopwatch.against_clip
    return {
        "period_s": quantity_entry(stopwatch.period),
        "method": stopwatch.method,
        "offset_s": quantity_entry(stopwatch.offset),
        "trials": [_plain(trial) for trial in stopwatch.trials],
        "scatter_s": _finite(stopwatch.scatter_s),
        "against_clip": None
        if against is None
        else {**_plain(against), "bias_s": quantity_entry(against.bias_s)},
        "further_trials_for_target": stopwatch.further_trials_for_target,
    }


def combined_document(result: Any, files: list[str], *, name: str = "combined") -> dict[str, Any]:
    """The document of what `combine` or `solids` made, under `name`; its warnings stand at the top like all others."""
    part = _plain(result)
    warnings = part.pop("doubts", [])
    return {
        "schema": SCHEMA,
        "program": {"name": "swingtrack", "version": program_version()},
        name: part,
        "warnings": warnings,
        "inputs": {"files": files},
    }


def dump(document: Mapping[str, Any], *, indent: int | None = 2) -> str:
    """JSON text of a document: UTF-8 signs kept, no NaN."""
    return json.dumps(document, ensure_ascii=False, allow_nan=False, indent=indent)


@dataclass(frozen=True)
class StoredResult:
    """A result file read back: the whole document, and the parts that later work takes."""

    file: str
    document: Mapping[str, Any]
    rig: Rig | None
    period: Quantity | None
    moment: Quantity | None
    doubts: tuple[Doubt, ...]


def read_result(file: str | Path) -> StoredResult:
    """Read a result.json, or the result folder that holds it.

    Raises
    ------
    BadInput
        It is not there, not JSON, or not a document of this program's.
    """
    from .rig import rig_from_mapping

    path = Path(file)
    path = path / "result.json" if path.is_dir() else path
    document = _load(path)
    inputs = document.get("inputs")
    tables = inputs.get("rig") if isinstance(inputs, dict) else None
    try:
        return StoredResult(
            file=str(path),
            document=document,
            rig=rig_from_mapping(tables, name=f"{path} (its rig)") if isinstance(tables, dict) else None,
            period=_read_quantity(document.get("swing"), "period_s") or _read_quantity(inputs, "period_s"),
            moment=_read_quantity(document.get("inertia"), "moment_kg_m2"),
            doubts=tuple(
                Doubt(str(w["code"]), str(w["message"]), str(w["advice"])) for w in document["warnings"]
            ),
        )
    except (KeyError, TypeError, ValueError) as error:
        if isinstance(error, BadInput):
            raise
        raise _not_a_result(path, f"a part of it is missing or of the wrong kind ({error})") from None


def _load(path: Path) -> dict[str, Any]:
    try:
        if path.stat().st_size > LARGEST_RESULT_BYTES:
            raise _not_a_result(path, f"it is {path.stat().st_size} bytes long")
        document = json.loads(path.read_bytes())
    except FileNotFoundError:
        raise BadInput(
            f"There is no file {path}.", "Needed: a result.json.", "Run swingtrack measure first."
        ) from None
    except OSError as error:
        raise BadInput(
            f"{path} can't be read: {error.strerror}.", "Needed: a readable result.json."
        ) from None
    except (ValueError, RecursionError):
        raise _not_a_result(path, "it is not JSON") from None
    if not isinstance(document, dict) or document.get("schema") != SCHEMA:
        raise _not_a_result(path, f"it does not say schema {SCHEMA}")
    return document


def _not_a_result(path: Path, why: str) -> BadInput:
    return BadInput(
        f"{path} is not a result of swingtrack: {why}.", "Needed: the result.json of a measurement."
    )


def _read_quantity(part: Any, key: str) -> Quantity | None:
    entry = part.get(key) if isinstance(part, dict) else None
    if entry is None:
        return None
    value, u, dof = float(entry["value"]), float(entry["u"]), float(entry.get("dof", math.inf))
    if not (math.isfinite(value) and math.isfinite(u)) or u < 0.0 or not dof > 0.0:
        raise ValueError(f"{key} is not a number with an uncertainty")
    return Quantity(value, u, str(entry["unit"]), dof=dof)


def _finite(number: float) -> float | None:
    return number if math.isfinite(number) else None


def _plain(value: Any) -> Any:
    """Records, mappings and tuples as JSON types; quantities as entries, what is not finite as null."""
    if isinstance(value, Quantity):
        return quantity_entry(value)
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        fields = {f.name: getattr(value, f.name) for f in dataclasses.fields(value)}
        if fields.get("dof") == math.inf:
            del fields["dof"]
        return {key: _plain(entry) for key, entry in fields.items()}
    if isinstance(value, Mapping):
        return {str(key): _plain(entry) for key, entry in value.items()}
    if isinstance(value, tuple | list):
        return [_plain(entry) for entry in value]
    if hasattr(value, "tolist"):  # numpy arrays and scalars
        return _plain(value.tolist())
    if isinstance(value, float):
        return _finite(value)
    return value
