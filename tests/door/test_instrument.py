"""The bench's instrument through the door: a target that goes another way, a zero that is off, repeats, the guided check.

How an instrument shows a prism is written here apart from the core, by the geometry of ISO 8429's angles.
"""

import math
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.core.strategies import Job, ask, checks_of, codes, errors_of, patched, report_on
from tests.door.pairs import PAIR, read, words, xy

# How a target goes, and what that makes of "to the right" and "up".
WAYS: dict[str, tuple[Job, tuple[int, int]]] = {
    "towards": ({}, (1, 1)),
    "mirrored": ({"mirrored": True}, (-1, 1)),
    "away": ({"target_direction": "away-from-base"}, (-1, -1)),
    "away-mirrored": ({"target_direction": "away-from-base", "mirrored": True}, (1, -1)),
}
ORDERED = patched(PAIR, right__prism=words("3 in", "1 up"), left__prism=words("3 in", "1 down"))


def on(way: str, job: Job = ORDERED, **instrument: Any) -> Job:
    return patched(job, instrument=job["instrument"] | WAYS[way][0] | instrument)


def shapes(job: Job, picture: str = "dial", eye: str = "right") -> dict[str, Any]:
    """The last shape of each role."""
    return {shape["role"]: shape for shape in report_on(job, scenes=True)["scenes"][eye][picture]["shapes"]}


@pytest.mark.parametrize("way", WAYS)
def test_the_dial_shows_what_this_instrument_shows(way: str) -> None:
    across, along = WAYS[way][1]
    job = on(way, zero={"x": "0.1", "y": "-0.2"})
    job = read(job, words("2.5 in", "0.5 up"), words("3 in", "1 down"), readings__right__axis="30")
    found = shapes(job)
    assert xy(found["expected"]) == pytest.approx((3 * across + 0.1, along - 0.2))
    assert xy(found["target"]) == pytest.approx((2.5 * across, 0.5 * along)), "the reading is where it was seen"
    assert found["target"]["angle_deg"] == (30 if across == along else 150), "a mirror turns the axis round as well"
    read_ = report_on(job)["right"]["read"]
    assert xy(read_) == pytest.approx((2.5 - 0.1 * across, 0.5 + 0.2 * along)), "the zero is taken off"
    labels = [shape for shape in report_on(job, scenes=True)["scenes"]["right"]["dial"]["shapes"] if shape["role"] == "base-label"]
    places = {label["text"]: (round(label["x"]), round(label["y"])) for label in labels}
    assert places == {"0": (5 * across, 0), "90": (0, 5 * along), "180": (-5 * across, 0), "270": (0, -5 * along)}
    assert {label["text"]: label.get("word") for label in labels} == {
        "0": "directions.in",
        "90": None,
        "180": "directions.out",
        "270": None,
    }
    assert ("target-not-with-base" in codes(report_on(job))) is (way != "towards")


@given(
    way=st.sampled_from(sorted(WAYS)),
    x=st.integers(-24, 24),
    y=st.integers(-24, 24),
    zero=st.tuples(st.integers(-4, 4), st.integers(-4, 4)),
    state=st.sampled_from(["mounted", "uncut"]),
)
def test_a_touch_inside_the_region_that_is_drawn_passes(
    way: str, x: int, y: int, zero: tuple[int, int], state: str
) -> None:
    """Whichever way the target goes: the region is the set of places where a reading is within."""
    place = {"x": str(zero[0] / 10), "y": str(zero[1] / 10)}
    job = read(on(way, zero=place, prism_step="0.05"), words("3 in", "1 up"), words("3 in", "1 down"), state=state)
    scene = shapes(job)
    region, expected = scene["region"], scene["expected"]
    touched = (expected["x"] + x / 20, expected["y"] + y / 20)
    answer = ask("touch", job=job, eye="right", x=f"{touched[0]:.4f}", y=f"{touched[1]:.4f}")
    again = patched(job, readings__right__prism=answer["prism"])
    target = shapes(again)["target"]
    step = 0.025 + 1e-9
    assert xy(target) == pytest.approx(touched, abs=step), "the target stands where the dial was touched"
    if region["kind"] == "rect":
        gaps = (target["x"] - region["x"], region["x2"] - target["x"], target["y"] - region["y"], region["y2"] - target["y"])
    else:
        gaps = (region["radius"] - math.dist(xy(region), xy(target)),)
    inside = min(gaps) >= 0
    if abs(min(gaps)) > 1e-6:  # on the very edge the drawing's floats do not decide
        eye = "pair" if state == "mounted" else "right"
        checks = report_on(again)["verdict"]["checks"]
        outcomes = {check["outcome"] for check in checks if check["eye"] == eye and check["id"].startswith("prism.")}
        assert inside is (outcomes == {"within"})


