"""The rim of one lens to scale: its outline as the front edge, its thickness laid outwards.

In mm from the boxing centre, seen from the front, x to the observer's right, y up. The band
between both lines is as wide as the edge is thick there. Below it the lens cut along the box's
horizontal centre line, seen from above with the front downwards, to the same scale.
"""

import math
from collections.abc import Iterator, Sequence

from pycore.bench.edge import Edge, FramedLens
from pycore.optics.prism import Prism
from pycore.optics.surface import sphere
from pycore.optics.thickness import addition_depth, thicknesses
from pycore.scenes.dial import Scene, Shape

ROOM_MM = 4.0
SLICES = 16
LABEL_AT = 0.7
Line = list[list[float]]


def edge_scene(lens: FramedLens, prism: Prism, edge: Edge, texts: Sequence[str]) -> Scene:
    """The picture of one lens.

    Arguments: `lens`; `prism` prism dioptres; its `edge` all round; `texts` of the thickest and
    the thinnest place. Returns the scene, in mm.
    """
    centre_x, centre_y = lens.rim.centre
    around = [(x - centre_x, y - centre_y) for x, y in lens.rim.points]
    outer = [_outwards(place, mm) for place, (_, mm) in zip(around, edge.profile, strict=True)]
    bottom = min(y for _, y in outer) - ROOM_MM
    front, back = _cut(lens, prism, edge.centre_mm, bottom)
    shapes = [
        {"role": "profile-back", "kind": "polygon", "points": _line(outer)},
        {"role": "outline", "kind": "polygon", "points": _line(around)},
        {"role": "boxing-centre", "kind": "point", "x": 0.0, "y": 0.0},
        {"role": "prp", "kind": "point", "x": _tidy(-centre_x), "y": _tidy(-centre_y)},
        {"role": "profile-front", "kind": "polyline", "points": front},
        {"role": "profile-back", "kind": "polyline", "points": back},
        *_marks(edge, outer, texts),
    ]
    every_x = [x for x, _ in outer] + [x for x, _ in front]
    top, low = max(y for _, y in outer), min(y for _, y in [*front, *back])
    extent = [min(every_x), low, max(every_x), top]
    margins = (-ROOM_MM, -ROOM_MM, ROOM_MM, ROOM_MM)
    return {
        "unit": "mm",
        "extent": [_tidy(end + margin) for end, margin in zip(extent, margins, strict=True)],
        "shapes": shapes,
    }


def _outwards(place: tuple[float, float], mm: float) -> tuple[float, float]:
    x, y = place
    reach = 1.0 + mm / math.hypot(x, y)
    return x * reach, y * reach


def _cut(lens: FramedLens, prism: Prism, centre_mm: float, top: float) -> tuple[Line, Line]:
    """Front and back of the lens cut along the box's horizontal centre line, below `top`."""
    rim, solid = lens.rim, lens.with_prism(prism)
    level = rim.centre[1]
    left, right = rim.points[rim.index_at(180.0)][0], rim.points[rim.index_at(0.0)][0]
    across = [left + (right - left) * part / SLICES for part in range(SLICES + 1)]
    thick = thicknesses(solid, centre_mm, [(x, level) for x in across])
    front = sphere(solid.front_d, solid.index)
    thinner = addition_depth(solid.add, solid.index, -level)
    fronts = [front.depth(x, level) + thinner for x in across]
    lower = top - max(depth + mm for depth, mm in zip(fronts, thick, strict=True))
    places = [
        (x - rim.centre[0], lower + depth, lower + depth + mm)
        for x, depth, mm in zip(across, fronts, thick, strict=True)
    ]
    return _line([(x, y) for x, y, _ in places]), _line([(x, y) for x, _, y in places])


def _marks(
    edge: Edge, outer: Sequence[tuple[float, float]], texts: Sequence[str]
) -> Iterator[Shape]:
    for role, found, text in zip(
        ("thickest", "thinnest"), (edge.thickest, edge.thinnest), texts, strict=True
    ):
        x, y = outer[edge.profile.index(found)]
        yield {"role": role, "kind": "point", "x": _tidy(x), "y": _tidy(y)}
        # The text stands inside the rim, where there is room.
        x, y = _tidy(x * LABEL_AT), _tidy(y * LABEL_AT)
        yield {"role": role, "kind": "label", "x": x, "y": y, "text": text}


def _line(places: Sequence[tuple[float, float]]) -> Line:
    return [[_tidy(x), _tidy(y)] for x, y in places]


def _tidy(value: float) -> float:
    """A length in mm to its micrometre (several times quicker than `round`)."""
    return math.floor(value * 1000.0 + 0.5) / 1000.0
