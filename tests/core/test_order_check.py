"""What a careful person would query in an order: each query is made, alone, and nothing is altered.

The list is common practice; the shares of the add that thinning takes (0.6 and 2/3) are from the
technical brief "Understanding Prism-Thinning" (1998), the 20 prism dioptres from where the
thin-prism formulas end (domain facts, computed).
"""

import copy
from typing import Any

import pytest

from tests.core.strategies import Job, answer_to, codes, errors_of, patched, report_on

EYE = {"sphere": "-2.00", "cylinder": "-1.00", "axis": "90", "pd_mm": "31", "prp_height_mm": "18"}
CLEAN: Job = {
    "format": "wedgewright.job/1",
    "state": "mounted",
    "edition": "ansi-z80.1-2015",
    "lens": {"design": "single-vision"},
    "frame": {"b_mm": "34"},
    "right": EYE | {"prism": [{"amount": "3", "base": "in"}, {"amount": "1.5", "base": "up"}]},
    "left": EYE | {"prism": [{"amount": "3", "base": "in"}, {"amount": "1.5", "base": "down"}]},
    "instrument": {"compensator": "lens-prism", "uncertainty": {"prism": "0.08"}},
}
PROGRESSIVE = patched(CLEAN, lens={"design": "progressive"}, thinning={"rule": "two-thirds"}, right__add="2.00", left__add="2.00")
BIFOCAL = patched(PROGRESSIVE, lens={"design": "bifocal"}, thinning={"rule": "none"})


def base(amount: str, word: str) -> list[Job]:
    return [{"amount": amount, "base": word}]


def queries(job: Job) -> dict[str, str]:
    """Code and field of everything that warns or asks about the order."""
    notes = report_on(job)["notes"]
    return {note["code"]: note["field"] for note in notes if note["severity"] != "note" and note["about"] in ("order", "verdict")}


def test_a_plain_order_is_not_queried() -> None:
    assert [queries(job) for job in (CLEAN, PROGRESSIVE, BIFOCAL)] == [{}, {}, {}]
    assert codes(report_on(CLEAN)) <= {"decentring-too-weak"}


CASES: list[tuple[str, str, Job, dict[str, Any]]] = [
    ("vertical-same-way", "left.prism", CLEAN, {"left__prism": base("1.5", "up"), "right__prism": base("1.5", "up")}),
    ("vertical-same-way", "left.prism", CLEAN, {"left__prism": base("2.5", "down"), "right__prism": base("1.5", "down")}),
    ("vertical-not-even", "left.prism", CLEAN, {"left__prism": base("2", "down"), "right__prism": base("1.5", "up")}),
    ("horizontal-in-and-out", "left.prism", CLEAN, {"left__prism": base("3", "out"), "right__prism": base("3", "in")}),
    ("horizontal-in-and-out", "left.prism", CLEAN, {"left__prism": base("3", "180"), "right__prism": base("3", "180")}),
    ("prism-much", "right.prism", CLEAN, {"right__prism": base("10.01", "in")}),
    ("prism-much", "left.prism", CLEAN, {"left__prism": [*base("8", "in"), *base("8", "down")], "right__prism": base("8", "up")}),
    ("prism-beyond-thin", "right.prism", CLEAN, {"right__prism": base("20.01", "in")}),
    ("prism-opposed-in-lens", "right.prism", CLEAN, {"right__prism": [*base("4", "in"), *base("1", "out")]}),
    ("prism-opposed-in-lens", "left.prism", CLEAN, {"left__prism": [*base("4", "in"), *base("2", "up"), *base("3.5", "down")]}),
    ("prism-zero-with-base", "right.prism", CLEAN, {"right__prism": base("0", "in")}),
    ("single-vision-with-add", "left.add", CLEAN, {"right__add": "2.00", "left__add": "2.00"}),
    ("progressive-without-add", "right.add", PROGRESSIVE, {"right__add": None}),
    ("progressive-without-add", "left.add", PROGRESSIVE, {"left__add": "0"}),
    ("multifocal-without-add", "right.add", BIFOCAL, {"right__add": None}),
    ("adds-differ", "left.add", PROGRESSIVE, {"left__add": "2.25"}),
    ("axis-without-cylinder", "right.axis", CLEAN, {"right__cylinder": "0.00"}),
    ("axis-without-cylinder", "left.axis", CLEAN, {"left__cylinder": None}),
    ("powers-opposite-sign", "left.sphere", CLEAN, {"left__sphere": "+2.00"}),
    ("powers-far-apart", "left.sphere", CLEAN, {"left__sphere": "-5.25"}),
    ("power-odd-step", "right.sphere", CLEAN, {"right__sphere": "-2.20"}),
    ("power-odd-step", "left.sphere", CLEAN, {"left__cylinder": "-1.30"}),
    ("near-pair-distance-pd", "right.pd_mm", patched(CLEAN, lens={"design": "near"}, left__pd_for="near"), {}),
    ("heights-disagree", "right.prp_height_mm", PROGRESSIVE, {"right__fitting_height_mm": "23", "right__cross_above_prp_mm": "4"}),
    (
        "cross-height-missing",
        "left.cross_above_prp_mm",
        PROGRESSIVE,
        {"left__fitting_height_mm": "22", "left__prp_height_mm": None},
    ),
    ("height-above-frame", "left.prp_height_mm", CLEAN, {"left__prp_height_mm": "34.5"}),
    ("pds-disagree", "pd_mm", CLEAN, {"pd_mm": "63"}),
    ("designs-differ", "lens.design", BIFOCAL, {"right__design": "trifocal"}),
    ("design-missing", "lens.design", BIFOCAL, {"lens": None}),
    ("power-missing", "left.sphere", CLEAN, {"left__sphere": None, "left__cylinder": None, "left__axis": None}),
    (
        "thinning-differs",
        "thinning.left_amount",
        PROGRESSIVE,
        {"thinning": {"rule": "amount", "amount": "1", "base": "down", "left_amount": "1.5"}},
    ),
    ("thinning-needs-add", "thinning.rule", CLEAN, {"thinning": {"rule": "two-thirds"}}),
    ("stated-far-from-order", "right.stated", CLEAN, {"right__stated": {"sphere": "-2.60", "cylinder": "-1.00", "axis": "90"}}),
    ("edition-missing", "edition", CLEAN, {"edition": None}),
]
# What these orders rightly bring with them.
COMPANIONS = {
    "progressive-without-add": {"adds-differ"},
    "multifocal-without-add": {"adds-differ"},
    "prism-opposed-in-lens": {"vertical-not-even"},
    "power-missing": {"axis-without-cylinder"},
}


