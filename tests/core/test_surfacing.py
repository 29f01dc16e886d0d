"""The lens on the generator: handed-down figures, an outside body in the room, and laws."""

import copy
import math
from decimal import Decimal
from typing import Any

import numpy as np
import pytest

from pycore.bench.surfacing import Angles, Blocking, Surfaced, angles_of, block_edge, ring_mark, surfaced, wedge_degrees
from pycore.case import case_of
from pycore.job.document import read_job
from pycore.optics.power import Power, prism_at
from pycore.optics.prism import Eye, Prism
from pycore.optics.thickness import Solid
from pycore.sections.answer import SectionAnswer
from pycore.sections.framing import framings_of
from pycore.sections.surfacing import surfacing_section
from tests.references import tilt_reference as room

Job = dict[str, Any]
EYES: tuple[Eye, Eye] = ("right", "left")
FULL: Job = {
    "lens": {
        "design": "single-vision",
        "index": "1.60",
        "front_curve": "5",
        "curve_index": "1.6",
        "centre_thickness_mm": "5",
        "blank_diameter_mm": "75",
    },
    "frame": {"a_mm": "50", "b_mm": "36", "dbl_mm": "18", "ed_mm": "53", "shape": "rounded-rectangle"},
}
RIGHT: Job = {
    "sphere": "+3.00",
    "cylinder": "-1.00",
    "axis": "90",
    "prism": [{"amount": "2", "base": "in"}, {"amount": "1", "base": "up"}],
    "pd_mm": "32",
    "prp_height_mm": "19",
    "surfacing": {"prp_right_mm": "4", "prp_up_mm": "3", "block_diameter_mm": "56", "ring_index": "1.530"},
}
LEFT: Job = {
    "sphere": "-4.00",
    "cylinder": "+1.00",
    "axis": "30",
    "prism": [{"amount": "2", "base": "217"}],
    "pd_mm": "31",
    "prp_height_mm": "20",
    "surfacing": {"prp_right_mm": "-2", "prp_up_mm": "1", "block_diameter_mm": "50", "ring_index": "1.530"},
}


def job_of(right: Job, left: Job | None = None, **more: Any) -> Job:
    job: Job = {"format": "wedgewright.job/1", "state": "uncut", "right": copy.deepcopy(right), **copy.deepcopy(more)}
    return job | ({"left": copy.deepcopy(left)} if left else {})


def section(job: Job) -> SectionAnswer:
    return surfacing_section(case_of(read_job(job), None))


def own(answer: SectionAnswer) -> Job:
    assert isinstance(answer.own, dict)
    return answer.own


def rows(answer: SectionAnswer) -> dict[str, Any]:
    return {row.code: row for row in answer.rows}


def codes(answer: SectionAnswer) -> set[str]:
    return {code for code, _ in answer.notes}


# --- published and handed-down figures -----------------------------------------------------------


def test_we78_prism_at_the_blank_centre() -> None:
    """WE78 (computed by the facts' author, p + F·c; memory): 2.80 in 1.90 up, 3.384 at 34.16."""
    entry = own(section(job_of(RIGHT, **FULL)))["right"]
    prism = entry["at_blank_centre"]
    assert (prism["x"], prism["y"]) == (2.8, 1.9)
    assert (prism["amount"], prism["base"]) == (pytest.approx(3.384, abs=5e-4), pytest.approx(34.16, abs=5e-3))
    # Facts 4.10: base from the front θ, on the block 180 − θ, the ring's thick side θ + 180 and 360 − θ.
    angles = {name: round(turn, 2) for name, turn in entry["angles"].items()}
    assert angles == {"lens_from_front": 34.16, "lens_from_back": 145.84, "ring_from_front": 214.16, "ring_from_back": 325.84}
    assert entry["ring"]["mark"] == pytest.approx(3.384 * 0.530 / 0.60, abs=1e-3)
    assert entry["ring"]["for_index"] == 1.53


def test_wedge_for_one_prism_dioptre() -> None:
    """Facts 4.9: the tilt for 1 Δ by index (computed there)."""
    for index, degrees in ((1.498, 1.150), (1.53, 1.081), (1.586, 0.978), (1.60, 0.955), (1.67, 0.855), (1.74, 0.774)):
        assert wedge_degrees(1.0, index) == pytest.approx(degrees, abs=5e-4)


