"""Millimetres that pass what the prism does not: measured, never computed.

Figures of editions: published summaries of Z80.1-2010 and -2015, N.J. Admin. Code 13:35-5.2; ISO
tables from memory, as the editions say of themselves.
"""

import pytest

from tests.core.strategies import checks_of, codes, patched, report_on
from tests.door.pairs import PAIR, PROGRESSIVE, STRONG, heights, outcome, read, words


def test_millimetres_are_measured_never_computed_into_a_pass() -> None:
    """Z80.1-2015: above 3.375 D a pair's prism reference points within 1.0 mm pass what the prism does not."""
    job = read(STRONG, words("0.45 up"), words("0 up"))
    computed = report_on(job)
    height = checks_of(computed, "prp.height")[0]
    assert computed["verdict"]["outcome"] == "outside"
    assert (height["measured"], height["counts"], height["deviation"]) == (False, False, 0.9)  # 10 x 0.45 / 5.00, the lens slid
    assert "measure-millimetres" in codes(computed)
    measured = report_on(heights(job, "18.9", "18"))
    assert measured["verdict"]["outcome"] == "within"
    assert (checks_of(measured, "prp.height")[0]["measured"], checks_of(measured, "prp.height")[0]["group"]) == (
        True,
        "prism.vertical",
    )
    assert outcome(heights(job, "19.1", "18")) == "outside"
    assert outcome(heights(job, "19.0", "18")) == "within"  # on the limit
    assert outcome(heights(patched(job, right__prp_height_mm="19"), "19.9", "18.9")) == "within"  # ordered 1 mm apart
    weak = heights(patched(job, right__sphere="-3.375", left__sphere="-3.375"), "18", "18")
    assert outcome(weak) == "outside"
    assert not checks_of(report_on(weak), "prp.height")


def test_the_computed_millimetres_slide_the_weaker_lens() -> None:
    """R +6, L +1, both 3 mm high: no difference of heights, yet 1.5 prism dioptres (correction in the domain facts)."""
    job = read(patched(PAIR, right__sphere="+6.00", left__sphere="+1.00"), words("1.8 up"), words("0.3 up"))
    height = checks_of(report_on(job), "prp.height")[0]
    assert height["deviation"] == 15
    assert outcome(job) == "outside"


def test_horizontal_millimetres_are_of_the_distance_between_the_points() -> None:
    """Z80.1-2015: above 2.75 D, within 2.5 mm of the specified distance in total."""
    job = read(STRONG, words("0.80 in"), words("0 up"))
    assert outcome(job) == "outside"
    assert outcome(patched(job, readings__prp_distance_mm="64.5")) == "within"
    assert outcome(patched(job, readings__prp_distance_mm="64.6")) == "outside"
    assert outcome(patched(job, readings__right__pd_mm="32.5", readings__left__pd_mm="30")) == "within"
    binocular = patched(job, right__pd_mm=None, left__pd_mm=None, pd_mm="62", readings__prp_distance_mm="59.5")
    assert outcome(binocular) == "within"
    assert outcome(patched(binocular, pd_mm=None)) == "outside"  # measured, but ordered nowhere


def test_progressives_are_measured_each() -> None:
    """1.0 mm each (1999 as printed; from memory for later editions), the horizontal from 3.75 D or, as an option, 3.375 D."""
    job = patched(PROGRESSIVE, thinning={"rule": "none"}, right__sphere="-3.50", left__sphere="-3.50")
    up = heights(read(job, words("0.40 up"), words("0 up")), "18.9", "17.1")
    assert outcome(up) == "within"
    assert outcome(heights(up, "19.1", "18")) == "outside"
    assert checks_of(report_on(up), "prp.height")[0]["provenance"] == "memory"
    across = patched(read(job, words("0.80 in"), words("0 up")), readings__right__pd_mm="32", readings__left__pd_mm="31")
    assert outcome(across) == "outside"
    assert outcome(patched(across, edition_options={"progressive-horizontal-switch": "3.375"})) == "within"
    assert outcome(patched(across, right__sphere="-4.00")) == "within"
    assert outcome(patched(across, right__sphere="-4.00", right__pd_mm=None)) == "outside"  # ordered nowhere


