"""Written whole or not at all, and never over what was not asked to be replaced."""

from __future__ import annotations

from pathlib import Path

import pytest

from swingtrack.errors import BadInput, WouldOverwrite
from swingtrack.files import fill_folder, whole_folder, write_whole


def test_a_file_is_written_whole_and_not_overwritten(tmp_path: Path) -> None:
    file = write_whole(tmp_path / "a.txt", "first")
    with pytest.raises(WouldOverwrite):
        write_whole(file, "second")
    assert file.read_text() == "first"
    write_whole(file, "second", again=True)
    assert file.read_text() == "second"
    assert [entry.name for entry in tmp_path.iterdir()] == ["a.txt"]


def test_an_interrupt_leaves_what_was_there(tmp_path: Path) -> None:
    folder = fill_folder(tmp_path / "r", {"a": "old"})
    with pytest.raises(KeyboardInterrupt), whole_folder(folder, again=True) as aside:
        write_whole(aside / "a", "new")
        raise KeyboardInterrupt
    assert (folder / "a").read_text() == "old"
    assert [entry.name for entry in tmp_path.iterdir()] == ["r"]


def test_a_folder_is_replaced_whole(tmp_path: Path) -> None:
    folder = fill_folder(tmp_path / "r", {"a": "old", "b": "old"})
    fill_folder(folder, {"a": "new"}, again=True)
    assert [entry.name for entry in folder.iterdir()] == ["a"]
    assert [entry.name for entry in tmp_path.iterdir()] == ["r"]


def test_of_two_runs_on_one_folder_the_first_to_end_stands(tmp_path: Path) -> None:
    with pytest.raises(WouldOverwrite), whole_folder(tmp_path / "r") as aside:
        write_whole(aside / "a", "slow")
        fill_folder(tmp_path / "r", {"a": "quick"})
    assert (tmp_path / "r" / "a").read_text() == "quick"


def test_a_place_that_cannot_be_written_is_said_plainly(tmp_path: Path) -> None:
    blocker = write_whole(tmp_path / "file", "")
    with pytest.raises(BadInput, match="can't be written"):
        fill_folder(blocker / "r", {"a": ""})
