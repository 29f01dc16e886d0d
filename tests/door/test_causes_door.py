"""Causes, the next look and what would be seen if, as the door answers: keys of the contract, words, looks taken, refusals."""

from __future__ import annotations

import json
import math
from typing import Any

import pytest
from hypothesis import given

from pycore.imagine import imaginable
from pycore.words import say, table
from tests.core.strategies import Job, ask, demonstration, errors_of, jobs, patched, report_on
from tests.door.pairs import words

ENTRY = {"code", "eyes", "with", "probability", "residual", "estimate", "tied_with", "place", "tell_apart", "sentence", "shown"}
PLACES = {"as-ordered", "bench", "layout", "surfacing", "order", "none"}
REVERSED = patched(demonstration(), readings__right__prism=words("3.00 out", "2.75 down"), readings__right__axis="20")
BESIDE = patched(demonstration(), readings__right__prism=words("3.75 in", "0.75 up"), readings__right__axis="20")


def causes(job: Job) -> dict[str, Any]:
    """The report with its causes and the next look."""
    return report_on(job, sections=["causes", "look"])


def test_the_keys_of_the_contract() -> None:
    report = causes(REVERSED)
    assert math.isclose(sum(entry["probability"] for entry in report["causes"]), 1.0, abs_tol=1e-9)
    codes = [entry["code"] for entry in report["causes"]]
    assert {"as-ordered", "none-of-these", "base-reversed", "all-others"} <= set(codes)
    ordered = [entry["probability"] for entry in report["causes"] if entry["code"] != "all-others"]
    assert ordered == sorted(ordered, reverse=True)
    for entry in report["causes"]:
        assert set(entry) == ENTRY
        assert set(entry["eyes"]) <= {"right", "left"}
        assert entry["place"] in PLACES
        assert "{" not in entry["shown"]["text"] + entry["shown"]["probability"]
        sentence = entry["sentence"]
        assert say(f"causes.{sentence['code']}", **sentence["params"]) == entry["shown"]["text"]
    first = report["causes"][0]
    assert [tie["code"] for tie in first["tied_with"]] == ["side-word-wrong", "angle-not-carried"]
    assert first["residual"] < 1.0
    assert first["tell_apart"]["look"] == "order-slip"
    for part in first["tell_apart"]["expect"]:
        assert 0.0 < part["probability_this"] < 1.0
        assert f"order-slip.{part['result']}" in table()["look_results"]


def test_places_groups_and_priors() -> None:
    report = causes(REVERSED)
    assert {place["place"] for place in report["cause_places"]} == PLACES
    assert math.isclose(sum(place["probability"] for place in report["cause_places"]), 1.0, abs_tol=1e-9)
    assert report["cause_places"][0]["place"] == "surfacing"
    assert report["cause_places"][0]["shown"].endswith("%")
    assert [member["code"] for member in report["cause_groups"][0]["members"]][:2] == ["base-reversed", "side-word-wrong"]
    assert report["cause_priors"] == {"pseudo_count": 200, "provenance": "common practice"}


def test_a_size_is_said_in_words() -> None:
    sizes = {entry["code"]: entry["estimate"] for entry in causes(BESIDE)["causes"] if entry["estimate"]}
    assert set(sizes["lens-displaced"]["right"]) == {"right_mm", "up_mm"}
    assert "mm to the" in sizes["lens-displaced"]["shown"]
    assert sizes["lens-displaced"]["right"]["up_mm"]["mean"] == pytest.approx(-sizes["read-elsewhere"]["right"]["up_mm"]["mean"])


@pytest.mark.parametrize(
    ("right", "left", "axes", "code", "text"),
    [
        ("3.50 in", "2.50 in", ("20", "165"), "instrument-zero", "Δ towards"),
        ("2.00 in", "2.00 in", ("20", "165"), "layout-pd-wrong", "towards the nose"),
        ("2.96 in", "3.00 in", ("28", "165"), "lens-rotated", "counter-clockwise"),
    ],
)
def test_each_kind_of_size_has_its_words(right: str, left: str, axes: tuple[str, str], code: str, text: str) -> None:
    changes = {"readings__right__axis": axes[0], "readings__left__axis": axes[1]}
    job = patched(demonstration(), readings__right__prism=words(right, "0.25 up"), readings__left__prism=words(left, "2.75 down"), **changes)
    shown = [entry["estimate"]["shown"] for entry in causes(job)["causes"] if entry["code"] == code and entry["estimate"]]
    assert any(text in one for one in shown)


def test_both_lenses_sizes_are_told_lens_by_lens() -> None:
    changes = {"readings__right__axis": "29", "readings__left__axis": "157"}
    job = patched(demonstration(), readings__right__prism=words("2.9 in", "0.6 up"), readings__left__prism=words("3.2 in", "2.4 down"), **changes)
    both = [entry for entry in causes(job)["causes"] if entry["code"] == "lens-rotated" and len(entry["eyes"]) == 2]
    assert "right lens: turned by" in both[0]["estimate"]["shown"]
    assert "left lens: turned by" in both[0]["estimate"]["shown"]


