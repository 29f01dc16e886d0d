"""The section `thinning`: the one thinning that fits the pair, beside the rules of thumb.

In the report, under `thinning`: `fits` (amount, base, `y` prism dioptres up positive), `each`
lens's own amount before the pair's is chosen, `choices` by `rule` (none, fits, two-thirds,
six-tenths, and the order's own amount as `ordered`), each with `right` and `left` (`centre_mm`,
`thickest_mm`, `thinnest_mm`, `top_mm`, `bottom_mm`, `weight_g`), the pair's `weight_g`, and what
it saves against none: `saved_centre_mm`, `saved_thickest_mm` (of the lens where it is least),
`saved_weight_g`.
"""

from collections.abc import Iterator, Mapping
from decimal import Decimal

from pycore.bench.edge import Framing
from pycore.bench.expected import smaller_add
from pycore.bench.thinning import NOTICED, Choice, Thinnings, thinnings
from pycore.case import Case
from pycore.decimals import from_float
from pycore.job.document import Job
from pycore.names import Entry, thinning_text
from pycore.optics.prism import EYES, Eye, Prism
from pycore.optics.surface import OutsideSurfaceError
from pycore.scenes.thinning import thinning_scene
from pycore.sections.answer import Row, SectionAnswer
from pycore.sections.framing import (
    asks_for,
    edge_summary,
    framings_of,
    grams,
    material_rows,
    millimetres,
    rounded,
    row_of,
    signed_amount,
    takes_usual_values,
    tenths,
)
from pycore.words import say

WORTH = 0.05  # mm, or grams: less shows as nothing
Notes = list[tuple[str, Mapping[str, str]]]


def thinning_section(case: Case) -> SectionAnswer:
    """Answer for one case: what thinning fits, what it saves. Arguments: `case`."""
    add = smaller_add(case.job)
    if not add:
        return SectionAnswer(title="no-add")
    framings = framings_of(case)
    asks = asks_for(framings.values(), case.job)
    if not framings:
        return SectionAnswer(title="frame-missing", asks=asks)
    lenses = {eye: framing.lens for eye, framing in framings.items()}
    prescribed = {eye: _prescribed(case.job, eye) for eye in framings}
    try:
        found = thinnings(lenses, prescribed, add, _stated(case.job))
    except OutsideSurfaceError:
        return SectionAnswer(title="beyond-surface", asks=asks)
    title, params = _title(found)
    bare, drawn = found.choices[0], _to_be_drawn(case, found)
    return SectionAnswer(
        title=title,
        title_params=params,
        own=_own(found),
        rows=tuple(_rows(found, framings)),
        asks=asks,
        notes=tuple(_notes(case, found, framings)),
        draw=lambda: {
            "pair": thinning_scene(lenses, prescribed, bare, drawn, thinning_text(drawn.up))
        },
    )


def _prescribed(job: Job, eye: Eye) -> Prism:
    """What the prescriber ordered: the maker's own values may have thinning in them already."""
    order = job.order(eye)
    return order.prescribed.prism_total if order else Prism(Decimal(0), Decimal(0))


def _stated(job: Job) -> dict[str, Decimal]:
    """The amount the paperwork states, if it states one, up positive."""
    thinning = job.thinning
    if thinning is None or thinning.rule != "amount" or thinning.amount is None:
        return {}
    return {"ordered": thinning.amount if thinning.base == "up" else -thinning.amount}


def _title(found: Thinnings) -> tuple[str, Mapping[str, str]]:
    if not found.fits:
        wanted = [amount for amount in found.each.values() if amount is not None]
        agree = len(wanted) == len(found.each) and min(wanted) * max(wanted) >= 0
        return ("none-needed" if agree else "none-fits"), {}
    bare, fits = found.choices[0], found.choices[1]
    thinner_mm, weight = _saved_thickest(bare, fits), _less(bare.weight_g, fits.weight_g)
    amount = {"amount": thinning_text(found.fits)}
    if max(thinner_mm, weight or 0.0) < WORTH:
        return "saves-little", amount
    texts = {"number": tenths(thinner_mm), "weight": grams(weight) or say("text.not-known")}
    return ("fits" if len(found.each) == len(EYES) else "fits-one"), amount | texts


