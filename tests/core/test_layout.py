"""The layout in the frame, the smallest blank, and whether a finished lens can be moved for its prism.

Sources stand beside each check; rows WE.. are of the worked examples kept in `tests/references`.
"""

import json
import math
from decimal import Decimal
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import minimize_scalar

from pycore.bench.decentring import blank_of, decentring_of, optical_centre, smallest_blank, smallest_blank_for
from pycore.bench.layout import Spot, box_of, place_of
from pycore.bench.lens_layout import ed_of, lens_layout
from pycore.bench.outline import exponent_reaching, longest_radius, outline_of
from pycore.bench.segment import segment_of
from pycore.case import Case, case_of
from pycore.contract import decode
from pycore.job.body import Frame
from pycore.job.document import read_job
from pycore.optics.power import Power, point_with_prism
from pycore.optics.prism import NO_PRISM, Eye, Prism
from pycore.scenes.segment import segment_points
from pycore.sections.answer import SectionAnswer
from pycore.sections.layout import layout_section
from tests.core.strategies import WORDS, Job, demonstration, jobs, patched
from tests.references import tilt_reference as room

EXACT = pytest.approx


def case(job: Job) -> Case:
    return case_of(read_job(decode(json.dumps(job))), None)


def layout(job: Job) -> SectionAnswer:
    return layout_section(case(job))


def own(job: Job) -> dict[str, Any]:
    found = layout(job).own
    assert isinstance(found, dict)
    return found


def notes(answer: SectionAnswer) -> dict[str, dict[str, str]]:
    return {code: dict(params) for code, params in answer.notes}


def asks(answer: SectionAnswer) -> dict[str, tuple[str, bool]]:
    return {ask.field: (ask.usual, ask.used) for ask in answer.asks}


def rows(answer: SectionAnswer) -> dict[str, Any]:
    return {row.code: row for row in answer.rows}


def lens(text: str, *prism: tuple[str, str], **more: Any) -> Job:
    """`+2.00+2.00x60` and (amount, base) as the fields of an eye."""
    power, _, axis = text.partition("x")
    sign = max(power.rfind("-"), power.rfind("+"))
    fields = {"sphere": power[:sign], "cylinder": power[sign:], "axis": axis} if axis else {"sphere": power}
    return {**fields, "prism": [{"amount": amount, "base": base} for amount, base in prism], **more}


def order(a: str, dbl: str, *, b: str = "34", ed: str | None = None, **more: Any) -> Job:
    frame = {"a_mm": a, "b_mm": b, "dbl_mm": dbl} | ({"ed_mm": ed} if ed else {})
    return {"format": "wedgewright.job/1", "state": "uncut", "lens": {"design": "single-vision"}, "frame": frame, **more}


def moved_in(entry: dict[str, Any], eye: str, where: str = "from_prp") -> tuple[float, float]:
    """The optical centre, in and up."""
    spot = entry["optical_centre"][where]
    return (spot["right_mm"] if eye == "right" else -spot["right_mm"], spot["up_mm"])


# --- published examples -------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("a", "dbl", "pd", "in_mm"),
    [("48", "18", "62", 2.0), ("54", "17", "59", 6.0), ("56", "16", "59", 6.5)],
    ids=["WE44 course cards", "WE41 worked case", "WE42 worked case"],
)
def test_published_decentration(a: str, dbl: str, pd: str, in_mm: float) -> None:
    found = own(order(a, dbl, pd_mm=pd, right=lens("-2"), left=lens("-2")))
    assert found["frame_pd_mm"] == float(a) + float(dbl)
    assert [found[eye]["decentration"]["in_mm"] for eye in ("right", "left")] == [in_mm, in_mm]
    assert [found[eye]["prp"]["right_mm"] for eye in ("right", "left")] == [in_mm, -in_mm]


