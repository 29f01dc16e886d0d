"""What every test finds: the built page, made anew where its sources have changed."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """Mark as `traced` what shows that every branch of the core is reached; the slow would be several times slower so."""
    for item in items:
        where = item.path.relative_to(ROOT).parts[:2]
        if (where[0] == "pycore" or where in {("tests", "core"), ("tests", "door")}) and not item.get_closest_marker("slow"):
            item.add_marker("traced")


@pytest.fixture(scope="session")
def dist() -> Path:
    """The folder of the built page, as `build.py build` leaves it."""
    subprocess.run([sys.executable, ROOT / "build.py", "build"], check=True)
    return ROOT / "dist"


@pytest.fixture(scope="session")
def single_file(dist: Path) -> Path:
    """The built single file."""
    return dist.parent / "dist-single" / "wedgewright.html"
