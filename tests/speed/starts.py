"""How long the page takes to its first answer, in parts of a plain start, and where that time goes.

Each start is in a fresh browser context, the kinds in turns. A plain start is the same Pyodide package, stock, over http
from this machine, on the page's own thread, importing the same core from its sources. The page's time runs until the
demonstration's report is drawn; the plain start's only until the core can be asked.
"""

from __future__ import annotations

import functools
import http.server
import io
import os
import re
import statistics
import threading
import zipfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from playwright.sync_api import Browser, BrowserType, Page, expect

ROOT = Path(__file__).resolve().parents[2]
FOLDER = (ROOT / "dist" / "index.html").as_uri()
SINGLE = (ROOT / "dist-single" / "wedgewright.html").as_uri()
PLAIN = "plain"
KINDS = {
    "folder, kept memory": (FOLDER, 0.36),
    "folder, library": (f"{FOLDER}#library", 0.55),
    "single file, kept memory": (SINGLE, 0.40),
}
STALL_MS = 60
STARTS = 11
FEWER = 5  # where the machine is made slow

PLAIN_PAGE = """<!doctype html><title>plain</title><script src="pyodide/pyodide.js"></script><script>
(async () => {
  const pyodide = await loadPyodide({ indexURL: "pyodide/" });
  const answer = await fetch("core.zip");
  pyodide.unpackArchive(await answer.arrayBuffer(), "zip");
  pyodide.pyimport("pycore.api");
  document.title = String(performance.now());
})();
</script>"""
MARKS = """() => Object.fromEntries(performance.getEntries()
  .filter(({ entryType }) => entryType === "mark" || entryType === "paint")
  .reverse().map(({ name, startTime }) => [name, startTime]))"""
# Between two turns of a timer nothing else may have held the thread: what is longer than a turn is a stall.
WATCH_STALLS = """
globalThis.longestStall = 0;
const { port1, port2 } = new MessageChannel();
let last = performance.now();
port1.onmessage = () => {
  const now = performance.now();
  if (performance.getEntriesByName("payload-worker").length > 0) longestStall = Math.max(longestStall, now - last);
  last = now;
  if (performance.getEntriesByName("engine-core-ready").length === 0) setTimeout(() => port2.postMessage(null), 1);
};
port2.postMessage(null);
"""


class QuietHandler(http.server.SimpleHTTPRequestHandler):
    """Serves without a line for each request."""

    def log_message(self, format: str, *arguments: object) -> None:
        """Say nothing."""


@contextmanager
def plain_site(folder: Path) -> Iterator[str]:
    """The address of a site that starts a stock Pyodide with the core's sources."""
    (folder / "index.html").write_text(PLAIN_PAGE)
    (folder / "pyodide").symlink_to(ROOT / "web" / "node_modules" / "pyodide")
    buffer = io.BytesIO()
    with zipfile.ZipFile(buffer, "w", zipfile.ZIP_DEFLATED) as archive:
        for path in sorted((ROOT / "pycore").rglob("*")):
            if path.is_file() and "__pycache__" not in path.parts:
                archive.write(path, path.relative_to(ROOT))
    (folder / "core.zip").write_bytes(buffer.getvalue())
    handler = functools.partial(QuietHandler, directory=str(folder))
    server = http.server.ThreadingHTTPServer(("127.0.0.1", 0), handler)
    threading.Thread(target=server.serve_forever, daemon=True).start()
    yield f"http://127.0.0.1:{server.server_port}/index.html"
    server.shutdown()


def plain_start(page: Page, address: str) -> float:
    """Milliseconds until a stock Pyodide has imported the core."""
    page.goto(address)
    page.wait_for_function("document.title !== 'plain'", timeout=120_000)
    return float(page.title())


def our_start(page: Page, address: str) -> float:
    """Milliseconds until our page has drawn the first report, the demonstration being asked for as soon as there is a page."""
    page.goto(address, wait_until="commit")
    page.locator("#demonstration").click()
    expect(page.locator("html")).to_have_attribute("data-drawn", re.compile(r"\d+"), timeout=120_000)
    return float(page.evaluate(MARKS)["first-answer"])


