"""The pair at near: the slab, what is prescribed and stays, where one reads, what the eye gets.

Sources stand beside each check; rows WE.. are of the worked examples kept in `tests/references`.
"""

import json
import math
from collections.abc import Iterator
from decimal import Decimal
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import brentq

from pycore.bench.near import clock_difference, effective_at_near, round_segments_difference_mm, slabs_for
from pycore.case import Case, case_of
from pycore.contract import decode
from pycore.job.document import read_job
from pycore.optics.power import Power
from pycore.optics.prism import Prism
from pycore.sections.answer import SectionAnswer
from pycore.sections.near import near_section
from tests.core.strategies import WORDS, Job, jobs, patched
from tests.references import tilt_reference as room

EXACT = pytest.approx


def case(job: Job) -> Case:
    return case_of(read_job(decode(json.dumps(job))), None)


def near(job: Job) -> SectionAnswer:
    return near_section(case(job))


def own(job: Job) -> dict[str, Any]:
    found = near(job).own
    assert isinstance(found, dict)
    return found


def row(answer: SectionAnswer, code: str) -> Any:
    return next((item for item in answer.rows if item.code == code), None)


def asks(answer: SectionAnswer) -> dict[str, tuple[str, bool]]:
    return {ask.field: (ask.usual, ask.used) for ask in answer.asks}


def notes(answer: SectionAnswer) -> set[str]:
    return {code for code, _ in answer.notes}


def lens(text: str, **more: Any) -> Job:
    """`+2.00-1.75x180` as the fields of an eye."""
    power, _, axis = text.partition("x")
    sign = max(power.rfind("-"), power.rfind("+"))
    if not axis:
        return {"sphere": power, **more}
    return {"sphere": power[:sign], "cylinder": power[sign:], "axis": axis, **more}


def pair(right: str, left: str, depth_mm: str, inset_mm: str = "0", **more: Any) -> Job:
    return {
        "format": "wedgewright.job/1",
        "state": "mounted",
        "lens": {"design": "single-vision", "index": "1.6"},
        "wear": {"reading_depth_mm": depth_mm, "reading_inset_mm": inset_mm},
        "right": lens(right),
        "left": lens(left),
        **more,
    }


# --- published examples -----------------------------------------------------------------------------------------------

# id: lenses, mm below, vertical right minus left; + means the right base is up relative to the left.
PUBLISHED = {
    "WE45 course cards: 1.8": ("-3.00-2.00x180", "-2.75-2.50x90", "8", -1.8),
    "WE47 textbook p. 47: 2.4 BD left": ("-3", "-6", "8", 2.4),
    "WE49 trade series, axis 130: 2.09": ("+2.00-1.75x180", "+2.75-1.00x130", "10", -2.09),
    "WE49 trade series, axis 35: 1.83": ("+2.00-1.75x180", "+2.75-1.00x35", "10", -1.83),
    "WE50 corrected: 2.75 BU left": ("+5.00-2.00x90", "+2.25-3.00x90", "10", 2.75),
    "WE51 corrected: 2.25 BU right": ("-5.00-0.50x180", "-2.75-0.50x180", "10", -2.25),
    "WE52 trade article: 1.0": ("-1", "+1", "5", -1.0),
}
SLAB_EYE = {"WE45": "right", "WE47": "left", "WE50": "left", "WE51": "right"}


@pytest.mark.parametrize("name", PUBLISHED)
def test_published_vertical_at_near(name: str) -> None:
    """The sign: below a minus lens's centre the base is down, so the stronger minus lens is the lower; below a plus one, up."""
    right, left, depth_mm, vertical = PUBLISHED[name]
    found = own(pair(right, left, depth_mm))
    assert found["vertical"] == EXACT(vertical, abs=0.005)
    if name[:4] in SLAB_EYE:
        slab = found["slab"]
        assert (slab["eye"], slab["base"], slab["kind"]) == (SLAB_EYE[name[:4]], "up", "slab-off")
        assert slab["amount"] == EXACT(abs(vertical))
        other = slab["other"]
        assert (other["eye"], other["base"], other["kind"]) == (
            "left" if slab["eye"] == "right" else "right",
            "down",
            "reverse-slab",
        )
        assert other["amount"] == slab["amount"]


@pytest.mark.parametrize(
    ("name", "published"),
    [("WE49 trade series, axis 130: 2.09", 2.0), ("WE50 corrected: 2.75 BU left", 2.25), ("WE51 corrected: 2.25 BU right", 2.0)],
)
def test_published_keys_that_are_wrong(name: str, published: float) -> None:
    """WE49 rounds the left lens, WE50 and WE51 are misprints or rounded: the section must not agree with them."""
    right, left, depth_mm, _ = PUBLISHED[name]
    assert abs(own(pair(right, left, depth_mm))["slab"]["amount"] - published) > 0.05


