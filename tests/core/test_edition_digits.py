"""Every number of every edition is guarded: change its last digit, and a verdict differs from the reference.

The changed edition is sent with the request, as a shop's own would be. The readings are those of
`tests/references/limit_cases.py` (limits written from the sources, not from the edition files). An edition
that is refused once a digit is changed counts as noticed too.
"""

from __future__ import annotations

import copy
import json
import re
from collections.abc import Iterator
from decimal import Decimal
from importlib.resources import files
from typing import Any

import pytest

from tests.references.limit_cases import cases_of
from tests.references.limit_jobs import EDITIONS, Case, report_on

D = Decimal

CHECKS_OF_ROW = {"prism.vertical.each": "prism.lens", "prism.horizontal.each": "prism.lens"}


def edition(name: str) -> dict[str, Any]:
    """An edition as it is kept."""
    found: dict[str, Any] = json.loads(files("pycore.editions").joinpath(f"{name}.json").read_text("utf-8"))
    return found


def numbers_in(value: Any, path: tuple[Any, ...] = ()) -> Iterator[tuple[tuple[Any, ...], str]]:
    """Every number of an edition with its path: a JSON number or a text of digits."""
    if isinstance(value, dict):
        for key, inner in value.items():
            yield from numbers_in(inner, (*path, key))
    elif isinstance(value, list):
        for place, inner in enumerate(value):
            yield from numbers_in(inner, (*path, place))
    elif not isinstance(value, bool) and re.fullmatch(r"-?[0-9]+(\.[0-9]+)?", str(value)):
        yield path, str(value)


def changed(original: dict[str, Any], path: tuple[Any, ...], text: str) -> dict[str, Any]:
    """A copy of an edition with one number replaced and another name."""
    copied = copy.deepcopy(original)
    inner: Any = copied
    for key in path[:-1]:
        inner = inner[key]
    inner[path[-1]] = text
    return copied | {"id": "changed"}


def neighbours(text: str) -> list[str]:
    """A number with one more and one less in its last digit."""
    value = D(text)
    step = D((0, (1,), int(value.as_tuple().exponent)))
    return [f"{near:f}" for near in (value + step, value - step) if near >= 0]


def family(check: str) -> str:
    """Rows that are judged together: a prism and the millimetres that stand for it; every other check by itself."""
    return "prism" if check.startswith(("prism.", "prp.")) else check


def likely_first(cases: tuple[Case, ...], row: dict[str, Any] | None, path: tuple[Any, ...], text: str, other: str) -> list[Case]:
    """The cases in the order in which they are worth trying: of the row's check, in its ranges, where the change must show."""
    if row is None:
        return list(cases)
    check = CHECKS_OF_ROW.get(row["check"], row["check"])
    key, end = path[2], path[3]
    near = D("-0.0005") if key == "limit" else D("0.01")  # inside the row, or also just beside it
    shows_at = min(D(text), D(other)) if end in ("from", "below") else max(D(text), D(other))

    def unlikely(case: Case) -> tuple[bool, int, D]:
        ranges = [(case.at[name], row[name]) for name in case.at if name in row]
        designs = {{"bifocal": "multifocal"}.get(design := case.job["lens"]["design"], design)}
        outside = [
            not D(span.get("over", span.get("from", -1))) - near <= figure <= D(span.get("to", span.get("below", 99))) + near
            for figure, span in ranges
        ]
        away = abs(case.at[key] - shows_at) if key in case.at else D(0)
        return not designs <= set(row.get("designs", designs)), sum(outside), away

    return sorted((case for case in cases if any(due.check == check for due in case.due)), key=unlikely)


def noticed(case: Case, altered: dict[str, Any]) -> bool:
    """Whether a changed edition gives the case another outcome than it is due."""
    report = report_on(case.job | {"edition": "changed"}, editions=[altered])
    return any(due.seen_in(report) != due.outcome for due in case.due)


def test_every_edition_is_here() -> None:
    kept = {path.name.removesuffix(".json") for path in files("pycore.editions").iterdir() if path.name.endswith(".json")}
    assert kept == set(EDITIONS)


# A cylinder is at most twice the strongest principal power (+3.00 −6.00), so these changes touch no lens there is.
NO_SUCH_LENS = {
    ("iso-8980-1", "cylinder", "power up to 3.00", "cylinder.to 6.00 → 6.01"),
    ("iso-8980-1", "cylinder", "cylinder over 6.00", "power.over 3.00 → 2.99"),
}


def listed(name: str, row: dict[str, Any] | None, path: tuple[Any, ...], text: str, other: str) -> bool:
    """Whether a change that no reading can show is among those that touch no lens."""
    if row is None:
        return False
    at = {
        "power up to 3.00": row.get("power", {}).get("to") == "3.00",
        "cylinder over 6.00": row.get("cylinder", {}).get("over") == "6.00",
    }
    change = f"{'.'.join(map(str, path[2:]))} {text} → {other}"
    return any((name, row["check"], where, change) in NO_SUCH_LENS for where, holds in at.items() if holds)


@pytest.mark.parametrize("name", EDITIONS)
def test_a_changed_digit_is_noticed(name: str) -> None:
    original, cases = edition(name), cases_of(name)
    assert not noticed(cases[0], original | {"id": "changed"}), "an unchanged copy gives the same verdicts"
    tried, excused, unnoticed = 0, 0, []
    for path, text in numbers_in(original):
        row = original["rows"][path[1]] if path[0] == "rows" else None
        for other in neighbours(text):
            altered = changed(original, path, other)
            if row:  # the rows judged together are enough, and read sooner
                altered["rows"] = [one for one in altered["rows"] if family(one["check"]) == family(row["check"])]
            tried += 1
            if listed(name, row, path, text, other):
                excused += 1
            elif not any(noticed(case, altered) for case in likely_first(cases, row, path, text, other)):
                unnoticed.append((".".join(map(str, path)), text, other, row and row["check"]))
    print(f"{name}: {tried} changed numbers, {excused} touch no lens there is, {len(unnoticed)} unnoticed")
    assert tried > 0
    assert not unnoticed, unnoticed
