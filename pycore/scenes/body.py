"""A lens as a body in pictures: cut straight across, and its edge laid outwards round its rim."""

import math
from collections.abc import Sequence

from pycore.bench.edge import FramedLens
from pycore.optics.prism import Prism
from pycore.optics.thickness import Solid, spots_of, thicknesses_at

SLICES = 16
Place = tuple[float, float]
Depths = list[tuple[float, float]]


def depths_along(solid: Solid, centre_mm: float, start: Place, end: Place) -> Depths:
    """How far front and back lie behind the front pole, at equal steps from one place to another.

    Arguments: `solid`, `centre_mm` thick at its reference point; `start`, `end` (right_mm, up_mm)
    from there. Returns pairs in mm, front first. Raises OutsideSurfaceError.

    >>> from pycore.optics.power import Power
    >>> flat = Solid(index=1.5, front_d=0.0, power=Power(sphere=0))
    >>> depths_along(flat, 2.0, (-9.0, 0.0), (9.0, 0.0))[-1]
    (0.0, 2.0)
    """
    parts = [number / SLICES for number in range(SLICES + 1)]
    (x, y), (x2, y2) = start, end
    spots = spots_of(solid, [(x + part * (x2 - x), y + part * (y2 - y)) for part in parts])
    thick = thicknesses_at(solid, centre_mm, spots)
    return [(front, front + mm) for (_, _, front), mm in zip(spots, thick, strict=True)]


def cut_ends(lens: FramedLens, *, upright: bool) -> tuple[Place, Place]:
    """Where a cut through the boxing centre begins and ends: at the rim, on the box's centre line.

    Arguments: `lens`; `upright` for the cut from bottom to top, else from the observer's left to
    right. Returns both places in mm from the prism reference point, on one straight line.
    """
    rim = lens.rim
    first, last = (
        rim.points[rim.index_at(turn)] for turn in ((270.0, 90.0) if upright else (180.0, 0.0))
    )
    x, y = rim.centre
    return ((x, first[1]), (x, last[1])) if upright else ((first[0], y), (last[0], y))


def framed_depths(lens: FramedLens, prism: Prism, centre_mm: float, *, upright: bool) -> Depths:
    """The depths along such a cut. Arguments: as above, `prism` prism dioptres. Returns mm."""
    return depths_along(lens.with_prism(prism), centre_mm, *cut_ends(lens, upright=upright))


def laid_outwards(place: Place, mm: float) -> Place:
    """Where the edge's thickness ends if it is laid outwards from the boxing centre at a place.

    >>> laid_outwards((3.0, 4.0), 5.0)
    (6.0, 8.0)
    """
    reach = 1.0 + mm / math.hypot(*place)
    return place[0] * reach, place[1] * reach


def tidy(value: float) -> float:
    """A length in mm to its micrometre (several times quicker than `round`).

    >>> tidy(1.23456)
    1.235
    """
    return math.floor(value * 1000.0 + 0.5) / 1000.0


def stations(start_mm: float, end_mm: float) -> Sequence[float]:
    """The places along a cut to which its depths belong, in mm. Arguments: both ends.

    >>> stations(-8.0, 8.0)[:3]
    (-8.0, -7.0, -6.0)
    """
    return tuple(start_mm + (end_mm - start_mm) * part / SLICES for part in range(SLICES + 1))