def test_each_lens_below_its_centre() -> None:
    """WE47 textbook p. 47: 2.4 and 4.8 base down; WE52: 0.5 down, 0.5 up; WE66: the published 1.2 up used the sphere, it is 0.8."""
    answer = near(pair("-3", "-6", "8"))
    assert [answer.eyes[eye]["at_reading"]["vertical"] for eye in ("right", "left")] == [
        {"amount": EXACT(2.4), "base": "down"},
        {"amount": EXACT(4.8), "base": "down"},
    ]
    answer = near(pair("-1", "+1", "5"))
    assert [answer.eyes[eye]["at_reading"]["y"] for eye in ("right", "left")] == [-0.5, 0.5]
    answer = near(pair("+3.00-1.00x180", "+3.00-1.00x180", "4"))
    assert answer.eyes["right"]["at_reading"]["vertical"] == {"amount": EXACT(0.8), "base": "up"}


def test_full_cylinders_count() -> None:
    """Both lenses −3.00 −3.00×45 with 2.5 mm inset: 0.75 Δ, though the power along 90 is the same (domain facts 4.12, computed)."""
    found = own(pair("-3.00-3.00x45", "-3.00-3.00x45", "10", "2.5"))
    assert abs(found["vertical"]) == EXACT(0.75)
    assert found["slab"]["amount"] == EXACT(0.75)
    assert own(pair("-3.00-3.00x45", "-3.00-3.00x45", "10", "0"))["slab"]["kind"] == "none"


# --- against an independent reference ---------------------------------------------------------------------------------


def turned(sphere: float, cylinder: float, axis_deg: float) -> Any:
    """The power matrix by turning a diagonal one (AJOPO 1976;53:27-33), by numpy alone."""
    angle = math.radians(axis_deg)
    turn = np.array([[math.cos(angle), -math.sin(angle)], [math.sin(angle), math.cos(angle)]])
    return turn @ np.diag([sphere, sphere + cylinder]) @ turn.T


def reference(eyes: dict[str, dict[str, Any]]) -> dict[str, float]:
    """The pair at both points and what the eyes get, in prism dioptres, from plain numbers."""
    reading, distance, effective = {}, {}, {}
    for eye, e in eyes.items():
        side = 1.0 if eye == "right" else -1.0
        power = turned(e["sphere"], e["cylinder"], e["axis"])
        point = np.array([side * e["inset"], -e["depth"]])
        centre = np.array([side * e["segment_inset"], e["segment_height"] - e["prp"] - e["centre"]])
        distance[eye] = np.array([side * e["in"], e["up"]])
        reading[eye] = distance[eye] - power @ point / 10 - e["add"] * (point - centre) / 10
        through = np.eye(2) - e["s"] / 1000 * (power + (e["add"] - 1000 / e["away"]) * np.eye(2))
        effective[eye] = np.linalg.solve(through, distance[eye])
    result = {}
    for name, by_eye in (("reading", reading), ("distance", distance), ("effective", effective)):
        result[f"{name} horizontal"], result[f"{name} vertical"] = by_eye["right"] - by_eye["left"]
    return result


def random_eye(rng: Any) -> dict[str, Any]:
    def pick(low: float, high: float, places: int = 2) -> float:
        return round(float(rng.uniform(low, high)), places)

    return {
        "sphere": pick(-9, 7),
        "cylinder": pick(-4, 4),
        "axis": int(rng.integers(1, 181)),
        "add": pick(0.75, 3.5),
        "in": pick(-5, 5),
        "up": pick(-3, 3),
        "prp": 20.0,
        "segment_height": pick(14, 18, 1),
        "centre": pick(3, 9, 1),
        "segment_inset": pick(-1, 4, 1),
    }


def as_fields(e: dict[str, Any]) -> Job:
    prism = [
        {"amount": f"{abs(e['in']):.2f}", "base": "in" if e["in"] > 0 else "out"},
        {"amount": f"{abs(e['up']):.2f}", "base": "up" if e["up"] > 0 else "down"},
    ]
    segment = {
        "shape": "flat-top",
        "height_mm": str(e["segment_height"]),
        "inset_mm": str(e["segment_inset"]),
        "centre_below_top_mm": str(e["centre"]),
        "width_mm": "40",
    }
    power = {key: f"{e[key]:+.2f}" if e[key] else "0" for key in ("sphere", "cylinder")}
    return {**power, "axis": str(e["axis"]), "add": f"{e['add']:.2f}", "prp_height_mm": "20", "segment": segment, "prism": prism}


def test_hundreds_of_pairs_with_unlike_segments() -> None:
    """Random toric pairs with prism and unlike segments against numpy's matrices; the largest difference is printed."""
    rng, largest = np.random.default_rng(20), 0.0
    for _ in range(500):
        wear = {
            "reading_depth_mm": f"{rng.uniform(6.5, 15):.1f}",
            "reading_inset_mm": f"{rng.uniform(-1, 4):.1f}",
            "reading_distance_mm": f"{rng.uniform(200, 1500):.0f}",
            "rotation_centre_mm": f"{rng.uniform(20, 32):.1f}",
        }
        eyes = {eye: random_eye(rng) for eye in ("right", "left")}
        for e in eyes.values():
            e |= {"depth": float(wear["reading_depth_mm"]), "inset": float(wear["reading_inset_mm"])}
            e |= {"away": float(wear["reading_distance_mm"]), "s": float(wear["rotation_centre_mm"])}
        job = {
            "format": "wedgewright.job/1",
            "state": "mounted",
            "lens": {"design": "bifocal", "index": "1.5"},
            "wear": wear,
            "thinning": {"rule": "none"},
            **{eye: as_fields(e) for eye, e in eyes.items()},
        }
        found, expected = own(job), reference(eyes)
        for part in ("vertical", "horizontal"):
            largest = max(
                largest,
                abs(found[part] - expected[f"reading {part}"]),
                abs(found["change"][part] - (expected[f"reading {part}"] - expected[f"distance {part}"])),
                abs(found["effective"][part] - expected[f"effective {part}"]),
            )
        assert found["slab"]["amount"] == EXACT(abs(found["change"]["vertical"]), abs=1e-9)
    print(f"\nnear: largest difference to numpy {largest:.1e} Δ over 500 pairs")
    assert largest < 5e-9


