"""Which further look, taking seconds, tells most about what happened?

Each look has a table of how probable each result is under each cause; a result that was entered
multiplies the probabilities by its column. A look is worth the information its result is
expected to carry about the cause: the mutual information of both, in bits.
Source: information theory (entropy, mutual information); the tables: common practice.
"""

import json
import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache, lru_cache

from pycore.bench.cause_bench import Story
from pycore.bench.cause_rank import Label, label_of
from pycore.bench.cause_table import AS_ORDERED
from pycore.data import package_text
from pycore.job.looks import OF_THE_PAIR, Look
from pycore.optics.prism import Eye

Row = tuple[float, ...]
DEFAULT = "default"


@dataclass(frozen=True, slots=True)
class LookTable:
    """One look: its results, and by cause how probable each is (never 0 or 1)."""

    code: str
    results: tuple[str, ...]
    rows: Mapping[str, Row]

    def row(self, codes: tuple[str, ...]) -> Row:
        """How probable each result is where these causes, none `as-ordered`, are the case.

        A cause with a row of its own speaks; several are averaged.
        """
        return _row(self.code, codes)


@cache
def look_tables() -> Mapping[str, LookTable]:
    """All looks by code, as they come with the program. Source: common practice.

    >>> look_tables()["lens-out"].results
    ('centred', 'off-centre')
    """
    source = json.loads(package_text("bench/look_table.json"))
    return {
        code: LookTable(
            code,
            tuple(entry["results"]),
            {cause: tuple(row) for cause, row in entry["rows"].items()},
        )
        for code, entry in source["looks"].items()
    }


@lru_cache(maxsize=5000)
def _row(look: str, codes: tuple[str, ...]) -> Row:
    rows = look_tables()[look].rows
    if not codes:
        return rows.get(AS_ORDERED) or rows[DEFAULT]
    own = [rows[code] for code in codes if code in rows] or [rows[DEFAULT]]
    return tuple([sum(column) / len(own) for column in zip(*own, strict=True)])


def codes_of(label: Label, eye: Eye | None) -> tuple[str, ...]:
    """The causes at work in one lens (in the pair: `eye` None); none for as ordered."""
    return tuple(
        [
            named.code
            for named in label
            if named.code != AS_ORDERED and (eye is None or eye in named.eyes)
        ]
    )


def leverage(looks: Sequence[Look]) -> float:
    """By how much, as a logarithm, results of looks can raise one cause over another at most."""
    whole = 0.0
    for look in looks:
        table = look_tables()[look.look]
        column = [row[table.results.index(look.result)] for row in table.rows.values()]
        whole += math.log(max(column) / min(column))
    return whole


def looked(stories: Sequence[Story], looks: Sequence[Look]) -> list[Story]:
    """The hypotheses after the results of further looks, the most probable first.

    Arguments: `stories` with probabilities; `looks` taken. Source: Bayes' theorem.
    """
    if not looks:
        return list(stories)
    tables = look_tables()
    shares = []
    for story in stories:
        share, label = story.probability, label_of(story)
        for look in looks:
            table = tables[look.look]
            eye = None if look.look in OF_THE_PAIR else look.eye
            share *= table.row(codes_of(label, eye))[table.results.index(look.result)]
        shares.append(share)
    whole = sum(shares)
    after = [
        story._replace(probability=share / whole)
        for story, share in zip(stories, shares, strict=True)
    ]
    return sorted(after, key=lambda story: -story.probability)


def information(shares: Sequence[float], rows: Sequence[Row]) -> float:
    """How much a result tells about which case holds, in bits.

    Arguments: `shares` the cases' probabilities (sum 1); `rows` each case's result
    probabilities. Returns the mutual information. Source: its definition.

    >>> information([0.5, 0.5], [(1.0, 0.0), (0.0, 1.0)])
    1.0
    """
    results = [
        sum([share * part for share, part in zip(shares, column, strict=True)])
        for column in zip(*rows, strict=True)
    ]
    return sum(
        [
            share * part * math.log2(part / result)
            for share, row in zip(shares, rows, strict=True)
            for part, result in zip(row, results, strict=True)
            if part and share
        ]
    )
