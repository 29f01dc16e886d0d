"""The verdict by the contract: groups, reading rules, what is named as not checked.

Figures of editions: published summaries of Z80.1-2010 and -2015, N.J. Admin. Code 13:35-5.2; ISO
tables from memory, as the editions say of themselves.
"""

import pytest

from tests.core.strategies import EYES, ask, checks_of, codes, demonstration, patched, report_on
from tests.door.pairs import LENS, PAIR, PROGRESSIVE, outcome, read, words, xy


def test_uncut_lenses_one_by_one_and_a_mounted_pair_by_the_pair() -> None:
    job = read(PAIR, words("0.30 up"), words("0.30 down"))
    pair = report_on(job)
    assert (pair["verdict"]["outcome"], checks_of(pair, "prism.vertical")[0]["deviation"]) == ("outside", 0.6)
    single = report_on(patched(job, state="uncut"))
    assert single["verdict"]["outcome"] == "within"
    assert [check["counts"] for check in checks_of(single, "prism.vertical")] == [False]
    assert [check["counts"] for check in checks_of(single, "prism.lens")] == [True, True]
    yoked = report_on(read(PAIR, words("0.60 up"), words("0.60 up")))
    assert yoked["verdict"]["outcome"] == "within"
    assert [note["params"]["eye"] for note in yoked["notes"] if note["code"] == "lens-excess"] == ["right lens", "left lens"]
    assert outcome(patched(read(PAIR, words("0.60 up"), words("0.60 up")), state="edged")) == "outside"


def test_single_vision_without_a_height_is_read_with_the_first_lens_set() -> None:
    """No marked vertical point: only the pair's vertical is judged (domain facts 5)."""
    for state in ("mounted", "edged"):
        job = read(patched(PAIR, state=state, right__prp_height_mm=None, left__prp_height_mm=None), words("9 up"), words("9 up"))
        assert "no-marked-height" in codes(report_on(job))
        assert outcome(job) == "unread"
        for at, note in (("first-lens-set", False), (None, True)):
            report = report_on(patched(job, readings__at=at))
            assert ("place-taken-first-lens-set" in codes(report)) == note
            vertical = [check for check in report["verdict"]["checks"] if check["component"] == "vertical" and check["counts"]]
            assert [(check["eye"], check["outcome"]) for check in vertical] == [("pair", "within")]
            assert report["verdict"]["outcome"] == "within"
            assert outcome(patched(job, readings__at=at, readings__left__prism=words("8.6 up"))) == "outside"
    marked = report_on(patched(read(PAIR, words("0.1 up"), words("0 up")), readings__at="first-lens-set"))
    assert marked["verdict"]["outcome"] == "within"


def test_powers_are_compared_in_the_order_s_form_along_the_strongest_meridian() -> None:
    job = patched(PAIR, right=LENS | {"sphere": "+1.00", "cylinder": "-3.00", "axis": "90"})
    read_in_plus = patched(job, readings__right={"sphere": "-2.14", "cylinder": "+3.10", "axis": "2"})
    report = report_on(read_in_plus)
    power, cylinder, axis = (checks_of(report, name, "right")[0] for name in ("power", "cylinder", "axis"))
    assert (power["ordered"], power["read"], power["outcome"]) == (-2, -2.14, "outside")  # 0.13 to 6.50 D
    assert (cylinder["ordered"], cylinder["read"], cylinder["outcome"]) == (-3, -3.1, "within")  # 0.15 over 2.00 D
    assert (axis["deviation"], axis["outcome"]) == (2, "within")  # 2 degrees over 1.50 D
    without_axis = report_on(patched(read_in_plus, readings__right__axis=None))
    assert {
        item["params"]["check"]
        for item in without_axis["verdict"]["not_checked"]
        if item["code"] == "not-read" and item["params"]["eye"] == "right lens"
    } == {"axis"}
    without_cylinder = report_on(patched(read_in_plus, readings__right__cylinder=None, readings__right__axis=None))
    assert not checks_of(without_cylinder, "power", "right")
    equal = patched(
        PAIR,
        right=LENS | {"sphere": "+1.00", "cylinder": "-2.00", "axis": "90"},
        readings__right={"sphere": "+1.10", "cylinder": "-2.00", "axis": "90"},
    )
    assert len(checks_of(report_on(equal), "power", "right")) == 2  # both meridians are as strong
    small = patched(
        PAIR, right__cylinder="-0.10", right__axis="90", readings__right={"sphere": "-2.00", "cylinder": "-0.10", "axis": "120"}
    )
    missing = {(item["code"], item["params"].get("check")) for item in report_on(small)["verdict"]["not_checked"]}
    assert ("no-limit", "axis") in missing  # below 0.12 D the axis is not defined


def test_add_and_its_limits() -> None:
    job = patched(PROGRESSIVE, thinning={"rule": "none"}, readings__right__add="2.12", readings__left__add="1.87")
    report = report_on(job)
    assert [(check["eye"], check["outcome"], check["limit"]) for check in checks_of(report, "add")] == [
        ("right", "within", 0.12),
        ("left", "outside", 0.12),
    ]


