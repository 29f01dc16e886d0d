"""Causes: each signature as a named test, densities against scipy, ties, sizes, and every job that lacks something.

The signatures (what a cause makes of the ordered vector p) are written out here as vectors, from the list of signatures of the
domain facts (section 5) and the trade's own rules; densities and posteriors are checked with numpy and scipy.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from scipy.stats import multivariate_normal

from pycore.bench import cause as cause_module
from pycore.bench.cause import weigh
from pycore.bench.cause_algebra import joined
from pycore.bench.cause_bench import NO_CAUSE, Bench, Own, Story, bench_of
from pycore.bench.cause_effect import turns
from pycore.bench.cause_estimate import estimate, size_of
from pycore.bench.cause_rank import Named, Ranking, label_of, rank
from pycore.bench.cause_table import AS_ORDERED, NONE_OF_THESE, PLACES, cause_table
from pycore.bench.cause_weighing import Weighing, weighing_of
from pycore.case import case_of
from pycore.contract import decode, encode
from pycore.job.document import read_job
from tests.core.strategies import Job, patched

Vector = tuple[float, float]
BOTH = ("right", "left")
PR, PL = (3.0, 1.5), (-2.0, -1.0)  # ordered: right 3 in 1.5 up, left 2 in 1 down
RIGHT_LENS = {"sphere": "+3.00", "cylinder": "-1.00", "axis": "30", "pd_mm": "31", "prp_height_mm": "19"}
LEFT_LENS = {"sphere": "-2.50", "cylinder": "-0.50", "axis": "75", "pd_mm": "32", "prp_height_mm": "19"}


def prism(x: float, y: float, eye: str) -> list[Job]:
    """A vector as a bench would write it: words, horizontal first."""
    across = "in" if (x >= 0) == (eye == "right") else "out"
    return [{"amount": f"{abs(x):.2f}", "base": across}, {"amount": f"{abs(y):.2f}", "base": "up" if y >= 0 else "down"}]


PAIR: Job = {
    "format": "wedgewright.job/1",
    "state": "mounted",
    "lens": {"design": "single-vision"},
    "frame": {"a_mm": "52", "b_mm": "34", "dbl_mm": "18"},
    "right": RIGHT_LENS | {"prism": prism(*PR, "right")},
    "left": LEFT_LENS | {"prism": prism(*PL, "left")},
    "instrument": {"prism_step": "0.05", "uncertainty": {"prism": "0.05", "power_d": "0.04", "axis_deg": "1"}},
    "readings": {
        "at": "marked-point",
        "right": {name: RIGHT_LENS[name] for name in ("sphere", "cylinder", "axis")},
        "left": {name: LEFT_LENS[name] for name in ("sphere", "cylinder", "axis")},
    },
}
ADD = {"lens__design": "progressive", "right__add": "2.00", "left__add": "2.00", "thinning": {"rule": "two-thirds"}}
PROGRESSIVE = patched(PAIR, **ADD)
THIN = -1.33  # two thirds of 2.00, base down


def read(right: Vector | None, left: Vector | None, job: Job = PAIR, **changes: Any) -> Job:
    """The job with what was read of each lens, as vectors."""
    for eye, vector in (("right", right), ("left", left)):
        if vector is not None:
            job = patched(job, **{f"readings__{eye}__prism": prism(*vector, eye)})
    return patched(job, **changes)


def bench(job: Job) -> Bench:
    """The bench of a job that was read."""
    document = read_job(decode(encode(job)))
    found = bench_of(document, case_of(document, None).dues)
    assert found is not None
    return found


def weighed(job: Job) -> Weighing:
    """The causes of a job, weighed."""
    document = read_job(decode(encode(job)))
    found = weighing_of(document, case_of(document, None).dues)
    assert found is not None
    assert math.isclose(sum(story.probability for story in found.stories), 1.0, abs_tol=1e-9)
    assert math.isclose(sum(one.probability for one in found.ranking.causes), 1.0, abs_tol=1e-9)
    assert math.isclose(sum(group.probability for group in found.ranking.groups), 1.0, abs_tol=1e-9)
    assert math.isclose(sum(part for _, part in found.ranking.places), 1.0, abs_tol=1e-9)
    return found


def ranking(job: Job) -> Ranking:
    """The ranking of a job's causes."""
    return weighed(job).ranking


def chance(job: Job, code: str, *eyes: str) -> float:
    """The probability of one cause alone, in exactly these lenses."""
    return sum(one.probability for one in ranking(job).causes if one.label == (Named(code, eyes or BOTH),))  # type: ignore[arg-type]


def leading(job: Job) -> set[tuple[str, tuple[str, ...]]]:
    """The causes of the group that leads, each a single one."""
    group = ranking(job).groups[0]
    return {(label[0].code, label[0].eyes) for label in group.labels if len(label) == 1}


# --- each signature ---------------------------------------------------------------------------------------------------

R, L, B = ("right",), ("left",), BOTH


def test_base_reversed_in_one_lens() -> None:
    """−p; the same as 180 + θ and as the wrong side word in the 180 notation."""
    job = read((-3.0, -1.5), PL)
    assert leading(job) == {("base-reversed", R), ("side-word-wrong", R), ("angle-not-carried", R)}
    assert ranking(job).groups[0].probability > 0.95


def test_base_reversed_in_both() -> None:
    assert ("base-reversed", B) in leading(read((-3.0, -1.5), (2.0, 1.0)))


def test_both_reversed_is_the_frame_upside_down_without_thinning() -> None:
    """The axis stays, every prism turns half round: no reading tells both apart."""
    assert {("frame-upside-down", B), ("base-reversed", B)} <= leading(read((-3.0, -1.5), (2.0, 1.0)))


def test_the_frame_upside_down_turns_the_thinning_too() -> None:
    """With thinning both differ: the ordered base may be reversed, the thinning stays down."""
    turned = read((-3.0, -1.5 - THIN), (2.0, 1.0 - THIN), PROGRESSIVE)
    assert leading(turned) == {("frame-upside-down", B)}
    reversed_ = read((-3.0, -1.5 + THIN), (2.0, 1.0 + THIN), PROGRESSIVE)
    assert ("base-reversed", B) in leading(reversed_)
    assert ("frame-upside-down", B) not in leading(reversed_)


