"""The power of a real tilted lens: a narrow pencil of rays about the held ray, in closed form.

Beside the tilted-lens matrix, which knows neither thickness nor prism. The pencil is a wavefront
carried through both surfaces. On a surface, for any two directions u and v of its tangent plane,

    V'(u, v) = V(u, v) + (n' cos i' - n cos i) S(u, v),

V the vergence with the index in it, S the surface's curvature (positive where it bends towards
the eye); inside the glass the wavefront only steps along. All in the lens's frame, as
`optics.tilt_trace`.
Source: the phases of both wavefronts agree along the surface (generalised Coddington equations,
any textbook of aberrations).
"""

import math

from pycore.optics.power import Matrix, Power
from pycore.optics.surface import OutsideSurfaceError, Surface, sphere, through_front_d, toric
from pycore.optics.tilt import BeyondError, Tilt, Vector, moved, power_of
from pycore.optics.tilt_trace import Glass, crossed
from pycore.optics.trace import TotalReflectionError, axes_along, dot
from pycore.optics.wedge import wedge_tangent

Direction = tuple[float, float, float]
Plane = tuple[Direction, Direction]
AHEAD: Direction = (0.0, 0.0, -1.0)
LEVEL: Plane = ((1.0, 0.0, 0.0), (0.0, 1.0, 0.0))
PER_MM = 1000.0  # dioptres for a curvature of 1/mm


def _square_to(ray: Direction) -> Plane:
    """Right and up, turned by the shortest turn so as to stand square to a ray towards the eye."""
    right, up, _ = axes_along((-ray[0], -ray[1], -ray[2]))
    return right, up


def _drawn(plane: Plane, ray: Direction, normal: Direction) -> Plane:
    """Both directions of a plane square to a ray, drawn along it into a surface's tangent plane."""
    level = dot(ray, normal)

    def along(way: Direction) -> Direction:
        share = dot(way, normal) / level
        return way[0] - share * ray[0], way[1] - share * ray[1], way[2] - share * ray[2]

    return along(plane[0]), along(plane[1])


def _between(matrix: Matrix, own: Plane, ways: Plane) -> Matrix:
    """A matrix written for the plane `own`, for two other directions (and their mixture)."""
    (a, b), (c, d) = ((dot(way, own[0]), dot(way, own[1])) for way in ways)
    xx, xy, yy = matrix
    return (
        a * a * xx + 2.0 * a * b * xy + b * b * yy,
        a * c * xx + (a * d + b * c) * xy + b * d * yy,
        c * c * xx + 2.0 * c * d * xy + d * d * yy,
    )


def pencil_as_worn(back: Surface, prism: Vector, glass: Glass, tilt: Tilt) -> Matrix:
    """The power that a tilted lens gives the eye, by a narrow pencil about the held ray.

    Arguments: `back` surface of the lens; `prism` of the lens in prism dioptres; `glass`; `tilt`.
    Returns the matrix in dioptres where the ray leaves the back, square to it, right and up for
    the observer. Raises BeyondError where no light comes through. Source: as above.

    >>> from pycore.optics.tilt import tilt_of
    >>> glass = Glass(index=1.5, front_d=5.0, thickness_mm=3.0)
    >>> back, upright = glass.back(Power(sphere=-2)), tilt_of("left", 0, 0)
    >>> [round(part, 9) + 0.0 for part in pencil_as_worn(back, (0.0, 0.0), glass, upright)]
    [-2.0, 0.0, -2.0]
    """
    try:
        ray = crossed(back, prism, glass, tilt)
    except (OutsideSurfaceError, TotalReflectionError) as nothing:
        raise BeyondError from nothing
    inside = _square_to(ray.inside)
    front_d = sphere(glass.front_d, glass.index).steep_per_mm * PER_MM
    front_d *= glass.index * dot(ray.inside, AHEAD) - dot(tilt.light(), AHEAD)
    right, up = _drawn(inside, ray.inside, AHEAD)
    refracted = (front_d * dot(right, right), front_d * dot(right, up), front_d * dot(up, up))
    arriving, _ = moved(refracted, (0.0, 0.0), -ray.along_mm / glass.index)

    seen = _square_to(tilt.worn(*ray.left))
    ways = _drawn((tilt.in_lens(*seen[0]), tilt.in_lens(*seen[1])), ray.left, ray.normal)
    right, up, out = ray.axes
    # The depth's second derivatives become the curvature by the slant of the surface.
    back_d = PER_MM * -dot(ray.normal, out)
    back_d *= dot(ray.left, ray.normal) - glass.index * dot(ray.inside, ray.normal)
    before, bend = _between(arriving, inside, ways), _between(back.bend(*ray.at), (right, up), ways)
    return (
        before[0] + back_d * bend[0],
        before[1] + back_d * bend[1],
        before[2] + back_d * bend[2],
    )


def back_of_read_power(power: Power, prism: Vector, glass: Glass) -> Surface:
    """The back surface with which a lens with prism has its power straight through the mark.

    Light that leaves a wedge aslant is bent a little more along the base: a lens meter reads that
    too, and the generator's curves allow for it. So no tilt changes nothing here either.
    Arguments: back vertex `power`; `prism` prism dioptres; `glass`. Returns the Surface, in its
    own turned frame. Source: `pencil_as_worn` for a ray along the front's normal, turned round.

    >>> glass = Glass(index=1.5, front_d=5.0, thickness_mm=3.0)
    >>> plain, own = glass.back(Power(sphere=-2)), back_of_read_power(Power(sphere=-2), (0.0, 0.0), glass)
    >>> abs(own.steep_per_mm - plain.steep_per_mm) < 1e-12
    True
    """
    amount = math.hypot(*prism)
    x, y = (prism[0] / amount, prism[1] / amount) if amount else (1.0, 0.0)
    cos_in = 1.0 / math.hypot(1.0, wedge_tangent(amount, glass.index))
    cos_out = math.sqrt(1.0 - glass.index**2 * (1.0 - cos_in**2))
    arriving_d = through_front_d(glass.front_d, glass.thickness_mm, glass.index)
    along, across = (x, y, 0.0), (-y, x, 0.0)
    base, mixed, square = _between(power.matrix(), LEVEL, (along, across))
    turned = cos_out - glass.index * cos_in
    needed = (
        (base * cos_out**2 - arriving_d * cos_in**2) / turned,
        mixed * cos_out / turned,
        (square - arriving_d) / turned,
    )
    curves = power_of(_between(needed, LEVEL, ((x, -y, 0.0), (y, x, 0.0))))
    first_d, second_d = map(float, curves.principal)
    return toric(first_d / PER_MM, second_d / PER_MM, float(curves.axis))
