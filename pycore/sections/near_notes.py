"""What the section `near` has to say beside its figures."""

from collections.abc import Iterator, Mapping

from pycore.bench.near import SLAB_LEAST, SLAB_MOST, Near
from pycore.bench.reading import THIN_LIMIT, LensAtReading
from pycore.case import Case
from pycore.decimals import fixed, snap
from pycore.optics.prism import Eye, Prism
from pycore.sections.near_slab import amount_text, pair_text

Note = tuple[str, Mapping[str, str]]


def near_notes(
    case: Case,
    near: Near | None,
    lenses: Mapping[Eye, LensAtReading],
    effects: Mapping[Eye, Prism | None],
) -> Iterator[Note]:
    """The notes. Arguments: `case`; `near` of the pair; `lenses`; `effects` what each eye gets."""
    for eye, lens in lenses.items():
        if lens.outside_segment:
            yield "outside-segment", {"eye": eye}
        if lens.beyond_thin:
            amount = max(lens.prism.amount, lens.distance.amount)
            yield "beyond-thin", {"eye": eye, "amount": amount_text(amount, THIN_LIMIT)}
        if effects[eye] is None:
            yield "effective-unknown", {"eye": eye}
    if not all(due_.vertical_known for due_ in case.dues.values()):
        yield "thinning-not-known", {}
    if any(lens.open_add for lens in lenses.values()):
        yield "progressive-not-modelled", {}
    if near:
        yield from _pair_notes(near)


def _pair_notes(near: Near) -> Iterator[Note]:
    if snap(near.open_adds):
        yield "progressive-adds-differ", {"amount": fixed(near.open_adds, 2)}
    if not near.vertical_known:
        yield "segments-unknown", {}
        return
    if near.alike:
        yield "segments-alike", {}
    if snap(near.distance.vertical):
        ordered = pair_text("vertical", near.distance.vertical)
        yield "prescribed-stays", {"amount": ordered}
    if near.beyond_usual:
        yield "above-usual", {"limit": fixed(SLAB_MOST, 2)}
    if near.advised:
        yield "slab-memory", {}
    elif near.slabs:
        yield "below-threshold", {"limit": fixed(SLAB_LEAST, 2)}
