"""What the bench asks beside reports: touch, step, an order in one line, wrong requests."""

from typing import Any

import pytest

from tests.core.strategies import Job, ask, errors_of, patched, report_on
from tests.door.pairs import PAIR, words


@pytest.mark.parametrize(
    ("eye", "x", "y", "step", "prism"),
    [
        ("right", 2.80, 0.20, None, [("2.75", "in"), ("0.25", "up")]),
        ("left", 2.80, -0.20, None, [("2.75", "out"), ("0.25", "down")]),
        ("left", "-2.626", "-1.37", None, [("2.75", "in"), ("1.25", "down")]),
        ("right", 0.1, -0.1, None, [("0.00", "in"), ("0.00", "up")]),
        ("right", 0.13, 0.38, "0.125", [("0.125", "in"), ("0.375", "up")]),
        ("right", -1.234, 0, "0.01", [("1.23", "out"), ("0.00", "up")]),
        ("right", -1.24, 0.3, "0.5", [("1.00", "out"), ("0.50", "up")]),
    ],
)
def test_touch_snaps_to_the_instrument_s_step(eye: str, x: Any, y: Any, step: str | None, prism: list[tuple[str, str]]) -> None:
    job = {"instrument": {"prism_step": step} if step else {}}
    answer = ask("touch", job=job, eye=eye, x=x, y=y)
    assert (answer["format"], answer["eye"]) == ("wedgewright.reading/1", eye)
    assert [(part["amount"], part["base"]) for part in answer["prism"]] == prism
    report_on(patched(PAIR, **{f"readings__{eye}__prism": answer["prism"]}))


def test_step_moves_the_reading_by_whole_steps() -> None:
    def stepped(job: Job, **keys: Any) -> list[tuple[str, str]]:
        return [(part["amount"], part["base"]) for part in ask("step", job=job, eye="right", **keys)["prism"]]

    job = patched(PAIR, right__prism=words("3 in", "0.5 up"))
    assert stepped(job, right=1, up=0) == [("3.25", "in"), ("0.50", "up")]  # from the expected point
    seen = patched(job, readings__right__prism=words("0.25 out", "0.25 up"))
    assert stepped(seen, right=0, up=-1) == [("0.25", "out"), ("0.00", "up")]
    assert stepped(seen, right=2, up=-2) == [("0.25", "in"), ("0.25", "down")]
    assert stepped(seen, right=1, up=0, fine=True) == [("0.20", "out"), ("0.25", "up")]
    odd = patched(job, readings__right__prism=words("1.23 in"))
    assert stepped(odd, right=1, up=1) == [("1.48", "in"), ("0.25", "up")]  # what was typed is not snapped
    set_ = patched(job, instrument__compensator="lens-prism", readings__right__compensator={"amount": "3", "base": "in"})
    assert stepped(set_, right=0, up=0) == [("0.00", "in"), ("0.50", "up")]  # where the target stands
    assert stepped(job, up=1) == [("3.00", "in"), ("0.75", "up")]
    assert errors_of(ask("step", job=patched(job, right=None), eye="right", right=1, up=0)) == [("eye-not-there", "right")]


@pytest.mark.parametrize(
    ("do", "keys", "error"),
    [
        ("touch", {"eye": "middle", "x": 1, "y": 1}, ("choice-unknown", "eye")),
        ("touch", {"eye": "right", "x": "1e3", "y": 1}, ("number-exponent", "x")),
        ("touch", {"eye": "right", "y": 1}, ("number-missing", "x")),
        ("touch", {"eye": "right", "x": 61, "y": 1}, ("number-out-of-range", "x")),
        ("touch", {"eye": "right", "x": 1, "y": 1, "z": 1}, ("key-unknown", "z")),
        (
            "touch",
            {"eye": "right", "x": 1, "y": 1, "job": {"instrument": {"prism_step": "0"}}},
            ("number-out-of-range", "instrument.prism_step"),
        ),
        ("touch", {"eye": "right", "x": 1, "y": 1, "job": {"instrument": "new"}}, ("object-expected", "instrument")),
        ("step", {"eye": "right", "right": 401, "up": 0, "job": PAIR}, ("number-out-of-range", "right")),
        ("step", {"eye": "right", "right": 1, "up": 0, "fine": "yes", "job": PAIR}, ("flag-expected", "fine")),
        ("step", {"eye": "right", "right": 1, "up": 0}, ("object-expected", "job")),
        ("step", {"eye": "right", "right": 1, "up": 0, "job": {}}, ("format-unknown", "format")),
        ("fly", {}, ("choice-unknown", "do")),
        ("report", {}, ("object-expected", "job")),
        ("report", {"job": []}, ("object-expected", "job")),
        ("report", {"job": PAIR, "scene": True}, ("key-unknown", "scene")),
        ("report", {"job": PAIR, "scenes": "yes"}, ("flag-expected", "scenes")),
        ("report", {"job": PAIR, "text": 1}, ("flag-expected", "text")),
        ("report", {"job": PAIR, "sections": ["layout?"]}, ("choice-unknown", "sections")),
        ("report", {"job": PAIR, "sections": "layout"}, ("list-expected", "sections")),
        ("report", {"job": PAIR, "editions": {}}, ("list-expected", "editions")),
        ("report", {"job": PAIR, "editions": [{}] * 21}, ("list-expected", "editions")),
        ("report", {"job": PAIR, "editions": [7]}, ("object-expected", "edition")),
        ("check-edition", {}, ("format-unknown", "edition.format")),
        (
            "check-edition",
            {"edition": {"format": "wedgewright.edition/1", "id": "iso-21987", "name": "x", "rows": []}},
            ("edition-id-taken", "edition.id"),
        ),
        ("list-editions", {"job": PAIR}, ("key-unknown", "job")),
        ("demonstration", {"which": 2}, ("key-unknown", "which")),
        ("read-order", {}, ("text-expected", "line")),
        ("read-order", {"line": "R -1.00", "bases": "90"}, ("choice-unknown", "bases")),
        ("read-order", {"line": "R -1.00", "base": "180"}, ("key-unknown", "base")),
    ],
)
def test_requests_are_refused_by_field(do: str, keys: Job, error: tuple[str, str]) -> None:
    assert error in errors_of(ask(do, **keys))


def test_an_order_in_one_line_through_the_door() -> None:
    answer = ask("read-order", line="R +0.75 -2.25 x20 3 BI 1.5 BU add 1.75", sequence=4)
    assert (answer["format"], answer["sequence"]) == ("wedgewright.order/1", 4)
    assert answer["right"] == {
        "sphere": "+0.75",
        "cylinder": "-2.25",
        "axis": "20",
        "add": "1.75",
        "prism": words("3 in", "1.5 up"),
    }
    assert answer["echo"] == ["R  +0.75 −2.25 ×20  3.00 in  1.50 up  add 1.75", "R  −1.50 +2.25 ×110  3.00 in  1.50 up  add 1.75"]
    pair = ask("read-order", line="OU -1.00 PD 62")
    assert (pair["pd_mm"], pair["left"]) == ("62", {"sphere": "-1.00"})
    assert errors_of(ask("read-order", line="R -1.00 2.5 @37", bases="180"))
    assert ask("read-order", line="R -1 add 2 progressive")["lens"] == {"design": "progressive"}
    assert errors_of(ask("read-order", line="R -99.00")) == [("number-out-of-range", "right.sphere")]
    report_on(patched(PAIR, right=answer["right"]))
