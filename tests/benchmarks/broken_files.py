"""Broken clips, rigs, series and results: each ends in a result or one clear error, within bounded time.

    python -m tests.benchmarks.broken_files --count 20000 --seed 1

Clips are followed only as far as reading their frames; whole measurements of broken clips are a smaller share
(--measure-share). Each file is worked on in a child process whose memory and time are limited, so that a crash
inside the decoding library is counted and not suffered.
"""

from __future__ import annotations

import argparse
import multiprocessing
import resource
import struct
import tempfile
from collections import Counter
from pathlib import Path
from typing import Any

import numpy as np

MEMORY_BYTES = 3_000_000_000
SECONDS_EACH = 60
BATCH = 50
RIG = (
    '[article]\nname = "blade"\nmass = "0.3 kg ± 1 g"\n[suspension]\nkind = "bifilar"\nlength = "1.2 m ± 1 mm"\n'
    'upper_spacing = "0.2 m ± 0.5 mm"\n[view]\nfrom = "above"\n'
)
SERIES = "t_s,angle_rad\n" + "".join(f"{i / 30:.4f},{0.1 * np.cos(0.2 * i):.5f}\n" for i in range(90))
TRIALS = "swings,seconds\n10,20.1\n10,19.9\n20,40.2\n"


def break_bytes(data: bytes, rng: np.random.Generator) -> bytes:
    """One to four faults: flipped bits, cuts, doubled and swapped stretches, absurd numbers in boxes."""
    broken = bytearray(data)
    for _ in range(int(rng.integers(1, 5))):
        if len(broken) < 16:
            break
        at = int(rng.integers(0, len(broken) - 8))
        match int(rng.integers(7)):
            case 0:
                broken[at] ^= 1 << int(rng.integers(8))
            case 1:
                del broken[int(rng.integers(len(broken) // 4, len(broken))) :]
            case 2:
                broken[at:at] = broken[at : at + int(rng.integers(1, 2000))]
            case 3:
                other = int(rng.integers(0, len(broken) - 8))
                broken[at : at + 8], broken[other : other + 8] = (
                    broken[other : other + 8],
                    broken[at : at + 8],
                )
            case 4:
                number = int(rng.choice([0, 1, 0x7FFFFFFF, 0xFFFFFFFF, 0x80000000, 16384, 65535]))
                broken[at : at + 4] = struct.pack(">I", number)
            case 5:
                del broken[at : at + int(rng.integers(1, 400))]
            case _:
                _spoil_a_box(broken, rng)
    return bytes(broken)


def _spoil_a_box(broken: bytearray, rng: np.random.Generator) -> None:
    """An absurd number within the header boxes of an MP4, where sizes, rates, times and turns stand."""
    names = [
        b"tkhd",
        b"mdhd",
        b"mvhd",
        b"stts",
        b"ctts",
        b"stsz",
        b"stsc",
        b"stco",
        b"avc1",
        b"elst",
        b"stsd",
        b"avcC",
    ]
    found = broken.find(names[int(rng.integers(len(names)))])
    if found >= 0:
        at = found + 4 + int(rng.integers(0, 60))
        broken[at : at + 4] = struct.pack(
            ">I", int(rng.choice([0, 1, 2, 0x7FFFFFFF, 0xFFFFFFFF, 0x00010000, 1 << 14]))
        )


def work_on(kind: str, file: Path, measure: bool) -> str:
    """What a broken file ends in: "result", "refused" or "nothing"; anything else is a fault of ours."""
    from swingtrack.errors import BadInput, NothingToMeasure

    try:
        if kind == "clip" and measure:
            from swingtrack.measure import measure_clip

            measure_clip(file)
        elif kind == "clip":
            from swingtrack.clip import open_clip

            with open_clip(file) as clip:
                for _ in clip.frames():
                    pass
                clip.facts(), clip.doubts(), clip.repeated_times()
        elif kind == "rig":
            from swingtrack.rig import read_rig

            read_rig(file)
        elif kind == "trials":
            from swingtrack.signal.stopwatch import assess_trials, read_trials

            assess_trials(read_trials(file))
        else:
            from swingtrack.series_file import read_series

            read_series(file)
    except BadInput as error:
        return "refused" if str(error) else "refused without a word"
    except NothingToMeasure:
        return "nothing"
    except MemoryError:
        return "memory"
    return "result"


def _batch(jobs: list[tuple[str, str, bool]], results: Any) -> None:
    resource.setrlimit(resource.RLIMIT_AS, (MEMORY_BYTES, MEMORY_BYTES))
    for kind, name, measure in jobs:
        try:
            outcome = work_on(kind, Path(name), measure)
        except Exception as error:
            outcome = f"fault: {type(error).__name__}: {str(error)[:80]}"
        results.put((name, outcome))


def run_jobs(jobs: list[tuple[str, str, bool]]) -> dict[str, str]:
    """Outcome of each file; a child that dies or hangs counts against the file it was at."""
    outcomes: dict[str, str] = {}
    context = multiprocessing.get_context("spawn")
    while jobs:
        results = context.Queue()
        child = context.Process(target=_batch, args=(jobs[:BATCH], results))
        child.start()
        part = [name for _, name, _ in jobs[:BATCH]]
        while len(done := [n for n in part if n in outcomes]) < len(part):
            try:
                name, outcome = results.get(timeout=SECONDS_EACH if done else 2 * SECONDS_EACH)
                outcomes[name] = outcome
            except Exception:
                stuck = next(n for n in part if n not in outcomes)
                outcomes[stuck] = "hung" if child.is_alive() else f"crashed ({child.exitcode})"
                child.kill()
                break
        child.join()
        jobs = [job for job in jobs if job[1] not in outcomes]
    return outcomes


def judge_files(*, count: int, seed: int, measure_share: float = 0.02) -> Counter[str]:
    """Break `count` files and count what they end in; most are clips."""
    from tests.clip.clips import Recipe, even_ticks, write_clip

    rng = np.random.default_rng(seed)
    with tempfile.TemporaryDirectory() as folder:
        place = Path(folder)
        clips = [
            write_clip(place / f"whole{i}{suffix}", Recipe(even_ticks(24), codec))
            for i, (suffix, codec) in enumerate(
                [(".mp4", "libx264"), (".mov", "libx264"), (".mkv", "libx264"), (".avi", "mpeg4")]
            )
        ]
        texts = {"rig": RIG, "series": SERIES, "trials": TRIALS}
        jobs = []
        for number in range(count):
            kind = str(rng.choice(["clip", "rig", "series", "trials"], p=[0.7, 0.1, 0.1, 0.1]))
            whole = clips[int(rng.integers(len(clips)))] if kind == "clip" else None
            data = whole.read_bytes() if whole is not None else texts[kind].encode()
            file = place / f"{number}{whole.suffix if whole is not None else '.txt'}"
            file.write_bytes(break_bytes(data, rng))
            jobs.append((kind, str(file), bool(rng.random() < measure_share)))
        return Counter(run_jobs(jobs).values())


def main() -> None:
    """Print the count of each outcome."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--count", type=int, default=2000)
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--measure-share", type=float, default=0.02)
    chosen = parser.parse_args()
    counts = judge_files(count=chosen.count, seed=chosen.seed, measure_share=chosen.measure_share)
    for outcome, number in counts.most_common():
        print(f"{number:>7}  {outcome}")


if __name__ == "__main__":
    main()