def test_published_smallest_blanks() -> None:
    """WE41 forum case: 68. WE42: published 70, but 56 + 13 + 2 is 71. WE39 apprenticeship review: 60 without the 2 mm."""
    plano = {"pd_mm": "59", "right": lens("-2"), "left": lens("-2")}
    assert own(order("54", "17", ed="54", **plano))["right"]["minimum_blank_mm"] == 68.0
    assert own(order("56", "16", ed="56", **plano))["left"]["minimum_blank_mm"] == 71.0
    assert smallest_blank(54.0, Spot(Decimal(3), Decimal(0))) - 2.0 == 60.0


def test_a_finished_lens_moved_for_prism_needs_the_larger_blank() -> None:
    """Domain facts 4.6: +4.00, 2 in, frame 3 in, ED 55: 73, not 63."""
    job = order("52", "18", ed="55", right=lens("+4.00", ("2", "in"), pd_mm="32", prp_height_mm="17"))
    found = own(job)["right"]
    assert found["decentration"] == {"in_mm": 3.0, "up_mm": 0.0}
    assert (found["minimum_blank_mm"], found["minimum_blank_ground_mm"]) == (73.0, 63.0)
    assert found["prism_by"] == "move"
    small = layout(patched(job, lens__blank_diameter_mm="70"))
    assert small.own["right"]["prism_by"] == "ground-blank"  # type: ignore[index,call-overload]
    assert notes(small)["ground-blank"] == {"eye": "right", "blank": "70", "smallest": "73.0 mm"}
    assert small.title_params["blank"] == "63.0 mm"
    assert layout(patched(job, lens__blank_diameter_mm="73")).own["right"]["prism_by"] == "move"  # type: ignore[index,call-overload]
    short = layout(patched(job, lens__blank_diameter_mm="60"))
    assert notes(short)["blank-too-small"] == {"eye": "right", "blank": "60", "smallest": "63.0 mm"}


# id: eye, lens, prism, in and up of the optical centre from the reference point.
MOVES: dict[str, tuple[Eye, str, tuple[str, str], tuple[float, float]]] = {
    "WE28 mock exam: 5 out": ("right", "+4", ("2", "out"), (-5.0, 0.0)),
    "WE29 course cards: 10 out": ("left", "+2", ("2", "out"), (-10.0, 0.0)),
    "WE31 matrix, right": ("right", "-2.50-1.00x45", ("1.5", "in"), (-5.14, -0.86)),
    "WE31 matrix, left": ("left", "-2.50-1.00x45", ("1.5", "in"), (-5.14, 0.86)),
    "WE37 matrix, right": ("right", "+2.00+2.00x60", ("4", "out"), (-12.5, -4.33)),
    "WE37 matrix, left": ("left", "+2.00+2.00x120", ("4", "out"), (-12.5, -4.33)),
    "WE38 matrix, right": ("right", "-8.00-2.00x30", ("2", "down"), (0.217, 2.125)),
    "WE38 matrix, left": ("left", "-10.00-2.00x150", ("2", "up"), (-0.144, -1.75)),
}


@pytest.mark.parametrize("name", MOVES)
def test_published_moves_for_prism(name: str) -> None:
    eye, power, prism, move = MOVES[name]
    found = own(order("52", "18", ed="55", pd_mm="64", **{eye: lens(power, prism)}))[eye]
    assert moved_in(found, eye) == EXACT(move, abs=0.006)


def test_published_moves_that_are_wrong() -> None:
    """WE31 leaves the cross term out (5.0 out gives 0.25 vertically); WE37 (16 mm) and WE38 (2.35 up) swap sin² and cos²."""
    for name, published in (
        ("WE31 matrix, right", (-5.0, 0.0)),
        ("WE37 matrix, right", (-16.0, 0.0)),
        ("WE38 matrix, right", (0.0, 2.35)),
    ):
        eye, power, prism, _ = MOVES[name]
        found = own(order("52", "18", ed="55", pd_mm="64", **{eye: lens(power, prism)}))[eye]
        assert math.dist(moved_in(found, eye), published) > 0.3


