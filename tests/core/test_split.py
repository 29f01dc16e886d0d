"""The section `split`: printed examples, the sums that every share keeps, and equal lenses found apart.

Sources: rows WE03 (opticianry course OPH 142) and WE09 (apprenticeship review) of the worked examples; vector addition;
scipy's Brent on the edges themselves.
"""

from __future__ import annotations

import json
import math
from decimal import Decimal
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import brentq

from pycore.bench.edge import COARSE, edge_of
from pycore.bench.split import shared, shares, together
from pycore.optics.prism import EYES, NO_PRISM, Prism, from_base
from pycore.sections.answer import SectionAnswer
from pycore.sections.split import split_section
from pycore.words import say
from tests.core.strategies import patched
from tests.core.test_edge import case_on, codes, example, framing, plain_job

Job = dict[str, Any]
KINDS = ["as-ordered", "halves", "all-right", "all-left", "equal-edges", "equal-weight"]


def order_of(text: str, sphere: str = "0.00") -> Job:
    """An eye's order out of a row's shorthand, as "pl 3BU" or "1.5BU & 2BI"."""
    words = {"BU": "up", "BD": "down", "BI": "in", "BO": "out"}
    parts = [part.strip() for part in text.replace("pl", "").split("&")]
    prisms = [{"amount": part[:-2].strip(), "base": words[part[-2:]]} for part in parts]
    return {"sphere": sphere, "prism": prisms}


def answer(job: Job) -> SectionAnswer:
    """The section's answer."""
    return split_section(case_on(job))


def ways(job: Job) -> dict[str, dict[str, Any]]:
    """Its shares by kind."""
    found = answer(job).own
    assert isinstance(found, list)
    json.dumps(found, allow_nan=False)
    return {share["kind"]: share for share in found}


@pytest.mark.parametrize("id_", ["WE03", "WE09"])
def test_halves_in_print(id_: str) -> None:
    given_, printed = example(id_)
    found = ways(plain_job(order_of(given_["R"]), order_of(given_["L"])))
    wanted = ways(plain_job(order_of(printed["R"]), order_of(printed["L"])))["as-ordered"]
    for eye in ("right", "left"):
        assert (found["halves"][eye]["x"], found["halves"][eye]["y"]) == (wanted[eye]["x"], wanted[eye]["y"])
    assert found["halves"]["needs_agreement"]
    assert not found["as-ordered"]["needs_agreement"]


components = st.builds(
    lambda amount, base: from_base(Decimal(amount) / 100, Decimal(base)), st.integers(0, 1200), st.integers(0, 359)
)


@given(right=components, left=components, thinning=st.integers(-200, 200))
def test_every_share_keeps_what_the_pair_sees(right: Prism, left: Prism, thinning: int) -> None:
    """Right minus left is the order's, exactly; what is due beyond it stays with each lens."""
    down = Prism(Decimal(0), Decimal(thinning) / 100)
    ordered = {"right": right, "left": left}
    for share in shares(ordered, {"right": down, "left": down}, {}):  # type: ignore[arg-type]
        assert together(share.prisms) == together(ordered)  # type: ignore[arg-type]
        assert together(share.expected) == together(ordered)  # type: ignore[arg-type]
        assert share.expected["left"] - share.prisms["left"] == down
        assert (share.thickest_mm, share.weight_g) == (None, None)


@given(part=st.integers(0, 100))
def test_any_part_keeps_the_sum(part: int) -> None:
    whole = Prism(Decimal("5.37"), Decimal("-2.11"))
    assert together(shared(whole, Decimal(part) / 100)) == whole


