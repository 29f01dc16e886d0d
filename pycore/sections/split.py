"""The section `split`: other ways to share the prescribed prism, and what each would cost.

In the report, under `split`: a list of {`kind` (as-ordered, halves, all-right, all-left,
equal-edges, equal-weight), `right` and `left` PRISM as prescribed, `expected` with both PRISMs
the lens meter would show, `edges` of each lens (`centre_mm`, `thickest_mm`, `thinnest_mm`,
`weight_g`), the pair's `thickest_mm` and `weight_g`, `reached` (False: no share makes both lenses
equal, this is the nearest), `needs_agreement` of the prescriber}.
"""

from collections.abc import Iterator, Mapping

from pycore.bench.split import Share, pulls_together, shares
from pycore.case import Case
from pycore.decimals import snap
from pycore.names import Entry, prism_entry
from pycore.optics.prism import EYES, Eye, Prism
from pycore.optics.surface import OutsideSurfaceError
from pycore.scenes.split import split_scene
from pycore.sections.answer import Row, SectionAnswer
from pycore.sections.framing import (
    asks_for,
    edge_summary,
    framings_of,
    grams,
    rounded,
    row_of,
    tenths,
)
from pycore.words import say

WORTH_MM = 0.1  # a thinner thickest edge worth speaking of
Notes = tuple[tuple[str, Mapping[str, str]], ...]


def split_section(case: Case) -> SectionAnswer:
    """Answer for one case: how else the prism could be shared. Arguments: `case`."""
    orders = {order.eye: order for order in case.job.orders}
    if len(orders) < len(EYES):
        return SectionAnswer(title="one-lens")
    if any(order.partner for order in orders.values()):
        return SectionAnswer(title="partner")
    ordered = {eye: orders[eye].prescribed.prism_total for eye in EYES}
    if not any(snap(prism.amount) for prism in ordered.values()):
        return SectionAnswer(title="no-prism")
    beyond = {eye: case.dues[eye].expected - ordered[eye] for eye in EYES}
    framings = framings_of(case)
    lenses = {eye: framing.lens for eye, framing in framings.items()} if len(framings) == 2 else {}
    extra: Notes = ()
    try:
        found = shares(ordered, beyond, lenses)
    except OutsideSurfaceError:
        found = shares(ordered, beyond, {})
        extra = (("beyond-surface", {}),)
    title, params = _title(found)
    entries = {share.kind: _entry(share) for share in found}
    return SectionAnswer(
        title=title,
        title_params=params,
        own=list(entries.values()),
        rows=tuple(_rows(found, entries)),
        asks=asks_for(framings.values(), case.job),
        notes=(*_notes(case, found, ordered), *extra),
        draw=lambda: {"pair": split_scene(lenses, found)} if found[0].edges else {},
    )


def _title(found: tuple[Share, ...]) -> tuple[str, Mapping[str, str]]:
    if len(found) == 1:
        return "nothing-to-share", {}
    ordered = found[0].thickest_mm
    if ordered is None:
        return "ways", {}
    best = min(found, key=lambda share: share.thickest_mm or 0.0)
    least = best.thickest_mm or 0.0
    params = {"number": tenths(least), "ordered": tenths(ordered)}
    if ordered - least < WORTH_MM:
        return "as-good", params
    return "thinner", {"kind": say(f"split_kinds.{best.kind}"), **params}


def _entry(share: Share) -> Entry:
    prisms = {eye: prism_entry(eye, share.prisms[eye]) for eye in EYES}
    expected = {eye: _same_or_new(eye, share, prisms[eye]) for eye in EYES}
    return {
        "kind": share.kind,
        "right": prisms["right"],
        "left": prisms["left"],
        "expected": expected,
        "edges": {eye: edge_summary(edge) for eye, edge in share.edges.items()},
        "thickest_mm": rounded(share.thickest_mm),
        "weight_g": rounded(share.weight_g),
        "reached": share.reached,
        "needs_agreement": share.needs_agreement,
    }


def _same_or_new(eye: Eye, share: Share, prescribed: Entry) -> Entry:
    """Without thinning the lens meter shows what is prescribed."""
    if share.expected[eye] == share.prisms[eye]:
        return prescribed
    return prism_entry(eye, share.expected[eye])


def _rows(found: tuple[Share, ...], entries: Mapping[str, Entry]) -> Iterator[Row]:
    for share in found:
        entry = entries[share.kind]
        texts = {eye: _lens_text(entry, share, eye) for eye in EYES}
        pair = [grams(share.weight_g)]
        if share.needs_agreement:
            pair.append(say("text.needs-agreement"))
        if not share.reached:
            pair.append(say("text.nearest-there-is"))
        yield row_of(share.kind, texts, ", ".join(filter(None, pair)))


def _lens_text(entry: Entry, share: Share, eye: Eye) -> str:
    """The prescribed components, what the lens meter shows, and the thickest edge."""
    prescribed = entry[eye]["shown"]["components"]
    expected = entry["expected"][eye]["shown"]["text"]
    edge = share.edges.get(eye)
    if edge is None:
        return say("text.share", prescribed=prescribed, expected=expected)
    return say(
        "text.share-with-edge",
        prescribed=prescribed,
        expected=expected,
        thickest=tenths(edge.thickest[1]),
    )


def _notes(case: Case, found: tuple[Share, ...], ordered: Mapping[Eye, Prism]) -> Notes:
    notes: list[tuple[str, Mapping[str, str]]] = []
    if len(found) > 1:
        notes.append(("only-with-agreement", {}))
        if pulls_together(ordered):
            notes.append(("shared-part", {}))
    if any(not due_.vertical_known for due_ in case.dues.values()):
        notes.append(("thinning-unknown", {}))
    return tuple(notes)
