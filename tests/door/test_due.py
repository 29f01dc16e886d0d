"""What the lens meter must show: thinning, stated values, a partner, the point, the instrument."""

import pytest

from tests.core.strategies import WORDS, Job, answer_to, checks_of, codes, errors_of, patched, report_on
from tests.door.pairs import LENS, PAIR, PROGRESSIVE, outcome, read, words, xy


@pytest.mark.parametrize(
    ("thinning", "right", "left", "note"),
    [
        ({"rule": "none"}, 0.0, 0.0, None),
        ({"rule": "two-thirds"}, -1.33, -1.33, None),  # the technical brief of 1998, row WE54
        ({"rule": "six-tenths"}, -1.20, -1.20, None),
        ({"rule": "amount", "amount": "1.5", "base": "down"}, -1.5, -1.5, None),
        ({"rule": "amount", "amount": "1.5", "base": "up"}, 1.5, 1.5, None),
        ({"rule": "amount", "amount": "1.5", "base": "down", "left_amount": "1"}, -1.5, -1.0, "thinning-differs"),
        ({"rule": "amount", "amount": "1.5", "base": "down", "left_amount": "1.50"}, -1.5, -1.5, None),
    ],
)
def test_thinning_rules(thinning: Job, right: float, left: float, note: str | None) -> None:
    report = report_on(patched(PROGRESSIVE, thinning=thinning, right__prism=words("1.5 up")))
    assert report["right"]["thinning"]["y"] == pytest.approx(right, abs=1e-12)
    assert report["left"]["thinning"]["y"] == pytest.approx(left, abs=1e-12)
    assert report["right"]["expected"]["y"] == pytest.approx(1.5 + right, abs=1e-12)
    assert codes(report) & {"thinning-differs", "thinning-not-known"} == ({note} if note else set())


def test_where_adds_differ_thinning_is_of_the_smaller() -> None:
    report = report_on(patched(PROGRESSIVE, thinning={"rule": "two-thirds"}, left__add="2.50"))
    assert report["right"]["thinning"]["y"] == report["left"]["thinning"]["y"] == -1.33
    assert "thinning-from-smaller-add" in codes(report)


@pytest.mark.parametrize("state", ["mounted", "uncut"])
@pytest.mark.parametrize("thinning", [None, {"rule": "unknown"}])
def test_thinning_unknown(thinning: Job | None, state: str) -> None:
    """Unknown, not none: only the pair is judged vertically, and the thinning found is reported."""
    job = patched(PROGRESSIVE, thinning=thinning, state=state, right__prism=words("1.5 up"), left__prism=words("1.5 down"))
    found = report_on(read(job, words("0.20 up"), words("2.90 down")))
    assert found["right"]["thinning"] is None
    assert found["right"]["expected_known"] == "horizontal"
    assert "thinning-not-known" in codes(found)
    vertical = checks_of(found, "prism.vertical")[0]
    assert (vertical["counts"], vertical["outcome"]) == (True, "within")
    assert vertical["deviation"] == pytest.approx(0.1)
    assert not [check for check in found["verdict"]["checks"] if check["component"] == "vertical" and check["eye"] != "pair"]
    # Half the sum of both vertical errors: (0.20 - 1.50 - 2.90 + 1.50) / 2.
    assert (found["pair"]["thinning_found"]["amount"], found["pair"]["thinning_found"]["base"]) == (1.35, "down")
    assert not {"thinning-found-not-down", "thinning-found-exceeds-add"} & codes(found)
    up = report_on(read(job, words("2.50 up"), words("0.50 down")))
    assert (up["pair"]["thinning_found"]["base"], "thinning-found-not-down" in codes(up)) == ("up", True)
    much = report_on(read(job, words("0.60 down"), words("3.60 down")))
    assert (much["pair"]["thinning_found"]["amount"], "thinning-found-exceeds-add" in codes(much)) == (2.1, True)
    nothing = report_on(read(job, words("1.50 up"), words("1.50 down")))["pair"]["thinning_found"]
    assert (nothing["amount"], nothing["base"]) == (0, None)
    assert outcome(read(job, words("0.60 up"), words("2.90 down"))) == "outside"


def test_stated_values_replace_the_prescription() -> None:
    stated = {
        "sphere": "-2.12",
        "cylinder": "-0.37",
        "axis": "85",
        "add": "2.10",
        "prism": words("2.80 in", "0.40 up"),
        "includes_thinning": True,
    }
    job = patched(PROGRESSIVE, thinning={"rule": "two-thirds"}, right__prism=words("3 in", "1.5 up"), right__stated=stated)
    job = patched(
        job,
        readings__right={"sphere": "-2.12", "cylinder": "-0.37", "axis": "85", "add": "2.10", "prism": words("2.80 in", "0.40 up")},
    )
    report = report_on(job)
    right = report["right"]
    assert right["stated_used"]
    assert not report["left"]["stated_used"]
    assert xy(right["expected"]) == (2.8, 0.4)  # it includes the thinning: none is added
    assert right["error"]["amount"] == 0
    assert right["power"]["minus_form"]["shown"]["text"] == "−2.12 −0.37 ×85"
    assert all(check["deviation"] == 0 for check in report["verdict"]["checks"] if check["eye"] == "right")
    assert "stated-values-used" in codes(report)
    without = report_on(patched(job, right__stated__includes_thinning=False))["right"]
    assert without["expected"]["y"] == pytest.approx(0.4 - 1.33, abs=1e-12)
    partly = report_on(patched(job, right__stated={"sphere": "-2.12"}))["right"]
    assert xy(partly["expected"]) == pytest.approx((3, 0.17), abs=1e-9)
    assert partly["add"] == 2.0
    # Rounding to what paperwork states: 2/3 of 2.10 is 1.40.
    assert report_on(patched(job, left__stated={"add": "2.10"}))["left"]["thinning"]["y"] == -1.4


