"""How much colour fringe does each lens have, at its reference point and where one reads?

And where do the formulas and the usual thresholds end? All thresholds are practice, no standard.
"""

from dataclasses import dataclass
from decimal import Decimal

from pycore.bench.reading import THIN_LIMIT, LensAtReading
from pycore.decimals import snap
from pycore.optics.power import Power
from pycore.optics.prism import Prism

FRINGE_LIMIT = Decimal("0.1")  # prism dioptres; the usual threshold, from memory
# Thin formulas are off by several per cent beyond these (domain facts 4.17).
STRONG_POWER = Decimal(6)
FAR_MM = Decimal(10)


@dataclass(frozen=True, slots=True, kw_only=True)
class Fringe:
    """The colour fringe at one point: `prism` there and its share `amount`, prism dioptres."""

    where: str
    prism: Prism
    amount: Decimal

    @property
    def above_usual(self) -> bool:
        """Tell whether the fringe is above the usual threshold."""
        return snap(self.amount) > FRINGE_LIMIT

    @property
    def beyond_thin(self) -> bool:
        """Tell whether the prism is beyond the thin-prism formulas."""
        return snap(self.prism.amount) > THIN_LIMIT


@dataclass(frozen=True, slots=True, kw_only=True)
class Colour:
    """One lens's colour: Abbe number used, fringes, spread of power along its strongest meridian
    in dioptres; `far` where the reading point is far out in a strong lens."""

    abbe: Decimal
    fringes: tuple[Fringe, ...]
    spread_d: Decimal
    far: bool


def transverse(prism: Prism, abbe: Decimal) -> Decimal:
    """Transverse chromatic aberration of a prism, in prism dioptres.

    Arguments: `prism` in prism dioptres; `abbe` number. Source: P/ν, domain facts 4.19.

    >>> transverse(Prism(Decimal(3), Decimal(0)), Decimal(30))
    Decimal('0.1')
    """
    return prism.amount / abbe


def dioptric_spread(power: Power, abbe: Decimal) -> Decimal:
    """How far the power differs between the ends of the spectrum, in dioptres, never negative.

    Arguments: `power`; `abbe` number. Source: F/ν, trade article on chromatic aberration.

    >>> dioptric_spread(Power(Decimal(6)), Decimal(30))
    Decimal('0.2')
    """
    return power.strongest / abbe


def colour_of(at: LensAtReading, abbe: Decimal) -> Colour:
    """One lens's colour. Arguments: `at` the lens at its points; `abbe` number. Returns it."""
    distance_sq = at.point.right_mm**2 + at.point.up_mm**2
    return Colour(
        abbe=abbe,
        fringes=tuple(
            Fringe(where=where, prism=prism, amount=transverse(prism, abbe))
            for where, prism in (("reference", at.distance), ("reading", at.prism))
        ),
        spread_d=dioptric_spread(at.power, abbe),
        far=at.reading_power.strongest > STRONG_POWER and distance_sq > FAR_MM**2,
    )
