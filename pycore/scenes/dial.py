"""The dial of one lens: the instrument's rings with what is due, what passes and what is read.

Coordinates are the instrument's view in prism dioptres, x to the observer's right, y up: a
compensator that is set shifts everything seen.
"""

import math
from collections.abc import Iterator
from dataclasses import dataclass
from decimal import Decimal
from functools import cache
from typing import Any

from pycore.angles import cosine, sine
from pycore.bench.expected import Due
from pycore.bench.region import Region
from pycore.decimals import snap
from pycore.job.bench import Instrument
from pycore.optics.prism import NO_PRISM, Eye, Prism, horizontal_word

Shape = dict[str, Any]
Scene = dict[str, Any]
TICKS_EVERY_DEG = 15
LABEL_ROOM = 1.22  # of the outermost ring: room for the base scale and its words


@dataclass(frozen=True, slots=True, kw_only=True)
class DialView:
    """What a dial shows; prisms in prism dioptres, `compensator` what it takes away."""

    due: Due
    instrument: Instrument
    read: Prism | None
    sightings: tuple[Prism, ...]
    compensator: Prism
    region: Region | None
    uncertainty: float
    axis_deg: float

    @property
    def eye(self) -> Eye:
        """The eye whose dial it is."""
        return self.due.eye

    def seen(self, prism: Prism) -> Prism:
        """Where a prism of the lens stands in the instrument's view."""
        return prism - self.compensator


def dial_scene(view: DialView) -> Scene:
    """The whole dial. Arguments: `view`. Returns the scene."""
    points = [view.seen(view.due.expected), *map(view.seen, view.sightings)]
    outermost = float(view.instrument.outermost_ring)
    reach = max([outermost, *(float(point.amount) for point in points)]) * LABEL_ROOM
    shapes = [*_rings(view), *_scale(view.eye, outermost), *_content(view)]
    return {"unit": "\u0394", "extent": [-reach, -reach, reach, reach], "shapes": shapes}


def close_scene(view: DialView) -> Scene:
    """A close look around the expected point, with the step grid. Arguments: `view`."""
    centre = view.seen(view.due.expected)
    step = float(max(view.instrument.prism_step, Decimal("0.1")))
    half = max(4 * step, 1.0, _reach_of_region(view, centre) * 1.15)
    if view.read is not None:
        half = max(half, 1.25 * float((view.seen(view.read) - centre).amount))
    half = min(half, 6.0)
    extent = _around(centre, half)
    shapes = [*_grid(extent, step if half / step <= 16 else 1.0), *_content(view)]
    return {"unit": "\u0394", "extent": extent, "step": step, "shapes": shapes}


def _around(centre: Prism, half: float) -> list[float]:
    x, y = _xy(centre)
    return [x - half, y - half, x + half, y + half]


def _reach_of_region(view: DialView, centre: Prism) -> float:
    region = view.region
    if region is None:
        return 0.0
    if region.radius is not None:
        return float(region.radius)
    offset = view.seen(NO_PRISM)
    ends = [
        abs(end + shift - middle)
        for pair in (region.low, region.high)
        for end, shift, middle in zip(pair, (offset.x, offset.y), (centre.x, centre.y), strict=True)
        if end is not None
    ]
    return float(max(ends, default=Decimal(0)))


def _xy(prism: Prism) -> tuple[float, float]:
    return float(snap(prism.x)), float(snap(prism.y))


def _rings(view: DialView) -> Iterator[Shape]:
    step = view.instrument.ring_step
    for number in range(1, int(view.instrument.rings) + 1):
        radius = float(step * number)
        yield {"role": "ring", "kind": "circle", "x": 0.0, "y": 0.0, "radius": radius}
        text = format((step * number).normalize(), "f")
        yield {"role": "ring-label", "kind": "label", "x": radius, "y": 0.0, "text": text}


@cache  # the same at every keystroke
def _scale(eye: Eye, outermost: float) -> tuple[Shape, ...]:
    return tuple(_scale_shapes(eye, outermost))


