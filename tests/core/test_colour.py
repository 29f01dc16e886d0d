"""The colour fringe of each lens and where formulas and usual thresholds end.

Sources: P/ν (domain facts 4.19); the threshold of 0.1 Δ and the Abbe numbers of materials are from memory.
"""

import json
import math
from decimal import Decimal
from typing import Any

import numpy as np
import pytest
from hypothesis import given

from pycore.bench.colour import dioptric_spread, transverse
from pycore.case import case_of
from pycore.contract import decode
from pycore.job.document import read_job
from pycore.optics.material import usual_material
from pycore.optics.power import Power
from pycore.optics.prism import Prism
from pycore.sections.answer import SectionAnswer
from pycore.sections.colour import colour_section
from tests.core.strategies import WORDS, Job, jobs, patched

EXACT = pytest.approx


def colour(job: Job) -> SectionAnswer:
    return colour_section(case_of(read_job(decode(json.dumps(job))), None))


def row(answer: SectionAnswer, code: str) -> Any:
    return next(item for item in answer.rows if item.code == code)


def asks(answer: SectionAnswer) -> dict[str, tuple[str, bool]]:
    return {ask.field: (ask.usual, ask.used) for ask in answer.asks}


def base_in(amount: str) -> list[Job]:
    return [{"amount": amount, "base": "in"}]


JOB: Job = {
    "format": "wedgewright.job/1",
    "state": "mounted",
    "lens": {"design": "single-vision", "index": "1.586", "abbe": "30"},
    "wear": {"reading_depth_mm": "10", "reading_inset_mm": "2.5"},
    "right": {"sphere": "0", "prism": base_in("3")},
    "left": {"sphere": "0"},
}

# Index, Abbe number, fringe of 3 Δ: table "Data realism" of the domain facts, all from memory.
TABLE = [
    ("1.498", "58", 0.05),
    ("1.523", "58.6", 0.05),
    ("1.53", None, 0.07),
    ("1.56", None, 0.08),
    ("1.586", "30", 0.10),
    ("1.60", "41", 0.07),
    ("1.67", "32", 0.09),
    ("1.74", "33", 0.09),
]


@pytest.mark.parametrize(("index", "abbe", "fringe"), TABLE)
def test_fringe_of_three_prism_dioptres(index: str, abbe: str | None, fringe: float) -> None:
    job = patched(JOB, lens__index=index, lens__abbe=None)
    answer = colour(job)
    entry = answer.eyes["right"]
    assert entry["reference"]["fringe"] == EXACT(fringe, abs=0.005)
    assert entry["assumed"] is True
    assert row(answer, "abbe").assumed
    assert abbe is None or asks(answer)["lens.abbe"] == (abbe, True)
    given_abbe = colour(patched(job, lens__abbe="40"))
    assert given_abbe.eyes["right"]["reference"]["fringe"] == EXACT(0.075)
    assert not row(given_abbe, "abbe").assumed
    assert asks(given_abbe) == {}


def test_spread_of_power() -> None:
    """WE63, trade article on chromatic aberration: +6.00 of Abbe number 30 spreads over 0.2 D; the strongest meridian counts."""
    assert dioptric_spread(Power(Decimal(6)), Decimal(30)) == Decimal("0.2")
    assert dioptric_spread(Power(Decimal(3), Decimal(-9), Decimal(20)), Decimal(30)) == Decimal("0.2")
    assert colour(patched(JOB, right__sphere="+6.00")).eyes["right"]["spread_d"] == EXACT(0.2)
    assert transverse(Prism(Decimal(3), Decimal(-4)), Decimal(50)) == Decimal("0.1")


