"""May this pair pass the edition's limits: the checks, their groups, the outcome, the doubt."""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal
from math import prod

from pycore.bench.doubt import ACCEPTED_DOUBT
from pycore.bench.matter import Check, Matter
from pycore.bench.verdict_missing import Missing, missing_of
from pycore.bench.verdict_notes import verdict_notes
from pycore.bench.verdict_power import power_checks
from pycore.bench.verdict_prism import prism_checks
from pycore.errors import Note

RANK = {"within": 0, "unread": 1, "undecided": 2, "outside": 3}


@dataclass(frozen=True, slots=True, kw_only=True)
class Verdict:
    """The outcome, its checks, each group's outcome and doubt, and what was not checked."""

    matter: Matter
    outcome: str
    checks: tuple[Check, ...]
    groups: Mapping[str, tuple[str, float]]
    tightest: Check | None
    missing: tuple[Missing, ...]
    notes: tuple[Note, ...] = ()

    def outcome_of(self, check: Check) -> str:
        """The outcome of one check alone, in its group where it is the only one that counts."""
        if not check.counts:
            return "within" if check.within else "outside"
        outcome, _ = self.groups[check.group]
        if outcome == "undecided" and check.doubt > ACCEPTED_DOUBT:
            return "undecided"
        return "within" if check.within else "outside"


def judge(matter: Matter) -> Verdict:
    """Judge one job by one edition.

    Arguments: `matter`. Returns the Verdict. Alternatives share a group, whose outcome is the
    best of its members (the worst under the strict option); the outcome is the worst group's.
    Source: the edition's rows; decision rules by JCGM 106:2012.
    """
    checks = (*prism_checks(matter), *power_checks(matter))
    by_group = _by_group(checks)
    groups = groups_of(matter, checks)
    missing = missing_of(matter, checks)
    outcomes = [outcome for outcome, _ in groups.values()]
    if any(item.code == "to-be-read" for item in missing):
        outcomes.append("unread")
    return Verdict(
        matter=matter,
        outcome=max(outcomes, key=RANK.__getitem__, default="unread"),
        checks=checks,
        groups=groups,
        tightest=_tightest(matter, by_group),
        missing=missing,
        notes=tuple(verdict_notes(matter, checks, groups)),
    )


def groups_of(matter: Matter, checks: Sequence[Check]) -> dict[str, tuple[str, float]]:
    """Each group's outcome and doubt. Arguments: `matter`; `checks` that were made."""
    return {name: _group(matter, members) for name, members in _by_group(checks).items()}


def _by_group(checks: Sequence[Check]) -> dict[str, list[Check]]:
    by_group: dict[str, list[Check]] = {}
    for check in checks:
        if check.counts:
            by_group.setdefault(check.group, []).append(check)
    return by_group


def _group(matter: Matter, members: Sequence[Check]) -> tuple[str, float]:
    """The outcome and the doubt of one group; prism and millimetres are separate measurements,
    so their chances multiply."""
    strict = matter.option("prism-alternatives") == "both"
    if strict:
        within = all(member.within for member in members)
        chance = prod(member.chance for member in members)
    else:
        within = any(member.within for member in members)
        chance = 1.0 - prod(1.0 - member.chance for member in members)
    doubt = 1.0 - chance if within else chance
    if matter.job.decision_rule == "guarded" and doubt > ACCEPTED_DOUBT:
        return "undecided", doubt
    return ("within" if within else "outside"), doubt


def _tightest(matter: Matter, by_group: Mapping[str, list[Check]]) -> Check | None:
    """The check with the least room, counted in limits; of alternatives the one that decides."""
    strict = matter.option("prism-alternatives") == "both"
    pick: Callable[..., Check] = min if strict else max
    deciding = [pick(members, key=_room) for members in by_group.values()]
    return min(deciding, key=_room, default=None)


def _room(check: Check) -> Decimal:
    return check.margin / check.limit if check.limit else check.margin
