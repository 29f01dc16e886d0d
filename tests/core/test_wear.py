"""The lens as worn: published figures, an outside ray trace, and laws that any right answer obeys."""

import copy
import math
from decimal import Decimal
from typing import Any

import numpy as np
import pytest

from pycore.bench.wear import Act, Worn
from pycore.case import case_of
from pycore.job.document import read_job
from pycore.optics.pencil import back_of_read_power, pencil_as_worn
from pycore.optics.power import Matrix, Power
from pycore.optics.prism import Eye, Prism
from pycore.optics.tilt import BeyondError, moved, oblique_factor, power_as_worn, power_of, power_to_order, tilt_of
from pycore.optics.tilt_trace import Glass, prism_as_worn, prism_to_order
from pycore.sections.answer import SectionAnswer
from pycore.sections.edge import edge_section
from pycore.sections.wear import wear_section
from tests.references import tilt_reference as room

Job = dict[str, Any]
EYES: tuple[Eye, Eye] = ("right", "left")


def lens(sphere: float, cylinder: float = 0.0, axis: float = 180.0) -> Power:
    return Power(Decimal(str(sphere)), Decimal(str(cylinder)), Decimal(str(axis)))


def prism_of(x: float, y: float) -> Prism:
    return Prism(Decimal(str(x)), Decimal(str(y)))


def job_of(right: Job, left: Job | None = None, **more: Any) -> Job:
    job: Job = {"format": "wedgewright.job/1", "state": "mounted", "right": right, **more}
    return job | ({"left": left} if left else {})


def section(job: Job) -> SectionAnswer:
    return wear_section(case_of(read_job(job), None))


# --- published and handed-down figures -----------------------------------------------------------


def test_we59_tilted_sphere() -> None:
    """WE59, US community-college course OPH 142, "Lens tilt", example 1: +15.00 tilted by 10 is +15.15 +0.47 x180.

    Its formula is Martin's with 2n = 3; the exact factor differs from it by 0.0024 D here.
    """
    worn = power_of(power_as_worn(lens(15).matrix(), tilt_of("right", 10, 0), 1.5), 1)
    martin = 15 * (1 + math.sin(math.radians(10)) ** 2 / 3)
    assert float(worn.sphere) == pytest.approx(15.15, abs=0.005)
    assert float(worn.cylinder) == pytest.approx(0.47, abs=0.005)
    assert worn.axis == 180
    assert abs(float(worn.sphere) - martin) < 0.003


@pytest.mark.parametrize("eye", EYES)
def test_we80_and_we81_matrix(eye: Eye) -> None:
    """WE80, WE81 (computed by the facts' author with Keating's matrix; memory): wrap 15 degrees, n 1.586."""
    tilt = tilt_of(eye, 0, 15)
    worn = power_of(power_as_worn(lens(-3).matrix(), tilt, 1.586))
    assert [round(float(part), 2) for part in (worn.sphere, worn.cylinder)] == [-3.07, -0.22]
    assert worn.axis == 90
    order = power_of(power_to_order(lens(-3).matrix(), tilt, 1.586))
    assert [round(float(part), 2) for part in (order.sphere, order.cylinder)] == [-2.74, -0.20]
    assert order.axis == 180
    oblique = power_of(power_to_order(lens(-3.25, -0.75, 165).matrix(), tilt, 1.586))
    found = (float(oblique.sphere), float(oblique.cylinder), float(oblique.axis))
    assert found == pytest.approx((-2.9779, -0.9228, 168.70), abs=0.005)


def test_oblique_axes_of_tilt_and_torsion() -> None:
    """Facts 4.15 and 4.15b (computed there): whole tilt, its axis, and the turn of the lens in its plane."""
    assert tilt_of("right", 8, 6).angle_deg == pytest.approx(9.99, abs=0.005)
    assert [round(tilt_of(eye, 8, 6).axis_deg or 0) for eye in ("right", "left")] == [143, 37]
    for panto, wrap, turn in ((8, 6, -0.42), (12, 8, -0.84), (10, 20, -1.77)):
        assert tilt_of("right", panto, wrap).torsion_deg == pytest.approx(turn, abs=0.005)
        assert tilt_of("left", panto, wrap).torsion_deg == pytest.approx(-turn, abs=0.005)
    worn = power_of(power_as_worn(lens(-2, -3, 30).matrix(), tilt_of("right", 10, 20), 1.5))
    assert float(worn.axis) == pytest.approx(28.8, abs=0.05)  # 31.0 without the torsion


