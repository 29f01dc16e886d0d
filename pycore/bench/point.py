"""Where on the lens is the point, and is the lens moved to it or read at it?

Two opposite jobs, never mixed. Spotting (uncut, before blocking): move the lens until the
target stands at the expected reading, then dot; the dot is the prism reference point.
Checking: put the marked point at the aperture, do not move the lens, read.
"""

from dataclasses import dataclass
from decimal import Decimal

from pycore.bench.expected import has_marked_height
from pycore.job.body import SEGMENTED
from pycore.job.document import Job
from pycore.job.order import EyeOrder

# The sentence without positions, for where one of them is not given.
UNPLACED = {
    "spot-single-vision": "spot-single-vision-unplaced",
    "check-progressive": "check-progressive-unplaced",
    "check-segmented": "check-segmented-unplaced",
    "check-single-vision": "check-single-vision-unplaced",
}


@dataclass(frozen=True, slots=True, kw_only=True)
class Point:
    """The task at one lens and the code of the sentence that says where the point is."""

    task: str
    code: str
    params: dict[str, str]


def point_of(job: Job, order: EyeOrder) -> Point:
    """Where the prism of one lens is spotted or checked.

    Arguments: `job`; `order` of the eye. Returns the Point. Source: domain facts section 5
    (progressive: midway between the engravings, 2 to 4 mm below the fitting cross).
    """
    task, code, needed = _kind_of_point(job, order)
    places = _positions(order)
    if any(not places[name] for name in needed):
        code = UNPLACED[code]
    return Point(task=task, code=code, params={name: places[name] for name in needed})


def _kind_of_point(job: Job, order: EyeOrder) -> tuple[str, str, tuple[str, ...]]:
    """The task, the sentence's code, and the positions that it names."""
    design = order.lens.design or "single-vision"
    if job.state == "uncut" and design in ("single-vision", "near") and not order.partner:
        return "spotting", "spot-single-vision", ("pd", "height")
    if design == "progressive":
        return "checking", "check-progressive", ("cross",)
    if design in SEGMENTED:
        return "checking", "check-segmented", ("pd", "height")
    if has_marked_height(order, job.state):
        return "checking", "check-single-vision", ("pd", "height")
    return "checking", "check-single-vision-no-height", ()


def _positions(order: EyeOrder) -> dict[str, str]:
    found: dict[str, Decimal | None] = {
        "pd": order.near_pd_mm if order.lens.design == "near" else order.pd_mm,
        "height": order.prp_height_mm,
        "cross": order.cross_above_prp_mm,
    }
    return {name: "" if value is None else str(value) for name, value in found.items()}
