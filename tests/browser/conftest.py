"""The page in Debian's Chromium, opened from disk."""

from __future__ import annotations

import importlib.util
from collections.abc import Callable, Iterator
from pathlib import Path
from types import ModuleType
from typing import Any

import pytest
from playwright.sync_api import Page, expect

RESULTS = Path(__file__).resolve().parents[2] / "test-results"


def debian_chromium() -> ModuleType:
    """The module `chromium.py` beside this file."""
    specification = importlib.util.spec_from_file_location("chromium", Path(__file__).with_name("chromium.py"))
    assert specification is not None
    assert specification.loader is not None
    module = importlib.util.module_from_spec(specification)
    specification.loader.exec_module(module)
    return module


@pytest.fixture(scope="session")
def browser_type_launch_args(browser_type_launch_args: dict[str, Any]) -> dict[str, Any]:
    """Debian's Chromium in place of a browser that the library would fetch."""
    chromium = debian_chromium()
    program = chromium.find()
    if program is None:
        pytest.fail("There is no browser on this machine: `python3 build.py test` says why none could be installed.")
    return {**browser_type_launch_args, "executable_path": str(program), "args": chromium.FLAGS}


@pytest.fixture
def watched() -> Iterator[Callable[[Page], Page]]:
    """A function that makes the test fail for any error which a page reports."""
    errors: list[str] = []

    def watch(page: Page) -> Page:
        page.on("pageerror", lambda error: errors.append(str(error)))
        page.on("console", lambda message: errors.append(message.text) if message.type == "error" else None)
        return page

    yield watch
    assert errors == []


@pytest.fixture
def page_from_disk(dist: Path, page: Page, watched: Callable[[Page], Page]) -> Page:
    """The built page, opened from disk."""
    watched(page).goto((dist / "index.html").as_uri())
    return page


@pytest.fixture
def single_page(single_file: Path, page: Page, watched: Callable[[Page], Page]) -> Page:
    """The built single file, opened from disk."""
    watched(page).goto(single_file.as_uri())
    return page


@pytest.fixture(scope="session")
def engine_ready() -> Callable[[Page], None]:
    """A function that waits until a page's engine can answer."""

    def wait(page: Page) -> None:
        expect(page.locator("html")).to_have_attribute("data-engine", "ready", timeout=60_000)

    return wait


@pytest.fixture(scope="session")
def screenshot() -> Callable[[Page, str], None]:
    """A function that keeps a picture of a page in `test-results`, where a person can look at it."""

    def keep(page: Page, name: str) -> None:
        page.screenshot(path=RESULTS / f"{name}.png")

    return keep
