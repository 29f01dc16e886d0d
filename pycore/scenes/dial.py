"""The dial of one lens: the instrument's rings with what is due, what passes and what is read.

Coordinates are the instrument's view in prism dioptres, x to the observer's right, y up: a
compensator that is set shifts everything seen, and so does a zero that is off. Where the target
moves away from the base, or left and right are changed over, the picture does too; the base
scale then names the base, not the side.
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
Ends = tuple[Decimal | None, Decimal | None]
TICKS_EVERY_DEG = 15
LABEL_ROOM = 1.22  # of the outermost ring: room for the base scale and its words


@dataclass(frozen=True, slots=True, kw_only=True)
class DialView:
    """What a dial shows; prisms in prism dioptres, `compensator` what it takes away.

    `read` is the mean of all `sightings`, `current` the one being taken now (None where it has
    been put aside, or where there is but one).
    """

    due: Due
    instrument: Instrument
    read: Prism | None
    sightings: tuple[Prism, ...]
    compensator: Prism
    region: Region | None
    uncertainty: float
    axis_deg: float
    current: Prism | None = None

    @property
    def eye(self) -> Eye:
        """The eye whose dial it is."""
        return self.due.eye

    def seen(self, prism: Prism) -> Prism:
        """Where a prism of the lens stands in the instrument's view."""
        return self.instrument.place_of(prism - self.compensator)

    @property
    def target_deg(self) -> float:
        """The axis as the target shows it: changed over with left and right, else as it is."""
        across, along = self.instrument.signs
        return self.axis_deg if across == along else 180.0 - self.axis_deg

    @property
    def edges(self) -> tuple[Ends, Ends]:
        """The region's ends in the instrument's view: left and down, then right and up."""
        region = self.region or Region(centre=NO_PRISM)
        offset, signs = self.seen(NO_PRISM), self.instrument.signs
        spans = []
        for low, high, shift, sign in zip(
            region.low, region.high, (offset.x, offset.y), signs, strict=True
        ):
            ends = [None if end is None else end * sign + shift for end in (low, high)]
            spans.append(ends if sign > 0 else ends[::-1])
        (left, right), (down, up) = spans
        return (left, down), (right, up)


def dial_scene(view: DialView) -> Scene:
    """The whole dial. Arguments: `view`. Returns the scene."""
    points = [view.seen(view.due.expected), *map(view.seen, view.sightings)]
    outermost = float(view.instrument.outermost_ring)
    reach = max([outermost, *(float(point.amount) for point in points)]) * LABEL_ROOM
    shapes = [
        *rings(view.instrument),
        *scale(view.eye, outermost, view.instrument.signs),
        *_content(view),
    ]
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
    ends = [
        abs(end - middle)
        for pair in view.edges
        for end, middle in zip(pair, (centre.x, centre.y), strict=True)
        if end is not None
    ]
    return float(max(ends, default=Decimal(0)))


def _xy(prism: Prism) -> tuple[float, float]:
    return float(snap(prism.x)), float(snap(prism.y))


def rings(instrument: Instrument) -> Iterator[Shape]:
    """The rings of an instrument with their amounts. Arguments: `instrument`."""
    step = instrument.ring_step
    for number in range(1, int(instrument.rings) + 1):
        radius = float(step * number)
        yield {"role": "ring", "kind": "circle", "x": 0.0, "y": 0.0, "radius": radius}
        text = format((step * number).normalize(), "f")
        yield {"role": "ring-label", "kind": "label", "x": radius, "y": 0.0, "text": text}


@cache  # the same at every keystroke
def scale(eye: Eye | None, outermost: float, signs: tuple[int, int]) -> tuple[Shape, ...]:
    """The base scale around the rings.

    Arguments: `eye` whose in and out it names, or None; `outermost` ring in prism dioptres;
    `signs` whether the target goes with the base, across and upwards.
    """
    return tuple(_scale_shapes(eye, outermost, signs))


def _scale_shapes(eye: Eye | None, outermost: float, signs: tuple[int, int]) -> Iterator[Shape]:
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
        across, along = cosine(degrees) * signs[0] + 0.0, sine(degrees) * signs[1] + 0.0
        x, y = across * outermost, along * outermost
        word = horizontal_word(eye, Decimal(int(cosine(degrees)))) if eye else None
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
        yield _line("compensator", view.instrument.place_of(NO_PRISM), origin)
    if ordered != origin:
        yield _line("ordered", origin, ordered)
        yield shape_at("ordered", ordered)
    if expected != ordered:
        yield _line("thinning", ordered, expected) | {"dashed": True}
    yield shape_at("expected", expected) | {"dashed": not view.due.vertical_known}
    yield from _readings(view)


def _readings(view: DialView) -> Iterator[Shape]:
    """The target where it is seen now; of several readings also each one and their mean."""
    if view.read is None:
        return
    several = len(view.sightings) > 1
    mean = view.seen(view.read)
    radius = 2.0 * view.uncertainty
    yield shape_at("uncertainty", mean) | {"kind": "circle", "radius": radius, "dashed": True}
    if several:
        for sighting in view.sightings[view.current is not None :]:
            yield shape_at("repeat", view.seen(sighting))
        yield shape_at("mean", mean)
    now = view.current if several else view.read
    if now is not None:
        target = {"kind": "crosses", "angle_deg": view.target_deg, "style": view.instrument.target}
        yield shape_at("target", view.seen(now)) | target


def shape_at(role: str, at: Prism) -> Shape:
    """A point of a role. Arguments: `role`; `at` in prism dioptres."""
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
    names = (("left", "down"), ("right", "up"))
    edges: list[float] = []
    free: list[str] = []
    for ends, sides, sign in zip(view.edges, names, (-1, 1), strict=True):
        for end, side, middle in zip(ends, sides, (x, y), strict=True):
            edges.append(middle + sign * far if end is None else float(snap(end)))
            free += [side] * (end is None)
    return look | {
        "kind": "rect",
        "x": edges[0],
        "y": edges[1],
        "x2": edges[2],
        "y2": edges[3],
        "open": free,
    }
