"""Prism at any point: the thin formula, the exact ray on the lens meter's stop, and where the pair agrees.

The independent exact trace is `tests/references/trace_reference.py` (numpy, implicit surfaces, whole arrays). Other sources
stand beside each check; rows WE.. are of the worked examples kept in `tests/references`.
"""

import json
import math
from decimal import Decimal
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from pycore.bench.field import USUAL_LIMIT, agreement_of, lens_field
from pycore.bench.layout import Spot
from pycore.case import Case, case_of
from pycore.contract import decode
from pycore.job.body import Place
from pycore.job.document import read_job
from pycore.optics.power import Power, prism_at
from pycore.optics.prism import EYES, NO_PRISM, Prism
from pycore.optics.surface import OutsideSurfaceError, Surface, back_surface, circle_depth, through_front_d
from pycore.optics.trace import Placed, TotalReflectionError, body_of, reading_on_stop, refract, with_segment
from pycore.scenes.rim import chords, rim_around, shared_rim, within
from pycore.sections.answer import SectionAnswer
from pycore.sections.field import field_section
from tests.core.strategies import WORDS, Job, demonstration, jobs, patched
from tests.references.trace_reference import Lenses

EXACT = pytest.approx
LENSES = 6000


def case(job: Job) -> Case:
    return case_of(read_job(decode(json.dumps(job))), None)


def field(job: Job) -> SectionAnswer:
    return field_section(case(job))


def single(eye: str, sphere: str, cylinder: str = "0", axis: str = "180", **more: Any) -> Job:
    power = {"sphere": sphere, "cylinder": cylinder, "axis": axis} if cylinder != "0" else {"sphere": sphere}
    lens = {"design": "single-vision", "index": "1.5", "front_curve": "4", "curve_index": "1.5", "centre_thickness_mm": "2"}
    return {"format": "wedgewright.job/1", "state": "uncut", "lens": lens, eye: {**power, **more}}


def points(eye: str, *places: tuple[float, float]) -> Job:
    return {eye: [{"right_mm": str(right), "up_mm": str(up)} for right, up in places]}


def thin_at(job: Job, eye: str, right: float, up: float) -> dict[str, Any]:
    """The thin prism that the section reports at one point."""
    answer = field({**job, "points": points(eye, (right, up))})
    thin: dict[str, Any] = answer.eyes[eye]["points"][0]["thin"]  # type: ignore[index]
    return thin


def notes(answer: SectionAnswer) -> set[str]:
    return {code for code, _ in answer.notes}


# --- published examples: the point lies at right, up mm from the optical centre ----------------------------------------

# id: eye, lens, point, words of the prism, as published.
PUBLISHED: dict[str, tuple[str, tuple[str, ...], tuple[float, float], dict[str, float]]] = {
    "WE11 trade column Nov-Dec 2024": ("right", ("+6", "-3", "140"), (2.5, -11), {"up": 5.03, "out": 2.81}),
    "WE17 course handout, each lens": ("right", ("-5",), (4, 0), {"in": 2.0}),
    "WE19 course handout": ("left", ("-5",), (0, -4), {"down": 2.0}),
    "WE21 federation course": ("right", ("+5",), (0, -8), {"up": 4.0}),
    "WE22 federation course": ("right", ("+3.5",), (5, 0), {"out": 1.75}),
    "WE25 course cards and matrix": ("left", ("-1", "-1", "60"), (2, 0), {"out": 0.35, "down": 0.087}),
    "WE26 course cards": ("right", ("+5",), (4, 0), {"out": 2.0}),
    "WE27 exam answers": ("right", ("+5",), (-10, 0), {"in": 5.0}),
}


@pytest.mark.parametrize("name", PUBLISHED)
def test_published_prisms(name: str) -> None:
    eye, power, point, words = PUBLISHED[name]
    thin = thin_at(single(eye, *power), eye, *point)
    found = {thin[part]["base"]: thin[part]["amount"] for part in ("horizontal", "vertical") if thin[part]["base"]}
    assert found == {word: EXACT(amount, abs=0.0055) for word, amount in words.items()}


