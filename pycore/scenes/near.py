"""One lens with its distance and reading points, its segment and the slab line, in mm."""

from collections.abc import Iterator

from pycore.bench.near import SlabLine
from pycore.bench.reading import LensAtReading
from pycore.decimals import snap
from pycore.job.body import Frame
from pycore.optics.prism import Prism
from pycore.scenes.dial import Scene, Shape

MM_PER_DIOPTRE = 2.0  # length of an arrow for each prism dioptre
BARE_HALF_MM = 18.0  # what is shown where no box is known


def near_scene(lens: LensAtReading, frame: Frame, line: SlabLine | None) -> Scene:
    """The picture of one lens, origin at the prism reference point, seen from the front.

    Arguments: `lens` at its reading point; `frame`; `line` of the slab on this lens, or None.
    Returns the scene: x to the observer's right, y up, in mm.
    """
    x, y = float(lens.point.right_mm), float(lens.point.up_mm)
    box = _box(lens, frame)
    left, bottom, right, top = box or (-BARE_HALF_MM, y - 8.0, BARE_HALF_MM, 8.0)
    shapes: list[Shape] = []
    if box:
        shapes.append(_shape("box", "rect", left, bottom, x2=right, y2=top))
    shapes += _segment(lens, left, right)
    if line and line.up_mm is not None:
        up = float(line.up_mm)
        shapes.append(_shape("slab-line", "line", left, up, x2=right, y2=up))
    for role, at_x, at_y, prism in (
        ("prp", 0.0, 0.0, lens.distance),
        ("reading-point", x, y, lens.prism),
    ):
        shapes += [_shape(role, "point", at_x, at_y), *_arrow(at_x, at_y, prism)]
    tips = [
        (shape.get("x2", shape["x"]), shape.get("y2", shape["y"]), shape.get("radius", 0.0))
        for shape in shapes
    ]
    extent = [
        min(left, *(tip[0] - tip[2] for tip in tips)) - 2.0,
        min(bottom, *(tip[1] - tip[2] for tip in tips)) - 2.0,
        max(right, *(tip[0] + tip[2] for tip in tips)) + 2.0,
        max(top, *(tip[1] + tip[2] for tip in tips)) + 2.0,
    ]
    return {"unit": "mm", "extent": extent, "shapes": shapes}


def _shape(role: str, kind: str, x: float, y: float, **more: float) -> Shape:
    return {"role": role, "kind": kind, "x": x, "y": y, **more}


def _arrow(x: float, y: float, prism: Prism) -> Iterator[Shape]:
    """The prism as an arrow to its base; none for no prism."""
    if snap(prism.amount):
        x2 = x + MM_PER_DIOPTRE * float(snap(prism.x))
        y2 = y + MM_PER_DIOPTRE * float(snap(prism.y))
        yield _shape("arrow", "arrow", x, y, x2=x2, y2=y2)


def _segment(lens: LensAtReading, left: float, right: float) -> Iterator[Shape]:
    place = lens.segment
    if place is None or place.top_up_mm is None:
        return
    top, width_mm, centre_mm = float(place.top_up_mm), place.width_mm, place.centre_right_mm
    centre = lens.point.right_mm if centre_mm is None else centre_mm
    if place.is_round and width_mm is not None:
        half = float(width_mm) / 2
        yield _shape("segment", "circle", float(centre), top - half, radius=half)
        return
    if width_mm is not None:
        half = float(width_mm) / 2
        left, right = float(centre) - half, float(centre) + half
    yield _shape("segment", "line", left, top, x2=right, y2=top)


def _box(lens: LensAtReading, frame: Frame) -> tuple[float, float, float, float] | None:
    """The lens's box (ISO 8624) as left, bottom, right, top in mm from the reference point."""
    order = lens.order
    sizes = (frame.a_mm, frame.b_mm, frame.dbl_mm, order.pd_mm, order.prp_height_mm)
    if any(size is None for size in sizes):
        return None
    a_mm, b_mm, dbl_mm, pd_mm, height_mm = (float(size) for size in sizes if size is not None)
    nasal, temporal = pd_mm - dbl_mm / 2, pd_mm - dbl_mm / 2 - a_mm
    across = (temporal, nasal) if order.eye == "right" else (-nasal, -temporal)
    return across[0], -height_mm, across[1], b_mm - height_mm
