"""Readings on, above and below every limit of every edition, through the door, as typed text.

The limits are those of `tests/references/limits_reference.py`, written from the sources named there and in
`tests/references/README.md`, not from the project's edition files.
"""

from __future__ import annotations

from decimal import Decimal

import pytest

from tests.references import limits_reference as ref
from tests.references.limit_cases import (
    EDITIONS,
    EYES,
    MAKERS,
    Due,
    Job,
    around,
    base_job,
    cases_of,
    designs_of,
    lens_component_cases,
    pair_cases,
    prism,
    read_pair,
    report_on,
    signed,
)

D = Decimal


@pytest.mark.parametrize("edition", EDITIONS)
def test_on_above_and_below_every_limit(edition: str) -> None:
    cases, wrong = cases_of(edition), []
    for case in cases:
        report = report_on(case.job)
        wrong += [(case.name, due, seen) for due in case.due if (seen := due.seen_in(report)) != due.outcome]
    print(f"{edition}: {len(cases)} jobs, {sum(len(case.due) for case in cases)} verdicts, {len(wrong)} wrong")
    assert not wrong, wrong[:5]


def test_every_kind_of_limit_is_tried_on_and_above() -> None:
    """Each maker of cases yields, for at least one edition, readings within and outside."""
    for make in MAKERS:
        outcomes = {
            due.outcome
            for edition in EDITIONS
            for design in designs_of(edition)
            for case in make(edition, design)
            for due in case.due
        }
        assert {"within", "outside"} <= outcomes, make.__name__


# --- the whole 0.01 grid: floats get a third of it wrong -----------------------------------------------------------------


@pytest.mark.parametrize("edition", ["ansi-z80.1-2015", "nj-13-35-5.2", "iso-21987"])
def test_pair_on_the_limit_over_the_grid(edition: str) -> None:
    """Ordered prisms 0.00 to 10.00 by 0.01 (two editions by 0.07): on the limit and 0.01 beyond, both signs and directions."""
    wrong = []
    for hundredths in range(0, 1001, 1 if edition.startswith("ansi") else 7):
        size = D(hundredths) / 100
        across, upward = (ref.pair_limit(edition, way, size, D(2)) or D(0) for way in ("horizontal", "vertical"))
        for sign in (1, -1):
            job = base_job(edition, "mounted", "single-vision")
            job["right"]["sphere"] = job["left"]["sphere"] = "-2.00"
            beyond = D("0.01")
            if sign > 0:
                read_pair(job, size, sign * across, -sign * (upward + beyond))
                due = [Due("prism.horizontal", "pair", "within"), Due("prism.vertical", "pair", "outside")]
            else:
                read_pair(job, size, sign * (across + beyond), -sign * upward)
                due = [Due("prism.horizontal", "pair", "outside"), Due("prism.vertical", "pair", "within")]
            report = report_on(job)
            wrong += [(size, sign, one) for one in due if one.seen_in(report) != one.outcome]
    assert not wrong, wrong[:5]


@pytest.mark.parametrize("edition", ["ansi-z80.1-2015", "iso-8980-1"])
def test_single_lens_on_the_limit_over_the_grid(edition: str) -> None:
    """The same for an uncut lens by 0.04: on the limit in the right one, 0.001 beyond in the left."""
    wrong = []
    for hundredths in range(0, 1001, 4):
        size = D(hundredths) / 100
        limit = ref.lens_limit(edition, "vertical", size, D("1.50")) or D(0)
        sign = 1 if hundredths % 8 else -1
        job = base_job(edition, "uncut", "single-vision")
        for eye, off in zip(EYES, (sign * limit, sign * (limit + D("0.001"))), strict=True):
            job[eye] |= {"sphere": "-1.50", "prism": prism(D(3), size)}
            job["readings"][eye]["prism"] = prism(D(3), size + off)
        report = report_on(job)
        component = None if edition.startswith("ansi") else "vertical"
        due = [Due("prism.lens", "right", "within", component), Due("prism.lens", "left", "outside", component)]
        wrong += [(size, one) for one in due if one.seen_in(report) != one.outcome]
    assert not wrong, wrong[:5]