def test_published_prisms_with_bases() -> None:
    """WE12, WE13: solved university exam EP-18 (2023-24), parts a and b; the components along 330/240 and 330/60."""
    lens = single("left", "+0.50", "-3.75", "60")
    thin = thin_at(lens, "left", 23, 0)
    assert (thin["amount"], thin["base"]) == (EXACT(6.5, abs=0.005), EXACT(325, abs=0.5))
    assert along(thin, 330) == EXACT(6.48, abs=0.01)  # published from rounded parts
    assert along(thin, 240) == EXACT(0.57, abs=0.01)
    thin = thin_at(lens, "left", -2, -6)
    assert (thin["amount"], thin["base"]) == (EXACT(0.516, abs=0.0005), EXACT(6.94, abs=0.01))
    assert along(thin, 330) == EXACT(0.41, abs=0.006)
    assert along(thin, 60) == EXACT(0.31, abs=0.005)


def along(prism: dict[str, Any], degrees: float) -> float:
    return float(prism["x"] * math.cos(math.radians(degrees)) + prism["y"] * math.sin(math.radians(degrees)))


# --- the exact ray ------------------------------------------------------------------------------------------------------


def random_lenses(count: int, seed: int) -> tuple[Lenses, np.ndarray, np.ndarray]:
    """Thick, toric, prismatic lenses far beyond what is made, and a point of each up to 28 mm off (so decentred at will)."""
    rng = np.random.default_rng(seed)
    index, front = rng.uniform(1.49, 1.75, count), rng.uniform(-2, 12, count)
    lenses = Lenses(
        sphere=rng.uniform(-15, 12, count).round(2),
        cylinder=rng.uniform(-6, 6, count).round(2),
        axis_deg=rng.integers(1, 181, count).astype(float),
        front_d=front,
        thickness=rng.uniform(0.8, 12, count),
        index=index,
        prism_x=rng.uniform(-15, 15, count).round(2),
        prism_y=rng.uniform(-15, 15, count).round(2),
    )
    distance, angle = 28 * np.sqrt(rng.uniform(0, 1, count)), rng.uniform(0, 2 * np.pi, count)
    return lenses, distance * np.cos(angle), distance * np.sin(angle)


def test_the_exact_reading_against_the_independent_trace(capsys: pytest.CaptureFixture[str]) -> None:
    lenses, x, y = random_lenses(LENSES, 20)
    expected = lenses.reading(x, y)
    worst, most, refused = 0.0, 0.0, 0
    for number in range(LENSES):
        power = Power(*(Decimal(str(values[number])) for values in (lenses.sphere, lenses.cylinder, lenses.axis_deg)))
        prism = Prism(Decimal(str(lenses.prism_x[number])), Decimal(str(lenses.prism_y[number])))
        body = body_of(power, prism, *(float(part[number]) for part in (lenses.front_d, lenses.thickness, lenses.index)))
        try:
            found = reading_on_stop(body, float(x[number]), float(y[number]))
        except (OutsideSurfaceError, TotalReflectionError):
            refused += 1
            outside = abs(1 / body.back.surface.steep_per_mm) < 40 or np.isnan(expected[number, 0])
            assert outside, "only a point at a hemisphere's rim, or light that does not get out, is refused"
            continue
        off = float(np.hypot(*(np.array(found) - expected[number])))
        thin = prism_at(prism, power, Decimal(float(x[number])), Decimal(float(y[number])))
        most = max(most, math.hypot(found[0] - float(thin.x), found[1] - float(thin.y)))
        worst = max(worst, off)
    assert worst < 1e-8
    assert refused < LENSES / 50
    assert most > 5  # the lenses are wild enough for the thin formula to be useless at times
    with capsys.disabled():
        print(f"\nfield: {LENSES - refused} lenses traced, largest difference {worst:.1e} Δ (thin formula: up to {most:.1f} Δ)")


def test_a_spherical_lens_in_its_own_plane() -> None:
    """By plane geometry alone: with both centres on the axis, the normal of the back through a point of the front turns by
    atan, and Snell's law in one plane does the rest."""
    for front_d, power_d, thickness, index, up in (
        (6.0, 4.0, 4.0, 1.5, 15.0),
        (3.0, -6.0, 2.0, 1.6, -20.0),
        (8.0, 0.0, 3.0, 1.67, 12.0),
    ):
        body = body_of(Power(Decimal(power_d)), NO_PRISM, front_d, thickness, index)
        radius = 1000 * (index - 1) / front_d
        back_radius = 1 / body.back.surface.steep_per_mm
        leans = math.asin(up / radius)
        depth = radius * (1 - math.cos(leans))
        turned = math.atan2(up, back_radius + thickness - depth)
        inside = leans - turned
        reads = -100 * math.tan(math.asin(index * math.sin(inside)) - inside)
        assert reading_on_stop(body, 0.0, up) == EXACT((0.0, reads), abs=1e-9)


