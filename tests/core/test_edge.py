"""The section `edge` against an exact lens built apart, scipy's integration, the worked examples and the laws.

Sources: the implicit surfaces of `references/edge_reference.py`; scipy.integrate for weight; rows WE72 and WE73 of the
worked examples (exact wedge and thin formula); the edge formula of the domain facts (section 4 item 8), valid thin;
boxing system (ISO 8624) for the rim's sides.
"""

from __future__ import annotations

import csv
import json
import math
import random
from decimal import Decimal
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import integrate

from pycore.bench.body import body_values, usual_front_curve
from pycore.bench.edge import COARSE, Edge, Framing, edge_of, framing_of
from pycore.bench.rim import rim_of
from pycore.case import Case, case_of
from pycore.contract import decode
from pycore.job.body import Frame
from pycore.job.document import read_job
from pycore.optics.power import Power
from pycore.optics.prism import NO_PRISM, Eye, Prism, from_base
from pycore.optics.surface import OutsideSurfaceError
from pycore.optics.thickness import CORRIDOR_MM, Solid, addition_depth, thicknesses
from pycore.optics.wedge import thin_wedge_tangent, wedge_tangent
from pycore.sections.answer import SectionAnswer
from pycore.sections.edge import edge_section
from tests.core.strategies import patched
from tests.references.edge_reference import ReferenceLens, spherical_thickness, wedge_rad

Job = dict[str, Any]
EXAMPLES = Path(__file__).parents[1] / "references" / "worked_examples.csv"
SHAPES = ("rounded-rectangle", "oval", "teardrop")
SAME_MM = 2e-6  # what Newton's method leaves, and a little noise


def example(id_: str) -> tuple[dict[str, Any], dict[str, Any]]:
    """Inputs and outputs of one worked example."""
    with EXAMPLES.open(encoding="utf-8") as file:
        row = next(row for row in csv.DictReader(file) if row["id"] == id_)
    return json.loads(row["inputs"]), json.loads(row["outputs"])


def case_on(job: Job) -> Case:
    """The case of a job as it is typed."""
    return case_of(read_job(decode(json.dumps(job))), None)


def plain_job(right: Job, left: Job | None = None, **more: Any) -> Job:
    """A single-vision job with everything an edge needs."""
    job: Job = {
        "format": "wedgewright.job/1",
        "state": "uncut",
        "lens": {
            "design": "single-vision",
            "index": "1.60",
            "front_curve": "5.00",
            "minimum_centre_mm": "1.5",
            "minimum_edge_mm": "1.2",
            "density_g_cm3": "1.30",
        },
        "frame": {"a_mm": "52", "b_mm": "36", "dbl_mm": "18", "ed_mm": "55", "shape": "rounded-rectangle"},
        "right": {"pd_mm": "32", "prp_height_mm": "19", **right},
    }
    if left is not None:
        job["left"] = {"pd_mm": "32", "prp_height_mm": "19", **left}
    return patched(job, **more)


def framing(job: Job, eye: Eye = "right") -> Framing:
    """One lens in its rim."""
    case = case_on(job)
    order = case.job.order(eye)
    assert order
    found = framing_of(case.job, order, case.dues[eye])
    assert found
    return found


def answer(job: Job) -> SectionAnswer:
    """The section's answer."""
    return edge_section(case_on(job))


def codes(found: SectionAnswer) -> set[str]:
    """The codes of its notes."""
    return {code for code, _ in found.notes}


# --- exact thickness --------------------------------------------------------------------------------------------------


def random_lenses(count: int, seed: int) -> list[ReferenceLens]:
    """Lenses of every kind: thick, toric, with prism up to 20, all of whose surfaces reach 32 mm."""
    chance = random.Random(seed)
    lenses = []
    while len(lenses) < count:
        front_d = chance.choice([0.0, chance.uniform(0.5, 12.0)])
        index = chance.choice([1.498, 1.523, 1.586, 1.60, 1.67, 1.74])
        lens = ReferenceLens(
            index=index,
            front_d=front_d,
            sphere=round(chance.uniform(-10.0, min(front_d, 7.0)), 2),
            cylinder=chance.choice([0.0, round(chance.uniform(-4.0, 4.0), 2)]),
            axis_deg=chance.choice([90.0, 180.0, float(chance.randint(1, 180))]),
            thickness_mm=chance.uniform(1.0, 9.0),
            prism=chance.choice([(0.0, 0.0), (chance.uniform(-14, 14), chance.uniform(-14, 14)), (3.0, 0.0)]),
        )
        steep, flat, _ = lens.back()
        if max(abs(steep), abs(flat), front_d / (1000 * (index - 1))) < 1 / 48:
            lenses.append(lens)
    return lenses


