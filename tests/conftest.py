"""Fixtures shared by all tests."""

from __future__ import annotations

import os

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")  # before numpy is loaded, as the command line does

from pathlib import Path

import pytest

REPOSITORY = Path(__file__).resolve().parents[1]


@pytest.fixture(scope="session")
def real_data() -> Path:
    """Folder of real clips and series from elsewhere, which are not part of the repository."""
    folder = Path(os.environ.get("SWINGTRACK_DATA", REPOSITORY.parent / "shared" / "data"))
    if not folder.is_dir():
        pytest.skip("no folder of real data: set SWINGTRACK_DATA to it")
    return folder