def test_a_single_strong_lens_by_its_point() -> None:
    """Z80.1-2015, single lens: above 3.375 D within 1.0 mm in any direction."""
    job = patched(read(STRONG, words("0.40 up"), words("0 up")), state="uncut")
    report = report_on(job)
    point = checks_of(report, "prp.position", "right")[0]
    assert (report["verdict"]["outcome"], point["measured"], round(point["deviation"], 4)) == ("outside", False, 0.6667)
    assert outcome(patched(job, readings__right__slid_mm="0.7")) == "within"
    assert outcome(patched(job, readings__right__slid_mm="1.1")) == "outside"
    by_place = patched(job, readings__right__pd_mm="31.6", readings__right__prp_height_mm="18.8")
    assert checks_of(report_on(by_place), "prp.position", "right")[0]["deviation"] == 1  # 0.6 and 0.8
    assert outcome(by_place) == "within"
    assert not checks_of(report_on(patched(by_place, right__pd_mm=None)), "prp.position", "right")[0]["measured"]
    assert not checks_of(report_on(patched(job, edition_options={"prism-alternatives": "prism-only"})), "prp.position")


@pytest.mark.parametrize(
    ("axis", "sphere", "cylinder", "seen", "offered"),
    [
        ("90", "-5.00", "+5.00", "0.40 up", True),  # power along 90 only: sliding up and down helps
        ("180", "-5.00", "+5.00", "0.40 up", False),  # no power along 90: no sliding takes the error away
        ("180", "-5.00", "+5.00", "0.40 in", True),
        ("180", "0.00", "-5.00", "0.40 in", False),
    ],
)
def test_no_shift_moves_prism_along_a_meridian_without_power(
    axis: str, sphere: str, cylinder: str, seen: str, offered: bool
) -> None:
    job = patched(PAIR, state="uncut", right__sphere=sphere, right__cylinder=cylinder, right__axis=axis)
    report = report_on(read(job, words(seen), words("0 up"), readings__right__slid_mm="0.5"))
    assert bool(checks_of(report, "prp.position", "right")) == offered
    assert report["verdict"]["outcome"] == ("within" if offered else "outside")


OVER = heights(read(STRONG, words("0.45 up"), words("0 up")), "18.5", "18")
FAR = heights(read(STRONG, words("0.10 up"), words("0 up")), "19.5", "18")


@pytest.mark.parametrize(
    ("option", "over", "far", "unmeasured", "over_unmeasured"),
    [
        ("either", "within", "within", "within", "outside"),
        ("both", "outside", "outside", "unread", "outside"),
        ("replace", "within", "outside", "unread", "unread"),
        ("prism-only", "outside", "within", "within", "outside"),
    ],
)
def test_how_prism_and_millimetres_stand_to_each_other(
    option: str, over: str, far: str, unmeasured: str, over_unmeasured: str
) -> None:
    """The disputed readings of Z80.1 (2010 cl. 5.1.4 "and", 8.4 and the 2015 guide "or", the tables by range)."""
    chosen = {"edition_options": {"prism-alternatives": option}}
    quiet = {"readings__prp_distance_mm": "62"}
    assert outcome(patched(OVER, **chosen, **quiet)) == over
    assert outcome(patched(FAR, **chosen, **quiet)) == far
    without = {"readings__right__prp_height_mm": None, "readings__left__prp_height_mm": None}
    assert outcome(patched(FAR, **chosen, **quiet, **without)) == unmeasured
    assert outcome(patched(OVER, **chosen, **quiet, **without)) == over_unmeasured
    shown = next(
        item for item in report_on(patched(OVER, **chosen))["verdict"]["edition"]["options"] if item["id"] == "prism-alternatives"
    )
    assert (shown["value"], shown["default"], shown["why"]) == (option, option == "either", f"prism-alternatives.{option}")


def test_a_plano_lens_has_nothing_to_slide() -> None:
    """A shop's millimetres for any power: on a lens without power no shift takes the error away."""
    rows = [
        {"check": "prism.lens", "limit": {"fixed": "0.33"}, "clause": "1"},
        {"check": "prp.position", "limit": {"fixed": "1"}, "clause": "2"},
    ]
    shop = {"format": "wedgewright.edition/1", "id": "shop", "name": "Shop", "rows": rows}
    job = patched(read(PAIR, words("0.40 up"), words("0.40 up")), state="uncut", edition="shop", right__sphere="0.00")
    job = patched(job, readings__right__slid_mm="0.5", readings__left__slid_mm="0.5")
    checks = report_on(job, editions=[shop])["verdict"]["checks"]
    assert [check["eye"] for check in checks if check["id"] == "prp.position"] == ["left"]
