"""The smallest movement: by hand, by the published relation, and against an independent optimiser.

Sources: p(r) = p0 − F r (AJOPO 1976;53:27-33) and the remedy worked from it in domain facts 4.5; limits of Z80.1-2015
(published guide) and N.J. Admin. Code 13:35-5.2; scipy's optimisers and distributions (`tests.references.shift_reference`).
"""

from __future__ import annotations

import math
from decimal import Decimal
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.stats import ncx2, norm

from pycore.bench import remedy_least
from pycore.bench.matter import Matter
from pycore.bench.remedy import Remedy, Shift, remedy_of
from pycore.bench.remedy_least import Disc, Strip, allows, on_grid, shortest
from pycore.bench.remedy_limits import _accepted, pieces
from pycore.bench.remedy_moved import moved
from pycore.bench.remedy_search import movable, unrounded
from pycore.bench.verdict import judge
from pycore.case import case_of
from pycore.editions.reader import built_in
from pycore.job.document import read_job
from pycore.scenes.remedy import remedy_scene
from tests.core.strategies import patched
from tests.references.shift_reference import compare_some

Job = dict[str, Any]
RIGHT, UP = (1.0, 0.0, 0.0, 0.0), (0.0, 1.0, 0.0, 0.0)
LENS = {"sphere": "-5.00", "pd_mm": "31", "prp_height_mm": "18"}
PAIR: Job = {
    "format": "wedgewright.job/1",
    "state": "mounted",
    "edition": "ansi-z80.1-2015",
    "lens": {"design": "single-vision"},
    "right": LENS,
    "left": LENS,
    "instrument": {"uncertainty": {"prism": "0.001", "position_mm": "0.01"}},
    "readings": {"at": "marked-point", "right": {"prism": []}, "left": {"prism": []}},
}
UNCUT = patched(PAIR, state="uncut")


def words(*parts: str) -> list[Job]:
    """A prism by words: "3 in", "1.5 up"."""
    return [dict(zip(("amount", "base"), part.split(), strict=True)) for part in parts]


def seen(job: Job, right: str, left: str = "0 up", **changes: Any) -> Job:
    """The job with both lenses read, a comma between components."""
    parts = [[part.strip() for part in text.split(",")] for text in (right, left)]
    return patched(job, readings__right__prism=words(*parts[0]), readings__left__prism=words(*parts[1]), **changes)


def matter_of_job(job: Job) -> Matter:
    case = case_of(read_job(job), built_in(job["edition"]))
    assert case.matter
    return case.matter


def remedy(job: Job) -> Remedy | None:
    matter = matter_of_job(job)
    return remedy_of(matter, judge(matter))


def shift(job: Job) -> Shift:
    found = remedy(job)
    assert found
    assert found.kind == "shift"
    assert found.shared.least
    return found.shared.least


def why(job: Job) -> tuple[str, dict[str, str]]:
    """Why the job is to be made again."""
    found = remedy(job)
    assert found
    assert found.kind == "remake"
    return found.why.code, dict(found.why.params)


# --- by hand -------------------------------------------------------------------------------------------------------------


def test_the_movement_worked_from_the_published_relation() -> None:
    """R +3.00 −1.00 ×90 needs 2 in 1 up and reads 1.2 in 1.6 up: moved by +4.0, −2.0 mm it shows what is needed."""
    job = seen(patched(PAIR, right__sphere="+3.00", right__cylinder="-1.00", right__axis="90"), "1.2 in, 1.6 up")
    after = moved(matter_of_job(job), (4.0, -2.0, 0.0, 0.0))
    assert (after.reads["right"].x, after.reads["right"].y) == (2, 1)


def test_a_sphere_goes_straight_and_rounds_outwards() -> None:
    """−5.00 D, 1.00 up of a limit of 0.33: 0.67 / 0.5 = 1.34 mm up for one lens; to tenths 1.4 mm, where 0.30 is left."""
    found = remedy(seen(PAIR, "1.00 up"))
    assert found
    least = found.only["right"].least
    assert least
    assert least.exact == pytest.approx((0, 1.34, 0, 0), abs=1e-6)
    assert least.move == (0, 1.4, 0, 0)
    assert [check.deviation for check in least.checks if check.component == "vertical"] == [Decimal("0.3")]
    left = found.only["left"].least
    assert left
    assert left.move == (0, 0, 0, -1.4)


