"""How likely a decision is wrong, and guarded acceptance: against scipy, whose distributions are
an independent implementation; the rules are those of JCGM 106:2012 (7, probability of conformity
with a flat prior; 8.2 simple and 8.3 guarded acceptance)."""

import math
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import brentq
from scipy.stats import ncx2, norm

from pycore.bench.doubt import (
    ACCEPTED_DOUBT,
    chance_within,
    chance_within_circle,
    largest_accepted,
    repeats_needed,
)
from tests.core.strategies import Job, checks_of, codes, decimals, report_on

LIMITS = decimals("0.05", "3")
# Down to the smallest uncertainty that may be typed (0.001), read twenty times.
UNCERTAINTIES = st.one_of(st.floats(0.02, 0.5), st.floats(0.0002, 0.02))


def normal_within(deviation: float, limit: float, uncertainty: float) -> float:
    return float(norm.cdf((limit - deviation) / uncertainty) - norm.cdf((-limit - deviation) / uncertainty))


def rice_within(distance: float, radius: float, uncertainty: float) -> float:
    """The squared distance of a plane Gaussian is a noncentral chi-square with two degrees."""
    return float(ncx2.cdf((radius / uncertainty) ** 2, 2, (distance / uncertainty) ** 2))


@given(share=st.floats(-3, 3), limit=LIMITS, uncertainty=UNCERTAINTIES)
def test_chance_between_two_limits(share: float, limit: Decimal, uncertainty: float) -> None:
    deviation = Decimal(share) * limit
    wanted = normal_within(float(deviation), float(limit), uncertainty)
    assert chance_within(deviation, limit, uncertainty) == pytest.approx(wanted, abs=1e-9)


@given(share=decimals("0", "3", "0.00001").map(float), limit=LIMITS, uncertainty=UNCERTAINTIES)
def test_chance_within_a_circle(share: float, limit: Decimal, uncertainty: float) -> None:
    distance = Decimal(share) * limit
    away = (float(distance) - float(limit)) / uncertainty
    # Far from the rim on either side the answer is plain, and scipy's series is at its end.
    wanted = float(away < 0) if abs(away) > 12 else rice_within(float(distance), float(limit), uncertainty)
    allowed = 1e-9 if float(limit) < 500 * uncertainty else 1e-8  # scipy's series wears out as well
    assert chance_within_circle(distance, limit, uncertainty) == pytest.approx(wanted, abs=allowed)


@pytest.mark.parametrize("uncertainty", [0.5, 0.1, 0.02, 0.005, 0.002, 0.001, 0.0003])
@pytest.mark.parametrize("distance", ["0", "0.05", "0.2", "0.32", "0.33", "0.34", "0.5"])
def test_chance_within_a_circle_at_every_uncertainty(distance: str, uncertainty: float) -> None:
    test_chance_within_a_circle.hypothesis.inner_test(float(distance) / 0.33, Decimal("0.33"), uncertainty)  # type: ignore[attr-defined]


def test_without_uncertainty_there_is_no_doubt() -> None:
    for chance in (chance_within, chance_within_circle):
        assert [chance(Decimal(off), Decimal("0.33"), 0.0) for off in ("0", "0.33", "0.34")] == [1.0, 1.0, 0.0]


@given(limit=LIMITS, uncertainty=st.floats(0.01, 0.5), first=st.floats(0, 2), second=st.floats(0, 2))
def test_chance_falls_with_the_deviation(limit: Decimal, uncertainty: float, first: float, second: float) -> None:
    near, far = sorted((Decimal(first) * limit, Decimal(second) * limit))
    for chance in (chance_within, chance_within_circle):
        assert chance(near, limit, uncertainty) >= chance(far, limit, uncertainty) - 1e-12
        assert 0 <= chance(far, limit, uncertainty) <= 1


@given(limit=LIMITS, share=st.floats(0.02, 0.9))
def test_guarded_acceptance(limit: Decimal, share: float) -> None:
    """The acceptance limit lies where scipy's chance of non-conformity is one in twenty."""
    uncertainty = share * float(limit)
    for chance, reference in ((chance_within, normal_within), (chance_within_circle, rice_within)):
        accepted = largest_accepted(limit, lambda off, chance=chance: chance(off, limit, uncertainty))  # type: ignore[misc]
        if reference(0.0, float(limit), uncertainty) < 1 - ACCEPTED_DOUBT:
            assert accepted is None
            continue
        wanted = brentq(
            lambda off, reference=reference: reference(off, float(limit), uncertainty) - 0.95, 0.0, float(limit), xtol=1e-13
        )
        assert accepted is not None
        assert float(accepted) == pytest.approx(wanted, abs=1e-7 * float(limit) + 1e-8)


