"""Make docs/commands.md from the program's own help: python -m docs.make_commands"""

from __future__ import annotations

import os
from pathlib import Path

COMMANDS = (
    "measure",
    "follow",
    "fit",
    "inertia",
    "stopwatch",
    "solids",
    "combine",
    "plan",
    "rehearse",
)


def command_page() -> str:
    """Text of docs/commands.md."""
    os.environ["COLUMNS"] = "100"
    os.environ["TERMINAL_WIDTH"] = "100"
    from typer.testing import CliRunner

    from swingtrack.cli.app import app

    runner = CliRunner()
    parts = [
        "# Commands",
        "",
        "Made from the program's own help by `python -m docs.make_commands`; a test holds the two together.",
        "",
    ]
    for command in COMMANDS:
        text = runner.invoke(app, [command, "--help"], prog_name="swingtrack").output.strip()
        parts += [
            f"## swingtrack {command}",
            "",
            "```text",
            *[line.rstrip() for line in text.splitlines()],
            "```",
            "",
        ]
    return "\n".join(parts)


if __name__ == "__main__":
    Path(__file__).with_name("commands.md").write_text(command_page(), encoding="utf-8")