def test_both_lenses_share_by_the_least_sum_of_squares() -> None:
    """Equal lenses share evenly; +6.00 and +2.00 share as 6 to 2, the stronger going farther for the same prism."""
    assert shift(seen(PAIR, "1.00 up")).exact == pytest.approx((0, 0.67, 0, -0.67), abs=1e-6)
    unlike = shift(seen(patched(PAIR, right__sphere="+6.00", left__sphere="+2.00"), "1.00 up"))
    assert unlike.exact == pytest.approx((0, -0.67 * 0.6 / 0.4, 0, 0.67 * 0.2 / 0.4), abs=1e-6)


def test_an_uncut_lens_goes_straight_towards_what_is_due() -> None:
    """+5.00 D, error 0.498 right and 0.664 up (0.83): 0.50 beyond the circle of 0.33, so 1.0 mm against the error."""
    job = seen(patched(UNCUT, right__sphere="+5.00"), "0.498 in, 0.664 up")
    least = shift(job)
    assert least.exact == pytest.approx((-0.6, -0.8, 0, 0), abs=1e-6)
    assert least.move == (-0.6, -0.8, 0, 0)
    found = remedy(job)
    assert found
    assert found.only["left"].least is None
    assert found.only["right"].least is not None
    assert found.allowed


def test_an_oblique_cylinder_is_moved_sideways_for_vertical_prism() -> None:
    """+2.00 −4.00 ×45 has no power along 90 or 180, and 2 D across: only a sideways movement gives vertical prism."""
    job = seen(patched(PAIR, right__sphere="+2.00", right__cylinder="-4.00", right__axis="45"), "0.73 up")
    found = remedy(job)
    assert found
    assert found.only["right"].least
    assert found.only["right"].least.exact == pytest.approx((-2.0, 0, 0, 0), abs=1e-6)


def test_with_the_first_lens_set_the_height_follows_it() -> None:
    """R +6.00 is set, L +2.00 read at its height: R moved up takes the table up, so that L counts, 0.2 Δ for each mm."""
    job = seen(patched(PAIR, readings__at="first-lens-set", right__sphere="+6.00", left__sphere="+2.00"), "0 up", "0.73 down")
    found = remedy(job)
    assert found
    assert found.only["right"].least
    assert found.only["right"].least.exact == pytest.approx((0, -2.0, 0, 0), abs=1e-6)
    assert found.only["left"].least
    assert found.only["left"].least.exact == pytest.approx((0, 0, 0, 2.0), abs=1e-6)
    flat = patched(job, right__sphere="0.00", left__sphere="0.00")
    assert why(flat)[0] == "no-power"
    one = patched(job, state="edged", edition="nj-13-35-5.2", readings__right__prism=words("1 in"))
    del one["left"], one["readings"]["left"]
    alone = remedy(one)
    assert alone
    assert alone.only["right"].least
    assert alone.only["right"].least.exact == pytest.approx((-1.25, 0, 0, 0), abs=1e-6)
    assert shift(patched(job, left={"partner": True})).eyes == ("right",), "no power on the left: the table is not followed"


def test_recommended_leaves_a_doubt_of_five_per_cent() -> None:
    """0.33 with 0.08 for each lens: the deviation left is at most 0.144 (domain facts, corrections), so 0.856 / 0.5 mm."""
    found = remedy(seen(patched(PAIR, instrument__uncertainty__prism="0.08"), "1.00 up"))
    assert found
    least, recommended = found.only["right"].least, found.only["right"].recommended
    assert least
    assert recommended
    assert recommended.exact[1] == pytest.approx(0.856 / 0.5, abs=2e-3)
    assert recommended.move[1] == 1.8
    assert recommended.doubt <= 0.05 < least.doubt


def test_prism_and_millimetres_together_leave_less_doubt() -> None:
    """Their doubts multiply: 22 % each do for 5 %, though neither would alone (0.15 for each lens, 0.45 mm)."""
    job = patched(PAIR, instrument__uncertainty__prism="0.15", instrument__uncertainty__position_mm="0.45")
    assert recommended(seen(job, "1 up")) is None
    job = seen(job, "1 up", readings__right__prp_height_mm="16", readings__left__prp_height_mm="18")
    alone = patched(job, edition_options={"prism-alternatives": "replace"})
    assert recommended(alone) is None, "2 × 0.45² under the root, 1.0 mm: 88 % at best"
    both = recommended(job)
    assert both
    assert both.doubt <= 0.05


