"""The lens as a body in the built page: every panel's answer, its picture, what it asks for, its fields, its paper."""

from __future__ import annotations

import json
import re
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest
from playwright.sync_api import Browser, BrowserContext, Locator, Page, expect

ROOT = Path(__file__).resolve().parents[2]
SCREENS = ROOT / "test-results" / "screens"
AXE = (ROOT / "web" / "node_modules" / "axe-core" / "axe.min.js").read_text("utf-8")
PANELS = ("layout", "field", "near", "edge", "thinning", "split", "wear", "surfacing", "colour")
THEMES: dict[str, dict[str, Any]] = {
    "light": {"color_scheme": "light"},
    "dark": {"color_scheme": "dark"},
    "forced": {"color_scheme": "dark", "forced_colors": "active"},
}
SIZES = {"tablet": (1024, 768), "upright": (800, 1280), "phone": (360, 740)}

Opener = Callable[..., Page]


@pytest.fixture
def opened(browser: Browser, dist: Path, watched: Callable[[Page], Page]) -> Iterator[Opener]:
    """Opens the built page in a context of one's own."""
    contexts: list[BrowserContext] = []

    def open_page(*, quiet: bool = True, **options: Any) -> Page:
        context = browser.new_context(**{"viewport": {"width": 1024, "height": 768}, **options})
        contexts.append(context)
        page = context.new_page()
        if quiet:
            watched(page)
        page.goto((dist / "index.html").as_uri())
        return page

    yield open_page
    for context in contexts:
        context.close()


def worked_out(page: Page) -> None:
    """Wait for the sections of the job as it is now."""
    expect(page.locator("#view-layout .panels")).to_have_attribute("data-current", "true", timeout=60_000)


def demonstration(page: Page) -> None:
    """The demonstration job, in the move Layout."""
    page.locator("#demonstration").click()
    expect(page.locator("#strip .word")).to_have_text("Within", timeout=60_000)
    page.locator("#move-layout").click()
    worked_out(page)


def order(page: Page, line: str) -> None:
    """A one-line order of uncut lenses, in the move Layout."""
    page.locator("#f-line").fill(line)
    expect(page.locator("#take-it")).to_be_enabled(timeout=60_000)
    page.locator("#take-it").click()
    page.locator("label.key:has(#f-state-uncut)").click()
    page.locator("#move-layout").click()
    worked_out(page)


def panel(page: Page, name: str) -> Locator:
    """A panel, opened."""
    place = page.locator(f"#panel-{name}")
    if place.get_attribute("open") is None:
        place.locator("> summary").click()
    return place


def drawn(place: Locator) -> dict[str, float]:
    """A mark's own box on the screen, without the width of its line."""
    box = place.evaluate(
        """(mark) => {
            const [box, turn] = [mark.getBBox(), mark.getScreenCTM()];
            return { x: turn.a * box.x + turn.e, y: turn.d * box.y + turn.f, width: turn.a * box.width, height: turn.d * box.height };
        }"""
    )
    assert isinstance(box, dict)
    return box


def open_all(page: Page) -> None:
    page.locator("#view-layout").evaluate("(view) => view.querySelectorAll('details').forEach((one) => { one.open = true; })")


def count_requests(page: Page) -> None:
    """Count what the page asks the worker from now on, once it has done what it does while nobody waits."""
    page.evaluate(
        """() => {
            const post = Worker.prototype.postMessage;
            window.asked = [];
            window.askedAt = performance.now();
            Worker.prototype.postMessage = function (message, ...rest) {
                if (message?.kind === "ask") {
                    window.asked.push(JSON.parse(message.text));
                    window.askedAt = performance.now();
                }
                return post.call(this, message, ...rest);
            };
        }"""
    )
    while page.evaluate("performance.now() - window.askedAt") < 1500:
        page.wait_for_timeout(100)
    page.evaluate("window.asked = []")


