"""May this pair pass the edition's limits: the checks, their groups, the outcome, the doubt."""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from decimal import Decimal
from functools import partial
from math import prod

from pycore.bench.doubt import (
    ACCEPTED_DOUBT,
    chance_within,
    chance_within_circle,
    repeats_needed,
)
from pycore.bench.expected import has_marked_height
from pycore.bench.matter import Check, Matter
from pycore.bench.verdict_position import UNIT as MILLIMETRES
from pycore.bench.verdict_power import power_checks
from pycore.bench.verdict_prism import (
    COMPONENTS,
    judged_as_vector,
    lens_row,
    lens_uncertainty,
    lens_vertical_is_known,
    pair_row,
    pair_uncertainty,
    prism_checks,
)
from pycore.decimals import fixed, snap
from pycore.errors import Note
from pycore.optics.prism import Eye

RANK = {"within": 0, "unread": 1, "undecided": 2, "outside": 3}
# What no reading on a lens meter shows; always named beside a verdict (common practice).
NEVER_CHECKED = (
    "base-curve",
    "thickness",
    "impact",
    "material",
    "surface",
    "segment",
    "fit",
)


@dataclass(frozen=True, slots=True, kw_only=True)
class Missing:
    """Something not checked: `code`, with the check and the eye it is about where it is one."""

    code: str
    check: str = ""
    eye: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Verdict:
    """The outcome, its checks, each group's outcome and doubt, and what was not checked."""

    matter: Matter
    outcome: str
    checks: tuple[Check, ...]
    groups: Mapping[str, tuple[str, float]]
    tightest: Check | None
    missing: tuple[Missing, ...]
    notes: tuple[Note, ...] = field(default=())

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
    by_group: dict[str, list[Check]] = {}
    for check in checks:
        if check.counts:
            by_group.setdefault(check.group, []).append(check)
    groups = {name: _group(matter, members) for name, members in by_group.items()}
    missing = _missing(matter, groups)
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
        notes=(
            *_notes_on_lenses(matter),
            *_notes_on_place(matter),
            *_notes_on_doubt(matter, groups),
            *_notes_on_millimetres(checks),
        ),
    )


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


def _missing(matter: Matter, groups: Mapping[str, object]) -> tuple[Missing, ...]:
    """What should have been read and was not, and what this bench does not check."""
    found = [*_missing_prism(matter, groups)]
    for eye, due in matter.dues.items():
        if due.partner or due.power is None:
            continue
        wanted = ["power"]
        sizes = {"power": due.power.strongest, "cylinder": abs(due.power.cylinder)}
        wanted += ["cylinder"] * bool(matter.edition.has("cylinder"))
        wanted += ["axis"] * bool(due.power.cylinder and matter.row("axis", sizes))
        wanted += ["add"] * bool(due.add)
        for check in wanted:
            row = matter.row(check, {**sizes, "add": due.add or Decimal(0)})
            if row is None:
                found.append(Missing(code="no-limit", check=check, eye=eye))
            elif f"{check}.{eye}" not in groups and f"{check}.{eye}.1" not in groups:
                found.append(Missing(code="not-read", check=check, eye=eye))
    found += [Missing(code=code) for code in NEVER_CHECKED]
    return tuple(found)


def _missing_prism(matter: Matter, groups: Mapping[str, object]) -> list[Missing]:
    wanted: list[tuple[str, str]] = []
    if matter.job.state == "mounted":
        wanted += [(f"prism.{component}", "pair") for component in COMPONENTS]
    else:
        for eye, due in matter.dues.items():
            if due.partner:
                continue
            if judged_as_vector(matter, eye):
                wanted.append((f"prism.lens.{eye}", eye))
                continue
            wanted.append((f"prism.lens.{eye}.horizontal", eye))
            if lens_vertical_is_known(matter, eye):
                wanted.append((f"prism.lens.{eye}.vertical", eye))
        if not all(due.vertical_known for due in matter.dues.values()):
            wanted.append(("prism.vertical", "pair"))
    missing = []
    for group, whose in wanted:
        if group in groups:
            continue
        check = "prism.lens" if group.startswith("prism.lens") else group
        has_limit = _has_prism_limit(matter, check)
        code = "to-be-read" if has_limit else "no-limit"
        missing.append(Missing(code=code, check=check, eye=whose))
    return missing


def _has_prism_limit(matter: Matter, check: str) -> bool:
    return any(row.check == check and matter.design in row.designs for row in matter.edition.rows)