# --- laws -------------------------------------------------------------------------------------------------------------


def prisms(up: str, inwards: str) -> list[Job]:
    return [{"amount": up, "base": "up"}, {"amount": inwards, "base": "in"}]


@given(jobs(designs=("single-vision", "bifocal"), read=False))
def test_prescribed_prism_is_never_slabbed_off(job: Job) -> None:
    bare = patched(job, right__prism=None, left__prism=None, right__stated=None, left__stated=None, thinning={"rule": "none"})
    ordered = patched(bare, right__prism=prisms("2.5", "3"), left__prism=prisms("1", "2"))
    before, after = own(bare), own(ordered)
    if "slab" not in before:  # unlike segments in places nobody told
        assert "slab" not in after
        return
    assert after["slab"]["amount"] == EXACT(before["slab"]["amount"], abs=1e-9)
    assert after["slab"]["eye"] == before["slab"]["eye"]
    assert after["vertical"] - before["vertical"] == EXACT(1.5, abs=1e-8)
    assert after["horizontal"] - before["horizontal"] == EXACT(5.0, abs=1e-8)


@given(jobs(designs=("single-vision",), read=False))
def test_the_slab_brings_the_distance_point_back(job: Job) -> None:
    """With either slab the lens meter shows at the reading point the vertical of the distance point, but for half a step."""
    found = own(job)
    slab = found["slab"]
    if slab["kind"] == "none":
        assert found["vertical"] == EXACT(found["distance"]["vertical"], abs=1e-8)
        return
    for kind in (slab, slab["other"]):
        verify = kind["verify"]
        assert verify["right"]["y"] - verify["left"]["y"] == EXACT(verify["vertical"], abs=1e-8)
        assert abs(verify["vertical"] - found["distance"]["vertical"]) <= kind["step"] / 2 + 1e-8
        assert verify["left_over"] == EXACT(verify["vertical"] - found["distance"]["vertical"], abs=1e-8)
        assert kind["in_steps"] % kind["step"] == 0


@given(jobs(designs=("single-vision",), read=False))
def test_mirror_and_transposition(job: Job) -> None:
    """Seen in a mirror the eyes change places and nothing else; the cylinder form changes nothing."""
    job = patched(job, right__stated=None, left__stated=None)
    for eye in ("right", "left"):
        job[eye].pop("prism", None)
    mirrored = patched(job, right=patched(job["left"]), left=patched(job["right"]))
    for eye in ("right", "left"):
        if "axis" in mirrored[eye]:
            mirrored[eye]["axis"] = str((180 - int(mirrored[eye]["axis"])) or 180)
    first, second = own(job), own(mirrored)
    assert second["vertical"] == EXACT(-first["vertical"], abs=1e-8)
    assert second["horizontal"] == EXACT(first["horizontal"], abs=1e-8)
    if first["slab"]["eye"]:
        assert {first["slab"]["eye"], second["slab"]["eye"]} == {"right", "left"}
    transposed = patched(job)
    for eye in ("right", "left"):
        if "axis" in transposed[eye]:
            e = transposed[eye]
            power = Power(Decimal(e["sphere"]), Decimal(e["cylinder"]), Decimal(e["axis"])).transposed()
            signed = [f"{value:+f}" if value else "0" for value in (power.sphere, power.cylinder)]
            transposed[eye] |= {"sphere": signed[0], "cylinder": signed[1], "axis": str(power.axis)}
    assert own(transposed)["vertical"] == EXACT(first["vertical"], abs=1e-8)


def test_equal_thinning_leaves_the_pair_alone() -> None:
    """Yoked prism cancels (technical brief on prism thinning, 1998)."""
    job = patched(pair("+2.00", "+4.00", "10"), lens__design="progressive", right__add="2.00", left__add="2.00")
    thinned = own(patched(job, thinning={"rule": "two-thirds"}))
    assert thinned == {**own(patched(job, thinning={"rule": "none"})), "slab": thinned["slab"]}
    assert thinned["vertical"] == -2.0
    assert "thinning-not-known" in notes(near(job))
    assert own(job)["vertical"] == -2.0


# --- where one reads --------------------------------------------------------------------------------------------------


