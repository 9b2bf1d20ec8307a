"""`swingtrack rehearse`: a synthetic clip of the user's own rig, with its truth."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Annotated, Any, Literal

import typer

from . import shared


def rehearse(
    rig: Annotated[
        Path, typer.Argument(help="Rig file (TOML); expected_moment under [article] is the truth.")
    ],
    out: Annotated[
        Path | None, typer.Option("--out", help="Clip to write (default: RIG.mp4 beside the rig file).")
    ] = None,
    moment: Annotated[
        str | None, typer.Option("--moment", help='True moment of inertia, such as "0.0213 kg m^2".')
    ] = None,
    camera: Annotated[
        Literal["above", "side", "oblique"] | None,
        typer.Option("--camera", help="Where the camera stands (default: as the rig file says, else above)."),
    ] = None,
    amplitude_deg: Annotated[
        float, typer.Option("--amplitude", min=0.1, max=170.0, help="Half swing at the start, degrees.")
    ] = 8.0,
    decay: Annotated[float, typer.Option("--decay", min=0.0, max=10.0, help="Decay rate, 1/s.")] = 0.01,
    seconds: Annotated[
        float, typer.Option("--seconds", min=0.5, max=7200.0, help="Length of the clip.")
    ] = 20.0,
    rate_hz: Annotated[
        float, typer.Option("--rate-hz", min=1.0, max=1000.0, help="Frames per second.")
    ] = 30.0,
    size: Annotated[str, typer.Option("--size", metavar="WxH", help="Picture size.")] = "1280x720",
    seed: Annotated[int, typer.Option("--seed", help="The same seed gives the same clip.")] = 1,
    again: shared.Again = False,
    quiet: shared.Quiet = False,
) -> None:
    """Draw a clip of your own rig, with its truth, to try before filming.

    Writes the clip and beside it CLIP.truth.json.
    """
    from ..files import write_whole
    from ..rehearse import rehearse_clip
    from ..result_file import dump
    from ..rig import read_rig

    bench = read_rig(rig)
    file = rig.with_suffix(".mp4") if out is None else out
    truth_file = file.with_suffix(".truth.json")
    for place in (file, truth_file):
        shared.refuse_existing(place, again=again)
    asked = {
        "camera": camera,
        "amplitude_rad": math.radians(amplitude_deg),
        "decay": decay,
        "film": {"duration_s": seconds, "rate_hz": rate_hz} | _size(size),
        "seed": seed,
        "moment": moment,
    }
    with shared.progress_bar(not quiet) as progress:
        tell = None if progress is None else (lambda share: progress("drawing", share))
        truth = rehearse_clip(bench, file, settings=_settings(bench, asked), progress=tell)
    write_whole(truth_file, dump(truth.to_dict()) + "\n", again=again)
    if not quiet:
        typer.echo(f"Wrote {file} and {truth_file}")
        typer.echo(
            f"True period of small swings {truth.period_s:.6f} s, moment of inertia {truth.moment_kg_m2:.6g} kg m²"
        )


def _size(text: str) -> dict[str, int]:
    from ..errors import BadInput

    try:
        width, height = (int(part) for part in text.lower().split("x"))
    except ValueError:
        raise BadInput(
            f"--size {text} is not a picture size.", "Needed: width x height.", "Write 1280x720."
        ) from None
    return {"width": width, "height": height}


def _settings(bench: Any, asked: dict[str, Any]) -> Any:
    from ..quantity import parse_quantity
    from ..rehearse import Damping, Film, RehearsalSettings, Stage

    view, moment = bench.view, asked["moment"]
    stage: dict[str, Any] = {"camera": asked["camera"] or view.camera or "above"}
    if view.dot_radius_m is not None:
        stage |= {
            "dot_radius_m": view.dot_radius_m.value,
            "distance_m": max(1.0, 4.0 * view.dot_radius_m.value),
        }
    if view.dot_diameter_m is not None:
        stage["dot_diameter_m"] = view.dot_diameter_m.value
    return RehearsalSettings(
        moment_kg_m2=None if moment is None else parse_quantity(moment, "moment", key="--moment").value,
        amplitude_rad=asked["amplitude_rad"],
        damping=Damping(rate_per_s=asked["decay"]),
        film=Film(**asked["film"]),
        stage=Stage(**stage),
        seed=asked["seed"],
    )
