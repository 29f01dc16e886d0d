"""The slab's part of the section `near`: how it is ordered, where it lies, how it is verified."""

from collections.abc import Iterator, Mapping
from decimal import Decimal

from pycore.bench.body import body_values
from pycore.bench.near import (
    SLAB_LEAST,
    STEPS,
    Near,
    PairPrism,
    Slab,
    clock_difference,
    pair_prism,
    round_segments_difference_mm,
    slab_line,
    with_slab,
)
from pycore.bench.reading import LensAtReading
from pycore.case import Case
from pycore.decimals import fixed, places_to_tell_apart, snap
from pycore.names import Entry, number, prism_entry
from pycore.optics.prism import EYES, Eye
from pycore.sections.answer import Row
from pycore.words import say

Lenses = Mapping[Eye, LensAtReading]


def amount_text(amount: Decimal, limit: Decimal) -> str:
    """An amount with as many decimals as tell it from its limit. Arguments and limit in one unit.

    >>> amount_text(Decimal("1.4996"), Decimal("1.5"))
    '1.4996'
    """
    amount = snap(amount)
    return fixed(amount, places_to_tell_apart(amount, limit))


def pair_text(component: str, value: Decimal) -> str:
    """A pair's component with its sense in words. Arguments: vertical or horizontal; Δ."""
    sense = "zero" if not snap(value) else "plus" if value > 0 else "minus"
    return say(f"text.pair-{component}-{sense}", amount=fixed(abs(value), 2))


def pair_texts(pair: PairPrism) -> str:
    """Both components of a pair in words. Arguments: `pair` in prism dioptres."""
    parts = (pair_text("vertical", pair.vertical), pair_text("horizontal", pair.horizontal))
    return ", ".join(parts)


def millimetres(value: Decimal) -> str:
    """A length with its unit, to the tenth. Arguments: `value` mm."""
    return say("text.millimetres", number=fixed(value, 1))


def eye_row(code: str, texts: Mapping[Eye, str], *, assumed: bool = False) -> Row:
    """A row with a text for each lens. Arguments: `code`; `texts` by eye; `assumed`."""
    return Row(code=code, right=texts.get("right", ""), left=texts.get("left", ""), assumed=assumed)


def shown_texts(prisms: Mapping[str, Entry | None]) -> dict[Eye, str]:
    """The texts of prisms already written for the report. Arguments: `prisms` by eye."""
    return {eye: entry["shown"]["text"] for eye in EYES if (entry := prisms.get(eye))}


def slab_entry(case: Case, near: Near, lenses: Lenses) -> Entry:
    """The slab as the report writes it: slab-off, with the reverse slab as `other`.

    Arguments: `case`; `near`; `lenses`. Returns amounts in prism dioptres, lengths in mm.
    """
    if not near.slabs:
        none: Entry = {"eye": None, "amount": 0.0, "kind": "none", "advised": False}
        return none | {"threshold": number(SLAB_LEAST)}
    first, second = (_one_slab(case, near, lenses, slab) for slab in near.slabs)
    first |= {
        "advised": near.advised,
        "threshold": number(SLAB_LEAST),
        "other": second,
    }
    return first


def _one_slab(case: Case, near: Near, lenses: Lenses, slab: Slab) -> Entry:
    line, shown = slab_line(lenses[slab.eye]), with_slab(lenses, slab)
    after = pair_prism(shown["right"], shown["left"])
    return {
        "kind": slab.kind,
        "eye": slab.eye,
        "base": slab.base,
        "amount": number(slab.amount),
        "in_steps": number(slab.in_steps),
        "step": number(STEPS[slab.kind]),
        "line": {
            "up_from_prp_mm": None if line.up_mm is None else number(line.up_mm),
            "height_mm": None if line.height_mm is None else number(line.height_mm),
            "at_segment_top": line.at_segment,
        },
        "verify": {
            **{eye: prism_entry(eye, shown[eye]) for eye in EYES},
            "vertical": number(after.vertical),
            "left_over": number(after.vertical - near.distance.vertical),
            "clock_difference_d": number(_clock(case, lenses[slab.eye], slab)[0]),
            "shown": {"vertical": pair_text("vertical", after.vertical)},
        },
        "shown": {
            "amount": say("text.prism-dioptres", number=amount_text(slab.amount, SLAB_LEAST)),
            "in_steps": say("text.prism-dioptres", number=fixed(slab.in_steps, 2)),
        },
    }


def _clock(case: Case, lens: LensAtReading, slab: Slab) -> tuple[Decimal, bool]:
    """What a lens clock shows more across the line, in dioptres; whether the index is usual."""
    body = body_values(lens.order, case.job.frame)
    assert body is not None  # a lens at its reading point has a power
    return clock_difference(slab.in_steps, body.index), "lens.index" in body.usual


def slab_rows(
    case: Case, near: Near, lenses: Lenses, entry: Entry, *, assumed: bool
) -> Iterator[Row]:
    """The rows of the slab; how to order and verify it only where one is due.

    Arguments: `case`; `near`; `lenses`; `entry` as `slab_entry` gives it; `assumed` whether a
    usual value stands behind it.
    """
    for slab in near.slabs:
        yield eye_row(slab.kind, {slab.eye: _component(slab.amount, slab)}, assumed=assumed)
    if near.advised:
        for slab, made in zip(near.slabs, (entry, entry["other"]), strict=True):
            yield from _order_rows(case, lenses, slab, made["verify"], assumed=assumed)
        yield from _round_rows(near, lenses, assumed=assumed)


def _component(amount: Decimal, slab: Slab) -> str:
    word = say(f"directions.{slab.base}")
    return say("text.component", amount=amount_text(amount, SLAB_LEAST), word=word)


def _order_rows(
    case: Case, lenses: Lenses, slab: Slab, verify: Entry, *, assumed: bool
) -> Iterator[Row]:
    """One kind of slab: in its steps, its line, and what both instruments then show."""
    steps = {slab.eye: _component(slab.in_steps, slab)}
    yield eye_row(f"{slab.kind}-steps", steps, assumed=assumed)
    line = slab_line(lenses[slab.eye])
    for code, value in (("line-height", line.height_mm), ("line-from-prp", line.up_mm)):
        if value is not None:
            yield eye_row(
                f"{slab.kind}-{code}", {slab.eye: millimetres(value)}, assumed=not line.at_segment
            )
    yield eye_row(f"{slab.kind}-verify", shown_texts(verify), assumed=assumed)
    yield Row(code=f"{slab.kind}-verify-pair", pair=verify["shown"]["vertical"], assumed=assumed)
    clock, usual_index = _clock(case, lenses[slab.eye], slab)
    text = say("text.dioptres", number=fixed(clock, 2))
    yield eye_row(f"{slab.kind}-clock", {slab.eye: text}, assumed=assumed or usual_index)


def _round_rows(near: Near, lenses: Lenses, *, assumed: bool) -> Iterator[Row]:
    """Unlike round segments instead of a slab, where both lenses have round segments."""
    places = [lens.segment for lens in lenses.values()]
    adds = {place.add for place in places if place and place.is_round}
    if all(place and place.is_round for place in places) and len(adds) == 1:
        wider_mm = round_segments_difference_mm(near.change.vertical, adds.pop())
        eye = near.slabs[1].eye
        yield eye_row("round-segments", {eye: millimetres(wider_mm)}, assumed=assumed)
