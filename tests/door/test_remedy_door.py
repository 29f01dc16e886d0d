"""The section `remedy` through the door: the contract's keys, the sentences, and what is never offered.

Figures: Z80.1-2015 (published guide); in and out by ISO 8429; the 180 notation by opticianry course OPH 142.
"""

from __future__ import annotations

from decimal import Decimal
from typing import Any

import numpy as np
import pytest

from pycore.words import say
from tests.core.strategies import WORDS, Job, ask, patched
from tests.door.pairs import PAIR, every_text, read, words
from tests.references.shift_jobs import draw

SPHERES = patched(PAIR, right__sphere="-5.00", left__sphere="-5.00", right__prism=words("3 in", "1.5 up"))
BIFOCAL = {"lens": {"design": "bifocal"}, "right__add": "2.00", "left__add": "2.00"}


def report_on(job: Job, **keys: Any) -> dict[str, Any]:
    """The report with this section."""
    return ask("report", job=job, sections=["remedy"], **keys)


def said(report: dict[str, Any]) -> str:
    """Title and notes as a person reads them."""
    section = report["sections"]["remedy"]
    title = say(f"section_titles.{section['title']['code']}", **section["title"]["params"])
    notes = [say(f"section_notes.{note['code']}", **note["params"]) for note in section["notes"]]
    return "\n".join([title, *notes])


def asked(report: dict[str, Any]) -> dict[str, str]:
    return {entry["field"]: entry["usual"] for entry in report["sections"]["remedy"]["asks"]}


def test_an_uncut_lens_is_marked_anew() -> None:
    """−5.00 D, read 0.83 off: 1.0 mm with the error, towards the nose (0.6) and up (0.8); the dot goes the other way."""
    job = read(patched(SPHERES, state="uncut", instrument__uncertainty__prism="0.001"), words("3.498 in", "2.164 up"), words("0 up"))
    report = report_on(job, scenes=True)
    remedy = report["remedy"]
    assert (remedy["kind"], remedy["allowed"], remedy["remake"]) == ("shift", True, None)
    assert remedy["least"]["right"] == {"right_mm": 0.6, "up_mm": 0.8}
    assert remedy["least"]["new_dot"] == {"right": {"right_mm": -0.6, "up_mm": -0.8}}
    assert remedy["least"]["left"] is None
    assert remedy["shared"]["least"] == remedy["only_right"]["least"] == remedy["least"]
    assert remedy["only_left"] == {"least": None, "recommended": None}
    after = remedy["least"]["after"]
    assert (after["right"]["x"], after["right"]["y"]) == (3.198, 1.764)
    assert [(check["eye"], check["deviation"], check["margin"]) for check in after["checks"]] == [("right", 0.33, 0.0), ("left", 0.0, 0.33)]
    recommended = remedy["recommended"]
    assert {key: remedy[key] for key in ("right", "left", "after")} == {key: recommended[key] for key in ("right", "left", "after")}
    assert recommended["after"]["doubt"] <= 0.05
    text = said(report)
    assert "mark anew: lens moved R 0." in text
    assert "new dot 0.7 out 0.8 down (mm) from the old one" in text or "new dot 0.6 out 0.9 down (mm) from the old one" in text
    assert "in the 180 notation" in text
    assert set(report["scenes"]["remedy"]) == {"right", "left"}
    assert asked(report) == {"frame.a_mm": "", "frame.b_mm": "", "frame.dbl_mm": ""}
    assert "not checked" in text


def test_the_blank_is_taken_as_usual_where_nothing_is_said() -> None:
    frame = {"a_mm": "48", "b_mm": "34", "dbl_mm": "18", "ed_mm": "52"}
    job = read(patched(SPHERES, state="uncut", frame=frame), words("3.6 in", "1.5 up"), words("0 up"))
    assert asked(report_on(job)) == {"lens.blank_diameter_mm": "80"}
    known = patched(job, right__blank_diameter_mm="75")
    assert asked(report_on(known)) == {}
    assert "taken to be the old dot" not in said(report_on(known)), "a finished lens lies around its optical centre"
    assert "taken to be the old dot" in said(report_on(patched(known, right__blank_diameter_mm="62")))