def recommended(job: Job) -> Shift | None:
    found = remedy(job)
    assert found
    return found.shared.recommended


def test_nothing_is_recommended_where_no_reading_is_sure() -> None:
    found = remedy(seen(patched(PAIR, instrument__uncertainty__prism="0.2"), "1.00 up"))
    assert found
    assert found.shared.least
    assert found.shared.recommended is None


def test_a_grid_too_coarse_is_made_finer() -> None:
    """20 D and hardly any deviation left by the doubt (0.117 of each lens): no tenth of a mm is within, a hundredth is."""
    job = patched(PAIR, right__sphere="-20.00", left__sphere="-0.25", instrument__uncertainty__prism="0.1175")
    found = remedy(seen(job, "1.13 up"))
    assert found
    assert found.only["right"].recommended
    up_mm = found.only["right"].recommended.move[1]
    assert round(up_mm, 1) != up_mm == round(up_mm, 2)


def test_decimals_decide_on_the_grid() -> None:
    """1.4 mm would leave 0.33000004 of 0.33: so near the limit that only decimals tell, and 1.5 mm it is."""
    assert shift(seen(PAIR, "1.03000004 up", left__partner=True)).move == (0, 1.5, 0, 0)
    assert shift(seen(PAIR, "1.03 up", left__partner=True)).move == (0, 1.4, 0, 0)


def test_limits_that_meet_between_the_places_of_the_grid() -> None:
    """+1.00 D, 1.329999 off in an oblique direction: 9.99999 mm of 10 allowed, and no thousandth of a mm in between."""
    up = math.sqrt(1.329999**2 - 0.73**2)
    job = patched(UNCUT, right__sphere="+1.00")
    assert why(seen(job, f"0.73 in, {up:.9f} up"))[0] == "narrow"


# --- millimetres ---------------------------------------------------------------------------------------------------------


def test_a_movement_takes_measured_heights_along() -> None:
    """Heights 2.0 mm apart of 1.0 allowed: 1.0 mm less is enough, though the prism would ask for 1.34 mm."""
    job = seen(PAIR, "1.00 up", readings__right__prp_height_mm="16", readings__left__prp_height_mm="18")
    assert shift(job).exact == pytest.approx((0, 0.5, 0, -0.5), abs=1e-6)
    both = patched(job, edition_options={"prism-alternatives": "both"})
    assert shift(both).exact == pytest.approx((0, 0.67, 0, -0.67), abs=1e-6)
    moved_on = moved(matter_of_job(job), (1.0, 0.5, 0.0, -0.5)).job.readings
    assert (moved_on.right.prp_height_mm, moved_on.left.prp_height_mm) == (Decimal("16.5"), Decimal("17.5"))


def test_a_movement_takes_measured_distances_along() -> None:
    """Towards the nose is to the observer's right for the right lens: its distance gets shorter, the pair's as well."""
    job = seen(PAIR, "2.00 in", readings__right__pd_mm="35", readings__left__pd_mm="31")
    assert shift(job).exact == pytest.approx((0.75, 0, -0.75, 0), abs=1e-6)  # 4.0 mm of 2.5 allowed
    pair = seen(PAIR, "2.00 in", readings__prp_distance_mm="66")
    assert shift(pair).exact == pytest.approx((0.75, 0, -0.75, 0), abs=1e-6)
    after = moved(matter_of_job(pair), (1.0, 0.0, -0.5, 0.0))
    assert after.job.readings.prp_distance_mm == Decimal("64.5")


def test_progressive_places_count_each_for_itself() -> None:
    """What the numbers alone ask, were the lens not progressive: 0.5 mm of the right lens, 1.0 mm allowed each."""
    job = patched(PAIR, lens={"design": "progressive"}, right__add="2.00", left__add="2.00", thinning={"rule": "none"})
    job = seen(job, "1.00 up", readings__right__prp_height_mm="16.5", readings__left__prp_height_mm="18")
    matter = matter_of_job(job)
    assert movable(matter) == ()
    assert unrounded(matter, judge(matter), ("right", "left")) == pytest.approx((0, 0.5, 0, 0), abs=1e-6)
    assert unrounded(matter, judge(matter), ()) is None


