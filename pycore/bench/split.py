"""How else could the prescribed prism be shared between the eyes, and what would each way cost?

What both eyes see together is the difference of the two prisms, right minus left, as vectors:
every way keeps it. Sharing is the prescriber's decision: each way but the order's own is marked
so. Prism due beyond the prescription (thinning, compensation) stays with its lens.
"""

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace
from decimal import ROUND_HALF_EVEN, Decimal
from functools import cache

from pycore.bench.edge import COARSE, Edge, FramedLens, edge_of
from pycore.decimals import snap
from pycore.optics.prism import EYES, Eye, Prism

HUNDREDTH = Decimal("0.01")
NONE, HALF, ALL = Decimal(0), Decimal("0.5"), Decimal(1)
EQUAL = 0.05  # mm, or grams: nobody measures a lens closer
NO_NARROWER = 1e-4
Pair = Mapping[Eye, Prism]


@dataclass(frozen=True, slots=True, kw_only=True)
class Share:
    """One way to share: `prisms` prescribed, `expected` what the lens meter shows (both in prism
    dioptres), `edges` where the frame is known; `reached` False where no share makes both lenses
    equal and this is the nearest; `needs_agreement` of the prescriber."""

    kind: str
    prisms: Pair
    expected: Pair
    edges: Mapping[Eye, Edge]
    reached: bool = True
    needs_agreement: bool = True

    @property
    def thickest_mm(self) -> float | None:
        """The thickest edge of the pair in mm, or None without a frame."""
        return max((edge.thickest[1] for edge in self.edges.values()), default=None)

    @property
    def weight_g(self) -> float | None:
        """The pair's weight in grams, or None without a frame or a density."""
        weights = [edge.weight_g for edge in self.edges.values() if edge.weight_g is not None]
        return sum(weights) if len(weights) == len(EYES) else None


def together(prisms: Pair) -> Prism:
    """What both eyes see together: right minus left, in prism dioptres; + is base in, right up.

    >>> together({"right": Prism(Decimal(0), Decimal(3)), "left": Prism(Decimal(-4), Decimal(0))})
    Prism(x=Decimal('4'), y=Decimal('3'))
    """
    return prisms["right"] - prisms["left"]


def shared(whole: Prism, part: Decimal) -> dict[Eye, Prism]:
    """The prism of the pair with `part` of it (0 to 1) in the right lens, the rest in the left.

    Arguments: `whole` prism dioptres, right minus left. Returns both lenses' prisms; the right
    one rounded to 0.01 unless it is a half, the difference exact. Source: facts 4.18; worked
    example of an opticianry course (OPH 142): R 3 up, L 4 in is R 1.5 up 2 in, L 1.5 down 2 in.

    >>> shared(Prism(Decimal(4), Decimal(3)), Decimal("0.5"))["left"]
    Prism(x=Decimal('-2.0'), y=Decimal('-1.5'))
    """
    right = whole.times(part)
    if part not in (NONE, HALF, ALL):
        right = Prism(_to_hundredths(right.x), _to_hundredths(right.y))
    return {"right": right, "left": right - whole}


def _to_hundredths(value: Decimal) -> Decimal:
    return value.quantize(HUNDREDTH, ROUND_HALF_EVEN)


def pulls_together(prisms: Pair) -> bool:
    """Tell whether both lenses carry prism the same way (a shared part, perhaps meant), which
    any other way to share would take out: both up, both down, or in on one and out on the other.

    >>> up = Prism(Decimal(0), Decimal(2))
    >>> pulls_together({"right": up, "left": up})
    True
    """
    right, left = prisms["right"], prisms["left"]
    return right.x * left.x > 0 or right.y * left.y > 0