@pytest.mark.parametrize("way", WAYS)
@pytest.mark.parametrize(("size", "length"), [("step", 0.25), ("tenth", 0.1), ("fine", 0.05)])
def test_a_step_moves_the_target_as_it_is_seen(way: str, size: str, length: float) -> None:
    job = read(on(way), words("2.5 in", "0.5 up"), words("3 in", "1 down"))
    before = shapes(job)["target"]
    for right, up in ((1, 0), (0, 1), (-2, 3)):
        answer = ask("step", job=job, eye="right", right=right, up=up, size=size)
        after = shapes(patched(job, readings__right__prism=answer["prism"]))["target"]
        moved = (after["x"] - before["x"], after["y"] - before["y"])
        assert moved == pytest.approx((right * length, up * length), abs=1e-9)
    bases = report_on(job)["right"]["step_bases"]
    assert bases[{1: "right", -1: "left"}[WAYS[way][1][0]]] == "in"
    assert bases[{1: "up", -1: "down"}[WAYS[way][1][1]]] == "up"


def test_the_steps_are_told_to_the_page() -> None:
    told = report_on(patched(PAIR, instrument__prism_step="0.50", instrument__checked_on="2026-11-30"))["instrument"]
    assert told["steps"] == {"step": "0.5", "tenth": "0.1", "fine": "0.05"}
    assert told["checked_on"] == "2026-11-30"


@pytest.mark.parametrize("way", WAYS)
def test_an_automatic_lens_meter_has_no_target_to_go_astray(way: str) -> None:
    job = on(way, kind="automatic", prism_step="0.01")
    assert xy(shapes(job)["expected"]) == (3, 1)
    assert "target-not-with-base" not in codes(report_on(job))


def test_the_next_reading_begins_where_the_last_one_stood() -> None:
    """Put aside and read again: a step goes on from the last reading, with the compensator as it now stands."""
    aside = [{"prism": words("2.5 in", "1 up")}, {"prism": words("2.75 in", "0.75 up")}]
    job = patched(ORDERED, readings__right__repeats=aside)
    answer = ask("step", job=job, eye="right", right=1, up=0, size="tenth")
    assert answer["prism"] == words("2.85 in", "0.75 up")
    meter = job["instrument"] | {"compensator": "lens-prism"}
    turned = patched(job, instrument=meter, readings__right__compensator={"amount": "2", "base": "in"})
    answer = ask("step", job=turned, eye="right", right=0, up=0)
    assert answer["prism"] == words("0.75 in", "0.75 up")


def test_several_readings_are_drawn_beside_their_mean() -> None:
    aside = [{"prism": words("2.5 in", "1 up")}, {"prism": words("3 in", "1 up")}]
    job = patched(ORDERED, readings__right__repeats=aside, readings__right__prism=words("3.5 in", "1 up"))

    def drawn(job: Job) -> list[tuple[str, float]]:
        kept = report_on(job, scenes=True)["scenes"]["right"]["dial"]["shapes"]
        return [(shape["role"], shape["x"]) for shape in kept if shape["role"] in ("repeat", "mean", "target", "uncertainty")]

    assert drawn(job) == [("uncertainty", 3), ("repeat", 2.5), ("repeat", 3), ("mean", 3), ("target", 3.5)]
    between = patched(job, readings__right__prism=None)
    assert drawn(between) == [("uncertainty", 2.75), ("repeat", 2.5), ("repeat", 3), ("mean", 2.75)]
    one = patched(between, readings__right__repeats=aside[:1])
    assert drawn(one) == [("uncertainty", 2.5), ("target", 2.5)]