@pytest.mark.parametrize(
    ("front_d", "power", "thickness", "index", "wrap", "expected"),
    [(8, 0, 2, 1.586, 15, 0.283), (8, 0, 2, 1.586, 25, 0.527), (6, 0, 2, 1.498, 10, 0.145), (8, -3, 1.5, 1.586, 15, 0.291)],
)
def test_we75_tilt_prism(front_d: float, power: float, thickness: float, index: float, wrap: float, expected: float) -> None:
    """WE75 and facts 4.16 (exact two-dimensional traces made there; memory): base out, towards the side swept back."""
    glass = Glass(index=index, front_d=front_d, thickness_mm=thickness)
    for eye, out in (("right", -1), ("left", 1)):
        x, y = prism_as_worn(glass.back(lens(power)), (0.0, 0.0), glass, tilt_of(eye, 0, wrap))
        assert (out * x, y) == (pytest.approx(expected, abs=6e-4), pytest.approx(0, abs=1e-12))
    down = prism_as_worn(glass.back(lens(power)), (0.0, 0.0), glass, tilt_of("right", wrap, 0))
    assert down == (pytest.approx(0, abs=1e-12), pytest.approx(-expected, abs=6e-4))


def test_prism_is_traced_with_the_lens() -> None:
    """Facts 4.15c: 5 in acts as 4.96 and 5 out as 5.71, not 4.79 and 5.21 as a plano's tilt prism would have it.

    That trace (memory) took the wedge a little differently: 0.025 Δ apart.
    """
    glass = Glass(index=1.586, front_d=6.0, thickness_mm=2.0)
    tilt, back = tilt_of("right", 0, 15), glass.back(lens(0))
    assert prism_as_worn(back, (5.0, 0.0), glass, tilt)[0] == pytest.approx(4.96, abs=0.03)
    assert prism_as_worn(back, (-5.0, 0.0), glass, tilt)[0] == pytest.approx(-5.71, abs=0.03)


# --- an outside trace ------------------------------------------------------------------------------

COUNT = 6000


class Many:
    """Random thick toric lenses with prism, tilted: as arrays, and one by one for the core."""

    def __init__(self, seed: int, *, thin: bool = False) -> None:
        draw = np.random.default_rng(seed)
        self.sphere = draw.uniform(-12, 10, COUNT)
        self.cylinder = draw.uniform(-5, 5, COUNT)
        self.axis = draw.uniform(0.001, 180, COUNT)
        self.index = draw.uniform(1.49, 1.9, COUNT)
        strongest = np.maximum(self.sphere, self.sphere + self.cylinder)
        self.front_d = np.maximum(strongest, 0) + draw.uniform(1.0, 6.0, COUNT)
        self.thickness = np.full(COUNT, 1e-3) if thin else draw.uniform(1, 9, COUNT)
        self.prism = draw.uniform(-8, 8, (COUNT, 2)) * (0.0 if thin else 1.0)
        self.left = draw.random(COUNT) < 0.5
        self.panto = draw.uniform(-10, 20, COUNT)
        self.wrap = draw.uniform(-5, 28, COUNT)

    @property
    def matrices(self) -> Any:
        return room.power_matrix(self.sphere, self.cylinder, self.axis)

    @property
    def axes(self) -> Any:
        return room.front_in_room(self.left, self.panto, self.wrap)

    def tilt(self, i: int) -> Any:
        return tilt_of("left" if self.left[i] else "right", self.panto[i], self.wrap[i])

    def glass(self, i: int, thickness_mm: float | None = None) -> Glass:
        return Glass(
            index=float(self.index[i]),
            front_d=float(self.front_d[i]),
            thickness_mm=float(self.thickness[i] if thickness_mm is None else thickness_mm),
        )


def exact(matrix: Any) -> Power:
    """A power matrix of numpy's as the core has powers."""
    return power_of((float(matrix[0, 0]), float(matrix[0, 1]), float(matrix[1, 1])))


def test_prism_beside_the_outside_trace(capsys: pytest.CaptureFixture[str]) -> None:
    many = Many(59)
    expected = room.worked(many.matrices, many.prism, many.front_d, many.thickness, many.index, many.axes).prism_ahead()
    found = []
    for i in range(COUNT):
        glass = many.glass(i)
        back = glass.back(lens(many.sphere[i], many.cylinder[i], many.axis[i]))
        found.append(prism_as_worn(back, tuple(many.prism[i]), glass, many.tilt(i)))
    worst = np.abs(np.array(found) - expected).max()
    with capsys.disabled():
        print(f"\nwear: prism of {COUNT} tilted lenses, largest difference from the outside trace {worst:.1e} Δ")
    assert worst < 1e-8