def test_thousands_of_moved_lenses_against_rays(capsys: pytest.CaptureFixture[str]) -> None:
    """Toric lenses moved by the inverse matrix, light through the front at the reference point (outside trace).

    The thin formula leaves what thickness and curves do: measured here; the law itself holds in lenses without thickness.
    """
    count, draw = 3000, np.random.default_rng(71)
    sphere, cylinder = draw.choice([-1, 1], count) * draw.uniform(2, 6, count), draw.uniform(-1.5, 1.5, count)
    axis, prism = draw.uniform(1, 180, count), draw.uniform(-2, 2, (count, 2))
    index, front_d = draw.uniform(1.5, 1.74, count), np.maximum(sphere, 0) + draw.uniform(2, 5, count)
    places = np.array([
        point_with_prism(Prism(*map(Decimal, prism[i])), NO_PRISM, Power(Decimal(sphere[i]), Decimal(cylinder[i]), Decimal(axis[i])))
        for i in range(count)
    ], dtype=float)
    upright = np.tile(np.eye(3), (count, 1, 1))
    powers = room.power_matrix(sphere, cylinder, axis)
    off = []
    for thick, most in ((np.full(count, 1e-3), 0.03), (draw.uniform(1.5, 3, count) + np.maximum(sphere, 0) / 2, 0.25)):
        traced, _ = room.decentred(powers, -places, front_d, thick, index, upright)
        off.append(float(np.abs(traced.prism_ahead() - prism).max()))
        assert off[-1] < most
    with capsys.disabled():
        print(f"\nlayout: {count} toric lenses moved for up to 2 Δ each way, off by {off[0]:.3f} Δ thin, {off[1]:.3f} Δ thick")


def test_published_prism_with_the_frames_decentration() -> None:
    """WE34 course handout: R 8 out less 2 in is 6.0 out; L 5.7 out less 2 in is 3.7 out, from the frame's centre."""
    job = order(
        "46", "18", ed="50", pd_mm="60", right=lens("-2.50-0.50x180", ("2", "in")), left=lens("-3.50-0.50x180", ("2", "in"))
    )
    found = own(job)
    assert moved_in(found["right"], "right", "from_boxing_centre") == EXACT((-6.0, 0.0), abs=1e-9)
    assert moved_in(found["left"], "left", "from_boxing_centre") == EXACT((-3.7, 0.0), abs=0.02)


def test_published_centration_shift() -> None:
    """WE70 optometry lexicon: 4 cm/m move the centration by 1.00 mm, opposite to the base; off unless asked for."""
    job = order("52", "18", ed="55", pd_mm="64", right=lens("-3", ("4", "in"), prp_height_mm="17"))
    still = layout(job)
    assert still.own["right"]["decentration"]["in_mm"] == 3.0  # type: ignore[index,call-overload]
    assert "shift-off" in notes(still)
    shifted = layout({**job, "centration_shift_mm": "0.25"})
    found = shifted.own["right"]  # type: ignore[index,call-overload]
    assert found["centration_shift"] == {"right_mm": -1.0, "up_mm": 0.0}
    assert found["decentration"]["in_mm"] == 2.0
    assert found["pupil"] == {"right_mm": 3.0, "up_mm": 0.0}
    assert moved_in(found, "right", "from_pupil")[0] == EXACT(-40 / 3 - 1)
    assert notes(shifted)["shift-on"] == {"each": "0.25"}
    assert rows(shifted)["shift"].right == "1.00 out"
    assert "shift-off" not in notes(layout(order("52", "18", pd_mm="64", right=lens("-3"))))


# --- heights and points -------------------------------------------------------------------------------------------------


