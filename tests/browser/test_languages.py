"""The page in other languages: in a made-up one nothing is clipped or left untranslated, in German everything works."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest
from playwright.sync_api import Browser, BrowserContext, Page, expect

import build
from tests.browser.pseudo_locale import CLOSE, OPEN, PLACE, build_with_pseudo_words

SCREENS = build.ROOT / "test-results" / "screens"
VIEWS = ("order", "layout", "read", "decide", "keep", "bench")
SIZES = {"tablet": (1024, 768), "upright": (800, 1280), "phone": (360, 740)}


@pytest.fixture(scope="module")
def pseudo_dist(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return build_with_pseudo_words(tmp_path_factory.mktemp("pseudo"))


@pytest.fixture
def opened(browser: Browser, watched: Callable[[Page], Page]) -> Iterator[Callable[..., Page]]:
    """Opens a built page with the demonstration job, where the device itself speaks the second language."""
    contexts: list[BrowserContext] = []

    def open_page(folder: Path, **options: Any) -> Page:
        context = browser.new_context(locale=PLACE, **options)
        contexts.append(context)
        page = watched(context.new_page())
        page.goto((folder / "index.html").as_uri())
        expect(page.locator("html")).to_have_attribute("lang", PLACE)
        page.locator("#demonstration").click()
        expect(page.locator("#strip")).to_have_attribute("data-outcome", "within", timeout=60_000)
        return page

    yield open_page
    for context in contexts:
        context.close()


def show(page: Page, view: str) -> None:
    """One view with everything in it that opens opened, and its panels worked out."""
    page.locator(f"#move-{view}").click()
    expect(page.locator(f"#view-{view}")).to_be_visible()
    page.locator(f"#view-{view}").evaluate("(view) => view.querySelectorAll('details').forEach((one) => { one.open = true; })")
    if view == "layout":
        expect(page.locator("#view-layout .panel table")).to_have_count(8, timeout=60_000)  # one has no lens to tell of


# Every element whose text does not find room in it, and every word of a picture outside its picture, or outside its card
# where the picture does not cut it off.
CLIPPED = """() => {
    const seen = (node) => node.checkVisibility({ visibilityProperty: true }) && !node.closest(".hidden, select");
    const all = [...document.querySelectorAll("#top, #top *, #views *, #dock *, #banner *")].filter(seen);
    const name = (node) => `${node.tagName} ${node.getAttribute("class") ?? ""} ${node.textContent.trim().slice(0, 60)}`;
    const sticksOut = (block) => {
        const { overflowX, display } = getComputedStyle(block);
        if (overflowX === "auto" || overflowX === "scroll" || display.startsWith("inline") || block.closest("svg")) return false;
        return block.scrollWidth > block.clientWidth + 1 || block.scrollHeight > block.clientHeight + 3;
    };
    const clipped = all.filter((node) => node.textContent.trim() && node.clientWidth > 1 && sticksOut(node));
    const innermost = clipped.filter((node) => !clipped.some((other) => other !== node && node.contains(other)));
    const outside = all.filter((node) => node.matches("svg text")).filter((node) => {
        const picture = node.ownerSVGElement;
        const frame = getComputedStyle(picture).overflow === "visible" ? picture.closest(".card, .panel, #views") : picture;
        const [word, place] = [node.getBoundingClientRect(), frame.getBoundingClientRect()];
        const spare = word.height / 5; // a line is higher than its letters
        return word.left < place.left - 1 || word.right > place.right + 1 || word.top < place.top - spare || word.bottom > place.bottom + spare;
    });
    return [...innermost, ...outside].map(name).slice(0, 8);
}"""

# Every text that is seen or spoken, the pictures' words included.
TEXTS = """() => {
    const seen = (node) => node.checkVisibility({ visibilityProperty: true });
    const roots = ["#top", "#banner", "#views", "#dock"].map((id) => document.querySelector(id));
    const blocks = roots.flatMap((root) => root.innerText.split("\\n"));
    const named = [...document.querySelectorAll("[aria-label], [title], [placeholder]")].filter(seen);
    const names = named.flatMap((node) => ["aria-label", "title", "placeholder"].map((key) => node.getAttribute(key) ?? ""));
    return [...blocks, ...names].filter((text) => text.trim());
}"""
# What is the same in every language: what was typed or loaded, names of editions and their clauses, formats, sizes.
SAME = re.compile(r"Wedgewright|DEMO-\d+|QX|(?:ANSI |ISO |N\.J\. |Z80|13:35)[^;\]⟧]*|wedgewright\.\w+/1|; published [\w ,]+|DBL|sha256 \w+|B[UDIO](?:&[IO])?|[xX]\d+|add")


def outside_brackets(text: str) -> str:
    """What of a text stands outside the made-up language's brackets."""
    depth, kept = 0, ""
    for sign in text:
        depth += (sign == OPEN) - (sign == CLOSE)
        kept += sign if depth == 0 and sign != CLOSE else ""
    return kept


