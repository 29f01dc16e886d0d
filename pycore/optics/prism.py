"""A prism is a vector pointing to its base; every notation is a name of that one vector.

Seen by the observer facing the wearer, convex side towards the observer, frame upright:
x to the observer's right, y up, angles counter-clockwise from +x (ISO 8429). So base in is 0
for the right lens and 180 for the left.
"""

from collections.abc import Iterable
from dataclasses import dataclass
from decimal import Decimal
from typing import Literal

from pycore.angles import cosine, direction, sine
from pycore.decimals import from_float, snap

Eye = Literal["right", "left"]
Word = Literal["in", "out", "up", "down"]

EYES: tuple[Eye, Eye] = ("right", "left")
_QUARTERS = {
    Decimal(0): (Decimal(1), Decimal(0)),
    Decimal(90): (Decimal(0), Decimal(1)),
    Decimal(180): (Decimal(-1), Decimal(0)),
    Decimal(270): (Decimal(0), Decimal(-1)),
}


@dataclass(frozen=True, slots=True)
class Prism:
    """A prism in prism dioptres: `x` to the observer's right, `y` up, pointing to the base.

    >>> Prism(Decimal(3), Decimal(4)).amount
    Decimal('5')
    """

    x: Decimal
    y: Decimal

    def __add__(self, other: "Prism") -> "Prism":
        return Prism(self.x + other.x, self.y + other.y)

    def __sub__(self, other: "Prism") -> "Prism":
        return Prism(self.x - other.x, self.y - other.y)

    def __neg__(self) -> "Prism":
        return Prism(-self.x, -self.y)

    def times(self, factor: Decimal) -> "Prism":
        """The same base with the amount multiplied. `factor` is a pure number."""
        return Prism(self.x * factor, self.y * factor)

    @property
    def amount(self) -> Decimal:
        """Amount in prism dioptres, never negative."""
        if not self.x or not self.y:
            return abs(self.x + self.y)
        return (self.x * self.x + self.y * self.y).sqrt()

    @property
    def base_deg(self) -> float | None:
        """Base in degrees [0, 360), or None for no prism (which has no base)."""
        if not snap(self.x) and not snap(self.y):
            return None
        return direction(float(self.x), float(self.y))


NO_PRISM = Prism(Decimal(0), Decimal(0))


def from_base(amount: Decimal, base_deg: Decimal) -> Prism:
    """The prism of an amount at a base in the 0 to 360 notation.

    Arguments: `amount` prism dioptres; `base_deg` degrees. Returns the vector, exact at
    multiples of 90, else to 1e-12. Source: ISO 8429.

    >>> from_base(Decimal("2.5"), Decimal(270))
    Prism(x=Decimal('0.0'), y=Decimal('-2.5'))
    """
    turned = base_deg % 360
    exact = _QUARTERS.get(turned)
    if exact is not None:
        return Prism(amount * exact[0] + 0, amount * exact[1] + 0)
    if turned >= 180:  # in decimals, so that theta and theta + 180 cancel exactly
        return -from_base(amount, turned - 180)
    degrees = float(turned)
    return Prism(
        from_float(float(amount) * cosine(degrees)), from_float(float(amount) * sine(degrees))
    )


def base_of_word(eye: Eye, word: Word) -> Decimal:
    """The base in degrees of in, out, up or down: the only place that knows the eye's side.

    Arguments: `eye` right or left; `word`. Returns degrees. Source: ISO 8429:1986.

    >>> base_of_word("right", "in"), base_of_word("left", "in")
    (Decimal('0'), Decimal('180'))
    """
    if word == "up":
        return Decimal(90)
    if word == "down":
        return Decimal(270)
    return Decimal(0) if (eye == "right") == (word == "in") else Decimal(180)


def horizontal_word(eye: Eye, x: Decimal) -> Word | None:
    """Name the horizontal direction of a vector on this eye: in, out, or None for neither.

    Arguments: `eye`; `x` prism dioptres to the observer's right.

    >>> horizontal_word("left", Decimal("-1"))
    'in'
    """
    if not snap(x):
        return None
    return "in" if (x > 0) == (eye == "right") else "out"


def vertical_word(y: Decimal) -> Word | None:
    """Name the vertical direction of a vector: up, down, or None for neither.

    Arguments: `y` prism dioptres upwards.

    >>> vertical_word(Decimal("-1"))
    'down'
    """
    if not snap(y):
        return None
    return "up" if y > 0 else "down"


def total(prisms: Iterable[Prism]) -> Prism:
    """Add prisms as vectors. Thin prisms only: strong stacked prisms do not add.

    Arguments: prisms in prism dioptres. Returns their sum.

    >>> total([from_base(Decimal(3), Decimal(10)), from_base(Decimal(3), Decimal(190))]) == NO_PRISM
    True
    """
    return sum(prisms, NO_PRISM)