def test_every_panel_says_its_answer_closed_and_all_are_one_screen(opened: Opener) -> None:
    page = opened()
    demonstration(page)
    for name in PANELS:
        summary = page.locator(f"#panel-{name} > summary")
        expect(summary.locator(".panel-name")).not_to_have_text(re.compile(r"section_titles"))
        expect(summary.locator(".panel-answer")).not_to_have_text(re.compile(r"^(…?|.*section_titles.*|.*\{.*)$"))
        expect(page.locator(f"#panel-{name} table")).to_be_hidden()
    # By the boxing system: (A + DBL) / 2 − PD is 35 − 31.5 and 35 − 32.
    expect(page.locator("#panel-layout .panel-answer")).to_contain_text("R 3.5 in, L 3.0 in")
    page.locator("#banner").evaluate("(banner) => { banner.hidden = true; }")  # only a demonstration has it
    last, strip = page.locator("#panel-colour").bounding_box(), page.locator("#strip").bounding_box()
    assert last is not None
    assert strip is not None
    assert last["y"] + last["height"] <= strip["y"]


def test_no_code_is_shown_in_place_of_a_word(opened: Opener) -> None:
    page = opened()
    demonstration(page)
    open_all(page)
    text = page.locator("#view-layout").inner_text()
    assert re.findall(r"\b(?:page|section_\w+|fields|errors|notes)\.[\w.-]+|\{\w+\}", text) == []


def test_the_pair_lies_as_it_faces_you_and_to_scale(opened: Opener) -> None:
    page = opened()
    demonstration(page)
    layout = panel(page, "layout")
    heads = [text for text in layout.locator("thead th").all_inner_texts() if text.strip() and text != "what"]
    assert heads == ["right lens", "left lens", "pair"]
    right, left = (drawn(one) for one in layout.locator("#scene-layout-pair .role-box").all())
    bar = drawn(layout.locator("#scene-layout-pair .scale-bar line").first)
    assert right["x"] < left["x"]
    # A 52, B 34, DBL 18 of the demonstration, measured on the screen with the bar of 10 mm.
    scale = bar["width"] / 10
    assert right["width"] / scale == pytest.approx(52, abs=0.2)
    assert right["height"] / scale == pytest.approx(34, abs=0.2)
    assert (left["x"] - right["x"] - right["width"]) / scale == pytest.approx(18, abs=0.2)
    figures = panel(page, "edge").locator("figure:visible svg:has(.role-outline)")
    expect(figures).to_have_count(2)
    widths = figures.evaluate_all("(all) => all.map((one) => one.viewBox.baseVal.width / one.clientWidth)")
    assert max(widths) - min(widths) < 1e-9, "both lenses to one scale"


def test_prism_anywhere_by_touch_and_typed(opened: Opener) -> None:
    page = opened()
    order(page, "R -4.00 L -4.00")
    field = panel(page, "field")
    # Prentice's rule, by hand: 10 mm = 1 cm from the centre of a 4.00 D lens reads 4.00 Δ; minus, so its base points outwards:
    # to the observer's right, which is in for the right lens.
    field.locator("#f-points-right-0-right_mm").fill("10")
    field.locator("#f-points-right-0-up_mm").fill("0")
    expect(field.locator(".point-reads").first).to_contain_text("thin formula 4.00 Δ at 0°", timeout=10_000)
    expect(field.locator(".point-reads").first).to_contain_text("in")
    expect(field.locator("> summary .panel-answer")).to_contain_text("right lens")
    picture = field.locator("#scene-field-left")
    box = picture.bounding_box()
    assert box is not None
    picture.click(position={"x": box["width"] / 2, "y": box["height"] / 4})
    across, along = field.locator("#f-points-left-0-right_mm"), field.locator("#f-points-left-0-up_mm")
    expect(along).not_to_have_value("")
    # Where it was touched, in mm by the bar: above the reference point, which is in the middle of a lens without a frame.
    box = picture.bounding_box()  # the touch may have scrolled it into view
    assert box is not None
    bar, prp = drawn(picture.locator(".scale-bar line").first), drawn(picture.locator(".role-prp").first)
    scale = bar["width"] / 10
    assert float(across.input_value()) == pytest.approx((box["x"] + box["width"] / 2 - prp["x"] - prp["width"] / 2) / scale, abs=0.2)
    assert float(along.input_value()) == pytest.approx((prp["y"] + prp["height"] / 2 - box["y"] - box["height"] / 4) / scale, abs=0.2)
    reads = field.locator(".points").nth(1).locator(".point-reads")
    expect(reads).to_contain_text(re.compile(r"Δ at (8\d|90|9\d)"), timeout=10_000)
    field.locator(".points").nth(1).get_by_role("button", name=re.compile("^Drop point 1")).click()
    expect(reads).to_have_count(0)
    expect(along).to_have_value("")
    page.locator("#undo").click()
    expect(along).not_to_have_value("")


