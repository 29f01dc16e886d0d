"""Reads a prescription written in one line of ordinary trade notation.

What is read stays text, as in the job document; what is ambiguous becomes a question with the
piece of the line it is about. Nothing is guessed and no word or number is passed over.
"""

from dataclasses import dataclass, field
from typing import Any, Literal

from pycore.errors import Fault, Note
from pycore.job.line_eye import EyeReader
from pycore.job.line_merge import Merged, merge
from pycore.job.line_part import Part, question
from pycore.job.line_tokens import Token, tokens_of

MAXIMUM_LENGTH = 1000
FIELDS = (
    "sphere", "cylinder", "axis", "add", "prism", "pd_mm", "prp_height_mm", "fitting_height_mm",
)  # fmt: skip


@dataclass(frozen=True, slots=True, kw_only=True)
class LineReading:
    """What a line says. An order only where `errors` is empty; else the errors are the questions.

    Arguments: `right`, `left` fields of the eyes as in the job document, as text, None where the
    eye is not named; `pd_mm` the pair's distance; `lens` what the line says of the lenses.
    """

    right: dict[str, Any] | None = None
    left: dict[str, Any] | None = None
    pd_mm: str | None = None
    lens: dict[str, str] = field(default_factory=dict)
    notes: tuple[Note, ...] = ()
    errors: tuple[Fault, ...] = ()


def _by_eye(tokens: list[Token]) -> list[tuple[Token | None, list[Token]]]:
    """The tokens after each eye mark, with the mark; a new line belongs to no eye."""
    groups: list[tuple[Token | None, list[Token]]] = [(None, [])]
    for token in tokens[:-1]:
        if token.kind == "eye":
            groups.append((token, []))
        elif token.kind != "line":
            groups[-1][1].append(token)
        elif groups[-1][1]:  # a mark may stand alone on the line above
            groups.append((None, []))
    end = tokens[-1]
    return [(mark, [*group, end]) for mark, group in groups if mark or group]


def _read_parts(text: str, bases: Literal["360", "180"], base_first: bool) -> Merged:
    parts: list[Part] = []
    for mark, tokens in _by_eye(tokens_of(text)):
        part = EyeReader(text, tokens, mark.value if mark else "", bases, base_first).read()
        part.mark = text[mark.start : mark.end] if mark else ""
        parts.append(part)
    return merge(parts)


def _eye(merged: Merged, eye: str) -> dict[str, Any] | None:
    fields = merged.eyes.get(eye)
    return {name: fields[name] for name in FIELDS if name in fields} if fields else None


def read_line(text: str, bases: Literal["360", "180"] = "360") -> LineReading:
    """Read a prescription in trade notation.

    Arguments: `text` as typed, up to 1000 characters; `bases` "180" where a base up to 180 must
    have its up, down, in or out word. Returns the fields as text, notes, and every question.
    Source: the notations are common practice; angles as in ISO 8429, the 180 notation as in US
    community-college opticianry course OPH 142.

    >>> reading = read_line("R +0,75 −2.25 x20 3 BI 1.5 BU add 1.75")
    >>> reading.right["cylinder"], reading.right["axis"], reading.right["prism"]
    ('-2.25', '20', [{'amount': '3', 'base': 'in'}, {'amount': '1.5', 'base': 'up'}])
    >>> [(fault.code, fault.given) for fault in read_line("R 0.75 OS -1 -2").errors]
    [('line-sign-missing', '0.75'), ('line-axis-missing', '-2')]
    """
    if len(text) > MAXIMUM_LENGTH:
        limit = str(MAXIMUM_LENGTH)
        return LineReading(errors=(question("line-too-long", "", "", text[:64], limit=limit),))
    if not text.strip():
        return LineReading(errors=(question("line-empty", "", "", text),))
    merged = _read_parts(text, bases, base_first=False)
    if merged.faults:
        # Bases may stand before their amounts; if neither order is clean, ask by the likelier.
        other = _read_parts(text, bases, base_first=True)
        merged = min(merged, other, key=lambda reading: len(reading.faults))
    if not (merged.faults or merged.eyes or merged.pd_mm or merged.lens):
        merged.ask("line-empty", "", "", text)
    return LineReading(
        right=_eye(merged, "right"),
        left=_eye(merged, "left"),
        pd_mm=merged.pd_mm,
        lens=merged.lens,
        notes=tuple(merged.notes),
        errors=tuple(merged.faults),
    )
