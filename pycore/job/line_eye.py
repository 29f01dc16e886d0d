"""The grammar of what is written for one eye: power, axis, add, distances and heights.

The line writes all its prisms amount first (`3 BI`) or all base first (`BI 3`); the caller reads
it both ways. A number is never given a meaning by its size where two meanings are open.
"""

import re
from collections.abc import Callable
from decimal import Decimal

from pycore.job.line_base import OPPOSITE
from pycore.job.line_part import Measure, Part
from pycore.job.line_prism import PrismReader
from pycore.job.line_tokens import DEGREES, DIOPTRES, MILLIMETRES, PRISM, Token

_POWERS_IN_ORDER = re.compile(r"((Sn|nS?)(Cn|nC?)?)?")


class EyeReader(PrismReader):
    """Reads the tokens after one eye mark.

    Arguments: `text` the whole line; `tokens` of this eye, ended by one of kind "end"; `eye`;
    `bases` the notation of bare degrees; `base_first` whether bases stand before amounts.

    >>> from pycore.job.line_tokens import tokens_of
    >>> EyeReader("-1 3 BI", tokens_of("-1 3 BI"), "right", "360", False).read().prism
    [{'amount': '3', 'base': 'in'}]
    """

    def read(self) -> Part:
        """Read everything; each token is given a meaning or a question."""
        read_token: dict[str, Callable[[Token], None]] = {
            "number": self._number, "plano": self._power, "sph": self._label, "cyl": self._label,
            "axis": self._axis, "at": self._at, "base": self._base, "quadrant": self._base,
            "add": self._add, "pd": self._measure, "height": self._measure,
            "each": self._flag, "total": self._flag, "design": self._design,
            "slash": self._separator, "amp": self._separator,
        }  # fmt: skip
        while (token := self._next()).kind != "end":
            read_token.get(token.kind, self._refused)(token)
        if self.place > 1:
            self.part.piece = self._piece(self.tokens[0], self.tokens[-2])
        self._check()
        return self.part

    def _refused(self, token: Token) -> None:
        """Report what has no meaning here, neighbours in one piece."""
        code = token.value if token.kind == "refused" else "line-not-understood"
        while token.kind == "refused" == self._peek().kind and self._peek().value == code:
            self._next()
        self.part.ask(code, "", self._so_far(token))

    def _separator(self, token: Token) -> None:
        """A slash or an and between two things says nothing."""

    # -- power

    def _number(self, token: Token) -> None:
        values, following = self.part.values, self._peek()
        before_base = following.kind in ("base", "quadrant")
        may_be_cylinder = "cylinder" not in values and (
            following.kind in ("axis", "at", "number", "cyl")
        )
        is_amount = before_base or (following.kind == "at" and not token.sign)
        if before_base and self.base_first and not token.sign:
            piece = self._piece(token, following)
            self.part.ask("line-amount-unclear", "prism", piece)
        if is_amount and not self.base_first:
            self._prism(token)
        elif token.unit == PRISM:
            self.part.ask("line-base-missing", "prism", self._so_far(token))
        elif self._is_bare_axis(token):
            self._unit(token, DEGREES)
            values["axis"] = token.value
        elif token.sign or "sphere" not in values or not Decimal(token.value) or may_be_cylinder:
            self._power(token)
        elif "axis" in values:
            self.part.ask("line-base-missing", "prism", self._so_far(token))
        else:
            self.part.ask("line-number-stray", "", self._so_far(token))

    def _is_bare_axis(self, token: Token) -> bool:
        """A whole number of 0 to 180 right after the cylinder is its axis."""
        if not self.cylinder_end or "axis" in self.part.values or token.sign:
            return False
        between = self.tokens[self.cylinder_end : self.place - 1]
        directly = all(other.kind in ("cyl", "slash") for other in between)
        return directly and token.value.isdigit() and int(token.value) <= 180

    def _power(self, token: Token) -> None:
        values = self.part.values
        self._unit(token, DIOPTRES)
        name = "cylinder" if "sphere" in values else "sphere"
        too_late = self.part.prism or "add" in values  # +2.00 after prism may be an add
        if name in values or too_late or (token.kind == "plano" and name == "cylinder"):
            self.part.ask("line-number-stray", "", self._so_far(token))
            return
        if token.kind == "number" and self._piece(token, token).startswith("00"):
            self.part.ask("line-number-unclear", name, self._piece(token, token))  # +1 000
        values[name] = token.sign + token.value
        self.powers += "n"
        self.cylinder_end = self.place if name == "cylinder" else 0
        if not token.sign and Decimal(token.value):
            code = "line-d-unclear" if token.unit == DIOPTRES else "line-sign-missing"
            self.part.ask(code, name, self._so_far(token))

    def _label(self, token: Token) -> None:
        self.powers += "S" if token.kind == "sph" else "C"

    def _axis(self, token: Token) -> None:
        if self._peek().kind != "number":
            self.part.ask("line-number-missing", "axis", self._so_far(token))
            return
        number = self._next()
        self._unit(number, DEGREES)
        if number.sign:
            self.part.ask("line-sign-unexpected", "axis", self._so_far(token))
        elif number.comma:  # x20,3 BI: a list, or 20.3?
            self.part.ask("line-number-unclear", "axis", self._so_far(token))
        elif "cylinder" not in self.part.values:
            self.part.ask("line-cylinder-missing", "cylinder", self._so_far(token))
        self._set("axis", number.value, token)

    def _at(self, token: Token) -> None:
        """An `@` with no amount before it: the axis of a cylinder, or else a question."""
        if self._peek().kind != "number":
            self.part.ask("line-number-missing", "", self._so_far(token))
            return
        number = self._next()
        values = self.part.values
        may_be_axis = "cylinder" in values and "axis" not in values and not token.value
        if may_be_axis and not number.sign and not number.comma and Decimal(number.value) <= 180:
            self._unit(number, DEGREES)
            values["axis"] = number.value
        else:
            self.part.ask("line-at-unclear", "", self._so_far(token))

    # -- add, distances, heights, words

    def _add(self, token: Token) -> None:
        if self._peek().kind != "number":
            self.part.ask("line-number-missing", "add", self._so_far(token))
            return
        number = self._next()
        self._unit(number, DIOPTRES)
        if number.sign == "-":
            self.part.ask("line-sign-unexpected", "add", self._so_far(token))
        self._set("add", number.value, token)

    def _measure(self, token: Token) -> None:
        numbers: list[Token] = []
        if self._peek().kind == "number":
            numbers.append(self._next())
            if self._peek().kind == "slash" and self._is_second_measure():
                self._next()
                numbers.append(self._next())
        piece = self._so_far(token)
        if not numbers:
            self.part.ask("line-number-missing", token.value, piece)
        elif not token.value:
            self.part.ask("line-height-unclear", "", piece)
        else:
            self._check_measure(token, numbers, piece)
            first, second = numbers[0].value, numbers[1].value if numbers[1:] else ""
            self.part.measures.append(
                Measure(name=token.value, first=first, second=second, piece=piece)
            )

    def _is_second_measure(self) -> bool:
        """`31.5/32` goes on, `63/3 BI` does not."""
        number, following = self._peek(1), self._peek(2)
        amount = following.kind in ("base", "quadrant", "at") and not self.base_first
        return number.kind == "number" and not (number.sign or number.unit == PRISM or amount)

    def _check_measure(self, token: Token, numbers: list[Token], piece: str) -> None:
        for number in numbers:
            self._unit(number, MILLIMETRES)
            if number.sign:
                self.part.ask("line-sign-unexpected", token.value, piece)
            # 31,32 may be two numbers; so may 31.5-32.
            if number.comma and len(number.value.partition(".")[2]) == 2:
                self.part.ask("line-number-unclear", token.value, piece)
        following = self._peek()
        if following.kind == "number" and following.sign and following.start == numbers[-1].end:
            self.part.ask("line-number-unclear", token.value, self._piece(token, following))

    def _flag(self, token: Token) -> None:
        if token.kind == "each":
            self.part.each = True
        else:
            self.part.total = self._so_far(token)

    def _design(self, token: Token) -> None:
        self.part.designs.append(token.value)

    # -- what can only be said at the end

    def _check(self) -> None:
        part, values = self.part, self.part.values
        cylinder = values.get("cylinder", "0")
        if Decimal(cylinder) and "axis" not in values:
            part.ask("line-axis-missing", "axis", cylinder)
        if part.total:
            code = "line-prism-total" if part.prism else "line-not-understood"
            part.ask(code, "", f"{part.prism_piece} {part.total}")
        if not _POWERS_IN_ORDER.fullmatch(self.powers):
            part.ask("line-label-unclear", "sphere", part.piece)
        for word, other in OPPOSITE.items():
            if word in self.words_used and other in self.words_used:
                part.ask("line-bases-opposite", "prism", part.prism_piece, one=word, other=other)