@given(uncertainty=st.floats(0.05, 2.0))
def test_how_many_readings_would_do(uncertainty: float) -> None:
    needed = math.ceil((uncertainty * norm.ppf(0.975) / 0.33) ** 2 - 1e-9)
    found = repeats_needed(lambda count: chance_within(Decimal(0), Decimal("0.33"), uncertainty / math.sqrt(count)))
    assert found == (max(1, needed) if needed <= 20 else None)


# --- through the door ----------------------------------------------------------------------------------------------------


def pair(deviation: str, **keys: Job) -> Job:
    """A mounted pair whose vertical is off by `deviation`, read at its marks."""
    lens = {"sphere": "-1.00", "pd_mm": "31", "prp_height_mm": "18"}
    return {
        "format": "wedgewright.job/1",
        "state": "mounted",
        "edition": "ansi-z80.1-2015",
        "lens": {"design": "single-vision"},
        "right": lens,
        "left": lens,
        "instrument": {"uncertainty": {"prism": "0.08"}, "zero_uncertainty": "0.05"},
        "readings": {"right": {"prism": [{"amount": deviation, "base": "up"}]}, "left": {"prism": [{"amount": "0"}]}},
        **keys,
    }


@pytest.mark.parametrize("repeats", [0, 1, 2, 3, 19])
@pytest.mark.parametrize("deviation", ["0", "0.20", "0.33", "0.45"])
def test_doubt_of_a_pair(deviation: str, repeats: int) -> None:
    """The zero is common to both lenses and cancels; further readings of one lens make it surer, but
    never below its step's √(0.25²/12) (JCGM 100:2008, F.2.2.1); four alike leave just that."""
    job = pair(deviation)
    job["readings"]["right"]["repeats"] = [{"prism": [{"amount": deviation, "base": "up"}]}] * repeats
    check = checks_of(report_on(job), "prism.vertical")[0]
    step, count = 0.25**2 / 12, repeats + 1
    of_right = step if count >= 4 else (0.08**2 - step) / count + step
    uncertainty = math.sqrt(of_right + 0.08**2)
    inside = normal_within(float(deviation), 0.33, uncertainty)
    assert check["uncertainty"] == pytest.approx(uncertainty, abs=1e-9)
    assert check["doubt"] == pytest.approx(1 - inside if check["outcome"] == "within" else inside, abs=1e-9)


def test_a_reading_on_the_limit_is_within_and_half_in_doubt() -> None:
    """Simple acceptance takes it; its risk is one half (JCGM 106:2012, 8.2)."""
    report = report_on(pair("0.33"))
    check = checks_of(report, "prism.vertical")[0]
    assert (report["verdict"]["outcome"], check["margin"], check["outcome"]) == ("within", 0, "within")
    assert check["doubt"] == pytest.approx(0.5, abs=1e-6)
    assert "close" in codes(report)
    assert report["verdict"]["sentence"]["code"] == "within-close"


def test_doubt_of_a_single_lens_counts_the_zero() -> None:
    job = pair("0.25", state="uncut")
    check = checks_of(report_on(job), "prism.lens", "right")[0]
    assert check["uncertainty"] == pytest.approx(math.hypot(0.08, 0.05), abs=1e-9)
    assert check["doubt"] == pytest.approx(1 - rice_within(0.25, 0.33, math.hypot(0.08, 0.05)), abs=1e-9)


def test_uncertainty_of_every_other_figure() -> None:
    """A cylinder and an add are each the difference of two focus readings, a height of two places."""
    job = pair("0", lens={"design": "progressive"}, thinning={"rule": "none"})
    for eye in ("right", "left"):
        job[eye] = job[eye] | {"sphere": "-5.00", "cylinder": "-1.00", "axis": "90", "add": "2.00"}
        job["readings"][eye] |= {
            "sphere": "-5.00",
            "cylinder": "-1.00",
            "axis": "90",
            "add": "2.00",
            "prp_height_mm": "18",
            "pd_mm": "31",
        }
    job["instrument"]["uncertainty"] |= {"power_d": "0.05", "axis_deg": "0.8", "position_mm": "0.4"}
    found = {check["id"]: check["uncertainty"] for check in report_on(job)["verdict"]["checks"]}
    single = {"power": 0.05, "axis": 0.8, "prp.height": 0.4, "prp.distance": 0.4}  # progressives are measured each
    double = {"cylinder": 0.05 * math.sqrt(2), "add": 0.05 * math.sqrt(2)}
    pair_of_prisms = {"prism.vertical": 0.08 * math.sqrt(2), "prism.horizontal": 0.08 * math.sqrt(2)}
    assert found == pytest.approx(single | double | pair_of_prisms, abs=1e-9)
    job |= {"lens": {"design": "bifocal"}}
    found = {check["id"]: check["uncertainty"] for check in report_on(job)["verdict"]["checks"]}
    assert (found["prp.height"], found["prp.distance"]) == pytest.approx((0.4 * math.sqrt(2), 0.4), abs=1e-9)


