"""The region in a lens's dial is the verdict, drawn: just inside passes, just outside does not."""

import copy
import math
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from tests.core.strategies import EYES, OPPOSITE, Job, jobs, report_on

STEP = 4e-6  # prism dioptres beside the edge; a guarded edge is found to a billionth of the limit


def region_of(job: Job, eye: str) -> Any:
    scene = report_on(job, scenes=True)["scenes"][eye]["dial"]
    return next((shape for shape in scene["shapes"] if shape["role"] == "region"), None)


def passes(job: Job, eye: str, x: float, y: float) -> bool:
    """Whether this reading of the lens passes every prism check that it has a part in."""
    other = copy.deepcopy(job)
    right_word = "in" if eye == "right" else "out"
    other["readings"][eye] |= {
        "prism": [
            {"amount": f"{abs(x):.9f}", "base": right_word if x > 0 else OPPOSITE[right_word]},
            {"amount": f"{abs(y):.9f}", "base": "up" if y > 0 else "down"},
        ]
    }
    verdict = report_on(other)["verdict"]
    mine = [check for check in verdict["checks"] if check["unit"] == "Δ" and check["counts"] and check["eye"] in (eye, "pair")]
    return all(check["outcome"] == "within" for check in mine)


def without_extras(job: Job) -> Job:
    """Nothing but one prism reading of each lens: no compensator, no repeats, no millimetres."""
    job = copy.deepcopy(job)
    job["edition_options"].pop("prism-alternatives", None)
    for eye in EYES:
        reading = job["readings"].get(eye, {})
        seen = [] if "compensator" in reading else reading.get("prism", [])
        job["readings"][eye] = {"prism": seen or [{"amount": "0"}]}
    return job


def rectangle(shape: Job) -> dict[str, float]:
    ends = {"left": shape["x"], "down": shape["y"], "right": shape["x2"], "up": shape["y2"]}
    return {side: end for side, end in ends.items() if side not in shape["open"]}


@settings(suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much])
@given(job=jobs(), eye=st.sampled_from(EYES), angle=st.floats(0, 359))
def test_region_is_the_verdict(job: Job, eye: str, angle: float) -> None:
    job = without_extras(job)
    shape = region_of(job, eye)
    if shape is None:
        assert passes(job, eye, 12.5, -12.5)
        return
    if shape["kind"] == "circle":
        x, y = shape["x"], shape["y"]
        assert passes(job, eye, x, y) != shape["empty"]
        if not shape["empty"]:
            across, up = math.cos(math.radians(angle)), math.sin(math.radians(angle))
            near, far = shape["radius"] - STEP, shape["radius"] + STEP
            assert passes(job, eye, x + near * across, y + near * up)
            assert not passes(job, eye, x + far * across, y + far * up)
        return
    ends = rectangle(shape)
    middle = {"x": (shape["x"] + shape["x2"]) / 2, "y": (shape["y"] + shape["y2"]) / 2}
    assert passes(job, eye, **middle) != shape["empty"]
    if shape["empty"]:
        return
    for side, end in ends.items():
        key, outwards = "x" if side in ("left", "right") else "y", 1 if side in ("right", "up") else -1
        assert passes(job, eye, **{**middle, key: end - outwards * STEP}), side
        assert not passes(job, eye, **{**middle, key: end + outwards * STEP}), side
    for side in shape["open"]:
        key, outwards = "x" if side in ("left", "right") else "y", 1 if side in ("right", "up") else -1
        assert passes(job, eye, **{**middle, key: 25.0 * outwards}), side


BASE: Job = {
    "format": "wedgewright.job/1",
    "state": "mounted",
    "edition": "ansi-z80.1-2015",
    "lens": {"design": "single-vision"},
    "right": {"sphere": "-2.00", "prism": [{"amount": "3", "base": "in"}], "prp_height_mm": "18", "pd_mm": "31"},
    "left": {"sphere": "-2.00", "prism": [{"amount": "1.5", "base": "down"}], "prp_height_mm": "18", "pd_mm": "31"},
}


def test_region_follows_the_other_lens() -> None:
    """Centred on the expected point plus the other lens's error; dashed while that is unread."""
    unread = region_of(BASE, "right")
    assert unread["dashed"]
    assert (unread["x"], unread["x2"], unread["y"], unread["y2"]) == pytest.approx((3 - 0.67, 3 + 0.67, -0.33, 0.33))
    off = [{"amount": "0.25", "base": "out"}, {"amount": "1.75", "base": "down"}]
    shape = region_of(BASE | {"readings": {"left": {"prism": off}}}, "right")
    assert not shape["dashed"]
    assert (shape["x"], shape["x2"]) == pytest.approx((3.25 - 0.67, 3.25 + 0.67))
    assert (shape["y"], shape["y2"]) == pytest.approx((-0.25 - 0.33, -0.25 + 0.33))


@pytest.mark.parametrize(("sense", "sign"), [("lens-prism", -1), ("own-base", 1)])
def test_the_compensator_shifts_everything_that_is_seen(sense: str, sign: int) -> None:
    """Also the region; the reading typed is what is seen, so its target stands where it is typed."""
    reading = {"prism": [{"amount": "1", "base": "in"}], "compensator": {"amount": "2", "base": "in"}}
    job = BASE | {"instrument": {"compensator": sense}, "readings": {"right": reading}}
    shapes = report_on(job, scenes=True)["scenes"]["right"]["dial"]["shapes"]
    where = {shape["role"]: shape for shape in shapes}
    assert where["target"]["x"] == 1
    assert where["expected"]["x"] == 3 + 2 * sign
    assert where["region"]["x"] == pytest.approx(3 - 0.67 + 2 * sign)
    assert (where["compensator"]["x2"], where["compensator"]["y2"]) == (2 * sign, 0)


def test_region_under_the_guarded_rule_is_smaller() -> None:
    """Half the width by guarded acceptance: 0.144 for u = 0.08 √2 (scipy, see test_doubt)."""
    job = BASE | {"decision_rule": "guarded", "instrument": {"uncertainty": {"prism": "0.08"}}}
    shape = region_of(job | {"readings": {"left": {"prism": BASE["left"]["prism"]}}}, "right")
    assert shape["y2"] == pytest.approx(0.1439, abs=1e-4)
    empty = region_of(job | {"instrument": {"uncertainty": {"prism": "0.3"}}}, "right")
    assert empty["empty"]