class Starts:
    """The times of many starts, kind by kind, with the page's marks and stalls."""

    def __init__(self) -> None:
        self.times: dict[str, list[float]] = {name: [] for name in (PLAIN, *KINDS)}
        self.marks: dict[str, list[dict[str, float]]] = {name: [] for name in KINDS}
        self.stalls: dict[str, list[float]] = {name: [] for name in KINDS}

    def measure(self, browser: Browser, plain_address: str, rounds: int, throttling: int = 1) -> None:
        """Start each kind `rounds` times, in turns."""
        for _ in range(rounds):
            for name in self.times:
                context = browser.new_context()
                page = context.new_page()
                context.new_cdp_session(page).send("Emulation.setCPUThrottlingRate", {"rate": throttling})
                if name == PLAIN:
                    self.times[name].append(plain_start(page, plain_address))
                else:
                    page.add_init_script(WATCH_STALLS)
                    self.times[name].append(our_start(page, KINDS[name][0]))
                    self.marks[name].append(page.evaluate(MARKS))
                    self.stalls[name].append(float(page.evaluate("() => longestStall")))
                context.close()

    def report(self, title: str, show_all: bool = False) -> None:
        """Print the ratios, and if wanted the parts."""
        plain = statistics.median(self.times[PLAIN])
        print(f"\nStart, {title}, median of {len(self.times[PLAIN])}; a plain start is 1.00 ({plain:.0f} ms here and now)")
        for name, (_, goal) in KINDS.items():
            ratios = sorted(ours / theirs for ours, theirs in zip(self.times[name], self.times[PLAIN], strict=True))
            spread = f"({ratios[0]:.2f} to {ratios[-1]:.2f} pair by pair)"
            show(f"  {name}: first answer drawn  {spread}", f"{statistics.median(self.times[name]) / plain:.2f}", f"≤ {goal:.2f}")
        if show_all:
            for name in KINDS:
                self.report_parts(name, plain)

    def report_parts(self, name: str, plain: float) -> None:
        """Print the page's longest stall, the order of paint and payloads, and when each part was done."""
        goal = f"≤ {STALL_MS} ms" if "folder" in name else ""
        print(f"\n  {name}, in thousandths of a plain start")
        show("    longest stall of the page's thread while starting, in ms", f"{statistics.median(self.stalls[name]):.0f}", goal)
        marks = self.marks[name]
        if "payload-worker" in marks[0]:
            earlier = sum(found["first-contentful-paint"] <= found["payload-worker"] for found in marks)
            show("    first paint before the engine's bytes are read", f"{earlier} of {len(marks)}", "all")
        wanted = [mark for mark in marks[0] if re.match("first-|payload-|engine-", mark) and all(mark in found for found in marks)]
        done = {mark: statistics.median(found[mark] for found in marks) for mark in wanted}
        for mark, at in sorted(done.items(), key=lambda item: item[1]):
            show(f"    {mark}", f"{at / plain * 1000:.0f}")


def show(what: str, value: str, goal: str = "") -> None:
    """Print one line of the result."""
    print(f"{what:<72}{value:>10}{f'   goal {goal}' if goal else ''}", flush=True)


@contextmanager
def on_one_core() -> Iterator[None]:
    """Whatever is started in here runs on one core alone, where the system can arrange it."""
    cores = os.sched_getaffinity(0)
    os.sched_setaffinity(0, {min(cores)})
    try:
        yield
    finally:
        os.sched_setaffinity(0, cores)


def measure_and_report(browser: Browser, kind: BrowserType, launch: dict[str, object], plain_address: str) -> None:
    """All starts: as the machine is, with the page's own thread slowed, and on one core."""
    usual = Starts()
    usual.measure(browser, plain_address, STARTS)
    usual.report("fresh contexts, in turns", show_all=True)
    slow = Starts()
    slow.measure(browser, plain_address, FEWER, throttling=4)
    slow.report("the page's own thread slowed four times (by the browser, which lets workers run)")
    if hasattr(os, "sched_setaffinity"):
        with on_one_core():
            alone = kind.launch(**launch)  # type: ignore[arg-type]
            single = Starts()
            single.measure(alone, plain_address, FEWER)
            alone.close()
        single.report("on one core")