def test_at_the_reading_point_against_numpy() -> None:
    """P/ν of Prentice's prism there, by numpy's matrices, over random toric lenses; the largest difference is printed."""
    rng, largest = np.random.default_rng(9), 0.0
    for _ in range(400):
        sphere, cylinder, axis = round(rng.uniform(-8, 8), 2), round(rng.uniform(-4, 4), 2), int(rng.integers(1, 181))
        up, inset, abbe = round(rng.uniform(0, 14), 1), round(rng.uniform(-2, 4), 1), round(rng.uniform(28, 60), 1)
        eye = {"sphere": f"{sphere:+.2f}", "cylinder": f"{cylinder:+.2f}", "axis": str(axis), "prism": base_in("2")}
        answer = colour(
            patched(
                JOB, lens__abbe=str(abbe), wear={"reading_depth_mm": str(up), "reading_inset_mm": str(inset)}, left=eye, right=None
            )
        )
        angle = math.radians(axis)
        turn = np.array([[math.cos(angle), -math.sin(angle)], [math.sin(angle), math.cos(angle)]])
        power = turn @ np.diag([sphere, sphere + cylinder]) @ turn.T
        prism = np.array([-2.0, 0.0]) - power @ np.array([-inset, -up]) / 10
        found = answer.eyes["left"]
        largest = max(
            largest, abs(found["reading"]["fringe"] - np.linalg.norm(prism) / abbe), abs(found["reference"]["fringe"] - 2 / abbe)
        )
    print(f"\ncolour: largest difference to numpy {largest:.1e} Δ over 400 lenses")
    assert largest < 5e-9


@pytest.mark.parametrize(("amount", "title"), [("3", "below"), ("3.01", "above")])
def test_threshold(amount: str, title: str) -> None:
    """0.1 Δ, from memory, marked so: 3 Δ of Abbe number 30 is exactly on it and not above."""
    answer = colour(patched(JOB, right__prism=base_in(amount)))
    assert answer.title == title
    assert answer.own["threshold_provenance"] == "memory"
    codes = {code for code, _ in answer.notes}
    assert "threshold-memory" in codes
    assert ("above-reference" in codes, "above-reading" in codes) == (title == "above", title == "above")


def test_the_texts_tell_a_fringe_from_the_threshold() -> None:
    """Never "0.10, above 0.10" (the project's rule for every text)."""
    answer = colour(patched(JOB, right__prism=base_in("3.01")))
    assert answer.title_params == {"eye": "right", "amount": "0.1003", "limit": "0.10"}
    assert row(answer, "reference").right == "0.1003 Δ"


def test_the_largest_is_named() -> None:
    answer = colour(patched(JOB, left__sphere="-9.00", left__prism=base_in("1")))
    assert answer.own["largest"] == {"eye": "left", "at": "reading", "amount": EXACT(math.hypot(1 + 2.25, 9) / 30)}
    assert ("above-reading", {"eye": "left", "amount": "0.32", "limit": "0.10"}) in answer.notes


def test_what_is_missing_is_asked() -> None:
    answer = colour(patched(JOB, lens={"index": "1.90"}))
    assert (answer.own, answer.title, answer.rows, answer.notes) == (None, "unknown", (), ())
    assert asks(answer) == {"lens.abbe": ("", False)}
    answer = colour(patched(JOB, lens={"design": "single-vision"}, wear=None))
    assert asks(answer) == {
        "lens.index": ("1.498", True),
        "lens.abbe": ("58", True),
        "wear.reading_depth_mm": ("10", True),
        "wear.reading_inset_mm": ("2.5", True),
    }
    assert row(answer, "reading").assumed
    assert not row(colour(JOB), "reading").assumed
    assert usual_material(Decimal("1.90")) is None
    assert colour(patched(JOB, left={"partner": True})).eyes.keys() == {"right"}


def test_beyond_the_thin_formulas() -> None:
    """Above 20 Δ marked, never refused (domain facts section 8); beyond 6 D and 10 mm said (domain facts 4.17)."""
    answer = colour(patched(JOB, right__prism=base_in("20"), left__prism=base_in("20.01")))
    codes = {(code, params.get("eye")) for code, params in answer.notes}
    assert ("beyond-thin-reference", "left") in codes
    assert ("beyond-thin-reference", "right") not in codes
    assert answer.eyes["left"]["reading"]["beyond_thin"] is True
    strong = patched(JOB, right__sphere="-6.25", left__sphere="-6.00")
    assert [params["eye"] for code, params in colour(strong).notes if code == "far-out"] == ["right"]
    close = patched(strong, wear={"reading_depth_mm": "8", "reading_inset_mm": "6"})
    assert [params["eye"] for code, params in colour(close).notes if code == "far-out"] == []


@given(jobs(read=False))
def test_every_job_is_answered_in_words(job: Job) -> None:
    answer = colour(job)
    assert f"colour.{answer.title}" in WORDS["section_titles"]
    assert all(f"colour.{item.code}" in WORDS["section_rows"] for item in answer.rows)
    assert all(f"colour.{code}" in WORDS["section_notes"] for code, _ in answer.notes)
    assert all(ask.field.split(".")[-1] in WORDS["fields"] for ask in answer.asks)