def test_thinning_known_in_one_lens_only() -> None:
    """The maker states one lens with its thinning and nobody knows the other's: the pair has no vertical order."""
    stated = {"prism": words("1.33 down"), "includes_thinning": True}
    job = read(patched(PROGRESSIVE, right__stated=stated), words("1.33 down"), words("1.33 down"))
    report = report_on(job)
    assert (report["right"]["expected_known"], report["left"]["expected_known"]) == ("full", "horizontal")
    assert not checks_of(report, "prism.vertical")
    assert report["verdict"]["outcome"] == "unread"
    assert "thinning_found" not in report["pair"]
    assert outcome(patched(job, left__stated=stated)) == "within"


@pytest.mark.parametrize("thinning", [None, {"rule": "none"}, {"rule": "two-thirds"}])
def test_matching_an_existing_partner(thinning: Job | None) -> None:
    """The new lens must agree with the old one (the technical brief of 1998: match the old thinning)."""
    job = patched(
        PROGRESSIVE, thinning=thinning, left={"partner": True, "sphere": "-2.00", "add": "2.00", "prism": words("0.5 down")}
    )
    job = patched(job, right__prism=words("0.5 up"))
    assert "partner-not-read" in codes(report_on(job))
    job = patched(job, readings__left={"prism": words("2.50 down", "0.25 in")})
    report = report_on(job)
    assert xy(report["right"]["expected"]) == (0, -1.5)  # 0.50 up as prescribed and 2.00 down as the partner has
    right = report_on(patched(job, readings__right={"prism": words("1.50 down")}))
    vertical = checks_of(right, "prism.vertical")[0]
    assert (vertical["ordered"], vertical["read"], vertical["deviation"], vertical["outcome"]) == (1.0, 1.0, 0.0, "within")
    assert right["verdict"]["outcome"] == "within"
    assert not [check for check in right["verdict"]["checks"] if check["eye"] == "left"]
    assert outcome(patched(job, readings__right={"prism": words("1.10 down")})) == "outside"
    assert "partner-without-prescription" in codes(report_on(patched(job, left__prism=None)))
    assert errors_of(answer_to(patched(job, right__partner=True))) == [("partner-twice", "left.partner")]


def test_power_is_stated_in_both_forms_and_along_90_and_180() -> None:
    """F90 = S + C cos²A, F180 = S + C sin²A: +2.00 +2.00 x60 has +2.50 and +3.50, -8.00 -2.00 x30 has -9.50 and -8.50.
    The published keys of rows WE37 and WE38 exchange the two and are wrong."""
    report = report_on(
        patched(
            PAIR,
            right=LENS | {"sphere": "+2.00", "cylinder": "+2.00", "axis": "60"},
            left=LENS | {"sphere": "-8.00", "cylinder": "-2.00", "axis": "30"},
        )
    )
    assert (report["right"]["power"]["at_90"], report["right"]["power"]["at_180"]) == (2.5, 3.5)
    assert (report["left"]["power"]["at_90"], report["left"]["power"]["at_180"]) == (-9.5, -8.5)
    assert report["right"]["power"]["shown"]["at_180"] == "+3.50"
    assert report["read_first"] == {"eye": "left", "code": "stronger-at-90"}
    assert report_on(PAIR)["read_first"] is None
    assert report["order_lines"]["left"] == ["L  −8.00 −2.00 ×30", "L  −10.00 +2.00 ×120"]


@pytest.mark.parametrize(
    ("state", "design", "changes", "task", "code"),
    [
        ("uncut", "single-vision", {}, "spotting", "spot-single-vision"),
        ("uncut", "near", {"near_pd_mm": "29.5"}, "spotting", "spot-single-vision"),
        ("uncut", "near", {}, "spotting", "spot-single-vision-unplaced"),
        ("edged", "single-vision", {}, "checking", "check-single-vision"),
        ("edged", "single-vision", {"pd_mm": None}, "checking", "check-single-vision-unplaced"),
        ("mounted", "single-vision", {"prp_height_mm": None}, "checking", "check-single-vision-no-height"),
        ("mounted", "progressive", {"cross_above_prp_mm": "4"}, "checking", "check-progressive"),
        ("uncut", "progressive", {}, "checking", "check-progressive-unplaced"),
        ("mounted", "bifocal", {}, "checking", "check-segmented"),
        ("uncut", "trifocal", {"prp_height_mm": None}, "checking", "check-segmented-unplaced"),
    ],
)
def test_where_the_point_is(state: str, design: str, changes: Job, task: str, code: str) -> None:
    """Spotting moves the lens, checking does not; each design and state in one sentence (domain facts 5)."""
    job = patched(PAIR, state=state, lens={"design": design}, **{f"right__{name}": value for name, value in changes.items()})
    point = report_on(job)["right"]["point"]
    assert (point["task"], point["code"]) == (task, code)
    sentence = WORDS["points"][point["code"]]
    assert ("move the lens until" in sentence) == (task == "spotting")
    assert ("Do not move the lens" in sentence or "leave the frame table" in sentence) == (task == "checking")