def test_a_plano_meniscus_shows_prism_off_centre() -> None:
    """Trade article and domain facts 4.17: 6 D front, 2 mm, 20 mm off: about 0.19 Δ, base towards the centre."""
    body = body_of(Power(Decimal(0)), NO_PRISM, 6.0, 2.0, 1.5)
    for x, y in ((20.0, 0.0), (0.0, -20.0)):
        found = reading_on_stop(body, x, y)
        assert math.hypot(*found) == EXACT(0.19, abs=0.005)
        assert found[0] * x + found[1] * y < 0


@given(
    sphere=st.integers(-40, 40),
    cylinder=st.integers(-16, 16),
    axis=st.integers(1, 90),
    turn=st.integers(1, 90),
    point=st.tuples(st.integers(0, 14), st.integers(0, 359)),
    prism=st.tuples(st.integers(0, 8), st.integers(0, 359)),
)
def test_turning_everything_turns_the_reading(
    sphere: int, cylinder: int, axis: int, turn: int, point: tuple[int, int], prism: tuple[int, int]
) -> None:
    """Nothing in the exact reading knows which way is up."""
    readings = []
    for turned in (0, turn):
        power = Power(Decimal(sphere) / 4, Decimal(cylinder) / 4, Decimal(axis + turned))
        x, y = polar(prism[0], prism[1] + turned)
        body = body_of(power, Prism(Decimal(x), Decimal(y)), 4.5, 3.0, 1.6)
        readings.append(complex(*reading_on_stop(body, *polar(point[0], point[1] + turned))))
    assert abs(readings[0] * complex(*polar(1, turn)) - readings[1]) < 1e-8


def polar(length: float, degrees: float) -> tuple[float, float]:
    return length * math.cos(math.radians(degrees)), length * math.sin(math.radians(degrees))


@given(
    power=st.tuples(st.integers(-32, 32), st.integers(-16, 16), st.integers(1, 179)),
    prism=st.tuples(st.integers(-8, 8), st.integers(-8, 8)),
    point=st.tuples(st.integers(-14, 14), st.integers(-14, 14)),
)
def test_the_mirror_image_reads_mirrored(power: tuple[int, int, int], prism: tuple[int, int], point: tuple[int, int]) -> None:
    sphere, cylinder, axis = power
    lens = Power(Decimal(sphere) / 4, Decimal(cylinder) / 4, Decimal(axis))
    mirrored = Power(lens.sphere, lens.cylinder, 180 - lens.axis)
    body = body_of(lens, Prism(Decimal(prism[0]), Decimal(prism[1])), 5.0, 2.5, 1.6)
    mirror = body_of(mirrored, Prism(Decimal(-prism[0]), Decimal(prism[1])), 5.0, 2.5, 1.6)
    x, y = reading_on_stop(body, *map(float, point))
    assert reading_on_stop(mirror, -float(point[0]), float(point[1])) == EXACT((-x, y), abs=1e-9)


def test_near_the_reference_point_the_exact_reading_becomes_the_thick_lens_formula() -> None:
    """Paraxially, with r on the front: p(r) = p0 - (F1 + F2 / (1 + t / r2)) r, r2 the back's radius (step-along, by hand)."""
    body = body_of(Power(Decimal(5)), NO_PRISM, 8.0, 5.0, 1.5)
    curvature = body.back.surface.steep_per_mm
    power = 8.0 - 500 * curvature / (1 + 5.0 * curvature)
    small = 0.01
    assert reading_on_stop(body, small, 0.0)[0] / small * 10 == EXACT(-power, rel=1e-6)


def test_a_segment_on_the_front() -> None:
    """At its optical centre a segment adds nothing; around it, its power: for a thin flat lens exactly the add (Prentice)."""
    body = body_of(Power(Decimal(-2)), Prism(Decimal(1), Decimal(1)), 4.0, 2.0, 1.5)
    near = with_segment(body, 2.5, 2.0, -8.0)
    assert reading_on_stop(near, 2.0, -8.0) == EXACT(reading_on_stop(body, 2.0, -8.0), abs=1e-9)
    step = 0.01
    own = reading_on_stop(near, 2.0, -8.0 - step)[1] - reading_on_stop(body, 2.0, -8.0 - step)[1]
    assert own / step * 10 == EXACT(2.5, rel=0.01)


