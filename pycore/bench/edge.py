"""How thick is each lens round its rim, what decides its thickness, and what does it weigh?

Exact surfaces and wedge (`optics.thickness`) at the places of `bench.rim`. Where the centre
thickness is not given it is the least that keeps every minimum: at the reference point, at the
thinnest place inside, all round the rim and at drilled holes.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from decimal import Decimal
from functools import lru_cache
from operator import mul

from pycore.bench.body import BodyValues, body_values, usual_minimum_centre_mm
from pycore.bench.expected import Due
from pycore.bench.rim import MOST_RIM_POINTS, Placed, Rim, placed, rim_of
from pycore.job.document import Job
from pycore.job.order import EyeOrder
from pycore.optics.material import usual_material
from pycore.optics.prism import NO_PRISM, Prism
from pycore.optics.surface import OutsideSurfaceError, true_front_d
from pycore.optics.thickness import Solid, Spot, Spots, meridians, spots_of, thicknesses_at

COARSE = 24  # points of the rim, where only comparisons are made
THICKEST_MM = 60.0  # no blank is thicker
KEPT_MM = 1e-4  # how well a minimum is met
OTHER_INDICES = tuple(map(Decimal, ("1.60", "1.67", "1.74")))


@dataclass(frozen=True, slots=True, kw_only=True)
class FramedLens:
    """One lens in its rim, but for its prism. Thicknesses in mm, density in g/cm³.

    `centre_mm` is the thickness ordered at the reference point, or None; `minimum_hole_mm` holds
    at drilled places only.
    """

    rim: Rim
    solid: Solid
    centre_mm: float | None
    minimum_centre_mm: float
    minimum_edge_mm: float
    minimum_hole_mm: float
    density_g_cm3: float | None

    def with_prism(self, prism: Prism) -> Solid:
        """The lens's surfaces with a prism in prism dioptres."""
        return replace(self.solid, prism_x=float(prism.x), prism_y=float(prism.y))


@dataclass(frozen=True, slots=True, kw_only=True)
class Edge:
    """A lens's thickness round its rim.

    `centre_mm` at the prism reference point; `governs`: what that thickness is due to (given,
    centre, inside, edge or hole); `profile` (angle in degrees at the boxing centre, mm)
    with its `thinnest` and `thickest` place;
    `least_mm` the thinnest place of all that were looked at; `weight_g` None without a density
    (and both volume and weight left out where they were not wanted).
    """

    centre_mm: float
    governs: str
    profile: tuple[tuple[float, float], ...]
    thinnest: tuple[float, float]
    thickest: tuple[float, float]
    least_mm: float
    volume_mm3: float
    weight_g: float | None

    def at(self, angle_deg: float) -> float:
        """Thickness in mm at the point of the rim nearest to an angle in degrees, 0 to 350."""
        known = dict(self.profile)
        if angle_deg in known:
            return known[angle_deg]
        return known[min(known, key=lambda place_deg: abs(place_deg - angle_deg))]


@dataclass(frozen=True, slots=True, kw_only=True)
class Framing:
    """A framed lens with where its values come from."""

    lens: FramedLens
    values: BodyValues
    placed: Placed


def framing_of(job: Job, order: EyeOrder, due_: Due) -> Framing | None:
    """One lens in its rim, or None without a power or without A and B (or radii).

    Arguments: `job`; `order` and `due_` of the eye. Returns the Framing.
    """
    values = body_values(order, job.frame)
    if values is None or due_.power is None:
        return None
    spot = placed(job, order)
    rim = rim_of(job.frame, order.eye, spot.in_mm, spot.up_mm) if spot else None
    if spot is None or rim is None:
        return None
    progressive = order.lens.design == "progressive"
    lens = FramedLens(
        rim=rim,
        solid=Solid(
            index=float(values.index),
            front_d=values.front_d,
            power=due_.power,
            add=float(due_.add or 0) if progressive else 0.0,
        ),
        centre_mm=float(values.thickness_mm) if values.thickness_given else None,
        minimum_centre_mm=float(values.minimum_centre_mm),
        minimum_edge_mm=float(values.minimum_edge_mm),
        minimum_hole_mm=float(values.minimum_hole_mm),
        density_g_cm3=None if values.density_g_cm3 is None else float(values.density_g_cm3),
    )
    return Framing(lens=lens, values=values, placed=spot)