@pytest.mark.parametrize("state", ["edged", "mounted"])
def test_a_cut_lens_is_only_edged_smaller_or_made_again(state: str) -> None:
    job = read(patched(SPHERES, state=state, instrument__uncertainty__prism="0.001"), words("3 in", "2.5 up"), words("0 up"))
    report = report_on(job)
    remedy, text = report["remedy"], said(report)
    assert (remedy["kind"], remedy["allowed"], remedy["reason"]["code"]) == ("shift", False, f"cut-{state}")
    assert remedy["reason"]["params"] == {"narrower": "0.0", "lower": "1.4" if state == "mounted" else "2.8"}
    assert remedy["instruction"]["code"] == "edge-smaller"
    assert remedy["remake"]["code"] == "remake"
    assert "3.35 Δ at 26.6° (3.00 in 1.50 up), in the 180 notation 3.35 Δ BU&I @027" in text
    assert "only edged smaller" in text
    assert "for the person who signs" in text
    assert asked(report) == {}


def test_a_remake_is_one_sentence_in_both_notations() -> None:
    """Progressive, thinning 1.33 down by two thirds of 2.00: 1.50 up and 1.33 down is 0.17 up."""
    job = patched(SPHERES, lens={"design": "progressive"}, right__add="2.00", left__add="2.00", thinning={"rule": "two-thirds"})
    report = report_on(read(job, words("3 in", "1.2 up"), words("1.33 down")))
    remedy = report["remedy"]
    assert (remedy["kind"], remedy["least"], remedy["recommended"], remedy["right"]) == ("remake", None, None, None)
    assert remedy["reason"] == {"code": "progressive", "params": {"eye": "right lens"}}
    sentence = say(f"remedies.{remedy['instruction']['code']}", **remedy["instruction"]["params"])
    assert sentence == (
        "Remake: right lens with 3.00 Δ at 3.2° (3.00 in 0.17 up), in the 180 notation 3.00 Δ BU&I @003 "
        "at its prism reference point, prism thinning of 1.33 down included."
    )
    assert "corridor and the fitting cross" in said(report)
    unknown = said(report_on(read(patched(job, thinning=None), words("3 in", "2.5 up"), words("1.33 down"))))
    assert "remake: both lenses" in unknown
    assert "not known here" in unknown
    assert "left lens with no prism at its prism reference point" in unknown


def test_thinning_unknown_and_a_segment_are_said() -> None:
    job = read(patched(SPHERES, state="uncut", **BIFOCAL), words("3 in", "2 up"), words("0 up"))
    text = said(report_on(job))
    assert "only the pair was judged vertically" in text
    assert "The segment moves along" in text


def test_first_lens_set_and_no_sure_movement_are_said() -> None:
    job = patched(SPHERES, readings__at="first-lens-set", instrument__uncertainty__prism="0.3")
    text = said(report_on(read(job, words("3 in", "1.5 up"), words("1 up"))))
    assert "the height of the table follows that lens" in text
    assert "No movement leaves a doubt of 5 % or less" in text


def test_finer_steps_show_their_digits() -> None:
    job = patched(PAIR, right__sphere="-20.00", left__sphere="-0.25", instrument__uncertainty__prism="0.1175")
    shown = report_on(read(job, words("1.13 up"), words("0 up")))["remedy"]["only_right"]["recommended"]
    assert len(shown["shown"]["right"].split()[0]) == len("0.56")
    assert shown["after"]["doubt"] <= 0.05


