"""Rigs that the tests of this folder rehearse."""

from __future__ import annotations

from typing import Any

from swingtrack.records import Rig
from swingtrack.rig import rig_from_mapping

PLACE = {"gravity": "9.81 m/s^2"}


def strings(length: float = 1.0, upper: float = 0.2, lower: float | None = None, **more: Any) -> Rig:
    """Two strings and 0.5 kg; sizes in metres."""
    hung: dict[str, Any] = {"kind": "bifilar", "length": f"{length} m", "upper_spacing": f"{upper} m", **more}
    if lower is not None:
        hung["lower_spacing"] = f"{lower} m"
    return rig_from_mapping(
        {"article": {"mass": "0.5 kg", "expected_moment": "0.005 kg m^2"}, "suspension": hung, "place": PLACE}
    )


def pendulum() -> Rig:
    return rig_from_mapping(
        {
            "article": {"mass": "0.4 kg"},
            "suspension": {"kind": "knife-edge", "pivot_to_centre": "0.3 m"},
            "place": PLACE,
        }
    )


def wire(stiffness: str = "0.02 N m/rad") -> Rig:
    return rig_from_mapping({"article": {}, "suspension": {"kind": "torsion-wire", "stiffness": stiffness}})
