"""Reads the fields of one object of the job document, collecting every fault at once."""

import re
from collections.abc import Iterator, Mapping, Sequence
from decimal import Decimal
from typing import Any

from pycore.decimals import NumberError, has_sign, read_decimal
from pycore.errors import Fault

MAXIMUM_TEXT = 64
_CONTROL = re.compile("[\x00-\x1f\x7f]")


class Fields:
    """One object of the document on its way from text to values.

    Arguments: `source` the decoded object; `path` its place in the document ("" at the top);
    `faults` the list every fault goes to. Numbers come as text (JSON numbers as their digits);
    `typed(text)` tells whether a person typed it, so that a sign may be asked for.

    >>> faults = []
    >>> Fields({"sphere": "0.75"}, "right", faults).power("sphere")
    >>> faults[0].code, faults[0].field
    ('sign-missing', 'right.sphere')
    """

    def __init__(self, source: Any, path: str, faults: list[Fault]) -> None:
        self.path = path
        self.faults = faults
        self._seen: set[str] = set()
        if isinstance(source, Mapping):
            self._source: Mapping[str, Any] = source
        else:
            self._source = {}
            self.refuse("object-expected", "", source, "send-again")

    def at(self, name: str) -> str:
        """The path of a field of this object; `name` "" means the object itself."""
        return ".".join(part for part in (self.path, name) if part)

    def refuse(self, code: str, name: str, given: Any, fix: str, **params: str) -> None:
        """Add a fault about one field. The arguments are those of `Fault`."""
        shown = given if isinstance(given, str) else "" if given is None else str(given)
        fault = Fault(
            code=code, field=self.at(name), given=shown[:MAXIMUM_TEXT], params=params, fix=fix
        )
        self.faults.append(fault)

    def has(self, name: str) -> bool:
        """Tell whether the field is there and neither null nor blank."""
        value = self._source.get(name)
        return value is not None and not (isinstance(value, str) and not value.strip())

    def names(self) -> tuple[str, ...]:
        """The names of all fields that are there."""
        return tuple(self._source)

    def raw(self, name: str) -> Any:
        """The field's decoded value as it came, or None."""
        self._seen.add(name)
        return self._source.get(name)

    def text(self, name: str) -> str | None:
        """A short text without control characters, stripped; None where absent or empty."""
        self._seen.add(name)
        value = self._source.get(name)
        if value is None:
            return None
        if not isinstance(value, str):
            self.refuse("text-expected", name, value, "type-text")
        elif len(value) > MAXIMUM_TEXT:
            self.refuse("text-too-long", name, value, "shorten", limit=str(MAXIMUM_TEXT))
        elif _CONTROL.search(value):
            self.refuse("text-control-character", name, value, "type-text")
        else:
            return value.strip() or None
        return None

    def word(self, name: str, allowed: Sequence[str]) -> str | None:
        """One of the words allowed, or None where absent."""
        value = self.text(name)
        if value is None or value in allowed:
            return value
        self.refuse("choice-unknown", name, value, "choose-one", allowed=", ".join(allowed))
        return None

    def flag(self, name: str) -> bool:
        """True or false; absent is false."""
        value = self.raw(name)
        if value is None or isinstance(value, bool):
            return bool(value)
        self.refuse("flag-expected", name, value, "choose-yes-no")
        return False

    def number(self, name: str, low: str, high: str) -> Decimal | None:
        """A number within [low, high], in the field's own unit; None where absent."""
        value = self.text(name)
        if value is None:
            return None
        try:
            number = read_decimal(value)
        except NumberError as refused:
            self.refuse(refused.code, name, value, "type-number")
            return None
        if not Decimal(low) <= number <= Decimal(high):
            self.refuse("number-out-of-range", name, value, "check-number", low=low, high=high)
            return None
        return number

    def power(self, name: str, high: str = "40") -> Decimal | None:
        """A power in dioptres, whose sign must be written unless it is zero."""
        number = self.number(name, "-" + high, high)
        value = self.raw(name)
        # A JSON number needs no plus sign; a typed text does (see contract.JsonNumber).
        if number and type(value) is str and not has_sign(value):
            self.refuse("sign-missing", name, value, "write-sign")
            return None
        return number

    def child(self, name: str) -> "Fields | None":
        """The object under a name, or None where absent."""
        value = self.raw(name)
        return None if value is None else Fields(value, self.at(name), self.faults)

    def children(self, name: str, most: int) -> "Iterator[Fields]":
        """The objects of a list, at most `most` of them."""
        value = self.raw(name)
        if value is None:
            return
        if not isinstance(value, list):
            self.refuse("list-expected", name, value, "send-again")
            return
        if len(value) > most:
            self.refuse("list-too-long", name, str(len(value)), "shorten", limit=str(most))
        for index, item in enumerate(value[:most]):
            yield Fields(item, f"{self.at(name)}[{index}]", self.faults)

    def numbers(self, name: str, most: int, low: str, high: str) -> tuple[Decimal, ...]:
        """The numbers of a list, at most `most`, each within [low, high]; empty where absent."""
        value = self.raw(name)
        if value is None:
            return ()
        if not isinstance(value, list):
            self.refuse("list-expected", name, value, "send-again")
            return ()
        if len(value) > most:
            self.refuse("list-too-long", name, str(len(value)), "shorten", limit=str(most))
        items = Fields({str(index): item for index, item in enumerate(value[:most])}, "", [])
        read = [items.number(place, low, high) for place in items.names()]
        for place in items.names():
            if not items.has(place):
                items.refuse("number-missing", place, "", "type-number")
        for fault in items.faults:
            where = f"{name}[{fault.field}]"
            self.refuse(fault.code, where, fault.given, fault.fix, **fault.params)
        return tuple(number for number in read if number is not None)

    def count(self, name: str, low: str, high: str) -> Decimal | None:
        """A whole number within [low, high]; None where absent."""
        number = self.number(name, low, high)
        if number is not None and number % 1:
            self.refuse("number-not-whole", name, self.raw(name), "type-whole")
            return None
        return number

    def finish(self) -> None:
        """Refuse every key that nobody read."""
        for key in self._source:
            if key not in self._seen:
                self.refuse("key-unknown", key[:MAXIMUM_TEXT], key, "remove-key")
