"""Every language says the same things: the same codes and holes, nothing left in English, nothing kept between requests."""

from __future__ import annotations

import json
import re
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from pycore.__main__ import main
from pycore.api import handle
from pycore.words import LANGUAGES, table
from tests.core.strategies import demonstration

PAGE = Path(__file__).resolve().parents[2] / "web"
OTHERS = LANGUAGES[1:]
# What is written alike in both languages: names, units, notations, and words that they share.
ALIKE = {
    "de": {
        *("horizontal", "horizontal {horizontal} {base}", "Horizontal, Δ", "nasal", "temporal", "oval", "plus", "minus"),
        *("DBL, mm", "ED, mm", "Letter", "sha256 {hash}", "English", "Deutsch"),
    }
}


def sentences(node: Any, path: str = "") -> Iterator[tuple[str, str]]:
    """Every sentence of a words file with the path that leads to it."""
    if isinstance(node, str):
        yield path, node
    else:
        for name, inner in node.items():
            yield from sentences(inner, f"{path}/{name}")


def everything(language: str) -> dict[str, str]:
    """The core's sentences and the page's own."""
    page = json.loads((PAGE / f"words-page.{language}.json").read_text("utf-8"))
    return dict(sentences({"core": table(language), **page}))


def ask(**request: Any) -> dict[str, Any]:
    answer: dict[str, Any] = json.loads(handle(json.dumps({"format": "wedgewright.request/1", **request})))
    return answer


@pytest.mark.parametrize("language", OTHERS)
def test_the_same_codes_in_the_same_order(language: str) -> None:
    assert list(everything(language)) == list(everything("en"))


@pytest.mark.parametrize("language", OTHERS)
def test_the_same_holes(language: str) -> None:
    english, other = everything("en"), everything(language)
    assert {path for path, text in english.items() if set(re.findall(r"\{\w+\}", text)) != set(re.findall(r"\{\w+\}", other[path]))} == set()


@pytest.mark.parametrize("language", OTHERS)
def test_nothing_is_left_in_english(language: str) -> None:
    english = everything("en")
    same = {text for path, text in everything(language).items() if text == english[path]}
    worded = {text for text in same if re.search("[A-Za-z]{2}", re.sub(r"\{\w+\}|\bmm\b", "", text))}
    assert worded <= ALIKE[language]


def test_the_english_words_that_german_never_uses() -> None:
    """A half translated sentence differs from the English one: its little words give it away."""
    leftover = re.compile(r"\b(?:the|and|of|with|from|is|are|not|this|lens|lenses|reading|thinning|axis|power)\b")
    # In quotation marks stand an order line's own words and what a standard prints.
    found = {path: text for path, text in everything("de").items() if leftover.search(re.sub("„[^“]*“|\\{[^}]*\\}", "", text))}
    assert found == {}


def test_a_report_speaks_the_language_asked_for_and_the_next_one_does_not() -> None:
    before = ask(do="report", job=demonstration(), text=True)
    german = ask(do="report", job=demonstration(), text=True, language="de")
    after = ask(do="report", job=demonstration(), text=True)
    assert after == before
    assert "Urteil: Innerhalb" in german["text"]
    assert german["right"]["prescribed"]["shown"]["text"] == "3.35 Δ bei 26.6° (3.00 innen 1.50 oben)"
    assert german["echo"]["right.prism[0].base"] == "innen"
    assert [check["margin"] for check in german["verdict"]["checks"]] == [check["margin"] for check in before["verdict"]["checks"]]


def test_a_refusal_names_its_fields_in_the_language_asked_for() -> None:
    job = {**demonstration(), "right": {"sphere": "2,2,5"}}
    assert ask(do="report", job=job, language="de")["errors"][0]["params"]["field_name"] == "rechtes Glas: Sphäre"
    assert ask(do="report", job=job)["errors"][0]["params"]["field_name"] == "right lens: sphere"


@pytest.mark.parametrize("language", ["fr", "", 7, ["de"], {"de": "de"}])
def test_a_language_that_is_not_there_is_refused_or_left_to_the_first(language: Any) -> None:
    answer = ask(do="demonstration", language=language)
    if language == "":
        assert answer == ask(do="demonstration")
    else:
        assert answer["errors"][0]["field"] == "language"


def test_the_command_line_speaks_it_too(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    file = tmp_path / "job.json"
    file.write_text(json.dumps(demonstration()), "utf-8")
    assert main(["report", str(file), "--text", "--language", "de"]) == 0
    assert "rechtes Glas" in capsys.readouterr().out