def test_usual_values_are_offered_and_marked() -> None:
    """10 mm is common practice (8 mm in the textbook); nothing is assumed silently."""
    job = patched(pair("-3", "-6", "8"), wear=None, right__prism=prisms("1", "1"))
    answer = near(job)
    assert asks(answer) == {
        "wear.reading_depth_mm": ("10", True),
        "wear.reading_inset_mm": ("2.5", True),
        "wear.reading_distance_mm": ("400", True),
        "wear.rotation_centre_mm": ("27", True),
    }
    assert answer.own["slab"]["amount"] == EXACT(3.0)
    for code in ("depth", "inset", "at-reading", "total", "change", "slab-off", "reading-distance", "rotation-centre", "effective"):
        assert row(answer, code).assumed, code
    given_all = patched(
        job, wear={"reading_depth_mm": "8", "reading_inset_mm": "2", "reading_distance_mm": "400", "rotation_centre_mm": "27"}
    )
    answer = near(given_all)
    assert asks(answer) == {}
    # Only where the slab line lies, with no segment to put it at, rests on practice.
    assert {item.code for item in answer.rows if item.assumed} == {"slab-off-line-from-prp", "reverse-slab-line-from-prp"}


@pytest.mark.parametrize(
    ("changes", "inset_mm"),
    [
        ({"right__pd_mm": "32", "right__near_pd_mm": "30.4", "wear__reading_inset_mm": None}, 1.6),
        (
            {
                "right__segment": {"inset_mm": "1.8"},
                "lens__design": "bifocal",
                "right__add": "2.00",
                "wear__reading_inset_mm": None,
            },
            1.8,
        ),
        ({"right__segment": {"width_mm": "28"}, "wear__reading_inset_mm": None}, None),
        ({"right__pd_mm": "32", "right__near_pd_mm": "30.4"}, 2.0),
        ({"wear__reading_inset_mm": None}, 2.5),
        ({"wear__reading_inset_mm": None, "right__pd_mm": "32"}, 2.5),
        ({"lens__design": "near", "wear__reading_inset_mm": None, "right__pd_mm": "32", "right__near_pd_mm": "30"}, 0.0),
    ],
)
def test_the_inset_is_the_first_that_is_said(changes: Job, inset_mm: float | None) -> None:
    point = near(patched(pair("-3", "-6", "8", "2"), **changes)).eyes["right"]["reading_point"]
    assert point["right_mm"] == (2.5 if inset_mm is None else inset_mm)


def test_a_near_pair_is_read_at_its_reference_point() -> None:
    answer = near(patched(pair("-3", "-6", "8", "2"), lens__design="near", wear=None))
    assert answer.eyes["right"]["reading_point"] == {"right_mm": 0.0, "up_mm": 0.0}
    assert answer.own["slab"]["kind"] == "none"
    assert answer.title == "none"
    assert asks(answer)["wear.reading_depth_mm"] == ("0", True)


def test_one_lens_or_no_power_gives_no_pair() -> None:
    job = pair("-3", "-6", "8")
    answer = near(patched(job, left=None))
    assert (answer.own, answer.title, asks(answer)) == (None, "one-lens", {"left.sphere": ("", False)})
    answer = near(patched(job, left={"partner": True}))
    assert (answer.own, set(answer.eyes), asks(answer)) == (None, {"right"}, {"left.sphere": ("", False)})


# --- segments ---------------------------------------------------------------------------------------------------------


def bifocals(right_add: str = "2.00", left_add: str = "2.00", **segment: str) -> Job:
    job = patched(pair("-3", "-6", "10", "2"), lens__design="bifocal", thinning={"rule": "none"})
    for eye, add in (("right", right_add), ("left", left_add)):
        job[eye] |= {"add": add, "prp_height_mm": "20", "segment": {"height_mm": "16", "inset_mm": "2", **segment}}
    return job


def test_like_segments_cancel() -> None:
    """WE45: the same adds play no part in it."""
    answer = near(bifocals(shape="flat top", width_mm="28"))
    assert answer.own["vertical"] == EXACT(3.0)
    assert not row(answer, "change").assumed  # the usual depth of the centres is the same in both
    assert row(answer, "at-reading").assumed
    assert asks(answer)["right.segment.centre_below_top_mm"] == ("5", True)
    # The point is 6 mm below the top, 1 mm below the centre: base up 0.2, beside 3.0 down.
    assert answer.eyes["right"]["at_reading"]["y"] == EXACT(-3.0 + 0.2)


def test_adds_that_differ_and_segments_of_two_kinds() -> None:
    """Prentice's rule about each segment's own centre (domain facts 4.12, dissimilar segments)."""
    job = bifocals("2.00", "3.00", shape="flat-top", width_mm="28")
    answer = near(job)
    assert answer.own["vertical"] == EXACT((-3.0 + 0.2) - (-6.0 + 0.3))
    assert row(answer, "change").assumed
    job["left"]["segment"] |= {"shape": "Round", "width_mm": "22"}  # centre 11 mm below the top: 5 mm below the point
    assert near(job).own["vertical"] == EXACT((-3.0 + 0.2) - (-6.0 - 1.5))