def test_two_causes_together_are_one_entry() -> None:
    changes = {"readings__right__axis": "20", "instrument__prism_step": "0.05"}
    job = patched(demonstration(), readings__right__prism=words("2.6 out", "2.3 down"), readings__left__prism=words("2.6 in", "2.35 down"), **changes)
    together = [entry for entry in causes(job)["causes"] if entry["with"]]
    assert together
    assert "; and " in together[0]["shown"]["text"]


def test_the_titles() -> None:
    def title(job: Job) -> str:
        code: str = causes(job)["sections"]["causes"]["title"]["code"]
        return code

    assert title(demonstration()) == "causes.as-ordered"
    assert title(REVERSED) == "causes.tied"
    assert title(patched(demonstration(), readings__right__prism=words("6 in", "1.75 up"), readings__right__axis="20")) == "causes.likely"


def test_nothing_read_asks_for_the_readings() -> None:
    report = causes(patched(demonstration(), readings=None))
    assert report["causes"] == []
    assert "look" not in report
    for name in ("causes", "look"):
        section = report["sections"][name]
        assert section["title"]["code"] == f"{name}.nothing-read"
        assert [asked["field"] for asked in section["asks"]] == ["readings.right.prism", "readings.left.prism"]


def test_an_existing_partner_is_not_in_question() -> None:
    report = causes(patched(REVERSED, left__partner=True))
    assert {tuple(entry["eyes"]) for entry in report["causes"]} == {("right",), ()}
    assert "causes.partner" in [note["code"] for note in report["sections"]["causes"]["notes"]]


def test_the_next_look_and_what_each_result_would_mean() -> None:
    look = causes(REVERSED)["look"]
    assert look["look"] == "order-slip"
    assert look["eye"] is None
    assert look["sentence"] == {"code": "order-slip", "params": {}}
    assert 0 <= look["group_bits"] <= look["information_bits"]
    assert math.isclose(sum(result["probability"] for result in look["results"]), 1.0, abs_tol=1e-9)
    for result in look["results"]:
        assert result["sentence"] == {"code": f"order-slip.{result['result']}", "params": {}}
        assert {"code", "eyes", "with", "sentence", "probability", "shown", "text"} == set(result["leads_to"][0])
    worth = [look["information_bits"], *(other["information_bits"] for other in look["others"])]
    assert worth == sorted(worth, reverse=True)


def test_a_result_makes_of_the_ranking_what_was_announced() -> None:
    """`leads_to` says before the look what the report says after it."""
    look = causes(REVERSED)["look"]
    for result in look["results"][:3]:
        after = causes(patched(REVERSED, looks=[{"look": look["look"], "result": result["result"]}]))
        lead = result["leads_to"][0]
        found = next(entry for entry in after["causes"] if entry["code"] == lead["code"] and entry["eyes"] == lead["eyes"])
        assert found["probability"] == pytest.approx(lead["probability"], abs=0.01)
        assert after.get("look", {}).get("look") != "order-slip"


def test_where_all_is_settled_no_look_is_offered() -> None:
    report = causes(patched(demonstration(), readings__right__axis="20"))
    assert "look" not in report
    assert report["sections"]["look"]["title"]["code"] == "look.none"


def test_looks_of_a_job_are_checked() -> None:
    def faults(**look: Any) -> list[tuple[str, str]]:
        return errors_of(ask("report", job=patched(demonstration(), looks=[look])))

    assert faults(look="lens-out", result="turned-over") == [("choice-unknown", "looks[0].result")]
    assert faults(look="stare", result="centred") == [("choice-unknown", "looks[0].look")]
    assert faults(look="lens-out") == [("choice-missing", "looks[0].result")]
    assert faults(result="centred") == [("choice-missing", "looks[0].look")]
    assert faults(look="half-turn", eye="third", result="turned-over") == [("choice-unknown", "looks[0].eye")]
    assert faults(look="lens-out", result="centred", by="me") == [("key-unknown", "looks[0].by")]


def test_every_cause_look_and_result_has_its_words() -> None:
    from pycore.bench.cause_table import cause_table
    from pycore.job.looks import LOOKS

    said = table()
    assert {"as-ordered", "all-others", "together", *cause_table().causes} == set(said["causes"])
    assert set(said["cause_places"]) == PLACES
    assert set(said["looks"]) == set(LOOKS)
    assert set(said["look_results"]) == {f"{look}.{result}" for look, results in LOOKS.items() for result in results}


