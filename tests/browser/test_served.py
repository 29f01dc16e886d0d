"""The same folder on a server of one's own: kept by the service worker, renewed when a person says so, and open when the server is gone."""

from __future__ import annotations

import contextlib
import hashlib
import http.server
import re
import shutil
import threading
import time
from collections.abc import Callable, Iterator
from http import HTTPStatus
from pathlib import Path

import pytest
from playwright.sync_api import Page, expect

Ready = Callable[[Page], None]

class Server:
    """A server of one folder on this machine alone, whose types and whose end are in the test's hands."""

    def __init__(self, folder: Path) -> None:
        self.folder = folder
        self.asked: list[str] = []
        self.types: dict[str, str] = {}
        self.gone = False
        server = self

        class Handler(http.server.SimpleHTTPRequestHandler):
            def __init__(self, *arguments: object, **named: object) -> None:
                super().__init__(*arguments, directory=str(server.folder), **named)  # type: ignore[arg-type]

            def guess_type(self, path: str) -> str:  # type: ignore[override]
                return server.types.get(Path(path).suffix) or super().guess_type(path)

            def end_headers(self) -> None:
                self.send_header("X-Content-Type-Options", "nosniff")
                super().end_headers()

            def log_request(self, code: int | str = "-", _size: int | str = "-") -> None:
                status = code.value if isinstance(code, HTTPStatus) else code
                server.asked.append(f"{self.command} {self.path} {status}")

        self.http = http.server.ThreadingHTTPServer(("127.0.0.1", 0), Handler)
        self.http.daemon_threads = True
        self.url = f"http://127.0.0.1:{self.http.server_address[1]}/"
        self.thread = threading.Thread(target=self.http.serve_forever, daemon=True)
        self.thread.start()

    @contextlib.contextmanager
    def answered(self, path: str) -> Iterator[None]:
        """Wait at the end of the block until this path has been asked for in it."""
        before = len(self.asked)
        yield
        deadline = time.monotonic() + 60
        while not any(line.split(" ")[1] == path for line in self.asked[before:]):
            assert time.monotonic() < deadline, f"{path} was not asked for"
            time.sleep(0.05)

    def end(self) -> None:
        """Close the socket: whoever asks is refused from then on."""
        if not self.gone:
            self.gone = True
            self.http.shutdown()
            self.http.server_close()


@pytest.fixture
def served(dist: Path, tmp_path: Path) -> Iterator[Server]:
    """A copy of the built folder, on a server."""
    shutil.copytree(dist, tmp_path / "served")
    server = Server(tmp_path / "served")
    yield server
    server.end()


def open_kept(page: Page, server: Server, engine_ready: Ready) -> None:
    """Open the served page and wait until the service worker has kept it."""
    page.goto(server.url)
    engine_ready(page)
    expect(page.locator("#served")).to_contain_text("without its server", timeout=30_000, use_inner_text=False)


def wait_for_offer(page: Page) -> None:
    """Wait until the page says that another version is there: its files have all been fetched then."""
    expect(page.locator("#offer")).to_be_visible(timeout=60_000)


def renew(server: Server, words: str) -> None:
    """Put another build into the server's folder: the page's title and the service worker's list differ."""
    index = server.folder / "index.html"
    index.write_text(re.sub("<title>.*</title>", f"<title>{words}</title>", index.read_text("utf-8")), "utf-8")
    worker = server.folder / "sw.js"
    text = worker.read_text("utf-8")
    digest = hashlib.sha256(index.read_bytes()).hexdigest()
    text = re.sub(r'("index\.html": ")[0-9a-f]{64}', rf"\g<1>{digest}", text)
    text = re.sub(r'(\bid: ")[0-9a-f]{64}', rf"\g<1>{digest}", text)
    worker.write_text(text, "utf-8")


def demonstrate(page: Page) -> None:
    """Load the demonstration and wait for its verdict."""
    page.get_by_role("button", name="Load the demonstration job").first.click()
    expect(page.locator("#strip")).to_contain_text("Within")


def test_the_page_opens_and_answers_when_its_server_is_gone(
    served: Server, page: Page, watched: Callable[[Page], Page], engine_ready: Ready
) -> None:
    open_kept(watched(page), served, engine_ready)
    served.end()
    page.reload()
    engine_ready(page)
    demonstrate(page)


def test_nothing_is_asked_of_the_server_but_its_own_files(served: Server, page: Page, engine_ready: Ready) -> None:
    open_kept(page, served, engine_ready)
    demonstrate(page)
    files = {f"/{path.relative_to(served.folder).as_posix()}" for path in served.folder.rglob("*") if path.is_file()}
    asked = {tuple(line.split(" ")[:2]) for line in served.asked}
    assert asked <= {("GET", name) for name in {"/", *files}}
    assert ("GET", "/sw.js") in asked
    expect(page.locator(".save")).to_have_text("saved")  # so that it is there again after the page is opened anew
    before = len(served.asked)
    page.reload()
    engine_ready(page)
    expect(page.locator("#strip")).to_contain_text("Within")
    # Once it is kept, only whether there is another version.
    assert {line.split(" ")[1] for line in served.asked[before:]} <= {"/sw.js"}