def test_the_demonstration_job() -> None:
    """By hand: frame PD 52 + 18; right 35 - 31.5 in, 17 - 17 up; the cross 4 mm above; blank 55 + 2 x 3.5 + 2."""
    answer = layout(demonstration())
    found = answer.own
    assert isinstance(found, dict)
    assert found["frame_pd_mm"] == 70.0
    assert found["right"]["decentration"] == {"in_mm": 3.5, "up_mm": 0.0}
    assert found["right"]["fitting_cross"] == {"right_mm": 3.5, "up_mm": 4.0}
    assert found["right"]["minimum_blank_mm"] == 64.0
    assert found["right"]["optical_centre"] is None
    assert found["right"]["prism_by"] == "ground-progressive"
    assert {"ground-progressive", "blank-centre-assumed"} <= notes(answer).keys()
    assert answer.title == "pair"
    assert answer.title_params == {"right_lens": "3.5 in", "left_lens": "3.0 in", "blank": "64.0 mm"}
    assert asks(answer) == {"frame.shape": ("rounded-rectangle", True)}


def test_heights_of_a_progressive() -> None:
    """The fitting cross and the reference point are two points: 22 - 4 = 18 is 1 above the middle of B 34."""
    job = patched(demonstration(), right__prp_height_mm=None, right__cross_above_prp_mm=None, right__fitting_height_mm="22")
    answer = layout(job)
    assert answer.own["right"]["decentration"]["up_mm"] == 1.0  # type: ignore[index,call-overload]
    assert asks(answer)["right.cross_above_prp_mm"] == ("4", True)
    assert rows(answer)["decentration"].assumed
    told = layout(patched(job, right__cross_above_prp_mm="2"))
    assert told.own["right"]["decentration"]["up_mm"] == 3.0  # type: ignore[index,call-overload]
    cross = layout(patched(demonstration(), right__fitting_height_mm=None))
    assert cross.own["right"]["fitting_cross"]["up_mm"] == 4.0  # type: ignore[index,call-overload]
    wrong = layout(patched(demonstration(), right__fitting_height_mm="24"))
    assert notes(wrong)["heights-differ"] == {"eye": "right", "given": "4", "found": "7"}


def test_what_is_missing_is_asked_for() -> None:
    bare = {"format": "wedgewright.job/1", "state": "uncut", "right": lens("-4", ("2", "in"))}
    answer = layout(bare)
    assert answer.title == "needs-frame"
    assert asks(answer) == dict.fromkeys(("right.pd_mm", "frame.a_mm", "frame.dbl_mm", "frame.b_mm"), ("", False))
    assert answer.own["right"]["prism_by"] == "move-unchecked"  # type: ignore[index,call-overload]
    assert moved_in(answer.own["right"], "right") == (-5.0, 0.0)  # type: ignore[index,call-overload]
    assert {"shift-off", "move-unchecked"} == notes(answer).keys()
    assert answer.scenes == {}
    framed = layout({**bare, "frame": {"a_mm": "52", "b_mm": "34", "dbl_mm": "18"}, "pd_mm": "63"})
    assert asks(framed)["right.pd_mm"] == ("31.5", True)
    assert asks(framed)["right.prp_height_mm"] == ("17", True)
    assert asks(framed)["frame.ed_mm"] == ("55.0", True)
    assert asks(framed)["lens.blank_diameter_mm"] == ("80", True)
    assert framed.title == "lens"
    only_ed = layout({**bare, "frame": {"a_mm": "52", "b_mm": "34", "ed_mm": "55"}})
    assert "frame.dbl_mm" in asks(only_ed)
    assert only_ed.scenes == {}


def test_a_near_only_pair_takes_its_near_distance() -> None:
    job = order("50", "20", right=lens("+2", near_pd_mm="30"), left=lens("+2", pd_mm="30.5", pd_for="near"))
    job["lens"] = {"design": "near"}
    found = own(job)
    assert [found[eye]["decentration"]["in_mm"] for eye in ("right", "left")] == [5.0, 4.5]
    missing = layout({**job, "left": lens("+2", pd_mm="31")})
    assert "left.near_pd_mm" in asks(missing)
    distance = layout(order("50", "20", pd_mm="62", right=lens("+2", pd_mm="29", pd_for="near")))
    assert asks(distance)["right.pd_mm"] == ("31", True)


