"""Rims as pictures need them: seen from any point inside, shared by both lenses, cut by lines."""

from collections.abc import Sequence

from pycore.angles import cosine, direction, sine
from pycore.bench.layout import Spot
from pycore.bench.outline import Outline
from pycore.optics.prism import Eye

Points = list[tuple[float, float]]
DIRECTIONS = 72
STEP_DEG = 360.0 / DIRECTIONS
LONE_RADIUS_MM = 25.0  # where no frame is given, a round lens of this radius is drawn
_ALL = tuple((cosine(STEP_DEG * number), sine(STEP_DEG * number)) for number in range(DIRECTIONS))


def rim_around(rim: Outline | None, eye: Eye, prp: Spot | None) -> Points:
    """A rim seen from the prism reference point, mm; a circle where it is not known.

    Arguments: `rim`; `eye`; `prp` from the boxing centre. Returns (right, up) points in turn.
    """
    if rim is None or prp is None:
        return [(LONE_RADIUS_MM * x, LONE_RADIUS_MM * y) for x, y in _ALL]
    x, y = float(prp.right_mm), float(prp.up_mm)
    return [(right - x, up - y) for right, up in rim.points(eye)]


def radii_from_origin(rim: Points) -> list[float] | None:
    """How far a rim is from the origin at equal steps of angle, or None if it lies outside.

    Arguments: `rim` as points in turn, counter-clockwise; mm. Returns 72 radii in mm.
    """
    found: list[float | None] = [None] * DIRECTIONS
    for (x, y), (x2, y2) in zip(rim, [*rim[1:], rim[0]], strict=True):
        area = x * y2 - x2 * y
        if area <= 0.0:
            return None  # the origin is outside, or the rim turns back on itself
        first, last = direction(x, y) / STEP_DEG, direction(x2, y2) / STEP_DEG
        if last < first:
            last += DIRECTIONS
        for number in range(-int(-first // 1), int(last // 1) + 1):
            along, across = _ALL[number % DIRECTIONS]
            found[number % DIRECTIONS] = area / (along * (y2 - y) - across * (x2 - x))
    return [radius for radius in found if radius is not None]


def shared_rim(first: Points, second: Points) -> Points:
    """What lies within both rims, both seen from the origin; the first where they share nothing.

    Arguments: two rims in mm. Returns (right, up) points in turn.
    """
    both = radii_from_origin(first), radii_from_origin(second)
    if both[0] is None or both[1] is None:
        return first
    return [
        (min(one, other) * x, min(one, other) * y)
        for one, other, (x, y) in zip(both[0], both[1], _ALL, strict=True)
    ]


def within(rim: Sequence[tuple[float, float]], x: float, y: float, limit: float) -> Points:
    """The part of a rim where x·right + y·up is at most `limit` (Sutherland and Hodgman's cut).

    Arguments: `rim` points in turn; `x`, `y`, `limit`. Returns the points of the part.
    """
    part: Points = []
    for start, end in zip(rim, [*rim[1:], *rim[:1]], strict=True):
        over = x * start[0] + y * start[1] - limit
        over_end = x * end[0] + y * end[1] - limit
        if over <= 0.0:
            part.append(start)
        if (over < 0.0 < over_end) or (over_end < 0.0 < over):
            part.append(_between(start, end, over / (over - over_end)))
    return part


def chords(
    rim: Sequence[tuple[float, float]], x: float, y: float, value: float
) -> list[tuple[tuple[float, float], tuple[float, float]]]:
    """The pieces of the line x·right + y·up = `value` that lie within a rim.

    Arguments: `rim` points in turn; `x`, `y`, `value`. Returns pairs of ends.
    """
    crossings: Points = []
    for start, end in zip(rim, [*rim[1:], *rim[:1]], strict=True):
        over, over_end = x * start[0] + y * start[1] - value, x * end[0] + y * end[1] - value
        if (over < 0.0) != (over_end < 0.0):
            crossings.append(_between(start, end, over / (over - over_end)))
    crossings.sort(key=lambda point: x * point[1] - y * point[0])
    return list(zip(crossings[::2], crossings[1::2], strict=True))


def _between(
    start: tuple[float, float], end: tuple[float, float], part: float
) -> tuple[float, float]:
    return start[0] + part * (end[0] - start[0]), start[1] + part * (end[1] - start[1])


def holds(rim: Sequence[tuple[float, float]], right_mm: float, up_mm: float) -> bool:
    """Tell whether a point lies within a rim (by counting crossings). Arguments in mm."""
    inside = False
    for (x, y), (x2, y2) in zip(rim, [*rim[1:], *rim[:1]], strict=True):
        if (y > up_mm) != (y2 > up_mm) and right_mm < x + (up_mm - y) * (x2 - x) / (y2 - y):
            inside = not inside
    return inside