def _to_be_drawn(case: Case, found: Thinnings) -> Choice:
    """What fits; where nothing does, what the order says, or else the first rule of thumb."""
    choices = {choice.rule: choice for choice in found.choices}
    if found.fits:
        return choices["fits"]
    rule = case.job.thinning.rule if case.job.thinning else ""
    return choices.get("ordered") or choices.get(rule) or choices["two-thirds"]


def _less(before: float | None, after: float | None) -> float | None:
    return None if before is None or after is None else before - after


def _saved_thickest(bare: Choice, choice: Choice) -> float:
    """By how much the thickest edge gets thinner, of the lens where it is least, in mm."""
    return min(bare.edges[eye].thickest[1] - edge.thickest[1] for eye, edge in choice.edges.items())


def _saved_centre(bare: Choice, choice: Choice) -> float:
    return min(bare.edges[eye].centre_mm - edge.centre_mm for eye, edge in choice.edges.items())


def _own(found: Thinnings) -> Entry:
    bare = found.choices[0]
    return {
        "fits": signed_amount(found.fits),
        "each": {eye: rounded(amount) for eye, amount in found.each.items()},
        "choices": [_choice_entry(bare, choice) for choice in found.choices],
    }


def _choice_entry(bare: Choice, choice: Choice) -> Entry:
    entry: Entry = {"rule": choice.rule, **signed_amount(choice.up)}
    for eye, edge in choice.edges.items():
        ends = {"top_mm": rounded(edge.at(90.0)), "bottom_mm": rounded(edge.at(270.0))}
        entry[eye] = edge_summary(edge) | ends
    return entry | {
        "weight_g": rounded(choice.weight_g),
        "saved_centre_mm": rounded(_saved_centre(bare, choice)),
        "saved_thickest_mm": rounded(_saved_thickest(bare, choice)),
        "saved_weight_g": rounded(_less(bare.weight_g, choice.weight_g)),
    }


def _rows(found: Thinnings, framings: Mapping[Eye, Framing]) -> Iterator[Row]:
    own = {eye: _amount_text(amount) for eye, amount in found.each.items()}
    yield row_of("each", own)
    for choice in found.choices:
        texts = {
            eye: say(
                "text.thinned",
                centre=tenths(edge.centre_mm),
                thickest=tenths(edge.thickest[1]),
                top=tenths(edge.at(90.0)),
                bottom=tenths(edge.at(270.0)),
            )
            for eye, edge in choice.edges.items()
        }
        pair = ", ".join(filter(None, (thinning_text(choice.up), grams(choice.weight_g))))
        yield row_of(f"choice-{choice.rule}", texts, pair)
    yield _saved_row(found)
    yield from material_rows(framings)


def _saved_row(found: Thinnings) -> Row:
    """What the thinning that fits saves: centre thickness of each lens, weight of the pair."""
    bare, fits = found.choices[0], found.choices[1]
    texts = {
        eye: millimetres(bare.edges[eye].centre_mm - edge.centre_mm)
        for eye, edge in fits.edges.items()
    }
    return row_of("saved", texts, grams(_less(bare.weight_g, fits.weight_g)))


def _amount_text(amount: float | None) -> str:
    return say("text.none-equalises") if amount is None else thinning_text(from_float(amount))


def _notes(case: Case, found: Thinnings, framings: Mapping[Eye, Framing]) -> Notes:
    notes: Notes = [("same-in-both", {})]
    designs = {order.lens.design for order in case.job.orders}
    notes.append(
        ("addition-estimated", {}) if "progressive" in designs else ("segment-left-out", {})
    )
    if len(found.each) < len(EYES):
        notes.append(("one-lens", {}))
    if any(order.partner for order in case.job.orders):
        notes.append(("match-partner", {}))
    if abs(found.fits) > NOTICED:
        notes.append(("may-be-noticed", {"amount": thinning_text(found.fits)}))
    if takes_usual_values(framings.values()):
        notes.append(("usual-from-memory", {}))
    return notes
