"""What every test finds: the built page, made anew where its sources have changed."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]


@pytest.fixture(scope="session")
def dist() -> Path:
    """The folder of the built page, as `build.py build` leaves it."""
    subprocess.run([sys.executable, ROOT / "build.py", "build"], check=True)
    return ROOT / "dist"


@pytest.fixture(scope="session")
def single_file(dist: Path) -> Path:
    """The built single file."""
    return dist.parent / "dist-single" / "wedgewright.html"