def test_the_frame_upside_down_read_by_place() -> None:
    """The right place shows −p of the left lens, with its power."""
    job = read((2.0, 1.0), (-3.0, -1.5), readings__right=power(LEFT_LENS), readings__left=power(RIGHT_LENS))
    job = read((2.0, 1.0), (-3.0, -1.5), job)
    assert leading(job) == {("frame-upside-down", B)}


def power(lens: Job) -> Job:
    """The power of a lens as a reading."""
    return {name: lens[name] for name in ("sphere", "cylinder", "axis")}


def test_in_and_out_mirrored() -> None:
    """(−px, py); with the axis right it is no wearer's-view order and was not read from the front."""
    job = read((-3.0, 1.5), PL)
    assert leading(job) == {("base-mirrored", R), ("angle-not-carried", R)}


def test_the_meters_key_is_the_same_as_mirrored() -> None:
    job = read((-3.0, 1.5), PL, instrument__kind="automatic")
    assert leading(job) == {("base-mirrored", R), ("angle-not-carried", R), ("meter-key-wrong", R)}


def test_the_wearers_view_mirrors_base_and_axis() -> None:
    job = read((-3.0, 1.5), PL, readings__right__axis="150")
    assert ("wearers-view-angle", R) in leading(job)


def test_read_from_the_front_changes_the_power_where_the_body_is_known() -> None:
    """(−px, py), axis 180 − A; the front vertex power of a thick lens differs, F1 + F2 / (1 − (t/n) F2)."""
    body = {"right__index": "1.50", "right__front_curve": "8.00", "right__curve_index": "1.50", "right__centre_thickness_mm": "9"}
    reduced, front, back_vertex = 0.009 / 1.5, 8.0, 2.5  # mean power
    back = back_vertex - front / (1 - reduced * front)
    front_vertex = front + back / (1 - reduced * back)
    sphere = 3.0 + front_vertex - back_vertex
    job = read((-3.0, 1.5), PL, **body, readings__right__axis="150", readings__right__sphere=f"+{sphere:.2f}")
    assert leading(job) == {("read-from-front", R)}
    assert chance(read((-3.0, 1.5), PL, **body, readings__right__axis="150"), "read-from-front", "right") < 0.2


def test_up_and_down_swapped() -> None:
    assert {("base-flipped", R), ("angle-not-carried", R)} <= leading(read((3.0, -1.5), PL))


def test_an_even_split_flipped_in_both_is_the_same_as_eyes_swapped_in_words() -> None:
    job = read((3.0, -1.5), (-3.0, 1.5), patched(PAIR, left__prism=prism(-3.0, -1.5, "left")))
    assert {("base-flipped", B), ("eyes-swapped-in-words", B)} <= leading(job)


def test_eyes_swapped_as_words() -> None:
    """The right lens gets the left one's words, in stays in: (−pLx, pLy)."""
    assert ("eyes-swapped-in-words", B) in leading(read((2.0, -1.0), (-3.0, 1.5)))


def test_lenses_swapped_as_bodies() -> None:
    """Degrees kept, so in becomes out; the powers come along."""
    job = read(None, None, readings__right=power(LEFT_LENS), readings__left=power(RIGHT_LENS))
    assert leading(read(PL, PR, job)) == {("lenses-swapped", B)}


def test_equal_lenses_swapped_are_the_same_as_both_reversed() -> None:
    alike = patched(PAIR, left=RIGHT_LENS | {"prism": prism(-3.0, -1.5, "left")}, readings__left=power(RIGHT_LENS))
    assert {("lenses-swapped", B), ("base-reversed", B)} <= leading(read((-3.0, -1.5), (3.0, 1.5), alike))


def test_amounts_exchanged_with_the_words_kept() -> None:
    assert ("amounts-exchanged", R) in leading(read((1.5, 3.0), PL))


def test_components_exchanged_as_signed_numbers() -> None:
    job = patched(PAIR, right__prism=prism(3.0, -1.5, "right"))
    assert ("amounts-exchanged", R) in leading(read((-1.5, 3.0), PL, job))


def test_amounts_added_as_numbers() -> None:
    """3 and 1.5 are 3.35 at 26.6°, not 4.5."""
    size = 4.5 / math.hypot(3.0, 1.5)
    assert leading(read((3.0 * size, 1.5 * size), PL)) == {("added-arithmetically", R)}


def test_not_split() -> None:
    """All of the pair's prism (right minus left) in one lens."""
    assert leading(read((5.0, 2.5), (0.0, 0.0))) == {("not-split", B)}
    assert leading(read((0.0, 0.0), (-5.0, -2.5))) == {("not-split", B)}


def test_split_twice() -> None:
    assert leading(read((1.5, 0.75), (-1.0, -0.5))) == {("split-twice", B)}


def test_one_component_missing() -> None:
    assert ("component-missing", R) in leading(read((3.0, 0.0), PL))
    assert ("component-missing", R) in leading(read((0.0, 1.5), PL))


def test_prism_doubled() -> None:
    assert leading(read((6.0, 3.0), PL)) == {("prism-doubled", R)}


def test_prism_never_made_reads_as_the_target_centred() -> None:
    """Both show no prism in a single vision lens: a look decides, not the reading."""
    found = {one.label[0].code for one in ranking(read((0.0, 0.0), PL)).causes[:3]}
    assert found == {"target-centred", "read-at-optical-centre", "prism-missing"}


def test_thinning_missing_in_one_lens() -> None:
    assert leading(read(PR, (PL[0], PL[1] + THIN), PROGRESSIVE)) == {("thinning-one-lens", R)}


def test_thinning_missing_in_both_is_the_same_as_a_zero_off_by_it() -> None:
    """The vector of a zero error is free, that of missing thinning is not: both are named, near each other."""
    job = read(PR, PL, PROGRESSIVE)
    assert leading(job) == {("thinning-missing", B)}
    assert {one.label[0].code for one in ranking(job).causes[:3]} >= {"thinning-missing", "instrument-zero"}