def test_the_worst_group_makes_the_outcome() -> None:
    """Outside before undecided before unread before within."""
    job = pair("0.30", decision_rule="guarded")
    assert report_on(job)["verdict"]["outcome"] == "undecided"
    job["readings"]["right"]["prism"].append({"amount": "2", "base": "in"})
    assert report_on(job)["verdict"]["outcome"] == "outside"
    half = pair("0.30", decision_rule="guarded", edition_options={"prism-alternatives": "both"})
    for eye in ("right", "left"):
        half[eye] = half[eye] | {"sphere": "-5.00"}
    assert report_on(half)["verdict"]["outcome"] == "undecided"  # though the millimetres are still to be read
    half["readings"]["right"]["prism"] = [{"amount": "0", "base": "up"}]
    assert report_on(half)["verdict"]["outcome"] == "unread"


@pytest.mark.parametrize(("option", "together"), [("either", lambda p, q: 1 - (1 - p) * (1 - q)), ("both", lambda p, q: p * q)])
def test_doubt_of_alternatives(option: str, together: object) -> None:
    """Prism and millimetres are two measurements: their chances multiply (independence)."""
    job = pair("0.30", edition_options={"prism-alternatives": option})
    for eye in ("right", "left"):
        job[eye] = job[eye] | {"sphere": "-5.00"}
    job["readings"]["right"]["prp_height_mm"], job["readings"]["left"]["prp_height_mm"] = "18.6", "18"
    prism, height = (checks_of(report_on(job), name)[0] for name in ("prism.vertical", "prp.height"))
    chances = normal_within(0.30, 0.33, 0.08 * math.sqrt(2)), normal_within(0.6, 1.0, 0.3 * math.sqrt(2))
    assert prism["doubt"] == height["doubt"] == pytest.approx(1 - together(*chances), abs=1e-9)  # type: ignore[operator]


@pytest.mark.parametrize("deviation", ["0.10", "0.14", "0.15", "0.30", "0.50", "0.56"])
def test_guarded_rule(deviation: str) -> None:
    """Undecided wherever the chance of being wrong is above one in twenty, on either side."""
    report = report_on(pair(deviation, decision_rule="guarded"))
    inside = normal_within(float(deviation), 0.33, 0.08 * math.sqrt(2))
    outcome = "within" if inside >= 0.95 else "outside" if inside <= 0.05 else "undecided"
    assert checks_of(report, "prism.vertical")[0]["outcome"] == outcome
    assert report["verdict"]["outcome"] == outcome
    assert "close" not in codes(report)


def test_guarded_rule_says_before_reading_that_nothing_could_pass() -> None:
    """u√2·1.96 > 0.33 from u = 0.12; n readings of each lens divide by n what is not the step's."""
    job = pair("0", decision_rule="guarded")
    del job["readings"]
    job["instrument"]["uncertainty"]["prism"] = "0.20"
    note = next(note for note in report_on(job)["notes"] if note["code"] == "guarded-needs-repeats")
    step, allowed = 0.25**2 / 12, (0.33 / 1.959964) ** 2 / 2
    assert note["params"]["count"] == str(math.ceil((0.20**2 - step) / (allowed - step))) == "4"
    job["instrument"]["uncertainty"]["prism"] = "0.80"
    assert "guarded-never-passes" in codes(report_on(job))
    job["instrument"]["uncertainty"]["prism"] = "0.05"
    assert not codes(report_on(job)) & {"guarded-needs-repeats", "guarded-never-passes"}
    assert "guarded-needs-repeats" in codes(
        report_on(pair("0", decision_rule="guarded", state="uncut", instrument={"uncertainty": {"prism": "0.2"}}))
    )


def test_guarded_rule_says_so_for_the_axis_too() -> None:
    """N.J. Admin. Code 13:35-5.2: ±1° from 1.12 D; with an uncertainty of 1° nothing passes."""
    job = pair("0", decision_rule="guarded", edition="nj-13-35-5.2")
    for eye in ("right", "left"):
        job[eye] = job[eye] | {"cylinder": "-1.50", "axis": "90"}
    notes = [note for note in report_on(job)["notes"] if note["code"] == "guarded-never-passes"]
    assert any("axis" in note["params"]["check"] for note in notes)


@pytest.mark.parametrize(("strict", "wide"), [("right", "left"), ("left", "right")])
def test_guarded_rule_looks_at_both_lenses(strict: str, wide: str) -> None:
    """N.J.: 1 degree over 1.00 D, 3 degrees up to 0.37 D; the lens that cannot pass is told, whichever it is."""
    job = pair("0", decision_rule="guarded", edition="nj-13-35-5.2")
    job[strict] = job[strict] | {"cylinder": "-1.50", "axis": "90"}
    job[wide] = job[wide] | {"cylinder": "-0.25", "axis": "90"}
    notes = [note for note in report_on(job)["notes"] if note["code"] == "guarded-never-passes"]
    assert [note["params"]["check"] for note in notes] == ["axis"]