def test_lenses_decentred_for_their_prism(capsys: pytest.CaptureFixture[str]) -> None:
    """A spherical lens with its prism got by decentring is the same body as one with it worked in."""
    many = Many(75)
    draw = np.random.default_rng(4)
    moved_mm = draw.uniform(-5, 5, (COUNT, 2))
    many.sphere, many.front_d = np.clip(many.sphere, -12, 8), np.clip(many.front_d, 1, 10)
    for share, limit in ((0.0, 1e-8), (0.3, 0.1)):
        powers = room.power_matrix(many.sphere, share * many.cylinder, many.axis)
        upright, thickness = room.decentred(
            powers, moved_mm, many.front_d, many.thickness, many.index, np.tile(np.eye(3), (COUNT, 1, 1))
        )
        prism = upright.prism_ahead()  # what the lens meter's light gets, front upright
        tilted, _ = room.decentred(powers, moved_mm, many.front_d, many.thickness, many.index, many.axes)
        expected = tilted.prism_ahead()
        at_centre = many.front_d / (1 - many.thickness / 1000 / many.index * many.front_d)
        there = many.front_d / (1 - thickness / 1000 / many.index * many.front_d)
        local = powers + (there - at_centre)[:, None, None] * np.eye(2)
        found = []
        for i in range(COUNT):
            glass = many.glass(i, thickness[i])
            found.append(prism_as_worn(glass.back(exact(local[i])), tuple(prism[i]), glass, many.tilt(i)))
        worst = np.abs(np.array(found) - expected).max()
        kind = "toric" if share else "spherical"
        with capsys.disabled():
            print(f"wear: {COUNT} decentred {kind} lenses, largest difference {worst:.1e} Δ")
        assert worst < limit


def test_power_beside_pencils_of_rays(capsys: pytest.CaptureFixture[str]) -> None:
    """The matrix with its torsion is what a narrow pencil does in a thin lens; in an everyday thick one it is near."""
    for thin, most in ((True, 2e-3), (False, 0.15)):
        many = Many(80, thin=thin)
        if not thin:
            draw = np.random.default_rng(81)
            many.sphere, many.cylinder = draw.uniform(-6, 4, COUNT), draw.uniform(-3, 0, COUNT)
            many.front_d = np.maximum(many.sphere, 0) + draw.uniform(2, 5, COUNT)
            many.panto, many.wrap = draw.uniform(0, 12, COUNT), draw.uniform(0, 8, COUNT)
            many.thickness, many.prism = draw.uniform(1.5, 4, COUNT), many.prism * 0
        expected = room.worked(many.matrices, many.prism, many.front_d, many.thickness, many.index, many.axes).power_ahead()
        found = []
        for i in range(COUNT):
            xx, xy, yy = power_as_worn(lens(many.sphere[i], many.cylinder[i], many.axis[i]).matrix(), many.tilt(i), many.index[i])
            found.append([[xx, xy], [xy, yy]])
        worst = np.abs(np.array(found) - expected).max()
        with capsys.disabled():
            print(f"wear: power of {COUNT} {'thin' if thin else 'thick'} tilted lenses, largest difference {worst:.1e} D")
        assert worst < most


def test_pencil_beside_pencils_of_rays(capsys: pytest.CaptureFixture[str]) -> None:
    """Thick, toric, with prism, tilted: the closed form against neighbouring rays through the outside lens."""
    many = Many(59)
    lenses = room.worked(many.matrices, many.prism, many.front_d, many.thickness, many.index, many.axes)
    expected, found = room.power_along_ray(lenses), []
    for i in range(COUNT):
        glass = many.glass(i)
        back = glass.back(lens(many.sphere[i], many.cylinder[i], many.axis[i]))
        xx, xy, yy = pencil_as_worn(back, tuple(many.prism[i]), glass, many.tilt(i))
        found.append([[xx, xy], [xy, yy]])
    worst = np.abs(np.array(found) - expected).max()
    with capsys.disabled():
        print(f"wear: pencil through {COUNT} thick tilted lenses with prism, largest difference {worst:.1e} D")
    assert worst < 2e-6  # what the neighbours' distance of 0.001 mm leaves


def test_a_lens_with_prism_has_its_power_when_it_is_not_tilted() -> None:
    """The back is curved so that a pencil straight through the mark finds the ordered power, as the lens meter does."""
    many, largest = Many(60), 0.0
    upright = tilt_of("right", 0, 0)
    for i in range(COUNT):
        glass, prism = many.glass(i), tuple(many.prism[i])
        power = lens(many.sphere[i], many.cylinder[i], many.axis[i])
        found = pencil_as_worn(back_of_read_power(power, prism, glass), prism, glass, upright)
        largest = max(largest, *(abs(a - b) for a, b in zip(found, power.matrix(), strict=True)))
    assert largest < 1e-10


