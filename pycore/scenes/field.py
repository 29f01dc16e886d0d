"""The prism all over a lens as arrows, and the pair's vertical imbalance as lines and a zone.

Coordinates in mm from the prism reference point, x to the observer's right, y up. An arrow points
to the base; its length is the thin prism times the scene's `mm_per_prism`.
"""

import math
from collections.abc import Iterator, Sequence
from decimal import Decimal

from pycore.bench.field import Agreement, LensField, Reading
from pycore.bench.layout import Spot
from pycore.decimals import fixed
from pycore.optics.prism import vertical_word
from pycore.scenes.dial import Scene, Shape
from pycore.scenes.rim import Points, chords, grid_within, within
from pycore.scenes.segment import segment_points
from pycore.words import say

STEP_MM = 6.0
LONGEST_MM = 5.5
MARGIN_MM = 3.0
MOST_LINES = 6  # of imbalance, on each side of none


def lens_scene(
    lens: LensField, rim: Points, readings: Sequence[Reading], centre: Spot | None
) -> Scene:
    """The arrow map of one lens with the points asked for.

    Arguments: `lens`; `rim` seen from its reference point, mm; `readings` at the points asked
    for; `centre` its optical centre, if any. Returns the scene.
    """
    arrows = list(_arrows(lens, rim))
    longest = max((math.hypot(across, along) for _, _, across, along in arrows), default=0.0)
    scale = LONGEST_MM / longest if longest else 0.0
    shapes = [_polygon("outline", rim), *_segment(lens)]
    shapes += [
        _arrow(x, y, x + scale * across, y + scale * along) for x, y, across, along in arrows
    ]
    if centre and _near(rim, centre):
        shapes.append(_point("oc", float(centre.right_mm), float(centre.up_mm)))
    shapes.append(_point("prp", 0.0, 0.0))
    for reading in readings:
        x, y = float(reading.place.right_mm), float(reading.place.up_mm)
        amount = fixed((reading.exact or reading.thin).amount, 2)
        shapes.append(_point("asked", x, y))
        shapes.append({"role": "asked", "kind": "label", "x": x, "y": y, "text": amount})
    extent = _extent([*rim, *((shape["x"], shape["y"]) for shape in shapes if "x" in shape)])
    return {"unit": "mm", "extent": extent, "mm_per_prism": scale, "shapes": shapes}


def pair_scene(agreement: Agreement, right: Points, left: Points, shared: Points) -> Scene:
    """Where both lenses agree, both eyes looking the same way.

    Arguments: `agreement`; both rims and what they share, each seen from its reference point, mm.
    Returns the scene: the zone within the limit, lines at multiples of the limit.
    """
    limit = float(agreement.limit)
    x, y = agreement.x_per_mm, agreement.y_per_mm
    zone = within(within(shared, x, y, limit), -x, -y, limit)
    shapes = [_polygon("zone", zone)] if zone else []
    shapes += [_polygon("outline", right), _polygon("outline", left) | {"dashed": True}]
    for number in _levels(agreement, shared):
        shapes += _line(agreement, number, shared)
    shapes.append(_point("prp", 0.0, 0.0))
    extent = _extent([*right, *left])
    return {"unit": "mm", "extent": extent, "limit": limit, "shapes": shapes}


def _levels(agreement: Agreement, shared: Points) -> range:
    """The multiples of the limit that occur, none of them where there is no imbalance at all."""
    limit = float(agreement.limit)
    seen = [agreement.imbalance(*point) / limit for point in shared]
    if max(seen) == min(seen):
        return range(0)
    lowest, highest = math.ceil(min(seen)), math.floor(max(seen))
    return range(max(lowest, -MOST_LINES), min(highest, MOST_LINES) + 1)


def _line(agreement: Agreement, number: int, shared: Points) -> Iterator[Shape]:
    level = agreement.limit * number
    for start, end in chords(shared, agreement.x_per_mm, agreement.y_per_mm, float(level)):
        (x, y), (x2, y2) = start, end
        yield {"role": "iso-line", "kind": "line", "x": x, "y": y, "x2": x2, "y2": y2}
        yield {"role": "iso-line", "kind": "label", "x": x2, "y": y2, "text": _level_text(level)}


def _level_text(level: Decimal) -> str:
    word = vertical_word(level)
    sign = {"up": "plus", "down": "minus", None: "zero"}[word]
    return say(f"text.pair-vertical-{sign}", amount=fixed(abs(level), 2))


def _arrows(lens: LensField, rim: Points) -> Iterator[tuple[float, float, float, float]]:
    """Points of the grid with the thin prism there, in floats: a picture's worth."""
    xx, xy, yy = (part / 10.0 for part in lens.power.matrix())
    start_x, start_y = float(lens.due.expected.x), float(lens.due.expected.y)
    for x, y in grid_within(rim, STEP_MM):
        across, along = start_x - xx * x - xy * y, start_y - xy * x - yy * y
        if lens.segment and lens.segment.holds(Decimal(x), Decimal(y)):
            own = lens.segment.prism_at(Decimal(x), Decimal(y))
            across, along = across + float(own.x), along + float(own.y)
        yield x, y, across, along


def _segment(lens: LensField) -> Iterator[Shape]:
    place = lens.segment
    points = segment_points(place) if place else []
    if place and place.centre_right_mm is not None and place.top_up_mm is not None and points:
        x, y = float(place.centre_right_mm), float(place.top_up_mm)
        yield _polygon("segment", tuple((x + right, y + up) for right, up in points))


def _near(rim: Points, spot: Spot) -> bool:
    """Tell whether a point lies in the rim's own picture."""
    left, bottom, right, top = _extent(rim)
    return left <= float(spot.right_mm) <= right and bottom <= float(spot.up_mm) <= top


def _polygon(role: str, points: Points) -> Shape:
    return {"role": role, "kind": "polygon", "points": points}


def _point(role: str, x: float, y: float) -> Shape:
    return {"role": role, "kind": "point", "x": x, "y": y}


def _arrow(x: float, y: float, x2: float, y2: float) -> Shape:
    ends = {"x": x, "y": y, "x2": round(x2, 3), "y2": round(y2, 3)}
    return {"role": "arrow", "kind": "arrow", **ends}


def _extent(points: Sequence[tuple[float, float]]) -> list[float]:
    across, along = [x for x, _ in points], [y for _, y in points]
    return [
        min(across) - MARGIN_MM,
        min(along) - MARGIN_MM,
        max(across) + MARGIN_MM,
        max(along) + MARGIN_MM,
    ]