def test_dissimilar_round_segments() -> None:
    """Diameters differ by 20 Δ/add mm (textbook rule, domain facts 4.12): the rule undoes the change by itself."""
    job = bifocals(shape="round", width_mm="22")
    answer = near(job)
    assert answer.own["vertical"] == EXACT(3.0)
    wider_mm = float(round_segments_difference_mm(Decimal(3), Decimal(2)))
    assert wider_mm == 30.0
    # The right lens is the higher one, so the wider segment goes there; half of it lowers the centre.
    assert row(answer, "round-segments").right == "30.0 mm"
    job["right"]["segment"]["width_mm"] = str(22 + wider_mm)
    assert near(job).own["vertical"] == EXACT(0.0)
    assert row(near(bifocals(shape="flat-top", width_mm="28")), "round-segments") is None


@pytest.mark.parametrize(
    ("shape", "width_mm", "add", "jump"),
    [
        ("flat-top", "35", "3.00", 1.5),
        ("flat-top", "28", "3.25", 1.625),
        ("round", "22", "2.00", 2.2),
        ("full-width", "50", "2.00", 0.0),
    ],
)
def test_image_jump(shape: str, width_mm: str, add: str, jump: float) -> None:
    """WE61, lens cards: 1.5, 1.63, 2.2 with centres 5, 5 and 11 mm below the top; none where the centre is at the line."""
    answer = near(bifocals(add, add, shape=shape, width_mm=width_mm))
    assert float(row(answer, "jump").right) == EXACT(jump, abs=0.005)


def test_segments_not_known() -> None:
    """Equal adds of which the same is said are taken to stand alike, visibly; unlike ones leave the vertical open."""
    job = bifocals()
    answer = near(job)
    assert answer.own["vertical"] == EXACT(3.0)
    assert "segments-alike" in notes(answer)
    assert row(answer, "change").assumed
    assert asks(answer)["left.segment.centre_below_top_mm"] == ("", False)
    assert row(answer, "jump") is None
    job["left"]["add"] = "2.50"
    answer = near(job)
    assert "vertical" not in answer.own
    assert "slab" not in answer.own
    assert "segments-unknown" in notes(answer)
    assert (answer.title, row(answer, "total"), row(answer, "total-horizontal").pair) == ("unknown", None, "1.80 in")
    job = bifocals()
    del job["right"]["prp_height_mm"], job["left"]["prp_height_mm"]
    job["left"]["segment"]["height_mm"] = "15"
    assert near(job).title == "unknown"
    job = bifocals()
    job["left"].pop("segment")
    job["left"].pop("add")
    assert near(job).title == "unknown"
    job = bifocals()
    for eye in ("right", "left"):
        job[eye].pop("segment")
    answer = near(job)
    assert answer.own["vertical"] == EXACT(3.0)
    assert asks(answer)["right.segment.height_mm"] == ("", False)
    assert asks(answer)["right.segment.inset_mm"] == ("2", True)
    assert "slab-off-line-height" not in {item.code for item in answer.rows}


@pytest.mark.parametrize(
    ("wear", "segment", "inside"),
    [
        ({}, {}, True),
        ({"reading_depth_mm": "4"}, {}, True),
        ({"reading_depth_mm": "3.9"}, {}, False),
        ({"reading_inset_mm": "10"}, {"inset_mm": "-5", "width_mm": "28", "shape": "flat-top"}, False),
        ({"reading_inset_mm": "9"}, {"inset_mm": "-5", "width_mm": "28", "shape": "flat-top"}, True),
        ({"reading_inset_mm": "9"}, {"inset_mm": "2", "width_mm": "22", "shape": "round"}, True),
        ({"reading_inset_mm": "9", "reading_depth_mm": "4"}, {"inset_mm": "2", "width_mm": "22", "shape": "round"}, False),
    ],
)
def test_the_add_applies_inside_the_segment(wear: Job, segment: Job, inside: bool) -> None:
    """Segment top 4 mm below the reference point; straight geometry."""
    job = patched(bifocals(**segment), wear={"reading_depth_mm": "10", "reading_inset_mm": "2", **wear})
    answer = near(job)
    assert answer.eyes["right"]["through_segment"] is inside
    assert ("outside-segment" in notes(answer)) is not inside


def test_progressives_say_what_is_left_out() -> None:
    job = patched(
        pair("-3", "-6", "10"), lens__design="progressive", right__add="2.00", left__add="2.00", thinning={"rule": "none"}
    )
    assert {"progressive-not-modelled"} == notes(near(job)) & {"progressive-not-modelled", "progressive-adds-differ"}
    answer = near(patched(job, left__add="2.50"))
    assert ("progressive-adds-differ", {"amount": "0.50"}) in answer.notes
    assert answer.own["vertical"] == EXACT(3.0)
    assert asks(near(patched(job, lens__design=None)))["right.design"] == ("", False)


# --- the slab: threshold, steps, line, verification -------------------------------------------------------------------