def test_hundreds_of_pairs_keep_their_sum_and_come_out_equal(capsys: pytest.CaptureFixture[str]) -> None:
    """Random pairs: right minus left of every way is the order's (numpy); where a way makes both equal, they are."""
    draw, kept, apart, reached, count = np.random.default_rng(31), 0.0, 0.0, 0, 300
    for _ in range(count):
        x, y = draw.uniform(-5, 5, 2).round(2), draw.uniform(-5, 5, 2).round(2)
        ordered = {eye: Prism(Decimal(str(x[i])), Decimal(str(y[i]))) for i, eye in enumerate(EYES)}
        orders = [{"sphere": f"{draw.uniform(-5, 3):+.2f}", "cylinder": f"{draw.uniform(-2, 2):+.2f}", "axis": "40"} for _ in EYES]
        job = plain_job(*orders)
        lenses = {eye: framing(job, eye).lens for eye in EYES}
        for way in shares(ordered, dict.fromkeys(EYES, NO_PRISM), lenses):
            right, left = (np.array([float(way.prisms[eye].x), float(way.prisms[eye].y)]) for eye in EYES)
            kept = max(kept, float(np.abs(right - left - (x[0] - x[1], y[0] - y[1])).max()))
            if way.kind in ("equal-edges", "equal-weight") and way.reached:
                sizes = [way.edges[eye].thickest[1] if way.kind == "equal-edges" else way.edges[eye].weight_g or 0.0 for eye in EYES]
                apart, reached = max(apart, abs(sizes[0] - sizes[1])), reached + 1
    with capsys.disabled():
        print(f"\nsplit: {count} pairs keep right minus left to {kept:.1e} Δ; {reached} ways equal to {apart:.3f} mm or g")
    assert kept < 1e-12
    assert reached > count
    assert apart < 0.06


def test_equal_lenses_are_equal_and_stand_where_brent_finds_them() -> None:
    job = plain_job(order_of("4BI", "-2.00"), order_of("4BI", "-4.50"))
    found = ways(job)
    assert list(found) == KINDS
    edges, weights = found["equal-edges"]["edges"], found["equal-weight"]["edges"]
    assert edges["right"]["thickest_mm"] == pytest.approx(edges["left"]["thickest_mm"], abs=0.05)
    assert weights["right"]["weight_g"] == pytest.approx(weights["left"]["weight_g"], abs=0.05)
    lenses = [framing(job, eye).lens for eye in ("right", "left")]  # type: ignore[arg-type]

    def edge_miss(in_right: float) -> float:
        right, left = (
            edge_of(lens, Prism(Decimal(x), Decimal(0)), COARSE) for lens, x in zip(lenses, (in_right, in_right - 8.0), strict=True)
        )
        return right.thickest[1] - left.thickest[1]

    def weight_miss(in_right: float) -> float:
        right, left = (
            edge_of(lens, Prism(Decimal(x), Decimal(0)), COARSE) for lens, x in zip(lenses, (in_right, in_right - 8.0), strict=True)
        )
        return right.volume_mm3 - left.volume_mm3

    assert found["equal-edges"]["right"]["x"] == pytest.approx(brentq(edge_miss, 0.0, 8.0), abs=0.1)
    assert found["equal-weight"]["right"]["x"] == pytest.approx(brentq(weight_miss, 0.0, 8.0), abs=0.15)
    assert answer(job).title == "thinner"


def test_where_no_share_makes_both_equal_the_nearest_is_marked() -> None:
    found = ways(plain_job(order_of("0.50BI", "-8.00"), order_of("0.50BI", "-1.00")))
    for kind, measure in (("equal-edges", "thickest_mm"), ("equal-weight", "weight_g")):
        gaps = {name: abs(found[name]["edges"]["right"][measure] - found[name]["edges"]["left"][measure]) for name in KINDS}
        assert not found[kind]["reached"]
        assert gaps[kind] == min(gaps[name] for name in ("halves", "all-right", "all-left"))
    # Base in takes from the temporal side, where a minus lens is thickest: all of it goes there.
    assert found["equal-edges"]["right"]["x"] == 1.0
    rows = {row.code: row for row in answer(plain_job(order_of("0.50BI", "-8.00"), order_of("0.50BI", "-1.00"))).rows}
    assert "nearest" in rows["equal-edges"].pair


def test_equal_lenses_share_in_halves() -> None:
    """With mirrored lenses both equal shares are the halves, which the order is already."""
    found = ways(plain_job(order_of("3BI", "-3.00"), order_of("3BI", "-3.00")))
    for kind in KINDS[4:]:
        assert found[kind]["right"]["x"] == pytest.approx(3.0, abs=0.05)
    assert answer(plain_job(order_of("3BI", "-3.00"), order_of("3BI", "-3.00"))).title == "as-good"


def test_expected_readings_carry_the_thinning() -> None:
    job = plain_job(
        order_of("3BU", "+2.00") | {"add": "2.00"},
        order_of("1BD", "+2.00") | {"add": "2.00"},
        lens__design="progressive",
        thinning__rule="two-thirds",
    )
    found = ways(job)["halves"]
    assert (found["right"]["y"], found["left"]["y"]) == (2.0, -2.0)
    assert (found["expected"]["right"]["y"], found["expected"]["left"]["y"]) == (0.67, -3.33)
    unknown = answer(patched(job, thinning__rule="unknown"))
    assert "thinning-unknown" in codes(unknown)


