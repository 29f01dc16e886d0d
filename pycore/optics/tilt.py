"""How a tilted lens acts: its power as worn, the power it needs, and the vertex distance.

Seen by the observer facing the wearer: x to the observer's right, y up, z towards the observer.
A front is first bent about its own upright (wrap: the temple side swept back), then tilted about
the horizontal (pantoscopic: the lower rim swept back). The product of both rotations also turns
a wrapped lens a little in its own plane (torsion), which is why the full rotation is used here
and never the two tilts one after the other.
"""

import math
from dataclasses import dataclass

from pycore.angles import cosine, direction, sine
from pycore.decimals import PICO, from_float
from pycore.optics.power import Matrix, Power
from pycore.optics.prism import Eye

Vector = tuple[float, float]


class BeyondError(ValueError):
    """No ray comes through, or no image stands where it would have to: nothing to work out."""


@dataclass(frozen=True, slots=True)
class Tilt:
    """The rotation of a worn lens, from its own frame into the wearer's, as two turns.

    `tip_*`: cosine and sine of the pantoscopic tilt; `turn_*`: of the wrap, as a turn about the
    upright, positive where the front looks to the observer's right (so negative on the right).
    """

    tip_cosine: float
    tip_sine: float
    turn_cosine: float
    turn_sine: float

    @property
    def cosine(self) -> float:
        """Cosine of the angle between the line of sight and the front's normal."""
        return self.tip_cosine * self.turn_cosine

    @property
    def angle_deg(self) -> float:
        """The whole tilt in degrees."""
        return math.degrees(math.acos(min(1.0, self.cosine)))

    @property
    def axis_deg(self) -> float | None:
        """The axis about which the front is tilted, degrees 0 to 180 from the front, or None."""
        across, along = self.tip_sine * self.turn_cosine, self.turn_sine
        if abs(across) < 1e-12 and abs(along) < 1e-12:
            return None
        return direction(across, along) % 180.0

    @property
    def torsion_deg(self) -> float:
        """By how much the lens is turned in its own plane, degrees, counter-clockwise +."""
        return math.degrees(
            math.atan2(self.tip_sine * self.turn_sine, self.tip_cosine + self.turn_cosine)
        )

    def light(self) -> tuple[float, float, float]:
        """The direction of light from straight ahead, in the lens's own frame."""
        return self.in_lens(0.0, 0.0, -1.0)

    def in_lens(self, x: float, y: float, z: float) -> tuple[float, float, float]:
        """A direction of the wearer's frame in the lens's own: `worn` turned round."""
        back = z * self.tip_cosine - y * self.tip_sine
        return (
            x * self.turn_cosine - back * self.turn_sine,
            y * self.tip_cosine + z * self.tip_sine,
            x * self.turn_sine + back * self.turn_cosine,
        )

    def worn(self, x: float, y: float, z: float) -> tuple[float, float, float]:
        """A direction of the lens's own frame in the wearer's."""
        back = z * self.turn_cosine - x * self.turn_sine
        return (
            x * self.turn_cosine + z * self.turn_sine,
            y * self.tip_cosine - back * self.tip_sine,
            y * self.tip_sine + back * self.tip_cosine,
        )


def tilt_of(eye: Eye, pantoscopic_deg: float, wrap_deg: float) -> Tilt:
    """The tilt of one lens of a worn front.

    Arguments: `eye`; `pantoscopic_deg` lower rim towards the face; `wrap_deg` temple side
    towards the face, of one lens. Returns the Tilt. Source: facts 4.15 and 4.15b (full rotation).

    >>> tilt = tilt_of("right", 8, 6)
    >>> round(tilt.angle_deg, 2), round(tilt.axis_deg), round(tilt.torsion_deg, 2)
    (9.99, 143, -0.42)
    """
    turn_deg = -wrap_deg if eye == "right" else wrap_deg
    return Tilt(cosine(pantoscopic_deg), sine(pantoscopic_deg), cosine(turn_deg), sine(turn_deg))


def oblique_factor(tilt: Tilt, index: float) -> float:
    """How much stronger any thin lens of this index acts along the tilt's axis: g.

    Arguments: `tilt`; `index`. Returns a pure number, about 1 + sin²(tilt)/2n.
    Source: Coddington's equations for both surfaces of a thin lens (facts 4.15).

    >>> round(oblique_factor(tilt_of("left", 0, 10), 1.5), 4)
    1.0102
    """
    level = tilt.cosine
    return (math.sqrt(index * index - 1.0 + level * level) - level) / (index - 1.0)


