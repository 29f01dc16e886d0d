"""The section `surfacing`: prism at the block's centre, its wedge and angles, and whether it fits.

For outside callers, under the eye: `at_blank_centre` a prism; `wedge_deg`; `angles` the base by
what one looks at (`lens_from_front`, `lens_from_back` on the block, `ring_from_front` its thick
side, `ring_from_back`), null for no prism; `ring`, `block_edge`, `thickness`, `blank`.
"""

from collections.abc import Iterator, Mapping
from dataclasses import asdict
from decimal import Decimal

from pycore.bench.expected import Due
from pycore.bench.surfacing import USUAL_BLANKS_MM, Surfaced, surfaced
from pycore.case import Case
from pycore.decimals import fixed, from_float
from pycore.job.body import SEGMENTED
from pycore.names import Entry, degrees_text, number, plain, prism_entry
from pycore.optics.prism import Eye
from pycore.scenes.surfacing import surfacing_scene
from pycore.sections.answer import Ask, Row, SectionAnswer
from pycore.sections.body_asks import body_asks
from pycore.sections.framing import framings_of
from pycore.words import say

BODY_FIELDS = (
    "lens.index",
    "lens.front_curve",
    "lens.minimum_centre_mm",
    "lens.minimum_edge_mm",
)
BEYOND_THIN = Decimal(20)  # prism dioptres
VARIES = ("progressive", *SEGMENTED)

Lenses = Mapping[Eye, Surfaced]


def surfacing_section(case: Case) -> SectionAnswer:
    """The section. Arguments: `case`. Returns the answer for every lens that is to be made."""
    framings, lenses = framings_of(case), dict[Eye, Surfaced]()
    for eye, due_ in case.dues.items():
        order = case.job.order(eye)
        if order is None or due_.partner:
            continue
        lens = surfaced(case.job, order, due_, framings.get(eye))
        if lens:
            lenses[eye] = lens
    own = {eye: _entry(eye, lens) for eye, lens in lenses.items()}
    title, params = _title(lenses, own)
    return SectionAnswer(
        title=title,
        title_params=params,
        own={str(eye): entry for eye, entry in own.items()} or None,
        rows=tuple(_rows(lenses, own)),
        asks=tuple(_asks(lenses)),
        notes=tuple(_notes(case, lenses)),
        draw=lambda: {eye: surfacing_scene(lens) for eye, lens in lenses.items()},
    )


def _entry(eye: Eye, lens: Surfaced) -> Entry:
    prism = prism_entry(eye, lens.prism)
    angles = None
    if lens.angles:
        angles = {name: round(deg, 9) % 360.0 for name, deg in asdict(lens.angles).items()}
    edge = lens.edge
    return {
        "at_blank_centre": prism,
        "wedge_deg": _number(lens.wedge_deg),
        "angles": angles,
        "ring": {"mark": _number(lens.ring), "for_index": number(lens.blocking.ring_index)},
        "block_edge": edge and {name: _number(value) for name, value in asdict(edge).items()},
        "thickness": {
            "centre_mm": _number(lens.centre_mm),
            "least_centre_mm": _number(lens.needed_mm),
            "governs": lens.governs,
            "suffices": lens.thickness_suffices,
        },
        "blank": {
            "needed_mm": _number(lens.blank_needed_mm),
            "given_mm": None if lens.blank_given_mm is None else number(lens.blank_given_mm),
            "suffices": lens.blank_suffices,
        },
    }


def _number(value: float | None) -> float | None:
    return None if value is None else number(from_float(value))


def _title(lenses: Lenses, own: Mapping[Eye, Entry]) -> tuple[str, Mapping[str, str]]:
    """What does not fit first; else the prism of each lens at the block's centre."""
    for eye, lens in lenses.items():
        for code, fits in _checks(lens):
            if fits is False:
                return code, {"eye": eye}
    texts = {eye: _prism_text(entry) for eye, entry in own.items()}
    if len(texts) == 2:
        return "pair", {str(eye): text for eye, text in texts.items()}
    for eye, text in texts.items():
        return "one", {"eye": eye, "prism": text}
    return "unknown", {}


def _checks(lens: Surfaced) -> Iterator[tuple[str, bool | None]]:
    yield "blank-small", lens.blank_suffices
    yield "too-thin", lens.thickness_suffices


def _prism_text(entry: Entry) -> str:
    prism = entry["at_blank_centre"]["shown"]
    amount = say("text.prism-dioptres", number=prism["amount"])
    return f"{amount} {say('text.degrees', number=prism['base'])}" if prism["base"] else amount


def _rows(lenses: Lenses, own: Mapping[Eye, Entry]) -> Iterator[Row]:
    if not lenses:
        return
    placed = any(_usual(lens, "prp_right_mm", "prp_up_mm") for lens in lenses.values())
    index = any("lens.index" in lens.body.usual for lens in lenses.values())
    prisms = {eye: own[eye]["at_blank_centre"]["shown"]["text"] for eye in lenses}
    yield _row("at-blank-centre", prisms, placed)
    wedges = {eye: _degrees(lens.wedge_deg, 2) for eye, lens in lenses.items()}
    yield _row("wedge", wedges, placed or index)
    for name in ("lens_from_front", "lens_from_back", "ring_from_front", "ring_from_back"):
        texts = {
            eye: say("text.degrees", number=degrees_text(entry["angles"][name]))
            for eye, lens in lenses.items()
            if (entry := own[eye])["angles"]
        }
        if texts:
            yield _row(name.replace("_", "-"), texts, placed)
    rings = any(_usual(lens, "ring_index") for lens in lenses.values())
    texts = {eye: _ring_text(lens) for eye, lens in lenses.items()}
    yield _row("ring", texts, placed or index or rings)
    yield from _body_rows(lenses, placed)