def test_the_matrix_beside_the_pencil(capsys: pytest.CaptureFixture[str]) -> None:
    """How far the tilted-lens matrix is off in everyday lenses and tilts: the figures that its docstring states."""
    many, draw = Many(80), np.random.default_rng(81)
    many.sphere, many.cylinder = draw.uniform(-6, 4, COUNT), draw.uniform(-3, 0, COUNT)
    many.front_d = np.maximum(many.sphere, 0) + draw.uniform(2, 5, COUNT)
    many.panto, many.wrap = draw.uniform(0, 12, COUNT), draw.uniform(0, 8, COUNT)
    many.thickness, many.prism = draw.uniform(1.5, 4, COUNT), draw.uniform(-5, 5, (COUNT, 2))
    for share, middle, most in ((0.0, 0.003, 0.1), (1.0, 0.065, 0.85)):
        off = []
        for i in range(COUNT):
            glass, prism = many.glass(i), (share * many.prism[i, 0], share * many.prism[i, 1])
            power = lens(many.sphere[i], many.cylinder[i], many.axis[i])
            pencil = pencil_as_worn(back_of_read_power(power, prism, glass), prism, glass, many.tilt(i))
            matrix = power_as_worn(power.matrix(), many.tilt(i), glass.index)
            off.append(max(abs(a - b) for a, b in zip(pencil, matrix, strict=True)))
        with capsys.disabled():
            kind = "with up to 5 Δ each way" if share else "without prism"
            print(f"wear: matrix beside pencil {kind}: median {np.median(off):.3f} D, largest {max(off):.2f} D")
        assert float(np.median(off)) < middle
        assert max(off) < most


# --- laws ------------------------------------------------------------------------------------------


def random_worn(seed: int, count: int) -> list[tuple[Worn, Act]]:
    many, draw = Many(seed), np.random.default_rng(seed + 1)
    cases = []
    for i in range(count):
        eye: Eye = "left" if many.left[i] else "right"
        worn = Worn(
            eye=eye,
            tilt=tilt_of(eye, many.panto[i], many.wrap[i]),
            glass=many.glass(i),
            thinning=(0.0, float(draw.uniform(-2, 0))),
            farther_mm=float(draw.uniform(-4, 4)),
        )
        sphere, cylinder = round(many.sphere[i], 3), round(many.cylinder[i], 3)
        act = Act(power=lens(sphere, cylinder, round(many.axis[i], 2) or 180), prism=prism_of(*many.prism[i].round(4)))
        cases.append((worn, act))
    return cases


def same(first: Act, second: Act, within: float = 1e-8) -> bool:
    powers = zip(first.power.matrix(), second.power.matrix(), strict=True)
    return all(abs(a - b) < within for a, b in powers) and (first.prism - second.prism).amount < within


def test_compensation_and_effect_undo_each_other() -> None:
    for worn, act in random_worn(81, 1500):
        assert same(worn.effect_of(worn.lens_for(act)), act)
        assert same(worn.lens_for(worn.effect_of(act)), act)


def test_thinning_is_in_the_lens_that_is_traced() -> None:
    """What the eye gets from prism and thinning together, less the thinning: by the outside trace."""
    thinning = {"rule": "amount", "amount": "1.5", "base": "down"}
    wear = {"pantoscopic_deg": "8", "wrap_deg": "12"}
    entry = own(section(job_of(copy.deepcopy(RIGHT), **{**FULL, "wear": wear}, thinning=thinning)))["right"]["effective"]
    one = [np.array([part]) for part in (-3.25, -0.75, 165.0, 5.0, 2.0, 1.586, 8.0, 12.0)]
    sphere, cylinder, axis, front_d, thickness, index, panto, wrap = one
    axes = room.front_in_room(np.array([False]), panto, wrap)
    traced = room.worked(room.power_matrix(sphere, cylinder, axis), np.array([[3.0, 2.0 - 1.5]]), front_d, thickness, index, axes)
    x, y = traced.prism_ahead()[0]
    assert (entry["prism"]["x"], entry["prism"]["y"]) == pytest.approx((x, y + 1.5), abs=1e-8)


def test_no_tilt_and_one_distance_change_nothing() -> None:
    for worn, act in random_worn(82, 200):
        upright = Worn(eye=worn.eye, tilt=tilt_of(worn.eye, 0, 0), glass=worn.glass, thinning=worn.thinning, farther_mm=0.0)
        assert same(upright.effect_of(act), act, 1e-9)
        assert same(upright.lens_for(act), act, 1e-9)
        assert upright.tilt.axis_deg is None


def test_turning_everything_turns_the_answer() -> None:
    """A wrapped right lens turned by 90 degrees, with its power and prism, is a lens tilted pantoscopically."""
    many = Many(83)
    for i in range(300):
        glass, (x, y) = many.glass(i), many.prism[i]
        angle = float(many.wrap[i])
        wrapped, tipped = tilt_of("right", 0, angle), tilt_of("right", angle, 0)
        upright = lens(many.sphere[i], many.cylinder[i], many.axis[i])
        turned = lens(many.sphere[i], many.cylinder[i], (many.axis[i] + 90) % 180)
        first = prism_as_worn(glass.back(upright), (x, y), glass, wrapped)
        second = prism_as_worn(glass.back(turned), (-y, x), glass, tipped)
        assert second == (pytest.approx(-first[1], abs=1e-9), pytest.approx(first[0], abs=1e-9))
        xx, xy, yy = power_as_worn(upright.matrix(), wrapped, glass.index)
        assert power_as_worn(turned.matrix(), tipped, glass.index) == pytest.approx((yy, -xy, xx), abs=1e-9)


