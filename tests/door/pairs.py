"""The jobs that the tests of the door start from, and what they do to them."""

import json
from typing import Any

from tests.core.strategies import Job, patched, report_on

# The example of the job document, version 1, its elided parts filled in: JSON numbers and typed
# text side by side, as they come.
EXAMPLE: Job = json.loads("""{
  "format": "wedgewright.job/1",
  "id": "T-1042",
  "state": "mounted",
  "edition": "ansi-z80.1-2015", "decision_rule": "simple",
  "lens": {"design": "progressive", "index": 1.60, "abbe": 41, "front_curve": 4.0, "curve_index": 1.530, "centre_thickness_mm": 2.2,
           "aspheric": false, "blank_diameter_mm": 70},
  "frame": {"a_mm": 52, "b_mm": 34, "dbl_mm": 18, "ed_mm": 55},
  "wear": {"vertex_tested_mm": 12, "vertex_worn_mm": 13, "pantoscopic_deg": 8, "wrap_deg": 5,
           "reading_distance_mm": 400, "reading_depth_mm": 10, "reading_inset_mm": 2.5},
  "thinning": {"rule": "two-thirds"},
  "right": {
    "sphere": "-2.25", "cylinder": "+1.50", "axis": 20, "add": "2.00",
    "prism": [{"amount": "3.00", "base": "in"}, {"amount": "1.50", "base": "up"}],
    "stated": null,
    "pd_mm": 31.5, "pd_for": "distance", "prp_height_mm": 17, "fitting_height_mm": 21, "cross_above_prp_mm": 4,
    "segment": null
  },
  "left": {
    "sphere": "-1.75", "cylinder": "+1.00", "axis": 165, "add": "2.00",
    "prism": [{"amount": 4.1, "base": 217}],
    "stated": null,
    "pd_mm": 31.0, "pd_for": "distance", "prp_height_mm": 17, "fitting_height_mm": 21, "cross_above_prp_mm": 4,
    "segment": null
  },
  "instrument": {"rings": 5, "ring_step": 1, "compensator": "lens-prism", "compensator_maximum": 15,
                 "uncertainty": {"prism": 0.08, "power_d": 0.04, "axis_deg": 1.0, "position_mm": 0.3}, "zero_uncertainty": 0.03},
  "readings": {
    "at": "marked-point",
    "right": {"sphere": "-2.25", "cylinder": "+1.50", "axis": 21, "add": "2.00", "add_side": "front",
              "prism": [{"amount": "2.75", "base": "in"}, {"amount": "0.25", "base": "up"}],
              "compensator": {"amount": 0, "base": 0}, "prp_height_mm": 17, "pd_mm": 31.5},
    "left": {"sphere": "-1.75", "cylinder": "+1.00", "axis": 165, "add": "2.00", "add_side": "front",
             "prism": [{"amount": "3.25", "base": "in"}, {"amount": "3.75", "base": "down"}],
             "compensator": {"amount": 0, "base": 0}, "prp_height_mm": 17, "pd_mm": 31},
    "prp_distance_mm": 62.5
  }
}""")

LENS = {"sphere": "-2.00", "pd_mm": "31", "prp_height_mm": "18"}
PAIR: Job = {
    "format": "wedgewright.job/1",
    "state": "mounted",
    "edition": "ansi-z80.1-2015",
    "lens": {"design": "single-vision"},
    "right": LENS,
    "left": LENS,
    "instrument": {"uncertainty": {"prism": "0.08"}},
    "readings": {"at": "marked-point"},
}


def words(*parts: str) -> list[Job]:
    """A prism by words: "3 in", "1.5 up"."""
    return [dict(zip(("amount", "base"), part.split(), strict=True)) for part in parts]


def read(job: Job, right: list[Job], left: list[Job], **changes: Any) -> Job:
    """The job with both lenses read."""
    return patched(job, readings__right__prism=right, readings__left__prism=left, **changes)


def outcome(job: Job, **keys: Any) -> str:
    found: str = report_on(job, **keys)["verdict"]["outcome"]
    return found


def xy(prism: Job) -> tuple[float, float]:
    return prism["x"], prism["y"]


def heights(job: Job, right: str, left: str) -> Job:
    return patched(job, readings__right__prp_height_mm=right, readings__left__prp_height_mm=left)


def every_text(value: Any) -> list[str]:
    """Every text inside a value."""
    if isinstance(value, dict):
        return [text for item in value.values() for text in every_text(item)]
    if isinstance(value, list):
        return [text for item in value for text in every_text(item)]
    return [value] if isinstance(value, str) else []


PROGRESSIVE = patched(PAIR, lens={"design": "progressive"}, right__add="2.00", left__add="2.00")
STRONG = patched(PAIR, right__sphere="-6.00", left__sphere="-5.00")
