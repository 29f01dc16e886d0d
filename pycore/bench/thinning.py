"""Which thinning fits this pair: one vertical prism for both lenses, and what it saves.

For each lens the amount is sought that makes its top and bottom edges equal, for its power, add,
height, frame and prescribed prism; minus lenses may want it base up. The pair gets one amount,
that of the lens which gets there first, so that neither lens is taken too far; where one lens
wants it up and the other down, no thinning fits both. Beside it stand the rules of thumb.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Decimal

from pycore.bench.edge import COARSE, Edge, FramedLens, edge_of
from pycore.bench.expected import SHARE_OF_ADD, THINNING_PLACES
from pycore.optics.prism import EYES, Eye, Prism
from pycore.optics.surface import OutsideSurfaceError
from pycore.optics.thickness import thicknesses

EQUAL_MM = 1e-6
MOST = 12.0  # prism dioptres; beyond, nothing is equalised by thinning
NOTICED = Decimal(2)  # 2 was not told from 0, 4 was refused: OPO 1987, 1475-1313.1987.tb00742.x


@dataclass(frozen=True, slots=True, kw_only=True)
class Choice:
    """One way to thin the pair: `rule`; `up`, prism dioptres, minus for base down; both edges."""

    rule: str
    up: Decimal
    edges: Mapping[Eye, Edge]

    @property
    def weight_g(self) -> float | None:
        """The lenses' weight together in grams, or None without a density."""
        weights = [edge.weight_g for edge in self.edges.values()]
        known = [weight for weight in weights if weight is not None]
        return sum(known) if len(known) == len(weights) else None


@dataclass(frozen=True, slots=True, kw_only=True)
class Thinnings:
    """What fits: `each` lens's own amount (None where nothing makes its edges equal), the amount
    for the pair, and the choices, the first without thinning."""

    each: Mapping[Eye, float | None]
    fits: Decimal
    choices: tuple[Choice, ...]


def equalising(lens: FramedLens, prescribed: Prism) -> float | None:
    """The vertical prism that makes a lens's top and bottom edges equally thick.

    Arguments: `lens`; `prescribed` prism dioptres. Returns prism dioptres, up positive, or None
    where no amount within reason does. Top and bottom lie straight above and below the boxing
    centre. Source: exact sagitta and wedge; facts 4.11.
    """
    rim = lens.rim
    ends = (rim.points[rim.index_at(90.0)], rim.points[rim.index_at(270.0)])
    centre_mm = lens.centre_mm or lens.minimum_centre_mm

    def difference_mm(up: float) -> float:
        solid = lens.with_prism(Prism(prescribed.x, prescribed.y + Decimal(up)))
        top, bottom = thicknesses(solid, centre_mm, ends)
        return top - bottom

    low, high = 0.0, 1.0
    try:
        at_low, at_high = difference_mm(low), difference_mm(high)
        while abs(at_high) > EQUAL_MM:  # nearly a straight line: the secant needs three steps
            low, high = high, high - at_high * (high - low) / (at_high - at_low)
            if abs(high) > MOST:
                return None
            at_low, at_high = at_high, difference_mm(high)
    except OutsideSurfaceError:
        return None
    return high


def amount_for_pair(wanted: Mapping[Eye, float | None]) -> Decimal:
    """The one amount that both lenses bear: the smaller where they agree in direction, else none.

    Arguments: each lens's own amount, prism dioptres, up positive (None: no amount helps it).
    Returns the same, rounded to 0.01 as paperwork states it.

    >>> amount_for_pair({"right": -1.238, "left": -0.9})
    Decimal('-0.90')
    >>> amount_for_pair({"right": -1.0, "left": 0.4})
    Decimal('0')
    """
    amounts = list(wanted.values())
    known = [amount for amount in amounts if amount is not None]
    if len(known) < len(amounts) or not known or min(known) * max(known) <= 0:
        return Decimal(0)
    least = min(known, key=abs)
    return Decimal(repr(least)).quantize(THINNING_PLACES, ROUND_HALF_EVEN) + 0


def thinnings(
    lenses: Mapping[Eye, FramedLens],
    prescribed: Mapping[Eye, Prism],
    add: Decimal,
    stated: Mapping[str, Decimal],
) -> Thinnings:
    """All choices for a pair (or for the one lens there is).

    Arguments: `lenses`; `prescribed` prism dioptres; `add` the smaller one, dioptres; `stated`
    amounts by rule that are to be shown too, up positive. Returns the Thinnings. Raises
    OutsideSurfaceError. Source: rules of thumb 2/3 and 0.6 of the add, base down: technical brief
    "Understanding Prism-Thinning", vol. 26 no. 35, October 1998.
    """
    each = {eye: equalising(lens, prescribed[eye]) for eye, lens in lenses.items()}
    fits = amount_for_pair(each)
    amounts = {"none": Decimal(0), "fits": fits}
    for rule, share in SHARE_OF_ADD.items():
        amounts[rule] = -(add * share).quantize(THINNING_PLACES, ROUND_HALF_EVEN)
    amounts |= stated
    done: dict[Decimal, Mapping[Eye, Edge]] = {}
    for up in amounts.values():
        if up not in done:
            done[up] = {
                eye: edge_of(lenses[eye], prescribed[eye] + Prism(Decimal(0), up), COARSE)
                for eye in EYES
                if eye in lenses
            }
    choices = tuple(Choice(rule=rule, up=up, edges=done[up]) for rule, up in amounts.items())
    return Thinnings(each=each, fits=fits, choices=choices)
