"""Everything that must be refused, kept case by case: what is wrong, where, with which advice.

The cases stand in tests/bad_inputs/jobs.json: `set` and `remove` change the good job below,
`text` is sent as it is, `request` as JSON. Each says every fault that must be told, at once.
"""

import json
import random
import re
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.core.strategies import WORDS, Job, answer_to, errors_of, fresh, jobs, report_on
from tests.door.fuzz import faults_in

CASES: list[Job] = json.loads((Path(__file__).parents[1] / "bad_inputs" / "jobs.json").read_text("utf-8"))

GOOD: Job = {
    "format": "wedgewright.job/1",
    "id": "T-1",
    "state": "mounted",
    "edition": "ansi-z80.1-2015",
    "decision_rule": "simple",
    "edition_options": {},
    "lens": {"design": "progressive", "index": "1.60"},
    "frame": {"a_mm": "52", "b_mm": "34", "outline_mm": ["26"] * 36},
    "points": {"right": [{"right_mm": "0", "up_mm": "-10"}], "left": [{"right_mm": "0", "up_mm": "-10"}]},
    "wear": {"wrap_deg": "5"},
    "thinning": {"rule": "two-thirds"},
    "right": {
        "sphere": "-2.25",
        "cylinder": "+1.50",
        "axis": "20",
        "add": "2.00",
        "prism": [{"amount": "3", "base": "in"}, {"amount": "1.5", "base": "up"}],
        "stated": {"sphere": "-2.12", "cylinder": "+1.37", "axis": "21", "prism": [{"amount": "3", "base": "0"}]},
        "segment": {"shape": "flat top"},
        "surfacing": {"ring_index": "1.53"},
    },
    "left": {
        "sphere": "-1.75",
        "cylinder": "+1.00",
        "axis": "165",
        "add": "2.00",
        "prism": [{"amount": "4.1", "base": "217"}, {"amount": "1", "base": {"degrees": "37", "side": "up"}}],
    },
    "instrument": {"compensator": "lens-prism", "uncertainty": {"prism": "0.08"}},
    "readings": {
        "at": "marked-point",
        "right": {"sphere": "-2.12", "cylinder": "+1.37", "axis": "21", "prism": [{"amount": "3", "base": "in"}]},
        "left": {
            "prism": [{"amount": "2", "base": "in"}],
            "compensator": {"amount": "2", "base": "217"},
            "repeats": [{"prism": [{"amount": "2", "base": "in"}]}],
        },
    },
    "signed": {"initials": "AB"},
}


def steps(path: str) -> list[Any]:
    """`right.prism[0].base` as keys and places."""
    found = re.findall(r"([^.\[\]]+)|\[(\d+)\]", path)
    return [int(place) if place else name for name, place in found]


def changed(case: Job) -> Job:
    job = fresh(GOOD)
    for path, value in case.get("set", {}).items():
        *parents, last = steps(path)
        inner: Any = job
        for step in parents:
            inner = inner[step] if isinstance(step, int) else inner.setdefault(step, {})
        inner[last] = value
    for path in case.get("remove", []):
        *parents, last = steps(path)
        inner = job
        for step in parents:
            inner = inner[step]
        del inner[last]
    return job


def request_of(case: Job) -> Any:
    return case.get("text", case.get("request")) if "text" in case or "request" in case else changed(case)


def test_the_good_job_is_good_and_the_cases_are_many() -> None:
    report_on(GOOD)
    assert len(CASES) >= 300
    assert len({case["name"] for case in CASES}) == len(CASES)
    assert {code for case in CASES for code, _ in case["errors"]} >= set(WORDS["errors"]) - ELSEWHERE


# Codes that other tests bring about: of one-line orders, of editions, of the page, of the program itself.
ELSEWHERE = {
    code
    for code in WORDS["errors"]
    if code.startswith(
        (
            "line-",
            "edition-",
            "engine-",
            "rows-",
            "internal",
            "text-missing",
            "number-missing",
            "number-empty",
            "request-too-long",
            "job-too-long",
        )
    )
}


@pytest.mark.parametrize("case", CASES, ids=[case["name"] for case in CASES])
def test_it_is_refused(case: Job) -> None:
    answer = answer_to(request_of(case))
    assert sorted(errors_of(answer)) == sorted(map(tuple, case["errors"]))
    for error in answer["errors"]:
        assert error["fix"] in WORDS["fixes"]
        typed = case.get("set", {}).get(error["field"])
        if error["code"] == "key-unknown":
            assert error["field"].endswith(error["given"])
        elif isinstance(typed, str) and typed.strip():
            assert error["given"] == typed[:64]
        assert error["params"]["given"] == error["given"]
        assert error["params"]["field_name"] or error["field"] == ""


GOOD_TEXT = json.dumps(GOOD)


def test_a_seeded_fuzz_of_good_jobs() -> None:
    """`python -m tests.door.fuzz 1000000` does the same for longer."""
    source = random.Random(20240501)
    assert [fault for _ in range(2000) if (fault := faults_in(GOOD, source))] == []


@given(text=st.text(max_size=80))
def test_any_text_is_answered(text: str) -> None:
    assert answer_to(text)["format"] == "wedgewright.refusal/1"


ANYTHING = st.recursive(
    st.none() | st.booleans() | st.integers() | st.text(max_size=6),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=6), inner, max_size=3),
    max_leaves=6,
)


@given(job=jobs(), value=ANYTHING, place=st.randoms(use_true_random=False))
def test_anything_anywhere_in_a_job_is_no_fault_of_the_program(job: Job, value: Any, place: random.Random) -> None:
    """Also values of the wrong kind at every depth: an answer, never `internal`."""
    inner: Any = job
    while True:
        key = place.choice(list(inner) if isinstance(inner, dict) else range(len(inner)))
        if not isinstance(inner[key], (dict, list)) or not inner[key] or place.random() < 0.2:
            inner[key] = value
            break
        inner = inner[key]
    answer = answer_to(job)
    assert "internal" not in [error["code"] for error in answer.get("errors", [])]
