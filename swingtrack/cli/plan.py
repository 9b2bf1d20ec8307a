"""`swingtrack plan`: what rig to build and what clip to film."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from . import shared


def plan(
    goal: Annotated[
        Path, typer.Argument(metavar="GOAL.toml", help="Article, room, tools at hand, wanted uncertainty.")
    ],
    out: shared.Out = None,
    json: shared.Json = False,
    quiet: shared.Quiet = False,
    again: shared.Again = False,
) -> None:
    """Plan the rig and the clip for a wanted uncertainty of the moment of inertia.

    Writes GOAL.plan/ with rig.toml (to be corrected with what you build) and the figures; rehearse takes that
    rig.toml.
    """
    from ..files import fill_folder
    from ..goal import read_goal
    from ..inertia.planning import plan_rig
    from ..report import plan_figures, plan_text
    from ..result_file import combined_document, dump

    folder = (goal.parent if out is None else out) / f"{goal.stem or 'goal'}.plan"
    shared.refuse_existing(folder, again=again)
    found = plan_rig(read_goal(goal))
    document = combined_document(found, [str(goal)], name="plan")
    fill_folder(folder, {"rig.toml": found.rig_toml(), **plan_figures(found)}, again=again)
    if json:
        typer.echo(dump(document, indent=None))
    elif not quiet:
        typer.echo(plan_text(found) + f"\nwritten to {folder}")
