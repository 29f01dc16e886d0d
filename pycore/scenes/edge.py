"""The rim of one lens to scale: its outline as the front edge, its thickness laid outwards.

In mm from the boxing centre, seen from the front, x to the observer's right, y up. The band
between both lines is as wide as the edge is thick there. Below it the lens cut along the box's
horizontal centre line, seen from above with the front downwards, to the same scale.
"""

from collections.abc import Iterator, Sequence

from pycore.bench.edge import Edge, FramedLens
from pycore.optics.prism import Prism
from pycore.scenes.body import Place, cut_ends, framed_depths, laid_outwards, stations, tidy
from pycore.scenes.dial import Scene, Shape

ROOM_MM = 4.0
LABEL_AT = 0.7
Line = list[list[float]]


def edge_scene(lens: FramedLens, prism: Prism, edge: Edge, texts: Sequence[str]) -> Scene:
    """The picture of one lens.

    Arguments: `lens`; `prism` prism dioptres; its `edge` all round; `texts` of the thickest and
    the thinnest place. Returns the scene, in mm.
    """
    centre_x, centre_y = lens.rim.centre
    around = [(x - centre_x, y - centre_y) for x, y in lens.rim.points]
    outer = [laid_outwards(place, mm) for place, (_, mm) in zip(around, edge.profile, strict=True)]
    bottom = min(y for _, y in outer) - ROOM_MM
    front, back = _cut(lens, prism, edge.centre_mm, bottom)
    shapes = [
        {"role": "profile-back", "kind": "polygon", "points": _line(outer)},
        {"role": "outline", "kind": "polygon", "points": _line(around)},
        {"role": "boxing-centre", "kind": "point", "x": 0.0, "y": 0.0},
        {"role": "prp", "kind": "point", "x": tidy(-centre_x), "y": tidy(-centre_y)},
        {"role": "profile-front", "kind": "polyline", "points": front},
        {"role": "profile-back", "kind": "polyline", "points": back},
        *_marks(edge, around, outer, texts),
    ]
    every_x = [x for x, _ in outer] + [x for x, _ in front]
    top, low = max(y for _, y in outer), min(y for _, y in [*front, *back])
    extent = [min(every_x), low, max(every_x), top]
    margins = (-ROOM_MM, -ROOM_MM, ROOM_MM, ROOM_MM)
    return {
        "unit": "mm",
        "extent": [tidy(end + margin) for end, margin in zip(extent, margins, strict=True)],
        "shapes": shapes,
    }


def _cut(lens: FramedLens, prism: Prism, centre_mm: float, top: float) -> tuple[Line, Line]:
    """Front and back of the lens cut along the box's horizontal centre line, below `top`."""
    (left, _), (right, _) = cut_ends(lens, upright=False)
    depths = framed_depths(lens, prism, centre_mm, upright=False)
    lower = top - max(back for _, back in depths)
    middle = lens.rim.centre[0]
    across = stations(left - middle, right - middle)
    fronts = [(x, lower + front) for x, (front, _) in zip(across, depths, strict=True)]
    backs = [(x, lower + back) for x, (_, back) in zip(across, depths, strict=True)]
    return _line(fronts), _line(backs)


def _marks(
    edge: Edge, around: Sequence[Place], outer: Sequence[Place], texts: Sequence[str]
) -> Iterator[Shape]:
    for role, found, text in zip(
        ("thickest", "thinnest"), (edge.thickest, edge.thinnest), texts, strict=True
    ):
        index = edge.profile.index(found)
        x, y = outer[index]
        yield {"role": role, "kind": "point", "x": tidy(x), "y": tidy(y)}
        # The text stands inside the rim, where there is room.
        x, y = (tidy(LABEL_AT * part) for part in around[index])
        yield {"role": role, "kind": "label", "x": x, "y": y, "text": text}


def _line(places: Sequence[tuple[float, float]]) -> Line:
    return [[tidy(x), tidy(y)] for x, y in places]
