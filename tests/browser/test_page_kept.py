"""What is shown as saved outlives a kill of the browser; stored data can be erased; two windows do not fight."""

from __future__ import annotations

import contextlib
import os
import re
import shutil
import signal
import time
from pathlib import Path
from typing import Any

from playwright.sync_api import BrowserType, Page, expect


def processes_of(profile: Path) -> list[int]:
    """The processes of the browser that this test started, known by the profile on their command line."""
    mark = f"--user-data-dir={profile}".encode()
    found = []
    for entry in Path("/proc").iterdir():
        try:
            if entry.name.isdigit() and mark in (entry / "cmdline").read_bytes():
                found.append(int(entry.name))
        except OSError:
            continue  # it ended meanwhile
    return found


def kill_browser(profile: Path) -> None:
    """End them with the harshest signal, in no order, and wait until they are gone."""
    started = processes_of(profile)
    assert started, "there is no browser to kill"
    for identifier in started:
        with contextlib.suppress(ProcessLookupError):
            os.kill(identifier, signal.SIGKILL)
    deadline = time.monotonic() + 20
    while processes_of(profile) and time.monotonic() < deadline:
        time.sleep(0.05)
    for lock in profile.glob("Singleton*"):
        lock.unlink(missing_ok=True)


def open_profile(browser_type: BrowserType, arguments: dict[str, Any], profile: Path, dist: Path) -> Page:
    context = browser_type.launch_persistent_context(profile, **arguments)
    page = context.pages[0] if context.pages else context.new_page()
    page.goto((dist / "index.html").as_uri())
    return page


def test_what_was_saved_outlives_a_kill(
    browser_type: BrowserType, browser_type_launch_args: dict[str, Any], tmp_path: Path, dist: Path
) -> None:
    # 200 kills in a row: `KILLS=200 python3 -m pytest tests/browser/test_page_kept.py`, as DEVELOPERS.md says.
    profile = tmp_path / "profile"
    last, kills = "", int(os.environ.get("KILLS", "4"))
    for turn in range(kills):
        page = open_profile(browser_type, browser_type_launch_args, profile, dist)
        if last:
            expect(page.locator("#f-id")).to_have_value(last)
            expect(page.locator(".save")).to_have_text("taken up where it was left")
        last = f"T-{turn}-{'x' * (turn % 9)}"
        page.locator("#f-id").fill("")
        page.locator("#f-id").press_sequentially(last)
        page.locator("#f-left-sphere").fill(f"-{turn % 20}.25")
        expect(page.locator(".save")).to_have_text("saved")
        kill_browser(profile)
    page = open_profile(browser_type, browser_type_launch_args, profile, dist)
    expect(page.locator("#f-id")).to_have_value(last)
    expect(page.locator("#f-left-sphere")).to_have_value(f"-{(kills - 1) % 20}.25")
    page.context.close()


def test_stored_data_is_erased_on_request(page_from_disk: Page) -> None:
    page = page_from_disk
    page.locator("#f-id").fill("T-1")
    expect(page.locator(".save")).to_have_text("saved")
    page.locator("#move-bench").click()
    page.locator("#erase").click()
    expect(page.locator("#erase-yes")).to_be_visible()
    page.locator("#erase-yes").click()
    expect(page.locator("#f-id")).to_have_value("")
    page.reload()
    expect(page.locator(".save")).not_to_have_text("")
    expect(page.locator("#f-id")).to_have_value("")
    assert page.evaluate("localStorage.length") == 0


def test_a_second_window_says_that_it_does_not_save(page_from_disk: Page, dist: Path) -> None:
    expect(page_from_disk.locator(".save")).to_have_text("saved")
    second = page_from_disk.context.new_page()
    second.goto((dist / "index.html").as_uri())
    expect(second.locator(".save")).to_have_text(re.compile("another window"))
    second.locator("#f-id").fill("T-2")
    expect(second.locator(".save")).to_have_text(re.compile("another window"))
    page_from_disk.locator("#f-id").fill("T-1")
    expect(page_from_disk.locator(".save")).to_have_text("saved")


def test_where_storage_is_refused_it_is_said_and_the_page_works(dist: Path, page: Page) -> None:
    page.add_init_script(
        "Object.defineProperty(globalThis, 'indexedDB', { get() { throw new DOMException('no', 'SecurityError'); } });"
    )
    page.goto((dist / "index.html").as_uri())
    expect(page.locator(".save")).to_contain_text("not saved")
    page.locator("#f-line").fill("R -1.00 L -1.00")
    expect(page.locator(".line-echo .understood").first).to_be_visible(timeout=60_000)


def test_replacing_the_folder_keeps_the_data(page_from_disk: Page, dist: Path, tmp_path: Path) -> None:
    page_from_disk.locator("#f-id").fill("T-1")
    expect(page_from_disk.locator(".save")).to_have_text("saved")
    context = page_from_disk.context
    page_from_disk.close()
    shutil.copytree(dist, tmp_path / "a newer folder")
    page = context.new_page()
    page.goto((tmp_path / "a newer folder" / "index.html").as_uri())
    expect(page.locator(".save")).to_have_text("taken up where it was left")
    expect(page.locator("#f-id")).to_have_value("T-1")


# What a newer program may leave: the same data, one version further, with a store of which this one knows nothing.
LEAVE_NEWER = """() => new Promise((done) => {
    indexedDB.open("wedgewright").onsuccess = ({target: {result: now}}) => {
        now.close();
        const request = indexedDB.open("wedgewright", now.version + 1);
        request.onupgradeneeded = () => request.result.createObjectStore("later");
        request.onsuccess = () => { request.result.close(); done(); };
    };
})"""
# Everything that is kept, as text.
EVERYTHING = """() => new Promise((done) => {
    const request = indexedDB.open("wedgewright");
    request.onsuccess = async () => {
        const database = request.result, found = {version: database.version};
        for (const name of database.objectStoreNames) {
            const place = database.transaction(name).objectStore(name);
            found[name] = await new Promise((resolve) => { place.getAll().onsuccess = ({target}) => resolve(target.result); });
        }
        database.close();
        done(JSON.stringify(found));
    };
})"""


def test_what_a_newer_program_keeps_is_shown_and_left_alone(page_from_disk: Page, dist: Path, tmp_path: Path) -> None:
    page_from_disk.locator("#f-id").fill("T-1")
    expect(page_from_disk.locator(".save")).to_have_text("saved")
    context = page_from_disk.context
    page_from_disk.close()
    empty = tmp_path / "empty.html"
    empty.write_text("<!doctype html><title>empty</title>")
    outside = context.new_page()
    outside.goto(empty.as_uri())
    outside.evaluate(LEAVE_NEWER)
    before = outside.evaluate(EVERYTHING)
    assert '"later":[]' in before
    assert "T-1" in before

    page = context.new_page()
    page.goto((dist / "index.html").as_uri())
    expect(page.locator("#f-id")).to_have_value("T-1")
    expect(page.locator(".save")).to_contain_text("of a newer version")
    page.locator("#f-id").fill("T-2")
    page.get_by_role("button", name="Load the demonstration job").first.click()
    expect(page.locator("#strip")).to_contain_text("Within", timeout=60_000)
    page.locator("#move-decide").click()
    page.locator("#f-initials").fill("XY")
    page.locator("#sign").click()
    expect(page.get_by_text("Signed XY")).to_be_visible()
    expect(page.locator(".save")).to_contain_text("of a newer version")
    page.wait_for_timeout(500)  # more than any pause before a change is saved
    assert outside.evaluate(EVERYTHING) == before
