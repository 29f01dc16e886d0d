"""The section `remedy`: the smallest movement that saves a pair, or why only a remake will do.

In the report, under `remedy`: `kind` (none-needed, shift, remake); `least` and `recommended`,
each `right` and `left` (`right_mm`, `up_mm`: how the lens moves in the frame; null where it stays),
`new_dot` for each eye (the new place on the lens, from the old one), `exact` (before rounding) and
`after`; `only_right`, `only_left` and `shared`, each with `least` and `recommended`; `allowed` and
`reason`; `instruction` and, where nothing may be moved as it is, `remake` (sentences of words
`remedies`). `right`, `left`, `after` are those of the recommended movement, else of the least.
"""

from collections.abc import Iterator, Mapping

from pycore.bench.decentring import LARGEST_BLANK_MM
from pycore.bench.matter import Matter
from pycore.bench.remedy import Choice, Remedy, Shift, remedy_of
from pycore.bench.remedy_moved import parts_of
from pycore.bench.remedy_trade import blank_of_uncut, has_segment
from pycore.case import Case
from pycore.names import Entry, spoken
from pycore.optics.prism import EYES, Eye
from pycore.scenes.remedy import remedy_scene
from pycore.sections.answer import Ask, Row, SectionAnswer
from pycore.sections.remedy_texts import (
    both_notations,
    dot_text,
    margins_text,
    move_text,
    movement_instruction,
    remake_instruction,
    shift_entry,
)
from pycore.words import say

Notes = Iterator[tuple[str, Mapping[str, str]]]
EMPTY = ("right", "left", "after", "least", "recommended", "only_right", "only_left", "shared")


def remedy_section(case: Case) -> SectionAnswer:
    """Answer for one case: can it be saved, and how. Arguments: `case`."""
    matter, verdict = case.matter, case.verdict
    if matter is None or verdict is None:
        missing = "edition" if case.edition is None else "lens.design"
        return SectionAnswer(title="no-verdict", asks=(Ask(field=missing),))
    found = remedy_of(matter, verdict)
    if found is None:
        undecided = verdict.outcome == "undecided"
        return SectionAnswer(title="undecided" if undecided else "not-read")
    title, params = _title(found)
    own = _own(found, matter)
    shift = chosen(found)
    return SectionAnswer(
        title=title,
        title_params=params,
        own=own,
        rows=tuple(_rows(found, matter)),
        asks=tuple(_asks(shift, matter)) if shift else (),
        notes=tuple(_notes(own, shift, matter)),
        draw=lambda: remedy_scene(matter, shift.move) if shift else {},
    )


def chosen(found: Remedy) -> Shift | None:
    """The movement to be done: the recommended one, else the least. Arguments: `found`."""
    return found.shared.recommended or found.shared.least


def _title(found: Remedy) -> tuple[str, Mapping[str, str]]:
    shift = chosen(found)
    if shift is None:
        if not found.remade:
            return found.kind, {}
        one = len(found.remade) == 1
        lenses = say(f"eyes.{found.remade[0]}") if one else say("section_texts.remedy.both-lenses")
        return found.kind, {"lenses": lenses}
    moves = ", ".join(
        say("section_texts.remedy.move", letter=say(f"letters.{eye}"), move=text)
        for eye in EYES
        if (text := move_text(shift, eye))
    )
    return ("mark" if found.allowed else "cut"), {"moves": moves}


def _own(found: Remedy, matter: Matter) -> Entry:
    remake = remake_instruction(matter, found.remade) if found.remade else None
    entry: Entry = {
        "kind": found.kind,
        **dict.fromkeys(EMPTY),
        "allowed": found.allowed,
        "reason": {"code": found.why.code, "params": spoken(_reason_params(found))},
        "instruction": remake,
        "remake": remake,
    }
    shift = chosen(found)
    if shift is None:
        return entry
    shared = _choice(found.shared)
    first = shared["recommended"] or shared["least"]
    return entry | {
        **{key: first[key] for key in ("right", "left", "after")},
        **shared,
        "shared": shared,
        **{f"only_{eye}": _choice(found.only.get(eye, Choice())) for eye in EYES},
        "instruction": movement_instruction(shift, allowed=found.allowed),
    }


def _choice(choice: Choice) -> Entry:
    least = shift_entry(choice.least)
    same = choice.recommended is choice.least
    return {"least": least, "recommended": least if same else shift_entry(choice.recommended)}


def _reason_params(found: Remedy) -> Mapping[str, str]:
    """The texts of the reason; for a cut lens how much smaller the frame has to be."""
    shift = chosen(found)
    if shift is None or found.allowed:
        return found.why.params
    across, along = (max(abs(parts_of(shift.move, eye)[part]) for eye in EYES) for part in (0, 1))
    return {"narrower": str(2 * across), "lower": str(2 * along)}


def _rows(found: Remedy, matter: Matter) -> Iterator[Row]:
    movements = {"least": found.shared.least, "recommended": found.shared.recommended}
    for eye, choice in found.only.items():
        movements[f"only-{eye}"] = choice.recommended or choice.least
    for code, shift in movements.items():
        if shift is not None:
            yield _row(code, {eye: move_text(shift, eye) for eye in EYES}, margins_text(shift))
    shift = chosen(found)
    if shift is not None:
        code = "new-dot" if found.allowed else "new-place"
        yield _row(code, {eye: dot_text(shift, eye) for eye in EYES})
        shows = {eye: both_notations(eye, read) for eye, read in shift.after.reads.items()}
        yield _row("then-shows", {eye: shows[eye] for eye in shift.eyes})
    if found.remade:
        due = {eye: both_notations(eye, matter.dues[eye].expected) for eye in found.remade}
        yield _row("remake", due)


def _row(code: str, texts: Mapping[Eye, str], pair: str = "") -> Row:
    return Row(code=code, right=texts.get("right", ""), left=texts.get("left", ""), pair=pair)


def _asks(shift: Shift, matter: Matter) -> Iterator[Ask]:
    """What would let the blank be checked, or replace the usual size that was taken."""
    if matter.job.state != "uncut":
        return
    blanks = [blank_of_uncut(matter, eye) for eye in shift.eyes]
    if None in blanks:
        yield from (Ask(field=f"frame.{name}") for name in ("a_mm", "b_mm", "dbl_mm"))
    if any(blank and blank.size_assumed for blank in blanks):
        yield Ask(field="lens.blank_diameter_mm", usual=str(LARGEST_BLANK_MM), used=True)


def _notes(own: Entry, shift: Shift | None, matter: Matter) -> Notes:
    for key in ("reason", "instruction"):
        said = own[key]
        if said:
            yield "sentence", {"sentence": say(f"remedies.{said['code']}", **said["params"])}
    if own["kind"] != "none-needed":
        yield "decision", {}
    if shift is None:
        return
    if own["remake"]:
        remake = own["remake"]
        yield "or", {"sentence": say(f"remedies.{remake['code']}", **remake["params"])}
    if own["recommended"] is None:
        yield "none-sure", {}
    if any(has_segment(matter, eye) for eye in shift.eyes):
        yield "segment-moves", {}
    if matter.job.state == "uncut":
        blanks = [blank_of_uncut(matter, eye) for eye in shift.eyes]
        if None in blanks:
            yield "blank-unchecked", {}
        if any(blank and blank.centre_assumed for blank in blanks):
            yield "blank-centre-assumed", {}
    if not all(due.vertical_known for due in matter.dues.values()):
        yield "thinning-unknown", {}
    if matter.place == "first-lens-set":
        yield "height-follows", {}
    yield "read-again", {}