def test_the_place_of_one_uncut_lens_moves_with_it() -> None:
    """+5.00 D, place found 3 mm up and 4 mm towards the nose: 5 mm off, 1.0 allowed, so 4 mm along that line."""
    job = patched(UNCUT, edition_options={"prism-alternatives": "replace"})
    job = seen(job, "2 in, 1.5 up", readings__right__pd_mm="27", readings__right__prp_height_mm="21")
    job = patched(job, readings__left__pd_mm="31", readings__left__prp_height_mm="18")
    assert shift(job).exact == pytest.approx((-3.2, -2.4, 0, 0), abs=1e-6)


def test_a_length_slid_has_the_direction_of_the_error() -> None:
    """2 mm slid; a −5.00 lens with 0.6 right and 0.8 up too much has its due point to the left and below."""
    job = patched(UNCUT, edition_options={"prism-alternatives": "replace"}, readings__left__slid_mm="0")
    job = seen(job, "0.6 in, 0.8 up", readings__right__slid_mm="2")
    assert shift(job).exact == pytest.approx((0.6, 0.8, 0, 0), abs=1e-6)
    after = moved(matter_of_job(job), (0.6, 0.8, 0.0, 0.0)).job.readings
    assert after.right.slid_mm == pytest.approx(Decimal(1))
    assert after.left.slid_mm == 0
    nowhere = moved(matter_of_job(seen(job, "0 up")), (0.6, 0.8, 0.0, 0.0)).job.readings
    assert nowhere.right.slid_mm == 3, "no error gives no direction: at worst straight away"
    strict = patched(seen(job, "0 up"), edition_options={"prism-alternatives": "both"})
    assert why(strict)[0] == "no-power", "a length slid without a direction cannot be moved away"
    near = patched(strict, readings__right__slid_mm="0.5", readings__left__prism=words("0.6 up"), readings__left__slid_mm="1.5")
    assert shift(near).eyes == ("left",)


# --- what the trade allows -----------------------------------------------------------------------------------------------


@pytest.mark.parametrize(("state", "code"), [("edged", "cut-edged"), ("mounted", "cut-mounted")])
def test_a_cut_lens_is_not_moved_as_it_is(state: str, code: str) -> None:
    found = remedy(seen(patched(PAIR, state=state), "1.5 up"))
    assert found
    assert (found.kind, found.allowed, found.why.code) == ("shift", False, code)
    assert found.remade == ("right",)


def test_why_nothing_is_moved() -> None:
    job = seen(UNCUT, "1.5 up")
    progressive = {"lens": {"design": "progressive"}, "right__add": "2.00", "left__add": "2.00", "thinning": {"rule": "none"}}
    assert why(patched(job, **progressive)) == ("progressive", {"eye": "right"})
    assert why(patched(job, right__aspheric=True)) == ("aspheric", {"eye": "right"})
    assert why(patched(job, right__sphere="0.00"))[0] == "no-power"
    assert why(patched(job, right__sphere="+1.00"))[0] == "far"
    assert why(patched(job, right__sphere="+1.00"))[1] == {
        "eye": "right",
        "move": "11.7",
        "word": "vertical",
        "power": "+1.00",
        "most": "10",
    }
    assert why(patched(seen(UNCUT, "1.5 in"), right__sphere="+1.00"))[1]["word"] == "horizontal"
    partner = seen(patched(PAIR, left__partner=True, left__prism=words("0 up"), right__sphere="0.00"), "1.5 in")
    assert why(partner) == ("partner", {"eye": "left"}), "named where it would do, if it could be moved"
    assert why(patched(partner, right__sphere="-5.00", right__aspheric=True)) == ("aspheric", {"eye": "right"})
    unread = patched(UNCUT, readings__right__prism=words("1.5 up"), right__aspheric=True)
    del unread["readings"]["left"]
    assert why(unread)[0] == "aspheric"
    power = seen(patched(job, readings__right__sphere="-5.50"), "1.5 up")
    assert why(power) == ("not-of-prism", {"check": "power", "eye": "right"})
    unknown = patched(seen(PAIR, "1.5 in"), right={"partner": True}, left__aspheric=True)
    assert why(unknown)[0] == "aspheric"


