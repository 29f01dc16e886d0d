"""What is written for one eye in a line, the questions it raises, and the way along its tokens."""

from dataclasses import dataclass, field
from typing import Literal

from pycore.errors import Fault
from pycore.job.line_base import Base
from pycore.job.line_tokens import Token

MAXIMUM_PIECE = 64
FIXES = {
    "line-empty": "line-write-order",
    "line-too-long": "line-shorten",
    "line-not-understood": "line-rewrite",
    "line-number-unclear": "line-one-decimal-sign",
    "line-number-too-long": "line-fewer-digits",
    "line-number-stray": "line-say-what",
    "line-number-missing": "line-write-number",
    "line-unit-wrong": "line-check-unit",
    "line-d-unclear": "line-write-bd",
    "line-sign-double": "line-one-sign",
    "line-sign-missing": "line-write-sign",
    "line-sign-unexpected": "line-remove-sign",
    "line-label-unclear": "line-write-sphere-first",
    "line-eye-missing": "line-write-eye",
    "line-eye-empty": "line-write-after-eye",
    "line-given-twice": "line-write-once",
    "line-cylinder-missing": "line-write-cylinder",
    "line-axis-missing": "line-write-axis",
    "line-at-unclear": "line-axis-or-base",
    "line-base-missing": "line-write-base",
    "line-amount-missing": "line-write-amount",
    "line-amount-unclear": "line-amounts-first",
    "line-prism-signed": "line-base-not-sign",
    "line-degrees-missing": "line-write-degrees",
    "line-side-missing": "line-write-side",
    "line-base-contradicts": "line-check-base",
    "line-base-beyond": "line-degrees-to-360",
    "line-bases-opposite": "line-one-direction",
    "line-prism-for-whom": "line-write-each",
    "line-prism-total": "line-write-for-each-eye",
    "line-each-unclear": "line-each-after-ou",
    "line-pd-unclear": "line-write-pd",
    "line-pd-near": "line-near-in-form",
    "line-height-unclear": "line-which-height",
    "line-height-for-whom": "line-height-each",
}


@dataclass(frozen=True, slots=True, kw_only=True)
class Measure:
    """A distance or height as written: one text in mm, or two with `/` between."""

    name: str
    first: str
    second: str
    piece: str


@dataclass(slots=True, kw_only=True)
class Part:
    """What stands after one eye mark. `eye` is right, left, both, or "" where none is named."""

    eye: str
    mark: str = ""
    piece: str = ""
    values: dict[str, str] = field(default_factory=dict)
    prism: list[dict[str, Base]] = field(default_factory=list)
    prism_piece: str = ""
    measures: list[Measure] = field(default_factory=list)
    designs: list[str] = field(default_factory=list)
    each: bool = False
    total: str = ""
    faults: list[Fault] = field(default_factory=list)

    @property
    def eyes(self) -> tuple[str, ...]:
        """The eyes it is written for."""
        return ("right", "left") if self.eye == "both" else (self.eye,) if self.eye else ()

    @property
    def is_empty(self) -> bool:
        """Whether nothing at all is written for it."""
        return not (
            self.values or self.prism or self.measures or self.designs or self.each or self.faults
        )

    def ask(self, code: str, name: str, given: str, **params: str) -> None:
        """Add a question about field `name` ("" the whole line) with the piece it is about."""
        self.faults.append(question(code, self.eye, name, given, **params))


def question(code: str, eye: str, name: str, given: str, **params: str) -> Fault:
    """One question about the line.

    Arguments: `code`; `eye` right, left or else; `name` of the field or ""; `given` the piece.

    >>> question("line-axis-missing", "left", "axis", "-2.00").field
    'line.left.axis'
    """
    place = f"line.{eye}.{name}" if eye in ("right", "left") and name else "line"
    return Fault(
        code=code, field=place, given=given.strip()[:MAXIMUM_PIECE], params=params, fix=FIXES[code]
    )


class TokenReader:
    """Goes along the tokens after one eye mark and collects what they say in `part`.

    Arguments: `text` the whole line; `tokens` of this eye, ended by one of kind "end"; `eye`;
    `bases` the notation of bare degrees; `base_first` whether bases stand before amounts.
    """

    def __init__(
        self, text: str, tokens: list[Token], eye: str, bases: Literal["360", "180"],
        base_first: bool,
    ) -> None:  # fmt: skip
        self.text, self.tokens, self.bases, self.base_first = text, tokens, bases, base_first
        self.part = Part(eye=eye)
        self.place = 0
        self.powers = ""  # the order of n(umber), S(phere word), C(ylinder word), as written
        self.cylinder_end = 0  # place after the cylinder's number, 0 before it is read
        self.words_used: list[str] = []

    def _peek(self, ahead: int = 0) -> Token:
        return self.tokens[min(self.place + ahead, len(self.tokens) - 1)]

    def _next(self) -> Token:
        token = self._peek()
        self.place += 1
        return token

    def _piece(self, first: Token, last: Token) -> str:
        return self.text[first.start : last.end]

    def _so_far(self, first: Token) -> str:
        return self._piece(first, self.tokens[self.place - 1])

    def _unit(self, token: Token, *allowed: str) -> None:
        if token.unit and token.unit not in allowed:
            self.part.ask("line-unit-wrong", "", self._piece(token, token), unit=token.unit)

    def _set(self, name: str, value: str, token: Token) -> None:
        if name in self.part.values:
            self.part.ask("line-given-twice", name, self._so_far(token))
        else:
            self.part.values[name] = value
