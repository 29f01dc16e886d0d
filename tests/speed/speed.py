"""`python3 build.py speed`: how fast the page starts and answers a key, as ratios and differences within one run.

The starts are interleaved, each in a fresh browser context, and compared with a plain start: the same Pyodide package,
stock, over http from this machine, on the page's own thread, importing the same core from its sources. The page's time
runs until the demonstration's report is drawn; the plain start's only until the core can be asked.
"""

from __future__ import annotations

import functools
import http.server
import io
import re
import statistics
import sys
import threading
import zipfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from playwright.sync_api import Browser, Page, expect, sync_playwright

ROOT = Path(__file__).resolve().parents[2]
sys.path.insert(0, str(ROOT / "tests" / "browser"))
sys.path.insert(0, str(ROOT / "tests" / "speed"))
from chromium import FLAGS, find  # noqa: E402
from sections import measure_sections  # noqa: E402

STARTS = 11
KEYS = 80
GOALS = {"start": 0.6, "key": 16.0, "folder": 9.5, "sections": 8.0}

PLAIN_PAGE = """<!doctype html><title>plain</title><script src="pyodide/pyodide.js"></script><script>
(async () => {
  const pyodide = await loadPyodide({ indexURL: "pyodide/" });
  const answer = await fetch("core.zip");
  pyodide.unpackArchive(await answer.arrayBuffer(), "zip");
  pyodide.pyimport("pycore.api");
  document.title = String(performance.now());
})();
</script>"""

# Keeps hold of the page's worker, so that an empty question can be sent beside the page's own.
KEEP_WORKER = """
const Real = Worker;
globalThis.Worker = class extends Real { constructor(...given) { super(...given); globalThis.keptWorker = this; } };
"""
EMPTY_ROUND_TRIP = """() => new Promise((done) => {
  const begun = performance.now();
  const heard = ({ data }) => {
    if (data.id === -1) { keptWorker.removeEventListener("message", heard); done(performance.now() - begun); }
  };
  keptWorker.addEventListener("message", heard);
  keptWorker.postMessage({ kind: "ask", id: -1, text: "" });
})"""
# The time from a typed character to the dials drawn with its answer; set up before the key, awaited after it.
WATCH_KEY = """() => {
  globalThis.keyDrawn = new Promise((done) => {
    let begun = 0;
    addEventListener("beforeinput", () => { begun = performance.now(); }, { capture: true, once: true });
    new PerformanceObserver((list, observer) => {
      const drawn = list.getEntriesByName("dial-drawn").find((mark) => begun && mark.startTime > begun);
      if (drawn) { observer.disconnect(); done(drawn.startTime - begun); }
    }).observe({ type: "mark" });
  });
}"""
MARK = "(name) => performance.getEntriesByName(name)[0]?.startTime ?? null"


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
    page.wait_for_function("document.title !== 'plain'")
    return float(page.title())


def our_start(page: Page, address: str) -> float:
    """Milliseconds until our page has drawn the first report, the demonstration being asked for as soon as there is a page."""
    page.goto(address, wait_until="commit")
    page.locator("#demonstration").click()
    expect(page.locator("html")).to_have_attribute("data-drawn", re.compile(r"\d+"), timeout=60_000)
    return float(page.evaluate(MARK, "first-answer"))


def key_times(page: Page) -> tuple[list[float], list[float]]:
    """Milliseconds of each key's way to the redrawn dials, and of an empty round trip beside each."""
    keys, trips = [], []
    field = page.locator("#f-readings-right-prism-0-amount")
    field.click()
    page.wait_for_timeout(500)
    for index in range(KEYS):
        trips.append(float(page.evaluate(EMPTY_ROUND_TRIP)))
        field.evaluate("(input) => input.select()")
        page.evaluate(WATCH_KEY)
        page.keyboard.type(str(1 + index % 4))
        keys.append(float(page.evaluate("() => keyDrawn")))
    return keys, trips


def percentile_95(values: list[float]) -> float:
    """The 95th percentile."""
    return statistics.quantiles(values, n=20)[-1]


def show(what: str, value: str, goal: str = "") -> None:
    """Print one line of the result."""
    print(f"{what:<58}{value:>12}{f'   goal {goal}' if goal else ''}", flush=True)


