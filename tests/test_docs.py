"""The documents say what the program does."""

from __future__ import annotations

import ast
import re
import subprocess
import sys
from pathlib import Path

import pytest

REPOSITORY = Path(__file__).resolve().parents[1]
PACKAGE = REPOSITORY / "swingtrack"


def codes_in_the_program() -> set[str]:
    found = set()
    for file in PACKAGE.rglob("*.py"):
        for node in ast.walk(ast.parse(file.read_text(encoding="utf-8"))):
            if isinstance(node, ast.Call) and getattr(node.func, "id", "") == "Doubt":
                first = (
                    node.args[0]
                    if node.args
                    else next((k.value for k in node.keywords if k.arg == "code"), None)
                )
                if isinstance(first, ast.Constant):
                    found.add(str(first.value))
    return found


def test_every_warning_code_is_documented_and_no_other() -> None:
    documented = set(
        re.findall(r"^\| `([a-z-]+)` \|", (REPOSITORY / "docs" / "warnings.md").read_text(), re.M)
    )
    assert documented == codes_in_the_program()


def test_the_command_page_is_the_programs_own_help() -> None:
    from docs.make_commands import command_page

    assert (REPOSITORY / "docs" / "commands.md").read_text() == command_page()


def test_links_between_documents_lead_somewhere() -> None:
    for file in [
        *REPOSITORY.glob("*.md"),
        *(REPOSITORY / "docs").rglob("*.md"),
        *(REPOSITORY / "samples").glob("*.md"),
    ]:
        for target in re.findall(r"\]\((?!https?:|#)([^)#]+)", file.read_text()):
            assert (file.parent / target).exists(), f"{file.name}: {target}"


def readme_commands() -> list[str]:
    text = (REPOSITORY / "samples" / "README.md").read_text()
    return [
        line for block in re.findall(r"```sh\n(.*?)```", text, re.S) for line in block.splitlines() if line
    ]


@pytest.mark.slow
@pytest.mark.parametrize("command", readme_commands())
def test_commands_of_the_samples_page_run(command: str, tmp_path: Path) -> None:
    words = command.replace("--out results", f"--out {tmp_path}").split()
    assert words[0] == "swingtrack"
    done = subprocess.run(
        [sys.executable, "-m", *words],
        capture_output=True,
        text=True,
        cwd=REPOSITORY,
        check=False,
        timeout=300,
    )
    assert done.returncode == 0, done.stderr


def test_no_path_of_a_machine_is_in_the_repository() -> None:
    word = re.compile(r"/(?:home|root|Users|tmp)/\w")
    for file in [*PACKAGE.rglob("*.py"), *REPOSITORY.glob("*.md"), *(REPOSITORY / "docs").rglob("*.md")]:
        assert not word.search(file.read_text(encoding="utf-8")), file