def shares(ordered: Pair, beyond: Pair, lenses: Mapping[Eye, FramedLens]) -> tuple[Share, ...]:
    """All ways to share a pair's prism, the order's own first.

    Arguments: `ordered` prescribed prisms; `beyond` what each lens is due on top of them, both in
    prism dioptres; `lenses` in their rims, empty where the frame is not known. Returns the ways;
    the order's own alone where there is nothing to share. Raises OutsideSurfaceError.
    """

    @cache
    def edge(eye: Eye, prism: Prism) -> Edge:
        return edge_of(lenses[eye], prism, COARSE)

    def way(kind: str, prisms: Pair) -> Share:
        expected = {eye: prisms[eye] + beyond[eye] for eye in EYES}
        return Share(
            kind=kind,
            prisms=prisms,
            expected=expected,
            edges={eye: edge(eye, expected[eye]) for eye in lenses},
            needs_agreement=any(snap((prisms[eye] - ordered[eye]).amount) for eye in EYES),
        )

    whole = together(ordered)
    found = [way("as-ordered", ordered)]
    if not snap(whole.amount):
        return tuple(found)
    halves = way("halves", shared(whole, HALF))
    right, left = way("all-right", shared(whole, ALL)), way("all-left", shared(whole, NONE))
    found += [halves, right, left]
    for kind, measure in (("equal-edges", _by_edges), ("equal-weight", _by_weight)):
        if all(measure(share) is not None for share in (left, halves, right)):
            found.append(_equal(kind, whole, way, measure, (left, halves, right)))
    return tuple(found)


def _by_edges(share: Share) -> float | None:
    """The thickest edge, right minus left, in mm."""
    if len(share.edges) < len(EYES):
        return None
    return share.edges["right"].thickest[1] - share.edges["left"].thickest[1]


def _by_weight(share: Share) -> float | None:
    """The weight, right minus left, in grams."""
    weights = [share.edges[eye].weight_g for eye in EYES if eye in share.edges]
    if len(weights) < len(EYES) or weights[0] is None or weights[1] is None:
        return None
    return weights[0] - weights[1]


def _equal(
    kind: str,
    whole: Prism,
    way: Callable[[str, Pair], Share],
    measure: Callable[[Share], float | None],
    known: tuple[Share, Share, Share],
) -> Share:
    """The way to share that makes both lenses measure the same, or the nearest there is.

    `known` are the shares with none, half and all of the prism in the right lens.
    """
    parts = [0.0, 0.5, 1.0]
    misses = [measure(share) or 0.0 for share in known]
    side = next((end for end in (0, 1) if misses[end] * misses[end + 1] <= 0), None)
    if side is None:
        nearest = min(known, key=lambda share: abs(measure(share) or 0.0))
        return replace(nearest, kind=kind, reached=False)
    low, high = parts[side], parts[side + 1]
    miss_low, miss_high = misses[side], misses[side + 1]
    part, moved = _root_of_parabola(misses, low, high), ""
    while True:
        share = way(kind, shared(whole, Decimal(part)))
        miss = measure(share) or 0.0
        if abs(miss) <= EQUAL or high - low < NO_NARROWER:
            return share
        # An end that stays twice has its miss halved (the Illinois rule), or it would stay on.
        if miss * miss_high > 0:
            miss_low /= 2.0 if moved == "high" else 1.0
            high, miss_high, moved = part, miss, "high"
        else:
            miss_high /= 2.0 if moved == "low" else 1.0
            low, miss_low, moved = part, miss, "low"
        # False position, a little from the ends at least, so that it comes to an end.
        share_of_way = miss_low / (miss_low - miss_high) if miss_low != miss_high else 0.5
        part = low + (high - low) * min(max(share_of_way, 0.02), 0.98)


def _root_of_parabola(misses: Sequence[float], low: float, high: float) -> float:
    """Where the parabola through the misses at 0, a half and 1 is zero, from `low` to `high`.

    It is so near the truth that the search mostly ends at its first look.
    """
    start, middle, end = misses
    bend, slope = 2.0 * (start - 2.0 * middle + end), 4.0 * middle - 3.0 * start - end
    span = slope * slope - 4.0 * bend * start
    roots = [-start / slope] if not bend and slope else []
    if bend and span >= 0.0:
        roots = [(-slope + sign * math.sqrt(span)) / (2.0 * bend) for sign in (-1.0, 1.0)]
    return next((root for root in roots if low <= root <= high), (low + high) / 2.0)
