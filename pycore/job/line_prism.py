"""The grammar of prism in a line: an amount and its base in any of the trade's notations."""

from decimal import Decimal

from pycore.job.line_base import base_of
from pycore.job.line_part import TokenReader
from pycore.job.line_tokens import DEGREES, PRISM, Token


class PrismReader(TokenReader):
    """Reads prisms, all amount first (`3 BI`) or all base first (`BI 3`)."""

    def _words(self) -> list[str]:
        if self._peek().kind not in ("base", "quadrant"):
            return []
        return self._next().value.split()

    def _degrees(self, letters: bool) -> Token | None:
        """The degrees of a base: after `@`, with `°`, or bare (037) after words like `BD&I`."""
        at = self._next() if self._peek().kind == "at" else None
        number = self._peek()
        bare = (
            letters
            and number.value.isdigit()
            and not number.unit
            and (number.end - number.start > 1)
        )
        if number.kind != "number" or not (at or number.unit == DEGREES or bare):
            if at:
                self.part.ask("line-degrees-missing", "prism", self._so_far(at))
            return None
        self._next()
        self._unit(number, DEGREES)
        if number.sign:
            self.part.ask("line-sign-unexpected", "prism", self._so_far(at or number))
        return number

    def _prism(self, amount: Token) -> None:
        """An amount, then its base: `3 BI`, `2.5 @217`, `2.5 BD&I 037`, `2.5 @37 up`."""
        bare_at = self._peek().kind == "at" and not self._peek().value and not amount.unit
        letters = self._peek().unit == "letter"
        words = self._words()
        degrees = self._degrees(letters)
        words = words or self._words()
        values = self.part.values
        if not words and not degrees:
            return  # `2.5 @` is asked already
        if (
            bare_at and not words and degrees and Decimal(degrees.value) <= 180
            and "sphere" in values and "cylinder" not in values and not self.part.prism
        ):  # fmt: skip
            self.part.ask("line-at-unclear", "prism", self._so_far(amount))
        self._component(amount, words, degrees, amount)

    def _base(self, token: Token) -> None:
        """A base with no amount before it: asked, or its amount follows where bases come first."""
        words = token.value.split()
        degrees = self._degrees(token.unit == "letter")
        if self.base_first and self._peek().kind == "number":
            self._component(self._next(), words, degrees, token)
        else:
            self.part.ask("line-amount-missing", "prism", self._so_far(token))

    def _component(
        self, amount: Token, words: list[str], degrees: Token | None, first: Token
    ) -> None:
        piece = self._so_far(first)
        self._unit(amount, PRISM)
        # `3 BI + 1.5 BU`: a plus between two prisms only joins them.
        if amount.sign == "-" or (amount.sign and not self.part.prism):
            self.part.ask("line-prism-signed", "prism", piece)
        angle = degrees.value if degrees else None
        base, code = base_of(words, angle, self.part.eyes, self.bases)
        if code:
            said = " ".join(words)
            self.part.ask(code, "prism", piece, words=said, degrees=angle or "")
        if angle is None:
            self.words_used += words
        self.part.prism.append({"amount": amount.value, "base": base})
        self.part.prism_piece = (self.part.prism_piece + " " + piece).strip()