def test_small_tilts_agree_with_the_classical_formulas(capsys: pytest.CaptureFixture[str]) -> None:
    """Facts 4.15c: g·T·p and the tilt's own prism (4.16, front pole) are a check, good to 0.2 Δ at 5 Δ and 15 degrees."""
    for angle, most in ((15.0, 0.2), (3.0, 0.03)):
        worst = 0.0
        for index, front_d, power, x, y in ((1.5, 6.0, 0.0, 5.0, 0.0), (1.586, 4.0, -4.0, 3.0, 4.0), (1.67, 8.0, 3.0, -4.0, 3.0)):
            glass = Glass(index=index, front_d=front_d, thickness_mm=2.0)
            worn = Worn(
                eye="left", tilt=tilt_of("left", angle * 0.6, angle * 0.8), glass=glass, thinning=(0.0, 0.0), farther_mm=0.0
            )
            act = Act(power=lens(power, -1.0, 30), prism=prism_of(x, y))
            worst = max(worst, float((worn.effect_of(act).prism - worn.classical_prism(act)).amount))
        with capsys.disabled():
            print(f"wear: classical formulas at {angle} degrees, largest difference {worst:.2f} Δ")
        assert worst < most


def test_vertex_distance_is_the_vergence_rule() -> None:
    """F / (1 + dF), any textbook: and the far point stays where it was."""
    power, prism = moved(lens(-10).matrix(), (5.0, -2.0), -2.0)
    assert power[0] == pytest.approx(-10 / (1 + 0.02), abs=1e-12)
    for worn_d, away_mm in ((-10.0, -2.0), (8.0, 3.0)):
        power, prism = moved((worn_d, 0.0, worn_d), (4.0, 0.0), away_mm)
        # The image of a distant point: 1/F behind the lens, p/F beside the line, at both places.
        assert 1 / worn_d + away_mm / 1000 == pytest.approx(1 / power[0], abs=1e-12)
        assert 4.0 / worn_d == pytest.approx(prism[0] / power[0], abs=1e-12)


def test_matrix_of_vertex_and_cylinder() -> None:
    """Each principal meridian follows the rule by itself."""
    for sphere, cylinder, axis in ((-8.0, -3.0, 37.0), (6.0, 2.0, 120.0)):
        power, _ = moved(lens(sphere, cylinder, axis).matrix(), (0.0, 0.0), 4.0)
        found = power_of(power, 1 if cylinder > 0 else -1)
        first, second = (part / (1 + 0.004 * part) for part in (sphere, sphere + cylinder))
        assert (float(found.sphere), float(found.sphere + found.cylinder)) == pytest.approx((first, second), abs=1e-9)
        assert float(found.axis) == pytest.approx(axis, abs=1e-7)


def test_oblique_factor_is_about_martins() -> None:
    """g ≈ 1 + sin²(tilt) / 2n (Martin's rule, facts 4.14)."""
    for degrees in (5, 10, 15):
        martin = 1 + math.sin(math.radians(degrees)) ** 2 / (2 * 1.6)
        assert oblique_factor(tilt_of("right", degrees, 0), 1.6) == pytest.approx(martin, abs=1e-3)


def test_where_nothing_comes_through() -> None:
    glass = Glass(index=1.9, front_d=1.0, thickness_mm=2.0)
    with pytest.raises(BeyondError):
        prism_as_worn(glass.back(lens(0)), (-150.0, 0.0), glass, tilt_of("right", 0, 60))
    with pytest.raises(BeyondError):
        prism_to_order(glass.back(lens(0)), (-5000.0, 0.0), glass, tilt_of("right", 0, 60))
    low = Glass(index=1.5, front_d=4.0, thickness_mm=2.0)
    with pytest.raises(BeyondError):  # near the greatest turn there is, where no step gets nearer
        prism_to_order(low.back(lens(0)), (70.0, 60.0), low, tilt_of("left", 5, 0))
    with pytest.raises(BeyondError):
        pencil_as_worn(glass.back(lens(0)), (-150.0, 0.0), glass, tilt_of("right", 0, 60))
    with pytest.raises(BeyondError):
        moved((40.0, 0.0, 40.0), (0.0, 0.0), -25.0)


# --- the section -----------------------------------------------------------------------------------

