"""The JSON Schema of the job document, recorded from the very code that reads it."""

from collections.abc import Iterator, Sequence
from decimal import Decimal
from typing import Any

from pycore.job.document import FORMAT, read_fields
from pycore.job.fields import MAXIMUM_TEXT, Fields

Schema = dict[str, Any]
DIALECT = "https://json-schema.org/draft/2020-12/schema"
_NUMBER = {"type": ["number", "string"], "maxLength": MAXIMUM_TEXT}


class Recorder(Fields):
    """Stands in for an object of the document and writes down every field that is asked of it.

    >>> recorder = Recorder("")
    >>> recorder.number("a_mm", "20", "90")
    >>> recorder.schema["properties"]["a_mm"]["minimum"]
    20
    """

    def __init__(self, path: str) -> None:
        super().__init__({}, path, [])
        self.schema: Schema = {
            "type": "object",
            "properties": {},
            "additionalProperties": False,
        }

    def _note(self, name: str, schema: Schema) -> None:
        self.schema["properties"].setdefault(name, schema)

    def has(self, name: str) -> bool:
        """Every field counts as there, so that every branch of the reader is walked."""
        return bool(name)

    def refuse(self, code: str, name: str, given: Any, fix: str, **params: str) -> None:
        """Nothing is refused while recording."""

    def text(self, name: str) -> str | None:
        """Record a text."""
        self._note(name, {"type": "string", "maxLength": MAXIMUM_TEXT})
        return None

    def word(self, name: str, allowed: Sequence[str]) -> str | None:
        """Record a choice."""
        self._note(name, {"enum": [*allowed, ""]})
        return None

    def flag(self, name: str) -> bool:
        """Record a yes or no."""
        self._note(name, {"type": "boolean"})
        return False

    def number(self, name: str, low: str, high: str) -> Decimal | None:
        """Record a number, as JSON number or as typed text, with its range."""
        ends = {"minimum": _json_number(low), "maximum": _json_number(high)}
        self._note(name, {**_NUMBER, **ends})
        return None

    def power(self, name: str, high: str = "40") -> Decimal | None:
        """Record a power."""
        return self.number(name, "-" + high, high)

    def numbers(self, name: str, most: int, low: str, high: str) -> tuple[Decimal, ...]:
        """Record a list of numbers."""
        ends = {"minimum": _json_number(low), "maximum": _json_number(high)}
        items = {**_NUMBER, **ends}
        self._note(name, {"type": ["array", "null"], "items": items, "maxItems": most})
        return ()

    def child(self, name: str) -> "Fields | None":
        """Record an object and walk on into it."""
        inner = Recorder(self.at(name))
        inner.schema["type"] = ["object", "null"]
        self._note(name, inner.schema)
        return inner

    def children(self, name: str, most: int) -> "Iterator[Fields]":
        """Record a list by its one kind of item."""
        inner = Recorder(self.at(name))
        self._note(name, {"type": ["array", "null"], "items": inner.schema, "maxItems": most})
        yield inner


def _json_number(text: str) -> int | float:
    return float(text) if "." in text else int(text)


_BASE: Schema = {
    "description": "in, out, up, down, 0 to 360, or the 180 notation with its word",
    "anyOf": [
        {"type": ["string", "number"]},
        {
            "type": "object",
            "properties": {
                "degrees": {**_NUMBER, "minimum": 0, "maximum": 180},
                "side": {"enum": ["in", "out", "up", "down"]},
            },
            "required": ["degrees", "side"],
            "additionalProperties": False,
        },
    ],
}


def job_schema() -> Schema:
    """The schema of the job document, version 1. Returns a JSON Schema (draft 2020-12).

    >>> job_schema()["required"]
    ['format', 'state']
    """
    recorder = Recorder("")
    read_fields(recorder)
    schema = recorder.schema
    properties = schema["properties"]
    properties["format"] = {"const": FORMAT}
    properties["edition_options"] = {
        "type": ["object", "null"],
        "additionalProperties": {"type": "string"},
    }
    _set_bases(schema)
    return {
        "$schema": DIALECT,
        "title": FORMAT,
        **schema,
        "required": ["format", "state"],
        "anyOf": [{"required": ["right"]}, {"required": ["left"]}],
    }


def _set_bases(schema: Schema) -> None:
    """The base of a prism has three notations, which one recorded field cannot say."""
    for name, inner in schema.get("properties", {}).items():
        if name == "base" and "maxLength" in inner:
            schema["properties"][name] = _BASE
        _set_bases(inner)
        _set_bases(inner.get("items", {}))