def test_thinning_doubled_and_base_up() -> None:
    def both(thinning: float) -> Job:
        return read((PR[0], PR[1] + thinning), (PL[0], PL[1] + thinning), PROGRESSIVE)

    assert chance(both(2 * THIN), "thinning-doubled") > chance(both(2 * THIN), "instrument-zero") / 10
    assert leading(both(-THIN)) == {("thinning-base-up", B)}


def test_thinning_by_another_rule() -> None:
    """None was ordered, two thirds of the add was made."""
    job = patched(PROGRESSIVE, thinning={"rule": "none"})
    made = read((PR[0], PR[1] + THIN), (PL[0], PL[1] + THIN), job)
    assert leading(made) == {("thinning-other-rule", B)}


def test_a_new_lens_not_matched_to_the_old_partner() -> None:
    """The existing left lens shows 1.33 down beyond its prescription; the new right one has none."""
    job = patched(PROGRESSIVE, left__partner=True)
    bare = read(PR, (PL[0], PL[1] + THIN), job)
    assert leading(bare) == {("thinning-of-old-partner", R), ("thinning-missing", R), ("thinning-one-lens", R)}
    assert ranking(bare).causes[0].label[0].code == "thinning-of-old-partner"
    assert leading(read((PR[0], PR[1] + THIN), (PL[0], PL[1] + THIN), job)) == {(AS_ORDERED, R)}


def test_beside_an_existing_partner_the_zero_cancels_vertically() -> None:
    """What is due in the new lens was read on the same instrument: only its horizontal may be off by the zero."""
    job = patched(PROGRESSIVE, left__partner=True, instrument__zero_uncertainty="0.5")
    partner = (PL[0], PL[1] + THIN)
    aside = chance(read((PR[0] + 0.9, PR[1] + THIN), partner, job), AS_ORDERED, "right")
    upwards = chance(read((PR[0], PR[1] + THIN + 0.9), partner, job), AS_ORDERED, "right")
    assert aside > 0.9
    assert upwards < 0.3


def test_read_at_the_fitting_cross() -> None:
    """p − F r, r = (0, 4) mm: right F = S + C sin²A … by hand."""
    job = patched(PROGRESSIVE, right__cross_above_prp_mm="4", left__cross_above_prp_mm="4")
    right, left = moved(RIGHT_LENS, 0.0, 4.0), moved(LEFT_LENS, 0.0, 4.0)
    job = read((PR[0] - right[0], PR[1] + THIN - right[1]), (PL[0] - left[0], PL[1] + THIN - left[1]), job)
    assert leading(job) == {("read-at-fitting-cross", B)}


def test_the_usual_place_of_the_fitting_cross_is_taken_where_the_chart_is_missing() -> None:
    right, left = moved(RIGHT_LENS, 0.0, 3.3), moved(LEFT_LENS, 0.0, 2.8)
    job = read((PR[0] - right[0], PR[1] + THIN - right[1]), (PL[0] - left[0], PL[1] + THIN - left[1]), PROGRESSIVE)
    assert leading(job) == {("read-at-fitting-cross", B)}


def matrix(lens: Job) -> np.ndarray[Any, Any]:
    """F = S 1 + C n n', n across the axis (a thin toric lens, textbook)."""
    angle = math.radians(float(lens["axis"]) + 90.0)
    across = np.array([math.cos(angle), math.sin(angle)])
    return float(lens["sphere"]) * np.eye(2) + float(lens["cylinder"]) * np.outer(across, across)


def moved(lens: Job, right_mm: float, up_mm: float) -> Vector:
    """F r / 10 in prism dioptres (Prentice's rule as a matrix)."""
    x, y = matrix(lens) @ np.array([right_mm, up_mm]) / 10.0
    return float(x), float(y)


def test_read_at_the_boxing_centre() -> None:
    """Boxing: the right eye's point lies 35 − 31 mm inwards and 19 − 17 mm above the boxing centre; the left's 35 − 32 mm."""
    right, left = moved(RIGHT_LENS, -4.0, -2.0), moved(LEFT_LENS, 3.0, -2.0)
    job = read((PR[0] - right[0], PR[1] - right[1]), (PL[0] - left[0], PL[1] - left[1]))
    assert leading(job) == {("read-at-boxing-centre", B)}


def test_read_in_the_segment() -> None:
    """A round segment 22 mm wide: its top 4 mm below the point, its centre 11 mm under it; read 3 mm under the top."""
    segment = {"shape": "round", "width_mm": "22", "height_mm": "15", "inset_mm": "2"}
    strong = {name: RIGHT_LENS | {"add": "3.00", "segment": segment, "prism": prism(*PR, "right")} for name in ("right",)}
    job = patched(PAIR, lens__design="bifocal", thinning={"rule": "none"}, **strong)
    place = moved(RIGHT_LENS, 2.0, -7.0)
    own = (0.0, -3.0 * (-7.0 - -15.0) / 10.0)  # −add times the way from the segment's centre
    expected = (PR[0] - place[0] + own[0], PR[1] - place[1] + own[1])
    found = bench(read(expected, PL, job))
    none = found.commons()[0]
    lens = found.lens(none, "right", own_of(found, "right", "read-at-segment"))
    assert lens is not None
    assert (lens.prism[0] + lens.sx, lens.prism[1] + lens.sy) == pytest.approx(expected, abs=1e-9)
    edged = read(expected, PL, job, state="edged")
    assert chance(edged, "read-at-segment", "right") > 5 * cause_table().causes["read-at-segment"].prior


def test_read_beside_the_point_and_displaced_are_one_group_with_the_size_found() -> None:
    """p − F δ, δ = (2, −3) mm: a lens that moved by −δ shows the same everywhere."""
    step = moved(RIGHT_LENS, 2.0, -3.0)
    job = read((PR[0] - step[0], PR[1] - step[1]), PL)
    assert leading(job) == {("read-elsewhere", R), ("lens-displaced", R)}
    found = {one.label[0].code: one for one in ranking(job).causes}
    for code, sign in (("read-elsewhere", 1.0), ("lens-displaced", -1.0)):
        size = size_of(bench(job), code, found[code].stories)
        assert size is not None
        values = size.values["right"]
        for name, true in (("right_mm", 2.0), ("up_mm", -3.0)):
            assert abs(values[name].mean - sign * true) < 2 * values[name].uncertainty
            assert values[name].uncertainty < 1.0


