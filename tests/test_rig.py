"""Rig files: what is right is read into SI, what is wrong is named by its key."""

from __future__ import annotations

from pathlib import Path

import pytest

from swingtrack.errors import BadRig
from swingtrack.rig import read_rig

RIG = """
[article]
name = "paddle 12"
mass = "0.912 kg ± 0.5 g"
[suspension]
kind = "bifilar"
length = "1.204 m ± 1 mm"
upper_spacing = "300 mm ± 0.5 mm"
[place]
latitude = "51.5 deg"
[view]
from = "above"
dot_radius = "245 mm ± 1 mm"
"""


def write(folder: Path, text: str) -> Path:
    file = folder / "rig.toml"
    file.write_text(text, encoding="utf-8")
    return file


def test_a_rig_is_read_into_si(tmp_path: Path) -> None:
    rig = read_rig(write(tmp_path, RIG))
    assert rig.article.mass is not None
    assert rig.article.mass.value == 0.912
    assert rig.suspension.dimensions["length"].value == 1.204
    assert "lower_spacing" not in rig.suspension.dimensions
    assert rig.view.camera == "above"
    assert rig.source["suspension"]["upper_spacing"] == "300 mm ± 0.5 mm"


@pytest.mark.parametrize(
    ("old", "new", "said"),
    [
        ('mass = "0.912 kg ± 0.5 g"', "", "article.mass is missing"),
        ("0.912 kg", "0.912 m", "article.mass"),
        ("upper_spacing", "uper_spacing", "did you mean upper_spacing"),
        ('kind = "bifilar"', 'kind = "quadfilar"', "takes bifilar"),
        ('kind = "bifilar"', "", "suspension.kind is missing"),
        ("300 mm ± 0.5 mm", "-300 mm ± 0.5 mm", "negative"),
        ('"300 mm ± 0.5 mm"', "300", "in one pair of quotes"),
        ('from = "above"', 'from = "below"', "view.from"),
        ("51.5 deg", "91 deg", "poles"),
        ('length = "1.204 m ± 1 mm"', "", "length or drop"),
        ("[article]", "[article", "not valid TOML"),
    ],
)
def test_a_fault_is_named_by_its_key(tmp_path: Path, old: str, new: str, said: str) -> None:
    assert old in RIG
    with pytest.raises(BadRig) as caught:
        read_rig(write(tmp_path, RIG.replace(old, new, 1)))
    assert said in str(caught.value)


def test_files_that_are_no_rig(tmp_path: Path) -> None:
    with pytest.raises(BadRig, match="There is no file"):
        read_rig(tmp_path / "none.toml")
    with pytest.raises(BadRig, match="can't be read"):
        read_rig(tmp_path)
    binary = tmp_path / "clip.toml"
    binary.write_bytes(bytes(range(256)))
    with pytest.raises(BadRig, match="not a text file"):
        read_rig(binary)
    with pytest.raises(BadRig, match="article is missing"):
        read_rig(write(tmp_path, ""))
