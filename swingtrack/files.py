"""Files written whole or not at all, and never over something that was not asked to be replaced."""

from __future__ import annotations

import os
import shutil
import tempfile
from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from pathlib import Path

from .errors import BadInput, WouldOverwrite


def write_whole(file: str | Path, content: bytes | str, *, again: bool = False) -> Path:
    """Write a file so that a reader sees all of it or nothing, whatever interrupts the writing.

    Raises
    ------
    WouldOverwrite
        The file exists and `again` is False.
    BadInput
        The folder can't be written or the disk is full; nothing half-written stays behind.
    """
    path = Path(file)
    data = content.encode() if isinstance(content, str) else content
    if path.exists() and not again:
        raise _exists(path)
    with _told_plainly(path):
        handle, temporary = tempfile.mkstemp(dir=path.parent or ".", prefix=f".{path.name[:40]}.")
        try:
            with os.fdopen(handle, "wb") as stream:
                stream.write(data)
                stream.flush()
                os.fsync(stream.fileno())
            os.chmod(temporary, 0o666 & ~_umask())
            os.replace(temporary, path)
        except BaseException:
            Path(temporary).unlink(missing_ok=True)
            raise
    return path


@contextmanager
def whole_folder(folder: str | Path, *, again: bool = False) -> Iterator[Path]:
    """Fill a folder aside and put it in place when it is complete.

    Yields a temporary folder beside the wanted one. When the block ends well it takes the wanted name; when
    it ends by any exception (an interrupt included) it is removed and what was there before stays as it was.

    Raises
    ------
    WouldOverwrite
        The folder exists and `again` is False.
    """
    path = Path(folder)
    if path.exists() and not again:
        raise _exists(path)
    with _told_plainly(path):
        path.parent.mkdir(parents=True, exist_ok=True)
        aside = Path(tempfile.mkdtemp(dir=path.parent, prefix=f".{path.name[:40]}."))
        try:
            os.chmod(aside, 0o777 & ~_umask())
            yield aside
            if path.exists():
                if not again:  # somebody else finished the same result meanwhile
                    raise _exists(path)
                old = Path(tempfile.mkdtemp(dir=path.parent, prefix=f".{path.name[:40]}.old."))
                os.replace(path, old / path.name)
                os.replace(aside, path)
                shutil.rmtree(old, ignore_errors=True)
            else:
                os.replace(aside, path)
        except BaseException:
            shutil.rmtree(aside, ignore_errors=True)
            raise


def fill_folder(folder: str | Path, contents: Mapping[str, bytes | str], *, again: bool = False) -> Path:
    """Write several files as one folder, whole or not at all."""
    with whole_folder(folder, again=again) as aside:
        for name, content in contents.items():
            write_whole(aside / name, content)
    return Path(folder)


def _exists(path: Path) -> WouldOverwrite:
    return WouldOverwrite(
        f"{path} exists already.",
        "Nothing was overwritten.",
        "Add --again to replace it, or --out for another place.",
    )


@contextmanager
def _told_plainly(path: Path) -> Iterator[None]:
    """Turn the system's refusals (read-only, full, not a folder) into one message."""
    try:
        yield
    except OSError as error:
        reason = error.strerror or str(error)
        raise BadInput(
            f"{path} can't be written: {reason}.",
            "Needed: a folder with room that may be written.",
            "Try --out DIR.",
        ) from error


def _umask() -> int:
    """The process's umask; reading it means setting it, so it is put back at once."""
    mask = os.umask(0)
    os.umask(mask)
    return mask