def power_as_worn(lens: Matrix, tilt: Tilt, index: float) -> Matrix:
    """The power a tilted thin lens gives along the line of sight: g·T·F·T with its torsion.

    Arguments: `lens` power matrix in dioptres, in the lens's own frame; `tilt`; `index`.
    Returns the matrix in the wearer's frame. Thin lenses without prism: beside the pencil of
    `optics.pencil` everyday lenses and tilts differ by 0.003 D in the middle and 0.1 D at most;
    with up to 5 prism dioptres each way by 0.06 D in the middle and 0.8 D at most (measured over
    6,000 lenses of each kind); beyond 25 degrees a guide only.
    Source: Keating's tilted-lens matrix ("Tilted power of thin lenses", Optom Vis Sci 2002).

    T and the torsion are one matrix: with N the inverse of the rotation's part in the plane
    (how a length on the lens looks from straight ahead), g·T·F·T becomes g·Nᵀ·F·N.

    >>> worn = power_as_worn((-3.0, 0.0, -3.0), tilt_of("right", 0, 15), 1.586)
    >>> [round(part, 4) for part in worn]
    [-3.2857, 0.0, -3.0656]
    """
    factor = oblique_factor(tilt, index) / (tilt.cosine * tilt.cosine)
    # The inverse is (tip_cosine, 0; -shear, turn_cosine) over the whole tilt's cosine.
    down, across, shear = tilt.tip_cosine, tilt.turn_cosine, tilt.tip_sine * tilt.turn_sine
    xx, xy, yy = lens
    return (
        factor * (down * down * xx - 2.0 * down * shear * xy + shear * shear * yy),
        factor * across * (down * xy - shear * yy),
        factor * across * across * yy,
    )


def power_to_order(worn: Matrix, tilt: Tilt, index: float) -> Matrix:
    """The power of the lens that gives `worn` when tilted: the inverse of `power_as_worn`.

    Arguments: `worn` matrix in dioptres, wearer's frame; `tilt`; `index`. Returns the matrix.
    Source: as `power_as_worn`.

    >>> order = power_to_order((-3.0, 0.0, -3.0), tilt_of("right", 0, 15), 1.586)
    >>> [round(part, 2) for part in order]
    [-2.74, 0.0, -2.94]
    """
    factor = 1.0 / oblique_factor(tilt, index)
    down, across, shear = tilt.tip_cosine, tilt.turn_cosine, tilt.tip_sine * tilt.turn_sine
    xx, xy, yy = worn
    return (
        factor * (across * across * xx + 2.0 * across * shear * xy + shear * shear * yy),
        factor * down * (across * xy + shear * yy),
        factor * down * down * yy,
    )


def thin_prism_as_worn(lens: Vector, tilt: Tilt, index: float) -> Vector:
    """The prism of a tilted thin wedge, g·T·p with its torsion: a check of the trace only.

    Arguments: `lens` prism dioptres (x, y) in the lens's own frame; `tilt`; `index`.
    Returns prism dioptres in the wearer's frame; the tilt's own prism is not in it. Source:
    facts 4.15c.

    >>> [round(part, 2) for part in thin_prism_as_worn((5.0, 0.0), tilt_of("right", 0, 15), 1.586)]
    [5.29, 0.0]
    """
    factor = oblique_factor(tilt, index) / tilt.cosine
    shear = tilt.tip_sine * tilt.turn_sine
    x, y = lens
    return factor * (tilt.tip_cosine * x - shear * y), factor * tilt.turn_cosine * y


def moved(power: Matrix, prism: Vector, away_mm: float) -> tuple[Matrix, Vector]:
    """The lens that does the same from another distance to the eye: (I + dF)⁻¹ on power and prism.

    Both leave the far point where it was in space, in depth and sideways, so a distant object
    is seen in the same place. Arguments: `power` matrix in dioptres; `prism` prism dioptres;
    `away_mm` by how much farther from the eye the other lens stands. Returns its power and prism.
    Raises BeyondError where the image would fall between both places.
    Source: vergence, F / (1 + dF), any textbook of ophthalmic lenses, as matrices.

    >>> moved((10.0, 0.0, 10.0), (0.0, 0.0), -2.0)[0][0] > 10.2
    True
    """
    distance_m = away_mm / 1000.0
    xx, xy, yy = power
    first, mixed, second = 1.0 + distance_m * xx, distance_m * xy, 1.0 + distance_m * yy
    determinant = first * second - mixed * mixed
    if first <= 0.0 or determinant <= 0.0:
        raise BeyondError
    shared = distance_m * (xx * yy - xy * xy)
    x, y = prism
    return (
        ((xx + shared) / determinant, xy / determinant, (yy + shared) / determinant),
        ((second * x - mixed * y) / determinant, (first * y - mixed * x) / determinant),
    )


def power_of(matrix: Matrix, sign: int = -1) -> Power:
    """The sphere, cylinder and axis of a power matrix.

    Arguments: `matrix` in dioptres; `sign` of the cylinder wanted, +1 or -1. Returns the Power.
    Source: eigenvalues of a symmetric matrix.

    >>> power_of(Power(from_float(0.75), from_float(-2.25), from_float(20.0)).matrix()).axis
    Decimal('20.000000000000')
    """
    xx, xy, yy = matrix
    half = math.hypot((xx - yy) / 2.0, xy)
    sphere = from_float((xx + yy) / 2.0 - sign * half)
    cylinder = from_float(2.0 * sign * half)
    if abs(cylinder) < 1000 * PICO:
        return Power(from_float((xx + yy) / 2.0))
    axis_deg = direction(sign * (yy - xx), -2.0 * sign * xy) / 2.0
    return Power(sphere, cylinder, from_float(axis_deg or 180.0))
