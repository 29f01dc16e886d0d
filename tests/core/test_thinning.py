"""The section `thinning`: equal edges found apart, the printed example and rules of thumb, and the law of the pair.

Sources: rows WE54 and WE55 of the worked examples (technical brief "Understanding Prism-Thinning", vol. 26 no. 35, 1998);
the exact lens of `references/edge_reference.py`; right minus left as vectors for what the pair sees.
"""

from __future__ import annotations

import json
from dataclasses import replace
from decimal import Decimal
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import brentq

from pycore.bench.edge import edge_of
from pycore.bench.thinning import Choice, amount_for_pair, equalising
from pycore.optics.prism import NO_PRISM, Prism
from pycore.sections.answer import SectionAnswer
from pycore.sections.thinning import thinning_section
from tests.core.strategies import patched
from tests.core.test_edge import case_on, codes, example, framing, plain_job, random_lenses, solid_of
from tests.references.edge_reference import ReferenceLens

Job = dict[str, Any]
ADD = {"add": "2.00"}


def progressive(right: Job, left: Job | None = None, **more: Any) -> Job:
    """A progressive job."""
    return plain_job(ADD | right, ADD | left if left is not None else None, lens__design="progressive", **more)


def answer(job: Job) -> SectionAnswer:
    """The section's answer."""
    return thinning_section(case_on(job))


def own(job: Job) -> dict[str, Any]:
    """Its numbers."""
    found = answer(job).own
    assert isinstance(found, dict)
    json.dumps(found, allow_nan=False)
    return found


def choice(found: dict[str, Any], rule: str) -> dict[str, Any]:
    """One choice."""
    return next(item for item in found["choices"] if item["rule"] == rule)


# --- the amount -------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    "order",
    [
        {"sphere": "+3.00"},
        {"sphere": "+2.00", "cylinder": "-1.50", "axis": "30", "prism": [{"amount": "2", "base": "in"}]},
        {"sphere": "-4.00", "cylinder": "+1.00", "axis": "100", "prp_height_mm": "21"},
    ],
)
def test_it_makes_top_and_bottom_equal(order: Job) -> None:
    """The exact single-vision lens, brought to equal edges by scipy's Brent, wants the same amount."""
    lens = framing(plain_job(order)).lens
    prescribed = Prism(Decimal(2), Decimal(0)) if "prism" in order else NO_PRISM
    found = equalising(lens, prescribed)
    assert found is not None
    solid, (right, up) = lens.solid, lens.rim.centre

    def difference(amount: float) -> float:
        exact = ReferenceLens(
            index=solid.index,
            front_d=solid.front_d,
            sphere=float(solid.power.sphere),
            cylinder=float(solid.power.cylinder),
            axis_deg=float(solid.power.axis),
            thickness_mm=lens.minimum_centre_mm,
            prism=(float(prescribed.x), float(prescribed.y) + amount),
        )
        return exact.thickness(right, up + 18.0) - exact.thickness(right, up - 18.0)

    assert found == pytest.approx(brentq(difference, -6.0, 6.0), abs=1e-4)


def test_it_makes_thousands_of_lenses_equal(capsys: pytest.CaptureFixture[str]) -> None:
    """The outside lens with the amount found has top and bottom alike, whatever its power, cylinder, prism and thickness."""
    lens, worst, count = framing(plain_job({"sphere": "+1.00", "prp_height_mm": "20"})).lens, 0.0, 0
    ends = np.array([lens.rim.points[lens.rim.index_at(turn)] for turn in (90.0, 270.0)])
    for body in random_lenses(3000, seed=21):
        solid = solid_of(body)
        framed = replace(lens, solid=replace(solid, prism_x=0.0, prism_y=0.0), centre_mm=body.thickness_mm)
        x, y = body.prism
        found = equalising(framed, Prism(Decimal(x), Decimal(y)))
        if found is None:
            continue
        thinned = replace(body, prism=(x, y + found))
        top, bottom = thinned.thicknesses(ends[:, 0], ends[:, 1])
        worst, count = max(worst, abs(top - bottom)), count + 1
    with capsys.disabled():
        print(f"\nthinning: {count} lenses of 3000 made equal, largest difference of top and bottom {worst:.1e} mm")
    assert count > 1500
    assert worst < 5e-6


