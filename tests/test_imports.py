"""The tree is what it promises: stages do not import one another, and each library has its home."""

from __future__ import annotations

import ast
from pathlib import Path

PACKAGE = Path(__file__).resolve().parents[1] / "swingtrack"
STAGES = {"clip", "marker", "signal", "inertia", "rehearse", "report"}
SHARED = {"records", "errors", "quantity"}
HOMES = {
    "av": {"clip", "rehearse"},
    "cv2": {"clip", "marker", "rehearse"},
    "matplotlib": {"report"},
    "GTC": {"inertia", "quantity"},
    "pint": {"quantity"},
    "typer": {"cli"},
    "jinja2": {"report"},
}


def imports(file: Path) -> list[tuple[str, ...]]:
    """Absolute dotted names that a module imports, anywhere in it."""
    package = ("swingtrack", *file.relative_to(PACKAGE).parts[:-1])
    found: list[tuple[str, ...]] = []
    for node in ast.walk(ast.parse(file.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            found += [tuple(alias.name.split(".")) for alias in node.names]
        elif isinstance(node, ast.ImportFrom):
            base = package[: len(package) - node.level + 1] if node.level else ()
            stem = base + tuple((node.module or "").split(".") if node.module else ())
            found += [(*stem, alias.name) for alias in node.names]
    return found


def modules() -> list[Path]:
    return sorted(PACKAGE.rglob("*.py"))


def violations(file: Path, names: list[tuple[str, ...]]) -> list[str]:
    place = file.relative_to(PACKAGE).parts
    wrong = []
    for name in names:
        if name[0] in HOMES and place[0].removesuffix(".py") not in HOMES[name[0]]:
            wrong.append(f"{'/'.join(place)} imports {name[0]}")
        if name[0] == "swingtrack" and len(name) > 1 and place[0] in STAGES:
            target = name[1]
            if target not in SHARED and target != place[0]:
                wrong.append(f"{'/'.join(place)} imports {'.'.join(name)}")
    return wrong


def test_stages_meet_only_in_the_records() -> None:
    assert [line for file in modules() for line in violations(file, imports(file))] == []


def test_a_planted_violation_is_seen() -> None:
    file = PACKAGE / "signal" / "planted.py"
    assert violations(file, [("swingtrack", "inertia", "law")])
    assert violations(file, [("cv2",)])
    assert not violations(file, [("swingtrack", "records"), ("numpy",)])


def test_no_module_is_longer_than_four_hundred_lines() -> None:
    long = {str(f.relative_to(PACKAGE)): n for f in modules() if (n := len(f.read_text().splitlines())) > 400}
    assert long == {}