def test_prism_that_both_lenses_carry_the_same_way_is_pointed_out() -> None:
    assert "shared-part" in codes(answer(plain_job(order_of("3BU"), order_of("1BU"))))
    assert "shared-part" in codes(answer(plain_job(order_of("3BI"), order_of("1BO"))))
    opposite = codes(answer(plain_job(order_of("3BI"), order_of("1BI"))))
    assert "shared-part" not in opposite
    assert "only-with-agreement" in opposite


def test_titles_where_there_is_little_to_say() -> None:
    assert answer(plain_job(order_of("3BI"))).title == "one-lens"
    assert answer(plain_job({"sphere": "-1.00"}, {"sphere": "-1.00"})).title == "no-prism"
    alike = answer(plain_job(order_of("2BD"), order_of("2BD")))
    assert alike.title == "nothing-to-share"
    assert isinstance(alike.own, list)
    assert [share["kind"] for share in alike.own] == ["as-ordered"]
    assert answer(plain_job(order_of("3BI"), {"sphere": "-1.00", "partner": True})).title == "partner"


def test_without_a_frame_there_are_readings_and_an_ask() -> None:
    found = answer(plain_job(order_of("3BI"), order_of("1BI"), frame=None))
    assert found.title == "ways"
    assert [ask.field for ask in found.asks] == ["frame.a_mm", "frame.b_mm"]
    assert isinstance(found.own, list)
    assert [share["kind"] for share in found.own] == KINDS[:4]
    assert found.own[1]["edges"] == {}
    assert found.own[1]["weight_g"] is None


def test_without_a_density_weight_is_left_out() -> None:
    found = ways(plain_job(order_of("3BI"), order_of("1BI"), lens__density_g_cm3=None, lens__index="1.90"))
    assert list(found) == KINDS[:5]


def test_lenses_that_cannot_be_made_leave_the_readings() -> None:
    steep = order_of("3BI", "-30.00") | {"front_curve": "1.00"}
    found = answer(plain_job(steep, steep))
    assert "beyond-surface" in codes(found)
    assert isinstance(found.own, list)
    assert len(found.own) == 4


def test_a_lens_alone_in_its_power_gives_no_edges() -> None:
    """Nothing is compared with a lens whose power is not known."""
    ordered = {"right": Prism(Decimal(2), Decimal(0)), "left": NO_PRISM}
    lens = framing(plain_job({"sphere": "-1.00"})).lens
    found = shares(ordered, {"right": NO_PRISM, "left": NO_PRISM}, {"right": lens})  # type: ignore[arg-type]
    assert [share.kind for share in found] == KINDS[:4]


def test_the_picture_has_every_way_to_scale() -> None:
    """One pair of rims a way; the band is as wide as the edge is thick, and stays within the picture."""
    found = answer(plain_job(order_of("3BU", "-2.00"), order_of("4BI", "+1.00")))
    scene = found.scenes["pair"]
    shapes = scene["shapes"]
    rims, bands = ([shape["points"] for shape in shapes if shape["role"] == role] for role in ("outline", "profile-back"))
    assert len(rims) == len(bands) == 2 * len(KINDS)
    assert [shape["text"] for shape in shapes if shape["role"] == "way"] == [say(f"section_rows.split.{kind}") for kind in KINDS]
    assert isinstance(found.own, list)
    thickest = [share["edges"][eye]["thickest_mm"] for share in found.own for eye in ("right", "left")]
    thinnest = [share["edges"][eye]["thinnest_mm"] for share in found.own for eye in ("right", "left")]
    for rim, band, most, least in zip(rims, bands, thickest, thinnest, strict=True):
        widths = [math.dist(inner, outer) for inner, outer in zip(rim, band, strict=True)]
        assert max(widths) == pytest.approx(most, abs=0.003)
        assert min(widths) == pytest.approx(least, abs=0.003)
    left, low, right, high = scene["extent"]
    assert all(left < x < right and low < y < high for band in bands for x, y in band)


def test_no_picture_without_edges() -> None:
    job = plain_job(order_of("3BU"), order_of("4BI"))
    del job["frame"]
    assert answer(job).scenes == {}
