"""`python3 build.py speed`: how fast the page starts and answers a key, as ratios and differences within one run.

What a start is measured by is said in `starts.py`.
"""

from __future__ import annotations

import statistics
import sys
import tempfile
from pathlib import Path

from playwright.sync_api import Page, sync_playwright

ROOT = Path(__file__).resolve().parents[2]
sys.path.insert(0, str(ROOT / "tests" / "browser"))
sys.path.insert(0, str(ROOT / "tests" / "speed"))
from causes import measure_causes  # noqa: E402
from chromium import FLAGS, find  # noqa: E402
from remedy import measure_remedy  # noqa: E402
from sections import measure_sections  # noqa: E402
from starts import FOLDER, measure_and_report, our_start, plain_site, show  # noqa: E402

KEYS = 80
GOALS = {"key": 16.0, "folder": 9.5, "single": 11.0, "sections": 8.0}

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


def key_times(page: Page) -> tuple[list[float], list[float]]:
    """Milliseconds of each key's way to the redrawn dials, and of an empty round trip beside each."""
    keys, trips = [], []
    field = page.locator("#f-readings-right-prism-0-amount")
    field.click()
    page.wait_for_timeout(3000)  # a lens is laid before it is read: the page warms up meanwhile
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


def report_why() -> None:
    """Print what the causes, the next look and the smallest movement cost."""
    print("\nWhy a pair fails, in plain CPython, in ms")
    for kind, (causes, look) in measure_causes().items():
        show(f"  causes of both lenses together, {kind}", f"{causes:.1f}", "≤ 15")
        show("    the next look, with the causes it rests on", f"{look:.1f}", "≤ 10")
    median, most = measure_remedy()
    show("  the smallest movement: median, 95th percentile", f"{median:.2f}, {most:.2f}")


def report_sizes() -> None:
    """Print what the built files weigh."""
    print("\nSize in MB")
    total = 0
    for path in sorted((ROOT / "dist").rglob("*")):
        if path.is_file():
            total += path.stat().st_size
            show(f"  {path.relative_to(ROOT).as_posix()}", f"{path.stat().st_size / 1e6:.3f}")
    show("  the folder", f"{total / 1e6:.2f}", f"≤ {GOALS['folder']}")
    show("  the single file", f"{(ROOT / 'dist-single' / 'wedgewright.html').stat().st_size / 1e6:.2f}", f"≤ {GOALS['single']}")


def main() -> None:
    """Measure and print."""
    report_sizes()
    launch: dict[str, object] = {"executable_path": str(find()), "args": FLAGS}
    with sync_playwright() as playwright, tempfile.TemporaryDirectory() as folder, plain_site(Path(folder)) as address:
        browser = playwright.chromium.launch(**launch)  # type: ignore[arg-type]
        print(f"Chromium {browser.version}", flush=True)
        measure_and_report(browser, playwright.chromium, launch, address)
        context = browser.new_context()
        context.add_init_script(KEEP_WORKER)
        page = context.new_page()
        our_start(page, FOLDER)
        keys, trips = key_times(page)
        browser.close()
    report_keys(keys, trips)
    report_sections()
    report_why()


if __name__ == "__main__":
    main()
