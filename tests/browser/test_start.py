"""The built page starts from disk, alone: from the folder, as a single file, without workers, and with nothing sent."""

from __future__ import annotations

import shutil
import socketserver
import threading
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest
from playwright.sync_api import Browser, BrowserType, Page, expect

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


@pytest.mark.parametrize("missing", ["worker", "wasm", "python"])
def test_a_missing_part_is_said(dist: Path, tmp_path: Path, page: Page, missing: str) -> None:
    copy = tmp_path / "copy"
    shutil.copytree(dist, copy)
    (copy / "engine" / f"{missing}.js").unlink()
    page.goto((copy / "index.html").as_uri())
    expect(page.locator("html")).to_have_attribute("data-engine", "failed", timeout=30_000)


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