@pytest.mark.parametrize(
    ("left", "title", "note", "advised"),
    [
        ("-3", "none", None, False),
        ("-4.49", "small", "below-threshold", False),
        ("-4.50", "slab", "slab-memory", True),
        ("-9.00", "slab", "slab-memory", True),
        ("-9.01", "slab", "above-usual", True),
    ],
)
def test_thresholds(left: str, title: str, note: str | None, advised: bool) -> None:
    """1.5 Δ threshold, about 6 Δ at most (question banks, domain facts 4.12)."""
    answer = near(pair("-3", left, "10"))
    assert answer.title == title
    assert answer.own["slab"]["advised"] is advised
    assert note is None or note in notes(answer)
    assert (row(answer, "slab-off-steps") is not None) is advised


def test_the_texts_tell_an_amount_from_its_limit() -> None:
    """Never "1.50, below 1.50" (the project's rule for every text)."""
    answer = near(pair("-3", "-6", "4.999"))
    assert (answer.title, answer.title_params["amount"]) == ("small", "1.4997")
    assert row(answer, "slab-off").left == "1.4997 up"
    assert ("beyond-thin", {"eye": "right", "amount": "20.001"}) in near(pair("-20.001", "-20", "10")).notes


def test_steps() -> None:
    """From memory: ground in quarters, moulded in halves."""
    slab_off, reverse = slabs_for(Decimal("1.8"))
    assert (slab_off.in_steps, reverse.in_steps) == (Decimal("1.75"), Decimal("2.00"))


def test_where_the_line_lies() -> None:
    """Common practice: the segment's top; without a segment half way down."""
    line = own(bifocals(shape="flat-top"))["slab"]["line"]
    assert line == {"up_from_prp_mm": -4.0, "height_mm": 16.0, "at_segment_top": True}
    line = own(pair("-3", "-6", "10"))["slab"]["line"]
    assert line == {"up_from_prp_mm": -5.0, "height_mm": None, "at_segment_top": False}
    line = own(patched(pair("-3", "-6", "10"), left__prp_height_mm="18"))["slab"]["line"]
    assert line["height_mm"] == 13.0
    line = own(patched(pair("-3", "-6", "10"), left__fitting_height_mm="22", left__cross_above_prp_mm="4"))["slab"]["line"]
    assert line["height_mm"] == 13.0


def test_lens_clock_across_the_line() -> None:
    """Three pins 10 mm apart on both sides of a ridge of angle P/(100(n-1)), by geometry: the circle through them."""
    for prism, index in ((1.5, 1.53), (3.0, 1.60), (5.0, 1.74), (6.0, 1.498)):
        half = math.radians(math.degrees(prism / (100 * (index - 1)))) / 2
        outer, sunk = 10.0, 10.0 * math.tan(half)
        radius_mm = (outer**2 + sunk**2) / (2 * sunk)
        clock = float(clock_difference(Decimal(str(prism)), Decimal(str(index))))
        assert clock == EXACT(530 / radius_mm, rel=0.004, abs=0.006)
    answer = near(patched(pair("-3", "-6", "10"), lens__index=None))
    assert row(answer, "slab-off-clock").assumed
    assert asks(answer)["lens.index"][1]
    assert answer.own["slab"]["verify"]["clock_difference_d"] == EXACT(3.0 * 0.53 / 0.498, abs=0.005)


# --- what the eye gets ------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("amount", "power_d", "away_mm", "gets", "source"),
    [
        ("10", "0", Decimal(1000) / 3, 9.25, "WE74, course cards' formula"),
        ("10", "0", Decimal(400), 9.37, "domain facts 4.13, formula of the course cards"),
        ("5", "-5", Decimal(400), 4.16, "domain facts 4.13, computed paraxially"),
        ("5", "+5", Decimal(400), 5.36, "domain facts 4.13, computed paraxially"),
        ("5", "+8", Decimal(400), 5.87, "domain facts 4.13, computed paraxially"),
    ],
)
def test_effectivity(amount: str, power_d: str, away_mm: Decimal, gets: float, source: str) -> None:
    prism = effective_at_near(Prism(Decimal(amount), Decimal(0)), Power(Decimal(power_d)), away_mm, Decimal(27))
    assert prism is not None
    assert float(prism.x) == EXACT(gets, abs=0.005), source


def refracted(slope: float, normal: float, ratio: float) -> float:
    """The angle behind a surface in one plane, Snell's law; all angles from the axis, radians."""
    return normal + math.asin(ratio * math.sin(slope - normal))


def angle_behind(lens_: dict[str, float], start: tuple[float, float], angle: float) -> tuple[float, float, float]:
    """Trace one ray through a thick lens with a tilted back, in one plane: where it leaves, and its angle."""
    z, h = start
    for pole, curve, tilt, ratio in (
        (0.0, lens_["front"], 0.0, 1 / lens_["n"]),
        (lens_["t"], lens_["back"], lens_["tilt"], lens_["n"]),
    ):
        # A circle through the pole, turned there by `tilt`.
        centre_z, centre_h = pole + math.cos(tilt) / curve, -math.sin(tilt) / curve
        run, rise = math.cos(angle), math.sin(angle)
        dz, dh = z - centre_z, h - centre_h
        b, c = dz * run + dh * rise, dz * dz + dh * dh - 1 / curve**2
        roots = (-b - math.sqrt(b * b - c), -b + math.sqrt(b * b - c))
        step = min(roots, key=lambda root: abs(z + root * run - pole))
        z, h = z + step * run, h + step * rise
        # The surface's normal, pointing with the light.
        nz, nh = (centre_z - z) * math.copysign(1, curve), (centre_h - h) * math.copysign(1, curve)
        angle = refracted(angle, math.atan2(nh, nz), ratio)
    return z, h, angle