def test_target_centred() -> None:
    job = read((0.0, 0.0), (0.0, 0.0))
    assert leading(job) == {("target-centred", B)} | {("read-at-optical-centre", B)}


def test_a_wrong_pd_is_mirrored_between_the_eyes() -> None:
    """Both lenses 3 mm too far in: right to +x, left to −x."""
    right, left = moved(RIGHT_LENS, 3.0, 0.0), moved(LEFT_LENS, -3.0, 0.0)
    job = read((PR[0] + right[0], PR[1] + right[1]), (PL[0] + left[0], PL[1] + left[1]))
    assert leading(job) == {("layout-pd-wrong", B)}
    one = ranking(job).causes[0]
    size = size_of(bench(job), "layout-pd-wrong", one.stories)
    assert size is not None
    assert {eye: round(values["inwards_mm"].mean) for eye, values in size.values.items()} == {"right": 3, "left": 3}


def test_a_wrong_pd_in_the_left_lens_only() -> None:
    step = moved(LEFT_LENS, -4.0, 0.0)
    job = read(PR, (PL[0] + step[0], PL[1] + step[1]))
    found = next(one for one in ranking(job).causes if one.label[0].code == "layout-pd-wrong" and one.label[0].eyes == L)
    size = size_of(bench(job), "layout-pd-wrong", found.stories)
    assert size is not None
    inwards = size.values["left"]["inwards_mm"]
    assert abs(inwards.mean - 4.0) < 2 * inwards.uncertainty


def test_a_wrong_height() -> None:
    right, left = moved(RIGHT_LENS, 0.0, -4.0), moved(LEFT_LENS, 0.0, -4.0)
    job = read((PR[0] + right[0], PR[1] + right[1]), (PL[0] + left[0], PL[1] + left[1]))
    assert leading(job) == {("layout-height-wrong", B)}
    size = size_of(bench(job), "layout-height-wrong", ranking(job).causes[0].stories)
    assert size is not None
    assert round(size.values["left"]["up_mm"].mean) == -4


def test_heights_and_distances_tell_layout_from_reading() -> None:
    """The lens shows what is due 4 mm below the ordered point: displaced; at the ordered point: read beside it."""
    step = moved(RIGHT_LENS, 0.0, -4.0)
    lens = {"readings__right__pd_mm": "31", "readings__left__pd_mm": "32", "readings__left__prp_height_mm": "19"}
    job = read((PR[0] + step[0], PR[1] + step[1]), PL, **lens, readings__right__prp_height_mm="15")
    assert ranking(job).causes[0].label[0].code in ("layout-height-wrong", "lens-displaced")
    assert chance(job, "read-elsewhere", "right") < 0.01
    job = patched(job, readings__right__prp_height_mm="19")
    at_bench = chance(job, "read-elsewhere", "right") + chance(job, "table-moved", "right")
    assert at_bench > 0.9


@pytest.mark.parametrize(("field", "value", "step"), [("pd_mm", "28", (3.0, 0.0)), ("prp_height_mm", "16", (0.0, -3.0))])
def test_one_distance_alone_counts_along_its_meridian(field: str, value: str, step: Vector) -> None:
    """Only slid along one meridian: Fxx rx / 10 or Fyy ry / 10 is the error along it."""
    power_ = matrix(RIGHT_LENS)
    error = (power_[0, 0] * step[0] / 10, 0.0) if step[0] else (0.0, power_[1, 1] * step[1] / 10)
    job = read((PR[0] + error[0], PR[1] + error[1]), PL, **{f"readings__right__{field}": value})
    seen = bench(job).held["right"].seen
    found = [part for part in seen.place if part is not None]
    assert found == pytest.approx([error[0] or error[1]], abs=1e-12)
    assert chance(job, "read-elsewhere", "right") < 0.02


def test_as_worn_values_ignored() -> None:
    """The maker states other values than the prescription; the lens shows the prescription."""
    stated = {"sphere": "+2.75", "cylinder": "-0.87", "axis": "32", "prism": prism(2.6, 1.2, "right")}
    assert leading(read(PR, PL, patched(PAIR, right__stated=stated))) == {("as-worn-ignored", B)}


def test_the_zero_is_the_same_vector_in_both_eyes() -> None:
    job = read((PR[0] + 0.4, PR[1] + 0.3), (PL[0] + 0.4, PL[1] + 0.3))
    one = ranking(job).causes[0]
    assert one.label == (Named("instrument-zero", BOTH),)  # type: ignore[arg-type]
    size = size_of(bench(job), "instrument-zero", one.stories)
    assert size is not None
    zero = size.values["right"]
    assert abs(zero["x"].mean - 0.4) < zero["x"].uncertainty
    assert abs(zero["y"].mean - 0.3) < zero["y"].uncertainty


def test_the_compensator_left_on_is_a_large_zero() -> None:
    job = read((PR[0] - 3.0, PR[1] + 2.0), (PL[0] - 3.0, PL[1] + 2.0))
    assert leading(job) == {("compensator-left-on", B)}
    without = patched(job, instrument__compensator="none")
    assert chance(without, "compensator-left-on") == 0.0


def test_the_compensator_read_in_the_wrong_sense() -> None:
    """3 in 1.5 up seen in the centre with the scale at −p: taken as own-base, the true sense is lens-prism: p + 2 c."""
    scale = {"amount": "2.00", "base": "0"}
    job = patched(PAIR, instrument__compensator="lens-prism", readings__right__compensator=scale)
    # The lens shows p; the scale was set so that 2 Δ were taken away, in truth added: p + 2 on the rings, counted p + 4.
    seen = read((PR[0] + 2.0, PR[1]), PL, job)
    assert leading(seen) == {("compensator-wrong-sense", B)}