def solid_of(lens: ReferenceLens) -> Solid:
    """The same lens as the core takes it."""
    power = Power(Decimal(str(lens.sphere)), Decimal(str(lens.cylinder)), Decimal(str(lens.axis_deg)))
    return Solid(index=lens.index, front_d=lens.front_d, power=power, prism_x=lens.prism[0], prism_y=lens.prism[1])


def test_thickness_against_the_exact_lens() -> None:
    """1,500 points of 300 random lenses; the reference finds the torus by Brent's method in a turned frame."""
    chance, largest = random.Random(7), 0.0
    for lens in random_lenses(300, seed=3):
        radius, points = 32.0, []
        for _ in range(5):
            angle, reach = chance.uniform(0, 2 * math.pi), radius * math.sqrt(chance.random())
            points.append((reach * math.cos(angle), reach * math.sin(angle)))
        found = thicknesses(solid_of(lens), lens.thickness_mm, points)
        largest = max(largest, *(abs(mm - lens.thickness(*point)) for mm, point in zip(found, points, strict=True)))
    print(f"edge: largest difference in thickness {largest:.2e} mm")
    assert largest < SAME_MM


def test_thousands_of_lenses_against_arrays(capsys: pytest.CaptureFixture[str]) -> None:
    """24 points of each of 3,000 random lenses, thick, toric, with prism, off their rim's middle; bisection over arrays."""
    draw, largest = np.random.default_rng(8), 0.0
    lenses = random_lenses(3000, seed=4)
    for lens in lenses:
        angle, reach = draw.uniform(0, 2 * math.pi, 24), 32.0 * np.sqrt(draw.random(24))
        x, y = reach * np.cos(angle), reach * np.sin(angle)
        found = thicknesses(solid_of(lens), lens.thickness_mm, list(zip(x.tolist(), y.tolist(), strict=True)))
        largest = max(largest, float(np.abs(np.array(found) - lens.thicknesses(x, y)).max()))
    with capsys.disabled():
        print(f"\nedge: thickness of {len(lenses)} lenses at 24 points, largest difference {largest:.1e} mm")
    assert largest < SAME_MM


def test_the_addition_is_the_second_integral_of_power() -> None:
    """scipy integrates curvature twice; the corridor's length is the core's own, from memory."""
    for below in (-3.0, 0.0, 4.0, CORRIDOR_MM, 20.0, 28.0):

        def curvature(depth: float) -> float:
            return 2.5 * min(max(depth / CORRIDOR_MM, 0.0), 1.0) / 1000.0 / 0.6

        expected, _ = integrate.quad(
            lambda d, below=below: (below - d) * curvature(d),
            0.0,
            max(below, 0.0),
            limit=200,
            points=[min(max(below, 1e-9), CORRIDOR_MM)],
        )
        assert addition_depth(2.5, 1.6, below) == pytest.approx(expected, abs=1e-9)
    with_add, without = (
        thicknesses(Solid(index=1.6, front_d=5.0, power=Power(Decimal(1)), add=add), 3.0, [(2.0, -20.0), (2.0, 20.0)])
        for add in (2.5, 0.0)
    )
    assert without[0] - with_add[0] == pytest.approx(addition_depth(2.5, 1.6, 20.0), abs=1e-12)
    assert with_add[1] == without[1]


def test_the_wedge_in_print() -> None:
    """WE73 (exact and thin, apical angle) and WE72 (thin, by index)."""
    given_, printed = example("WE73")
    for row, prism in enumerate(given_["P"]):
        tangent = wedge_tangent(prism, given_["n"])
        assert given_["d_mm"] * tangent == pytest.approx(printed["exact"][row], abs=0.0006)
        assert math.degrees(math.atan(tangent)) == pytest.approx(printed["apical_deg"][row], abs=0.0006)
        assert given_["d_mm"] * thin_wedge_tangent(prism, given_["n"]) == pytest.approx(printed["thin"][row])
        assert math.atan(tangent) == pytest.approx(wedge_rad(prism, given_["n"]), abs=1e-9)
    given_, printed = example("WE72")
    for index, thin_mm in zip(given_["n"], printed["thin_mm"], strict=True):
        assert given_["d_mm"] * thin_wedge_tangent(given_["P"], index) == pytest.approx(thin_mm, abs=0.006)


