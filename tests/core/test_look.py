"""Further looks: what each tells apart, what a result does to the causes, and how much a look is worth.

Bayes' theorem and mutual information are checked against scipy (entropy, quadrature); the tables are common practice and only
looked over: never 0 or 1, each cause and result known.
"""

from __future__ import annotations

import math
from itertools import pairwise
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad
from scipy.stats import entropy, norm

from pycore.bench.cause_rank import Label, Named
from pycore.bench.cause_table import AS_ORDERED, NONE_OF_THESE, cause_table
from pycore.bench.cause_weighing import Weighing
from pycore.bench.look import codes_of, information, look_tables
from pycore.bench.look_number import Part, information_of_number
from pycore.bench.look_worth import Offer, Worth, axis_mixture, group_bits, offers, tell_apart, worths
from pycore.case import case_of
from pycore.contract import decode, encode
from pycore.job.document import read_job
from pycore.job.looks import LOOKS, OF_THE_PAIR
from tests.core.strategies import Job, patched
from tests.core.test_causes import LEFT_LENS, PAIR, PL, PR, PROGRESSIVE, RIGHT_LENS, THIN, chance, moved, prism, read, weighed

RIGHT, BOTH = ("right",), ("right", "left")


def looks(job: Job, *taken: tuple[str, str | None, str]) -> Job:
    """The job with results of looks entered."""
    entries = [{"look": look, "result": result} | ({"eye": eye} if eye else {}) for look, eye, result in taken]
    return patched(job, looks=entries)


def best(job: Job) -> Worth:
    """The look that is worth most."""
    return worth_list(job)[0]


def worth_list(job: Job) -> list[Worth]:
    """All looks that can be taken."""
    return worths(read_job(decode(encode(job))), weighed(job))


def worth(job: Job, look: str, eye: str | None) -> Worth:
    """One look's worth."""
    return next(one for one in worth_list(job) if one.offer.table.code == look and one.offer.eye == eye)


REVERSED = read((-3.0, -1.5), PL)
MIRRORED = read((-3.0, 1.5), PL, readings__right__axis=None, readings__right__cylinder=None, readings__right__sphere=None)
BESIDE = read(tuple(a - b for a, b in zip(PR, moved(RIGHT_LENS, 2.0, -3.0), strict=True)), PL)  # type: ignore[arg-type]
ZERO = read((PR[0] + 0.6, PR[1] + 0.5), (PL[0] + 0.6, PL[1] + 0.5))
CENTRED = read((0.0, 0.0), PL)
EVEN = patched(PAIR, left__prism=prism(-3.0, -1.5, "left"))

# --- each look ----------------------------------------------------------------------------------------------------------

CASES: list[tuple[str, str | None, str, Job, str, tuple[str, ...], str, tuple[str, ...]]] = [
    # look, lens, result, job: what gains, and over what
    ("reread-upright", "right", "as-due", read((-3.0, -1.5), (2.0, 1.0)), "frame-upside-down", BOTH, "base-reversed", BOTH),
    ("reread-upright", "right", "same-again", read((-3.0, -1.5), (2.0, 1.0)), "base-reversed", BOTH, "frame-upside-down", BOTH),
    ("lens-out", None, "off-centre", ZERO, "instrument-zero", BOTH, "layout-pd-wrong", BOTH),
    ("half-turn", "right", "not-turned-over", ZERO, "instrument-zero", BOTH, "frame-not-square", BOTH),
    ("mark-afresh", "right", "as-due-elsewhere", BESIDE, "lens-displaced", RIGHT, "read-elsewhere", RIGHT),
    ("mark-afresh", "right", "as-due", CENTRED, "target-centred", RIGHT, "prism-missing", RIGHT),
    ("measure-place", "right", "off", BESIDE, "lens-displaced", RIGHT, "read-elsewhere", RIGHT),
    ("order-slip", None, "base-differs", REVERSED, "side-word-wrong", RIGHT, "base-reversed", RIGHT),
    ("edge-thickness", "right", "opposite", REVERSED, "base-reversed", RIGHT, "frame-upside-down", BOTH),
    ("edge-thickness", "right", "neither", CENTRED, "prism-missing", RIGHT, "target-centred", RIGHT),
]