def _body_rows(lenses: Lenses, placed: bool) -> Iterator[Row]:
    """Thickness and blank: what there is beside what is needed."""
    body = any(field in lens.body.usual for lens in lenses.values() for field in BODY_FIELDS)
    thickness = any(not lens.body.thickness_given for lens in lenses.values())
    centres = {eye: _mm(lens.centre_mm) for eye, lens in lenses.items()}
    yield _row("centre", centres, thickness)
    rim = any(lens.usual for lens in lenses.values())
    texts = {eye: _mm(lens.needed_mm) for eye, lens in lenses.items() if lens.needed_mm is not None}
    if texts:
        yield _row("least-centre", texts, body or rim)
    block = any(_usual(lens, "block_diameter_mm") for lens in lenses.values())
    edges = {eye: lens.edge for eye, lens in lenses.items() if lens.edge}
    for code, found in (
        ("block-thinnest", {eye: (it.thinnest_mm, it.thinnest_deg) for eye, it in edges.items()}),
        ("block-thickest", {eye: (it.thickest_mm, it.thickest_deg) for eye, it in edges.items()}),
    ):
        texts = {eye: f"{_mm(mm)} {_degrees(turn, 0)}" for eye, (mm, turn) in found.items()}
        if texts:
            yield _row(code, texts, placed or body or thickness or block)
    texts = {
        eye: _mm(lens.blank_needed_mm, 1)
        for eye, lens in lenses.items()
        if lens.blank_needed_mm is not None
    }
    if texts:
        yield _row("blank-needed", texts, placed or rim)
    texts = {
        eye: say("text.millimetres", number=plain(lens.blank_given_mm))
        for eye, lens in lenses.items()
        if lens.blank_given_mm is not None
    }
    if texts:
        yield _row("blank-given", texts, False)


def _row(code: str, texts: Mapping[Eye, str], assumed: bool) -> Row:
    return Row(code=code, right=texts.get("right", ""), left=texts.get("left", ""), assumed=assumed)


def _usual(lens: Surfaced, *names: str) -> bool:
    """Tell whether the usual value stands for one of these fields of the blocking."""
    return any(field.rpartition(".")[2] in names for field, _ in lens.blocking.usual)


def _ring_text(lens: Surfaced) -> str:
    mark = fixed(from_float(lens.ring), 2)
    return f"{mark} ({fixed(lens.blocking.ring_index, 3)})"


def _mm(value: float | None, places: int = 2) -> str:
    return say("text.millimetres", number=fixed(from_float(value or 0.0), places))


def _degrees(value: float, places: int) -> str:
    return say("text.degrees", number=fixed(from_float(value), places))


def _asks(lenses: Lenses) -> Iterator[Ask]:
    body = dict[Eye, dict[str, str]]()
    asked = dict[str, str]()
    for eye, lens in lenses.items():
        usual = lens.body.usual
        body[eye] = {field: usual[field] for field in BODY_FIELDS if field in usual}
        if not lens.body.thickness_given:
            body[eye]["lens.centre_thickness_mm"] = fixed(from_float(lens.centre_mm), 1)
        asked |= {**dict(lens.blocking.usual), **lens.usual}
    for field, value in asked.items():
        yield Ask(field=field, usual=value, used=True)
    yield from body_asks(body)
    blanks = {
        eye: {"lens.blank_diameter_mm": _usual_blank(lens.blank_needed_mm)}
        for eye, lens in lenses.items()
        if lens.blank_given_mm is None and lens.blank_needed_mm is not None
    }
    yield from body_asks(blanks, used=False)


def _usual_blank(needed_mm: float) -> str:
    """The smallest of the usual blanks that does, or none."""
    return next((format(size, "f") for size in USUAL_BLANKS_MM if size >= needed_mm), "")


def _notes(case: Case, lenses: Lenses) -> Iterator[tuple[str, Mapping[str, str]]]:
    for eye, lens in lenses.items():
        if lens.blank_suffices is False:
            yield "blank-small", {"eye": eye, "needed": _mm(lens.blank_needed_mm, 1)}
        if lens.thickness_suffices is False:
            yield "too-thin", {"eye": eye, "needed": _mm(lens.needed_mm)}
        if lens.edge is None:
            yield "no-lens-at-block", {"eye": eye}
        elif lens.edge.thinnest_mm <= 0:
            yield "cuts-block", {"eye": eye}
        elif not lens.block_edge_suffices:
            yield "thin-at-block", {"eye": eye, "least": _mm(float(lens.body.minimum_edge_mm))}
        if lens.prism.amount > BEYOND_THIN:
            yield "beyond-thin", {"eye": eye, "amount": fixed(lens.prism.amount, 2)}
        yield from _notes_on_order(case, eye, case.dues[eye])
    if any(lens.blocking.centre != (0.0, 0.0) for lens in lenses.values()):
        yield "thin-formula", {}
    if lenses:
        yield "share", {}


def _notes_on_order(case: Case, eye: Eye, due_: Due) -> Iterator[tuple[str, Mapping[str, str]]]:
    order = case.job.order(eye)
    if not due_.vertical_known:
        yield "thinning-not-known", {"eye": eye}
    if due_.stated_used:
        yield "stated-used", {"eye": eye}
    if order and (order.lens.aspheric or order.lens.design in VARIES):
        yield "power-varies", {"eye": eye}