def test_a_lens_turned_at_edging_has_its_axis_turned_along() -> None:
    angle = math.radians(9.0)
    x, y = PR
    turned = (x * math.cos(angle) - y * math.sin(angle), x * math.sin(angle) + y * math.cos(angle))
    job = read(turned, PL, readings__right__axis="39")
    assert leading(job) == {("lens-rotated", R)}
    size = size_of(bench(job), "lens-rotated", ranking(job).causes[0].stories)
    assert size is not None
    found = size.values["right"]["turn_deg"]
    assert abs(found.mean - 9.0) < 2 * found.uncertainty
    assert found.uncertainty < 2.0


def test_both_lenses_turned_alike_are_a_frame_not_square() -> None:
    def turn(vector: Vector, angle_deg: float) -> Vector:
        x, y = vector
        angle = math.radians(angle_deg)
        return x * math.cos(angle) - y * math.sin(angle), x * math.sin(angle) + y * math.cos(angle)

    job = read(turn(PR, -7.0), turn(PL, -7.0), readings__right__axis="23", readings__left__axis="68")
    assert leading(job) == {("frame-not-square", B)}
    size = size_of(bench(job), "frame-not-square", ranking(job).causes[0].stories)
    assert size is not None
    assert abs(size.values["left"]["turn_deg"].mean + 7.0) < 1.5
    apart = read(turn(PR, -7.0), turn(PL, 7.0), readings__right__axis="23", readings__left__axis="82")
    assert leading(apart) == {("lens-rotated", B)}
    size = size_of(bench(apart), "lens-rotated", ranking(apart).causes[0].stories)
    assert size is not None
    assert [round(size.values[eye]["turn_deg"].mean / 7.0) for eye in ("right", "left")] == [-1, 1]


def test_the_table_moved_shows_in_the_lens_read_second() -> None:
    """Read first is the stronger along 90 (left: −2.53 D, right: +2.25 D); the right one is read 3 mm too high."""
    step = moved(RIGHT_LENS, 0.0, 3.0)
    job = read((PR[0] - step[0], PR[1] - step[1]), PL)
    assert chance(job, "table-moved", "right") > chance(job, "read-elsewhere", "right")
    assert chance(job, "table-moved", "left") == 0.0
    size = size_of(bench(job), "table-moved", next(one for one in ranking(job).causes if one.label[0].code == "table-moved").stories)
    assert size is not None
    up = size.values["right"]["up_mm"]
    assert abs(up.mean - 3.0) < 2 * up.uncertainty


def test_the_cylinder_transposed_wrongly() -> None:
    """+3.00 −1.00 × 30 is +2.00 +1.00 × 120: each of the three steps forgotten."""
    for sphere, cylinder, axis in (("+3.00", "+1.00", "120"), ("+2.00", "-1.00", "120"), ("+2.00", "+1.00", "30")):
        lens = {"readings__right__sphere": sphere, "readings__right__cylinder": cylinder, "readings__right__axis": axis}
        assert leading(read(PR, PL, **lens)) == {("cylinder-transposition", R)}


def test_the_sign_of_the_cylinder_wrong() -> None:
    assert leading(read(PR, PL, readings__right__cylinder="+1.00")) == {("cylinder-sign", R)}


def test_what_nothing_explains_is_none_of_these() -> None:
    job = read((-4.0, 6.0), PL, readings__right__sphere="+5.00")
    assert ranking(job).causes[0].label == (Named(NONE_OF_THESE, R),)  # type: ignore[arg-type]


def test_normal_scatter_accuses_nobody() -> None:
    """0.25 Δ off at an uncertainty of 0.08: the laboratory's own scatter."""
    job = read((PR[0] + 0.25, PR[1]), PL, instrument__uncertainty__prism="0.08", instrument__prism_step="0.25")
    assert chance(job, AS_ORDERED) > 0.9


# --- what cannot be told apart, and what cannot be seen ---------------------------------------------------------------


def test_horizontal_prism_at_axis_90_or_180_reversed_is_mirrored() -> None:
    flat = {"right__axis": "180", "readings__right__axis": "180", "right__prism": prism(3.0, 0.0, "right")}
    assert {("base-reversed", R), ("base-mirrored", R), ("wearers-view-angle", R)} <= leading(read((-3.0, 0.0), PL, **flat))


def test_vertical_prism_reversed_is_flipped_and_mirrored_cannot_be_seen() -> None:
    job = read((0.0, -2.0), PL, right__prism=prism(0.0, 2.0, "right"))
    assert {("base-reversed", R), ("base-flipped", R)} <= leading(job)
    codes = {named.code for one in ranking(job).causes for named in one.label if "right" in named.eyes and named.eyes == R}
    assert "base-mirrored" not in codes


def test_ties_are_named_and_alike_in_probability_but_for_their_priors() -> None:
    causes = {one.label: one for one in ranking(read((-3.0, -1.5), PL)).causes}
    reversed_, side = (causes[(Named(code, R),)] for code in ("base-reversed", "side-word-wrong"))  # type: ignore[arg-type]
    assert side.label in reversed_.tied_with
    assert reversed_.label in side.tied_with
    priors = cause_table().causes
    assert math.isclose(
        reversed_.probability / side.probability, priors["base-reversed"].prior / priors["side-word-wrong"].prior, rel_tol=1e-9
    )


def test_two_faults_are_one_hypothesis_of_their_own() -> None:
    job = read((-3.0, -1.5), (-1.0, -0.5))
    first = ranking(job).causes[0]
    assert {named.code for named in first.label} >= {"base-reversed"} or first.tied_with
    job = read((-3.0 + 0.4, -1.5 + 0.4), (PL[0] + 0.4, PL[1] + 0.4))
    labels = [one.label for one in ranking(job).causes[:3]]
    assert (Named("base-reversed", R), Named("instrument-zero", B)) in labels  # type: ignore[arg-type]
    places = dict(ranking(job).places)
    assert places["surfacing"] > 0.2
    assert places["bench"] > 0.2


# --- jobs that lack something -----------------------------------------------------------------------------------------


def test_one_lens_only() -> None:
    alone = patched(PAIR, left=None, readings__left=None)
    assert ("base-reversed", R) in leading(read((-3.0, -1.5), None, alone))
    assert leading(read(PR, None, alone)) == {(AS_ORDERED, R)}