def test_a_lens_that_is_not_read_or_not_known_stays() -> None:
    """Uncut: the left lens was not read; without a sphere ordered there is no power to move by."""
    half = seen(UNCUT, "1.5 up")
    half["readings"]["left"] = {"slid_mm": "1"}
    assert shift(half).eyes == ("right",)
    bare = patched(seen(PAIR, "1.5 in"), left={"prism": words("0 up")})
    assert movable(matter_of_job(bare)) == ("right",)
    assert shift(bare).eyes == ("right",)


def test_a_segment_moves_along_and_has_limits_of_its_own() -> None:
    """1.0 mm in height for each and between both, 2.5 mm sideways together (published tables)."""
    bifocal = {"lens": {"design": "bifocal"}, "right__add": "2.00", "left__add": "2.00", "thinning": {"rule": "none"}}
    job = patched(UNCUT, **bifocal)
    assert shift(seen(job, "0.8 up")).move == (0, 1.0, 0, 0)
    assert why(seen(job, "0.9 up")) == ("segment", {"eye": "right", "move": "1.1"})
    assert why(seen(job, "0.8 up", "0.8 down"))[0] == "segment", "1.0 mm each, 2.0 mm between both"
    assert shift(seen(job, "1.5 in")).move == (2.4, 0, 0, 0)
    assert shift(seen(job, "1.6 in")).exact == pytest.approx((2.54, 0, 0.04, 0), abs=1e-6), "the other goes along a little"
    assert why(seen(job, "2.2 in"))[0] == "segment"
    one = patched(job, left__design="single-vision")
    del one["left"]["add"]
    assert shift(seen(one, "0.8 up", "0.9 down")).exact == pytest.approx((0, 0.94, 0, -1.14), abs=1e-6)


def test_the_blank_must_cover_the_rim() -> None:
    """A round rim of 50 mm around its centre, the mark in it: (60 − 2 − 50) / 2 = 4.0 mm of movement, no more."""
    frame = {"a_mm": "50", "b_mm": "50", "dbl_mm": "12", "shape": "round"}
    place = {"prp_right_mm": "0", "prp_up_mm": "0"}
    job = patched(UNCUT, frame=frame, right__prp_height_mm="25", right__blank_diameter_mm="60", right__surfacing=place)
    assert shift(seen(job, "2.33 up")).move == (0, 4.0, 0, 0)
    assert why(seen(job, "2.38 up")) == ("blank", {"eye": "right", "move": "4.1", "blank": "60"})
    other = patched(job, right__blank_diameter_mm="80", left__prp_height_mm="25", left__blank_diameter_mm="57", left__surfacing=place)
    assert why(seen(other, "2.33 up", "1.83 up")) == ("blank", {"eye": "left", "move": "3.0", "blank": "57"})
    traced = patched(job, frame={"dbl_mm": "12", "outline_mm": ["25"] * 36})
    assert why(seen(traced, "2.38 up"))[0] == "blank"
    assert why(seen(patched(job, right__sphere="0.00"), "2.38 up"))[0] == "no-power"


def test_a_finished_blank_lies_around_its_optical_centre() -> None:
    """−5.00 D read 1.0 up: its centre lies 2.0 mm below the mark; moved up it comes nearer to the rim's centre."""
    frame = {"a_mm": "50", "b_mm": "50", "dbl_mm": "12", "shape": "round"}
    job = patched(UNCUT, frame=frame, right__prp_height_mm="25", left__prp_height_mm="25", right__blank_diameter_mm="53.3")
    assert shift(seen(job, "1.0 up")).move == (0, 1.4, 0, 0)
    assert why(seen(patched(job, right__sphere="0.00"), "1.0 up"))[0] == "no-power", "and no optical centre"
    assert shift(seen(patched(job, right__blank_diameter_mm="53"), "1.0 up")).move == (0, 1.5, 0, 0)
    assert why(seen(patched(job, right__blank_diameter_mm="51"), "1.0 up"))[0] == "blank"
    ground = patched(job, right__prism=words("6 in"), right__blank_diameter_mm="60")
    assert shift(seen(ground, "6 in, 1.0 up")).move == (0, 1.4, 0, 0)