def test_plus_lenses_want_it_down_and_high_minus_lenses_up() -> None:
    plus = own(progressive({"sphere": "+2.50"}, {"sphere": "+2.00"}))
    assert plus["fits"]["base"] == "down"
    minus = own(progressive({"sphere": "-6.00", "prp_height_mm": "21"}, {"sphere": "-6.50", "prp_height_mm": "21"}))
    assert minus["fits"]["base"] == "up"
    assert minus["fits"]["y"] > 0
    fits = choice(minus, "fits")
    bare = choice(minus, "none")
    assert fits["right"]["bottom_mm"] < bare["right"]["bottom_mm"]
    assert fits["saved_thickest_mm"] > 0


def test_the_lens_that_gets_there_first_limits_the_pair() -> None:
    """One amount, the smaller; with it that lens's edges are equal and the other's are not yet."""
    found = own(progressive({"sphere": "+4.00", "prp_height_mm": "21"}, {"sphere": "+1.00", "prp_height_mm": "21"}))
    right, left = found["each"]["right"], found["each"]["left"]
    assert right < left < 0
    assert found["fits"]["y"] == pytest.approx(left, abs=0.0051)
    fits = choice(found, "fits")
    assert fits["left"]["top_mm"] == pytest.approx(fits["left"]["bottom_mm"], abs=0.02)
    assert fits["right"]["top_mm"] > fits["right"]["bottom_mm"] + 0.05


@given(st.floats(-5, 5), st.floats(-5, 5))
def test_the_pairs_amount_never_exceeds_either_lens(right: float, left: float) -> None:
    amount = float(amount_for_pair({"right": right, "left": left}))
    if right * left <= 0:
        assert amount == 0.0
    else:
        assert amount * right >= 0
        assert abs(amount) <= min(abs(right), abs(left)) + 0.005
    assert amount_for_pair({"right": right, "left": None}) == 0
    assert amount_for_pair({}) == 0


def test_lenses_that_disagree_get_none() -> None:
    job = progressive(
        {"sphere": "+1.00", "prism": [{"amount": "2", "base": "up"}]},
        {"sphere": "+1.00", "prism": [{"amount": "4", "base": "down"}]},
    )
    found = answer(job)
    assert found.title == "none-fits"
    assert own(job)["fits"] == {"amount": 0.0, "base": None, "y": 0.0}


def test_nothing_reasonable_may_equalise_a_lens() -> None:
    found = answer(progressive({"sphere": "+1.00", "prism": [{"amount": "20", "base": "up"}]}, {"sphere": "+1.00"}))
    assert found.title == "none-fits"
    each = next(row for row in found.rows if row.code == "each")
    assert each.right == "text.none-equalises" or "equal" in each.right
    assert isinstance(found.own, dict)
    assert found.own["each"]["right"] is None
    steep = framing(plain_job({"sphere": "-40.00", "front_curve": "1.00"})).lens
    assert equalising(steep, NO_PRISM) is None  # its back does not even reach the top of the rim


def test_a_balanced_lens_needs_none() -> None:
    found = answer(
        plain_job(
            {"sphere": "-2.00", "add": "2.00", "prp_height_mm": "18"},
            {"sphere": "-2.00", "add": "2.00", "prp_height_mm": "18"},
            lens__design="bifocal",
        )
    )
    assert found.title == "none-needed"
    assert "segment-left-out" in codes(found)


# --- in print ---------------------------------------------------------------------------------------------------------


def test_rules_of_thumb_stand_beside_it() -> None:
    """WE54."""
    _, printed = example("WE54")
    found = own(progressive({"sphere": "+2.00"}, {"sphere": "+2.00", "add": "2.50"}))
    for rule, name in (("two-thirds", "two_thirds"), ("six-tenths", "zero_point_six")):
        assert choice(found, rule)["amount"] == printed[name]
        assert choice(found, rule)["base"] == "down"