def test_the_compensator_and_the_rings() -> None:
    job = patched(PAIR, right__prism=words("8 up"))
    assert "compensator-sense-not-settled" in codes(report_on(job))
    assert "off-rings-without-compensator" in codes(report_on(patched(job, instrument__compensator="none")))
    assert "beyond-compensator" in codes(
        report_on(patched(job, instrument__compensator="own-base", instrument__compensator_maximum="6"))
    )
    assert report_on(patched(job, instrument__rings="6", instrument__ring_step="2"))["right"]["on_rings"]
    quiet = report_on(patched(job, instrument__compensator="lens-prism"))
    assert quiet["right"]["compensator"]["full"]["shown"]["text_180"] == "8.00 Δ BU @090"
    assert (quiet["right"]["on_rings"], quiet["left"]["on_rings"]) == (False, True)
    reading = {"prism": words("0 up"), "compensator": {"amount": "8", "base": "up"}}
    assert errors_of(answer_to(patched(job, readings__right=reading))) == [
        ("compensator-sense-unknown", "readings.right.compensator")
    ]
    absent = patched(job, readings__right=reading, instrument__compensator="none")
    assert errors_of(answer_to(absent)) == [("compensator-not-there", "readings.right.compensator")]
    assert report_on(patched(job, readings__right=reading, instrument__compensator="lens-prism"))["right"]["read"]["y"] == 8
    assert report_on(patched(job, readings__right=reading, instrument__compensator="own-base"))["right"]["read"]["y"] == -8


def test_an_automatic_lens_meter_shows_numbers_at_its_step() -> None:
    job = patched(PAIR, instrument__kind="automatic", right__prism=[{"amount": "8", "base": "37"}])
    meter = report_on(job)["right"]["meter"]
    assert meter["key"] == "right"
    assert (meter["horizontal"]["amount"], meter["vertical"]["amount"]) == (6.39, 4.81)  # 8 cos 37 and 8 sin 37
    coarse = report_on(patched(job, instrument__prism_step="0.25"))["right"]["meter"]
    assert (coarse["horizontal"]["amount"], coarse["vertical"]["amount"]) == (6.5, 4.75)
    assert not {"compensator-sense-not-settled", "off-rings-without-compensator"} & codes(report_on(job))
    assert "meter" not in report_on(PAIR)["right"]


def test_the_optical_centre_and_where_decentring_gives_no_prism() -> None:
    """Rows WE28 and WE31: +4.00, 2 out: 5 mm out; -2.50 -1.00 x45, 1.5 in: 5.14 out and 0.86 down (full matrix)."""
    one = report_on(patched(PAIR, right__sphere="+4.00", right__prism=words("2 out")))["right"]["oc_from_prp_mm"]
    assert (one["right_mm"], one["up_mm"]) == (-5, 0)
    oblique = patched(PAIR, right__sphere="-2.50", right__cylinder="-1.00", right__axis="45", right__prism=words("1.5 in"))
    two = report_on(oblique)["right"]["oc_from_prp_mm"]
    assert (round(two["right_mm"], 2), round(two["up_mm"], 2)) == (-5.14, -0.86)
    for changes, code in (
        ({"lens__aspheric": True}, "decentring-aspheric"),
        ({"right__sphere": "0.00"}, "decentring-too-weak"),
        ({"right__sphere": "-2.00", "right__cylinder": "+2.00", "right__axis": "90"}, "decentring-too-weak"),
        ({"lens__design": "progressive", "right__add": "2.00", "left__add": "2.00"}, "decentring-progressive"),
        ({"lens__design": "bifocal", "right__add": "2.00", "left__add": "2.00"}, "decentring-thinning-unknown"),
    ):
        report = report_on(patched(oblique, **{"right__cylinder": None, "right__axis": None, **changes}))
        assert report["right"]["oc_from_prp_mm"] is None
        assert code in codes(report)
    weak = patched(oblique, right__cylinder=None, right__axis=None)
    assert report_on(patched(weak, right__sphere="-0.25"))["right"]["oc_from_prp_mm"] == {"right_mm": -60, "up_mm": 0}
    assert report_on(patched(weak, right__sphere="-0.12"))["right"]["oc_from_prp_mm"] is None  # 125 mm: nobody decentres so far
    own = report_on(patched(oblique, lens__aspheric=True, right__aspheric=False))
    assert own["right"]["oc_from_prp_mm"] is not None
