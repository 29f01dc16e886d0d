"""How thick a lens is at many points at once, exactly: the work under edge, thinning and split.

The lens: a spherical front with its pole at the prism reference point, a spherical or toric back
whose tangent plane behind that point is turned towards the base by the exact wedge. Thickness is
measured along the front surface's normal at the reference point, as the edger cuts.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

from pycore.angles import cosine, sine
from pycore.optics.power import Power
from pycore.optics.surface import OutsideSurfaceError, sphere, through_front_d
from pycore.optics.wedge import wedge_tangent

CORRIDOR_MM = 12.0  # over which an addition comes in below the reference point; from memory
SETTLED_MM = 1e-6  # a nanometre

Points = Sequence[tuple[float, float]]
Spot = tuple[float, float, float]
Spots = Sequence[Spot]


@dataclass(frozen=True, slots=True, kw_only=True)
class Solid:
    """A lens but for its thickness: powers in dioptres (`front_d` true for `index`, `power` at
    the back vertex), prism in prism dioptres (x right, y up, towards the base).

    `add` is the addition of a progressive surface, which makes the lens thinner below.
    """

    index: float
    front_d: float
    power: Power
    prism_x: float = 0.0
    prism_y: float = 0.0
    add: float = 0.0


def addition_depth(add: float, index: float, below_mm: float) -> float:
    """How much depth a progressive surface has gained straight below its reference point.

    Arguments: `add` dioptres; `index`; `below_mm`. Returns mm. The power is taken to grow evenly
    over the corridor and to stay: the second integral of power over depth. A makers' surface is
    softer at the sides and his own: an estimate. Source: F = (n - 1) times curvature; the
    corridor's length from memory.

    >>> round(addition_depth(2.0, 1.5, 22.0), 3), addition_depth(2.0, 1.5, -5.0)
    (0.536, 0.0)
    """
    if below_mm <= 0.0:
        return 0.0
    curvature = add / (1000.0 * (index - 1.0))
    if below_mm <= CORRIDOR_MM:
        return curvature * below_mm**3 / (6.0 * CORRIDOR_MM)
    beyond = below_mm - CORRIDOR_MM
    return curvature * (CORRIDOR_MM * CORRIDOR_MM / 6.0 + beyond * below_mm / 2.0)


def spots_of(solid: Solid, points: Points) -> list[Spot]:
    """The points with the depth of the front surface there: what no prism and no thickness changes.

    Arguments: `solid`; `points` (right_mm, up_mm) from the reference point. Returns each point
    with mm, the addition's gain in it. Raises OutsideSurfaceError. Source: Pythagoras, as
    `optics.surface.circle_depth`; `addition_depth`.

    >>> spots_of(Solid(index=1.5, front_d=10.0, power=Power(sphere=0)), [(30.0, 0.0)])
    [(30.0, 0.0, 10.0)]
    """
    front, add, index = sphere(solid.front_d, solid.index).steep_per_mm, solid.add, solid.index
    found = []
    try:
        for x, y in points:
            bent = front * (x * x + y * y)
            depth = bent / (1.0 + math.sqrt(1.0 - front * bent))
            if y < 0.0 and add:
                depth += addition_depth(add, index, -y)
            found.append((x, y, depth))
    except ValueError as beyond:  # the root of a negative number
        raise OutsideSurfaceError from beyond
    return found


def thicknesses(solid: Solid, centre_mm: float, points: Points) -> list[float]:
    """Thickness in mm at each point, for a lens `centre_mm` thick at its reference point.

    Arguments: `solid`; `centre_mm`; `points` (right_mm, up_mm) from the reference point.
    Returns mm, in order; negative where the surfaces have crossed. Raises OutsideSurfaceError
    where a surface does not reach a point. Source: exact circles (Pythagoras), the torus of
    `optics.surface`, the wedge of `optics.wedge`; facts 4.8.

    >>> flat = Solid(index=1.5, front_d=0.0, power=Power(sphere=0), prism_x=10.0)
    >>> [round(mm, 3) for mm in thicknesses(flat, 2.0, [(0.0, 0.0), (25.0, 3.0), (-25.0, 0.0)])]
    [2.0, 6.926, -2.926]
    """
    return thicknesses_at(solid, centre_mm, spots_of(solid, points))


def thicknesses_at(solid: Solid, centre_mm: float, spots: Spots) -> list[float]:
    """As `thicknesses`, where the front's depth is known already. Arguments: `spots` of `spots_of`
    for a solid with the same front, index and addition. Returns mm.

    >>> flat = Solid(index=1.5, front_d=0.0, power=Power(sphere=0), prism_x=10.0)
    >>> round(thicknesses_at(flat, 2.0, [(25.0, 0.0, 0.0)])[0], 3)
    6.926
    """
    try:
        return _thicknesses(solid, centre_mm, spots)
    except ValueError as beyond:  # the root of a negative number
        raise OutsideSurfaceError from beyond


def _thicknesses(solid: Solid, centre_mm: float, spots: Spots) -> list[float]:
    """Written out flat: a pair's sections ask for thousands of points at each keystroke.

    The back is met at depth z behind its own pole where, in the axes u, v, w of its tilted
    tangent plane, w = f(u, v). u, v, w are linear in x, y and z; Newton's method finds z, from
    the parabola, in one or two steps.
    """
    root = math.sqrt
    # As `optics.surface.back_surface`, with the axis looked up.
    to_curvature = 1.0 / (1000.0 * (solid.index - 1.0))
    at_back_d = through_front_d(solid.front_d, centre_mm, solid.index)
    along_d, across_d, axis_x, axis_y = meridians(solid.power)
    steep, along_x, along_y = (at_back_d - across_d) * to_curvature, -axis_y, axis_x
    flat = (at_back_d - along_d) * to_curvature
    if abs(flat) > abs(steep):
        steep, flat, along_x, along_y = flat, steep, axis_x, axis_y
    amount = math.hypot(solid.prism_x, solid.prism_y)
    base_x, base_y = (solid.prism_x / amount, solid.prism_y / amount) if amount else (1.0, 0.0)
    tangent = wedge_tangent(amount, solid.index)
    cos_tilt = 1.0 / math.hypot(1.0, tangent)
    sin_tilt = tangent * cos_tilt
    # The back's steep meridian from the base's direction.
    cos_turn = along_x * base_x + along_y * base_y
    sin_turn = along_y * base_x - along_x * base_y
    u_x = cos_tilt * cos_turn * base_x - sin_turn * base_y
    u_y = cos_tilt * cos_turn * base_y + sin_turn * base_x
    v_x = -cos_tilt * sin_turn * base_x - cos_turn * base_y
    v_y = -cos_tilt * sin_turn * base_y + cos_turn * base_x
    u_z, v_z = sin_tilt * cos_turn, -sin_tilt * sin_turn
    w_x, w_y, w_z = -sin_tilt * base_x, -sin_tilt * base_y, cos_tilt
    # The error of a Newton step is about this times the step's square.
    bend = max(abs(steep), abs(flat)) * sin_tilt * sin_tilt
    found = []
    for x, y, front in spots:
        u0, v0, w0 = u_x * x + u_y * y, v_x * x + v_y * y, w_x * x + w_y * y
        z = (0.5 * (steep * u0 * u0 + flat * v0 * v0) - w0) / w_z
        while True:
            u, v = u0 + u_z * z, v0 + v_z * z
            steep_u = steep * u
            root_u = root(1.0 - steep_u * steep_u)
            arc = steep_u * u / (1.0 + root_u)
            left, flat_v = 1.0 - flat * arc, flat * v
            root_v = root(left * left - flat_v * flat_v)
            depth = arc + flat_v * v / (left + root_v)
            slope = (steep_u / root_u * left * u_z + flat_v * v_z) / root_v
            step = (depth - w0 - w_z * z) / (w_z - slope)
            z += step
            if bend * step * step < SETTLED_MM:
                break
        found.append(centre_mm + z - front)
    return found


@lru_cache(maxsize=16)
def meridians(power: Power) -> tuple[float, float, float, float]:
    """Both principal powers (along the axis, across it), dioptres, and the axis as cosine and sine.

    >>> meridians(Power(sphere=-2, cylinder=1, axis=90))
    (-2.0, -1.0, 0.0, 1.0)
    """
    along, across = power.principal
    axis_deg = float(power.axis)
    return float(along), float(across), cosine(axis_deg), sine(axis_deg)
