"""The prism of a tilted lens: one exact ray through the lens with its prism, and the way back.

Never a plano lens's tilt prism added to the order: 5 Δ in and 5 Δ out are not changed alike.
Which ray is held straight: light from straight ahead that meets the front pole, where the prism
reference point is marked. The tilt is that of the front's normal there. Untilted, the lens gives
that ray exactly its own prism (the back is turned by the exact wedge straight behind the pole),
so no tilt changes nothing.
"""

import math
from dataclasses import dataclass

from pycore.optics.power import Power
from pycore.optics.surface import OutsideSurfaceError, Surface, back_surface
from pycore.optics.tilt import BeyondError, Tilt, Vector, thin_prism_as_worn
from pycore.optics.trace import TotalReflectionError, Turned, dot, refract, unit
from pycore.optics.wedge import wedge_tangent

MOST_STEPS = 40
SETTLED_MM = 1e-12
SETTLED_PRISM = 1e-10  # prism dioptres


@dataclass(frozen=True, slots=True, kw_only=True)
class Glass:
    """What a lens is made of and behind: `front_d` dioptres, true for `index`; thickness in mm."""

    index: float
    front_d: float
    thickness_mm: float

    def back(self, power: Power) -> Surface:
        """The back surface of a lens of this glass. Arguments: back vertex `power`."""
        return back_surface(power, self.front_d, self.thickness_mm, self.index)


def _turned_to(prism: Vector, index: float) -> Turned:
    """The axes of a back surface turned about the pole so that its thick side is the base."""
    amount = math.hypot(*prism)
    if not amount:
        return (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0)
    tangent = wedge_tangent(amount, index)
    cosine = 1.0 / math.hypot(1.0, tangent)
    x, y, sine = prism[0] / amount, prism[1] / amount, tangent * cosine
    less = cosine - 1.0
    return (
        (1.0 + less * x * x, less * x * y, -sine * x),
        (less * x * y, 1.0 + less * y * y, -sine * y),
        (sine * x, sine * y, cosine),
    )


def prism_as_worn(back: Surface, prism: Vector, glass: Glass, tilt: Tilt) -> Vector:
    """The prism that a tilted lens gives the eye, by an exact ray.

    Arguments: `back` surface of the lens; `prism` of the lens in prism dioptres (x right, y up);
    `glass`; `tilt`. Returns prism dioptres seen by the observer facing the wearer.
    Raises BeyondError where no light comes through. Source: law of refraction; facts 4.15c, 4.16.

    >>> from pycore.optics.tilt import tilt_of
    >>> glass = Glass(index=1.586, front_d=8.0, thickness_mm=2.0)
    >>> flat = glass.back(Power(sphere=0))
    >>> round(prism_as_worn(flat, (0.0, 0.0), glass, tilt_of("right", 0, 15))[0], 3)
    -0.283
    """
    try:
        return _traced(back, prism, glass, tilt)
    except (OutsideSurfaceError, TotalReflectionError) as nothing:
        raise BeyondError from nothing


def _traced(back: Surface, prism: Vector, glass: Glass, tilt: Tilt) -> Vector:
    x, y, z = tilt.worn(*crossed(back, prism, glass, tilt).left)
    return -100.0 * x / z, -100.0 * y / z


@dataclass(frozen=True, slots=True)
class Crossing:
    """How the held ray crosses a lens, in the lens's frame; directions have length 1.

    `axes` right, up and out of the back surface, `at` where it is met in its own frame, mm, the
    `normal` there towards the eye; the ray `inside` the glass, `along_mm` of it, and as it `left`.
    """

    axes: Turned
    at: Vector
    normal: tuple[float, float, float]
    inside: tuple[float, float, float]
    left: tuple[float, float, float]
    along_mm: float