def test_a_weak_lens_follows_the_thin_edge_formula() -> None:
    """t(e) = t + sag2 - sag1 + (p·e) P / (100 (n - 1)), facts 4.8; at half a dioptre and one prism dioptre."""
    solid = Solid(index=1.5, front_d=2.0, power=Power(Decimal("-0.50")), prism_x=0.6, prism_y=0.8)
    for x, y in ((20.0, 0.0), (0.0, -15.0), (-12.0, 9.0)):
        thin = 2.0 + 0.5 * (x * x + y * y) / 1000.0 + (0.6 * x + 0.8 * y) / 50.0
        assert thicknesses(solid, 2.0, [(x, y)])[0] == pytest.approx(thin, abs=0.01)


def test_no_lens_where_a_surface_does_not_reach() -> None:
    with pytest.raises(OutsideSurfaceError):
        thicknesses(Solid(index=1.5, front_d=0.0, power=Power(Decimal(-30))), 1.0, [(25.0, 0.0)])
    with pytest.raises(OutsideSurfaceError):
        thicknesses(Solid(index=1.5, front_d=25.0, power=Power(Decimal(25))), 1.0, [(25.0, 0.0)])


# --- weight -----------------------------------------------------------------------------------------------------------


def reference_of(found: Framing, edge: Edge, prism: Prism) -> ReferenceLens:
    """The reference lens of a framed one."""
    solid = found.lens.solid
    return ReferenceLens(
        index=solid.index,
        front_d=solid.front_d,
        sphere=float(solid.power.sphere),
        cylinder=float(solid.power.cylinder),
        axis_deg=float(solid.power.axis),
        thickness_mm=edge.centre_mm,
        prism=(float(prism.x), float(prism.y)),
    )


def superellipse(half_a: float, half_b: float, exponent: float, angle: float) -> float:
    """The radius of the model rim at an angle in radians."""
    return float((abs(math.cos(angle) / half_a) ** exponent + abs(math.sin(angle) / half_b) ** exponent) ** (-1 / exponent))


@pytest.mark.parametrize("sphere", ["-4.00", "+3.50", "0.00"])
def test_weight_against_scipy_for_spherical_lenses(sphere: str) -> None:
    """Twofold adaptive integration over the very outline, in closed form; WE rows give no volumes."""
    job = plain_job(
        {"sphere": sphere, "prism": [{"amount": "3", "base": "in"}, {"amount": "1", "base": "up"}]},
        frame__shape="oval",
        frame__ed_mm=None,
    )
    found = framing(job)
    prism = Prism(Decimal(3), Decimal(1))
    edge = edge_of(found.lens, prism)
    lens, (right, up) = reference_of(found, edge, prism), found.lens.rim.centre
    volume, _ = integrate.dblquad(
        lambda r, angle: float(spherical_thickness(lens, right + r * np.cos(angle), up + r * np.sin(angle))) * r,
        0.0,
        2 * math.pi,
        0.0,
        lambda angle: superellipse(26.0, 18.0, 2.0, angle),
    )
    assert edge.volume_mm3 == pytest.approx(volume, rel=5e-4)
    assert edge.weight_g == pytest.approx(volume * 1.30 / 1000.0, rel=5e-4)


def test_weight_of_a_toric_lens_in_a_squarish_rim() -> None:
    """Gauss and Legendre (numpy) over a superellipse with the toric reference lens."""
    prism = Prism(Decimal(-2), Decimal("1.5"))
    found = framing(plain_job({"sphere": "-2.00", "cylinder": "-3.00", "axis": "30"}))
    edge = edge_of(found.lens, prism)
    lens, (right, up) = reference_of(found, edge, prism), found.lens.rim.centre
    exponents = np.linspace(3.0, 6.0, 400)
    longest = [max(superellipse(26.0, 18.0, k, angle) for angle in np.linspace(0.1, 1.2, 300)) for k in exponents]
    exponent = float(np.interp(27.5, longest, exponents))
    around, weights_around = np.polynomial.legendre.leggauss(12)
    along, weights_along = np.polynomial.legendre.leggauss(6)
    volume = 0.0
    for quarter in range(4):
        for node, weight in zip(around, weights_around, strict=True):
            angle = (quarter + (node + 1) / 2) * math.pi / 2
            reach = superellipse(26.0, 18.0, exponent, angle)
            for step, share in zip(along, weights_along, strict=True):
                r = reach * (step + 1) / 2
                mm = lens.thickness(right + r * math.cos(angle), up + r * math.sin(angle))
                volume += mm * r * share * reach / 2 * weight * math.pi / 4
    assert edge.volume_mm3 == pytest.approx(volume, rel=2e-3)


