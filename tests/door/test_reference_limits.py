"""Readings on, above and below every limit of every edition, through the door, as typed text.

The limits are those of `tests/references/limits_reference.py`, written from the sources named there and in
`tests/references/README.md`, not from the project's edition files.
"""

from __future__ import annotations

from decimal import Decimal

import pytest

from tests.references import limits_reference as ref
from tests.references.limit_cases import MAKERS, cases_of
from tests.references.limit_cases_prism import lens_component_cases, pair_cases, read_pair
from tests.references.limit_jobs import EDITIONS, EYES, Due, around, base_job, designs_of, prism, report_on, signed

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


def test_the_makers_cover_the_rows_of_iso() -> None:
    """Cases of pairs and single lenses exist for every row of the tables: 3 components × 2 powers, 3 components."""
    sizes = {(case.at["prism"], case.at["power"]) for case in pair_cases("iso-21987", "single-vision")}
    assert {
        (D(size), D(power)) for size in ("2.00", "2.01", "10.00", "10.01") for power in ("3.25", "3.26", "5.00", "5.01")
    } <= sizes
    lens = {case.at["prism"] for case in lens_component_cases("iso-8980-1", "single-vision")}
    assert {D("2.00"), D("2.01"), D("10.00"), D("10.01")} <= lens