def test_repeats_are_averaged() -> None:
    job = read(
        PAIR,
        words("0.60 up"),
        words("0 up"),
        readings__right__repeats=[{"prism": words("0.10 up")}, {"prism": words("0.14 up", "0.03 in")}],
    )
    right = report_on(job)["right"]
    assert xy(right["read"]) == pytest.approx((0.01, 0.28), abs=1e-9)
    spread = right["spread"]
    assert {key: spread[key] for key in ("count", "horizontal", "vertical", "from")} == {
        "count": 3,
        "horizontal": 0.03,
        "vertical": 0.5,
        "from": "bench",  # three readings: the bench's figure for one still speaks
    }
    assert (spread["shown"]["horizontal"], spread["shown"]["vertical"]) == ("0.03", "0.50")
    assert outcome(job) == "within"
    empty = read(PAIR, words("0.10 up"), words("0 up"), readings__right__repeats=[{"prism": []}])
    assert "spread" not in report_on(empty)["right"]


def test_uncertainty_taken_for_granted_is_said() -> None:
    assumed = patched(PAIR, instrument=None)
    note = next(note for note in report_on(assumed)["notes"] if note["code"] == "uncertainty-assumed")
    assert note["params"]["prism"] == "0.10"
    assert "uncertainty-assumed" not in codes(report_on(PAIR))


def test_what_is_not_read_is_named() -> None:
    report = report_on(PAIR)
    verdict = report["verdict"]
    assert (verdict["outcome"], verdict["tightest"], verdict["sentence"]["code"]) == ("unread", None, "nothing-read")
    named = {(item["code"], item["params"].get("check"), item["params"].get("eye")) for item in verdict["not_checked"]}
    assert {("to-be-read", "prism, vertical", "pair"), ("to-be-read", "prism, horizontal", "pair")} <= named
    assert {("not-read", "power", eye) for eye in ("right lens", "left lens")} <= named
    assert {item["code"] for item in verdict["not_checked"] if not item["params"]} == {
        "base-curve",
        "thickness",
        "impact",
        "material",
        "surface",
        "segment",
        "fit",
    }
    one = report_on(patched(PAIR, readings__right__sphere="-2.00"))["verdict"]
    assert (one["outcome"], one["sentence"]["code"]) == ("unread", "unread")
    lone = report_on(patched(PAIR, left=None))
    assert lone["left"] is None
    assert lone["pair"] is None
    assert "eye-not-ordered" in codes(lone)
    uncut = report_on(patched(PAIR, state="uncut"))["verdict"]["not_checked"]
    assert [item["params"]["eye"] for item in uncut if item["code"] == "to-be-read"] == ["right lens", "left lens"]
    elsewhere = report_on(patched(PAIR, state="uncut", edition="iso-8980-2"))["verdict"]["not_checked"]
    assert ("no-limit", "prism, one lens") in [(item["code"], item["params"].get("check")) for item in elsewhere]


def test_readings_of_a_lens_that_is_not_ordered_are_not_passed_over_in_silence() -> None:
    report = report_on(patched(PAIR, left=None, readings__left__prism=words("9 up")))
    assert [note["field"] for note in report["notes"] if note["code"] == "reading-without-order"] == ["readings.left"]
    assert "reading-without-order" not in codes(report_on(patched(PAIR, left=None)))


def test_the_signature_is_carried_and_never_judged() -> None:
    signed = patched(PAIR, signed={"initials": "AB", "at": "2024-05-01 10:00"})
    first, second = report_on(signed), report_on(PAIR)
    del first["echo"], second["echo"]
    assert first == second


def test_one_lens_alone_and_a_job_without_an_edition_in_text_and_picture() -> None:
    lone = report_on(patched(PAIR, left=None, edition=None, id=None, readings__right__prism=words("1 up")), scenes=True, text=True)
    assert "Pair" not in lone["text"]
    assert "Verdict" not in lone["text"]
    shapes = {shape["role"]: shape for shape in lone["scenes"]["right"]["close"]["shapes"]}
    assert set(lone["scenes"]) == {"right"}
    assert "region" not in shapes
    assert shapes["uncertainty"]["radius"] == 0.16  # twice the standard uncertainty
    alone = patched(PAIR, left=None, decision_rule="guarded", instrument__uncertainty__prism="0.8")
    assert not {"guarded-never-passes", "guarded-needs-repeats"} & codes(report_on(alone))  # no pair to be judged
    unpowered = patched(PAIR, decision_rule="guarded", left={"prp_height_mm": "18"})
    assert "power-missing" in codes(report_on(unpowered))


def test_an_uncut_partner_has_no_region_of_its_own() -> None:
    job = patched(PAIR, state="uncut", left__partner=True, left__prism=words("0 up"), readings__left__prism=words("0.2 down"))
    scenes = report_on(job, scenes=True)["scenes"]
    roles = {eye: {shape["role"] for shape in scenes[eye]["dial"]["shapes"]} for eye in EYES}
    assert "region" not in roles["left"]
    assert "region" in roles["right"]


def test_sections_are_worked_out_as_asked() -> None:
    """All where nothing is said; the same whether alone or together; order and verdict untouched by them."""
    job = demonstration()
    everything, nothing = ask("report", job=job), report_on(job)
    names = list(everything.get("sections", {}))
    assert "sections" not in nothing
    one_by_one = [ask("report", job=job, sections=[name, name])["sections"] for name in names]
    assert [list(found) for found in one_by_one] == [[name] for name in names]
    assert {name: entry for found in one_by_one for name, entry in found.items()} == everything.get("sections", {})
    assert {key: everything[key] for key in ("verdict", "notes", "pair")} == {
        key: nothing[key] for key in ("verdict", "notes", "pair")
    }
