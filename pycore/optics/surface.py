"""The exact depth of a lens's surfaces: a sphere in front, a sphere or a toric behind.

In the lens's own frame: x to the observer's right, y up, z towards the observer; a surface has
its pole at the origin, square to z, and lies `depth` mm behind it (towards the eye) elsewhere.
Exact circles, not the parabola: at 25 mm of an 80 mm radius the two differ by 0.1 mm.
"""

import math
from dataclasses import dataclass

from pycore.angles import cosine, sine
from pycore.optics.power import Power

FLATTEST_LEFT = 1e-9  # of a squared radius: nearer to the rim of a hemisphere nothing is made


class OutsideSurfaceError(ValueError):
    """The point lies farther out than the surface reaches: there is no lens there."""


def _cosine_of_slope(curvature_per_mm: float, distance_mm: float) -> float:
    left = 1.0 - (curvature_per_mm * distance_mm) ** 2
    if left < FLATTEST_LEFT:
        raise OutsideSurfaceError
    return math.sqrt(left)


def circle_depth(curvature_per_mm: float, distance_mm: float) -> float:
    """How far a circle lies behind its pole, r - √(r² - d²), written so that a flat one is none.

    Arguments: `curvature_per_mm` 1/r, positive where the centre lies behind; `distance_mm` from
    the axis. Returns mm. Raises OutsideSurfaceError. Source: Pythagoras.

    >>> round(circle_depth(1 / 50, 30.0), 12), circle_depth(0.0, 30.0)
    (10.0, 0.0)
    """
    root = _cosine_of_slope(curvature_per_mm, distance_mm)
    return curvature_per_mm * distance_mm * distance_mm / (1.0 + root)


@dataclass(frozen=True, slots=True)
class Surface:
    """A sphere or a toric with its pole at the origin.

    `steep_per_mm`, `flat_per_mm`: both principal curvatures in 1/mm, the greater size first,
    positive where the centre lies towards the eye; `along`, `across`: the direction of the steep
    meridian (cosine and sine). The toric is of tyre form: the steep arc is carried round the
    flat circle. The barrel form with the same curvatures differs by the fourth order only.

    >>> Surface(1 / 80, 1 / 100, 0.0, 1.0).depth(0.0, 20.0) == circle_depth(1 / 80, 20.0)
    True
    """

    steep_per_mm: float
    flat_per_mm: float
    along: float
    across: float

    def depth(self, x_mm: float, y_mm: float) -> float:
        """Depth behind the pole's plane at a point, in mm. Raises OutsideSurfaceError."""
        u = x_mm * self.along + y_mm * self.across
        v = y_mm * self.along - x_mm * self.across
        arc = circle_depth(self.steep_per_mm, u)
        return arc + circle_depth(self.flat_per_mm / (1.0 - self.flat_per_mm * arc), v)

    def slope(self, x_mm: float, y_mm: float) -> tuple[float, float]:
        """How the depth grows along x and along y: pure numbers. Raises OutsideSurfaceError."""
        u = x_mm * self.along + y_mm * self.across
        v = y_mm * self.along - x_mm * self.across
        flat = self.flat_per_mm
        arc = circle_depth(self.steep_per_mm, u)
        depth = arc + circle_depth(flat / (1.0 - flat * arc), v)
        # From the torus itself: (r - depth)² + v² = (r - arc)², with r = 1 / flat.
        left = 1.0 - flat * depth
        along_u = self.steep_per_mm * u / _cosine_of_slope(self.steep_per_mm, u)
        along_u *= (1.0 - flat * arc) / left
        along_v = flat * v / left
        return (
            along_u * self.along - along_v * self.across,
            along_u * self.across + along_v * self.along,
        )

    def bend(self, x_mm: float, y_mm: float) -> tuple[float, float, float]:
        """How the slope grows: second derivatives of the depth (xx, xy, yy) in 1/mm.

        Raises OutsideSurfaceError.
        """
        u = x_mm * self.along + y_mm * self.across
        v = y_mm * self.along - x_mm * self.across
        steep, flat = self.steep_per_mm, self.flat_per_mm
        arc, level = circle_depth(steep, u), _cosine_of_slope(steep, u)
        # Once more from (1 - flat·depth)² + (flat·v)² = (1 - flat·arc)².
        across = 1.0 - flat * arc
        left = 1.0 - flat * (arc + circle_depth(flat / across, v))
        rise = steep * u / level
        along_u, along_v = rise * across / left, flat * v / left
        uu = (steep / level**3 * across - flat * rise * rise + flat * along_u * along_u) / left
        uv, vv = flat * along_u * along_v / left, flat * (1.0 + along_v * along_v) / left
        cos, sin = self.along, self.across
        mixed = 2.0 * cos * sin * uv
        return (
            cos * cos * uu + sin * sin * vv - mixed,
            cos * sin * (uu - vv) + (cos * cos - sin * sin) * uv,
            sin * sin * uu + cos * cos * vv + mixed,
        )


