"""Rims as pictures need them: seen from any point inside, shared by both lenses, cut by lines.

Each keystroke redraws the picture and seldom changes the frame, so what depends on the frame only
is remembered. Places are rounded to a thousandth of a millimetre.
"""

import math
from functools import lru_cache

from pycore.angles import cosine, direction, sine
from pycore.bench.layout import Spot
from pycore.bench.outline import Outline
from pycore.optics.prism import Eye

Point = tuple[float, float]
Points = tuple[Point, ...]
DIRECTIONS = 72
STEP_DEG = 360.0 / DIRECTIONS
LONE_RADIUS_MM = 25.0  # where no frame is given, a round lens of this radius is drawn
_ALL = tuple((cosine(STEP_DEG * number), sine(STEP_DEG * number)) for number in range(DIRECTIONS))


@lru_cache(maxsize=16)
def rim_around(rim: Outline | None, eye: Eye, prp: Spot | None) -> Points:
    """A rim seen from the prism reference point, mm; a circle where it is not known.

    Arguments: `rim`; `eye`; `prp` from the boxing centre. Returns (right, up) points in turn.
    """
    if rim is None or prp is None:
        return tuple(_rounded((LONE_RADIUS_MM * x, LONE_RADIUS_MM * y)) for x, y in _ALL)
    x, y = float(prp.right_mm), float(prp.up_mm)
    return tuple(_rounded((right - x, up - y)) for right, up in rim.points(eye))


def radii_from_origin(rim: Points) -> list[float] | None:
    """How far a rim is from the origin at equal steps of angle, or None if it lies outside.

    Arguments: `rim` as points in turn, counter-clockwise; mm. Returns 72 radii in mm.
    """
    found: list[float | None] = [None] * DIRECTIONS
    for (x, y), (x2, y2) in zip(rim, _turned(rim), strict=True):
        area = x * y2 - x2 * y
        if area <= 0.0:
            return None  # the origin is outside, or the rim turns back on itself
        first, last = direction(x, y) / STEP_DEG, direction(x2, y2) / STEP_DEG
        if last < first:
            last += DIRECTIONS
        for number in range(math.ceil(first), math.floor(last) + 1):
            along, across = _ALL[number % DIRECTIONS]
            found[number % DIRECTIONS] = area / (along * (y2 - y) - across * (x2 - x))
    return [radius for radius in found if radius is not None]


@lru_cache(maxsize=8)
def shared_rim(first: Points, second: Points) -> Points:
    """What lies within both rims, both seen from the origin; the first where they share nothing.

    Arguments: two rims in mm. Returns (right, up) points in turn.
    """
    both = radii_from_origin(first), radii_from_origin(second)
    if both[0] is None or both[1] is None:
        return first
    return tuple(
        _rounded((min(one, other) * x, min(one, other) * y))
        for one, other, (x, y) in zip(both[0], both[1], _ALL, strict=True)
    )


@lru_cache(maxsize=16)
def grid_within(rim: Points, step_mm: float) -> Points:
    """Points within a rim on a square grid of which the origin is one. Arguments in mm."""
    heights = [y for _, y in rim]
    return tuple(
        (column * step_mm, row * step_mm)
        for row in range(math.ceil(min(heights) / step_mm), math.floor(max(heights) / step_mm) + 1)
        for start, end in chords(rim, 0.0, 1.0, row * step_mm)
        for column in range(
            math.ceil(min(start[0], end[0]) / step_mm),
            math.floor(max(start[0], end[0]) / step_mm) + 1,
        )
    )


def within(rim: Points, x: float, y: float, limit: float) -> Points:
    """The part of a rim where x·right + y·up is at most `limit` (Sutherland and Hodgman's cut).

    Arguments: `rim` points in turn; `x`, `y`, `limit`. Returns the points of the part.
    """
    part: list[Point] = []
    for start, end in zip(rim, _turned(rim), strict=True):
        over = x * start[0] + y * start[1] - limit
        over_end = x * end[0] + y * end[1] - limit
        if over <= 0.0:
            part.append(start)
        if (over < 0.0 < over_end) or (over_end < 0.0 < over):
            part.append(_between(start, end, over / (over - over_end)))
    return tuple(part)


def chords(rim: Points, x: float, y: float, value: float) -> list[tuple[Point, Point]]:
    """The pieces of the line x·right + y·up = `value` that lie within a rim.

    Arguments: `rim` points in turn; `x`, `y`, `value`. Returns pairs of ends.
    """
    crossings: list[Point] = []
    for start, end in zip(rim, _turned(rim), strict=True):
        over, over_end = x * start[0] + y * start[1] - value, x * end[0] + y * end[1] - value
        if (over < 0.0) != (over_end < 0.0):
            crossings.append(_between(start, end, over / (over - over_end)))
    crossings.sort(key=lambda point: x * point[1] - y * point[0])
    return list(zip(crossings[::2], crossings[1::2], strict=True))


def _turned(rim: Points) -> Points:
    """The same points, each one's next in its place."""
    return (*rim[1:], *rim[:1])


def _between(start: Point, end: Point, part: float) -> Point:
    right, up = start[0] + part * (end[0] - start[0]), start[1] + part * (end[1] - start[1])
    return _rounded((right, up))


def _rounded(point: Point) -> Point:
    return round(point[0], 3), round(point[1], 3)