@pytest.mark.parametrize(("look", "eye", "result", "job", "gains", "gains_in", "over", "over_in"), CASES)
def test_a_look_tells_apart(
    look: str, eye: str | None, result: str, job: Job, gains: str, gains_in: tuple[str, ...], over: str, over_in: tuple[str, ...]
) -> None:
    """The result multiplies the odds by the ratio of both rows of its table: Bayes' theorem."""
    rows = look_tables()[look].rows
    at = LOOKS[look].index(result)
    expected = rows.get(gains, rows["default"])[at] / rows.get(over, rows["default"])[at]
    assert expected > 3
    after = looks(job, (look, eye, result))
    before_odds = [chance(job, gains, *gains_in), chance(job, over, *over_in)]
    after_odds = [chance(after, gains, *gains_in), chance(after, over, *over_in)]
    if before_odds[1] > 1e-6:
        assert after_odds[0] / after_odds[1] == pytest.approx(expected * before_odds[0] / before_odds[1], rel=1e-6)


def test_the_order_slip_tells_eyes_swapped_from_flipped() -> None:
    job = read((3.0, -1.5), (-3.0, 1.5), EVEN)
    after = looks(job, ("order-slip", None, "eyes-exchanged"))
    assert chance(job, "eyes-swapped-in-words") < 0.95
    assert chance(after, "eyes-swapped-in-words") > 0.99
    kept = looks(job, ("order-slip", None, "agrees"))
    assert chance(kept, "base-flipped") > chance(job, "base-flipped")


def test_the_engraving_tells_swapped_bodies_from_reversed() -> None:
    alike = patched(EVEN, left=RIGHT_LENS | {"prism": prism(-3.0, -1.5, "left")})
    alike = patched(alike, readings__left={name: RIGHT_LENS[name] for name in ("sphere", "cylinder", "axis")})
    job = read((-3.0, -1.5), (3.0, 1.5), alike)
    assert chance(looks(job, ("engraving", None, "exchanged")), "lenses-swapped") > 0.9
    assert chance(looks(job, ("engraving", None, "right-way")), "lenses-swapped") < chance(job, "lenses-swapped") / 5


def test_the_axis_tells_mirrored_from_the_wearers_view() -> None:
    """Not read yet, it is asked for; read, it decides as a power and is asked for no more."""
    assert worth(MIRRORED, "read-axis", "right").bits > 0.3
    seen = looks(MIRRORED, ("read-axis", "right", "mirrored"))
    before = chance(MIRRORED, "wearers-view-angle", "right") / chance(MIRRORED, "base-mirrored", "right")
    assert chance(seen, "wearers-view-angle", "right") / chance(seen, "base-mirrored", "right") > 50 * before
    plain = looks(MIRRORED, ("read-axis", "right", "as-due"))
    assert chance(plain, "base-mirrored", "right") > chance(MIRRORED, "base-mirrored", "right")
    read_ = read((-3.0, 1.5), PL)
    assert all(one.offer.table.code != "read-axis" for one in worth_list(read_))


def test_the_other_side_tells_the_front_from_the_wearers_view() -> None:
    job = read((-3.0, 1.5), PL, readings__right__axis="150")
    after = looks(job, ("other-side", "right", "front-first"))
    assert chance(after, "read-from-front", "right") > 3 * chance(after, "wearers-view-angle", "right")
    assert chance(looks(job, ("other-side", "right", "back-first")), "read-from-front", "right") < 0.2


def test_the_meters_key() -> None:
    job = read((-3.0, 1.5), PL, instrument__kind="automatic")
    assert chance(looks(job, ("meter-key", None, "wrong")), "meter-key-wrong", "right") > 0.9
    assert chance(looks(job, ("meter-key", None, "right")), "meter-key-wrong", "right") < 0.1


