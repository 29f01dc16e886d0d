"""The built page starts from disk, alone: from the folder, as a single file, without workers, and with nothing sent."""

from __future__ import annotations

import functools
import http.server
import re
import shutil
import socketserver
import threading
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest
from playwright.sync_api import Browser, BrowserType, Page, expect

from tests.payloads import read_payload, write_payload

# W3C Content Security Policy Level 3 and Trusted Types name these directives; what they must hold back is tried below.
POLICY = (
    "default-src 'none'; script-src 'self' 'wasm-unsafe-eval'; worker-src 'self' blob:; style-src 'self'; img-src data:; "
    "connect-src 'none'; form-action 'none'; base-uri 'none'; require-trusted-types-for 'script'; trusted-types rt"
)

Ready = Callable[[Page], None]


def test_starts_from_the_folder(page_from_disk: Page, engine_ready: Ready) -> None:
    engine_ready(page_from_disk)
    assert len(page_from_disk.workers) == 1


def test_starts_as_a_single_file(single_page: Page, engine_ready: Ready) -> None:
    engine_ready(single_page)
    assert len(single_page.workers) == 1


def test_single_file_needs_nothing_beside_it(single_file: Path, tmp_path: Path, page: Page, engine_ready: Ready) -> None:
    alone = tmp_path / "a name with spaces # and é.html"
    shutil.copy(single_file, alone)
    page.goto(alone.as_uri())
    engine_ready(page)


def test_paints_before_the_engine_is_read(page_from_disk: Page, engine_ready: Ready) -> None:
    engine_ready(page_from_disk)
    times = page_from_disk.evaluate("""() => ({
        paint: performance.getEntriesByName("first-contentful-paint")[0].startTime,
        read: performance.getEntriesByName("payload-worker")[0].startTime,
    })""")
    assert times["paint"] <= times["read"]


@pytest.mark.parametrize("form", ["folder", "single file"])
def test_starts_where_workers_are_refused(dist: Path, single_file: Path, page: Page, engine_ready: Ready, form: str) -> None:
    page.add_init_script("globalThis.Worker = class { constructor() { throw new DOMException('no', 'SecurityError'); } };")
    page.goto((single_file if form == "single file" else dist / "index.html").as_uri())
    engine_ready(page)
    assert page.workers == []


def test_a_dead_worker_is_replaced_once(dist: Path, page: Page, engine_ready: Ready) -> None:
    page.goto((dist / "index.html").as_uri())
    engine_ready(page)
    first = page.workers[0]
    first.evaluate("() => { setTimeout(() => { throw new Error('on purpose'); }); }")
    expect(page.locator("html")).to_have_attribute("data-engine", "restarted")
    engine_ready(page)
    assert page.workers != [first]
    page.workers[0].evaluate("() => { setTimeout(() => { throw new Error('on purpose'); }); }")
    expect(page.locator("html")).to_have_attribute("data-engine", "failed")


# --- the two ways to start --------------------------------------------------------------------------------------------


def copy_of(dist: Path, tmp_path: Path) -> Path:
    """A copy of the folder to be damaged."""
    return Path(shutil.copytree(dist, tmp_path / "copy"))


def how_it_started(page: Page) -> str:
    """What the bench's page says of the start."""
    page.locator("#move-bench").click()
    return page.locator("#started").inner_text()


def demonstration_drawn(page: Page) -> None:
    """The demonstration is answered and drawn."""
    page.locator("#demonstration").click()
    expect(page.locator("html")).to_have_attribute("data-drawn", re.compile("[0-9]+"), timeout=30_000)


@pytest.mark.parametrize("missing", ["worker", "wasm"])
def test_a_missing_part_is_said(dist: Path, tmp_path: Path, page: Page, missing: str) -> None:
    copy = copy_of(dist, tmp_path)
    (copy / "engine" / f"{missing}.js").unlink()
    page.goto((copy / "index.html").as_uri())
    expect(page.locator("html")).to_have_attribute("data-engine", "failed", timeout=30_000)


def test_starts_from_the_kept_memory(dist: Path, tmp_path: Path, page: Page, engine_ready: Ready) -> None:
    copy = copy_of(dist, tmp_path)
    (copy / "engine" / "python.js").unlink()  # so the library is not even looked at
    page.goto((copy / "index.html").as_uri())
    engine_ready(page)
    demonstration_drawn(page)
    assert how_it_started(page) == "Started from the memory kept in the program."
    assert page.locator(".statuses .engine").inner_text() == ""