def test_what_is_missing_is_asked_for_and_one_touch_takes_the_usual(opened: Opener) -> None:
    page = opened()
    demonstration(page)
    near = panel(page, "near")
    rows = near.locator("tr.assumed")
    expect(rows.first).to_be_visible()
    ask = near.locator("[data-take='wear.reading_depth_mm']")
    expect(near.locator(".ask:has([data-take='wear.reading_depth_mm'])")).to_contain_text("not given")
    near.locator("[data-ask='wear.reading_depth_mm']").click()
    expect(page.locator("#f-wear-reading_depth_mm")).to_be_focused()
    expect(page.locator("#f-wear-reading_depth_mm")).to_have_value("")
    ask.click()
    expect(page.locator("#f-wear-reading_depth_mm")).to_have_value(re.compile(r"^\d"))
    expect(ask).to_have_count(0, timeout=10_000)
    near.locator(".take-all").click()
    expect(near.locator(".asks")).to_have_count(0, timeout=10_000)
    expect(rows).to_have_count(0)
    page.locator("#undo").click()
    worked_out(page)
    expect(near.locator(".asks")).to_be_visible()
    # A field of another move is led to as well.
    page.locator("#move-order").click()
    page.locator("#f-frame-a_mm").fill("")
    page.locator("#move-layout").click()
    worked_out(page)
    panel(page, "edge").locator("[data-ask='frame.a_mm']").click()
    expect(page.locator("#f-frame-a_mm")).to_be_focused()


def test_the_whole_body_can_be_typed_and_stands_in_the_job(opened: Opener, tmp_path: Path) -> None:
    page = opened()
    demonstration(page)
    open_all(page)
    # Values within the ranges of the contract, each different, so that none can stand in another's place.
    lens = {"index": "1.67", "abbe": "32", "front_curve": "4.25", "curve_index": "1.523", "centre_thickness_mm": "2.1"}
    lens |= {"minimum_centre_mm": "1.2", "minimum_edge_mm": "1.1", "density_g_cm3": "1.35", "blank_diameter_mm": "72"}
    own = {"index": "1.6", "abbe": "41", "front_curve": "5.5", "curve_index": "1.53", "centre_thickness_mm": "2.4"}
    own |= {"minimum_centre_mm": "1.3", "minimum_edge_mm": "1.4", "density_g_cm3": "1.3", "blank_diameter_mm": "75"}
    segment = {"width_mm": "28", "height_mm": "15", "inset_mm": "2", "centre_below_top_mm": "5.1"}
    block = {"block_diameter_mm": "56", "ring_index": "1.531", "prp_right_mm": "-2.5", "prp_up_mm": "3.5"}
    wear = {"vertex_tested_mm": "12", "vertex_worn_mm": "13", "pantoscopic_deg": "8", "wrap_deg": "6", "reading_distance_mm": "390"}
    wear |= {"reading_depth_mm": "11", "reading_inset_mm": "2.4", "rotation_centre_mm": "26"}
    typed: dict[str, str] = {f"wear.{name}": value for name, value in wear.items()}
    typed |= {f"lens.{name}": value for name, value in lens.items()}
    typed |= {"centration_shift_mm": "0.25", "field_limit": "0.75", "points.left[0].right_mm": "4", "points.left[0].up_mm": "-3"}
    for eye in ("right", "left"):
        typed |= {f"{eye}.{name}": value for name, value in own.items()}
        typed |= {f"{eye}.segment.{name}": value for name, value in segment.items()}
        typed |= {f"{eye}.surfacing.{name}": value for name, value in block.items()}
    for path, value in typed.items():
        page.locator(f"#view-layout [data-path='{path}']").fill(value)
    radii = [f"{26 - index % 9}.{index % 10}" for index in range(36)]
    page.locator("#f-frame-outline_mm").fill("\n".join(radii))
    chosen = ("frame-shape-oval", "frame-drilled", "lens-aspheric", "left-segment-shape-flat-top", "right-design-progressive")
    for identifier in chosen:
        page.locator(f"label.key:has(#f-{identifier})").click()
    expect(page.locator(".problem")).to_have_count(0)
    worked_out(page)
    page.locator("#move-keep").click()
    with page.expect_download() as download:
        page.locator("#export").click()
    download.value.save_as(tmp_path / "job.json")
    job = json.loads((tmp_path / "job.json").read_text("utf-8"))
    assert job["lens"] == {"design": "progressive", **lens, "aspheric": True}
    assert job["wear"] == wear
    assert job["frame"]["outline_mm"] == radii
    assert (job["frame"]["shape"], job["frame"]["drilled"]) == ("oval", True)
    for eye in ("right", "left"):
        assert {name: job[eye][name] for name in own} == own
        assert job[eye]["surfacing"] == block
        assert {name: job[eye]["segment"][name] for name in segment} == segment
    assert (job["right"]["design"], job["left"]["segment"]["shape"]) == ("progressive", "flat-top")
    assert (job["centration_shift_mm"], job["field_limit"]) == ("0.25", "0.75")
    assert job["points"] == {"left": [{"right_mm": "4", "up_mm": "-3"}]}
    page.evaluate("window.dispatchEvent(new Event('beforeprint'))")
    assert f"frame.outline_mm = {' '.join(radii)}" in (page.locator("#sheet").text_content() or ""), "one line on paper"


