"""Reads an edition's JSON (ours and the shop's alike) into values, strictly."""

import hashlib
from collections.abc import Iterator, Mapping
from decimal import Decimal
from functools import cache
from typing import Any

from pycore.contract import decode, encode
from pycore.data import package_text
from pycore.editions.edition import (
    CHECKS,
    DESIGN_GROUPS,
    OPTIONS,
    QUANTITIES,
    Edition,
    Range,
    Row,
)
from pycore.errors import Fault, RefusedError
from pycore.job.fields import Fields

FORMAT = "wedgewright.edition/1"
BUILT_IN = (
    "ansi-z80.1-2015",
    "ansi-z80.1-2010",
    "ansi-z80.1-2020",
    "iso-21987",
    "iso-8980-1",
    "iso-8980-2",
    "nj-13-35-5.2",
)
STATES = ("uncut", "edged", "mounted")
PROVENANCES = ("published", "memory")
MAXIMUM_ROWS = 400
_RANGE_KEYS = {"over": "over", "from": "start", "below": "below", "to": "to"}


def read_edition(source: Mapping[str, Any], local: bool) -> Edition:
    """Read a decoded edition.

    Arguments: `source` as `contract.decode` gives it; `local` true for one the shop loaded,
    whose rows are of provenance `local` whatever it claims of itself.
    Returns the Edition. Raises RefusedError with every fault at once.

    >>> read_edition({"format": FORMAT, "id": "shop", "name": "Shop", "states": ["mounted"],
    ...   "rows": [{"check": "add", "limit": {"fixed": "0.12"}, "clause": "1"}]}, True).provenances
    ('local',)
    """
    faults: list[Fault] = []
    fields = Fields(source, "edition", faults)
    if fields.text("format") != FORMAT:
        fields.refuse("format-unknown", "format", fields.raw("format"), "use-format", format=FORMAT)
    for name in ("id", "name"):
        if not fields.has(name):
            fields.refuse("text-missing", name, "", "type-text")
    edition = Edition(
        id=fields.text("id") or "",
        name=fields.text("name") or "",
        states=_words(fields, "states", STATES) or STATES,
        options=_read_options(fields),
        rows=tuple(_read_row(row, local) for row in fields.children("rows", MAXIMUM_ROWS)),
        sha256=hashlib.sha256(encode(source).encode()).hexdigest(),
        local=local,
    )
    if not fields.has("rows"):
        fields.refuse("rows-missing", "rows", "", "send-again")
    for first, second in _overlapping(edition.rows):
        params = {"first": str(first + 1), "second": str(second + 1)}
        fields.refuse("edition-rows-overlap", "rows", "", "part-rows", **params)
    fields.finish()
    if faults:
        raise RefusedError(tuple(faults))
    return edition


def _overlapping(rows: tuple[Row, ...]) -> Iterator[tuple[int, int]]:
    """Pairs of rows, by their places, that could both hold for one lens."""
    by_check: dict[str, list[tuple[int, Row]]] = {}
    for place, row in enumerate(rows):
        for earlier, other in by_check.get(row.check, []):
            if row.overlaps(other):
                yield earlier, place
        by_check.setdefault(row.check, []).append((place, row))


def _words(fields: Fields, name: str, allowed: tuple[str, ...]) -> tuple[str, ...]:
    value = fields.raw(name)
    if value is None:
        return ()
    if not isinstance(value, list) or any(word not in allowed for word in value):
        fields.refuse("choice-unknown", name, "", "choose-one", allowed=", ".join(allowed))
        return ()
    return tuple(value)


def _read_options(fields: Fields) -> dict[str, str]:
    inner = fields.child("options")
    if inner is None:
        return {}
    chosen = {name: inner.word(name, values) for name, values in OPTIONS.items()}
    inner.finish()
    return {name: value for name, value in chosen.items() if value}


def _read_row(fields: Fields, local: bool) -> Row:
    limit = fields.child("limit")
    if limit is None:
        fields.refuse("number-missing", "limit", "", "type-number")
    if not fields.has("check"):
        fields.refuse("choice-missing", "check", "", "choose-one", allowed=", ".join(CHECKS))
    provenance = fields.word("provenance", PROVENANCES)
    row = Row(
        check=fields.word("check", CHECKS) or "",
        fixed=_limit_part(limit, "fixed"),
        per_dioptre=_limit_part(limit, "per_dioptre"),
        clause=_clause(fields),
        provenance="local" if local else provenance or "memory",
        designs=_words(fields, "designs", DESIGN_GROUPS) or DESIGN_GROUPS,
        states=_words(fields, "states", STATES) or STATES,
        ranges=_read_ranges(fields),
        component=fields.word("component", ("vertical", "horizontal")),
        option=_read_row_option(fields),
        measure=fields.word("measure", ("difference", "each")),
        meridians=fields.word("meridians", ("strongest", "both")) or "strongest",
    )
    if limit:
        if not limit.has("fixed") and not limit.has("per_dioptre"):
            limit.refuse("number-missing", "fixed", "", "type-number")
        limit.finish()
    fields.finish()
    return row


def _limit_part(limit: Fields | None, name: str) -> Decimal:
    return (limit.number(name, "0", "100") if limit else None) or Decimal(0)


def _clause(fields: Fields) -> str:
    """A clause may be longer than a field of a job; it only has to be text."""
    value = fields.raw("clause")
    if not isinstance(value, str) or not value.strip() or len(value) > 300:
        fields.refuse("text-missing", "clause", value, "type-text")
        return ""
    return value


def _read_ranges(fields: Fields) -> dict[str, Range]:
    ranges = {}
    for quantity in QUANTITIES:
        inner = fields.child(quantity)
        if inner:
            ends = {ours: inner.number(key, "0", "100") for key, ours in _RANGE_KEYS.items()}
            inner.finish()
            ranges[quantity] = Range(**ends)
    return ranges


def _read_row_option(fields: Fields) -> tuple[str, str] | None:
    inner = fields.child("option")
    if inner is None:
        return None
    name = inner.word("id", tuple(OPTIONS))
    value = inner.word("value", OPTIONS[name]) if name else inner.text("value")
    for part in ("id", "value"):
        if not inner.has(part):
            inner.refuse("choice-missing", part, "", "choose-one", allowed=", ".join(OPTIONS))
    inner.finish()
    return (name, value) if name and value else None


@cache
def built_in(edition_id: str) -> Edition:
    """One of the editions that come with the package. Arguments: `edition_id` of `BUILT_IN`.

    >>> built_in("ansi-z80.1-2015").name
    'ANSI Z80.1-2015'
    """
    return read_edition(decode(package_text(f"editions/{edition_id}.json")), local=False)