@pytest.mark.parametrize("edition", ["ansi-z80.1-2015", "nj-13-35-5.2", "iso-8980-1"])
def test_power_on_the_limit_over_the_grid(edition: str) -> None:
    """Powers 0.00 to 20.00 by 0.05, plus in the right lens, minus in the left: on the limit, then beyond it."""
    wrong = []
    for hundredths in range(0, 2001, 5):
        power = D(hundredths) / 100
        limit = ref.power_limit(edition, power, "single-vision") or D(0)
        off, outcome = [one for one in around(limit) if abs(one[0]) >= limit][hundredths // 5 % 4]
        job = base_job(edition, "uncut", "single-vision")
        for eye, sphere in zip(EYES, (power, -power), strict=True):
            job[eye]["sphere"] = signed(sphere)
            job["readings"][eye]["sphere"] = signed(sphere + off)
        report = report_on(job)
        wrong += [(power, off, eye) for eye in EYES if Due("power", eye, outcome).seen_in(report) != outcome]
    assert not wrong, wrong[:5]


# --- groups: prism or millimetres ------------------------------------------------------------------------------------------


def pair_of_fives(up: str, moved_mm: str | None, **options: str) -> str:
    """The outcome of a wholly read pair of −5.00 D lenses: `up` too much in the pair, found `moved_mm` too high."""
    job = base_job("ansi-z80.1-2015", "mounted", "single-vision", edition_options=options)
    for eye in EYES:
        job[eye]["sphere"] = job["readings"][eye]["sphere"] = "-5.00"
    read_pair(job, D("1.00"), D(0), D(up))
    if moved_mm is not None:
        job["readings"]["right"]["prp_height_mm"] = f"{17 + D(moved_mm)}"
        job["readings"]["left"]["prp_height_mm"] = "17"
        job["readings"]["prp_distance_mm"] = "64"
    outcome: str = report_on(job)["verdict"]["outcome"]
    return outcome


@pytest.mark.parametrize(
    ("option", "up", "moved_mm", "outcome"),
    [
        # S1 prints OR: the pair passes by prism or by millimetres.
        ("either", "0.33", None, "within"),
        ("either", "0.34", "1.0", "within"),
        ("either", "0.33", "1.1", "within"),
        ("either", "0.34", "1.1", "outside"),
        ("either", "0.34", None, "outside"),  # computed millimetres pass nothing
        # S6 quotes 2010, 5.1.4: "1.0 mm AND 0.33".
        ("both", "0.33", "1.0", "within"),
        ("both", "0.34", "1.0", "outside"),
        ("both", "0.33", "1.1", "outside"),
        ("both", "0.33", None, "unread"),
        # The tables (S1 S2 S3) show the millimetres in place of the prism above the switch.
        ("replace", "0.34", "1.0", "within"),
        ("replace", "0.33", "1.1", "outside"),
        ("replace", "0.33", None, "unread"),
        ("prism-only", "0.33", "1.1", "within"),
        ("prism-only", "0.34", "0.0", "outside"),
    ],
)
def test_prism_and_millimetres_together(option: str, up: str, moved_mm: str | None, outcome: str) -> None:
    assert pair_of_fives(up, moved_mm, **{"prism-alternatives": option}) == outcome


@pytest.mark.parametrize(("option", "seen"), [("stronger", "within"), ("both-lenses", "absent")])
def test_whose_power_opens_the_millimetres(option: str, seen: str) -> None:
    """The stronger lens of the pair along 90, or both: domain corrections; common practice. One lens is below 3.375 D."""
    job = base_job("ansi-z80.1-2015", "mounted", "single-vision", edition_options={"millimetre-power": option})
    job["right"] |= {"sphere": "-2.00", "cylinder": "-2.00", "axis": "180"}  # −4.00 along 90
    job["left"]["sphere"] = "-3.00"
    read_pair(job, D("1.00"), D(0), D("0.60"))
    for eye in EYES:
        job["readings"][eye]["prp_height_mm"] = "17"
    assert Due("prp.height", "pair", seen).seen_in(report_on(job)) == seen


def test_the_meridian_opens_the_millimetres_not_the_strongest_power() -> None:
    """−2.00 −2.00 ×90: 4 D lie along 180 only, so distance has its alternative (2.75) and height has none (3.375)."""
    job = base_job("ansi-z80.1-2015", "mounted", "single-vision")
    for eye in EYES:
        job[eye] |= {"sphere": "-2.00", "cylinder": "-2.00", "axis": "90"}
    read_pair(job, D("1.00"), D("1.00"), D("0.60"))
    for eye in EYES:
        job["readings"][eye]["prp_height_mm"] = "17"
    job["readings"]["prp_distance_mm"] = "64"
    report = report_on(job)
    assert Due("prp.height", "pair", "absent").seen_in(report) == "absent"
    assert Due("prp.distance", "pair", "within").seen_in(report) == "within"


# --- which row ---------------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("read_sphere", "read_cylinder", "outcome"),
    [("+1.13", "-2.26", "within"), ("+1.14", "-2.14", "outside"), ("+1.00", "-2.13", "within"), ("+1.00", "-2.14", "outside")],
)
def test_principal_powers_equal_in_size_are_both_tested(read_sphere: str, read_cylinder: str, outcome: str) -> None:
    """+1.00 −2.00 is +1.00 and −1.00: ±0.13 for each (limits S1 S2 S3; that both count: common practice)."""
    job = base_job("ansi-z80.1-2015", "mounted", "single-vision")
    for eye in EYES:
        job[eye] |= {"sphere": "+1.00", "cylinder": "-2.00", "axis": "70"}
        job["readings"][eye] |= {"sphere": read_sphere, "cylinder": read_cylinder, "axis": "70"}
    report = report_on(job)
    assert [Due("power", eye, outcome).seen_in(report) for eye in EYES] == [outcome, outcome]