def test_both_in_the_way_is_named_by_the_distance() -> None:
    bifocal = {"lens": {"design": "bifocal"}, "right__add": "2.00", "left__add": "2.00", "thinning": {"rule": "none"}}
    assert why(seen(patched(UNCUT, **bifocal, right__sphere="+0.50"), "1.5 up"))[0] == "far"


# --- what is made again --------------------------------------------------------------------------------------------------


def made_again(job: Job) -> tuple[str, ...]:
    found = remedy(job)
    assert found
    return found.remade


def test_as_few_lenses_as_do_are_made_again() -> None:
    assert made_again(seen(PAIR, "1.5 up", "0.1 up")) == ("right",)
    assert made_again(seen(PAIR, "0.1 up", "1.5 up")) == ("left",)
    assert made_again(seen(PAIR, "1.5 up", "1.4 down")) == ("right", "left")
    power = patched(seen(PAIR, "1.5 up", readings__left__sphere="-5.50"), readings__right__sphere="-5.00")
    assert made_again(power) == ("right", "left")
    bifocal = patched(PAIR, lens={"design": "bifocal"}, right__add="2.00", left__add="2.00")
    assert made_again(seen(bifocal, "1.5 up")) == ("right", "left"), "thinning not known: no reading says which"
    assert made_again(seen(patched(bifocal, thinning={"rule": "none"}), "1.5 up")) == ("right",)


# --- the decision rule ---------------------------------------------------------------------------------------------------


def test_guarded_decisions() -> None:
    guarded = patched(PAIR, decision_rule="guarded", instrument__uncertainty__prism="0.08")
    undecided = shift(seen(guarded, "0.33 up"))
    assert undecided.doubt <= 0.05
    assert undecided.exact[1] == pytest.approx((0.33 - 0.144) / 1.0, abs=2e-3)
    unsure = patched(guarded, instrument__uncertainty__prism="0.2")
    assert remedy(seen(unsure, "0.33 up")) is None, "read again first"
    assert why(seen(unsure, "3 up"))[0] == "uncertain"
    assert remedy(seen(patched(guarded, readings__right__sphere="-5.13"), "0 up")) is None, "only the power is undecided"
    both = patched(guarded, edition_options={"prism-alternatives": "both"}, instrument__uncertainty__position_mm="0.1")
    both = seen(both, "0.33 up", readings__right__prp_height_mm="17.1", readings__left__prp_height_mm="18")
    both = patched(both, readings__right__pd_mm="31", readings__left__pd_mm="31")
    assert shift(both).doubt <= 0.05


def test_nothing_is_to_be_done() -> None:
    found = remedy(seen(PAIR, "0.33 up"))
    assert found
    assert (found.kind, found.remade, found.shared.least) == ("none-needed", (), None)
    assert remedy(PAIR) is None


# --- the numbers ---------------------------------------------------------------------------------------------------------


@given(st.sampled_from([0.25, 0.33, 0.5, 0.67, 1.0, 2.5]), st.floats(0.002, 0.6), st.sampled_from([0.05, 0.025]), st.booleans())
def test_accepted_deviations_against_scipy(limit: float, share: float, doubt: float, round_: bool) -> None:
    uncertainty = limit * share
    found = _accepted(limit, uncertainty, doubt, round_)

    def doubt_of(off: float) -> float:
        if round_:
            return float(1.0 - ncx2.cdf((limit / uncertainty) ** 2, 2, (off / uncertainty) ** 2))
        return float(1.0 - norm.cdf((limit - off) / uncertainty) + norm.cdf((-limit - off) / uncertainty))

    if found is None:
        assert doubt_of(0.0) > doubt - 1e-9
    else:
        assert doubt_of(found) <= doubt + 1e-7
        assert found < 1e-6 or doubt_of(found + 1e-5 * limit) > doubt - 1e-6