def test_segments_have_their_own_place() -> None:
    """By hand: 3 in and 2 more for the inset; the top at 14 is 3 below the middle of B 34."""
    segment = {"shape": "flat-top", "width_mm": "28", "height_mm": "14", "inset_mm": "2"}
    job = order(
        "52", "18", ed="55", pd_mm="64", thinning={"rule": "none"}, right=lens("+1", ("1", "up"), add="2.00", segment=segment)
    )
    job["lens"] = {"design": "bifocal"}
    answer = layout(job)
    assert answer.own["right"]["segment_top"] == {"right_mm": 5.0, "up_mm": -3.0}  # type: ignore[index,call-overload]
    assert answer.own["right"]["prism_by"] == "ground-segmented"  # type: ignore[index,call-overload]
    assert moved_in(answer.own["right"], "right") == EXACT((0.0, 10.0))  # type: ignore[index,call-overload]
    assert rows(answer)["segment"].right == "5.0 in 3.0 down"
    drawn = layout(patched(job, right__prp_height_mm="17"))
    (shape,) = [shape for shape in drawn.scenes["pair"]["shapes"] if shape["role"] == "segment"]
    across = [x + 35.0 for x, _ in shape["points"]]
    assert (min(across), max(across)) == EXACT((5.0 - 14.0, 5.0 + 14.0), abs=1e-3)
    assert max(y for _, y in shape["points"]) == -3.0
    usual = layout(patched(job, right__segment__inset_mm=None))
    assert asks(usual)["right.segment.inset_mm"] == ("2.5", True)
    worn = layout(patched(job, right__segment__inset_mm=None, wear={"reading_inset_mm": "1.5"}))
    assert worn.own["right"]["segment_top"]["right_mm"] == 4.5  # type: ignore[index,call-overload]
    assert layout(patched(job, pd_mm=None)).own["right"]["segment_top"] is None  # type: ignore[index,call-overload]


def test_segment_shapes() -> None:
    """A round 22 is a circle from its top down; a flat top is that circle cut 5 mm above its centre; a full width has no sides."""

    def rim(**fields: str) -> list[list[float]]:
        job = order("52", "18", right=lens("+1", add="2", prp_height_mm="17", segment={"height_mm": "14", **fields}))
        job["lens"] = {"design": "bifocal"}
        read = read_job(decode(json.dumps(job))).right
        assert read
        place = segment_of(read)
        assert place
        return segment_points(place)

    round_rim = rim(shape="round", width_mm="22")
    assert [math.hypot(x, y + 11) for x, y in round_rim] == EXACT([11.0] * len(round_rim), abs=1e-3)
    flat = rim(shape="flat-top", width_mm="28")
    assert max(x for x, y in flat if y == 0.0) <= math.sqrt(14**2 - 5**2) + 1e-3
    assert rim(shape="full-width") == [[-40.0, 0.0], [40.0, 0.0], [40.0, -40.0], [-40.0, -40.0]]
    assert rim(shape="flat-top") == rim(shape="shield", width_mm="20") == []


# --- moved or ground ----------------------------------------------------------------------------------------------------


def test_a_meridian_without_power() -> None:
    """+0.00 −2.00×90 has no power along 90: a vertical prism cannot be had, a horizontal one can (2 / 2 cm = 10 mm)."""
    job = order("52", "18", ed="55", pd_mm="64", right=lens("0.00-2.00x90", ("2", "up")))
    answer = layout(job)
    assert answer.own["right"]["prism_by"] == "ground-singular"  # type: ignore[index,call-overload]
    assert notes(answer)["no-power"] == {"eye": "right", "meridian": "90", "power": "0.00", "prism": "2.00"}
    found = own({**job, "right": lens("0.00-2.00x90", ("1", "in"))})["right"]
    assert found["prism_by"] == "move"
    assert moved_in(found, "right") == EXACT((-5.0, 0.0), abs=1e-9)


