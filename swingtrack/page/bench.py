"""The bench folder: what was uploaded, what was measured, and the last rig, as plain files.

    bench/
      clips/     uploaded clips, one file each, named <key>-<safe name>
      results/   the same result folders that the command line writes
      rigs/      saved rig files; last.toml is the last one used

An upload is streamed to a hidden name and takes its own name when it is whole, so that a dropped connection, a
full disk or a restart leaves nothing half-written in sight.
"""

from __future__ import annotations

import os
import re
import secrets
import shutil
import time
from collections.abc import AsyncIterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from ..errors import BadInput
from ..files import write_whole

KEY_BYTES = 9  # twelve letters: not to be guessed, short enough for a file name
STALE_UPLOAD_S = 6 * 3600.0
_SAFE = re.compile(r"[^\w.-]+", re.UNICODE)
_KEY = re.compile(r"[A-Za-z0-9_-]{12}")
_RESULT_FILES = re.compile(r"(result\.json|path\.csv|report\.html|[\w-]{1,60}\.(png|svg|csv|jpg|mp4|html))")


class TooLarge(BadInput):
    """An upload over the limit."""


def safe_name(name: str) -> str:
    """A file name without folders, control signs or leading dots, at most 80 signs, never empty."""
    base = name.replace("\\", "/").rsplit("/", 1)[-1]
    return _SAFE.sub("-", base).strip("-.")[-80:] or "clip"


@dataclass(frozen=True)
class Bench:
    """A bench folder; `upload_limit` in bytes."""

    root: Path
    upload_limit: int = 4_000_000_000

    def prepare(self) -> None:
        """Make the folders and sweep away what a broken upload left behind."""
        for part in ("clips", "results", "rigs"):
            (self.root / part).mkdir(parents=True, exist_ok=True)
        for leftover in (self.root / "clips").glob(".*"):
            if time.time() - leftover.stat().st_mtime > STALE_UPLOAD_S:
                leftover.unlink(missing_ok=True)

    async def take_upload(self, name: str, chunks: AsyncIterator[bytes]) -> str:
        """Stream an upload to disk and return its key.

        Raises
        ------
        TooLarge
            More bytes than the limit came.
        BadInput
            The disk is full or can't be written; nothing stays behind.
        """
        key = secrets.token_urlsafe(KEY_BYTES)
        aside = self.root / "clips" / f".{key}"
        size = 0
        try:
            with aside.open("wb") as file:
                async for chunk in chunks:
                    size += len(chunk)
                    if size > self.upload_limit:
                        raise TooLarge(
                            f"The clip is over {self.upload_limit / 1e6:.0f} MB.",
                            "Needed: a smaller one.",
                            "Cut it on the phone, or measure it on the command line, which has no limit.",
                        )
                    file.write(chunk)
                file.flush()
                os.fsync(file.fileno())
            if size == 0:
                raise BadInput("The upload is empty.", "Needed: a clip.", "Choose the file again.")
            aside.rename(self.root / "clips" / f"{key}-{safe_name(name)}")
        except OSError as error:
            raise BadInput(
                f"The clip can't be stored: {error.strerror}.",
                "Needed: room on the disk.",
                "Delete old clips.",
            ) from error
        finally:
            aside.unlink(missing_ok=True)
        return key

    def clip(self, key: str) -> Path:
        """The stored clip with this key; BadInput where there is none."""
        if _KEY.fullmatch(key):
            for file in (self.root / "clips").glob(f"{key}-*"):
                return file
        raise BadInput("There is no such clip here.", "Needed: an uploaded clip.", "Drop the clip in again.")

    def result_folder(self, name: str) -> Path:
        """The result folder with this name; BadInput where there is none."""
        folder = self.root / "results" / name
        if name != safe_name(name) or not name.endswith(".swing") or not folder.is_dir():
            raise BadInput("There is no such result here.")
        return folder

    def result_file(self, name: str, file: str) -> Path:
        """A file of a result folder; BadInput for any other name."""
        path = self.result_folder(name) / file
        if not _RESULT_FILES.fullmatch(file) or not path.is_file():
            raise BadInput("There is no such file in this result.")
        return path

    def new_result_folder(self, clip: Path) -> Path:
        """A name for a new result that nothing has yet: the clip's own, with a number where it is taken."""
        stem = safe_name(clip.stem.split("-", 1)[-1] if _KEY.match(clip.name) else clip.stem)
        stem = safe_name(clip.stem[13:]) if _KEY.fullmatch(clip.name[:12]) else stem
        for number in range(1, 10_000):
            folder = self.root / "results" / (f"{stem}.swing" if number == 1 else f"{stem}-{number}.swing")
            if not folder.exists():
                return folder
        raise BadInput(
            "There are ten thousand results of this name.", "Needed: a free name.", "Rename the clip."
        )

    def delete_result(self, name: str) -> None:
        """Remove a result folder at the user's word."""
        shutil.rmtree(self.result_folder(name))

    def results(self) -> list[dict[str, Any]]:
        """Earlier results, newest first: name, time, period, moment, number of warnings."""
        import json

        listed = []
        for folder in sorted(
            (self.root / "results").glob("*.swing"), key=lambda f: f.stat().st_mtime, reverse=True
        ):
            try:
                document = json.loads((folder / "result.json").read_bytes())
                swing, inertia = document.get("swing") or {}, document.get("inertia") or {}
                entry = {
                    "name": folder.name,
                    "measured_at": folder.stat().st_mtime,
                    "period_s": swing.get("period_s"),
                    "moment_kg_m2": inertia.get("moment_kg_m2"),
                    "warnings": len(document.get("warnings", [])),
                }
            except (OSError, ValueError, AttributeError, TypeError):
                entry = {"name": folder.name, "measured_at": folder.stat().st_mtime, "unreadable": True}
            listed.append(entry)
        return listed

    def save_rig(self, name: str, text: str) -> None:
        """Keep a rig file, replacing the one of that name."""
        write_whole(self.root / "rigs" / f"{safe_name(name.removesuffix('.toml'))}.toml", text, again=True)

    def last_rig(self) -> str | None:
        """Text of the last rig used, if any."""
        file = self.root / "rigs" / "last.toml"
        return file.read_text(encoding="utf-8") if file.is_file() else None