def test_the_printed_example() -> None:
    """WE55: +2.00 add 2.00. The frame is not in print: a 54 by 50 oval with the reference point 3.2 mm above its middle
    and the edge's minimum that gives the printed 4.19 mm; all else then comes within 0.1 mm and 0.25 g."""
    _, printed = example("WE55")

    def lens(minimum: float) -> Any:
        body = {
            "design": "progressive",
            "index": "1.498",
            "front_curve": "6.00",
            "minimum_centre_mm": "1.0",
            "density_g_cm3": "1.32",
        }
        frame = {"a_mm": "54", "b_mm": "50", "dbl_mm": "10", "shape": "oval"}
        order = {"sphere": "+2.00", "add": "2.00", "prp_height_mm": "28.2"}
        return framing(plain_job(order, lens=body | {"minimum_edge_mm": f"{minimum:.6f}"}, frame=frame)).lens

    minimum = brentq(lambda least: edge_of(lens(least), NO_PRISM).centre_mm - printed["CT_none"], 0.5, 3.0, xtol=1e-5)
    edges = [edge_of(lens(minimum), Prism(Decimal(0), -amount)) for amount in (Decimal(0), Decimal("1.33"), Decimal("1.76"))]
    for edge, thick_mm, weight_g in zip(
        edges, (printed["CT_none"], printed["CT_133BD"], printed["CT_176BD"]), printed["weight_g"], strict=True
    ):
        assert edge.centre_mm == pytest.approx(thick_mm, abs=0.1)
        assert edge.weight_g == pytest.approx(weight_g, abs=0.25)


# --- laws and the section ---------------------------------------------------------------------------------------------


@given(sphere=st.integers(-16, 16), other=st.integers(-16, 16), height=st.integers(15, 24))
def test_thinning_leaves_the_pair_unchanged_and_saves_what_it_says(sphere: int, other: int, height: int) -> None:
    """Each choice adds one and the same vertical prism to both lenses, so right minus left stays."""
    texts = [f"{value / 4:+.2f}" if value else "0.00" for value in (sphere, other)]
    rights, lefts = ({"sphere": text, "prp_height_mm": str(height)} for text in texts)
    found = own(progressive(rights, lefts))
    bare = found["choices"][0]
    for item in found["choices"]:
        assert item["weight_g"] == pytest.approx(item["right"]["weight_g"] + item["left"]["weight_g"], abs=1e-5)
        assert item["saved_weight_g"] == pytest.approx(bare["weight_g"] - item["weight_g"], abs=2e-6)
        assert item["saved_centre_mm"] == pytest.approx(
            min(bare[eye]["centre_mm"] - item[eye]["centre_mm"] for eye in ("right", "left")), abs=2e-6
        )
        assert set(item) >= {"amount", "base", "y"}  # one amount and base: there is no other for the left lens
    if sphere > 4 and other > 4:  # plus lenses, limited by their edges (perhaps at the sides: then nothing is saved)
        assert choice(found, "fits")["saved_weight_g"] > -0.02


def test_what_the_paperwork_states_is_shown_too() -> None:
    job = progressive({"sphere": "+2.00"}, {"sphere": "+2.00"}, thinning={"rule": "amount", "amount": "0.75", "base": "down"})
    assert choice(own(job), "ordered")["y"] == -0.75
    upwards = patched(job, thinning={"rule": "amount", "amount": "0.75", "base": "up"})
    assert choice(own(upwards), "ordered")["y"] == 0.75


def test_stated_values_do_not_hide_the_prescription() -> None:
    """What the maker states includes thinning: it is reckoned from what was prescribed."""
    plain = progressive({"sphere": "+2.00"}, {"sphere": "+2.00"})
    stated = patched(
        plain, right__stated={"sphere": "+2.00", "prism": [{"amount": "1.33", "base": "down"}], "includes_thinning": True}
    )
    assert own(stated)["each"] == own(plain)["each"]