FULL: Job = {
    "lens": {"index": "1.586", "front_curve": "5", "curve_index": "1.586", "centre_thickness_mm": "2"},
    "wear": {"pantoscopic_deg": "8", "wrap_deg": "12", "vertex_tested_mm": "12", "vertex_worn_mm": "14"},
}
RIGHT: Job = {
    "sphere": "-3.25",
    "cylinder": "-0.75",
    "axis": "165",
    "prism": [{"amount": "3", "base": "in"}, {"amount": "2", "base": "up"}],
}
LEFT: Job = {"sphere": "+2.00", "cylinder": "+1.25", "axis": "20", "prism": [{"amount": "4", "base": "217"}]}


def codes(answer: SectionAnswer) -> set[str]:
    return {code for code, _ in answer.notes}


def rows(answer: SectionAnswer) -> dict[str, Any]:
    return {row.code: row for row in answer.rows}


def own(answer: SectionAnswer) -> Job:
    assert isinstance(answer.own, dict)
    return answer.own


def test_we80_through_the_job() -> None:
    """WE80, with nothing but the wrap measured: the missing tilt counts as none, visibly."""
    answer = section(job_of({"sphere": "-3.00"}, wear={"wrap_deg": "15"}, lens={"index": "1.586"}))
    entry = own(answer)["right"]
    assert entry["effective"]["power"]["shown"]["text"] == "\u22123.07 \u22120.22 ×90"
    assert entry["compensated"]["minus_form"]["shown"]["text"] == "\u22122.74 \u22120.20 ×180"
    assert entry["effective"]["prism"]["horizontal"]["base"] == "out"
    assert entry["compensated"]["prism"]["horizontal"]["base"] == "in"
    assert entry["compensated"]["x"] == entry["compensated"]["prism"]["x"]  # the fields stand beside as well
    asks = {ask.field: (ask.usual, ask.used) for ask in answer.asks}
    assert asks["wear.pantoscopic_deg"] == ("0", True)
    assert set(asks) == {"wear.pantoscopic_deg", "lens.front_curve", "lens.centre_thickness_mm"}
    assert rows(answer)["effective-power"].assumed
    assert not rows(answer)["ordered-power"].assumed
    assert answer.title == "off"
    assert answer.title_params["eye"] == "right"
    assert codes(answer) == {"front-pole", "not-twice"}
    assert entry["pencil"]["effective"]["minus_form"]["sphere"] == pytest.approx(-3.07, abs=0.05)
    assert entry["held"] == "front-pole"
    assert entry["tilt"] == {"angle_deg": 15.0, "axis_deg": 90.0, "torsion_deg": 0.0}


def test_compensated_values_as_the_makers_give_the_prescription() -> None:
    """The lens worked out, put in as the maker's stated values, gives the eye the prescription; both eyes, thinning too."""
    thinning = {"rule": "amount", "amount": "1.5", "base": "down"}
    job = job_of(copy.deepcopy(RIGHT), copy.deepcopy(LEFT), **FULL, thinning=thinning)
    first = section(job)
    assert "thinning-apart" in codes(first)
    assert "stated-off" not in rows(first)
    for including in (False, True):
        for eye in EYES:
            entry = own(first)[eye]["compensated"]
            power, prism = entry["power"]["plus_form"], entry["prism"]
            y = prism["y"] - (1.5 if including else 0.0)
            job[eye]["stated"] = {
                "sphere": f"{power['sphere']:+.9f}",
                "cylinder": f"{power['cylinder']:+.9f}",
                "axis": f"{power['axis']:.9f}",
                "prism": [
                    {"amount": f"{abs(prism['x']):.9f}", "base": "0" if prism["x"] > 0 else "180"},
                    {"amount": f"{abs(y):.9f}", "base": "up" if y > 0 else "down"},
                ],
                "includes_thinning": including,
            }
        answer = section(job)
        assert answer.title == "as-prescribed"
        assert {"stated-used"} <= codes(answer)
        assert "not-twice" not in codes(answer)
        assert rows(answer)["stated-off"].right == "0.00 D, 0.00 Δ"
        for eye, given in (
            ("right", (3.0, 2.0)),
            ("left", tuple(4 * np.array([math.cos(math.radians(217)), math.sin(math.radians(217))]))),
        ):
            entry = own(answer)[eye]
            assert entry["stated_used"]
            found = entry["effective"]["prism"]
            assert (found["x"], found["y"]) == pytest.approx(given, abs=1e-7)
        assert own(answer)["right"]["effective"]["minus_form"]["axis"] == pytest.approx(165, abs=1e-5)
        assert own(answer)["left"]["effective"]["plus_form"]["sphere"] == pytest.approx(2, abs=1e-7)