def true_front_d(front_curve_d: float, curve_index: float, index: float) -> float:
    """The front surface's real power from the curve marked for another index.

    Arguments: `front_curve_d` dioptres as marked for `curve_index`; `index` of the material.
    Returns dioptres. Source: the job document; facts, worked example 62 (6.00 at 1.66 is 7.47).

    >>> round(true_front_d(6.0, 1.530, 1.66), 2)
    7.47
    """
    return front_curve_d * (index - 1.0) / (curve_index - 1.0)


def sphere(power_d: float, index: float) -> Surface:
    """The spherical front surface of a power.

    Arguments: `power_d` dioptres, true for `index`. Returns the Surface.
    Source: F = (n - 1) / r.

    >>> round(1 / sphere(5.0, 1.5).steep_per_mm, 9)
    100.0
    """
    curvature_per_mm = power_d / (1000.0 * (index - 1.0))
    return Surface(curvature_per_mm, curvature_per_mm, 1.0, 0.0)


def through_front_d(front_d: float, thickness_mm: float, index: float) -> float:
    """What the front surface's power is worth at the back: F1 / (1 - t F1 / n).

    Arguments: `front_d` dioptres; `thickness_mm`; `index`. Returns dioptres.
    Raises OutsideSurfaceError where the light would come to a focus within the lens.
    Source: step-along vergence, any textbook of ophthalmic lenses.

    >>> round(through_front_d(8.0, 6.0, 1.5), 3)
    8.264
    """
    left = 1.0 - thickness_mm / 1000.0 / index * front_d
    if left < FLATTEST_LEFT:
        raise OutsideSurfaceError
    return front_d / left


def toric(along_per_mm: float, across_per_mm: float, axis_deg: float) -> Surface:
    """The toric with one principal curvature along an axis and the other across it, in 1/mm.

    >>> toric(1 / 100, 1 / 80, 90.0).steep_per_mm
    0.0125
    """
    if abs(across_per_mm) >= abs(along_per_mm):
        across_deg = axis_deg + 90.0
        return Surface(across_per_mm, along_per_mm, cosine(across_deg), sine(across_deg))
    return Surface(along_per_mm, across_per_mm, cosine(axis_deg), sine(axis_deg))


def back_surface(power: Power, front_d: float, thickness_mm: float, index: float) -> Surface:
    """The back surface that gives a back vertex power behind a spherical front.

    Arguments: `power` back vertex power; `front_d` dioptres, true for `index`; `thickness_mm`;
    `index`. Returns the Surface, in the frame seen from the front. Source: F2 = Fv - F1 / (1 - t F1 / n).

    >>> back = back_surface(Power(sphere=-5), 0.0, 2.0, 1.5)
    >>> round(1 / back.steep_per_mm, 9)
    100.0
    """
    at_back_d = through_front_d(front_d, thickness_mm, index)
    to_curvature = -1.0 / (1000.0 * (index - 1.0))
    first, second = ((float(part) - at_back_d) * to_curvature for part in power.principal)
    return toric(first, second, float(power.axis))