def test_nothing_to_do_and_nothing_to_judge() -> None:
    right = read(SPHERES, words("3 in", "1.5 up"), words("0 up"))
    report = report_on(right)
    assert (report["remedy"]["kind"], report["remedy"]["reason"]["code"]) == ("none-needed", "within")
    assert "nothing: within the limits" in said(report)
    assert "for the person who signs" not in said(report)
    for job, title, fields in (
        (SPHERES, "not-read", {}),
        (patched(right, edition=None), "no-verdict", {"edition": ""}),
        (patched(right, lens=None, right__add="2.00"), "no-verdict", {"lens.design": ""}),
        (
            read(patched(SPHERES, decision_rule="guarded", instrument__uncertainty__prism="0.2"), words("3 in", "1.8 up"), words("0 up")),
            "undecided",
            {},
        ),
    ):
        report = report_on(job)
        assert report["sections"]["remedy"]["title"]["code"] == f"remedy.{title}"
        assert "remedy" not in report
        assert asked(report) == fields


def test_bending_the_frame_is_never_offered() -> None:
    assert not any("bend" in text.lower() for text in every_text(WORDS["remedies"]))


def test_every_reason_has_its_sentence() -> None:
    """What the core can answer is said in words, every hole filled."""
    for job in (
        read(patched(SPHERES, state="uncut", right__sphere="+1.00"), words("3 in", "3 up"), words("0 up")),
        read(patched(SPHERES, state="uncut", right__sphere="0.00"), words("3 in", "3 up"), words("0 up")),
        read(patched(SPHERES, state="uncut", right__aspheric=True), words("3 in", "3 up"), words("0 up")),
        read(patched(SPHERES, state="uncut", thinning={"rule": "none"}, **BIFOCAL), words("3 in", "3 up"), words("0 up")),
        read(patched(SPHERES, decision_rule="guarded", instrument__uncertainty__prism="0.2"), words("3 in", "6 up"), words("0 up")),
        read(patched(SPHERES, readings__right__sphere="-5.50"), words("3 in", "1.5 up"), words("0 up")),
    ):
        reason = report_on(job)["remedy"]["reason"]
        sentence = say(f"remedies.{reason['code']}", **reason["params"])
        assert sentence != f"remedies.{reason['code']}"
        assert "{" not in sentence


def typed_again(job: Job, remedy: dict[str, Any]) -> Job:
    """The job as it would be typed after the movement: what each lens then shows, and the places moved along."""
    again = patched(job)
    for eye, nose in (("right", 1), ("left", -1)):
        seen, place = again["readings"][eye], remedy["least"][eye] or {"right_mm": 0, "up_mm": 0}
        right_mm, up_mm = Decimal(str(place["right_mm"])), Decimal(str(place["up_mm"]))
        shown = remedy["least"]["after"][eye]
        seen.pop("repeats", None)
        seen["prism"] = [
            {"amount": f"{abs(shown['x']):.9f}", "base": "in" if shown["x"] * nose > 0 else "out"},
            {"amount": f"{abs(shown['y']):.9f}", "base": "up" if shown["y"] > 0 else "down"},
        ]
        if "prp_height_mm" in seen:
            seen["prp_height_mm"] = str(Decimal(seen["prp_height_mm"]) + up_mm)
            seen["pd_mm"] = str(Decimal(seen["pd_mm"]) - nose * right_mm)
        if "prp_distance_mm" in again["readings"]:
            again["readings"]["prp_distance_mm"] = str(Decimal(again["readings"]["prp_distance_mm"]) - nose * right_mm)
    return again


def test_typed_again_after_the_movement_the_job_passes() -> None:
    """Random jobs of every edition: what the movement is said to leave, entered as new readings, is within."""
    rng, tried = np.random.default_rng(5), 0
    while tried < 40:
        job = draw(rng)
        remedy = report_on(job).get("remedy", {})
        if remedy.get("kind") != "shift" or "slid_mm" in str(job) or job.get("decision_rule"):
            continue
        tried += 1
        assert report_on(typed_again(job, remedy))["verdict"]["outcome"] in ("within", "unread")