@lru_cache(maxsize=256)
def edge_of(
    lens: FramedLens, prism: Prism, most: int = MOST_RIM_POINTS, *, weigh: bool = True
) -> Edge:
    """A lens's thickness with a prism at its reference point.

    Arguments: `lens`; `prism` prism dioptres; about how many points of the rim are looked at, at
    `most`, besides those next to the extremes; `weigh` whether the volume is wanted too. Returns
    the Edge, in mm and g. Raises OutsideSurfaceError where the lens's surfaces do not reach its
    rim. (A pure function, kept because the sections ask for the same.) Source: exact sagitta and
    wedge, facts 4.8; weight is density times the sum of thickness over the area.
    """
    solid = lens.with_prism(prism)
    start_mm = lens.minimum_centre_mm if lens.centre_mm is None else lens.centre_mm
    rim = _spots(lens.rim, lens.solid)
    indices = list(range(0, len(rim.points), max(1, len(rim.points) // most)))
    spots = [rim.points[index] for index in indices]
    found = thicknesses_at(solid, start_mm, spots)
    beside = _beside(indices, found, len(rim.points)) if len(spots) < len(rim.points) else []
    indices += beside
    inside = _thinnest_inside(lens, prism)
    others = [*(rim.points[index] for index in beside), *rim.holes, *inside]
    spots += others
    found += thicknesses_at(solid, start_mm, others)
    demands = [lens.minimum_edge_mm] * len(indices)
    demands += [lens.minimum_hole_mm] * len(rim.holes)
    demands += [lens.minimum_centre_mm] * len(inside)
    if lens.centre_mm is None:
        centre_mm, governing, found = _thickness(solid, start_mm, found, spots, demands)
    else:
        centre_mm, governing = lens.centre_mm, -1
    around = dict(sorted(zip(indices, found, strict=False)))
    step = 360.0 / len(lens.rim.points)
    volume = 0.0
    if weigh:
        inner = thicknesses_at(solid, centre_mm, rim.nodes)
        volume = sum(map(mul, lens.rim.node_areas_mm2, inner))
    density = lens.density_g_cm3 if weigh else None
    thin, thick = (end(around, key=around.__getitem__) for end in (min, max))
    return Edge(
        centre_mm=centre_mm,
        governs=_name(governing, len(indices), len(lens.rim.holes)),
        profile=tuple((index * step, mm) for index, mm in around.items()),
        thinnest=(thin * step, around[thin]),
        thickest=(thick * step, around[thick]),
        least_mm=min(centre_mm, *found),
        volume_mm3=volume,
        weight_g=None if density is None else volume * density / 1000.0,
    )


@dataclass(frozen=True, slots=True)
class _RimSpots:
    """A rim's points, holes and nodes, each with the depth of the lens's front there."""

    points: Spots
    holes: Spots
    nodes: Spots


@lru_cache(maxsize=16)
def _spots(rim: Rim, solid: Solid) -> _RimSpots:
    """Kept, since every prism that is tried leaves the front as it is. Raises OutsideSurfaceError."""
    return _RimSpots(*(spots_of(solid, places) for places in (rim.points, rim.holes, rim.nodes)))


def _beside(indices: Sequence[int], found: Sequence[float], count: int) -> list[int]:
    """The points of the rim left out beside the thinnest and the thickest one looked at."""
    ends = (indices[found.index(end(found))] for end in (min, max))
    beside = {(index + step) % count for index in ends for step in (-1, 1)}
    return sorted(beside.difference(indices))


def _thinnest_inside(lens: FramedLens, prism: Prism) -> Spots:
    """Where a minus lens with prism is thinnest, if that lies inside its rim: at the optical
    centre. A plus lens is thickest there; between both the thinnest place is on the rim."""
    along_d, across_d, axis_x, axis_y = meridians(lens.solid.power)
    if prism == NO_PRISM or max(along_d, across_d) >= 0.0:
        return ()
    x_mm, y_mm = 10.0 * float(prism.x), 10.0 * float(prism.y)
    # F⁻¹ p, meridian by meridian.
    along = (x_mm * axis_x + y_mm * axis_y) / along_d
    across = (y_mm * axis_x - x_mm * axis_y) / across_d
    place = along * axis_x - across * axis_y, along * axis_y + across * axis_x
    return spots_of(lens.solid, [place]) if lens.rim.holds(place) else ()


def _thickness(
    solid: Solid,
    centre_mm: float,
    found: list[float],
    spots: Spots,
    demands: Sequence[float],
) -> tuple[float, int | None, list[float]]:
    """The least centre thickness that meets all demands, which of them governs it (None: that of
    the centre), and the thickness at every place. `found`: the thickness there to begin with."""
    governing = None
    while True:
        lacking = [demand - mm for demand, mm in zip(demands, found, strict=True)]
        worst = max(range(len(spots)), key=lacking.__getitem__)
        if abs(lacking[worst]) <= KEPT_MM or (governing is None and lacking[worst] < 0):
            return centre_mm, governing, found
        governing = worst
        centre_mm = _settled(solid, centre_mm, spots[worst], demands[worst], lacking[worst])
        found = thicknesses_at(solid, centre_mm, spots)


def _settled(
    solid: Solid, centre_mm: float, spot: Spot, demand_mm: float, short_mm: float
) -> float:
    """The centre thickness at which one place, `short_mm` short as it is, has just its minimum.

    The back's curve follows the thickness a little, so one step does not do: secant method.
    """
    step = short_mm
    while abs(short_mm) > KEPT_MM / 2:
        centre_mm += step
        if not 0 < centre_mm < THICKEST_MM:
            raise OutsideSurfaceError
        before, short_mm = short_mm, demand_mm - thicknesses_at(solid, centre_mm, (spot,))[0]
        step *= short_mm / (before - short_mm)
    return centre_mm


def _name(governing: int | None, rim: int, holes: int) -> str:
    if governing is None:
        return "centre"
    if governing < 0:
        return "given"
    return "edge" if governing < rim else "hole" if governing < rim + holes else "inside"


def in_other_index(framing: Framing) -> tuple[Decimal, FramedLens] | None:
    """The same lens in the next higher of the usual indices, or None where there is none.

    Arguments: `framing`. Returns the index and the lens; its front curve as marked, its density
    and minimum centre the usual ones. Source: materials from memory (facts section 6).
    """
    values, lens = framing.values, framing.lens
    index = next((n for n in OTHER_INDICES if n >= values.index + Decimal("0.03")), None)
    material = None if index is None else usual_material(index)
    if index is None or material is None:
        return None
    front_d = true_front_d(float(values.front_curve), float(values.curve_index), float(index))
    minimum = lens.minimum_centre_mm
    if "lens.minimum_centre_mm" in values.usual:
        minimum = float(usual_minimum_centre_mm(index))
    return index, replace(
        lens,
        solid=replace(lens.solid, index=float(index), front_d=front_d),
        minimum_centre_mm=minimum,
        centre_mm=None,
        density_g_cm3=float(material.density_g_cm3),
    )