def test_another_version_is_taken_when_a_person_says_so(served: Server, page: Page, engine_ready: Ready) -> None:
    open_kept(page, served, engine_ready)
    renew(served, "Renewed")
    page.reload()
    engine_ready(page)
    expect(page).to_have_title("Wedgewright")
    wait_for_offer(page)
    take = page.locator("#take-version")
    expect(take).to_be_enabled()

    page.locator("#f-right-sphere").fill("-1.00")
    expect(take).to_be_disabled()
    expect(page.locator("#offer")).to_contain_text("until this job is signed")
    page.locator("#f-right-sphere").fill("")
    expect(take).to_be_enabled()

    page.locator("#f-id").fill("T-7")
    expect(page.locator(".save")).to_have_text("saved")
    take.click()
    expect(page).to_have_title("Renewed")
    expect(page.locator("#f-id")).to_have_value("T-7")
    expect(page.locator("#offer")).to_be_hidden()
    served.end()
    page.reload()
    expect(page).to_have_title("Renewed")


def test_another_version_does_not_come_by_itself(served: Server, page: Page, engine_ready: Ready) -> None:
    """Neither when every window is closed and opened again, nor while another window may be in the middle of a job."""
    open_kept(page, served, engine_ready)
    renew(served, "Renewed")
    page.reload()
    wait_for_offer(page)
    context = page.context
    page.close()
    first = context.new_page()
    first.goto(served.url)
    expect(first).to_have_title("Wedgewright")
    second = context.new_page()
    second.goto(served.url)
    expect(second).to_have_title("Wedgewright")
    wait_for_offer(second)
    expect(second.locator("#offer")).to_contain_text("other windows")
    expect(second.locator("#take-version")).to_be_disabled()
    first.close()
    second.evaluate("document.dispatchEvent(new Event('visibilitychange'))")
    second.locator("#take-version").click()
    expect(second).to_have_title("Renewed")
    names = second.evaluate("caches.keys()")
    assert len(names) == 2  # the build in use, and which one that is


def test_a_folder_that_is_half_replaced_is_not_kept(served: Server, dist: Path, page: Page, engine_ready: Ready) -> None:
    open_kept(page, served, engine_ready)
    renew(served, "Renewed")
    renewed = (served.folder / "index.html").read_bytes()
    shutil.copy(dist / "index.html", served.folder)
    with served.answered("/index.html"):
        page.reload()
    engine_ready(page)
    page.wait_for_timeout(500)
    expect(page.locator("#offer")).to_be_hidden()
    (served.folder / "index.html").write_bytes(renewed)
    page.reload()
    wait_for_offer(page)


def test_two_folders_of_one_server_do_not_mix(served: Server, dist: Path, page: Page, engine_ready: Ready) -> None:
    shutil.copytree(dist, served.folder / "older")
    open_kept(page, served, engine_ready)
    root, served.folder = served.folder, served.folder / "older"
    renew(served, "Older")
    served.folder = root
    page.goto(f"{served.url}older/index.html")
    expect(page).to_have_title("Older")
    engine_ready(page)
    expect(page.locator("#served")).to_contain_text("without its server", timeout=30_000, use_inner_text=False)
    served.end()
    for address, title in {served.url: "Wedgewright", f"{served.url}older/": "Older"}.items():
        page.goto(address)
        expect(page).to_have_title(title)


@pytest.mark.parametrize("wrong", ["application/octet-stream", "text/plain"])
def test_wrong_types_for_all_but_scripts_do_no_harm(served: Server, page: Page, engine_ready: Ready, wrong: str) -> None:
    """The document itself aside, which a browser would save or show as text; once kept, it may be wrong as well."""
    served.types = {".css": wrong, ".json": wrong, ".txt": wrong}
    open_kept(page, served, engine_ready)
    card = page.locator(".card").first
    styled = "node => getComputedStyle(node).borderTopStyle"
    assert card.evaluate(styled) == "solid"
    page.emulate_media(media="print")
    expect(page.locator("#top")).to_be_hidden()
    page.emulate_media(media="screen")
    served.types[".html"] = wrong
    page.reload()
    engine_ready(page)
    assert page.locator(".card").first.evaluate(styled) == "solid"
    assert page.evaluate("document.adoptedStyleSheets.length") == 0


def test_the_browser_would_install_it(served: Server, page: Page, engine_ready: Ready) -> None:
    """By Chromium's own judgement, from the page made for it; the bench's page keeps its policy and loads no description."""
    served.types = {".json": "application/octet-stream"}
    open_kept(page, served, engine_ready)
    page.locator("#move-bench").click()
    page.locator("#served a").click()
    expect(page.get_by_role("heading")).to_have_text(["Wedgewright einrichten", "Install Wedgewright"])
    devtools = page.context.new_cdp_session(page)
    manifest = devtools.send("Page.getAppManifest")
    assert manifest["errors"] == []
    assert manifest["url"].endswith("install.json")
    found = devtools.send("Page.getInstallabilityErrors")["installabilityErrors"]
    assert [error["errorId"] for error in found] in ([], ["in-incognito"])