def test_only_one_lens_read() -> None:
    job = patched(PAIR, readings__left=None)
    assert ("base-reversed", R) in leading(read((-3.0, -1.5), None, job))
    assert bench(read(PR, None, job)).held["right"].site.second == 0.0


def test_what_is_ordered_for_the_lens_not_read_counts() -> None:
    """The right lens shows the left one's words, or the whole prism of the pair; the left one is not read yet."""
    job = patched(PAIR, readings__left=None)
    assert ("eyes-swapped-in-words", R) in leading(read((2.0, -1.0), None, job))
    assert ("not-split", R) in leading(read((5.0, 2.5), None, job))
    labels = [tuple(sorted(one.label)) for one in ranking(read((3.4, -1.5), None, job)).causes]
    assert len(labels) == len(set(labels)), "two causes of one lens are one entry"
    bodies = patched(job, readings__right=power(LEFT_LENS))
    assert ("lenses-swapped", R) in leading(read(PL, None, bodies))


def test_nothing_read() -> None:
    document = read_job(decode(encode(patched(PAIR, readings=None))))
    assert weighing_of(document, case_of(document, None).dues) is None


def test_only_powers_read() -> None:
    """Without a prism only what the powers show counts."""
    assert leading(patched(PAIR, readings__right__cylinder="+1.00")) == {("cylinder-sign", R)}


@pytest.mark.parametrize("lacking", ["axis", "cylinder", "sphere"])
def test_a_power_read_in_part_is_left_out(lacking: str) -> None:
    assert bench(read(PR, PL, **{f"readings__right__{lacking}": None})).held["right"].seen.power is None


def test_a_sphere_needs_no_cylinder() -> None:
    job = read(PR, PL, right__cylinder=None, right__axis=None, readings__right__cylinder=None, readings__right__axis=None)
    assert bench(job).held["right"].seen.power == (3.0, 0.0, 0.0)


def test_without_a_power_nothing_moves() -> None:
    """The right lens has no written power: only its prism can be weighed."""
    job = patched(PAIR, right__sphere=None, right__cylinder=None, right__axis=None, readings__right=None)
    found = ranking(read((-3.0, -1.5), PL, job))
    codes = {named.code for one in found.causes for named in one.label}
    assert "base-reversed" in codes
    assert not codes & {"layout-pd-wrong"} or all(named.eyes == L for one in found.causes for named in one.label if named.code == "layout-pd-wrong")


def test_a_plano_lens_shows_no_displacement() -> None:
    plano = {"right__sphere": "0.00", "right__cylinder": None, "right__axis": None, "readings__right__sphere": "0.00"}
    job = read((2.4, 1.5), PL, **plano, readings__right__cylinder=None, readings__right__axis=None)
    codes = {named.code for one in ranking(job).causes for named in one.label if "right" in named.eyes and len(one.label) == 1}
    assert not codes & {"lens-displaced", "read-elsewhere", "layout-pd-wrong", "target-centred"}


def test_without_prism_there_is_nothing_to_reverse_or_to_add() -> None:
    bare = patched(PAIR, right__prism=None, left__prism=None)
    codes = {named.code for one in ranking(read((0.0, 0.0), (0.0, 0.0), bare)).causes for named in one.label}
    assert not codes & {"base-reversed", "prism-doubled", "added-arithmetically", "component-missing", "target-centred"}


def test_thinning_not_known_lets_the_same_vertical_pass_in_both() -> None:
    job = patched(PROGRESSIVE, thinning=None)
    for thinning in (0.0, THIN):
        made = read((PR[0], PR[1] + thinning), (PL[0], PL[1] + thinning), job)
        assert chance(made, AS_ORDERED) > 0.9
    assert chance(read(PR, (PL[0], PL[1] + THIN), job), AS_ORDERED) < 0.1
    assert chance(read(PR, PL, job), "thinning-missing") == 0.0


def test_thinning_not_known_and_no_add() -> None:
    bifocal = patched(PAIR, lens__design="bifocal")
    assert bench(read(PR, PL, bifocal)).held["right"].due.t_spread == 0.5


def test_a_common_height_that_nobody_wrote_down_moves_both() -> None:
    """The lenses read at one height 5 mm off: the pair's vertical agrees as the powers say."""
    right, left = moved(RIGHT_LENS, 0.0, 5.0), moved(LEFT_LENS, 0.0, 5.0)
    job = read((PR[0] - right[0], PR[1] - right[1]), (PL[0] - left[0], PL[1] - left[1]), readings__at="first-lens-set")
    assert chance(job, AS_ORDERED) > 0.9
    assert chance(patched(job, readings__at="marked-point"), AS_ORDERED) < 0.1
    unmarked = patched(job, readings__at=None, right__prp_height_mm=None, left__prp_height_mm=None)
    assert bench(unmarked).free_height


def test_repeated_readings_narrow_the_reading_not_the_laboratory() -> None:
    again = [{"prism": prism(*PR, "right")} for _ in range(8)]
    once, often = (bench(read(PR, PL, readings__right__repeats=repeats)) for repeats in ([], again))
    scatter = cause_table().scatter.laboratory_prism
    step = 0.05**2 / 12
    assert math.isclose(once.held["right"].seen.prism_var, scatter**2 + 0.05**2 + step)
    assert math.isclose(often.held["right"].seen.prism_var, scatter**2 + 0.05**2 / 9 + step)


def test_states_shut_causes_out() -> None:
    uncut = ranking(read((-3.0, -1.5), (2.0, 1.0), state="uncut"))
    codes = {named.code for one in uncut.causes for named in one.label}
    assert not codes & {"frame-upside-down", "lens-displaced", "lens-rotated", "table-moved"}


def test_of_two_equal_powers_either_may_have_been_read_second() -> None:
    alike = patched(PAIR, left=RIGHT_LENS | {"prism": prism(*PL, "left")}, readings__left=power(RIGHT_LENS))
    assert [one.site.second for one in bench(read(PR, PL, alike)).held.values()] == [0.5, 0.5]