@given(jobs())
def test_any_job_is_weighed(job: Job) -> None:
    """Whatever is ordered and read: probabilities that sum to 1, causes, groups and places alike, and a look that can be said."""
    report = causes(job)
    if not report["causes"]:
        return
    for parts in (report["causes"], report["cause_places"]):
        assert math.isclose(sum(part["probability"] for part in parts), 1.0, abs_tol=1e-9)
    assert all(0.0 <= entry["probability"] <= 1.0 for entry in report["causes"])
    assert all(0.0 <= group["probability"] <= 1.0 + 1e-9 for group in report["cause_groups"])
    json.dumps(report, allow_nan=False)


def test_a_lens_without_a_written_power_is_swapped_with_nothing() -> None:
    """Bodies can be weighed against each other only where both powers are known."""
    job = patched(REVERSED, right__sphere=None, right__cylinder=None, right__axis=None)
    codes = {entry["code"] for entry in causes(job)["causes"]}
    assert "lenses-swapped" not in codes
    assert "base-reversed" in codes


# --- what would be seen if ----------------------------------------------------------------------------------------------


def picture(cause: str, eye: str, job: Job | None = None) -> dict[str, Any]:
    """The answer to what would be seen."""
    answer = ask("imagine", job=job or patched(demonstration(), readings=None), cause=cause, eye=eye)
    assert answer["format"] == "wedgewright.imagined/1", answer
    return answer


def test_a_reversed_base_is_seen_before_anything_is_read() -> None:
    """Due 3 in 1.5 up with 1.33 down for thinning: reversed, 3 out 1.5 down and the thinning."""
    answer = picture("base-reversed", "right")
    assert answer["right"]["shown"]["components"] == "3.00 out 2.83 down"
    assert answer["left"]["shown"]["components"] == "3.00 in 2.83 down"
    targets = [shape for shape in answer["scenes"]["right"]["dial"]["shapes"] if shape["role"] == "target"]
    assert [(shape["x"], shape["y"]) for shape in targets] == [(-3.0, -2.83)]
    assert answer["sentence"].startswith("right lens: base reversed")
    assert set(answer["scenes"]["left"]) == {"dial", "close"}


@pytest.mark.parametrize("eye", ["right", "left", "both"])
def test_every_cause_has_a_picture_or_says_that_it_cannot_be(eye: str) -> None:
    possible = set()
    for cause in imaginable():
        answer = picture(cause, eye)
        assert "{" not in answer["sentence"]
        json.dumps(answer, allow_nan=False)
        assert answer["possible"] == (answer["right"] is not None) == bool(answer["scenes"])
        possible |= {cause} if answer["possible"] else set()
    assert {"as-ordered", "instrument-zero", "frame-upside-down", "layout-pd-wrong", "lens-rotated", "base-flipped"} <= possible
    assert not possible & {"none-of-these", "read-at-segment", "meter-key-wrong", "compensator-wrong-sense", "as-worn-ignored"}


def test_pictures_of_each_kind() -> None:
    def seen(cause: str, eye: str = "both") -> tuple[str, str]:
        answer = picture(cause, eye)
        return answer["right"]["shown"]["components"], answer["left"]["shown"]["components"]

    assert seen("as-ordered") == ("3.00 in 0.17 up", "3.00 in 2.83 down")
    assert seen("frame-upside-down", "right") == ("3.00 out 0.17 down", "3.00 out 2.83 up")
    assert seen("target-centred", "right") == ("no prism", "3.00 in 2.83 down")
    assert seen("thinning-one-lens") == ("3.00 in 1.50 up", "3.00 in 2.83 down")
    zero = picture("instrument-zero", "both")
    shift = math.hypot(zero["right"]["x"] - 3.0, zero["right"]["y"] - 0.17)
    assert shift == pytest.approx(0.5, abs=1e-6)
    turned = picture("lens-rotated", "right")
    axis = next(shape["angle_deg"] for shape in turned["scenes"]["right"]["dial"]["shapes"] if shape["role"] == "target")
    assert 24.0 < axis < 30.0
    assert picture("table-moved", "both")["eyes"] == ["left"]
    assert picture("layout-pd-wrong", "both")["left"]["x"] != pytest.approx(-3.0, abs=0.05)


def test_a_target_without_a_cylinder_stands_upright() -> None:
    plain = {"right__cylinder": None, "right__axis": None, "left": None, "readings": None}
    answer = picture("base-reversed", "right", patched(demonstration(), **plain))
    target = next(shape for shape in answer["scenes"]["right"]["dial"]["shapes"] if shape["role"] == "target")
    assert target["angle_deg"] == 180.0
    assert picture("base-reversed", "left", patched(demonstration(), **plain))["possible"] is False


def test_what_cannot_be_asked_is_refused() -> None:
    job = demonstration()
    assert errors_of(ask("imagine", job=job, cause="gremlins", eye="right")) == [("choice-unknown", "cause")]
    assert errors_of(ask("imagine", job=job, cause="base-reversed", eye="third")) == [("choice-unknown", "eye")]