# --- what governs -----------------------------------------------------------------------------------------------------


def test_weight_of_hundreds_of_lenses(capsys: pytest.CaptureFixture[str]) -> None:
    """Gauss and Legendre over 72 sectors of the rim's own polygon, with the reference's thickness at every node."""
    chance, worst, count = random.Random(12), 0.0, 300
    along, shares = np.polynomial.legendre.leggauss(6)
    reach, weights = (along + 1) / 2, shares / 2 * (along + 1) / 2
    for _ in range(count):
        a, b = chance.randint(44, 58), chance.randint(28, 42)
        frame = {"a_mm": str(a), "b_mm": str(b), "dbl_mm": "18", "ed_mm": str(a + chance.randint(1, 4)), "shape": chance.choice(SHAPES)}
        power = {"sphere": f"{chance.uniform(-7, 4):+.2f}", "cylinder": f"{chance.uniform(-3, 3):+.2f}", "axis": str(chance.randint(1, 180))}
        parts = [{"amount": f"{chance.uniform(0, 5):.2f}", "base": base} for base in ("in", "up")]
        found = framing(plain_job({**power, "prism": parts, "prp_height_mm": str(b // 2 + chance.randint(-3, 3))}, frame=frame))
        prism = Prism(Decimal(parts[0]["amount"]), Decimal(parts[1]["amount"]))
        edge = edge_of(found.lens, prism)
        lens, (right, up) = reference_of(found, edge, prism), found.lens.rim.centre
        rim = np.array(found.lens.rim.points) - (right, up)
        squares, step = (rim**2).sum(-1), 2 * math.pi / len(rim)
        x, y = (right + rim[:, :1] * reach).ravel(), (up + rim[:, 1:] * reach).ravel()
        volume = float((lens.thicknesses(x, y).reshape(len(rim), -1) * weights * squares[:, None]).sum() * step)
        worst = max(worst, abs(edge.volume_mm3 / volume - 1))
    with capsys.disabled():
        print(f"\nedge: volume of {count} lenses, largest difference {100 * worst:.2f} %")
    assert worst < 4e-3


def test_a_plus_lens_is_governed_by_its_edge_and_a_minus_lens_by_its_centre() -> None:
    plus = edge_of(framing(plain_job({"sphere": "+4.00"})).lens, NO_PRISM)
    assert plus.governs == "edge"
    assert plus.thinnest[1] == pytest.approx(1.2, abs=1e-4)
    minus = edge_of(framing(plain_job({"sphere": "-4.00"})).lens, NO_PRISM)
    assert (minus.governs, minus.centre_mm) == ("centre", 1.5)
    strong = edge_of(framing(plain_job({"sphere": "-4.00"})).lens, Prism(Decimal(1), Decimal(0)))
    assert strong.governs == "inside"  # the optical centre lies inside, and is thinner than the reference point
    assert strong.centre_mm > 1.5
    away = edge_of(framing(plain_job({"sphere": "-0.25"})).lens, Prism(Decimal(4), Decimal(0)))
    assert away.governs == "edge"  # the optical centre lies far outside


def test_drilled_places_may_govern() -> None:
    drilled = framing(plain_job({"sphere": "+3.00"}, frame__drilled=True))
    edge = edge_of(drilled.lens, NO_PRISM)
    holes = thicknesses(drilled.lens.solid, edge.centre_mm, drilled.lens.rim.holes)
    assert min(holes) >= 2.0 - 1e-4
    assert edge.governs == ("hole" if min(holes) < 2.0 + 1e-3 else "edge")
    thick_edges = plain_job({"sphere": "-0.25"}, frame__drilled=True, lens__minimum_edge_mm="0.5", lens__minimum_centre_mm="0.5")
    assert edge_of(framing(thick_edges).lens, NO_PRISM).governs == "hole"


def test_weighing_may_be_left_out() -> None:
    edge = edge_of(framing(plain_job({"sphere": "-2.00"})).lens, NO_PRISM, weigh=False)
    assert (edge.volume_mm3, edge.weight_g) == (0.0, None)


def test_no_blank_is_thick_enough() -> None:
    job = plain_job({"sphere": "+2.00"}, lens__minimum_edge_mm="20", frame__a_mm="90", frame__b_mm="80", frame__ed_mm="100")
    with pytest.raises(OutsideSurfaceError):
        edge_of(framing(job).lens, Prism(Decimal(60), Decimal(0)))


powers = st.builds(
    lambda sphere, cylinder, axis: {
        "sphere": f"{sphere / 4:+.2f}" if sphere else "0.00",
        "cylinder": f"{cylinder / 4:+.2f}" if cylinder else "0.00",
        "axis": str(axis),
    },
    st.integers(-32, 20),
    st.integers(-12, 12),
    st.integers(1, 180),
)
bases_deg = st.integers(0, 359)


@given(power=powers, tenths=st.integers(0, 100), base_deg=bases_deg)
def test_every_minimum_is_kept_and_one_is_just_met(power: Job, tenths: int, base_deg: int) -> None:
    """Whatever the power and the prism."""
    lens = framing(plain_job(power)).lens
    edge = edge_of(lens, from_base(Decimal(tenths) / 10, Decimal(base_deg)))
    assert edge.thinnest[1] >= 1.2 - 2e-4
    assert edge.centre_mm >= 1.5
    if edge.governs == "edge":
        assert edge.thinnest[1] == pytest.approx(1.2, abs=2e-4)
    else:
        assert edge.least_mm == pytest.approx(1.5, abs=2e-4) or edge.thinnest[1] < 1.5
    coarse = edge_of(lens, from_base(Decimal(tenths) / 10, Decimal(base_deg)), COARSE)
    assert coarse.thickest[1] == pytest.approx(edge.thickest[1], abs=0.12)


# --- laws -------------------------------------------------------------------------------------------------------------


@given(power=powers, tenths=st.integers(0, 80), base_deg=bases_deg, turn=st.integers(1, 71))
def test_turning_lens_and_prism_turns_the_profile(power: Job, tenths: int, base_deg: int, turn: int) -> None:
    """In a round rim about the reference point; by steps of 5 degrees, so that points meet points."""
    turned = power | {"axis": str((int(power["axis"]) + 5 * turn - 1) % 180 + 1)}
    round_rim = {"frame__a_mm": "48", "frame__b_mm": "48", "frame__ed_mm": "48", "frame__shape": "round"}
    edges = []
    for order, base in ((power, base_deg), (turned, base_deg + 5 * turn)):
        job = plain_job(order | {"pd_mm": "33", "prp_height_mm": "24"}, **round_rim)
        edges.append(edge_of(framing(job).lens, from_base(Decimal(tenths) / 10, Decimal(base % 360))))
    first, second = edges
    for index, (_, mm) in enumerate(first.profile):
        assert second.profile[(index + turn) % 72][1] == pytest.approx(mm, abs=2e-4)
    assert second.volume_mm3 == pytest.approx(first.volume_mm3, rel=2e-4)


@given(power=powers, tenths=st.integers(0, 80), base_deg=bases_deg)
def test_the_other_eye_is_the_mirror(power: Job, tenths: int, base_deg: int) -> None:
    mirrored = power | {"axis": str((180 - int(power["axis"]) - 1) % 180 + 1)}
    job = plain_job(power, mirrored)
    right = edge_of(framing(job).lens, from_base(Decimal(tenths) / 10, Decimal(base_deg)))
    left = edge_of(framing(job, "left").lens, from_base(Decimal(tenths) / 10, Decimal((180 - base_deg) % 360)))
    for index, (_, mm) in enumerate(right.profile):
        assert left.profile[(36 - index) % 72][1] == pytest.approx(mm, abs=2e-4)
    assert left.volume_mm3 == pytest.approx(right.volume_mm3, rel=1e-4)


def test_transposing_the_order_changes_nothing() -> None:
    plus, minus = ({"sphere": "-2.00", "cylinder": "+3.00", "axis": "30"}, {"sphere": "+1.00", "cylinder": "-3.00", "axis": "120"})
    first, second = (edge_of(framing(plain_job(order)).lens, NO_PRISM) for order in (plus, minus))
    assert [mm for _, mm in first.profile] == pytest.approx([mm for _, mm in second.profile], abs=1e-5)


# --- the body's usual values ------------------------------------------------------------------------------------------


def test_usual_values_are_named_and_given_ones_are_not() -> None:
    case = case_on(plain_job({"sphere": "-2.00"}))
    assert case.job.right
    values = body_values(case.job.right, case.job.frame)
    assert values
    assert set(values.usual) == {"lens.abbe", "lens.centre_thickness_mm"}
    bare = case_on({"format": "wedgewright.job/1", "state": "uncut", "right": {"sphere": "+2.00"}})
    assert bare.job.right
    values = body_values(bare.job.right, Frame())
    assert values
    assert values.usual["lens.index"] == "1.498"
    assert values.usual["lens.front_curve"] == "8.00"  # Vogel's rule, from memory
    assert values.usual["lens.minimum_centre_mm"] == "2.0"
    assert not values.thickness_given
    assert values.density_g_cm3 == Decimal("1.32")
    powerless = case_on({"format": "wedgewright.job/1", "state": "uncut", "right": {"partner": True}, "left": {"sphere": "-1.00"}})
    assert powerless.job.right
    assert body_values(powerless.job.right, Frame()) is None


def test_vogels_rule() -> None:
    """From memory (facts section 6): plus, mean power + 6; minus, half the mean power + 6."""
    assert usual_front_curve(Power(Decimal("4.00"), Decimal("-1.00"), Decimal(90))) == Decimal("9.50")
    assert usual_front_curve(Power(Decimal("-8.00"))) == Decimal("2.00")
    assert usual_front_curve(Power(Decimal("-14.00"))) == Decimal("0.5")
    assert usual_front_curve(Power(Decimal("9.00"))) == Decimal(12)


# --- the section ------------------------------------------------------------------------------------------------------


def test_the_report_says_what_the_contract_asks_for() -> None:
    found = answer(plain_job({"sphere": "-4.00", "prism": [{"amount": "2", "base": "out"}]}, {"sphere": "-3.00"}))
    assert isinstance(found.own, dict)
    right = found.own["right"]
    assert len(right["profile"]) == 72
    assert right["profile"][0][0] == 0.0
    thickness = dict(map(tuple, right["profile"]))
    assert right["thickest"]["thickness_mm"] == max(thickness.values())
    assert right["thinnest"]["thickness_mm"] == min(thickness.values())
    assert right["thickest"]["place"].endswith("temporal")  # base out
    assert (right["nasal_mm"], right["temporal_mm"]) == (thickness[0.0], thickness[180.0])
    assert (found.own["left"]["nasal_mm"]) == dict(map(tuple, found.own["left"]["profile"]))[180.0]
    assert (right["top_mm"], right["bottom_mm"]) == (thickness[90.0], thickness[270.0])
    assert found.own["weight_g"] == pytest.approx(right["weight_g"] + found.own["left"]["weight_g"])
    assert right["wedge_deg"] == pytest.approx(math.degrees(wedge_rad(2.0, 1.6)), abs=1e-6)
    assert found.title == "thickest"
    assert found.title_params["eye"] == "right"
    assert [ask.field for ask in found.asks] == []
    assert set(found.scenes) == {"right", "left"}
    json.dumps(found.own, allow_nan=False)


def test_options_are_the_same_lenses_after_one_change() -> None:
    """The split shows halves, the index a lens of 1.67: each against edges worked out apart."""
    job = plain_job({"sphere": "-2.00", "prism": [{"amount": "6", "base": "in"}]}, {"sphere": "-2.00"})
    found = answer(job)
    assert isinstance(found.own, dict)
    options = {option["kind"]: option for option in found.own["options"]}
    assert set(options) == {"split", "index"}
    halved = patched(job, right__prism=[{"amount": "3", "base": "in"}], left__prism=[{"amount": "3", "base": "in"}])
    again = answer(halved)
    assert isinstance(again.own, dict)
    for eye in ("right", "left"):
        assert options["split"][eye]["thickest_mm"] == pytest.approx(again.own[eye]["thickest"]["thickness_mm"], abs=0.06)
        assert options["split"][eye]["weight_g"] == pytest.approx(again.own[eye]["weight_g"], rel=0.005)
    assert options["split"]["needs_agreement"]
    assert "split" not in {option["kind"] for option in again.own["options"]}
    higher = answer(patched(job, lens__index="1.67", lens__density_g_cm3="1.35"))
    assert isinstance(higher.own, dict)
    assert options["index"]["figures"] == [1.67]
    assert options["index"]["weight_g"] == pytest.approx(higher.own["weight_g"], rel=0.005)
    assert not answer(patched(job, lens__index="1.74")).own["options"][1:]  # type: ignore[index, call-overload]


def test_thinning_as_an_option() -> None:
    job = plain_job(
        {"sphere": "+3.00", "add": "2.00"}, {"sphere": "+3.00", "add": "2.00"}, lens__design="progressive", thinning__rule="none"
    )
    found = answer(job)
    assert isinstance(found.own, dict)
    option = next(option for option in found.own["options"] if option["kind"] == "thinning")
    assert option["figures"][0] < 0
    assert option["weight_g"] < found.own["weight_g"]
    assert "addition-estimated" in codes(found)
    fitting = patched(job, thinning={"rule": "amount", "amount": str(-option["figures"][0]), "base": "down"})
    again = answer(fitting)
    assert isinstance(again.own, dict)
    assert "thinning" not in {option["kind"] for option in again.own["options"]}
    assert again.own["weight_g"] == pytest.approx(option["weight_g"], rel=0.005)
    unknown = answer(patched(job, thinning__rule="unknown"))
    assert "thinning-unknown" in codes(unknown)


def test_what_is_missing_is_asked_for() -> None:
    job = plain_job(
        {"sphere": "-2.00"},
        lens=None,
        frame__dbl_mm=None,
        right__pd_mm=None,
        right__prp_height_mm=None,
        frame__shape=None,
        frame__ed_mm=None,
    )
    found = answer(job)
    asks = {ask.field: (ask.usual, ask.used) for ask in found.asks}
    assert asks == {
        "frame.shape": ("rounded-rectangle", True),
        "frame.ed_mm": ("55.0", True),
        "lens.index": ("1.498", True),
        "lens.front_curve": ("5.00", True),
        "lens.minimum_centre_mm": ("2.0", True),
        "lens.minimum_edge_mm": ("1.5", True),
        "lens.density_g_cm3": ("1.32", True),
        "frame.dbl_mm": ("18", True),
        "right.pd_mm": ("32", True),
        "right.prp_height_mm": ("18", True),
    }
    assert {row.code for row in found.rows if row.assumed} == {"index", "front-curve", "minimum-centre", "minimum-edge", "density"}
    assert "usual-from-memory" in codes(found)
    unframed = answer(plain_job({"sphere": "-2.00"}, frame__b_mm=None))
    assert (unframed.title, unframed.own) == ("frame-missing", None)
    assert [(ask.field, ask.used) for ask in unframed.asks] == [("frame.b_mm", False)]
    strange = answer(plain_job({"sphere": "-2.00"}, lens__index="1.90", lens__density_g_cm3=None))
    assert [(ask.field, ask.used) for ask in strange.asks] == [("lens.density_g_cm3", False)]
    assert isinstance(strange.own, dict)
    assert strange.own["weight_g"] is None
    assert strange.own["right"]["weight_g"] is None


def test_left_eye_and_near_only_distances_are_filled_too() -> None:
    job = plain_job({"sphere": "+1.00"}, {"sphere": "+1.00"}, lens__design="near", right__pd_mm=None, left__pd_mm=None)
    asks = {ask.field: ask.usual for ask in answer(job).asks}
    assert asks == {"right.near_pd_mm": "30", "left.near_pd_mm": "30"}


def test_an_order_without_a_power_has_no_edge() -> None:
    job = plain_job({"sphere": "-1.00"})
    job["left"], job["right"] = {"sphere": "-1.00"}, {"partner": True}
    found = answer(job)
    assert isinstance(found.own, dict)
    assert "right" not in found.own
    assert "left" in found.own


def test_a_given_thickness_is_kept_and_judged() -> None:
    thin = answer(plain_job({"sphere": "+4.00", "centre_thickness_mm": "3.6"}))
    assert isinstance(thin.own, dict)
    assert (thin.own["right"]["centre_mm"], thin.own["right"]["governs"]) == (3.6, "given")
    assert "below-minimum" in codes(thin)
    crossed = answer(plain_job({"sphere": "+4.00", "centre_thickness_mm": "1.0"}))
    assert "crossed" in codes(crossed)
    enough = answer(plain_job({"sphere": "+4.00", "centre_thickness_mm": "6.0"}))
    assert not codes(enough)


def test_lenses_that_cannot_be_made_say_so() -> None:
    steep = answer(plain_job({"sphere": "-30.00", "front_curve": "1.00"}, {"sphere": "-2.00"}))
    assert codes(steep) == {"beyond-surface"}
    assert isinstance(steep.own, dict)
    assert "right" not in steep.own
    alone = answer(plain_job({"sphere": "-30.00", "front_curve": "1.00"}))
    assert (alone.title, alone.own) == ("beyond-surface", None)


def test_drilled_places_are_said_to_be_usual() -> None:
    assert "holes-usual" in codes(answer(plain_job({"sphere": "-2.00"}, frame__drilled=True)))


def test_an_option_that_no_surface_reaches_is_left_out() -> None:
    """As ordered both backs just reach the rim; in halves, turned by its prism, the right one does not."""
    job = plain_job({"sphere": "-17.00", "front_curve": "1.00"}, {"sphere": "-2.00", "prism": [{"amount": "20", "base": "out"}]})
    found = answer(job)
    assert isinstance(found.own, dict)
    assert "right" in found.own
    assert [option["kind"] for option in found.own["options"]] == ["index"]


def test_traced_rims_are_taken_as_they_are() -> None:
    """A circle traced with 360, 72 and 25 radii is the same lens; the holes stand inside it."""
    volumes = []
    for count in (360, 72, 25):
        job = plain_job(
            {"sphere": "-3.00"}, frame={"outline_mm": ["24"] * count, "dbl_mm": "18"}, right__prp_height_mm="24", right__pd_mm="33"
        )
        found = framing(job)
        assert len(found.lens.rim.points) == min(count, 72)
        edge = edge_of(found.lens, NO_PRISM)
        if count % 4 == 0:  # else the box that 25 points span is not the circle's
            assert edge.thickest[1] == pytest.approx(edge.thinnest[1], abs=1e-3)
        volumes.append(edge.volume_mm3)
    assert edge.at(90.0) == dict(edge.profile)[86.4], "of places 14.4 degrees apart the nearest"
    assert volumes == pytest.approx([volumes[0]] * 3, rel=5e-3)


def test_the_picture_is_to_scale() -> None:
    """The band between both lines is as wide as the edge is thick; the cut shows the same thickness at its ends."""
    found = answer(plain_job({"sphere": "-4.00", "prism": [{"amount": "3", "base": "in"}]}))
    assert isinstance(found.own, dict)
    scene, profile = found.scenes["right"], found.own["right"]["profile"]
    shapes = scene["shapes"]
    outer = next(shape["points"] for shape in shapes if shape["role"] == "profile-back" and shape["kind"] == "polygon")
    inner = next(shape["points"] for shape in shapes if shape["role"] == "outline")
    for (x, y), (x2, y2), (_, mm) in zip(inner, outer, profile, strict=True):
        assert math.hypot(x2 - x, y2 - y) == pytest.approx(mm, abs=0.003)
    front, back = (
        next(shape["points"] for shape in shapes if shape["role"] == role and shape["kind"] == "polyline")
        for role in ("profile-front", "profile-back")
    )
    assert back[-1][1] - front[-1][1] == pytest.approx(dict(map(tuple, profile))[0.0], abs=0.002)
    assert back[0][1] - front[0][1] == pytest.approx(dict(map(tuple, profile))[180.0], abs=0.002)
    left, bottom, right, top = scene["extent"]
    drawn = [point for shape in shapes for point in shape.get("points", [])]
    assert all(left <= x <= right and bottom <= y <= top for x, y in drawn)
    assert scene["unit"] == "mm"
    assert {"thickest", "thinnest", "prp", "boxing-centre"} <= {shape["role"] for shape in shapes}


def test_rims_are_none_without_a_box() -> None:
    assert rim_of(Frame(), "right", 0.0, 0.0) is None


def test_the_estimated_thickness_knows_the_prism() -> None:
    """Facts 4.8: a fixed thin edge raises the centre by P·r / 100(n - 1): 4 Δ, 25 mm, n 1.5 is 2.0 mm; by hand."""
    job = plain_job({"sphere": "0.00", "prism": [{"amount": "4", "base": "in"}]}, lens__index="1.5", frame__ed_mm="50")
    order = read_job(job).right
    assert order
    values = body_values(order, read_job(job).frame)
    assert values
    assert values.thickness_mm == Decimal("3.2")  # on the least edge of 1.2 mm