def test_a_wrong_radius_is_said_at_the_list_and_the_earlier_answer_marked(opened: Opener) -> None:
    page = opened()
    demonstration(page)
    layout = panel(page, "layout")
    layout.locator(".group > summary").first.click()
    layout.locator("#f-frame-outline_mm").fill("25 24 x 23")
    expect(page.locator("#view-layout .panels.earlier")).to_be_visible()
    expect(page.locator("#view-layout .panels-said")).to_contain_text("earlier")
    expect(layout.locator("#f-frame-outline_mm")).to_have_attribute("aria-invalid", "true")
    expect(layout.locator(".panel-answer")).to_contain_text("R 3.5 in")
    layout.locator("#f-frame-outline_mm").fill("")
    worked_out(page)
    expect(page.locator("#view-layout .panels.earlier")).to_have_count(0)


def test_the_answer_comes_first_and_reopening_asks_nothing(opened: Opener) -> None:
    page = opened()
    demonstration(page)
    count_requests(page)
    edge = panel(page, "edge")
    edge.locator("> summary").click()
    edge.locator("> summary").click()
    page.locator("#move-read").click()
    page.locator("#move-layout").click()
    worked_out(page)
    assert page.evaluate("window.asked.length") == 0
    edge.locator(".group > summary").first.click()
    index = page.locator("#f-lens-index")
    index.fill("1.67")
    worked_out(page)
    expect(edge.locator("tbody tr", has_text=re.compile("^index"))).to_contain_text("1.67")
    worked_out(page)
    asked = page.evaluate("window.asked.map(({ sections }) => sections.join())")
    others = [name for name in PANELS if name != "edge"]
    assert asked == ["", "edge", *others], "order and verdict first, then the sections one by one, the opened one before the others"
    page.locator("#undo").click()
    worked_out(page)
    assert page.evaluate("window.asked.length") == len(asked) + 1, "the sections of the job before are still there"
    # Where nobody looks at them, a keystroke asks for no sections.
    edge.locator("> summary").click()
    page.locator("#move-order").click()
    page.locator("#f-right-sphere").fill("-2.50")
    expect(page.locator("#f-right-sphere-line")).to_contain_text("2.50")
    page.wait_for_timeout(600)
    assert page.evaluate("window.asked.filter(({ sections }) => sections.length).length") == len(PANELS)


def test_each_opened_panel_is_printed(opened: Opener) -> None:
    page = opened()
    demonstration(page)
    panel(page, "edge")
    panel(page, "near")
    page.evaluate("window.dispatchEvent(new Event('beforeprint'))")
    page.emulate_media(media="print")
    parts = page.locator("#sheet .sheet-section")
    expect(parts).to_have_count(2)
    assert [text.split(":")[0] for text in parts.locator("h2").all_inner_texts()] == ["Near", "Edge"]
    expect(parts.nth(1).locator("svg.scene:not(.legend)")).to_have_count(2)
    expect(parts.nth(1).locator("table")).to_be_visible()
    answer = page.locator("#panel-edge .panel-answer").text_content()
    expect(parts.nth(1).locator("h2")).to_contain_text(answer or "?")
    SCREENS.mkdir(parents=True, exist_ok=True)
    page.pdf(path=SCREENS / "panels.pdf", prefer_css_page_size=True, format="A4")
    page.emulate_media(media="screen")
    for name in ("edge", "near"):
        page.locator(f"#panel-{name} > summary").click()
    page.evaluate("window.dispatchEvent(new Event('beforeprint'))")
    expect(parts).to_have_count(0)