@pytest.mark.parametrize(
    ("code", "field", "job", "changes"), CASES, ids=[f"{case[0]}-{number}" for number, case in enumerate(CASES)]
)
def test_it_is_queried(code: str, field: str, job: Job, changes: dict[str, Any]) -> None:
    found = queries(patched(job, **changes))
    assert found.get(code) == field
    assert set(found) - {code} <= COMPANIONS.get(code, set())


@pytest.mark.parametrize("amount", ["1.20", "1.33", "1.34", "1.25"])
def test_thinning_copied_into_the_prescription(amount: str) -> None:
    """Base down alike in both lenses at 0.6 to 2/3 of the add: both rules of 1998, and near them."""
    job = patched(PROGRESSIVE, right__prism=base(amount, "down"), left__prism=base(amount, "down"))
    assert set(queries(job)) == {"vertical-same-way", "thinning-in-prescription"}
    for changes in (
        {"right__prism": base("0.90", "down"), "left__prism": base("0.90", "down")},
        {"right__prism": base(amount, "up"), "left__prism": base(amount, "up")},
    ):
        assert set(queries(patched(PROGRESSIVE, **changes))) == {"vertical-same-way"}


@pytest.mark.parametrize("eye", ["right", "left"])
def test_prism_without_base_is_refused(eye: str) -> None:
    job = patched(CLEAN, **{f"{eye}__prism": [{"amount": "3"}]})
    assert errors_of(answer_to(job)) == [("base-missing", f"{eye}.prism[0].base")]


def test_limits_of_the_queries_are_where_they_are_said_to_be() -> None:
    assert queries(patched(CLEAN, right__prism=base("10", "in"))) == {}
    assert set(queries(patched(CLEAN, right__prism=base("20", "in")))) == {"prism-much"}
    assert queries(patched(CLEAN, left__sphere="-5.00")) == {}  # 3 D apart on the mean, not more
    assert queries(patched(CLEAN, right__sphere="+0.25")) == {}  # mixed: not opposite in sign
    eighths = [
        f"-{whole}.{part}"
        for whole in range(3)
        for part in ("00", "12", "125", "13", "25", "37", "375", "38", "50", "62", "63", "75", "87", "88")
    ]
    assert [sphere for sphere in eighths if "power-odd-step" in queries(patched(CLEAN, right__sphere=sphere))] == []


def test_a_single_lens_and_an_unknown_design_are_said() -> None:
    assert "eye-not-ordered" in codes(report_on(patched(CLEAN, left=None)))
    assert "design-taken-single-vision" in codes(report_on(patched(CLEAN, lens=None)))


def test_the_order_is_never_altered() -> None:
    """Whatever is queried, what was ordered is what the report holds it to be."""
    for _, _, before, changes in CASES:
        job = patched(before, **changes)
        kept = copy.deepcopy(job)
        report = report_on(job)
        for eye in ("right", "left"):
            parts = job[eye].get("prism", [])
            assert job == kept
            assert len(report["echo"]) > 0
            across = sum(
                float(part["amount"]) * {"in": 1, "out": -1}.get(part["base"], 0) for part in parts if part["base"] != "180"
            )
            up = sum(float(part["amount"]) * {"up": 1, "down": -1}.get(part["base"], 0) for part in parts)
            across += sum(float(part["amount"]) * (-1 if eye == "right" else 1) for part in parts if part["base"] == "180")
            assert report[eye]["prescribed"]["y"] == pytest.approx(up, abs=1e-9)
            assert report[eye]["prescribed"]["x"] == pytest.approx(across * (1 if eye == "right" else -1), abs=1e-9)
