"""What a lens meter reads anywhere on a real lens: one exact ray, no small angles.

The lens: a spherical front, a spherical or toric back, the prism worked in as an exact wedge
between them at the prism reference point. (Whether the wedge is worked on the front or on the
back is the same body; here the front is upright, because points are marked and measured on it.)

On the stop: the back surface rests square on the meter's axis, the axis passes through the point
marked on the front, and the lens was slid there without a twist. Light along the axis then meets
the back without turning, crosses the glass and turns at the front, towards the base: 100 times
the tangent of that turn is the reading. (Held level on a frame table instead, a lens is twisted
by at most about 1 degree at an oblique point of the rim: less than an axis can be read.)
Source: law of refraction in vectors, any textbook of geometrical optics; the reading on the stop
of a meniscus, facts 4.17.
"""

import math
from dataclasses import dataclass

from pycore.optics.power import Power
from pycore.optics.prism import Prism
from pycore.optics.surface import OutsideSurfaceError, Surface, back_surface, sphere
from pycore.optics.wedge import wedge_tangent

Vector = tuple[float, float, float]
Turned = tuple[Vector, Vector, Vector]
UPRIGHT: Turned = ((1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0))
SETTLED_MM = 1e-12
MOST_STEPS = 200


class TotalReflectionError(ValueError):
    """The light does not leave the glass there: nothing is read."""


def dot(first: Vector, second: Vector) -> float:
    """The scalar product of two vectors.

    >>> dot((1.0, 2.0, 3.0), (0.0, 0.0, 2.0))
    6.0
    """
    return first[0] * second[0] + first[1] * second[1] + first[2] * second[2]


def unit(vector: Vector) -> Vector:
    """A vector's direction, of length 1.

    >>> unit((0.0, 0.0, 2.0))
    (0.0, 0.0, 1.0)
    """
    length = math.sqrt(dot(vector, vector))
    return vector[0] / length, vector[1] / length, vector[2] / length


def axes_along(axis: Vector) -> Turned:
    """The lens's axes turned so that the third is `axis`, by the shortest turn, without a twist.

    Arguments: `axis` of length 1, not against the observer's view. Returns right, up, axis.

    >>> axes_along((0.0, 0.0, 1.0)) == UPRIGHT
    True
    """
    x, y, z = axis
    twist = -x * y / (1.0 + z)
    return (1.0 - x * x / (1.0 + z), twist, -x), (twist, 1.0 - y * y / (1.0 + z), -y), axis


def refract(ray: Vector, normal: Vector, index_ratio: float) -> Vector:
    """A ray's direction behind a surface. All vectors of length 1.

    Arguments: `ray`; `normal` on the side the ray goes to; `index_ratio` of the index before to
    the index behind. Returns the direction. Raises TotalReflectionError.
    Source: law of refraction, vector form.

    >>> glass = (0.0, 0.5, math.sqrt(0.75))
    >>> [round(part, 6) for part in refract(glass, (0.0, 0.0, 1.0), 1.5)]
    [0.0, 0.75, 0.661438]
    """
    cosine_in = dot(ray, normal)
    left = 1.0 - index_ratio * index_ratio * (1.0 - cosine_in * cosine_in)
    if left <= 0.0:
        raise TotalReflectionError
    turn = math.sqrt(left) - index_ratio * cosine_in
    return (
        index_ratio * ray[0] + turn * normal[0],
        index_ratio * ray[1] + turn * normal[1],
        index_ratio * ray[2] + turn * normal[2],
    )


@dataclass(frozen=True, slots=True)
class Placed:
    """A surface somewhere in the lens: where its pole lies (mm) and how its axes are turned."""

    surface: Surface
    pole: Vector = (0.0, 0.0, 0.0)
    axes: Turned = UPRIGHT

    def seen(self, point: Vector) -> Vector:
        """A point of the lens in the surface's own frame, in mm."""
        away = (point[0] - self.pole[0], point[1] - self.pole[1], point[2] - self.pole[2])
        right, up, out = self.axes
        return dot(away, right), dot(away, up), dot(away, out)

    def turned(self, own: Vector) -> Vector:
        """A direction of the surface's own frame in the lens's frame."""
        (rx, ry, rz), (ux, uy, uz), (ox, oy, oz) = self.axes
        x, y, z = own
        return x * rx + y * ux + z * ox, x * ry + y * uy + z * oy, x * rz + y * uz + z * oz

    def normal(self, x_mm: float, y_mm: float) -> Vector:
        """The normal towards the observer at a point (own frame), in the lens's frame."""
        along_x, along_y = self.surface.slope(x_mm, y_mm)
        return self.turned(unit((along_x, along_y, 1.0)))

    def above(self, x_mm: float, y_mm: float) -> Vector:
        """The surface's point at x, y of the lens, in the lens's frame (Newton's method).

        Raises OutsideSurfaceError.
        """
        rise = self.turned_back((0.0, 0.0, 1.0))
        z = 0.0
        for _ in range(MOST_STEPS):
            x_own, y_own, z_own = self.seen((x_mm, y_mm, z))
            along_x, along_y = self.surface.slope(x_own, y_own)
            gap = z_own + self.surface.depth(x_own, y_own)
            step = gap / (rise[2] + along_x * rise[0] + along_y * rise[1])
            z -= step
            if abs(step) < SETTLED_MM:
                return x_mm, y_mm, z
        raise OutsideSurfaceError

    def turned_back(self, direction: Vector) -> Vector:
        """A direction of the lens in the surface's own frame."""
        right, up, out = self.axes
        return dot(direction, right), dot(direction, up), dot(direction, out)

    def normal_through(self, point: Vector) -> Vector:
        """The normal, towards the observer, of which a point (lens's frame) lies on the line.

        Raises OutsideSurfaceError. From the first foot, that on a sphere of the steep curvature
        (which never lies outside), the foot is moved until the point lies on its normal; on a
        sphere of the mean curvature one move would do.
        """
        own = self.seen(point)
        bent = self.surface.steep_per_mm
        mean_per_mm = (bent + self.surface.flat_per_mm) / 2.0
        first = math.hypot(bent * own[0], bent * own[1], 1.0 + bent * own[2])
        x, y = own[0] / first, own[1] / first
        for _ in range(MOST_STEPS):
            normal = unit((*self.surface.slope(x, y), 1.0))
            foot = (x, y, -self.surface.depth(x, y))
            away = dot((own[0] - foot[0], own[1] - foot[1], own[2] - foot[2]), normal)
            left = 1.0 + away * mean_per_mm
            move_x = (own[0] - away * normal[0] - x) / left
            move_y = (own[1] - away * normal[1] - y) / left
            if abs(move_x) + abs(move_y) < SETTLED_MM:
                return self.turned(normal)
            x, y = x + move_x, y + move_y
        raise OutsideSurfaceError


