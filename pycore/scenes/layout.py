"""The frame with every point of both lenses, to scale in mm.

x to the observer's right from the middle of the nose, y up from the boxing centres: the right
lens stands on the left, as the pair faces the observer.
"""

from collections.abc import Iterator, Sequence
from decimal import Decimal

from pycore.bench.decentring import length_mm
from pycore.bench.layout import Box, Spot
from pycore.bench.lens_layout import LensLayout
from pycore.bench.outline import Outline
from pycore.bench.segment import segment_of
from pycore.scenes.dial import Scene, Shape
from pycore.scenes.rim import rim_around
from pycore.scenes.segment import segment_points

MARGIN_MM = 4.0
FARTHEST_MM = 50.0  # an optical centre farther off would make the picture too small to read
CENTRE = Spot(Decimal(0), Decimal(0))


def layout_scene(box: Box, rim: Outline, lenses: Sequence[LensLayout]) -> Scene | None:
    """Draw the layout. Arguments: `box` and `rim` of the frame; `lenses`, right first.

    Returns the scene, in mm, or None where the distance between the lenses is not known.
    """
    if box.frame_pd_mm is None or box.a_mm is None or box.b_mm is None:
        return None
    half_pd = float(box.frame_pd_mm) / 2.0
    half_a, half_b = float(box.a_mm) / 2.0, float(box.b_mm) / 2.0
    shapes: list[Shape] = []
    for lens in lenses:
        middle = -half_pd if lens.eye == "right" else half_pd
        shapes += _lens(lens, rim, middle, half_a, half_b)
    reach = _reach(shapes)
    left, bottom, right, top = (
        min(-half_pd - half_a, reach[0]),
        min(-half_b, reach[1]),
        max(half_pd + half_a, reach[2]),
        max(half_b, reach[3]),
    )
    extent = [left - MARGIN_MM, bottom - MARGIN_MM, right + MARGIN_MM, top + MARGIN_MM]
    return {"unit": "mm", "extent": extent, "shapes": shapes}


def _lens(
    lens: LensLayout, rim: Outline, middle: float, half_a: float, half_b: float
) -> Iterator[Shape]:
    yield {
        "role": "box",
        "kind": "rect",
        "x": middle - half_a,
        "y": -half_b,
        "x2": middle + half_a,
        "y2": half_b,
    }
    yield {
        "role": "centre-line",
        "kind": "line",
        "x": middle - half_a,
        "y": 0.0,
        "x2": middle + half_a,
        "y2": 0.0,
        "dashed": True,
    }
    points = rim_around(rim, lens.eye, Spot(Decimal(-middle), Decimal(0)))
    yield {"role": "outline", "kind": "polygon", "points": points}
    yield from _blank(lens, middle)
    yield from _segment(lens, middle)
    marks = (
        ("boxing-centre", CENTRE),
        ("pupil", lens.place.pupil),
        ("cross", lens.place.cross),
        ("oc", lens.centre_in_box),
        ("prp", lens.place.prp),
    )
    for role, spot in marks:
        if spot and length_mm(spot) <= FARTHEST_MM:
            yield _at(role, "point", spot, middle)
    yield {
        "role": "eye-label",
        "kind": "label",
        "x": middle,
        "y": half_b,
        "word": f"letters.{lens.eye}",
        "text": "",
    }


def _at(role: str, kind: str, spot: Spot, middle: float) -> Shape:
    x, y = middle + float(spot.right_mm), float(spot.up_mm)
    return {"role": role, "kind": kind, "x": round(x, 3), "y": round(y, 3)}


def _blank(lens: LensLayout, middle: float) -> Iterator[Shape]:
    """The smallest blank that holds the rim, around its own centre."""
    blank = lens.made_from
    if blank and blank.for_rim_mm is not None:
        circle = _at("blank", "circle", blank.centre, middle)
        yield circle | {"radius": round(blank.for_rim_mm / 2.0, 3), "dashed": True}


def _segment(lens: LensLayout, middle: float) -> Iterator[Shape]:
    top, place = lens.place.segment_top, segment_of(lens.order)
    if top and place and (points := segment_points(place)):
        x, y = middle + float(top.right_mm), float(top.up_mm)
        moved = [[round(x + right, 3), round(y + up, 3)] for right, up in points]
        yield {"role": "segment", "kind": "polygon", "points": moved}


def _reach(shapes: Sequence[Shape]) -> tuple[float, float, float, float]:
    """How far the blanks and the points reach: a far optical centre is still in the picture."""
    ends = [
        (shape["x"] + sign * shape.get("radius", 0.0), shape["y"] + sign * shape.get("radius", 0.0))
        for shape in shapes
        if shape["kind"] in ("circle", "point")
        for sign in (-1, 1)
    ]
    across, along = [x for x, _ in ends], [y for _, y in ends]
    return min(across), min(along), max(across), max(along)
