"""Both lenses' edges for every way to share the prism, side by side to one scale.

In mm. Each way is a pair seen from the front, the right lens on the left; the band round a rim is
as wide as the edge is thick there. The thickest edge is marked and stands written in the rim.
"""

import math
from collections.abc import Iterator, Mapping, Sequence

from pycore.bench.edge import Edge, FramedLens
from pycore.bench.split import Share
from pycore.decimals import fixed, from_float
from pycore.optics.prism import EYES, Eye
from pycore.scenes.body import laid_outwards, tidy
from pycore.scenes.dial import Scene, Shape
from pycore.words import say

COLUMNS = 2
ROOM_MM = 3.0
TITLE_MM = 10.0
Place = tuple[float, float]


def split_scene(lenses: Mapping[Eye, FramedLens], shares: Sequence[Share]) -> Scene:
    """The picture of all ways. Arguments: `lenses` in their rims; `shares`. Returns it, in mm."""
    rims = {eye: _rim(lens) for eye, lens in lenses.items()}
    edges = [edge for share in shares for edge in share.edges.values()]
    band_mm = max(edge.thickest[1] for edge in edges) + ROOM_MM
    half_a = max(abs(x) for rim in rims.values() for x, _ in rim) + band_mm
    half_b = max(abs(y) for rim in rims.values() for _, y in rim) + band_mm
    wide, tall = 4.0 * half_a, 2.0 * half_b + TITLE_MM
    shapes: list[Shape] = []
    for number, share in enumerate(shares):
        x, y = number % COLUMNS * wide, -(number // COLUMNS) * tall
        for eye in EYES:
            middle = (x - half_a if eye == "right" else x + half_a, y)
            shapes += _lens(lenses[eye], rims[eye], share.edges[eye], middle)
        shapes.append(
            {
                "role": "way",
                "kind": "label",
                "x": x,
                "y": tidy(y + half_b + TITLE_MM / 3.0),
                "text": say(f"section_rows.split.{share.kind}"),
            }
        )
    rows = math.ceil(len(shares) / COLUMNS)
    columns = min(len(shares), COLUMNS)
    return {
        "unit": "mm",
        "extent": [
            -wide / 2.0,
            tidy(half_b + TITLE_MM - rows * tall),
            tidy((columns - 0.5) * wide),
            tidy(half_b + TITLE_MM),
        ],
        "shapes": shapes,
    }


def _rim(lens: FramedLens) -> list[Place]:
    """The rim's points from its boxing centre."""
    return [(x - lens.rim.centre[0], y - lens.rim.centre[1]) for x, y in lens.rim.points]


def _lens(lens: FramedLens, rim: Sequence[Place], edge: Edge, middle: Place) -> Iterator[Shape]:
    x, y = middle
    all_round = [
        laid_outwards(spot, mm) for spot, mm in zip(rim, _all_round(lens, edge), strict=True)
    ]
    outer = [[tidy(x + right), tidy(y + up)] for right, up in all_round]
    inner = [[tidy(x + right), tidy(y + up)] for right, up in rim]
    yield {"role": "profile-back", "kind": "polygon", "points": outer}
    yield {"role": "outline", "kind": "polygon", "points": inner}
    mark_x, mark_y = outer[lens.rim.index_at(edge.thickest[0])]
    yield {"role": "thickest", "kind": "point", "x": mark_x, "y": mark_y}
    text = say("text.millimetres", number=fixed(from_float(edge.thickest[1]), 1))
    yield {"role": "thickest", "kind": "label", "x": tidy(x), "y": tidy(y), "text": text}


def _all_round(lens: FramedLens, edge: Edge) -> list[float]:
    """The edge's thickness at every point of the rim, evenly between those looked at, in mm."""
    count = len(lens.rim.points)
    known = [(lens.rim.index_at(turn), mm) for turn, mm in edge.profile]
    first, first_mm = known[0]
    found: list[float] = []
    for (index, mm), (later, later_mm) in zip(
        known, [*known[1:], (first + count, first_mm)], strict=True
    ):
        steps = later - index
        found += [mm + (later_mm - mm) * step / steps for step in range(steps)]
    return found
