"""The sections beside order and verdict, as the door gives them: all, some or none, each in words."""

from __future__ import annotations

import json
from typing import Any

from pycore.api import handle
from pycore.sections import SECTIONS
from pycore.words import say, table

WANTED = ("layout", "field", "edge", "thinning", "split", "near", "wear", "surfacing", "colour", "causes", "look", "remedy")


def ask(**more: Any) -> dict[str, Any]:
    demonstration = json.loads(handle('{"format": "wedgewright.request/1", "do": "demonstration"}'))
    request = {"format": "wedgewright.request/1", "do": "report", "job": demonstration["job"], **more}
    answer: dict[str, Any] = json.loads(handle(json.dumps(request)))
    return answer


def test_the_names_are_the_contracts() -> None:
    assert tuple(SECTIONS) == WANTED


def test_none_some_or_all() -> None:
    assert "sections" not in ask(sections=[])
    assert list(ask(sections=["near", "near"])["sections"]) == ["near"]
    assert tuple(ask()["sections"]) == WANTED


def test_pictures_come_only_when_asked_for() -> None:
    drawn = ask(sections=["layout", "colour"], scenes=True)["scenes"]
    assert set(drawn) == {"right", "left", "layout"}, "colour has no picture"
    assert "scenes" not in ask(sections=["layout"])


def test_every_section_speaks_in_words() -> None:
    words = table()
    for name, section in ask()["sections"].items():
        title = section["title"]
        assert f"{name}.name" in words["section_titles"]
        assert "{" not in say(f"section_titles.{title['code']}", **title["params"])
        assert all(row["code"] in words["section_rows"] for row in section["rows"])
        assert all(note["code"] in words["section_notes"] for note in section["notes"])
        assert all(ask_["field"].split(".")[-1] in words["fields"] for ask_ in section["asks"])


def test_the_contracts_keys() -> None:
    report = ask()
    assert {"in_mm", "up_mm"} <= set(report["layout"]["right"]["decentration"])
    assert {"frame_pd_mm"} <= set(report["layout"])
    assert {"profile", "thinnest", "thickest", "weight_g"} <= set(report["edge"]["right"])
    assert {"vertical", "slab"} <= set(report["near"])
    assert {"at_blank_centre", "wedge_deg"} <= set(report["surfacing"]["right"])
    assert {"kind", "right", "left"} <= set(report["split"][0])
