"""One lens with its distance and reading points, its segment and the slab line, in mm."""

from collections.abc import Iterator, Sequence

from pycore.bench.layout import place_of
from pycore.bench.near import SlabLine
from pycore.bench.outline import outline_of
from pycore.bench.reading import LensAtReading
from pycore.decimals import snap
from pycore.job.document import Job
from pycore.optics.prism import Prism
from pycore.scenes.dial import Scene, Shape
from pycore.scenes.segment import segment_points

MM_PER_DIOPTRE = 2.0  # length of an arrow for each prism dioptre
LONGEST_MM = 40.0
BARE_HALF_MM = 18.0  # width of what is shown where no rim is known
MARGIN_MM = 3.0


def near_scene(job: Job, lens: LensAtReading, line: SlabLine | None) -> Scene:
    """The picture of one lens, origin at the prism reference point, seen from the front.

    Arguments: `job`; `lens` at its reading point; `line` of the slab on this lens, or None.
    Returns the scene: x to the observer's right, y up, in mm; arrows 2 mm for each prism dioptre.
    """
    rim, dashed = _rim(job, lens)
    shapes: list[Shape] = []
    if rim:
        shapes.append({"role": "outline", "kind": "polygon", "points": rim, "dashed": dashed})
    shapes += _segment(lens)
    reach = [point[0] for point in rim] or [-BARE_HALF_MM, BARE_HALF_MM]
    if line and line.up_mm is not None:
        up = float(line.up_mm)
        ends = {"x": min(reach), "y": up, "x2": max(reach), "y2": up}
        shapes.append({"role": "slab-line", "kind": "line", **ends})
    x, y = float(lens.point.right_mm), float(lens.point.up_mm)
    for role, at, prism in (
        ("prp", (0.0, 0.0), lens.distance),
        ("reading-point", (x, y), lens.prism),
    ):
        shapes.append({"role": role, "kind": "point", "x": at[0], "y": at[1]})
        shapes += _arrow(*at, prism)
    return {"unit": "mm", "extent": _extent(shapes), "shapes": shapes}


def _rim(job: Job, lens: LensAtReading) -> tuple[list[list[float]], bool]:
    """The rim around the reference point, and whether a usual value stands behind it."""
    outline, place = outline_of(job.frame), place_of(job, lens.eye)
    if outline is None or place is None or place.prp is None:
        return [], False
    right, up = float(place.prp.right_mm), float(place.prp.up_mm)
    points = [[round(x - right, 3), round(y - up, 3)] for x, y in outline.points(lens.eye)]
    return points, bool(place.assumed or outline.assumed)


def _arrow(x: float, y: float, prism: Prism) -> Iterator[Shape]:
    """The prism as an arrow to its base; none for no prism, no longer than the picture bears."""
    amount = float(snap(prism.amount))
    if amount:
        scale = min(MM_PER_DIOPTRE, LONGEST_MM / amount)
        x2, y2 = x + scale * float(prism.x), y + scale * float(prism.y)
        ends = {"x": x, "y": y, "x2": round(x2, 3), "y2": round(y2, 3)}
        yield {"role": "arrow", "kind": "arrow", **ends}


def _segment(lens: LensAtReading) -> Iterator[Shape]:
    place = lens.segment
    if place is None or place.top_up_mm is None:
        return
    inset = place.centre_right_mm
    right = float(lens.point.right_mm if inset is None else inset)
    up = float(place.top_up_mm)
    points = [[round(right + x, 3), round(up + y, 3)] for x, y in segment_points(place)]
    if points:
        yield {"role": "segment", "kind": "polygon", "points": points}


def _extent(shapes: Sequence[Shape]) -> list[float]:
    """Everything but the part of a segment that the rim cuts off, with a margin."""
    ends: list[list[float]] = [[-BARE_HALF_MM, 0.0], [BARE_HALF_MM, 0.0]]
    for shape in shapes:
        if shape["role"] == "outline":
            ends += shape["points"]
        elif shape["role"] != "segment":
            ends.append([shape["x"], shape["y"]])
            ends += [[shape["x2"], shape["y2"]]] if "x2" in shape else []
    across, along = [end[0] for end in ends], [end[1] for end in ends]
    low = [min(across) - MARGIN_MM, min(along) - MARGIN_MM]
    return [*low, max(across) + MARGIN_MM, max(along) + MARGIN_MM]
