"""Each command as its user types it: results on stdout, messages on stderr, the exit status of the contract."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

SAMPLES = Path(__file__).resolve().parents[2] / "samples"


def run(*arguments: object, cwd: Path | None = None) -> subprocess.CompletedProcess[str]:
    command = [sys.executable, "-m", "swingtrack", *map(str, arguments)]
    return subprocess.run(command, capture_output=True, text=True, cwd=cwd, check=False, timeout=300)


def is_one_clear_message(result: subprocess.CompletedProcess[str]) -> bool:
    lines = result.stderr.strip().splitlines()
    return result.stdout == "" and 1 <= len(lines) <= 6 and "Traceback" not in result.stderr


@pytest.fixture
def rig(tmp_path: Path) -> Path:
    file = tmp_path / "rig.toml"
    file.write_text((SAMPLES / "paddle-above.toml").read_text())
    return file


@pytest.mark.slow
def test_measure_a_sample_and_read_the_number(tmp_path: Path) -> None:
    expected = json.loads((SAMPLES / "paddle-above.expected.json").read_text())
    clip, rig = SAMPLES / "paddle-above.mp4", SAMPLES / "paddle-above.toml"
    done = run(
        "measure", clip, "--rig", rig, "--out", tmp_path, "--stopwatch", SAMPLES / "paddle-above.trials.csv"
    )
    assert done.returncode == 0, done.stderr
    assert done.stdout.startswith("moment of inertia")
    assert len(done.stdout.splitlines()) <= 25
    assert done.stderr == ""  # no bar where nobody watches
    folder = tmp_path / "paddle-above.swing"
    document = json.loads((folder / "result.json").read_text())
    for part, key in (("inertia", "moment_kg_m2"), ("swing", "period_s")):
        entry = document[part][key]
        assert abs(entry["value"] - expected[key]) < 2.0 * entry["u"]
    assert {"path.csv", "report.html", "still.png", "swing.png", "swing.svg"} <= {
        f.name for f in folder.iterdir()
    }
    again = run("measure", clip, "--rig", rig, "--out", tmp_path)
    assert again.returncode == 2
    assert "--again" in again.stderr
    assert json.loads((folder / "result.json").read_text()) == document


@pytest.mark.slow
def test_the_same_input_gives_the_same_output(tmp_path: Path) -> None:
    texts = []
    for place in ("one", "two"):
        done = run("measure", SAMPLES / "paddle-above.mp4", "--json", "--out", tmp_path / place)
        assert done.returncode == 0, done.stderr
        texts.append(done.stdout)
    assert texts[0] == texts[1]
    assert len(texts[0].splitlines()) == 1


@pytest.mark.parametrize(
    ("name", "content", "status"),
    [
        ("notes.mp4", b"these are my notes about the swing\n" * 50, 2),
        ("empty.mp4", b"", 2),
        ("none.mp4", None, 2),
    ],
)
def test_what_is_no_clip(tmp_path: Path, name: str, content: bytes | None, status: int) -> None:
    if content is not None:
        (tmp_path / name).write_bytes(content)
    done = run("measure", tmp_path / name)
    assert done.returncode == status
    assert is_one_clear_message(done)
    assert not (tmp_path / "notes.swing").exists()


@pytest.mark.parametrize(
    ("old", "new", "said"),
    [
        ('mass = "0.912 kg ± 0.5 g"', "", "article.mass is missing"),
        ("0.912 kg ± 0.5 g", "0.912 m ± 0.5 mm", "not one of mass"),
        ("1.204 m", "0.0 m", "suspension.length"),
        ("upper_spacing", "spacing", "did you mean"),
    ],
)
def test_a_faulty_rig(rig: Path, old: str, new: str, said: str) -> None:
    text = rig.read_text()
    assert old in text
    rig.write_text(text.replace(old, new))
    done = run("inertia", rig, "--period", "3.1 s ± 0.2 ms k=1")
    assert done.returncode == 2
    assert is_one_clear_message(done)
    assert said in done.stderr


def test_inertia_of_a_period(rig: Path) -> None:
    done = run("inertia", rig, "--period", "1.2 s ± 0.5 ms k=1", "--json")
    document = json.loads(done.stdout)
    # I = m g D² T²/(16 π² L), the bifilar formula (docs/theory.md), worked by hand for this rig
    by_hand = 0.912 * 9.8094 * 0.5**2 * 1.2**2 / (16 * 3.141592653589793**2 * 1.204)
    assert document["inertia"]["moment_kg_m2"]["value"] == pytest.approx(by_hand, rel=1e-9)
    assert document["inertia"]["moment_kg_m2"]["k"] == pytest.approx(2.0, abs=0.01)


def test_stopwatch_names_the_miscount() -> None:
    done = run("stopwatch", SAMPLES / "paddle-above.trials.csv")
    assert done.returncode == 0
    assert "Trial 3 fits 9 swings, not 10" in done.stdout
    assert run("stopwatch", SAMPLES / "paddle-above.trials.csv", "--strict").returncode == 4


def test_fit_of_many_series_prints_a_line_each(tmp_path: Path) -> None:
    import numpy as np

    files = []
    for period in (1.25, 1.5):
        t = np.arange(900) / 30.0
        noise = 1e-3 * np.random.default_rng(5).standard_normal(t.size)
        y = 0.05 * np.exp(-0.01 * t) * np.cos(2 * np.pi * t / period) + noise
        file = tmp_path / f"{period}.csv"
        file.write_text("t_s,angle_rad\n" + "\n".join(f"{a:.6f},{b:.8f}" for a, b in zip(t, y, strict=True)))
        files.append(file)
    noise_only = tmp_path / "noise.csv"
    noise_only.write_text(
        "t_s,angle_rad\n" + "\n".join(f"{a:.6f},{b:.8f}" for a, b in zip(t, noise, strict=True))
    )
    done = run("fit", *files, noise_only, "--json")
    assert done.returncode == 3
    lines = [json.loads(line) for line in done.stdout.splitlines()]
    assert [round(line["swing"]["period_in_clip_s"]["value"], 2) for line in lines] == [1.25, 1.5]
    assert "noise.csv" in done.stderr


def test_help_lists_every_command() -> None:
    done = run("--help")
    assert done.returncode == 0
    for command in (
        "measure",
        "follow",
        "fit",
        "inertia",
        "stopwatch",
        "solids",
        "combine",
        "plan",
        "rehearse",
    ):
        assert command in done.stdout


def test_heavy_libraries_are_not_loaded_for_help() -> None:
    code = (
        "import sys, swingtrack.cli.app; "
        "print([m for m in ('scipy', 'cv2', 'av', 'GTC', 'pint', 'matplotlib', 'pydantic', 'numpy') if m in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_wrong_use_is_status_two() -> None:
    assert run("measure").returncode == 2
    assert run("measure", "x.mp4", "--dot", "here").returncode == 2
    assert run("nonsense").returncode == 2