def of_another_build(file: Path) -> None:
    """The memory of a Pyodide whose build has another name (words 4 to 11 of the head)."""
    memory = bytearray(read_payload(file))
    memory[16:48] = bytes(reversed(memory[16:48]))
    write_payload(file, bytes(memory))


DAMAGES: dict[str, Callable[[Path], object]] = {
    "missing": Path.unlink,
    "cut short": lambda file: file.write_bytes(file.read_bytes()[: file.stat().st_size // 4 * 2]),
    "of another build": of_another_build,
    "of another program": lambda file: write_payload(file, read_payload(file), "01234567"),
    "something else": lambda file: write_payload(file, b"PK" + bytes(100_000)),
}


@pytest.mark.parametrize("damage", DAMAGES)
def test_a_damaged_memory_is_replaced_by_the_library(
    dist: Path, tmp_path: Path, page: Page, engine_ready: Ready, damage: str
) -> None:
    copy = copy_of(dist, tmp_path)
    DAMAGES[damage](copy / "engine" / "snapshot.js")
    page.goto((copy / "index.html").as_uri())
    engine_ready(page)
    demonstration_drawn(page)
    assert "did not start" in how_it_started(page)
    assert "did not start" in page.locator(".statuses .engine").inner_text()


@pytest.mark.parametrize("form", ["folder", "single file"])
def test_starts_from_the_library_when_asked(dist: Path, single_file: Path, page: Page, engine_ready: Ready, form: str) -> None:
    page.goto(f"{(single_file if form == 'single file' else dist / 'index.html').as_uri()}#library")
    engine_ready(page)
    demonstration_drawn(page)
    assert "as the page’s address asks" in how_it_started(page)


class SayingCharset(http.server.SimpleHTTPRequestHandler):
    """A server that names one character set for every file."""

    charset = ""

    def guess_type(self, path: Any) -> str:
        """The type, with a character set that is not the file's."""
        return f"{super().guess_type(path)}; charset={self.charset}"

    def log_message(self, format: str, *arguments: object) -> None:
        """Say nothing."""


@pytest.mark.parametrize("charset", ["utf-8", "windows-1252"])
def test_a_server_may_name_another_character_set(dist: Path, page: Page, engine_ready: Ready, charset: str) -> None:
    """The first bytes of a payload's file are heeded before a server's word (WHATWG Encoding Standard, "decode")."""
    handler = functools.partial(type("Handler", (SayingCharset,), {"charset": charset}), directory=str(dist))
    with http.server.ThreadingHTTPServer(("127.0.0.1", 0), handler) as server:
        threading.Thread(target=server.serve_forever, daemon=True).start()
        page.goto(f"http://127.0.0.1:{server.server_port}/index.html")
        engine_ready(page)
        assert how_it_started(page) == "Started from the memory kept in the program."
        server.shutdown()


# --- the policy ------------------------------------------------------------------------------------------------------


def test_the_policy_stands_in_the_page(page_from_disk: Page) -> None:
    assert page_from_disk.locator('meta[http-equiv="Content-Security-Policy"]').get_attribute("content") == POLICY


@pytest.mark.parametrize(
    "attempt", ["trustedTypes.createPolicy('other', {})", "new Function('1')", "document.body.innerHTML = '<b>x</b>'"]
)
def test_text_never_becomes_code(dist: Path, page: Page, attempt: str) -> None:
    page.goto((dist / "index.html").as_uri())
    # In a task of its own: what a test evaluates at once stands outside the policy.
    tried = f"try {{ {attempt}; done('done'); }} catch (error) {{ done(error.name); }}"
    assert page.evaluate(f"() => new Promise((done) => setTimeout(() => {{ {tried} }}))") in ("TypeError", "EvalError")


def test_peer_connections_are_gone(page_from_disk: Page) -> None:
    assert page_from_disk.evaluate("() => typeof RTCPeerConnection") == "undefined"


# --- silence ---------------------------------------------------------------------------------------------------------

# Each way by which a page can send something, by name; the control page shows that the listener hears it.
WAYS = {
    "fetch": "fetch(url, {mode: 'no-cors'})",
    "xhr": "const request = new XMLHttpRequest(); request.open('GET', url); request.send()",
    "beacon": "navigator.sendBeacon(url, 'x')",
    "websocket": "new WebSocket(url.replace('http', 'ws'))",
    "events": "new EventSource(url)",
    "image": "new Image().src = url",
    "style": "make('link', {rel: 'stylesheet', href: url})",
    "script": "make('script', {src: url})",
    "prefetch": "make('link', {rel: 'prefetch', href: url})",
    "frame": "make('iframe', {src: url})",
    "video": "make('video', {src: url})",
    "font": "new FontFace('x', `url(${url})`).load()",
    "form": "make('iframe', {name: 'into'}); make('form', {action: url, target: 'into'}).submit()",
}
MAKE = "const make = (tag, given) => document.body.appendChild(Object.assign(document.createElement(tag), given))"
WORKER_WAYS = {name: WAYS[name] for name in ("fetch", "xhr", "websocket", "events")} | {"import": "importScripts(url)"}


class Listener:
    """A socket that notes the first line of whatever it is sent, on every port's behalf: names are mapped to it."""

    def __init__(self) -> None:
        self.heard: list[str] = []
        listener = self

        class Handler(socketserver.StreamRequestHandler):
            def handle(self) -> None:
                listener.heard.append(self.rfile.readline(2000).decode("latin-1").strip() or "a connection")
                self.wfile.write(b"HTTP/1.1 404 Not Found\r\nContent-Length: 0\r\nConnection: close\r\n\r\n")

        self.server = socketserver.ThreadingTCPServer(("127.0.0.1", 0), Handler)
        self.server.daemon_threads = True
        self.port: int = self.server.server_address[1]
        threading.Thread(target=self.server.serve_forever, daemon=True).start()

    def names(self) -> set[str]:
        """The names of the ways that were heard."""
        return {line.split(" ")[1].lstrip("/").rstrip("?") for line in self.heard if " " in line}


@pytest.fixture
def listener() -> Iterator[Listener]:
    listener = Listener()
    yield listener
    listener.server.shutdown()
    listener.server.server_close()


@pytest.fixture
def mapped_browser(browser_type: BrowserType, browser_type_launch_args: dict[str, Any], listener: Listener) -> Iterator[Browser]:
    """A browser for which every host of the world is the listener, save two that the browser itself calls at its start."""
    own = "MAP update.googleapis.com ~NOTFOUND, MAP accounts.google.com ~NOTFOUND"
    flags = [*browser_type_launch_args["args"], f"--host-resolver-rules={own}, MAP * 127.0.0.1:{listener.port}"]
    browser = browser_type.launch(**{**browser_type_launch_args, "args": flags})
    yield browser
    browser.close()


def try_all(target: Any, ways: dict[str, str], host: str = "http://listener.invalid") -> None:
    """Try every way in a page or a worker; whether it is refused at once or later does not matter here."""
    for name, code in ways.items():
        target.evaluate(f"() => setTimeout(() => {{ {MAKE}; const url = '{host}/{name}'; try {{ {code}; }} catch {{}} }})")


def test_nothing_is_sent(
    mapped_browser: Browser, listener: Listener, dist: Path, single_file: Path, tmp_path: Path, engine_ready: Ready
) -> None:
    control = tmp_path / "control.html"
    control.write_text(
        "<!doctype html><title>control</title><body><script>new Worker(URL.createObjectURL(new Blob([''])))</script></body>"
    )
    pages = {}
    for name, path in {"control": control, "folder": dist / "index.html", "single": single_file}.items():
        page = mapped_browser.new_context().new_page()
        page.goto(path.as_uri())
        if name != "control":
            engine_ready(page)
        worker = page.workers[0] if page.workers else page.wait_for_event("worker")
        pages[name] = (page, worker)

    for name in ("folder", "single"):
        page, worker = pages[name]
        try_all(page, WAYS)
        try_all(worker, WORKER_WAYS)
        page.wait_for_timeout(1000)
    assert listener.heard == []

    page, worker = pages["control"]
    try_all(page, WAYS)
    try_all(worker, {f"worker-{name}": code for name, code in WORKER_WAYS.items()})
    wanted = {*WAYS, *(f"worker-{name}" for name in WORKER_WAYS)}
    for _ in range(50):
        if listener.names() >= wanted:
            break
        page.wait_for_timeout(100)
    assert listener.names() >= wanted