def test_stated_of_one_eye_and_wrong() -> None:
    job = job_of({**RIGHT, "stated": {"sphere": "-3.25", "cylinder": "-0.75", "axis": "165"}}, LEFT, **FULL)
    answer = section(job)
    assert "not-twice" in codes(answer)  # for the other eye
    assert rows(answer)["stated-off"].left == ""
    assert answer.title in ("stated-off", "off")
    only = section(job_of(job["right"], **FULL))
    assert only.title == "stated-off"
    assert float(only.title_params["power"]) > 0.1


def mirrored(job: Job) -> Job:
    """The same pair seen in a mirror: eyes exchanged, axes and bases turned over."""
    other = copy.deepcopy(job)
    other["right"], other["left"] = copy.deepcopy(job["left"]), copy.deepcopy(job["right"])
    for eye in EYES:
        other[eye]["axis"] = str(180 - int(other[eye]["axis"]))
        for part in other[eye]["prism"]:
            if part["base"].isdigit():
                part["base"] = str((180 - int(part["base"])) % 360)
    return other


def test_the_eyes_mirror_each_other() -> None:
    job = job_of(RIGHT, LEFT, **FULL)
    first, second = own(section(job)), own(section(mirrored(job)))
    for eye, other in (("right", "left"), ("left", "right")):
        for act in ("effective", "compensated"):
            one, two = first[eye][act], second[other][act]
            assert (one["prism"]["x"], one["prism"]["y"]) == pytest.approx((-two["prism"]["x"], two["prism"]["y"]), abs=1e-9)
            assert one["minus_form"]["sphere"] == pytest.approx(two["minus_form"]["sphere"], abs=1e-9)
            assert (one["minus_form"]["axis"] + two["minus_form"]["axis"]) % 180 == pytest.approx(0, abs=1e-7)
        assert first[eye]["tilt"]["torsion_deg"] == -second[other]["tilt"]["torsion_deg"]


def test_nothing_measured_is_asked_with_the_usual_figures() -> None:
    answer = section(job_of(RIGHT))
    assert answer.title == "unknown"
    assert answer.own is None
    assert [(ask.field, ask.used) for ask in answer.asks] == [
        ("wear.pantoscopic_deg", False),
        ("wear.wrap_deg", False),
        ("wear.vertex_tested_mm", False),
        ("wear.vertex_worn_mm", False),
    ]
    assert all(ask.usual for ask in answer.asks)


def test_vertex_alone() -> None:
    """Only the distances: no tilt, nothing of the lens's body asked, the vergence rule at work."""
    answer = section(job_of({"sphere": "-10.00"}, wear={"vertex_tested_mm": "12", "vertex_worn_mm": "14"}))
    assert {ask.field for ask in answer.asks} == {"wear.pantoscopic_deg", "wear.wrap_deg"}
    entry = own(answer)["right"]
    assert entry["effective"]["minus_form"]["sphere"] == pytest.approx(-10 / 1.02, abs=1e-9)
    assert entry["compensated"]["minus_form"]["sphere"] == pytest.approx(-10 / 0.98, abs=1e-9)
    assert entry["tilt"]["axis_deg"] is None
    assert "tilt" not in rows(answer)
    assert codes(answer) == {"at-tested-distance", "not-twice"}


def test_one_distance_counts_as_both() -> None:
    for name, other in (("vertex_worn_mm", "vertex_tested_mm"), ("vertex_tested_mm", "vertex_worn_mm")):
        answer = section(job_of({"sphere": "-10.00"}, wear={name: "14", "pantoscopic_deg": "0", "wrap_deg": "0"}))
        assert [(ask.field, ask.usual) for ask in answer.asks] == [(f"wear.{other}", "14")]
        assert answer.title == "as-prescribed"


def test_usual_bodies_that_differ_are_asked_of_each_eye() -> None:
    answer = section(job_of({"sphere": "-3.00"}, {"sphere": "+3.00"}, wear={"wrap_deg": "10", "pantoscopic_deg": "5"}))
    fields = {ask.field for ask in answer.asks}
    assert {"lens.index", "right.front_curve", "left.front_curve"} <= fields
    one = section(
        job_of({"sphere": "-3.00", "front_curve": "4"}, {"sphere": "-3.00"}, wear={"wrap_deg": "10", "pantoscopic_deg": "5"})
    )
    assert "left.front_curve" in {ask.field for ask in one.asks}


def test_what_a_person_should_know() -> None:
    job = job_of(RIGHT, **{**FULL, "wear": {"pantoscopic_deg": "20", "wrap_deg": "20"}})
    job["lens"] = FULL["lens"] | {"design": "progressive"}
    answer = section(job)
    assert {"large-tilt", "local-curves", "thinning-not-known"} <= codes(answer)
    assert "(" in rows(answer)["tilt"].right
    flat = section(job_of(RIGHT, **{**FULL, "wear": {"pantoscopic_deg": "20", "wrap_deg": "0"}}))
    assert "(" not in rows(flat)["tilt"].right