def exact_effect(lens_: dict[str, float], away_mm: float, centre_mm: float) -> float:
    """The turn of the eye, 100 tan, that looks through the lens at a point straight ahead."""
    centre_z = lens_["t"] + centre_mm

    def ray(height_mm: float) -> tuple[float, float, float]:
        slope = height_mm / away_mm
        return angle_behind(lens_, (-1.0, height_mm - slope), math.atan(slope))

    def miss(height_mm: float) -> float:
        z, h, behind = ray(height_mm)
        return h + (centre_z - z) * math.tan(behind)

    return 100 * math.tan(ray(brentq(miss, -8.0, 8.0, xtol=1e-12))[2])


def thick_lenses(count: int) -> Iterator[tuple[dict[str, float], float]]:
    """Random thick spherical lenses with a wedge, and their back vertex power."""
    rng = np.random.default_rng(7)
    for _ in range(count):
        power, index = rng.uniform(-8, 6), rng.uniform(1.5, 1.74)
        front_d = min(max(power / 2 + 6, 1.0), 9.0)
        thick = rng.uniform(1.5, 2.5) + max(power, 0)
        front = front_d / 1000 / (index - 1)
        back_d = power - front_d / (1 - thick / 1000 / index * front_d)
        back = -back_d / 1000 / (index - 1)
        wedge = rng.uniform(0.005, 0.09) * rng.choice([-1, 1])
        yield {"front": front, "back": back, "t": thick, "n": index, "tilt": wedge}, power


def test_effectivity_against_exact_rays() -> None:
    """The eye's turn from a ray traced exactly through thick lenses with a wedge (own trace, Snell's law, scipy's root).

    Thin and paraxial formulas leave a few per cent (thickness, magnification by the front curve).
    """
    worst = (0.0, 0.0, 0.0)
    for lens_, power in thick_lenses(1000):
        for away_mm, centre_mm in ((350.0, 27.0), (1e7, 25.0)):
            worked = 100 * math.tan(angle_behind(lens_, (-1.0, 0.0), 0.0)[2])
            prism = Prism(Decimal(worked), Decimal(0))
            thin = effective_at_near(prism, Power(Decimal(power)), Decimal(away_mm), Decimal(centre_mm))
            assert thin is not None
            exact = exact_effect(lens_, away_mm, centre_mm)
            difference = abs(float(thin.x) - exact)
            worst = max(worst, (difference / (abs(exact) + 1.0), difference, exact))
    print(f"\nnear: thin effectivity against exact rays, largest {worst[1]:.3f} Δ at {worst[2]:.2f} Δ over 2000 lenses")
    assert worst[0] < 0.01


def test_effectivity_of_toric_lenses_against_exact_rays() -> None:
    """Skew rays through thick toric lenses with oblique prism, traced in the room (implicit surfaces, Newton's method)."""
    count, draw = 2000, np.random.default_rng(11)
    sphere, cylinder, axis = draw.uniform(-7, 4, count), draw.uniform(-3, 3, count), draw.uniform(1, 180, count)
    index, prism = draw.uniform(1.5, 1.74, count), draw.uniform(-5, 5, (count, 2))
    strongest = np.maximum(np.maximum(sphere, sphere + cylinder), 0)
    front_d, thickness = strongest + draw.uniform(2, 5, count), draw.uniform(1.5, 2.5, count) + strongest
    upright = np.tile(np.eye(3), (count, 1, 1))
    lenses = room.worked(room.power_matrix(sphere, cylinder, axis), prism, front_d, thickness, index, upright)
    worked, worst = lenses.prism_ahead(), (0.0, 0.0, 0.0)
    for away_mm, centre_mm in ((350.0, 27.0), (1e6, 25.0)):
        exact = lenses.prism_near(away_mm, thickness + centre_mm)
        for i in range(count):
            power = Power(Decimal(sphere[i]), Decimal(cylinder[i]), Decimal(axis[i]))
            given = Prism(Decimal(worked[i, 0]), Decimal(worked[i, 1]))
            thin = effective_at_near(given, power, Decimal(away_mm), Decimal(centre_mm))
            assert thin is not None
            difference = math.hypot(float(thin.x) - exact[i, 0], float(thin.y) - exact[i, 1])
            amount = math.hypot(*exact[i])
            worst = max(worst, (difference / (amount + 1.0), difference, amount))
    print(f"\nnear: thin effectivity against skew rays, largest {worst[1]:.3f} Δ at {worst[2]:.2f} Δ over {2 * count} toric lenses")
    assert worst[0] < 0.012