@dataclass(frozen=True, slots=True, kw_only=True)
class Body:
    """A lens as a body, its front pole (the prism reference point) at the origin."""

    front: Placed
    back: Placed
    index: float


def body_of(power: Power, prism: Prism, front_d: float, thickness_mm: float, index: float) -> Body:
    """The body whose back vertex power is `power` and which reads exactly `prism` at its pole.

    Arguments: `power`, `prism` as the lens meter must show them; `front_d` the front surface's
    true power; `thickness_mm` at the pole, along the back's normal; `index`. Returns the Body.
    Source: tan α = sin δ / (n - cos δ), tan δ = P / 100 (facts 4.8).

    >>> from decimal import Decimal
    >>> body = body_of(Power(sphere=-4), Prism(Decimal(3), Decimal(-2)), 4.0, 2.0, 1.5)
    >>> [round(part, 9) for part in reading_on_stop(body, 0.0, 0.0)]
    [3.0, -2.0]
    """
    x, y = float(prism.x), float(prism.y)
    amount = math.hypot(x, y)
    tangent = wedge_tangent(amount, index) / amount if amount else 0.0
    out = unit((tangent * x, tangent * y, 1.0))
    back = Placed(
        back_surface(power, front_d, thickness_mm, index),
        (-thickness_mm * out[0], -thickness_mm * out[1], -thickness_mm * out[2]),
        axes_along(out),
    )
    return Body(front=Placed(sphere(front_d, index)), back=back, index=index)


def with_segment(body: Body, add: float, right_mm: float, up_mm: float) -> Body:
    """The same lens with a segment worked on its front, as one sphere everywhere.

    Arguments: `body`; `add` dioptres; `right_mm`, `up_mm` the segment's optical centre from the
    pole, where both fronts touch. Returns the Body to use inside the segment.
    Source: the surface's power is the sum, F = (n - 1) / r.

    >>> from decimal import Decimal
    >>> body = body_of(Power(sphere=0), Prism(Decimal(0), Decimal(0)), 0.0, 2.0, 1.5)
    >>> near = with_segment(body, 2.0, 0.0, -5.0)
    >>> [round(part, 3) + 0 for part in reading_on_stop(near, 0.0, -15.0)]
    [0.0, 2.003]
    """
    curvature_per_mm = body.front.surface.steep_per_mm + add / (1000.0 * (body.index - 1.0))
    touching = body.front.above(right_mm, up_mm)
    front = Placed(
        Surface(curvature_per_mm, curvature_per_mm, 1.0, 0.0),
        touching,
        axes_along(body.front.normal(right_mm, up_mm)),
    )
    return Body(front=front, back=body.back, index=body.index)


def reading_on_stop(body: Body, right_mm: float, up_mm: float) -> tuple[float, float]:
    """The prism that a lens meter reads at a point marked on the front.

    Arguments: `body`; `right_mm`, `up_mm` from the pole, square to the front's normal there.
    Returns (x, y) in prism dioptres, towards the base. Raises OutsideSurfaceError where a surface
    does not reach so far, TotalReflectionError where no light leaves. Exact for the body above;
    a real surface that is not a sphere or a torus (aspheric, progressive) differs.

    >>> from decimal import Decimal
    >>> lens = body_of(Power(sphere=0), Prism(Decimal(0), Decimal(0)), 6.0, 2.0, 1.5)
    >>> round(reading_on_stop(lens, 20.0, 0.0)[0], 2)
    -0.19
    """
    marked = body.front.above(right_mm, up_mm)
    ray = body.back.normal_through(marked)
    x, y, _ = body.front.seen(marked)
    left = refract(ray, body.front.normal(x, y), body.index)
    right, up, axis = axes_along(ray)
    ahead = dot(left, axis)
    return 100.0 * dot(left, right) / ahead, 100.0 * dot(left, up) / ahead