def test_a_weak_meridian_is_explained() -> None:
    """−0.50: 1 Δ needs 20 mm (Prentice), and 0.12 D more changes it by 0.24 Δ."""
    answer = layout(order("40", "20", b="30", ed="42", pd_mm="60", right=lens("-0.50", ("1", "out"), prp_height_mm="15")))
    weak = notes(answer)["weak-power"]
    assert (weak["move"], weak["change"], weak["power"]) == ("20.0", "0.24", "\u22120.50")
    assert answer.own["right"]["prism_by"] == "ground-blank"  # type: ignore[index,call-overload]


def test_designs_that_are_never_moved() -> None:
    base = order("52", "18", ed="55", pd_mm="64", right=lens("-4", ("2", "in")))
    aspheric = layout(patched(base, lens__aspheric=True))
    assert aspheric.own["right"]["prism_by"] == "ground-aspheric"  # type: ignore[index,call-overload]
    assert aspheric.own["right"]["optical_centre"] is None  # type: ignore[index,call-overload]
    unknown = layout(patched(base, lens__design="bifocal", right__add="2.00"))
    assert unknown.own["right"]["prism_by"] == "ground-thinning-unknown"  # type: ignore[index,call-overload]
    nothing = own(patched(base, right__prism=None))["right"]
    assert (nothing["prism_by"], nothing["optical_centre"]["from_prp"]) == ("none", {"right_mm": 0.0, "up_mm": 0.0})


def test_a_lens_blocked_off_its_centre_is_ground() -> None:
    """The blank's centre is 4 mm out of the reference point that lies 3 in: 55 + 2 x 1 + 2."""
    job = order("52", "18", ed="55", pd_mm="64", right=lens("-4", prp_height_mm="17", surfacing={"prp_right_mm": "4"}))
    found = own(job)["right"]
    assert found["blank_centre"] == {"right_mm": -1.0, "up_mm": 0.0}
    assert found["minimum_blank_mm"] == 59.0
    assert "blank-centre-assumed" not in notes(layout(job))


def test_a_lens_without_a_power() -> None:
    job = order("52", "18", ed="55", pd_mm="64", right={"partner": True, "prism": []}, left=lens("-2"))
    found = own(job)["right"]
    assert (found["prism_by"], found["optical_centre"]) == (None, None)
    assert found["minimum_blank_mm"] == 63.0
    read = case(order("52", "18", left=lens("-2")))
    assert lens_layout(read.job, case(job).dues["right"]) is None
    assert place_of(read.job, "right") is None
    whole = case(job)
    assert whole.job.right
    assert decentring_of(whole.job.right, whole.dues["right"]) is None


@given(
    sphere=st.integers(-40, 40),
    cylinder=st.integers(-20, 20),
    axis=st.integers(1, 180),
    x=st.integers(-80, 80),
    y=st.integers(-80, 80),
)
def test_the_centre_is_the_inverse_matrix(sphere: int, cylinder: int, axis: int, x: int, y: int) -> None:
    """Meridian by meridian gives what numpy's solver gives for F c = p, wherever F can be inverted."""
    power = Power(Decimal(sphere) / 4, Decimal(cylinder) / 4, Decimal(axis))
    prism = Prism(Decimal(x) / 10, Decimal(y) / 10)
    centre, weak = optical_centre(prism, power)
    if not all(power.principal):
        return
    assert centre
    xx, xy, yy = power.matrix()
    solved = np.linalg.solve([[xx, xy], [xy, yy]], [float(prism.x) * 10, float(prism.y) * 10])
    assert (float(centre.right_mm), float(centre.up_mm)) == EXACT(tuple(solved), rel=1e-6, abs=1e-6)
    assert (float(centre.right_mm), float(centre.up_mm)) == EXACT(point_with_prism(prism, NO_PRISM, power), rel=1e-6, abs=1e-6)
    assert all(0 < abs(meridian.power_d) < 1 for meridian in weak)


# --- the rim ------------------------------------------------------------------------------------------------------------