def test_four_readings_speak_for_themselves() -> None:
    """JCGM 100, 4.2.3 and F.2.2.1, JCGM 101, 6.4.9.4: √(6/4)·s/√4 of both directions pooled, beside the step's √(1/192)."""
    aside = [{"prism": words(f"{amount} in", "1 up")} for amount in ("2.9", "3.0", "3.1")]
    job = read(ORDERED, words("3.0 in", "1 up"), words("3 in", "1 down"), readings__right__repeats=aside)
    report = report_on(job)
    scatter = math.sqrt((0.1**2 + 0.1**2) / 3 / 2)
    wanted = math.hypot(math.sqrt(6 / 4) * scatter / 2, 0.25 / math.sqrt(12))
    spread = report["right"]["spread"]
    assert (spread["count"], spread["from"], spread["shown"]["uncertainty"]) == (4, "readings", "0.08")
    assert spread["uncertainty"] == pytest.approx(wanted, abs=1e-12)
    assert report["right"]["read"]["x"] == 3, "the mean is exact"
    check = checks_of(report, "prism.horizontal")[0]
    assert check["uncertainty"] == pytest.approx(math.hypot(wanted, 0.08), abs=1e-9), "the left lens was read once"
    uncut = patched(job, state="uncut", instrument__zero_uncertainty="0.05")
    check = checks_of(report_on(uncut), "prism.lens", "right")[0]
    assert check["uncertainty"] == pytest.approx(math.hypot(wanted, 0.05), abs=1e-9)
    assert shapes(job)["uncertainty"]["radius"] == pytest.approx(2 * wanted, abs=1e-9)


def test_a_mean_on_the_limit_is_on_the_limit() -> None:
    """Three readings of one third each do not drift off it: N.J. 0.25 in all, read 0.24, 0.25 and 0.26 of it."""
    aside = [{"prism": words(f"{amount} up")} for amount in ("0.31", "0.34")]
    job = read(PAIR, words("0.34 up"), words("0 up"), readings__right__repeats=aside)
    check = checks_of(report_on(job), "prism.vertical")[0]
    assert (check["margin"], check["outcome"]) == (0, "within")  # Z80.1: 0.33 exactly, as (0.31 + 0.34 + 0.34) / 3 is


# --- the guided check ----------------------------------------------------------------------------------------------------

LOOKS: Job = {
    "zero": {"x": "0", "y": "0"},
    "known": {"amount": "3", "base": "40"},
    "seen": [{"x": "2.25", "y": "2.00"}],
    "scale": {"amount": "3", "base": "220"},
}


def test_the_check_settles_the_job_s_instrument() -> None:
    answer = ask("check-instrument", instrument={}, **LOOKS)
    assert (answer["format"], answer["next"], answer["settled"], answer["wrong"]) == (
        "wedgewright.instrument-check/1",
        "again",
        True,
        [],
    )
    assert [finding["code"] for finding in answer["findings"]] == ["zero-centre", "towards-base", "scale-own-base"]
    assert answer["instrument"] == {
        "target_direction": "towards-base",
        "mirrored": False,
        "compensator": "own-base",
        "zero": {"x": "0", "y": "0"},
    }
    refused = patched(ORDERED, readings__right__compensator={"amount": "2", "base": "out"})
    assert errors_of(ask("report", job=refused)) == [("compensator-sense-unknown", "readings.right.compensator")]
    settled = patched(refused, instrument=PAIR["instrument"] | answer["instrument"], readings__right__prism=words("1 in", "1 up"))
    # By its own base: 2 out on the scale leaves 1 of the lens's 3 in to be seen.
    assert xy(report_on(settled)["right"]["read"]) == pytest.approx((3, 1))


def test_the_check_of_another_instrument() -> None:
    again = [{"x": "-2.2", "y": "2.0"}, {"x": "-2.2", "y": "1.8"}, {"x": "-2.0", "y": "2.0"}, {"x": "-2.2", "y": "2.0"}]
    looks = LOOKS | {"zero": {"x": "0.1", "y": "0"}, "seen": again}
    answer = ask("check-instrument", instrument={"prism_step": "0.1"}, compensator="none", **{**looks, "scale": None})
    said = [(finding["code"], finding["params"]) for finding in answer["findings"]]
    assert [code for code, _ in said] == ["zero-found", "towards-base-changed-over", "scale-none", "uncertainty-found"]
    assert said[0][1]["zero"] == "0.10 Δ right"
    assert answer["places"] == {
        "zero": "0.10 Δ right",
        "seen": ["2.20 Δ left 2.00 Δ up", "2.20 Δ left 1.80 Δ up", "2.00 Δ left 2.00 Δ up", "2.20 Δ left 2.00 Δ up"],
    }
    scatter = math.sqrt((0.03 / 3 + 0.03 / 3) / 2)  # each way three at one place and one 0.2 off it
    wanted = math.hypot(scatter * math.sqrt(6 / 4), 0.1 / math.sqrt(12))
    assert answer["instrument"] == {
        "target_direction": "towards-base",
        "mirrored": True,
        "compensator": "none",
        "zero": {"x": "0.1", "y": "0"},
        "uncertainty": {"prism": f"{wanted:.3f}"},
    }
    report_on(patched(ORDERED, instrument=answer["instrument"]))