def test_beyond_and_without_power() -> None:
    far = section(job_of({"sphere": "+40.00"}, wear={"vertex_tested_mm": "0", "vertex_worn_mm": "40"}))
    assert (far.title, far.own, codes(far)) == ("beyond", None, {"beyond"})
    existing = job_of({"sphere": "-3.00"}, {"partner": True}, wear={"wrap_deg": "10"})
    existing["readings"] = {"left": {"prism": [{"amount": "1", "base": "up"}]}}
    answer = section(existing)
    assert set(own(answer)) == {"right"}
    none: Matrix = (0.0, 0.0, 0.0)
    assert power_of(none) == Power(Decimal("0E-12"))


def test_cylinder_keeps_the_orders_form() -> None:
    answer = section(job_of(RIGHT, LEFT, **FULL))
    shown = rows(answer)["compensated-power"]
    assert "+" in shown.left.partition(" ")[2]
    assert "+" not in shown.right


# --- the picture -----------------------------------------------------------------------------------

FRAME: Job = {"a_mm": "52", "b_mm": "34", "dbl_mm": "18", "ed_mm": "55"}


def drawn_lenses(answer: SectionAnswer) -> list[list[list[float]]]:
    return [shape["points"] for shape in answer.scenes["pair"]["shapes"] if shape["role"] == "outline"]


def chord_deg(points: list[list[float]]) -> float:
    """How the front's chord, from its first to its last point, stands in the picture."""
    last = points[len(points) // 2 - 1]
    return math.degrees(math.atan2(last[1] - points[0][1], last[0] - points[0][0]))


@pytest.mark.parametrize(("wrap", "panto"), [("12", "0"), ("0", "9")])
def test_the_picture_turns_each_lens_by_its_tilt(wrap: str, panto: str) -> None:
    """Against the same lenses untilted: the temple sides and the lower rims go towards the eyes."""
    both = job_of(RIGHT | {"pd_mm": "32"}, LEFT | {"pd_mm": "31"}, frame=FRAME, lens=FULL["lens"])
    flat = drawn_lenses(section({**both, "wear": {"wrap_deg": "0", "pantoscopic_deg": "0"}}))
    tilted = drawn_lenses(section({**both, "wear": {"wrap_deg": wrap, "pantoscopic_deg": panto}}))
    turned = [chord_deg(after) - chord_deg(before) for before, after in zip(flat, tilted, strict=True)]
    # From above right and left, from the side right and left; the eyes lie up, then to the right.
    assert turned == pytest.approx([-float(wrap), float(wrap), float(panto), float(panto)], abs=0.05)


def test_the_light_in_the_picture_turns_by_the_prism_as_worn() -> None:
    answer = section(job_of(RIGHT, LEFT, **FULL))
    entry = own(answer)["left"]["effective"]["prism"]
    arrows = [shape for shape in answer.scenes["pair"]["shapes"] if shape["kind"] == "arrow"]
    above, side = arrows[1], arrows[3]
    assert 100 * (above["x2"] - above["x"]) / (above["y2"] - above["y"]) == pytest.approx(entry["x"], abs=0.01)
    assert 100 * (side["y2"] - side["y"]) / (side["x2"] - side["x"]) == pytest.approx(entry["y"], abs=0.01)


def test_the_thickness_is_the_one_that_the_rim_wants() -> None:
    """As the panel Edge has it, to 0.1 mm; a given one stays, and so does the estimate where no surface reaches."""
    job = job_of(RIGHT | {"pd_mm": "32"}, frame=FRAME, wear=FULL["wear"], lens={"index": "1.586", "front_curve": "5"})
    edge = edge_section(case_of(read_job(job), None)).own
    assert isinstance(edge, dict)
    asked = {ask.field: ask.usual for ask in section(job).asks}
    assert asked["lens.centre_thickness_mm"] == f"{edge['right']['centre_mm']:.1f}"
    given = {**job, "lens": job["lens"] | {"centre_thickness_mm": asked["lens.centre_thickness_mm"]}}
    assert own(section(given)) == own(section(job))


def test_where_there_is_nothing_to_draw() -> None:
    assert section(job_of({"sphere": "+40.00"}, wear={"vertex_tested_mm": "0", "vertex_worn_mm": "40"})).scenes == {}
    steep = {"lens": {"front_curve": "19", "index": "1.5", "curve_index": "1.5"}, "wear": {"wrap_deg": "5"}}
    wide = section(job_of({"sphere": "+1.00", "pd_mm": "32"}, frame={"a_mm": "66", "b_mm": "40", "dbl_mm": "18"}, **steep))
    assert own(wide)
    assert wide.scenes == {}