def test_without_an_order_the_fields_can_be_typed_and_nothing_is_asked_of_the_core(opened: Opener) -> None:
    page = opened()
    page.locator("#move-layout").click()
    expect(page.locator("#view-layout .panels-said")).to_contain_text("Type an order first")
    panel(page, "edge").locator(".group > summary").first.click()
    page.locator("#f-lens-index").fill("1.5")
    expect(page.locator("#panel-edge .panel-answer")).to_have_text("")


@pytest.mark.parametrize("theme", THEMES)
def test_axe_finds_nothing_in_the_panels(opened: Opener, theme: str) -> None:
    page = opened(quiet=False, **THEMES[theme])  # axe itself is told of by the policy
    demonstration(page)
    page.evaluate(AXE)
    measured = {"enabled": theme != "forced"}
    options = {"rules": {"color-contrast-enhanced": measured, "color-contrast": measured}}
    found = []
    for state in ("closed", "opened"):
        if state == "opened":
            open_all(page)
            page.locator("#scene-field-right").click(position={"x": 100, "y": 80})
            worked_out(page)
        result = page.evaluate("(options) => axe.run(document, options)", options)
        for one in result["violations"]:
            found += [f"{state}: {one['id']}: {node['html'][:160]} {node['failureSummary'][:160]}" for node in one["nodes"]]
    assert found == []


SIDEWAYS = """() => {
    const wide = document.documentElement.clientWidth;
    const sticksOut = (node) => {
        const box = node.getBoundingClientRect();
        return node.checkVisibility() && !node.closest("svg, .hidden, thead") && box.width > 0 && (box.right > wide + 1 || box.left < -1);
    };
    const out = [...document.querySelectorAll("#top *, #views *, #dock *")].filter(sticksOut);
    return {
        scrolls: document.documentElement.scrollWidth > wide,
        out: out.slice(0, 5).map((node) => node.outerHTML.slice(0, 160)),
    };
}"""
SMALL = """() => [...document.querySelectorAll("#view-layout :is(button, summary, input, select, textarea)")]
    .filter((node) => node.checkVisibility() && !node.closest(".key"))
    .map((node) => [node.getBoundingClientRect(), node.outerHTML.slice(0, 120)])
    .filter(([box]) => box.height < 55.5 || box.width < 55.5)
    .map(([, html]) => html)"""


@pytest.mark.parametrize(("width", "percent"), [(320, 100), (320, 200), (800, 100)])
def test_nothing_scrolls_sideways_and_targets_are_large(opened: Opener, width: int, percent: int) -> None:
    page = opened(viewport={"width": width, "height": 740}, has_touch=True)
    demonstration(page)
    page.evaluate("(percent) => { document.documentElement.style.fontSize = `${percent}%`; }", percent)
    open_all(page)
    page.locator("#scene-field-right").click(position={"x": 60, "y": 60})
    worked_out(page)
    assert page.evaluate(SIDEWAYS) == {"scrolls": False, "out": []}
    assert page.evaluate(SMALL) == []


@pytest.mark.parametrize("theme", ["light", "dark"])
@pytest.mark.parametrize("size", SIZES)
def test_screens_are_kept(opened: Opener, size: str, theme: str) -> None:
    width, height = SIZES[size]
    page = opened(viewport={"width": width, "height": height}, has_touch=True, **THEMES[theme])
    demonstration(page)
    page.screenshot(path=SCREENS / f"{size}-{theme}-layout.png")
    for name in ("layout", "field", "edge"):
        place = panel(page, name)
        expect(place.locator("svg.scene:visible").first).to_be_visible()
        page.screenshot(path=SCREENS / f"{size}-{theme}-panel-{name}.png")
        place.locator("> summary").click()
    assert page.evaluate("document.documentElement.scrollWidth") <= width
