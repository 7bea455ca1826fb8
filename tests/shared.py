"""Open data beside the project: tests that need it are skipped where it is not."""

import os
from pathlib import Path

import pytest

_ROOT = Path(__file__).parents[1]


def shared_file(*parts: str) -> Path:
    """Return a file of the shared folder, or skip the test."""
    folder = Path(os.environ.get("BASINHEAT_SHARED") or _ROOT.parent / "shared")
    path = folder.joinpath(*parts)
    if not path.exists():
        pytest.skip(f"open data {'/'.join(parts)} is not at hand (BASINHEAT_SHARED)")
    return path