@pytest.mark.slow
@pytest.mark.parametrize("size", SIZES)
@pytest.mark.parametrize("words", ["pseudo", "german"])
def test_longer_words_find_room(opened: Callable[..., Page], request: pytest.FixtureRequest, words: str, size: str) -> None:
    folder: Path = request.getfixturevalue("pseudo_dist" if words == "pseudo" else "dist")
    width, height = SIZES[size]
    page = opened(folder, viewport={"width": width, "height": height}, has_touch=True)
    found: dict[str, object] = {}
    for view in VIEWS:
        show(page, view)
        page.screenshot(path=SCREENS / f"{words}-{size}-{view}.png", full_page=True)
        if clipped := page.evaluate(CLIPPED):
            found[f"{view}, clipped"] = clipped
        if page.evaluate("document.documentElement.scrollWidth") > width:
            found[f"{view}, sideways"] = True
    assert found == {}


@pytest.mark.slow
def test_nothing_is_left_untranslated(opened: Callable[..., Page], pseudo_dist: Path) -> None:
    page = opened(pseudo_dist, viewport={"width": 1024, "height": 768})
    found: dict[str, list[str]] = {}
    for view in VIEWS:
        show(page, view)
        bare = [SAME.sub("", outside_brackets(text)) for text in page.evaluate(TEXTS)]
        if left := sorted({text.strip() for text in bare if re.search("[A-Za-z]{3}", text)}):
            found[view] = left
    assert found == {}


@pytest.fixture
def german(opened: Callable[..., Page], dist: Path) -> Page:
    return opened(dist, viewport={"width": 1024, "height": 768}, has_touch=True)


def test_german_speaks_in_page_core_and_print(german: Page) -> None:
    page = german
    expect(page.locator("#strip .word")).to_have_text("Innerhalb")
    expect(page.locator("[data-eye=right] .fact-ordered")).to_contain_text("3,35 Δ bei 26,6° (3,00 innen 1,50 oben)")
    expect(page.locator("#strip .sentence")).to_contain_text("Prisma, horizontal, Paar, 0,25 von 0,67 Δ")
    page.locator("#move-order").click()
    page.locator("#f-right-sphere").fill("2,2,5")
    expect(page.locator("#f-right-sphere-line")).to_contain_text("keine Zahl")
    page.locator("#f-right-sphere").fill("-2,25")
    expect(page.locator("#f-right-sphere-line")).to_have_text("−2,25 D")
    page.evaluate("dispatchEvent(new Event('beforeprint'))")
    expect(page.locator("#sheet")).to_contain_text("VORFÜHRUNG")
    page.locator("#move-keep").click()
    page.locator("#copy-result").click()
    expect(page.locator("#f-copied")).to_have_value(re.compile("Urteil: Innerhalb"))


def test_another_language_opens_the_page_anew_and_keeps_what_was_typed(german: Page) -> None:
    page = german
    page.locator("#move-order").click()
    page.locator("#f-id").fill("T-7")
    page.locator("#move-bench").click()
    page.locator("label.key:has(#f-setting-language-en)").click()
    expect(page.locator("html")).to_have_attribute("lang", "en")
    expect(page.locator("#strip .word")).to_have_text("Within", timeout=60_000)
    expect(page.locator("#f-id")).to_have_value("T-7")
    page.locator("#move-read").click()
    expect(page.locator("[data-eye=right] .fact-ordered")).to_contain_text("3.35 Δ at 26.6°")
    page.locator("#move-bench").click()
    page.locator("label.key:has(#f-setting-decimal-comma)").click()
    page.locator("#move-read").click()
    expect(page.locator("[data-eye=right] .fact-ordered")).to_contain_text("3,35 Δ at 26,6°")


PLACES = """() => [...document.querySelectorAll("#view-read .lens, #view-read .dial text, #view-read .step")].map((node) => {
    const box = node.getBoundingClientRect();
    return [node.getAttribute("class"), Math.round(box.left + box.width / 2)];
})"""


def test_a_dial_is_never_mirrored(german: Page) -> None:
    """Where a language is written from right to left, the right lens still lies on the left, and out is still out."""
    page = german
    page.locator("#move-read").click()
    expect(page.locator("#dial-right text.base-word")).to_have_count(2)
    before = page.evaluate(PLACES)
    page.evaluate("document.documentElement.dir = 'rtl'")
    assert page.evaluate(PLACES) == before