def test_the_check_says_what_cannot_be_and_settles_nothing() -> None:
    answer = ask("check-instrument", instrument={}, **{**LOOKS, "seen": [{"x": "0", "y": "3"}]})
    assert (answer["settled"], answer["instrument"]) == (False, {})
    assert answer["wrong"][0]["code"] == "known-direction"
    assert {"base", "moved_base"} <= set(answer["wrong"][0]["params"])
    still = ask("check-instrument", instrument={}, **{**LOOKS, "seen": [{"x": "0", "y": "0"}]})
    assert [wrong["code"] for wrong in still["wrong"]] == ["known-amount"]


def test_the_check_shows_the_rings_as_they_are_looked_at() -> None:
    def drawn(**looks: Any) -> list[tuple[str, float, float]]:
        kept = ask("check-instrument", instrument={"rings": "3", "target": "dots"}, **looks)["scene"]["shapes"]
        return [(shape["role"], *xy(shape)) for shape in kept if shape["role"] in ("zero", "repeat", "target")]

    assert drawn() == []
    assert drawn(zero={"x": "0.1", "y": "0"}) == [("target", 0.1, 0)]
    seen = [{"x": "1", "y": "1"}, {"x": "1", "y": "1.1"}]
    assert drawn(zero={"x": "0.1", "y": "0"}, seen=seen) == [("zero", 0.1, 0), ("repeat", 1, 1), ("target", 1, 1.1)]
    first = ask("check-instrument", instrument={"rings": "3", "target": "dots"})
    assert first["suggested"] == {"amount": "2", "base": "40"}
    assert (first["next"], first["places"]) == ("zero", {"zero": None, "seen": []})


@pytest.mark.parametrize(
    ("keys", "place"),
    [
        ({"x": "2.3", "y": "-1.9"}, ("2.25", "−2.00")),
        ({"x": "2.3", "y": "-1.9", "instrument": {"prism_step": "0.1"}}, ("2.30", "−1.90")),
        ({"from": {"x": "2.25", "y": "2"}, "right": 1, "up": -1}, ("2.50", "1.75")),
        ({"from": {"x": "2.25", "y": "2"}, "right": -1, "size": "tenth"}, ("2.15", "2.00")),
        ({"from": {}, "up": 2, "size": "fine"}, ("0.00", "0.10")),
    ],
)
def test_a_place_on_the_rings_by_touch_and_by_steps(keys: Job, place: tuple[str, str]) -> None:
    answer = ask("place", **keys)
    assert (answer["x"], answer["y"]) == place
    assert ask("check-instrument", zero={"x": answer["x"], "y": answer["y"]})["places"]["zero"]


@pytest.mark.parametrize(
    ("do", "keys", "error"),
    [
        ("place", {}, ("number-missing", "x")),
        ("place", {"from": {"z": "1"}}, ("key-unknown", "from.z")),
        ("place", {"from": {}, "size": "large"}, ("choice-unknown", "size")),
        ("check-instrument", {"known": {"amount": "much"}}, ("number-malformed", "known.amount")),
        ("check-instrument", {"scale": {"base": "400"}}, ("number-out-of-range", "scale.base")),
        ("check-instrument", {"seen": [{"x": "99"}]}, ("number-out-of-range", "seen[0].x")),
        ("check-instrument", {"compensator": "some"}, ("choice-unknown", "compensator")),
        ("check-instrument", {"colour": "red"}, ("key-unknown", "colour")),
        ("check-instrument", {"instrument": {"mirrored": "yes"}}, ("flag-expected", "instrument.mirrored")),
        ("check-instrument", {"instrument": {"zero": {"x": "far"}}}, ("number-malformed", "instrument.zero.x")),
    ],
)
def test_what_is_wrong_with_a_look_is_said_by_field(do: str, keys: Job, error: tuple[str, str]) -> None:
    assert error in errors_of(ask(do, **keys))