@given(
    a=st.integers(36, 60), b=st.integers(22, 50), beyond=st.integers(1, 8), shape=st.sampled_from(["rounded-rectangle", "teardrop"])
)
def test_the_rim_touches_its_box_and_reaches_its_diameter(a: int, b: int, beyond: int, shape: str) -> None:
    """ISO 8624: the box is the smallest rectangle around the rim; ED twice its longest radius. The longest radius of the
    superellipse is found again by scipy's search."""
    longest = min(max(a, b) + beyond, math.hypot(a, b) - 2)
    frame = Frame(a_mm=Decimal(a), b_mm=Decimal(b), ed_mm=Decimal(longest), shape=shape)
    rim = outline_of(frame)
    assert rim
    assert rim.box == EXACT((-a / 2, -b / 2, a / 2, b / 2))
    if longest <= max(a, b):
        return
    assert rim.ed_mm == EXACT(longest, abs=1e-6)
    exponent = exponent_reaching(a / 2, b / 2, longest / 2)

    def minus_radius(angle: float) -> float:
        return float(-((abs(math.cos(angle) / a * 2) ** exponent + abs(math.sin(angle) / b * 2) ** exponent) ** (-1 / exponent)))

    found = minimize_scalar(minus_radius, bounds=(0, math.pi / 2), method="bounded", options={"xatol": 1e-10})
    assert -found.fun == EXACT(longest / 2, abs=1e-6)
    assert 2 * max(rim.radii_mm) == EXACT(longest, abs=0.6)  # the points are 5 degrees apart


def test_rims_that_cannot_be() -> None:
    """No rim in a box reaches beyond its corner, nor less than half its longer side."""
    assert longest_radius(26, 17, 40) < math.hypot(26, 17)
    assert exponent_reaching(26, 17, 40.0) == EXACT(40.0)
    assert exponent_reaching(26, 17, 20.0) == 2.0
    answer = layout(order("52", "18", ed="70", pd_mm="64", right=lens("-2")))
    assert notes(answer)["rim-does-not-fit"]["name"] == "ED"
    assert outline_of(Frame(a_mm=Decimal(50), b_mm=Decimal(50), shape="round")).radii_mm == EXACT((25.0,) * 72)  # type: ignore[union-attr]
    assert outline_of(Frame()) is None


@pytest.mark.parametrize("count", [36, 37])
def test_a_traced_rim(count: int) -> None:
    """An ellipse 50 by 30, shifted 1 mm towards the nose, traced: the box is found, the left lens is the mirror image."""
    angles = np.linspace(0, 2 * np.pi, count, endpoint=False)
    radii = []
    for angle in angles:  # the ray from the origin meets the shifted ellipse
        c, s = math.cos(angle), math.sin(angle)
        p, q, r = (c / 25) ** 2 + (s / 15) ** 2, -2 * c / 625, 1 / 625 - 1
        radii.append((-q + math.sqrt(q * q - 4 * p * r)) / (2 * p))
    frame = {"dbl_mm": "18", "outline_mm": [f"{radius:.6f}" for radius in radii]}
    job = {"format": "wedgewright.job/1", "state": "uncut", "frame": frame, "pd_mm": "64", "right": lens("-2"), "left": lens("-2")}
    read = read_job(decode(json.dumps(job)))
    rim = outline_of(read.frame)
    assert rim
    assert rim.box == EXACT((-24, -15, 26, 15), abs=0.25)  # a point every 10 degrees misses the ends
    assert rim.assumed == ()
    box = box_of(read.frame)
    assert (float(box.a_mm or 0), float(box.b_mm or 0)) == EXACT((50, 30), abs=0.25)
    assert ed_of(read) == EXACT(52, abs=0.01)
    right, left = rim.points("right"), rim.points("left")
    if count % 2 == 0:
        assert sorted((round(-x, 9), round(y, 9)) for x, y in right) == sorted((round(x, 9), round(y, 9)) for x, y in left)
    else:
        ellipse = [((x + 1) / 25) ** 2 + (y / 15) ** 2 for x, y in left]
        assert ellipse == EXACT([1.0] * count, abs=0.02)
    given = layout({**job, "frame": {**frame, "a_mm": "52", "b_mm": "30"}})
    assert notes(given)["rim-does-not-fit"] == {"name": "A", "given": "52", "found": f"{rim.box[2] - rim.box[0]:.1f}"}
    assert own({**job, "frame": {**frame, "a_mm": "50"}})["box"]["b_mm"] == EXACT(30, abs=0.12)