def test_titles_and_notes() -> None:
    fits = answer(progressive({"sphere": "+4.00", "prp_height_mm": "23"}, {"sphere": "+4.00", "prp_height_mm": "23"}))
    assert fits.title == "fits"
    assert set(fits.title_params) == {"amount", "number", "weight"}
    assert {"same-in-both", "addition-estimated", "may-be-noticed"} <= codes(fits)
    little = answer(progressive({"sphere": "-0.50"}, {"sphere": "-0.50"}, lens__minimum_centre_mm="2.2"))
    assert little.title == "saves-little"
    assert answer(plain_job({"sphere": "-2.00"})).title == "no-add"
    unframed = answer(progressive({"sphere": "+2.00"}, frame=None))
    assert unframed.title == "frame-missing"
    assert [ask.field for ask in unframed.asks] == ["frame.a_mm", "frame.b_mm"]
    assert "one-lens" in codes(answer(progressive({"sphere": "+2.00"})))
    partner = progressive({"sphere": "+2.00"}, {"sphere": "+2.00", "partner": True})
    assert "match-partner" in codes(answer(partner))
    steep = answer(progressive({"sphere": "-30.00", "front_curve": "1.00"}, {"sphere": "-30.00", "front_curve": "1.00"}))
    assert steep.title == "beyond-surface"
    bare = answer(progressive({"sphere": "+2.00"}, {"sphere": "+2.00"}, lens__density_g_cm3=None))
    assert "usual-from-memory" in codes(bare)
    unweighed = answer(
        progressive(
            {"sphere": "+4.00", "prp_height_mm": "23"},
            {"sphere": "+4.00", "prp_height_mm": "23"},
            lens__density_g_cm3=None,
            lens__index="1.90",
        )
    )
    assert isinstance(unweighed.own, dict)
    assert unweighed.own["choices"][1]["weight_g"] is None
    assert unweighed.own["choices"][1]["saved_weight_g"] is None
    assert Choice(rule="none", up=Decimal(0), edges={}).weight_g == 0


# --- the picture ------------------------------------------------------------------------------------------------------


UP: Job = {"sphere": "+1.00", "prism": [{"amount": "2", "base": "up"}]}
DOWN: Job = {"sphere": "+1.00", "prism": [{"amount": "4", "base": "down"}]}


@pytest.mark.parametrize(("rule", "right", "left"), [("fits", {"sphere": "+3.00"}, {"sphere": "+2.50"}), ("two-thirds", UP, DOWN)])
def test_the_picture_shows_the_edges_before_and_after(rule: str, right: Job, left: Job) -> None:
    """At both ends of each cut the drawn lens is as thick as the table says; where nothing fits, by the order's rule."""
    job = progressive(right, left, thinning={"rule": "two-thirds"})
    found, scene = own(job), answer(job).scenes["pair"]
    bodies = [shape["points"] for shape in scene["shapes"] if shape["role"] == "outline"]
    bare = [shape["points"] for shape in scene["shapes"] if shape["role"] == "before"]
    for number, eye in enumerate(("right", "left")):
        drawn, half = bodies[number], len(bodies[number]) // 2
        front, back = drawn[:half], drawn[half:][::-1]
        for end, at in ((0, "bottom_mm"), (-1, "top_mm")):
            assert back[end][0] - front[end][0] == pytest.approx(choice(found, rule)[eye][at], abs=0.002)
            assert bare[number][end][0] - front[end][0] == pytest.approx(choice(found, "none")[eye][at], abs=0.002)
            assert back[end][1] == front[end][1]
    named = [shape["text"] for shape in scene["shapes"] if shape["role"] == "way"]
    assert named[0].startswith({"fits": "what fits", "two-thirds": "two thirds of the add"}[rule])
    left_mm, low, right_mm, high = scene["extent"]
    assert all(left_mm < x < right_mm and low < y < high for body in bodies for x, y in body)


def test_the_picture_of_one_lens_or_of_a_stated_amount() -> None:
    one = answer(progressive({"sphere": "+3.00"}))
    assert one.title == "fits-one"
    assert [shape["word"] for shape in one.scenes["pair"]["shapes"] if shape["role"] == "eye-label"] == ["letters.right"]
    stated = {"rule": "amount", "amount": "1.00", "base": "down"}
    pair = answer(progressive(UP, DOWN, thinning=stated)).scenes["pair"]
    assert next(shape["text"] for shape in pair["shapes"] if shape["role"] == "way") == "as the paperwork says: 1.00 down"
