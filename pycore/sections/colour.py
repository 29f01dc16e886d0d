"""The section `colour`: the colour fringe of each lens, and where formulas and thresholds end."""

from collections.abc import Iterator, Mapping

from pycore.bench.body import BodyValues, body_values
from pycore.bench.colour import FRINGE_LIMIT, Colour, Fringe, colour_of
from pycore.bench.reading import THIN_LIMIT, LensAtReading, lens_at_reading
from pycore.case import Case
from pycore.decimals import fixed
from pycore.names import Entry, number, plain
from pycore.optics.prism import Eye
from pycore.sections.answer import Ask, Row, SectionAnswer
from pycore.sections.body_asks import body_asks
from pycore.sections.near_slab import amount_text, eye_row
from pycore.words import say

LIMIT_TEXT = fixed(FRINGE_LIMIT, 2)
ABBE_FIELDS = ("lens.index", "lens.abbe")
Colours = Mapping[Eye, Colour]


def colour_section(case: Case) -> SectionAnswer:
    """The section. Arguments: `case`. Returns the answer: fringes in prism dioptres."""
    found = {eye: lens_at_reading(case.job, due_) for eye, due_ in case.dues.items()}
    lenses = {eye: lens for eye, lens in found.items() if lens}
    bodies = {eye: body_values(lens.order, case.job.frame) for eye, lens in lenses.items()}
    colours = {
        eye: colour_of(lens, body.abbe)
        for eye, lens in lenses.items()
        if (body := bodies[eye]) and body.abbe is not None
    }
    worst = max(_fringes(colours), key=lambda item: item[1].amount, default=None)
    return SectionAnswer(
        title=_title(worst),
        title_params=_where(*worst) if worst else {},
        own=_own(worst),
        eyes={eye: _eye_entry(colour, bodies[eye]) for eye, colour in colours.items()},
        rows=tuple(_rows(colours, lenses, bodies)),
        asks=tuple(_asks(lenses, bodies)),
        notes=tuple(_notes(colours)),
    )


def _fringes(colours: Colours) -> list[tuple[Eye, Fringe]]:
    return [(eye, fringe) for eye, colour in colours.items() for fringe in colour.fringes]


def _title(worst: tuple[Eye, Fringe] | None) -> str:
    if worst is None:
        return "unknown"
    return "above" if worst[1].above_usual else "below"


def _where(eye: Eye, fringe: Fringe) -> dict[str, str]:
    return {"eye": eye, "amount": amount_text(fringe.amount, FRINGE_LIMIT), "limit": LIMIT_TEXT}


def _own(worst: tuple[Eye, Fringe] | None) -> Entry | None:
    """The largest fringe of the pair."""
    if worst is None:
        return None
    eye, fringe = worst
    return {
        "threshold": number(FRINGE_LIMIT),
        "threshold_provenance": "memory",
        "largest": {"eye": eye, "at": fringe.where, "amount": number(fringe.amount)},
    }


def _usual_abbe(body: BodyValues | None) -> bool:
    return body is not None and "lens.abbe" in body.usual


def _eye_entry(colour: Colour, body: BodyValues | None) -> Entry:
    entry: Entry = {
        "abbe": number(colour.abbe),
        "assumed": _usual_abbe(body),
        "spread_d": number(colour.spread_d),
    }
    for fringe in colour.fringes:
        entry[fringe.where] = {
            "prism": number(fringe.prism.amount),
            "fringe": number(fringe.amount),
            "above_usual": fringe.above_usual,
            "beyond_thin": fringe.beyond_thin,
            "shown": say("text.prism-dioptres", number=amount_text(fringe.amount, FRINGE_LIMIT)),
        }
    return entry


def _rows(
    colours: Colours,
    lenses: Mapping[Eye, LensAtReading],
    bodies: Mapping[Eye, BodyValues | None],
) -> Iterator[Row]:
    if not colours:
        return
    usual = any(_usual_abbe(bodies[eye]) for eye in colours)
    yield eye_row("abbe", {eye: plain(it.abbe) for eye, it in colours.items()}, assumed=usual)
    point_assumed = any(lenses[eye].point.assumed for eye in colours)
    for place, code in enumerate(("reference", "reading")):
        texts = {
            eye: say(
                "text.prism-dioptres", number=amount_text(it.fringes[place].amount, FRINGE_LIMIT)
            )
            for eye, it in colours.items()
        }
        yield eye_row(code, texts, assumed=usual or (code == "reading" and point_assumed))
    texts = {eye: say("text.dioptres", number=fixed(it.spread_d, 2)) for eye, it in colours.items()}
    yield eye_row("spread", texts, assumed=usual)


def _asks(
    lenses: Mapping[Eye, LensAtReading], bodies: Mapping[Eye, BodyValues | None]
) -> Iterator[Ask]:
    known = {eye: body for eye, body in bodies.items() if body and not lenses[eye].order.lens.abbe}
    taken = {
        eye: {field: body.usual[field] for field in ABBE_FIELDS if field in body.usual}
        for eye, body in known.items()
    }
    yield from body_asks(taken)
    if any(body.abbe is None for body in known.values()):
        yield Ask(field="lens.abbe")
    points = {item.field: item for lens in lenses.values() for item in lens.point.assumed}
    for item in points.values():
        yield Ask(field=item.field, usual=plain(item.usual), used=True)


def _notes(colours: Colours) -> Iterator[tuple[str, Mapping[str, str]]]:
    for eye, fringe in _fringes(colours):
        if fringe.above_usual:
            yield f"above-{fringe.where}", _where(eye, fringe)
        if fringe.beyond_thin:
            amount = amount_text(fringe.prism.amount, THIN_LIMIT)
            yield f"beyond-thin-{fringe.where}", {"eye": eye, "amount": amount}
    for eye, colour in colours.items():
        if colour.far:
            yield "far-out", {"eye": eye}
    if colours:
        yield "threshold-memory", {"limit": LIMIT_TEXT}