def test_the_adds_read_count() -> None:
    job = read((PR[0], PR[1] + THIN), (PL[0], PL[1] + THIN), PROGRESSIVE, readings__right__add="2.00", readings__left__add="2.75")
    assert ranking(job).causes[0].label == (Named(NONE_OF_THESE, L),)  # type: ignore[arg-type]
    swapped = patched(PROGRESSIVE, right__add="2.00", left__add="2.50", readings__right__add="2.50", readings__left__add="2.00")
    job = patched(swapped, readings__right=power(LEFT_LENS) | {"add": "2.50"}, readings__left=power(RIGHT_LENS) | {"add": "2.00"})
    made = read((PL[0], PL[1] + THIN), (PR[0], PR[1] + THIN), job)
    assert ranking(made).causes[0].label[0].code == "lenses-swapped"


def test_lenses_that_differ_in_their_adds_only() -> None:
    alike = patched(PROGRESSIVE, left=RIGHT_LENS | {"add": "2.50"}, right__prism=None, readings__left=power(RIGHT_LENS))
    job = patched(alike, readings__right__add="2.50", readings__left__add="2.00")
    assert {("lenses-swapped", B), ("frame-upside-down", B)} == leading(job)


def test_only_a_height_measured() -> None:
    """Where the lens shows what is due, 4 mm too low, tells of a height wrong without any prism read."""
    job = patched(PAIR, readings__right__prp_height_mm="15", readings__left__prp_height_mm="19")
    assert ranking(job).causes[0].label[0].code != AS_ORDERED
    assert chance(job, "read-elsewhere", "right") == 0.0
    assert chance(job, "base-reversed", "right") < 0.1


def test_only_adds_read() -> None:
    """Nothing but none-of-these can then be wrong with a lens."""
    adds = {"right": {"add": "2.00"}, "left": {"add": "2.12"}}
    found = ranking(patched(PROGRESSIVE, readings=adds))
    assert {named.code for one in found.causes for named in one.label} == {AS_ORDERED, NONE_OF_THESE}
    assert found.causes[0].label[0].code == AS_ORDERED


def test_a_zero_known_badly_accuses_fewer() -> None:
    """With a zero uncertainty both lenses hang together; the posterior still sums to 1."""
    job = read((PR[0] + 0.2, PR[1]), (PL[0] + 0.2, PL[1]), instrument__zero_uncertainty="0.2")
    assert chance(job, AS_ORDERED) > chance(read((PR[0] + 0.2, PR[1]), (PL[0] + 0.2, PL[1])), AS_ORDERED)


# --- the numbers ------------------------------------------------------------------------------------------------------


def covariance(lens: Job) -> np.ndarray[Any, Any]:
    """Prism (x, y), mean power, J0, J45 of one lens as ordered, with nothing free: the table's prose in numpy."""
    principal, angle = 0.06**2 + 0.04**2, math.radians(math.hypot(1.0, 1.0))
    whole = np.zeros((5, 5))
    whole[0, 0] = whole[1, 1] = 0.12**2 + 0.05**2 + 0.05**2 / 12
    cylinder, axis = float(lens["cylinder"]), math.radians(float(lens["axis"]))
    along = np.array([math.cos(2 * axis), -math.sin(2 * axis)])
    across = np.array([-along[1], along[0]])
    whole[2, 2] = principal / 2
    whole[3:, 3:] = principal / 2 * np.eye(2) + (cylinder * angle) ** 2 * np.outer(across, across)
    return whole


def components(lens: Job) -> np.ndarray[Any, Any]:
    """Mean power, (Fyy − Fxx) / 2, Fxy."""
    (xx, xy), (_, yy) = matrix(lens)
    return np.array([(xx + yy) / 2, (yy - xx) / 2, xy])


def own_of(found: Bench, eye: str, code: str, variant: int = 0) -> Own:
    """A lens's own cause."""
    none = found.commons()[0]
    return next(own for own in found.owns(none, eye) if own.code == code and own.variant == variant)  # type: ignore[arg-type]


@pytest.mark.parametrize("code", [AS_ORDERED, "base-reversed", "lens-displaced", "lens-rotated", NONE_OF_THESE])
def test_a_lens_fits_as_scipy_says(code: str) -> None:
    """Densities, less the constant that all causes share, against scipy.stats.multivariate_normal."""
    job = read((2.6, 1.9), PL, readings__right__sphere="+3.12", readings__right__axis="34")
    found = bench(job)
    mean = np.concatenate([PR, components(RIGHT_LENS)])
    whole = covariance(RIGHT_LENS)
    if code == "base-reversed":
        mean[:2] = -mean[:2]
    if code == "lens-displaced":
        columns = 3.0 * matrix(RIGHT_LENS) / 10
        whole[:2, :2] += columns @ columns.T
    if code == "lens-rotated":  # the middle one of three parts
        spread = math.radians(list(turns(6.0))[1][1][1])
        _, j0, j45 = components(RIGHT_LENS)
        column = spread * np.array([-PR[1], PR[0], 0.0, 2 * j45, -2 * j0])
        whole += np.outer(column, column)
    if code == NONE_OF_THESE:
        whole += np.diag([9.0, 9.0, 2.25, 1.0, 1.0])
    read_power = components(RIGHT_LENS | {"sphere": "+3.12", "axis": "34"})
    seen = np.concatenate([[2.6, 1.9], read_power])
    reference = multivariate_normal(mean, whole).logpdf(seen) + 2.5 * math.log(2 * math.pi)
    none = found.commons()[0]
    own = NO_CAUSE if code == AS_ORDERED else own_of(found, "right", code, 1 if code == "lens-rotated" else 0)
    fit = found.fit(none, "right", own)
    assert fit is not None
    assert fit.density == pytest.approx(reference, abs=1e-9)