@given(x=st.integers(-12, 12), y=st.integers(-12, 12), eye=st.sampled_from(["right", "left"]), ed=st.integers(53, 60))
def test_the_blank_for_the_rim_holds_it(x: int, y: int, eye: Eye, ed: int) -> None:
    """By numpy over the points: none lies outside, one lies 1 mm from the edge; never more than the rule gives."""
    frame = Frame(a_mm=Decimal(52), b_mm=Decimal(36), ed_mm=Decimal(ed), shape="teardrop")
    rim, centre = outline_of(frame), Spot(Decimal(x), Decimal(y))
    assert rim
    size = smallest_blank_for(rim, eye, centre)
    gaps = size / 2 - np.hypot(*(np.array(rim.points(eye)) - [x, y]).T)
    assert gaps.min() == EXACT(1.0)
    assert size <= smallest_blank(float(ed), centre) + 1e-9
    assert blank_of(None, None, eye, centre).by_rule_mm is None


# --- the picture and the words ------------------------------------------------------------------------------------------


def test_the_picture_is_to_scale() -> None:
    answer = layout(demonstration())
    scene = answer.scenes["pair"]
    shapes = scene["shapes"]
    boxes = [shape for shape in shapes if shape["role"] == "box"]
    assert [(box["x2"] - box["x"], box["y2"] - box["y"]) for box in boxes] == [(52.0, 34.0)] * 2
    assert boxes[1]["x"] - boxes[0]["x2"] == 18.0
    prps = [shape for shape in shapes if shape["role"] == "prp"]
    assert [prp["x"] for prp in prps] == [-31.5, 32.0]  # the monocular distances themselves
    crosses = [shape for shape in shapes if shape["role"] == "cross"]
    assert [cross["y"] for cross in crosses] == [4.0, 4.0]
    blanks = [shape for shape in shapes if shape["role"] == "blank"]
    assert all(
        2 * blank["radius"] == EXACT(answer.own[eye]["minimum_blank_outline_mm"], abs=1e-2)
        for blank, eye in zip(blanks, ("right", "left"), strict=True)
    )  # type: ignore[index,call-overload]
    left, bottom, right, top = scene["extent"]
    assert left <= min(blank["x"] - blank["radius"] for blank in blanks)
    assert right >= max(blank["x"] + blank["radius"] for blank in blanks)
    assert bottom < -17 < 17 < top


def test_the_picture_of_a_box_without_distances() -> None:
    scene = layout(order("52", "18", right=lens("-2"))).scenes["pair"]
    assert {shape["role"] for shape in scene["shapes"]} == {"box", "centre-line", "outline", "boxing-centre", "eye-label"}


@given(jobs())
def test_every_code_has_its_words(job: Job) -> None:
    answer = layout(job)
    assert f"layout.{answer.title}" in WORDS["section_titles"]
    assert {f"layout.{row.code}" for row in answer.rows} <= set(WORDS["section_rows"])
    assert {f"layout.{code}" for code in notes(answer)} <= set(WORDS["section_notes"])
    assert not [row for row in answer.rows if "section_texts" in row.right + row.left]
    json.dumps([answer.own, dict(answer.scenes)], allow_nan=False)


def test_a_segment_without_a_width_is_asked_for_it() -> None:
    """It stands on the drawing only when its width is known; a full-width one needs none."""
    segment = {"shape": "flat-top", "height_mm": "14", "inset_mm": "2"}
    for shape, width, asked in (("flat-top", None, True), ("flat-top", "28", False), ("full-width", None, False)):
        given = {**segment, "shape": shape} | ({"width_mm": width} if width else {})
        job = patched(demonstration(), lens__design="bifocal", right__segment=given)
        fields = asks(layout(job))
        assert ("right.segment.width_mm" in fields) is asked