def _notes_on_lenses(matter: Matter) -> list[Note]:
    """A single lens's own excess in a mounted pair warns; the pair's rule decides."""
    notes: list[Note] = []
    if matter.job.state != "mounted":
        return notes
    for eye in matter.dues:
        error = matter.error(eye)
        row = matter.edition.row(
            "prism.lens",
            design=matter.design,
            state="uncut",
            chosen=matter.chosen,
            sizes={},
            component="horizontal",
        )
        limit = row.limit({}) if row else Decimal("0.33")
        if error is None or matter.dues[eye].partner:
            continue
        parts = {"horizontal": error.x}
        if lens_vertical_is_known(matter, eye):
            parts["vertical"] = error.y
        for component, part in parts.items():
            if snap(abs(part)) > limit:
                notes.append(
                    Note(
                        code="lens-excess",
                        field=f"readings.{eye}.prism",
                        severity="warning",
                        about="verdict",
                        params={
                            "eye": eye,
                            "word": component,
                            "error": fixed(abs(part), 2),
                            "limit": fixed(limit, 2),
                        },
                    )
                )
    return notes


def _notes_on_place(matter: Matter) -> list[Note]:
    """Where the readings were taken, when that leaves the vertical without a meaning."""
    job = matter.job
    unmarked = [order.eye for order in job.orders if not has_marked_height(order, job.state)]
    if not unmarked or not matter.reads:
        return []
    if job.readings.at is None:
        return [Note(code="place-taken-first-lens-set", field="readings.at", about="reading")]
    if job.readings.at == "marked-point":
        return [
            Note(
                code="no-marked-height",
                field=f"{unmarked[0]}.prp_height_mm",
                severity="ask",
                about="reading",
            )
        ]
    return []


def _notes_on_millimetres(checks: Sequence[Check]) -> list[Note]:
    """An outside prism whose millimetres could still pass it asks for the measurement."""
    decided = {check.group for check in checks if check.counts and check.within}
    return [
        Note(
            code="measure-millimetres",
            about="verdict",
            severity="ask",
            params={
                "check": check.id,
                "computed": fixed(check.deviation, 1),
                "limit": fixed(check.limit, 1),
            },
        )
        for check in checks
        if check.unit == MILLIMETRES and not check.measured and check.group not in decided
    ]


def _notes_on_doubt(matter: Matter, groups: Mapping[str, tuple[str, float]]) -> list[Note]:
    if matter.job.decision_rule == "guarded":
        return _notes_on_unreachable(matter)
    return [
        Note(
            code="close",
            about="verdict",
            severity="warning",
            params={"check": _check_of_group(name), "doubt": f"{doubt * 100:.0f}"},
        )
        for name, (_, doubt) in groups.items()
        if doubt > ACCEPTED_DOUBT
    ]


def _check_of_group(name: str) -> str:
    """The check's identifier inside a group's name, for its words."""
    if name in ("prism.vertical", "prism.horizontal"):
        return name
    return "prism.lens" if name.startswith("prism") else name.split(".")[0]


def _notes_on_unreachable(matter: Matter) -> list[Note]:
    """Under guarded acceptance: where no reading at all could pass, and how many would do."""
    notes = []
    for name, chance in _best_chances(matter).items():
        if 1.0 - chance(1) <= ACCEPTED_DOUBT:
            continue
        needed = repeats_needed(chance)
        code = "guarded-needs-repeats" if needed else "guarded-never-passes"
        notes.append(
            Note(
                code=code,
                about="verdict",
                severity="warning",
                params={"check": name, "count": str(needed or "")},
            )
        )
    return notes


def _best_chances(matter: Matter) -> dict[str, Callable[[int], float]]:
    """For each prism limit, the chance that a perfect reading repeated n times passes."""
    chances: dict[str, Callable[[int], float]] = {}
    if matter.job.state == "mounted":
        for component in COMPONENTS:
            found = pair_row(matter, component)
            if found and matter.pair_is_ordered:
                chances[f"prism.{component}"] = partial(_pair_chance, matter, found[1])
        return chances
    for eye, due in matter.dues.items():
        found = lens_row(matter, eye, "horizontal")
        if found and not due.partner:
            chances["prism.lens"] = partial(_lens_chance, matter, eye, found[1])
    return chances


def _pair_chance(matter: Matter, limit: Decimal, count: int) -> float:
    return chance_within(Decimal(0), limit, pair_uncertainty(matter, count))


def _lens_chance(matter: Matter, eye: Eye, limit: Decimal, count: int) -> float:
    of = chance_within_circle if judged_as_vector(matter, eye) else chance_within
    return of(Decimal(0), limit, lens_uncertainty(matter, eye, count))