def test_where_no_light_passes() -> None:
    with pytest.raises(TotalReflectionError):
        refract((0.0, math.sqrt(0.75), 0.5), (0.0, 0.0, 1.0), 1.5)
    with pytest.raises(OutsideSurfaceError):
        circle_depth(0.1, 10.0)
    with pytest.raises(OutsideSurfaceError):
        through_front_d(50.0, 36.0, 1.8)
    steep = Placed(Surface(0.05, 0.04, 1.0, 0.0))
    with pytest.raises(OutsideSurfaceError):
        steep.above(25.0, 0.0)
    assert steep.above(3.0, 4.0) == EXACT((3.0, 4.0, -steep.surface.depth(3.0, 4.0)))


def test_a_search_that_never_settles_is_given_up(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("pycore.optics.trace.MOST_STEPS", 0)
    with pytest.raises(OutsideSurfaceError):
        Placed(Surface(0.01, 0.01, 1.0, 0.0)).above(1.0, 0.0)
    with pytest.raises(OutsideSurfaceError):
        Placed(Surface(0.01, 0.01, 1.0, 0.0)).normal_through((0.0, 0.0, 1.0))


@given(steep=st.floats(0.001, 0.03), ratio=st.floats(-1, 1), degrees=st.floats(0, 180), x=st.floats(-20, 20), y=st.floats(-20, 20))
def test_the_toric_surface_is_a_torus(steep: float, ratio: float, degrees: float, x: float, y: float) -> None:
    """Its points keep the distance of one radius from the circle of the other (the torus's definition), and its slope is the
    change of its depth (central difference)."""
    flat = steep * ratio if abs(ratio) > 1e-3 else steep
    along, across = math.cos(math.radians(degrees)), math.sin(math.radians(degrees))
    surface = Surface(steep, flat, along, across)
    depth = surface.depth(x, y)
    u, v = x * along + y * across, y * along - x * across
    ring = math.copysign(math.hypot(v, 1 / flat - depth), flat) - (1 / flat - 1 / steep)
    assert math.hypot(u, ring) == EXACT(1 / steep, rel=1e-9)
    step = 1e-4
    by_steps = (
        (surface.depth(x + step, y) - surface.depth(x - step, y)) / (2 * step),
        (surface.depth(x, y + step) - surface.depth(x, y - step)) / (2 * step),
    )
    assert surface.slope(x, y) == EXACT(by_steps, abs=1e-6)


def test_the_back_has_the_power_that_is_left() -> None:
    """Step-along vergence: +8.00 front, 6 mm of 1.5, is +8.26 at the back (8 / (1 - 0.004 x 8), worked by hand)."""
    assert through_front_d(8.0, 6.0, 1.5) == EXACT(8.2645, abs=5e-5)
    back = back_surface(Power(Decimal("8.2645"), Decimal(-2), Decimal(30)), 8.0, 6.0, 1.5)
    assert back.flat_per_mm == EXACT(0, abs=1e-6)
    assert back.steep_per_mm == EXACT(2 / 500, abs=1e-6)
    assert (back.along, back.across) == EXACT(polar(1, 120))


# --- the section --------------------------------------------------------------------------------------------------------


def test_points_are_answered_in_order_however_far() -> None:
    job = single("right", "-8", prism=[{"amount": "3", "base": "in"}])
    job["lens"]["front_curve"] = "6.25"  # a radius of 80 mm
    places = [(0, 0), (15, -10), (-60, 60)]
    answer = field({**job, "points": points("right", *places)})
    entries = answer.eyes["right"]["points"]
    assert [(entry["right_mm"], entry["up_mm"]) for entry in entries] == places
    assert entries[0]["thin"]["x"] == 3
    assert entries[0]["exact"]["x"] == EXACT(3)
    assert entries[0]["difference"] == EXACT(0, abs=1e-9)
    assert not entries[0]["differs"]
    assert entries[1]["differs"]
    assert not entries[1]["beyond_thin"]
    assert entries[2]["beyond_thin"]
    assert entries[2]["exact"] is None
    assert entries[2]["difference"] is None
    assert notes(answer) == {"differs", "beyond-thin", "no-exact"}
    assert answer.title == "point"
    assert [row.code for row in answer.rows] == ["point"] * 3
    assert answer.asks == ()  # the body is given whole, and there is no pair


def test_the_exact_value_uses_what_the_job_says_of_the_body() -> None:
    """Against the independent trace, through the door's own text."""
    job = single("left", "-4", "-2", "30", prism=[{"amount": "3", "base": "out"}, {"amount": "2", "base": "down"}])
    job["lens"].update(index="1.6", front_curve="5", curve_index="1.53", centre_thickness_mm="2.4")
    found = field({**job, "points": points("left", (-12, 9))}).eyes["left"]["points"][0]["exact"]
    given = [-4.0, -2.0, 30.0, 5 * 0.6 / 0.53, 2.4, 1.6, 3.0, -2.0]
    lens = Lenses(*(np.array([value]) for value in given))
    assert (found["x"], found["y"]) == EXACT(tuple(lens.reading(np.array([-12.0]), np.array([9.0]))[0]), abs=1e-8)


def test_what_nobody_said_of_the_body_is_asked_for() -> None:
    job = single("right", "-4")
    job["lens"] = {"design": "single-vision"}
    answer = field({**job, "points": points("right", (5, 5))})
    assert {ask.field: ask.used for ask in answer.asks} == {
        "lens.index": True,
        "lens.front_curve": True,
        "lens.centre_thickness_mm": True,
    }
    assert field(job).asks == ()


def test_inside_a_segment_its_own_power_counts() -> None:
    """By hand: −2.00 add +2.50, 5 mm straight below the segment's centre, which lies 10 mm below the reference point and
    2 mm in: −2.00 x 1.5 cm = 3.00 down; + 2.50 x 0.5 cm = 1.25 up; 1.75 down is left. Outside it 3.00 down."""
    segment = {"shape": "flat-top", "width_mm": "28", "height_mm": "12", "inset_mm": "2"}
    job = single("right", "-2", add="2.50", prp_height_mm="17", segment=segment)
    job["lens"]["design"] = "bifocal"
    job["thinning"] = {"rule": "none"}
    answer = field({**job, "points": points("right", (2, -15), (40, -15), (2, -4))})
    inside, beside, above = answer.eyes["right"]["points"]
    assert (inside["thin"]["x"], inside["thin"]["y"]) == (EXACT(0.4), EXACT(-1.75))
    assert (beside["in_segment"], inside["in_segment"], above["in_segment"]) == (False, True, False)
    assert beside["thin"]["y"] == EXACT(-3.0)
    assert inside["exact"]["y"] == EXACT(-1.75, abs=0.2)
    assert abs(inside["exact"]["y"] + 1.75) > 1e-3
    roles = {shape["role"] for shape in answer.scenes["right"]["shapes"]}
    assert "segment" in roles
    # Where the segment's inset is not known, nothing is shut out to the sides and its centre counts as the point's own.
    del segment["inset_mm"]
    answer = field({**job, "points": points("right", (2, -15))})
    assert answer.eyes["right"]["points"][0]["thin"]["y"] == EXACT(-1.75)
    assert "segment" not in {shape["role"] for shape in answer.scenes["right"]["shapes"]}
    del segment["height_mm"]
    answer = field({**job, "points": points("right", (2, -15))})
    assert answer.eyes["right"]["points"][0]["thin"]["y"] == EXACT(-3.0)
    assert "segment-height-missing" in notes(answer)


def test_a_segment_of_unknown_depth_is_asked_for() -> None:
    segment = {"shape": "shield", "height_mm": "12", "inset_mm": "2"}
    job = single("right", "-2", add="2.50", prp_height_mm="17", segment=segment)
    job["lens"]["design"] = "trifocal"
    answer = field({**job, "points": points("right", (2, -15))})
    assert "right.segment.centre_below_top_mm" in {ask.field for ask in answer.asks}
    assert {"trifocal", "thinning-unknown"} <= notes(answer)


def test_designs_that_are_not_modelled_say_so() -> None:
    answer = field(demonstration())
    assert {"progressive", "pair-distance-only"} <= notes(answer)
    assert "progressive" not in notes(field(single("right", "-2")))
    aspheric = single("right", "-2")
    aspheric["lens"]["aspheric"] = True
    assert notes(field(aspheric)) == {"aspheric"}


def test_a_body_that_cannot_be_made_leaves_the_thin_figure() -> None:
    job = single("right", "+2")
    job["lens"].update(front_curve="25", curve_index="1.4", index="1.9", centre_thickness_mm="40")
    entry = field({**job, "points": points("right", (5, 0))}).eyes["right"]["points"][0]
    assert entry["exact"] is None
    assert entry["thin"]["x"] == EXACT(-1.0)


def test_a_lens_without_a_power_is_left_out() -> None:
    job = {"format": "wedgewright.job/1", "state": "mounted", "right": {"partner": True, "prism": []}, "left": {"sphere": "-2"}}
    answer = field(job)
    assert set(answer.eyes) == {"left"}
    assert answer.title == "touch"
    assert answer.own == {"limit": float(USUAL_LIMIT), "agreement": None}
    lone = case(job)
    assert lens_field(lone.job, lone.dues["right"]) is None


# --- the pair -----------------------------------------------------------------------------------------------------------


def both(right: str, left: str, **more: Any) -> Job:
    job = single("right", right)
    return {**job, "left": {"sphere": left}, **more}


def test_the_zone_within_the_limit() -> None:
    """WE47, textbook "Ophthalmic Lenses", Prisms, p. 47: R −3 L −6 differ by 2.4 at 8 mm below, so by 1 Δ at 3.33 mm."""
    answer = field(both("-3", "-6"))
    agreement = answer.own["agreement"]  # type: ignore[index,call-overload]
    assert agreement["down_mm"] == agreement["half_width_mm"] == EXACT(10 / 3)
    assert agreement["per_mm"] == {"right": 0.0, "up": EXACT(-0.3)}
    assert (answer.title, answer.title_params["down"]) == ("agrees-down", "3.3 mm")
    assert [row.code for row in answer.rows] == ["zone", "down"]
    halved = field(both("-3", "-6", field_limit="0.5")).own["agreement"]  # type: ignore[index,call-overload]
    assert halved["down_mm"] == EXACT(5 / 3)
    alike = field(both("-3", "-3"))
    assert (alike.title, alike.rows) == ("agrees-everywhere", ())
    assert alike.own["agreement"]["down_mm"] is None  # type: ignore[index,call-overload]
    assert not [shape for shape in alike.scenes["pair"]["shapes"] if shape["role"] == "iso-line"]


def test_a_pair_whose_imbalance_grows_sideways_only() -> None:
    """−2.00 −4.00×45 right and −4.00 plain... chosen so that both have −4.00 along 90: the rest comes from the cylinder."""
    right = {"sphere": "-2", "cylinder": "-4", "axis": "45"}
    answer = field({**both("-2", "-4"), "right": right})
    assert answer.title == "agrees-aside"
    assert answer.own["agreement"]["half_width_mm"] == EXACT(5.0)  # type: ignore[index,call-overload]
    assert answer.own["agreement"]["down_mm"] is None  # type: ignore[index,call-overload]


def test_points_of_both_lenses_stand_in_the_title() -> None:
    job = both("-3", "-6", points={**points("right", (0, -8)), **points("left", (0, -8), (1, 1))})
    answer = field(job)
    assert answer.title == "points"
    assert [bool(row.right) for row in answer.rows if row.code == "point"] == [True, False]
    thin = [answer.eyes[eye]["points"][0]["thin"]["vertical"] for eye in EYES]
    assert thin == [{"amount": 2.4, "base": "down"}, {"amount": 4.8, "base": "down"}]


@given(jobs())
def test_the_imbalance_is_the_difference_of_the_lenses(job: Job) -> None:
    found = case(job)
    lenses = [lens for due in found.dues.values() if (lens := lens_field(found.job, due))]
    if len(lenses) == 2:
        right, left = (lens.power for lens in lenses)
        agreement = agreement_of(right, left, Decimal(1))
        place = Place(right_mm=Decimal("3.7"), up_mm=Decimal("-9.1"))
        ends = [prism_at(NO_PRISM, power, place.right_mm, place.up_mm) for power in (right, left)]
        assert agreement.imbalance(3.7, -9.1) == EXACT(float(ends[0].y - ends[1].y), abs=1e-9)


# --- the pictures -------------------------------------------------------------------------------------------------------


def test_arrows_show_the_thin_prism() -> None:
    job = patched(demonstration(), points=points("right", (5, 5)))
    scene = field(job).scenes["right"]
    arrows = [shape for shape in scene["shapes"] if shape["kind"] == "arrow"]
    assert len(arrows) > 20
    lens = lens_field(case(job).job, case(job).dues["right"])
    assert lens
    for arrow in arrows:
        thin = lens.reading(Place(right_mm=Decimal(arrow["x"]), up_mm=Decimal(arrow["y"]))).thin
        drawn = (arrow["x2"] - arrow["x"], arrow["y2"] - arrow["y"])
        assert drawn == EXACT((float(thin.x) * scene["mm_per_prism"], float(thin.y) * scene["mm_per_prism"]), abs=1e-3)
    assert [shape["kind"] for shape in scene["shapes"] if shape["role"] == "asked"] == ["point", "label"]


def test_a_lens_without_prism_or_power_has_no_arrows_to_scale() -> None:
    scene = field(single("right", "0")).scenes["right"]
    assert scene["mm_per_prism"] == 0.0
    assert {shape["role"] for shape in scene["shapes"]} == {"outline", "arrow", "oc", "prp"}


def test_a_far_optical_centre_is_not_drawn() -> None:
    scene = field(single("right", "-0.5", prism=[{"amount": "5", "base": "in"}])).scenes["right"]
    assert "oc" not in {shape["role"] for shape in scene["shapes"]}


def test_the_zone_and_its_lines() -> None:
    job = patched(demonstration(), right__sphere="-5.00", field_limit="0.5")
    answer = field(job)
    agreement = answer.own["agreement"]  # type: ignore[index,call-overload]
    scene = answer.scenes["pair"]

    def imbalance(x: float, y: float) -> float:
        return float(agreement["per_mm"]["right"] * x + agreement["per_mm"]["up"] * y)

    (zone,) = [shape for shape in scene["shapes"] if shape["role"] == "zone"]
    assert max(abs(imbalance(*point)) for point in zone["points"]) == EXACT(0.5, abs=1e-3)
    lines = [shape for shape in scene["shapes"] if shape["role"] == "iso-line" and shape["kind"] == "line"]
    levels = sorted(imbalance(line["x"], line["y"]) for line in lines)
    assert len(lines) > 5
    assert [level / 0.5 for level in levels] == EXACT([round(level / 0.5) for level in levels], abs=1e-2)
    assert all(imbalance(line["x2"], line["y2"]) == EXACT(imbalance(line["x"], line["y"]), abs=1e-3) for line in lines)


def test_rims_are_shared_and_cut() -> None:
    """Two circles, areas by the formula of the lens they share (any geometry book); a chord by Pythagoras."""
    circle = rim_around(None, "right", None)
    moved = tuple((x + 12.0, y) for x, y in circle)
    half = 6.0 / 25.0
    expected = 2 * 25**2 * (math.acos(half) - half * math.sqrt(1 - half * half))
    assert area(shared_rim(circle, moved)) == EXACT(expected, rel=0.01)
    assert shared_rim(circle, tuple((x + 60.0, y) for x, y in circle)) == circle
    ((start, end),) = chords(circle, 1.0, 0.0, 15.0)
    assert sorted((start, end)) == [EXACT((15.0, -20.0), abs=0.05), EXACT((15.0, 20.0), abs=0.05)]
    assert area(within(circle, 1.0, 0.0, 0.0)) == EXACT(area(circle) / 2, rel=1e-6)
    assert rim_around(None, "left", Spot(Decimal(1), Decimal(1))) == circle


def area(rim: tuple[tuple[float, float], ...]) -> float:
    return sum(x * y2 - x2 * y for (x, y), (x2, y2) in zip(rim, [*rim[1:], rim[0]], strict=True)) / 2


# --- words --------------------------------------------------------------------------------------------------------------


@given(jobs())
def test_every_code_has_its_words(job: Job) -> None:
    job["points"] = {**points("right", (0, -8), (30, 20)), **points("left", (-25, 5))}
    answer = field(job)
    assert f"field.{answer.title}" in WORDS["section_titles"]
    assert {f"field.{row.code}" for row in answer.rows} <= set(WORDS["section_rows"])
    assert {f"field.{code}" for code in notes(answer)} <= set(WORDS["section_notes"])
    assert not [row for row in answer.rows if "section_texts" in row.right + row.left]
    json.dumps([answer.own, dict(answer.eyes), dict(answer.scenes)], allow_nan=False)
