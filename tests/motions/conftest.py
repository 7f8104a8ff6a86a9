"""Recorded motions, which are not part of the project."""

from pathlib import Path

import pytest

FOLDER = Path(__file__).parents[3] / "shared" / "data"


@pytest.fixture
def records() -> Path:
    """The folder of recorded motions beside the project; the test is skipped where it is absent."""
    if not FOLDER.is_dir():
        pytest.skip(f"recorded motions are not there: {FOLDER}")
    return FOLDER