def crossed(back: Surface, prism: Vector, glass: Glass, tilt: Tilt) -> Crossing:
    """Follow light from straight ahead through the front pole of a tilted lens.

    Arguments: as `prism_as_worn`. Returns the Crossing. Raises OutsideSurfaceError and
    TotalReflectionError. Source: law of refraction.

    >>> from pycore.optics.tilt import tilt_of
    >>> glass = Glass(index=1.5, front_d=5.0, thickness_mm=2.0)
    >>> straight = tilt_of("right", 0, 0)
    >>> crossed(glass.back(Power(sphere=0)), (0.0, 0.0), glass, straight).along_mm
    2.0
    """
    inside = refract(tilt.light(), (0.0, 0.0, -1.0), 1.0 / glass.index)
    axes = right, up, out = _turned_to(prism, glass.index)
    # From here in the back surface's own frame, its pole at the origin; the ray starts at the
    # front pole, `thickness_mm` straight in front of it.
    start = (glass.thickness_mm * right[2], glass.thickness_mm * up[2], glass.thickness_mm * out[2])
    ray = dot(inside, right), dot(inside, up), dot(inside, out)
    along_mm, step = -start[2] / ray[2], 1.0
    while abs(step) > SETTLED_MM:  # Newton's method, from where the pole's plane is met
        x, y = start[0] + along_mm * ray[0], start[1] + along_mm * ray[1]
        slope_x, slope_y = back.slope(x, y)
        gap = start[2] + along_mm * ray[2] + back.depth(x, y)
        step = gap / (ray[2] + slope_x * ray[0] + slope_y * ray[1])
        along_mm -= step
    normal = unit(
        (
            -slope_x * right[0] - slope_y * up[0] - out[0],
            -slope_x * right[1] - slope_y * up[1] - out[1],
            -slope_x * right[2] - slope_y * up[2] - out[2],
        )
    )
    return Crossing(axes, (x, y), normal, inside, refract(inside, normal, glass.index), along_mm)


def prism_to_order(back: Surface, worn: Vector, glass: Glass, tilt: Tilt) -> Vector:
    """The prism of the lens that gives the eye `worn` when tilted: the trace turned round.

    Arguments: `back` surface of the lens; `worn` prism dioptres; `glass`; `tilt`. Returns prism
    dioptres of the lens. Raises BeyondError where there is no such lens. Source: Broyden's method,
    started with the thin wedge's matrix; it settles in five or six rays.

    >>> from pycore.optics.tilt import tilt_of
    >>> glass = Glass(index=1.586, front_d=6.0, thickness_mm=2.0)
    >>> flat, tilt = glass.back(Power(sphere=0)), tilt_of("right", 8, 15)
    >>> order = prism_to_order(flat, (5.0, 1.0), glass, tilt)
    >>> [round(part, 9) for part in prism_as_worn(flat, order, glass, tilt)]
    [5.0, 1.0]
    """
    first = thin_prism_as_worn((1.0, 0.0), tilt, glass.index)
    second = thin_prism_as_worn((0.0, 1.0), tilt, glass.index)
    determinant = first[0] * second[1] - first[1] * second[0]
    # How the order has to change for each prism dioptre that the eye lacks, by columns.
    inverse = (
        (second[1] / determinant, -first[1] / determinant),
        (-second[0] / determinant, first[0] / determinant),
    )
    order = (0.0, 0.0)
    seen = prism_as_worn(back, order, glass, tilt)
    for _ in range(MOST_STEPS):
        lacks = worn[0] - seen[0], worn[1] - seen[1]
        if math.hypot(*lacks) < SETTLED_PRISM:
            return order
        step = _times(inverse, lacks)
        order = order[0] + step[0], order[1] + step[1]
        before, seen = seen, prism_as_worn(back, order, glass, tilt)
        inverse = _improved(inverse, step, (seen[0] - before[0], seen[1] - before[1]))
    raise BeyondError


Columns = tuple[Vector, Vector]


def _times(matrix: Columns, vector: Vector) -> Vector:
    (a, b), (c, d) = matrix
    return a * vector[0] + c * vector[1], b * vector[0] + d * vector[1]


def _improved(inverse: Columns, step: Vector, gained: Vector) -> Columns:
    """Broyden's correction, so that the inverse would have foreseen the step just made."""
    foreseen = _times(inverse, gained)
    (a, b), (c, d) = inverse
    row = step[0] * a + step[1] * b, step[0] * c + step[1] * d
    divisor = step[0] * foreseen[0] + step[1] * foreseen[1]
    share = 1.0 / divisor if divisor else 0.0
    x, y = (step[0] - foreseen[0]) * share, (step[1] - foreseen[1]) * share
    return (a + x * row[0], b + y * row[0]), (c + x * row[1], d + y * row[1])
