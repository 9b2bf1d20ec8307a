"""The command line: parse, call one library function, render. `main` is the installed program."""

from __future__ import annotations


def main() -> None:
    """Run the command line with the arguments of the process; never returns."""
    from .edge import run

    raise SystemExit(run())
