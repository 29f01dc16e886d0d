"""What would a split, thinning or another index change in the edges, each by itself?"""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from decimal import Decimal

from pycore.bench.edge import COARSE, Edge, FramedLens, Framing, edge_of, in_other_index
from pycore.bench.expected import Due
from pycore.bench.split import HALF, shared, together
from pycore.bench.thinning import amount_for_pair, equalising
from pycore.decimals import snap
from pycore.optics.prism import EYES, NO_PRISM, Eye, Prism
from pycore.optics.surface import OutsideSurfaceError

Lenses = Mapping[Eye, FramedLens]
Prisms = Mapping[Eye, Prism]


@dataclass(frozen=True, slots=True, kw_only=True)
class Option:
    """One change: `kind` (split, thinning, index), its figure (the thinning in prism dioptres, up
    positive, or the indices of the lenses), and the edges after it."""

    kind: str
    figures: tuple[Decimal, ...]
    edges: Mapping[Eye, Edge]


def options_of(framings: Mapping[Eye, Framing], dues: Mapping[Eye, Due]) -> list[Option]:
    """The changes that can be reckoned for these lenses.

    Arguments: `framings` and `dues` by eye. Returns the options; one that no surface would
    reach, or that is there already, is left out. A split needs the prescriber's agreement.
    """
    found = []
    for kind, figures, lenses, prisms in _changes(framings, dues):
        try:
            edges = {eye: edge_of(lens, prisms[eye], COARSE) for eye, lens in lenses.items()}
        except OutsideSurfaceError:
            continue
        found.append(Option(kind=kind, figures=figures, edges=edges))
    return found


def _changes(
    framings: Mapping[Eye, Framing], dues: Mapping[Eye, Due]
) -> Iterator[tuple[str, tuple[Decimal, ...], Lenses, Prisms]]:
    lenses = {eye: framing.lens for eye, framing in framings.items()}
    expected = {eye: dues[eye].expected for eye in lenses}
    if len(lenses) == len(EYES):
        ordered = {eye: dues[eye].prescribed for eye in EYES}
        halves = shared(together(ordered), HALF)
        if any(snap((halves[eye] - ordered[eye]).amount) for eye in EYES):
            split = {eye: expected[eye] - ordered[eye] + halves[eye] for eye in EYES}
            yield "split", (), lenses, split
    up = _fitting(lenses, dues)
    if up:
        thinned = {eye: dues[eye].prescribed + Prism(Decimal(0), up) for eye in lenses}
        yield "thinning", (up,), lenses, thinned
    others = {eye: in_other_index(framing) for eye, framing in framings.items()}
    known = {eye: other for eye, other in others.items() if other}
    if known and len(known) == len(lenses):
        indices = tuple(sorted({index for index, _ in known.values()}))
        yield "index", indices, {eye: lens for eye, (_, lens) in known.items()}, expected


def _fitting(lenses: Lenses, dues: Mapping[Eye, Due]) -> Decimal:
    """The thinning that fits (none for lenses without an add), prism dioptres, up positive."""
    if not any(dues[eye].add for eye in lenses):
        return Decimal(0)
    up = amount_for_pair(
        {eye: equalising(lens, dues[eye].prescribed) for eye, lens in lenses.items()}
    )
    there = {(dues[eye].thinning or NO_PRISM).y for eye in lenses}
    return Decimal(0) if there == {up} else up
