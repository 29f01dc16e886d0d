"""Spoils good jobs at random: `python -m tests.door.fuzz 1000000 [SEED]` counts what should not be.

A spoilt job must be refused or answered in full: no crash, no `internal`, no number out of nonsense.
"""

import json
import random
import re
import sys
import time
from typing import Any

from pycore.api import handle

NUMBER = re.compile(r"\s*[+\-−]?(\d+[.,]?\d*|[.,]\d+)\s*", re.ASCII)
NONSENSE = [
    "abc", "2..5", "--1", "1e3", "NaN", "inf", "1_0", "٣", "１２", "½", "0x10", "1/2", "2.5D", "∞", "1,000.0", ".", "+", "²",
    "1234567890123", "\x00", "1\x00", "x" * 70, "=1+1", "−−2", "1;2", "1 2", "$5", "{}", "null", "1e400", "٫5", "±1",
]  # fmt: skip
ODD = [
    None,
    True,
    False,
    [],
    {},
    [[]],
    {"a": 1},
    "",
    " ",
    "in",
    "up",
    "360",
    "-0",
    "0",
    0,
    -1,
    99999,
    1.5,
    ["in"],
    "right",
    "мост",
    "😀",
    "\u202e",
    "a" * 64,
]
PIECES = [
    '"',
    "{",
    "}",
    "[",
    "]",
    ",",
    ":",
    "null",
    "NaN",
    "1e9",
    "\\ud800",
    "\\u0000",
    "-",
    "0",
    "9" * 30,
    "\ufeff",
    "\x1f",
    "é",
    "true",
    "\\",
    "//",
]
# Leaves that are words or free text; every other text of the good job is a number.
WORDS = {
    "format",
    "id",
    "state",
    "edition",
    "decision_rule",
    "design",
    "rule",
    "base",
    "side",
    "kind",
    "compensator",
    "target",
    "at",
    "add_side",
    "pd_for",
    "shape",
    "initials",
}


def leaves(value: Any, path: str = "") -> list[tuple[Any, Any, str]]:
    """Every leaf of a document: its holder, its key there, its path."""
    items = value.items() if isinstance(value, dict) else enumerate(value)
    found = []
    for key, item in items:
        here = f"{path}[{key}]" if isinstance(key, int) else f"{path}.{key}" if path else key
        found += leaves(item, here) if isinstance(item, (dict, list)) and item else [(value, key, here)]
    return found


def faults_in(good: Any, source: random.Random) -> str:
    """Spoil a copy of a good job once and hand it in. Returns what went wrong, or ""."""
    job = json.loads(json.dumps(good))
    way = source.randrange(5)
    must_refuse = ""
    if way == 0:
        holder, key, must_refuse = source.choice(
            [leaf for leaf in leaves(job) if leaf[1] not in WORDS and isinstance(leaf[0][leaf[1]], str)]
        )
        holder[key] = source.choice(NONSENSE)
    elif way in (1, 2):
        for _ in range(source.randrange(1, 4)):
            holder, key, _ = source.choice(leaves(job) or [(job, "id", "id")])
            spoil(holder, key, source)
    text = json.dumps(job, ensure_ascii=source.random() < 0.5)
    if way >= 3:
        text = torn(text, source)
    return verdict_on(text, must_refuse)


def spoil(holder: Any, key: Any, source: random.Random) -> None:
    """Take a leaf away, or put something odd in its place or beside it."""
    way = source.randrange(4)
    if way == 0:
        del holder[key]
    elif way == 1 and isinstance(holder, dict):
        holder[source.choice(["colour", "", "sphere", "prism", "base", "ключ", key * 9])] = source.choice(ODD)
    else:
        holder[key] = source.choice([*ODD, *NONSENSE])


def torn(text: str, source: random.Random) -> str:
    """Cut, double or insert pieces of the text itself."""
    for _ in range(source.randrange(1, 4)):
        start = source.randrange(len(text) + 1)
        end = min(len(text), start + source.choice([0, 0, 1, 2, 9]))
        text = text[:start] + source.choice(["", source.choice(PIECES), text[start:end] * 2]) + text[end:]
    return text


def verdict_on(text: str, must_refuse: str) -> str:
    """What is wrong with the answer to this text, or ""."""
    try:
        answer = json.loads(handle(text))
    except Exception as error:  # the promise under test is that there is none
        return f"raised {error!r} on {text!r}"
    errors = answer.get("errors", [])
    if any(error["code"] == "internal" for error in errors):
        return f"internal ({errors[0]['params']['kind']}) on {text!r}"
    if must_refuse and must_refuse not in [error["field"] for error in errors]:
        return f"{must_refuse} was not refused in {text!r}"
    if answer["format"] == "wedgewright.report/1":
        return nonsense_taken(json.loads(text))
    return "" if errors and all(error["code"] and error["fix"] for error in errors) else f"no fault and no fix for {text!r}"


def nonsense_taken(job: Any) -> str:
    """A leaf of an accepted job that is no number where a number belongs, or ""."""
    for holder, key, path in leaves(job):
        value = holder[key]
        if (
            isinstance(value, str)
            and value.strip()
            and not isinstance(key, int)
            and key not in WORDS
            and not NUMBER.fullmatch(value)
        ):
            return f"{path} was taken as a number: {value!r}"
    return ""


def main() -> int:
    """Fuzz as often as asked and print what was found."""
    from tests.door.test_bad_inputs import GOOD

    count, seed = int(sys.argv[1]), int(sys.argv[2]) if len(sys.argv) > 2 else 1
    source, start, found = random.Random(seed), time.monotonic(), 0
    for _ in range(count):
        fault = faults_in(GOOD, source)
        if fault:
            found += 1
            print(fault)
    print(f"{count} spoilt jobs (seed {seed}) in {time.monotonic() - start:.0f} s: {found} faults")
    return 1 if found else 0


if __name__ == "__main__":
    sys.exit(main())