def test_effectivity_ends_where_the_image_reaches_the_eye() -> None:
    assert effective_at_near(Prism(Decimal(1), Decimal(0)), Power(Decimal(40)), Decimal(2000), Decimal(60)) is None
    wear = {"rotation_centre_mm": "60", "reading_distance_mm": "2000"}
    answer = near(patched(pair("+40", "-38", "1"), wear=wear, right__prism=prisms("1", "1")))
    assert "effective-unknown" in notes(answer)
    assert "effective" not in answer.own
    assert row(answer, "effective-pair") is None


def test_the_add_counts_in_what_the_eye_gets() -> None:
    """The power read through is distance and add: with +2.00 the same as a lens stronger by 2 D (definition of the add)."""
    wear = {"reading_depth_mm": "10", "reading_inset_mm": "2", "reading_distance_mm": "400", "rotation_centre_mm": "27"}
    job = patched(bifocals(shape="flat-top"), wear=wear, right__prism=prisms("2", "3"), left__prism=prisms("0", "1"))
    plain = patched(job, lens__design="single-vision", right__sphere="-1.00", left__sphere="-4.00")
    answer, other = near(job), near(plain)
    assert answer.own["effective"] == other.own["effective"]
    assert answer.own["effective"]["vertical"] < 2.0


# --- marks and texts --------------------------------------------------------------------------------------------------


def test_beyond_the_thin_formulas() -> None:
    """Above 20 Δ nothing is refused, everything is marked (domain facts section 8)."""
    answer = near(pair("-20", "-20", "10.1"))
    assert ("beyond-thin", {"eye": "right", "amount": "20.20"}) in answer.notes
    assert answer.eyes["right"]["beyond_thin"] is True
    assert near(pair("-20", "-20", "10")).eyes["right"]["beyond_thin"] is False


def test_the_prescribed_stays_in_the_total() -> None:
    answer = near(patched(pair("-3", "-6", "8"), right__prism=prisms("1.5", "3")))
    assert ("prescribed-stays", {"amount": "1.50 right up"}) in answer.notes
    assert (row(answer, "distance").pair, row(answer, "total").pair) == ("1.50 right up, 3.00 in", "3.90 right up, 3.00 in")
    assert answer.title_params == {"amount": "2.40", "eye": "left", "word": "up"}


def shapes_of(job: Job, eye: str) -> dict[str, Job]:
    return {shape["role"]: shape for shape in near(job).scenes[eye]["shapes"]}


def ends(points: list[list[float]]) -> tuple[float, ...]:
    across, along = [x for x, _ in points], [y for _, y in points]
    return min(across), min(along), max(across), max(along)


def test_pictures() -> None:
    """Boxing (ISO 8624): nasal edge DBL/2 from the middle, which is the PD from the point; the slab line on one lens only."""
    frame = {"a_mm": "52", "b_mm": "34", "dbl_mm": "18", "ed_mm": "55", "shape": "oval"}
    job = patched(bifocals(shape="round", width_mm="22"), frame=frame, right__pd_mm="31", right__prism=prisms("1", "1"))
    right, left = shapes_of(job, "right"), shapes_of(job, "left")
    assert ends(right["outline"]["points"]) == EXACT((-30.0, -20.0, 22.0, 14.0), abs=0.01)
    assert right["outline"]["dashed"] is False
    assert ends(right["segment"]["points"]) == EXACT((-9.0, -26.0, 13.0, -4.0), abs=0.1)
    assert "slab-line" not in right
    assert "outline" not in left
    assert (left["slab-line"]["x"], left["slab-line"]["y"], left["slab-line"]["y2"]) == (-18.0, -4.0, -4.0)
    left = shapes_of(patched(job, left__pd_mm="31", left__segment__shape="flat-top", left__segment__inset_mm=None), "left")
    assert ends(left["outline"]["points"]) == EXACT((-22.0, -20.0, 30.0, 14.0), abs=0.01)
    assert ends(left["segment"]["points"])[3] == -4.0
    unplaced = patched(job, left__prp_height_mm=None, right__prp_height_mm=None, frame=None)
    assert {"segment", "slab-line", "outline"}.isdisjoint(shapes_of(unplaced, "left"))
    assert "segment" not in shapes_of(bifocals(), "right")
    far = shapes_of(patched(job, right__prism=prisms("0", "60")), "right")["arrow"]
    for scene in near(job).scenes.values():
        low_x, low_y, high_x, high_y = scene["extent"]
        assert all(low_x <= shape["x"] <= high_x and low_y <= shape["y"] <= high_y for shape in scene["shapes"] if "x" in shape)
    assert math.hypot(far["x2"] - far["x"], far["y2"] - far["y"]) == EXACT(40.0, abs=0.01)


@given(st.sampled_from(["single-vision", "bifocal", "trifocal", "progressive", "near"]), jobs(read=False))
def test_every_job_is_answered_in_words(design: str, job: Job) -> None:
    job["lens"] = {"design": design}
    answer = near(job)
    assert f"near.{answer.title}" in WORDS["section_titles"]
    assert all(f"near.{item.code}" in WORDS["section_rows"] for item in answer.rows)
    assert all(f"near.{code}" in WORDS["section_notes"] for code, _ in answer.notes)
    assert all(ask.field.split(".")[-1] in WORDS["fields"] for ask in answer.asks)
