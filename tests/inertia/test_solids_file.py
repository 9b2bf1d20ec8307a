"""The parts file: what it takes, and the message for what it does not."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from swingtrack.errors import BadRig
from swingtrack.inertia.solids import assemble
from swingtrack.inertia.solids_file import parts_from_mapping, read_parts

PADDLE = """
name = "paddle 12"
[axis]
direction = [1, 0, 0]
through = ["0 mm ± 1 mm", "0 mm ± 1 mm", "10 mm ± 1 mm"]
[measured]
moment = "0.161 kg m^2 ± 0.002 kg m^2 k=2"
[materials]
"blade foam" = "120 kg/m^3 ± 10 kg/m^3"
[[part]]
name = "shaft"
kind = "tube"
outer_diameter = "30 mm ± 0.1 mm"
inner_diameter = "27.6 mm ± 0.1 mm"
height = "1.70 m ± 1 mm"
material = "Carbon-Epoxy"
[[part]]
name = "blade"
kind = "elliptic-cylinder"
diameter_x = "460 mm ± 1 mm"
diameter_y = "180 mm ± 1 mm"
height = "6 mm ± 0.2 mm"
material = "blade foam"
at = ["0 mm ± 1 mm", "0 mm ± 1 mm", "850 mm ± 1 mm"]
turn = ["y 90 deg ± 0.5 deg"]
[[part]]
name = "slot"
kind = "cylinder"
diameter = "50 mm ± 1 mm"
height = "6 mm ± 0.1 mm"
hole = true
of = "blade"
at = ["0 mm ± 1 mm", "0 mm ± 1 mm", "850 mm ± 1 mm"]
turn = ["y 90 deg ± 0.5 deg"]
"""


def test_paddle_of_a_small_workshop(tmp_path: Path) -> None:
    file = tmp_path / "paddle.toml"
    file.write_text(PADDLE, encoding="utf-8")
    assembly = read_parts(file)
    shaft, blade, slot = assembly.parts
    assert shaft.dimensions["height"].value == pytest.approx(1.7)
    assert blade.at[2].value == pytest.approx(0.85)
    assert blade.turns[0].angle.value == pytest.approx(math.pi / 2)
    assert slot.of == "blade"
    result = assemble(assembly)
    # by hand: carbon-epoxy tube of 1575 kg/m³ and a foam blade of 120 kg/m³ less its slot
    tube = 1575 * math.pi / 4 * (0.03**2 - 0.0276**2) * 1.7
    foam = 120 * 0.006 * math.pi / 4 * (0.46 * 0.18 - 0.05**2)
    assert result.mass.value == pytest.approx(tube + foam, rel=1e-12)
    assert result.comparisons[0].what == "moment"
    assert result.doubts == ()


def test_quantity_without_limits_is_said(tmp_path: Path) -> None:
    file = tmp_path / "ball.toml"
    file.write_text('[[part]]\nname = "ball"\nkind = "sphere"\ndiameter = "40 mm"\nmass = "90 g ± 1 g"\n')
    (doubt,) = assemble(read_parts(file)).doubts
    assert doubt.code == "uncertainty-assumed"
    assert "ball: diameter" in doubt.message


def one(**keys: object) -> dict[str, object]:
    return {"part": [{"name": "a", **keys}]}


@pytest.mark.parametrize(
    ("tables", "said"),
    [
        ({}, "part is missing"),
        ({"part": []}, "part got"),
        (one(kind="cube"), r"kind = 'cube' is not known \(did you mean tube\?\)"),
        (one(kind="sphere", diameter="3 cm", mass="1 kg", colour="red"), "part 'a'.colour is not a key here"),
        (
            one(kind="sphere", diametre="3 cm", mass="1 kg"),
            r"part 'a'.diametre is not a key here \(did you mean diameter\?\)",
        ),
        (one(kind="sphere", mass="1 kg"), r"diameter is missing \(a sphere needs diameter\)"),
        (one(kind="sphere", diameter="3 cm", height="1 m", mass="1 kg"), "height is not a key of a sphere"),
        (one(kind="sphere", diameter="3 kg", mass="1 kg"), "not one of length"),
        (one(kind="sphere", diameter="-3 cm", mass="1 kg"), "not over zero"),
        (one(kind="sphere", diameter=3, mass="1 kg"), "not a text in quotes"),
        (one(kind="sphere", diameter="3 cm", mass="1 kg", density="1 g/cm^3"), "has both mass and density"),
        (one(kind="sphere", diameter="3 cm", mass="1 kg", at=["1 mm", "2 mm"]), r"at\[2\] is missing"),
        (
            one(kind="sphere", diameter="3 cm", mass="1 kg", turn=["90 deg"]),
            r"turn\[0\]: '90 deg' is not a turn",
        ),
        (one(kind="sphere", diameter="3 cm", mass="1 kg", turn=["x 90 mm"]), "not one of angle"),
        (
            one(kind="tube", outer_diameter="3 cm", inner_diameter="4 cm", height="1 m", mass="1 kg"),
            "inner_diameter = '4 cm' is not below outer_diameter = '3 cm'",
        ),
        (
            one(kind="body", moment_x="1 kg m^2", moment_y="1 kg m^2", moment_z="3 kg m^2", mass="1 kg"),
            "larger than the other two together",
        ),
        ({**one(kind="point", mass="1 kg"), "axis": {"direction": [0, 0, 0]}}, "no direction"),
        ({**one(kind="point", mass="1 kg"), "measured": {"moment": "1 kg"}}, "not one of moment"),
    ],
)
def test_message_names_the_key(tables: dict[str, object], said: str) -> None:
    with pytest.raises(BadRig, match=said):
        parts_from_mapping(tables)


@pytest.mark.parametrize(
    ("content", "said"),
    [(b"part = [", "not valid TOML"), (b"\xff\xfe\x00", "not a text file"), (b"#" * 1_000_001, "bytes long")],
)
def test_file_that_is_no_parts_file(tmp_path: Path, content: bytes, said: str) -> None:
    file = tmp_path / "parts.toml"
    file.write_bytes(content)
    with pytest.raises(BadRig, match=said):
        read_parts(file)


def test_file_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(BadRig, match="no such file"):
        read_parts(tmp_path / "none.toml")