def uncut_8980(amount: str, base: str, across: str, upward: str) -> Job:
    """The report on an uncut plano of ISO 8980-1 with an oblique prism, read off by two components."""
    job = base_job("iso-8980-1", "uncut", "single-vision")
    for eye in EYES:
        job[eye]["prism"] = [{"amount": amount, "base": base}]
        job["readings"][eye]["prism"] = [{"amount": amount, "base": base}, *prism(D(across), D(upward))]
    return report_on(job)


@pytest.mark.parametrize(("off", "outcome"), [("0.25", "within"), ("0.26", "outside")])
def test_an_oblique_prism_is_resolved_before_its_row_is_chosen(off: str, outcome: str) -> None:
    """2.30 Δ at 30° is 1.99 across and 1.15 up: both in the row up to 2.00 Δ, though 2.30 is not. ISO 8980 [M]."""
    report = uncut_8980("2.30", "30", off, off)
    due = [Due("prism.lens", eye, outcome, way) for eye in EYES for way in ("horizontal", "vertical")]
    assert [one.seen_in(report) for one in due] == [outcome] * 4


@pytest.mark.parametrize(("option", "limit"), [("lens", "0.67"), ("pair", "1.00")])
def test_iso_21987_row_by_the_lens_or_by_the_pair(option: str, limit: str) -> None:
    """1.50 in each: the larger single component is 1.50 (0.67), the pair's is 3.00 (1.00). [M], an option of the edition."""
    for off, outcome in around(D(limit)):
        job = base_job("iso-21987", "mounted", "single-vision", edition_options={"prism-row": option})
        for eye in EYES:
            job[eye]["prism"] = prism(D("1.50"), D(0))
        job["readings"]["right"]["prism"] = prism(D("1.50") + off, D(0))
        job["readings"]["left"]["prism"] = prism(D("1.50"), D(0))
        due = Due("prism.horizontal", "pair", outcome)
        assert due.seen_in(report_on(job)) == outcome, (option, off)


def test_the_makers_cover_the_rows_of_iso() -> None:
    """Cases of pairs and single lenses exist for every row of the tables: 3 components × 2 powers, 3 components."""
    sizes = {(case.at["prism"], case.at["power"]) for case in pair_cases("iso-21987", "single-vision")}
    assert {
        (D(size), D(power)) for size in ("2.00", "2.01", "10.00", "10.01") for power in ("3.25", "3.26", "5.00", "5.01")
    } <= sizes
    lens = {case.at["prism"] for case in lens_component_cases("iso-8980-1", "single-vision")}
    assert {D("2.00"), D("2.01"), D("10.00"), D("10.01")} <= lens