def test_the_compensators_scale() -> None:
    scale = {"amount": "0.50", "base": "0"}
    job = patched(PAIR, instrument__compensator="lens-prism", readings__right__compensator=scale)
    job = read((PR[0] + 0.5, PR[1]), PL, job)
    assert {"compensator-scale"} <= {one.offer.table.code for one in worth_list(job)}
    entered, opposite = (looks(job, ("compensator-scale", None, result)) for result in ("as-entered", "opposite"))

    def against(weighed_job: Job) -> float:
        told = [one for one in weighed(weighed_job).ranking.causes if "compensator-wrong-sense" not in {named.code for named in one.label}]
        return sum(one.probability for one in told)

    assert 0 < against(opposite) < against(job) / 10
    assert against(entered) > 3 * against(job)


def test_lens_out_tells_missing_thinning_from_a_zero() -> None:
    """Two thirds of an add of 1.00 missing in both lenses, or a zero off by as much."""
    job = read(PR, PL, patched(PROGRESSIVE, right__add="1.00", left__add="1.00"))
    after = looks(job, ("lens-out", None, "off-centre"))
    assert chance(after, "instrument-zero") > chance(after, "thinning-missing")
    assert chance(job, "instrument-zero") < chance(job, "thinning-missing")


def test_a_look_at_one_lens_says_nothing_of_the_other() -> None:
    job = looks(read(PR, (2.0, 1.0)), ("edge-thickness", "right", "as-ordered"))
    assert chance(job, "base-reversed", "left") == pytest.approx(chance(read(PR, (2.0, 1.0)), "base-reversed", "left"), abs=0.02)


# --- which looks are offered, and which is the next one -----------------------------------------------------------------


def offered(job: Job) -> set[tuple[str, str | None]]:
    """The looks offered."""
    return {(one.table.code, one.eye) for one in offers(read_job(decode(encode(job))), weighed(job).bench)}


def test_what_is_offered() -> None:
    always = {("lens-out", None), ("order-slip", None)} | {
        (look, eye) for look in ("half-turn", "mark-afresh", "other-side", "reread-upright") for eye in BOTH
    }
    assert always <= offered(REVERSED)
    assert ("measure-place", "right") not in offered(patched(REVERSED, state="uncut"))
    assert ("engraving", None) not in offered(read((-3.0, -1.5), None, patched(PAIR, left=None, readings__left=None)))
    assert ("edge-thickness", "right") not in offered(read((0.5, 0.5), PL, right__prism=prism(0.5, 0.5, "right")))
    assert ("reread-upright", "left") not in offered(read(PR, None))
    assert not {("meter-key", None), ("compensator-scale", None)} & offered(REVERSED)
    assert ("lens-out", None) not in offered(looks(REVERSED, ("lens-out", None, "centred")))
    assert ("half-turn", "right") not in offered(looks(REVERSED, ("half-turn", "right", "turned-over")))
    assert ("half-turn", "left") in offered(looks(REVERSED, ("half-turn", "right", "turned-over")))


def test_the_next_look_settles_what_the_reading_leaves_open() -> None:
    """What the table of looks says of each pair of rivals (facts on causes, "further looks")."""
    assert best(REVERSED).offer.table.code == "order-slip"
    assert best(BESIDE).offer.table.code == "mark-afresh"
    over = read((-3.0, -1.5), (2.0, 1.0))
    assert best(over).offer.table.code in ("edge-thickness", "reread-upright")
    assert worth(over, "reread-upright", "right").bits > 0.5 * best(over).bits
    assert best(read((-3.0, 1.5), PL, instrument__kind="automatic")).offer.table.code == "meter-key"


def test_entering_the_result_lessens_what_is_left_to_know() -> None:
    def left(job: Job) -> float:
        return float(entropy([one.probability for one in weighed(job).ranking.causes], base=2))

    code = best(BESIDE).offer
    for result in ("as-due", "as-due-elsewhere"):
        assert left(looks(BESIDE, (code.table.code, code.eye, result))) < left(BESIDE)