def test_limits_that_contradict_one_another() -> None:
    assert shortest([Strip(RIGHT, 3.0, 1.0), Strip(RIGHT, -3.0, 1.0)]) is None
    assert shortest([Disc(RIGHT, UP, (3.0, 0.0), 1.0), Disc(RIGHT, UP, (-3.0, 0.0), 1.0)]) is None
    still = (0.0, 0.0, 0.0, 0.0)
    assert shortest([Strip(still, 3.0, 1.0)]) is None
    assert shortest([Disc(still, still, (3.0, 0.0), 1.0)]) is None
    assert shortest([Disc(still, still, (0.3, 0.0), 1.0), Strip(still, 0.5, 1.0)]) == still


def test_cuts_come_to_an_end(monkeypatch: pytest.MonkeyPatch) -> None:
    """An ellipse needs several tangents; with one allowed the search gives up."""
    ellipse = Disc((1.0, 0.0, 0.0, 0.0), (0.0, 0.2, 0.0, 0.0), (3.0, 2.0), 1.0)
    assert shortest([ellipse]) is not None
    monkeypatch.setattr(remedy_least, "_MOST_CUTS", 1)
    assert shortest([ellipse]) is None


def test_the_grid_looks_around_where_the_next_places_are_beyond() -> None:
    """A strip along a diagonal, narrower than a step: the next corners are beyond it, one farther out is not."""
    row = (math.sqrt(0.5), -math.sqrt(0.5), 0.0, 0.0)
    limits = [Strip(row, 0.03, 0.031), Strip((1.0, 0.0, 0.0, 0.0), -1.33, 0.2), Strip((0.0, 1.0, 0.0, 0.0), -1.32, 0.2)]
    move = shortest(limits)
    assert move
    places = list(on_grid(limits, move, 0.1))
    assert places
    assert all(allows(limits, place) for place in places)
    assert len(set(places)) == len(places)


# --- the picture ---------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("job", [seen(UNCUT, "0.6 in, 0.8 up"), seen(PAIR, "1.5 up, 2 out"), seen(PAIR, "1 up", "2 out", decision_rule="guarded")])
def test_the_picture_shows_where_a_dot_would_pass(job: Job) -> None:
    """Judged again on the outline's corners, drawn in a little and out a little."""
    matter = matter_of_job(job)
    least = shift(job)
    scenes = remedy_scene(matter, least.move)
    assert set(scenes) == {"right", "left"}
    for at, eye in enumerate(("right", "left")):
        roles = {shape["role"]: shape for shape in scenes[eye]["shapes"]}
        dot = -least.move[2 * at], -least.move[2 * at + 1]
        assert ("new-dot" in roles) == (eye in least.eyes)
        reach = 2.99 * max(1.0, *map(abs, least.move))  # farther it is not drawn
        for x, y in roles["region"]["points"]:
            if math.hypot(x - dot[0], y - dot[1]) > reach:
                continue  # not limited that way
            for factor, outcome in ((0.99, "within"), (1.01, "outside")):
                place = list(least.move)
                place[2 * at] = -(dot[0] + (x - dot[0]) * factor)
                place[2 * at + 1] = -(dot[1] + (y - dot[1]) * factor)
                if math.hypot(x - dot[0], y - dot[1]) > 0.2:
                    verdict = judge(moved(matter, (place[0], place[1], place[2], place[3])))
                    assert (verdict.outcome == "within") == (outcome == "within")


# --- against an independent optimiser ------------------------------------------------------------------------------------


@pytest.mark.parametrize("seed", [11, 12])
def test_against_an_independent_optimiser(seed: int) -> None:
    """Within 0.01 mm of the optimum, never outside the limits, never impossible where there is a movement."""
    tally = compare_some(seed, 120)
    assert tally.wrong == ()
    assert tally.failing == 120
    assert min(tally.moved, tally.impossible) > 20


@pytest.mark.slow
def test_every_edition_against_an_independent_optimiser() -> None:
    tally = compare_some(13, 600)
    assert tally.wrong == ()
    assert len(tally.editions) == 7
    assert tally.largest_mm <= 0.01


def test_pieces_are_alternatives() -> None:
    """Prism or millimetres, vertical and horizontal: two groups with two ways each."""
    job = seen(PAIR, "1 up, 2 in", readings__right__prp_height_mm="18", readings__left__prp_height_mm="18", readings__prp_distance_mm="62")
    matter = matter_of_job(job)
    assert len(list(pieces(matter, judge(matter).checks, careful=False))) == 4