def test_ring_for_thinning_stands_base_up() -> None:
    """Facts 4.10, from a textbook (its p. 150): base-down thinning, ring base up; and 3 Δ by the thin rule."""
    job = job_of({"sphere": "+1.00", "add": "2.00"}, lens={"design": "progressive"}, thinning={"rule": "two-thirds"})
    entry = own(section(job))["right"]
    assert (entry["at_blank_centre"]["y"], entry["angles"]["ring_from_front"]) == (-1.33, 90)
    assert ring_mark(3.0, 1.530, 1.530) == 3.0


# --- outside references ----------------------------------------------------------------------------

COUNT = 4000


def test_wedge_turns_light_by_the_prism(capsys: pytest.CaptureFixture[str]) -> None:
    """The law of refraction by bisection (tests/references) finds the same wedge."""
    draw = np.random.default_rng(3)
    prism, index = draw.uniform(0.01, 25, COUNT), draw.uniform(1.45, 1.9, COUNT)
    expected = np.degrees(room.wedge_of(prism, index))
    worst = max(abs(wedge_degrees(float(p), float(n)) - e) for p, n, e in zip(prism, index, expected, strict=True))
    with capsys.disabled():
        print(f"\nsurfacing: {COUNT} wedges, largest difference from the outside one {worst:.1e}°")
    assert worst < 1e-9


class Bodies:
    """Random toric lenses with prism, their reference points beside the block's centre."""

    def __init__(self) -> None:
        draw = np.random.default_rng(78)
        self.sphere, self.cylinder = draw.uniform(-8, 6, COUNT), draw.uniform(-3, 3, COUNT)
        self.axis, self.index = draw.uniform(0.01, 180, COUNT), draw.uniform(1.5, 1.74, COUNT)
        self.front_d = np.maximum(0, self.sphere + np.maximum(self.cylinder, 0)) + draw.uniform(1, 5, COUNT)
        self.thickness, self.prism = draw.uniform(2, 8, COUNT), draw.uniform(-5, 5, (COUNT, 2))
        self.prp = draw.uniform(-6, 6, (COUNT, 2))
        power = room.power_matrix(self.sphere, self.cylinder, self.axis)
        upright = np.tile(np.eye(3), (COUNT, 1, 1))
        self.lenses = room.worked(power, self.prism, self.front_d, self.thickness, self.index, upright)

    def front_at(self, places: Any) -> Any:
        """The front's points above places (x, y)."""
        radius = self.lenses.front_radius
        return np.column_stack([places, np.sqrt(radius**2 - (places**2).sum(-1)) - radius])

    def power(self, i: int) -> Power:
        return Power(*(Decimal(float(part)) for part in (self.sphere[i], self.cylinder[i], self.axis[i])))