def measure_starts(browser: Browser, plain_address: str) -> dict[str, list[float]]:
    """The three starts, interleaved, and whether each first paint came before the engine was read."""
    addresses = {
        "folder": (ROOT / "dist" / "index.html").as_uri(),
        "single file": (ROOT / "dist-single" / "wedgewright.html").as_uri(),
    }
    times: dict[str, list[float]] = {"plain": [], "folder": [], "single file": [], "paint": [], "read": []}
    for _ in range(STARTS):
        for name in ("plain", "folder", "single file"):
            context = browser.new_context()
            page = context.new_page()
            times[name].append(plain_start(page, plain_address) if name == "plain" else our_start(page, addresses[name]))
            if name == "folder":
                times["paint"].append(float(page.evaluate(MARK, "first-contentful-paint")))
                times["read"].append(float(page.evaluate(MARK, "payload-worker")))
            context.close()
    return times


def report_starts(times: dict[str, list[float]]) -> None:
    """Print the starts."""
    plain = statistics.median(times["plain"])
    print(f"\nStart, median of {STARTS}, fresh contexts, interleaved; a plain start is 1.00")
    for name in ("folder", "single file"):
        ratios = sorted(ours / theirs for ours, theirs in zip(times[name], times["plain"], strict=True))
        spread = f"({ratios[0]:.2f} to {ratios[-1]:.2f} pair by pair)"
        show(f"  {name}: first answer drawn  {spread}", f"{statistics.median(times[name]) / plain:.2f}", f"≤ {GOALS['start']}")
    earlier = sum(paint <= read for paint, read in zip(times["paint"], times["read"], strict=True))
    show("  folder: first paint, in parts of a plain start", f"{statistics.median(times['paint']) / plain:.2f}")
    show("  folder: first paint before the engine's bytes are read", f"{earlier} of {STARTS}", "all")


def report_keys(keys: list[float], trips: list[float]) -> None:
    """Print the keys."""
    beyond = percentile_95(keys) - percentile_95(trips)
    print(f"\nA key's way to the redrawn dials, {KEYS} keys, beside as many empty round trips to the worker, in ms")
    show("  key to redrawn dials: median, 95th percentile", f"{statistics.median(keys):.1f}, {percentile_95(keys):.1f}")
    show("  empty round trip: median, 95th percentile", f"{statistics.median(trips):.1f}, {percentile_95(trips):.1f}")
    show("  beyond the empty round trip, 95th percentile", f"{beyond:.1f}", f"≤ {GOALS['key']:g}")


def report_sections() -> None:
    """Print what the sections cost."""
    plain, added = measure_sections()
    print("\nAll sections of a complete job, without pictures, in plain CPython; order and verdict are 1.00")
    show(f"  order and verdict {plain:.1f} ms; the sections beside them", f"{added / plain:.2f}")
    show("  the sections, in ms", f"{added:.1f}", f"≤ {GOALS['sections']:g}")


def report_sizes() -> None:
    """Print what the built files weigh."""
    print("\nSize in MB")
    total = 0
    for path in sorted((ROOT / "dist").rglob("*")):
        if path.is_file():
            total += path.stat().st_size
            show(f"  {path.relative_to(ROOT).as_posix()}", f"{path.stat().st_size / 1e6:.3f}")
    show("  the folder", f"{total / 1e6:.2f}", f"≤ {GOALS['folder']}")
    show("  the single file", f"{(ROOT / 'dist-single' / 'wedgewright.html').stat().st_size / 1e6:.2f}")


def main() -> None:
    """Measure and print."""
    import tempfile

    with sync_playwright() as playwright, tempfile.TemporaryDirectory() as folder, plain_site(Path(folder)) as address:
        browser = playwright.chromium.launch(executable_path=str(find()), args=FLAGS)
        print(f"Chromium {browser.version}", flush=True)
        times = measure_starts(browser, address)
        context = browser.new_context()
        context.add_init_script(KEEP_WORKER)
        page = context.new_page()
        our_start(page, (ROOT / "dist" / "index.html").as_uri())
        keys, trips = key_times(page)
        browser.close()
    report_starts(times)
    report_keys(keys, trips)
    report_sections()
    report_sizes()


if __name__ == "__main__":
    main()
