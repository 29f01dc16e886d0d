"""What a lens material usually is: Abbe number and density by index, never taken silently."""

from dataclasses import dataclass
from decimal import Decimal

NEAR_ENOUGH = Decimal("0.012")  # index; the same material is stated for lines d and e


@dataclass(frozen=True, slots=True)
class Material:
    """A usual lens material: index, Abbe number, density in g/cm³."""

    index: Decimal
    abbe: Decimal
    density_g_cm3: Decimal


# From memory; where usual figures spread (1.53: 43 to 45, 1.56: 36 to 40) the smaller Abbe
# number, so that colour is not made to look less than it may be.
_MATERIALS = tuple(
    Material(Decimal(index), Decimal(abbe), Decimal(density))
    for index, abbe, density in (
        ("1.498", "58", "1.32"),
        ("1.523", "58.6", "2.54"),
        ("1.53", "43", "1.11"),
        ("1.56", "36", "1.27"),
        ("1.586", "30", "1.20"),
        ("1.60", "41", "1.30"),
        ("1.67", "32", "1.35"),
        ("1.74", "33", "1.47"),
    )
)


def usual_material(index: Decimal) -> Material | None:
    """The usual material of an index, or None where no usual one is near.

    Arguments: `index` of refraction. Returns Abbe number and density (g/cm³). Source: from
    memory (supplier data rule); to be shown as assumed wherever it is used.

    >>> usual_material(Decimal("1.59")).abbe
    Decimal('30')
    >>> usual_material(Decimal("1.90")) is None
    True
    """
    nearest = min(_MATERIALS, key=lambda material: abs(material.index - index))
    return nearest if abs(nearest.index - index) <= NEAR_ENOUGH else None