@pytest.mark.parametrize("code", [AS_ORDERED, "instrument-zero", "layout-pd-wrong", "frame-not-square"])
def test_a_pair_with_common_parameters_fits_as_scipy_says(code: str) -> None:
    """The whole covariance of both lenses at once, the common zero, shift or turn in its off-diagonal blocks."""
    job = read((2.8, 1.7), (-2.2, -0.8), instrument__zero_uncertainty="0.1")
    found = bench(job)
    whole = np.zeros((10, 10))
    whole[:5, :5], whole[5:, 5:] = covariance(RIGHT_LENS), covariance(LEFT_LENS)
    zero = math.hypot(0.1, 0.5 if code == "instrument-zero" else 0.0)
    columns = [np.array([zero, 0, 0, 0, 0] * 2), np.array([0, zero, 0, 0, 0] * 2)]
    if code == "layout-pd-wrong":
        right, left = moved(RIGHT_LENS, 2.5, 0.0), moved(LEFT_LENS, -2.5, 0.0)
        columns.append(np.array([*right, 0, 0, 0, *left, 0, 0, 0]))
    if code == "frame-not-square":
        turn = math.radians(list(turns(4.0))[1][1][1])
        parts = []
        for vector, lens in ((PR, RIGHT_LENS), (PL, LEFT_LENS)):
            _, j0, j45 = components(lens)
            parts += [-vector[1], vector[0], 0.0, 2 * j45, -2 * j0]
        columns.append(turn * np.array(parts))
    for column in columns:
        whole += np.outer(column, column)
    mean = np.concatenate([PR, components(RIGHT_LENS), PL, components(LEFT_LENS)])
    seen = np.concatenate([[2.8, 1.7], components(RIGHT_LENS), [-2.2, -0.8], components(LEFT_LENS)])
    reference = multivariate_normal(mean, whole).logpdf(seen) + 5 * math.log(2 * math.pi)
    common = next(one for one in found.commons() if one.code == code and one.variant == (1 if code == "frame-not-square" else 0))
    fits = [found.fit(common, eye, NO_CAUSE) for eye in ("right", "left")]
    assert None not in fits
    assert joined(*fits) == pytest.approx(reference, abs=1e-9)  # type: ignore[arg-type]


def test_what_is_left_out_hardly_matters(monkeypatch: pytest.MonkeyPatch) -> None:
    """Against all hypotheses without any left out: total variation below 0.01."""
    jobs = [
        read((2.3, 1.1), (-2.4, -1.3)),
        read((-3.0, -1.5), PL),
        read((2.8, 1.7), (-2.2, -0.8), instrument__zero_uncertainty="0.1"),
        read((3.4, 1.8), (-1.6, -0.7)),
    ]
    quick = [{label_of(story): 0.0 for story in weigh(bench(job))} for job in jobs]
    for at, job in enumerate(jobs):
        for story in weigh(bench(job)):
            quick[at][label_of(story)] += story.probability
    monkeypatch.setattr(cause_module, "FAINT", 40.0)
    monkeypatch.setattr(cause_module, "UNLIKELY", 40.0)
    differences = []
    for at, job in enumerate(jobs):
        slow = dict.fromkeys(quick[at], 0.0)
        for story in weigh(bench(job)):
            slow[label_of(story)] = slow.get(label_of(story), 0.0) + story.probability
        differences.append(sum(abs(part - quick[at].get(label, 0.0)) for label, part in slow.items()) / 2)
    print(f"largest total variation {max(differences):.4f}")
    assert max(differences) < 0.01


def test_sizes_are_the_posterior_of_a_linear_model() -> None:
    """Mean and covariance of the displacement by numpy: (1 + U' B⁻¹ U)⁻¹."""
    job = read((2.3, 1.1), PL)
    found = bench(job)
    columns = 3.0 * matrix(RIGHT_LENS) / 10
    base = covariance(RIGHT_LENS)[:2, :2]
    cov = np.linalg.inv(np.eye(2) + columns.T @ np.linalg.inv(base) @ columns)
    mean = cov @ columns.T @ np.linalg.inv(base) @ (np.array([2.3, 1.1]) - PR)
    none = found.commons()[0]
    story = Story(none, {"right": own_of(found, "right", "lens-displaced"), "left": NO_CAUSE}, 1.0)
    result = estimate(found, story)
    assert [one.mean for one in result.own["right"]] == pytest.approx(list(mean), abs=1e-9)
    assert [one.uncertainty for one in result.own["right"]] == pytest.approx(list(np.sqrt(np.diag(cov))), abs=1e-9)
    rest = np.array([2.3, 1.1]) - PR
    distance = rest @ np.linalg.inv(base + columns @ columns.T) @ rest
    assert result.residual == pytest.approx(math.sqrt(distance / 10), abs=1e-9)


def test_a_turn_in_three_parts_has_the_moments_of_a_normal_curve() -> None:
    """Variance σ², fourth moment 3 σ⁴ (a normal distribution, handbook)."""
    parts = list(turns(6.0))
    assert math.isclose(sum(weight for weight, _ in parts), 1.0)
    second = sum(weight * (middle**2 + narrow**2) for weight, (middle, narrow) in parts)
    fourth = sum(weight * (middle**4 + 6 * middle**2 * narrow**2 + 3 * narrow**4) for weight, (middle, narrow) in parts)
    assert math.isclose(second, 36.0)
    assert math.isclose(fourth, 3 * 36.0**2)


# --- the table --------------------------------------------------------------------------------------------------------


def test_the_priors_are_those_set_down() -> None:
    """As ordered 0.90, bench 0.04, layout 0.03, order and surfacing about 0.03, none 0.005 (common practice)."""
    sums = dict.fromkeys(PLACES, 0.0)
    for cause in cause_table().causes.values():
        sums[cause.place] += cause.prior
        assert math.isclose(cause.right + cause.left + cause.both, 1.0)
    assert math.isclose(sums["bench"], 0.04)
    assert math.isclose(sums["layout"], 0.03)
    assert math.isclose(sums["none"], 0.005)
    assert 0.02 < sums["surfacing"] + sums["order"] < 0.04


def test_ranking_names_as_ordered_and_none_even_where_they_are_impossible() -> None:
    found = bench(read((-3.0, -1.5), PL))
    ranked = rank(found, weigh(found)[:1])
    assert {label.code for one in ranked.causes for label in one.label} >= {AS_ORDERED, NONE_OF_THESE}
