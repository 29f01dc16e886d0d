"""Sphero-cylindrical power as numbers, as a matrix, along a meridian, and what prism it moves."""

from dataclasses import dataclass
from decimal import Decimal

from pycore.angles import cosine, half_turn, sine, wrap
from pycore.decimals import from_float
from pycore.optics.prism import Prism

Matrix = tuple[float, float, float]


@dataclass(frozen=True, slots=True)
class Power:
    """A lens power: sphere and cylinder in dioptres, axis in degrees 0 (exclusive) to 180.

    >>> Power(Decimal("0.75"), Decimal("-2.25"), Decimal(20)).transposed()
    Power(sphere=Decimal('-1.50'), cylinder=Decimal('2.25'), axis=Decimal('110'))
    """

    sphere: Decimal
    cylinder: Decimal = Decimal(0)
    axis: Decimal = Decimal(180)

    def transposed(self) -> "Power":
        """The same lens in the other cylinder form."""
        axis = self.axis + 90 if self.axis <= 90 else self.axis - 90
        return Power(self.sphere + self.cylinder, -self.cylinder + 0, axis)

    def in_form(self, sign: int) -> "Power":
        """The same lens with a cylinder of the sign given (+1 or -1)."""
        return self.transposed() if self.cylinder * sign < 0 else self

    @property
    def principal(self) -> tuple[Decimal, Decimal]:
        """Both principal powers in dioptres: along the axis, and across it."""
        return self.sphere, self.sphere + self.cylinder

    @property
    def strongest(self) -> Decimal:
        """The larger size of both principal powers, in dioptres, never negative."""
        return max(abs(power) for power in self.principal)

    def along(self, meridian_deg: Decimal) -> Decimal:
        """Power along a meridian, S + C sin²(meridian - axis), in dioptres.

        Source: Euler's theorem; facts 4.4.
        """
        across = float(half_turn(meridian_deg - self.axis))
        if across in (0.0, 90.0):
            return self.sphere + (self.cylinder if across else 0)
        return self.sphere + from_float(float(self.cylinder) * sine(across) ** 2)

    def matrix(self) -> Matrix:
        """The symmetric power matrix (xx, xy, yy) in dioptres; x right, y up.

        Source: "A matrix formalism for decentration problems", AJOPO 1976;53:27-33.
        """
        axis_deg = wrap(float(self.axis), 180.0)
        sphere, cylinder = float(self.sphere), float(self.cylinder)
        along, across = cosine(axis_deg), sine(axis_deg)
        return (
            sphere + cylinder * across * across,
            -cylinder * across * along,
            sphere + cylinder * along * along,
        )


def prism_at(start: Prism, power: Power, right_mm: Decimal, up_mm: Decimal) -> Prism:
    """The thin prism read at a point away from where it is `start`: p(r) = p0 - F r.

    Arguments: `start` prism dioptres; `right_mm`, `up_mm` the point, mm from there.
    Returns prism dioptres. Valid for thin lenses, paraxially. Source: Prentice's rule in
    matrix form, AJOPO 1976;53:27-33.

    >>> prism_at(Prism(Decimal(0), Decimal(0)), Power(Decimal(5)), Decimal(0), Decimal(-8)).y
    Decimal('4.000000000000')
    """
    xx, xy, yy = power.matrix()
    right_cm, up_cm = float(right_mm) / 10.0, float(up_mm) / 10.0
    return Prism(
        start.x - from_float(xx * right_cm + xy * up_cm),
        start.y - from_float(xy * right_cm + yy * up_cm),
    )


def point_with_prism(present: Prism, wanted: Prism, power: Power) -> tuple[float, float] | None:
    """Where, seen from the point that shows `present`, the lens shows `wanted`: F⁻¹ (p0 - p).

    Arguments: prism dioptres. Returns (right_mm, up_mm), or None where a principal power is
    zero, so that moving along that meridian changes nothing. Source: AJOPO 1976;53:27-33.

    >>> lens = Power(Decimal(3), Decimal(-1), Decimal(90))
    >>> point_with_prism(Prism(Decimal("1.2"), Decimal("1.6")), Prism(Decimal(2), Decimal(1)), lens)
    (-4.0, 2.0)
    """
    along, across = power.principal
    if not along or not across:
        return None
    xx, xy, yy = power.matrix()
    determinant = float(along) * float(across)
    x, y = float(present.x - wanted.x) * 10.0, float(present.y - wanted.y) * 10.0
    right_mm, up_mm = (yy * x - xy * y) / determinant, (xx * y - xy * x) / determinant
    return float(from_float(right_mm)), float(from_float(up_mm))