def test_two_causes_told_apart_by_the_best_look() -> None:
    all_looks = offers(read_job(decode(encode(REVERSED))), weighed(REVERSED).bench)

    def label(code: str, *eyes: str) -> Label:
        return (Named(code, eyes),)  # type: ignore[arg-type]

    found = tell_apart(label("side-word-wrong", "right"), label("base-reversed", "right"), all_looks)
    assert found is not None
    assert found.table.code == "order-slip"
    assert tell_apart(label("base-flipped", "right"), label("base-mirrored", "right"), all_looks) is None


def test_several_causes_average_their_rows() -> None:
    table = look_tables()["lens-out"]
    zero, none = table.rows["instrument-zero"], table.rows[NONE_OF_THESE]
    assert table.row(("instrument-zero", NONE_OF_THESE)) == pytest.approx(tuple((a + b) / 2 for a, b in zip(zero, none, strict=True)))
    assert table.row(("base-reversed", "instrument-zero")) == zero
    assert table.row(("base-reversed",)) == table.row(()) == table.rows["default"]
    assert codes_of((Named(AS_ORDERED, BOTH),), "right") == ()  # type: ignore[arg-type]


# --- the numbers --------------------------------------------------------------------------------------------------------

SHARES = st.lists(st.floats(0.01, 1.0), min_size=2, max_size=5)


@given(SHARES, st.integers(0, 10_000))
def test_information_is_what_scipy_says(weights: list[float], seed: int) -> None:
    """H(result) − Σ p H(result | cause), by scipy.stats.entropy."""
    shares = [weight / sum(weights) for weight in weights]
    rows = np.random.default_rng(seed).dirichlet(np.ones(4), len(shares))
    expected = entropy(np.array(shares) @ rows, base=2) - sum(
        share * entropy(row, base=2) for share, row in zip(shares, rows, strict=True)
    )
    assert information(shares, [tuple(row) for row in rows]) == pytest.approx(expected, abs=1e-9)


def reference_bits(shares: list[float], mixtures: list[tuple[Part, ...]], low: float, high: float) -> float:
    """The same integral by scipy's adaptive quadrature, panel by panel."""

    def density(mixture: tuple[Part, ...], at: float) -> float:
        return sum(part.share * float(norm.pdf(at, part.mean, part.deviation)) for part in mixture)

    def integrand(at: float) -> float:
        cases = [density(mixture, at) for mixture in mixtures]
        mixed = sum(share * case for share, case in zip(shares, cases, strict=True))
        return sum(share * case * math.log2(case / mixed) for share, case in zip(shares, cases, strict=True) if case > 0)

    ends = sorted({min(max(part.mean + side * part.deviation, low), high) for mixture in mixtures for part in mixture for side in (-9, 0, 9)})
    return sum(quad(integrand, start, end, epsabs=1e-8, limit=200)[0] for start, end in pairwise(ends))


def test_the_fixed_quadrature_is_within_a_ten_thousandth_of_scipy() -> None:
    """Random mixtures of two to five cases; the largest difference is printed."""
    random = np.random.default_rng(20)
    worst = 0.0
    for _ in range(25):
        count = int(random.integers(2, 6))
        shares = list(random.dirichlet(np.ones(count)))
        mixtures = [
            tuple(
                Part(float(share), float(random.normal(0, 3)), float(random.uniform(0.1, 2.0)))
                for share in random.dirichlet(np.ones(int(random.integers(1, 4))))
            )
            for _ in range(count)
        ]
        found = information_of_number(shares, mixtures)
        worst = max(worst, abs(found - reference_bits(shares, mixtures, -math.inf, math.inf)))
    print(f"largest difference {worst:.1e} bit")
    assert worst < 1e-4