def test_prism_at_the_block_beside_an_outside_body(capsys: pytest.CaptureFixture[str]) -> None:
    """p + F·c beside the real wedge at the block's centre: light square to the front there, by vectors."""
    bodies = Bodies()
    start = bodies.front_at(-bodies.prp)
    out = bodies.lenses.front_normal(start)
    _, left = bodies.lenses.through(start, -out)
    # Turned back upright by the smallest rotation, so that the block's axis is straight ahead.
    right = np.cross(np.tile([0.0, 1.0, 0.0], (COUNT, 1)), out)
    right /= np.linalg.norm(right, axis=-1)[:, None]
    up = np.cross(out, right)
    expected = -100 * np.stack([room.dot(left, right), room.dot(left, up)], -1) / room.dot(left, out)[:, None]
    differences = []
    for i in range(COUNT):
        x, y = (Decimal(float(part)) for part in bodies.prism[i])
        c_x, c_y = (Decimal(float(part)) for part in bodies.prp[i])
        found = prism_at(Prism(x, y), bodies.power(i), -c_x, -c_y)
        differences.append(math.hypot(float(found.x) - expected[i, 0], float(found.y) - expected[i, 1]))
    worst, middle = max(differences), sorted(differences)[COUNT // 2]
    with capsys.disabled():
        print(
            f"surfacing: prism at the block's centre of {COUNT} real lenses, thin formula off by {worst:.2f} Δ, median {middle:.2f}"
        )
    assert worst < 0.6
    assert middle < 0.1


def test_thickness_at_the_block_beside_an_outside_body(capsys: pytest.CaptureFixture[str]) -> None:
    bodies, diameter = Bodies(), 36
    straight = np.tile([0.0, 0.0, -1.0], (COUNT, 1))
    found = []
    for turn in np.radians(np.arange(0, 360, 15)):
        start = bodies.front_at(-bodies.prp + diameter / 2 * np.array([math.cos(turn), math.sin(turn)]))
        above = start + np.array([0.0, 0.0, 10.0])  # from well in front, so that crossed surfaces count negative
        found.append((above - bodies.lenses.back_from(above, straight, 70.0))[:, 2] - 10.0)
    thin, thick = np.min(found, axis=0), np.max(found, axis=0)
    worst = 0.0
    for i in range(0, COUNT, 4):
        prp_right, prp_up = (Decimal(float(part)) for part in bodies.prp[i])
        blocking = Blocking(
            prp_right_mm=prp_right, prp_up_mm=prp_up, block_diameter_mm=Decimal(diameter), ring_index=Decimal("1.53"), usual=()
        )
        solid = Solid(
            index=float(bodies.index[i]),
            front_d=float(bodies.front_d[i]),
            power=bodies.power(i),
            prism_x=float(bodies.prism[i, 0]),
            prism_y=float(bodies.prism[i, 1]),
        )
        edge = block_edge(solid, float(bodies.thickness[i]), blocking)
        assert edge is not None
        worst = max(worst, abs(edge.thinnest_mm - thin[i]), abs(edge.thickest_mm - thick[i]))
    with capsys.disabled():
        print(f"surfacing: thickness at the block's edge, largest difference from the outside body {worst:.1e} mm")
    assert worst < 1e-5


def test_four_angles_are_one_arrow() -> None:
    """Turned over about the upright, x changes sign; the ring's thick side is opposite to the lens's."""
    draw = np.random.default_rng(10)
    for x, y in draw.uniform(-5, 5, (200, 2)):
        found = angles_of(Prism(Decimal(x), Decimal(y)))
        assert found is not None
        arrows = (
            (found.lens_from_front, x, y),
            (found.lens_from_back, -x, y),
            (found.ring_from_front, -x, -y),
            (found.ring_from_back, x, -y),
        )
        for turn, right, up in arrows:
            assert 0 <= turn < 360
            difference = turn - math.degrees(math.atan2(up, right))
            assert abs(math.remainder(difference, 360)) < 1e-9
    assert angles_of(Prism(Decimal(0), Decimal(0))) is None
    assert angles_of(Prism(Decimal(1), Decimal(0))) == Angles(0.0, 180.0, 180.0, 0.0)


# --- does it fit -----------------------------------------------------------------------------------


def lens_of(job: Job, eye: Eye = "right") -> Surfaced:
    case = case_of(read_job(job), None)
    order = case.job.order(eye)
    assert order
    found = surfaced(case.job, order, case.dues[eye], framings_of(case).get(eye))
    assert found
    return found


def test_blank_reaches_the_farthest_point_of_the_rim() -> None:
    """Facts 4.6: twice the farthest point of the rim from the blank's centre, and 2 mm. A round rim by hand."""
    frame = {"a_mm": "50", "b_mm": "50", "dbl_mm": "18", "ed_mm": "50", "shape": "round"}
    job = job_of({**RIGHT, "prp_height_mm": "28"}, lens=FULL["lens"], frame=frame)
    # Reference point 2 mm in and 3 mm up from the boxing centre, 4 right and 3 up of the block's centre:
    # the block's centre lies 2 mm out of the boxing centre.
    assert lens_of(job).blank_needed_mm == pytest.approx(2 * (25 + 2) + 2, abs=1e-3)
    for blank, fits in (("56.1", True), ("55.9", False)):
        job["lens"]["blank_diameter_mm"] = blank
        answer = section(job)
        assert own(answer)["right"]["blank"]["suffices"] is fits
        assert ("blank-small" in codes(answer), answer.title == "blank-small") == (not fits, not fits)
    del job["lens"]["blank_diameter_mm"]
    answer = section(job)
    assert own(answer)["right"]["blank"] == {"needed_mm": pytest.approx(56, abs=1e-3), "given_mm": None, "suffices": None}
    assert [(ask.usual, ask.used) for ask in answer.asks if ask.field == "lens.blank_diameter_mm"] == [("60", False)]
    job["frame"] = {**frame, "a_mm": "80", "b_mm": "80", "ed_mm": "80"}
    assert [ask.usual for ask in section(job).asks if ask.field == "lens.blank_diameter_mm"] == [""]


def test_thickness_given_is_held_against_the_least() -> None:
    job = job_of(RIGHT, **FULL)
    least = lens_of(job).needed_mm
    assert least is not None
    assert own(section(job))["right"]["thickness"]["governs"] == "edge"
    for given, fits in ((least + 0.01, True), (least - 0.01, False)):
        job["lens"]["centre_thickness_mm"] = f"{given:.4f}"
        answer = section(job)
        assert own(answer)["right"]["thickness"]["suffices"] is fits
        assert ("too-thin" in codes(answer), answer.title == "too-thin") == (not fits, not fits)
    del job["lens"]["centre_thickness_mm"]
    answer = section(job)
    assert own(answer)["right"]["thickness"]["suffices"] is None
    assert own(answer)["right"]["thickness"]["centre_mm"] == pytest.approx(least, abs=1e-4)
    assert ("lens.centre_thickness_mm", f"{least:.1f}") in {(ask.field, ask.usual) for ask in answer.asks}
    assert rows(answer)["centre"].assumed


def test_on_the_reference_point_no_formula_is_needed() -> None:
    assert codes(section(job_of({"sphere": "-3.00"}))) == {"share"}


def test_block_edge_warnings() -> None:
    plus = {"sphere": "+6.00", "surfacing": {"block_diameter_mm": "70"}}
    body = {"index": "1.5", "front_curve": "8", "curve_index": "1.5", "centre_thickness_mm": "5"}
    assert "cuts-block" in codes(section(job_of(plus, lens=body)))
    thick = {**body, "centre_thickness_mm": "8.8"}
    answer = section(job_of(plus, lens=thick))
    assert "thin-at-block" in codes(answer)
    assert 0 < own(answer)["right"]["block_edge"]["thinnest_mm"] < 1.5
    assert not {"cuts-block", "thin-at-block"} & codes(section(job_of(plus, lens={**body, "centre_thickness_mm": "12"})))
    far = section(job_of({"sphere": "-20.00", "surfacing": {"block_diameter_mm": "70"}}, lens=body))
    assert "no-lens-at-block" in codes(far)
    assert own(far)["right"]["block_edge"] is None
    assert lens_of(job_of({"sphere": "-20.00", "surfacing": {"block_diameter_mm": "70"}}, lens=body)).block_edge_suffices is None
    assert "block-thinnest" not in rows(far)


def test_rim_beyond_the_surface() -> None:
    """A rim that the surfaces do not reach: nothing is said of the least thickness."""
    job = job_of(
        {"sphere": "-25.00", "pd_mm": "20"},
        lens={**FULL["lens"], "centre_thickness_mm": "2"},
        frame={"a_mm": "70", "b_mm": "60", "dbl_mm": "18"},
    )
    lens = lens_of(job)
    assert (lens.needed_mm, lens.governs, lens.thickness_suffices) == (None, None, None)


# --- the section -----------------------------------------------------------------------------------


def test_nothing_said_of_the_block() -> None:
    """Blocked on the reference point, with the usual block and rings, all of it asked and marked."""
    answer = section(job_of({"sphere": "-3.00", "prism": [{"amount": "2", "base": "down"}]}))
    assert {ask.field: (ask.usual, ask.used) for ask in answer.asks} == {
        "right.surfacing.prp_right_mm": ("0", True),
        "right.surfacing.prp_up_mm": ("0", True),
        "right.surfacing.block_diameter_mm": ("55", True),
        "right.surfacing.ring_index": ("1.530", True),
        "lens.index": ("1.498", True),
        "lens.front_curve": ("4.50", True),
        "lens.minimum_centre_mm": ("2.0", True),
        "lens.minimum_edge_mm": ("1.5", True),
        "lens.centre_thickness_mm": (answer_centre(answer), True),
    }
    entry = own(answer)["right"]
    assert (entry["at_blank_centre"]["y"], entry["blank"]["needed_mm"]) == (-2.0, None)
    assert all(rows(answer)[code].assumed for code in ("at-blank-centre", "wedge", "ring", "centre", "block-thinnest"))
    assert "blank-needed" not in rows(answer)
    assert (answer.title, dict(answer.title_params)) == ("one", {"eye": "right", "prism": "2.00 Δ 270°"})


def answer_centre(answer: SectionAnswer) -> str:
    return f"{own(answer)['right']['thickness']['centre_mm']:.1f}"


def test_whole_pair() -> None:
    answer = section(job_of(RIGHT, LEFT, **FULL))
    assert (answer.title, set(answer.title_params)) == ("pair", {"right", "left"})
    assert not any(
        row.assumed for code, row in rows(answer).items() if code in ("at-blank-centre", "wedge", "ring", "blank-needed")
    )
    assert rows(answer)["ring"].right.endswith("(1.530)")
    assert codes(answer) == {"share", "thin-formula"}
    assert set(answer.scenes) == set(EYES)


def test_no_prism_has_no_angles() -> None:
    answer = section(job_of({"sphere": "-3.00"}))
    assert own(answer)["right"]["angles"] is None
    assert "lens-from-front" not in rows(answer)
    assert answer.title_params["prism"] == "0.00 Δ"
    assert not [shape for shape in answer.scenes["right"]["shapes"] if "arrow" in shape["role"]]


def test_what_a_person_should_know() -> None:
    strong = {**RIGHT, "prism": [{"amount": "25", "base": "in"}], "stated": {"sphere": "+3.00"}}
    job = job_of(strong, lens={**FULL["lens"], "design": "progressive"})
    assert {"beyond-thin", "stated-used", "power-varies", "thinning-not-known", "share"} <= codes(section(job))


def test_lenses_that_are_not_made() -> None:
    existing = job_of({"partner": True}, {"sphere": "-3.00"}, readings={"right": {"prism": [{"amount": "1", "base": "up"}]}})
    assert set(own(section(existing))) == {"left"}
    case = case_of(read_job(job_of({"sphere": "-1.00"}, {"pd_mm": "30"})), None)
    order = case.job.left
    assert order
    assert surfaced(case.job, order, case.dues["left"], None) is None
    only = job_of({"pd_mm": "30"}, {"sphere": "-3.00", "partner": True})
    assert (section(only).title, section(only).own, section(only).rows) == ("unknown", None, ())


def test_the_eyes_mirror_each_other() -> None:
    mirrored_right, mirrored_left = copy.deepcopy(LEFT), copy.deepcopy(RIGHT)
    mirrored_right["prism"] = [{"amount": "2", "base": str(540 - 217)}]
    for eye in (mirrored_right, mirrored_left):
        eye["axis"] = str(180 - int(eye["axis"]))
        eye["surfacing"]["prp_right_mm"] = str(-int(eye["surfacing"]["prp_right_mm"]))
    first, second = own(section(job_of(RIGHT, LEFT, **FULL))), own(section(job_of(mirrored_right, mirrored_left, **FULL)))
    for eye, other in (("right", "left"), ("left", "right")):
        one, two = first[eye], second[other]
        assert (one["at_blank_centre"]["x"], one["at_blank_centre"]["y"]) == (
            -two["at_blank_centre"]["x"],
            two["at_blank_centre"]["y"],
        )
        assert one["angles"]["lens_from_back"] == pytest.approx(two["angles"]["lens_from_front"], abs=1e-8)
        assert one["wedge_deg"] == pytest.approx(two["wedge_deg"], abs=1e-9)
        assert one["thickness"]["least_centre_mm"] == pytest.approx(two["thickness"]["least_centre_mm"], abs=1e-6)
        assert one["blank"] == two["blank"]
        assert one["block_edge"]["thinnest_mm"] == pytest.approx(two["block_edge"]["thinnest_mm"], abs=1e-6)


def test_picture_shows_one_base_from_both_sides() -> None:
    scene = section(job_of(RIGHT, LEFT, **FULL)).scenes["right"]
    arrows = {
        role: [shape for shape in scene["shapes"] if shape["role"] == role] for role in ("arrow", "ring-arrow", "prp", "blank")
    }
    (front, back), (ring, _) = arrows["arrow"], arrows["ring-arrow"]
    assert front["x2"] - front["x"] == pytest.approx(-(back["x2"] - back["x"]))
    assert front["y2"] == pytest.approx(back["y2"])
    assert (ring["x2"] * front["x2"], ring["y2"] * front["y2"]) < (0, 0)
    assert math.degrees(math.atan2(front["y2"], front["x2"])) == pytest.approx(34.16, abs=5e-3)
    assert [point["x"] - front_["x"] for point, front_ in zip(arrows["prp"], (front, back), strict=True)] == [4.0, -4.0]
    assert {shape["radius"] for shape in arrows["blank"]} == {37.5}
    left, bottom, right, top = scene["extent"]
    assert all(left <= shape["x"] <= right and bottom <= shape["y"] <= top for shape in scene["shapes"])
