"""Puts the parts of a line together into the two eyes, and asks where a part's eye is open."""

from collections.abc import Iterator
from dataclasses import dataclass, field
from decimal import Decimal
from typing import Any

from pycore.errors import Fault, Note
from pycore.job.line_part import Measure, Part, question

# No pair stands closer and no single eye farther from the bridge (common practice).
SMALLEST_PAIR_PD_MM = 45
OTHER = {"right": "left", "left": "right"}


@dataclass(slots=True, kw_only=True)
class Merged:
    """What the whole line says: fields by eye, the pair's distance, the design, and questions."""

    eyes: dict[str, dict[str, Any]] = field(default_factory=dict)
    pd_mm: str | None = None
    lens: dict[str, str] = field(default_factory=dict)
    notes: list[Note] = field(default_factory=list)
    faults: list[Fault] = field(default_factory=list)

    def ask(self, code: str, eye: str, name: str, given: str, **params: str) -> None:
        """Add a question; the arguments are those of `question`."""
        self.faults.append(question(code, eye, name, given, **params))

    def note(self, code: str, place: str, severity: str = "note", **params: str) -> None:
        """Add a note about a field of the job document."""
        self.notes.append(Note(code=code, field=place, params=params, severity=severity))

    def put(self, eye: str, name: str, value: str, piece: str) -> None:
        """Give an eye a value, or ask if it has another one already."""
        present = self.eyes.setdefault(eye, {}).setdefault(name, value)
        if Decimal(present) != Decimal(value):
            self.ask("line-given-twice", eye, name, piece, first=present, second=value)


def _merge_prism(merged: Merged, part: Part, named: set[str]) -> None:
    """Prism belongs to a named eye, or to each where the word `each` says so."""
    pair = part.eye == "both" or (not part.eye and len(named) == 2)
    if part.each and (not pair or not part.prism):
        merged.ask("line-each-unclear", part.eye, "", part.piece)
    if not part.prism:
        return
    if pair and not part.each:
        if not part.total:
            merged.ask("line-prism-for-whom", "", "", part.prism_piece)
        return
    eyes = part.eyes or tuple(sorted(named, reverse=True))
    for eye in eyes:
        fields = merged.eyes.setdefault(eye, {})
        if "prism" in fields:
            merged.ask("line-given-twice", eye, "prism", part.prism_piece)
        fields.setdefault("prism", list(part.prism))


def _merge_part(merged: Merged, part: Part, named: set[str]) -> None:
    eyes = part.eyes
    needs_eye = bool(part.values.keys() - {"add"}) or (not named and (part.values or part.prism))
    if not part.eye and needs_eye:
        merged.ask("line-eye-missing", "", "", part.piece)
    for name, value in part.values.items():
        if name == "add" and not part.eye:
            eyes = tuple(sorted(named, reverse=True))
        for eye in eyes:
            merged.put(eye, name, value, part.piece)
    if part.eye or named:
        _merge_prism(merged, part, named)
    for design in part.designs:
        if merged.lens.setdefault("design", design) != design:
            merged.ask("line-given-twice", "", "", part.piece)


def _merge_add(merged: Merged, parts: list[Part], named: set[str]) -> None:
    """An add written once, after both eyes, is taken for both, and the reader is told so."""
    adds = [part for part in parts if "add" in part.values]
    if len(named) < 2 or len(adds) != 1 or adds[0].eye == "both":
        return
    part, value = adds[0], adds[0].values["add"]
    last = [other for other in parts if other.eye][-1]
    if part is last:
        other_eye = OTHER[part.eye]
        merged.eyes.setdefault(other_eye, {})["add"] = value
    if part is last or not part.eye:
        merged.note("add-taken-for-both", "right.add", add=value)


def _one_measure(merged: Merged, part: Part, measure: Measure, named: set[str], own: bool) -> None:
    """One distance or height; `own` tells that the other eye has its own."""
    name, value, piece = measure.name, measure.first, measure.piece
    if name == "pd_mm" and Decimal(value) >= SMALLEST_PAIR_PD_MM:
        if merged.pd_mm is not None and Decimal(merged.pd_mm) != Decimal(value):
            merged.ask("line-given-twice", "", "", piece)
        merged.pd_mm = merged.pd_mm or value
    elif part.eye in OTHER and (own or OTHER[part.eye] not in named):
        merged.put(part.eye, name, value, piece)
    elif name == "pd_mm":
        merged.ask("line-pd-unclear", part.eye, name, piece)
    elif part.eye == "both":
        merged.put("right", name, value, piece)
        merged.put("left", name, value, piece)
    else:
        merged.ask("line-height-for-whom", part.eye, name, piece)


def _two_measures(merged: Merged, measure: Measure, for_both: bool) -> None:
    """`31.5/32` is right and left, where it stands after both eyes or for both."""
    name, piece = measure.name, measure.piece
    wide = [Decimal(text) >= SMALLEST_PAIR_PD_MM for text in (measure.first, measure.second)]
    if name == "pd_mm" and all(wide):
        merged.ask("line-pd-near", "", "", piece)
    elif name == "pd_mm" and any(wide):
        merged.ask("line-pd-unclear", "", "", piece)
    elif not for_both:
        merged.ask("line-pd-unclear" if name == "pd_mm" else "line-height-for-whom", "", "", piece)
    else:
        merged.put("right", name, measure.first, piece)
        merged.put("left", name, measure.second, piece)
        merged.note("line-right-first", f"right.{name}", right=measure.first, left=measure.second)


def _merge_measures(merged: Merged, parts: list[Part], named: set[str]) -> None:
    marked = [part for part in parts if part.eye]
    for part in parts:
        # After both eyes, or for no eye in particular, two numbers can only be right and left.
        for_both = part.eye not in OTHER or (part is marked[-1] and len(named) == 2)
        for measure in part.measures:
            other = OTHER.get(part.eye)
            own = any(
                theirs.name == measure.name and not theirs.second
                for one in parts if one.eye == other
                for theirs in one.measures
            )  # fmt: skip
            if measure.second:
                _two_measures(merged, measure, for_both)
            else:
                _one_measure(merged, part, measure, named, own)


def _repeated_bases(merged: Merged) -> Iterator[tuple[str, str]]:
    for eye, fields in merged.eyes.items():
        bases = [prism["base"] for prism in fields.get("prism", ())]
        for word in ("in", "out", "up", "down"):
            if bases.count(word) > 1:
                yield eye, word


def merge(parts: list[Part]) -> Merged:
    """Put the parts of a line together.

    Arguments: `parts` in the order they were written. Returns the eyes with their questions.

    >>> merge([Part(eye="both", values={"sphere": "-1.00"})]).eyes["left"]
    {'sphere': '-1.00'}
    """
    named = {eye for part in parts for eye in part.eyes}
    merged = Merged(faults=[fault for part in parts for fault in part.faults])
    for part in parts:
        if part.eye and part.is_empty:
            merged.ask("line-eye-empty", part.eye, "", part.mark)
        _merge_part(merged, part, named)
    _merge_add(merged, parts, named)
    _merge_measures(merged, parts, named)
    for eye, word in _repeated_bases(merged):
        merged.note("line-base-repeated", f"{eye}.prism", severity="ask", base=word)
    return merged