def test_rereading_is_worth_what_scipy_says() -> None:
    """Again, as due, or something else: each row of the table weighs three normal distributions."""
    job = read((-3.0, -1.5), (2.0, 1.0))
    weighing = weighed(job)
    seen = weighing.bench.held["right"].seen
    off = 2 * math.hypot(*PR)
    parts = (
        (off, math.sqrt(2 * (seen.prism_var - seen.laboratory_var))),
        (0.0, math.sqrt(seen.prism_var)),
        (off / 2, off / 2 + 0.5),
    )
    cases: dict[tuple[float, ...], float] = {}
    for one in weighing.ranking.causes:
        row = look_tables()["reread-upright"].row(codes_of(one.label, "right"))
        cases[row] = cases.get(row, 0.0) + one.probability
    mixtures = [tuple(Part(share, *part) for share, part in zip(row, parts, strict=True)) for row in cases]
    expected = reference_bits(list(cases.values()), mixtures, -math.inf, math.inf)
    assert worth(job, "reread-upright", "right").bits == pytest.approx(expected, abs=1e-4)


def test_the_axis_is_worth_what_scipy_says() -> None:
    weighing = weighed(MIRRORED)
    counted = [one for one in weighing.ranking.causes if one.probability >= 1e-3]
    cases: dict[tuple[Part, ...], float] = {}
    for one in counted:
        mixture = axis_mixture(weighing.bench, "right", one)
        assert math.isclose(sum(part.share for part in mixture), 3.0), "each part also half a turn on either side"
        cases[mixture] = cases.get(mixture, 0.0) + one.probability
    whole = sum(cases.values())
    expected = reference_bits([share / whole for share in cases.values()], list(cases), -90.0, 90.0)
    found = worth(MIRRORED, "read-axis", "right")
    assert found.bits == pytest.approx(expected, abs=1e-4)
    assert group_bits(found.offer, weighing) <= found.bits + 1e-6


def test_the_axis_that_a_cause_predicts() -> None:
    """Mirrored: 180 − 30 is 120 from 30, so 60 the other way round; transposed: 90 off, both ways at once."""
    weighing = weighed(MIRRORED)
    causes = {one.label[0].code: one for one in weighing.ranking.causes if len(one.label) == 1 and one.label[0].eyes == RIGHT}
    middles = {round(part.mean, 1) for part in axis_mixture(weighing.bench, "right", causes["wearers-view-angle"])}
    assert middles == {-60.0 - 180.0, -60.0, 120.0}
    broad = axis_mixture(weighing.bench, "right", causes[NONE_OF_THESE]) if NONE_OF_THESE in causes else ()
    assert all(part.deviation == 90.0 for part in broad)


def test_information_about_groups_is_never_more_than_about_causes() -> None:
    """The chain rule: groups are coarser than causes."""
    for job in (REVERSED, BESIDE, ZERO, CENTRED, read(PR, (PL[0], PL[1] + THIN), PROGRESSIVE)):
        weighing: Weighing = weighed(job)
        for one in worth_list(job):
            assert -1e-9 <= group_bits(one.offer, weighing) <= one.bits + 1e-4


# --- the tables ---------------------------------------------------------------------------------------------------------


def test_every_row_is_a_distribution_over_known_results_of_a_known_cause() -> None:
    known: Any = {AS_ORDERED, "default", *cause_table().causes}
    assert set(look_tables()) == set(LOOKS)
    assert set(OF_THE_PAIR) < set(LOOKS)
    for code, table in look_tables().items():
        assert table.results == LOOKS[code]
        assert set(table.rows) <= known
        assert "default" in table.rows
        for row in table.rows.values():
            assert len(row) == len(table.results)
            assert math.isclose(sum(row), 1.0)
            assert all(0.0 < part < 1.0 for part in row)


def test_an_offer_knows_its_row() -> None:
    offer = Offer(look_tables()["meter-key"], None)
    assert offer.row((Named("meter-key-wrong", RIGHT),)) == look_tables()["meter-key"].rows["meter-key-wrong"]  # type: ignore[arg-type]


def test_the_sides_a_job_document_names_are_kept() -> None:
    job = read_job(decode(encode(looks(REVERSED, ("half-turn", "right", "turned-over"), ("lens-out", None, "centred")))))
    assert [(look.look, look.eye, look.result) for look in job.looks] == [
        ("half-turn", "right", "turned-over"),
        ("lens-out", None, "centred"),
    ]
    assert case_of(job, None).dues.keys() == set(BOTH)
    assert LEFT_LENS["axis"] == "75"
