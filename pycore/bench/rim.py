"""One lens in its rim: where the rim, the drilled holes and the inside lie from the prism
reference point, as places at which a thickness is asked for. Nothing here knows prism or power.
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass, replace
from decimal import Decimal
from functools import lru_cache

from pycore.bench.layout import inwards, place_of
from pycore.bench.outline import outline_of
from pycore.job.body import Frame
from pycore.job.document import Job
from pycore.job.order import EyeOrder
from pycore.optics.prism import Eye

Place = tuple[float, float]

MOST_RIM_POINTS = 72
SECTORS = 16
HOLE_FROM_RIM_MM = 3.0  # from the rim on the line of the datum, both sides: common practice
# From memory (facts section 6): one eye's distance 27 to 36, near inset 1.5 to 2.5, DBL 14 to 24.
_USUAL_MM = {"dbl_mm": Decimal(18), "pd_mm": Decimal(32), "near_pd_mm": Decimal(30)}
# Two radii and their weights for the integral of f(r) r dr from 0 to 1, exact for cubic f
# (Gauss and Jacobi): a lens's thickness differs from a cubic along a radius by micrometres.
_ROOT = math.sqrt(6.0)
RADII = (((6.0 - _ROOT) / 10.0, (9.0 - _ROOT) / 36.0), ((6.0 + _ROOT) / 10.0, (9.0 + _ROOT) / 36.0))


# Compared by identity: `rim_of` keeps one object for one frame, and a rim's points are many.
@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Rim:
    """Places of one lens, each (right_mm, up_mm) from its prism reference point.

    `points` at equal steps of angle round the boxing centre, counter-clockwise from 0 degrees;
    `holes` where a drilled mount goes through; `nodes` with `node_areas_mm2`: the sum of
    thickness times area over them is the volume. `centre` is the boxing centre.
    """

    eye: Eye
    centre: Place
    points: tuple[Place, ...]
    holes: tuple[Place, ...]
    nodes: tuple[Place, ...]
    node_areas_mm2: tuple[float, ...]

    def index_at(self, angle_deg: float) -> int:
        """The point of the rim nearest to an angle in degrees at the boxing centre."""
        count = len(self.points)
        return round(angle_deg * count / 360.0) % count

    def holds(self, place: Place) -> bool:
        """Tell whether a place lies inside the rim."""
        x, y = place[0] - self.centre[0], place[1] - self.centre[1]
        edge = self.points[self.index_at(math.degrees(math.atan2(y, x)))]
        reach_mm = math.hypot(edge[0] - self.centre[0], edge[1] - self.centre[1])
        return math.hypot(x, y) < reach_mm


@dataclass(frozen=True, slots=True, kw_only=True)
class Placed:
    """Where one prism reference point lies from its boxing centre, in mm; `usual` maps the field
    of the job nobody filled to the text of the value taken instead."""

    in_mm: float
    up_mm: float
    usual: Mapping[str, str]


def placed(job: Job, order: EyeOrder) -> Placed | None:
    """Put one prism reference point into its box.

    Arguments: `job`; `order` of the eye. Returns the place, with usual distances where none are
    written, or None where the box is not known. Source: `bench.layout`.
    """
    frame, filled, usual = job.frame, job, dict[str, str]()
    place = place_of(job, order.eye)
    for field in place.missing if place else ():
        value = _USUAL_MM.get(field.rpartition(".")[2])
        if value is None:
            continue
        usual[field] = str(value)
        if field == "frame.dbl_mm":
            filled = replace(filled, frame=replace(frame, dbl_mm=value))
        else:
            known = replace(order, pd_mm=value, pd_for=None, near_pd_mm=value)
            right = order.eye == "right"
            filled = replace(filled, right=known) if right else replace(filled, left=known)
    if usual:
        place = place_of(filled, order.eye)
    if place is None or place.prp is None:
        return None
    return Placed(
        in_mm=float(inwards(order.eye, place.prp.right_mm)),
        up_mm=float(place.prp.up_mm),
        usual=usual | {field: text for field, text in place.assumed if ".segment" not in field},
    )


@lru_cache(maxsize=16)
def rim_of(frame: Frame, eye: Eye, in_mm: float, up_mm: float) -> Rim | None:
    """The rim of one lens, or None where the frame's box is not known.

    Arguments: `frame`; `eye`; the prism reference point from the boxing centre, towards the nose
    and up, in mm. Returns the Rim. (A pure function, kept because every section asks the same.)
    """
    outline = outline_of(frame)
    if outline is None:
        return None
    whole = outline.points(eye)
    count = min(len(whole), MOST_RIM_POINTS)
    around = tuple(whole[index * len(whole) // count] for index in range(count))
    right_mm = in_mm if eye == "right" else -in_mm
    nodes = _nodes(whole)
    return Rim(
        eye=eye,
        centre=(-right_mm, -up_mm),
        points=tuple((x - right_mm, y - up_mm) for x, y in around),
        holes=tuple((x - right_mm, y - up_mm) for x, y in _holes(whole)) if frame.drilled else (),
        nodes=tuple((x - right_mm, y - up_mm) for x, y, _ in nodes),
        node_areas_mm2=tuple(area for _, _, area in nodes),
    )


def _holes(around: tuple[Place, ...]) -> list[Place]:
    most = max(x for x, _ in around) - HOLE_FROM_RIM_MM
    least = min(x for x, _ in around) + HOLE_FROM_RIM_MM
    return [(most, 0.0), (least, 0.0)]


def _nodes(around: tuple[Place, ...]) -> list[tuple[float, float, float]]:
    """Places and areas of a fixed sum over the outline: sectors, two radii in each.

    A sector has the true mean of the rim's squared radii, so that its area is right, and its
    radii are drawn out by the mean of the fourth powers, so that squares over it are right too.
    """
    squares = [x * x + y * y for x, y in around]
    fourths = [square * square for square in squares]
    width, step = len(around) / SECTORS, 2.0 * math.pi / SECTORS
    nodes = []
    for sector in range(SECTORS):
        ends = (sector - 0.5) * width, (sector + 0.5) * width
        square = _mean(squares, *ends)
        radius, angle = math.sqrt(_mean(fourths, *ends) / square), sector * step
        for reach, weight in RADII:
            x, y = reach * radius * math.cos(angle), reach * radius * math.sin(angle)
            nodes.append((x, y, weight * square * step))
    return nodes


def _mean(values: list[float], start: float, end: float) -> float:
    """Mean of a closed line through equally spaced values, between two places along it."""
    parts = 6
    width = (end - start) / parts
    total = 0.0
    for part in range(parts):
        place = start + (part + 0.5) * width
        low = math.floor(place)
        share = place - low
        total += values[low % len(values)] * (1.0 - share)
        total += values[(low + 1) % len(values)] * share
    return total / parts