def _scale_shapes(eye: Eye, outermost: float) -> Iterator[Shape]:
    for degrees in range(0, 360, TICKS_EVERY_DEG):
        x, y = cosine(degrees), sine(degrees)
        length = 1.08 if degrees % 45 == 0 else 1.04
        yield {
            "role": "tick",
            "kind": "line",
            "x": x * outermost,
            "y": y * outermost,
            "x2": x * outermost * length,
            "y2": y * outermost * length,
        }
    for degrees in (0, 90, 180, 270):
        x, y = cosine(degrees) * outermost, sine(degrees) * outermost
        word = horizontal_word(eye, Decimal(int(cosine(degrees))))
        label = {"role": "base-label", "kind": "label", "x": x, "y": y, "text": str(degrees)}
        yield label | {"word": f"directions.{word}"} if word else label


def _grid(extent: list[float], step: float) -> Iterator[Shape]:
    left, bottom, right, top = extent
    for number in range(math.ceil(left / step), math.floor(right / step) + 1):
        x = number * step
        yield {"role": "grid", "kind": "line", "x": x, "y": bottom, "x2": x, "y2": top}
    for number in range(math.ceil(bottom / step), math.floor(top / step) + 1):
        y = number * step
        yield {"role": "grid", "kind": "line", "x": left, "y": y, "x2": right, "y2": y}


def _content(view: DialView) -> Iterator[Shape]:
    """What both the dial and the close look show, from the bottom up."""
    if view.region:
        yield _region(view, view.region)
    origin, ordered = view.seen(NO_PRISM), view.seen(view.due.prescribed)
    expected = view.seen(view.due.expected)
    if view.compensator != NO_PRISM:
        yield _line("compensator", NO_PRISM, origin)
    if ordered != origin:
        yield _line("ordered", origin, ordered)
        yield _point("ordered", ordered)
    if expected != ordered:
        yield _line("thinning", ordered, expected) | {"dashed": True}
    yield _point("expected", expected) | {"dashed": not view.due.vertical_known}
    for sighting in view.sightings[1:]:
        yield _point("repeat", view.seen(sighting))
    if view.read is not None:
        seen = view.seen(view.read)
        radius = 2.0 * view.uncertainty
        yield _point("uncertainty", seen) | {"kind": "circle", "radius": radius, "dashed": True}
        target = {"kind": "crosses", "angle_deg": view.axis_deg, "style": view.instrument.target}
        yield _point("target", seen) | target


def _point(role: str, at: Prism) -> Shape:
    x, y = _xy(at)
    return {"role": role, "kind": "point", "x": x, "y": y}


def _line(role: str, start: Prism, end: Prism) -> Shape:
    (x, y), (x2, y2) = _xy(start), _xy(end)
    return {"role": role, "kind": "line", "x": x, "y": y, "x2": x2, "y2": y2}


def _region(view: DialView, region: Region) -> Shape:
    look = {"role": "region", "dashed": region.provisional, "empty": region.empty}
    x, y = _xy(view.seen(region.centre))
    if region.radius is not None:
        return look | {"kind": "circle", "x": x, "y": y, "radius": float(region.radius)}
    far = float(view.instrument.outermost_ring) * 3
    ends = [
        view.seen(Prism(end_x or Decimal(0), end_y or Decimal(0)))
        for end_x, end_y in (region.low, region.high)
    ]
    names = (("left", "down"), ("right", "up"))
    edges: list[float] = []
    free: list[str] = []
    for pair, end, names_of_end, sign in zip(
        (region.low, region.high), ends, names, (-1, 1), strict=True
    ):
        for value, seen, name, middle in zip(pair, _xy(end), names_of_end, (x, y), strict=True):
            edges.append(middle + sign * far if value is None else seen)
            free += [name] * (value is None)
    return look | {
        "kind": "rect",
        "x": edges[0],
        "y": edges[1],
        "x2": edges[2],
        "y2": edges[3],
        "open": free,
    }
