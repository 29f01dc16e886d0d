"""What should a person be told beside the verdict: excess, closeness, what to measure or repeat?"""

from collections.abc import Callable, Iterator, Mapping, Sequence
from decimal import Decimal
from functools import partial

from pycore.bench.doubt import (
    ACCEPTED_DOUBT,
    chance_within,
    chance_within_circle,
    repeats_needed,
)
from pycore.bench.expected import has_marked_height
from pycore.bench.matter import Check, Matter
from pycore.bench.verdict_position import UNIT as MILLIMETRES
from pycore.bench.verdict_power import power_limits
from pycore.bench.verdict_prism import (
    COMPONENTS,
    judged_as_vector,
    lens_row,
    lens_uncertainty,
    lens_vertical_is_known,
    pair_row,
    pair_uncertainty,
)
from pycore.decimals import fixed, snap
from pycore.errors import Note
from pycore.job.bench import EyeReading
from pycore.optics.prism import EYES, Eye

Chance = Callable[[int], float]


def verdict_notes(
    matter: Matter, checks: Sequence[Check], groups: Mapping[str, tuple[str, float]]
) -> list[Note]:
    """Every note beside the verdict.

    Arguments: `matter`; `checks` made; `groups` with outcome and doubt. Returns Notes.
    """
    doubts = (
        _notes_on_unreachable(matter)
        if matter.job.decision_rule == "guarded"
        else _notes_on_doubt(groups)
    )
    return [
        *_notes_on_lenses(matter),
        *_notes_on_place(matter),
        *_notes_on_strays(matter),
        *doubts,
        *_notes_on_millimetres(checks),
    ]


def _notes_on_lenses(matter: Matter) -> list[Note]:
    """A single lens's own excess in a mounted pair warns; the pair's rule decides."""
    notes: list[Note] = []
    if matter.job.state != "mounted":
        return notes
    for eye in matter.dues:
        error = matter.error(eye)
        row = matter.row("prism.lens", {}, state="uncut", component="horizontal", eye=eye)
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


def _notes_on_strays(matter: Matter) -> list[Note]:
    """Readings of a lens that is not ordered are not judged; that is said."""
    return [
        Note(
            code="reading-without-order",
            field=f"readings.{eye}",
            severity="warning",
            about="reading",
            params={"eye": eye},
        )
        for eye in EYES
        if eye not in matter.dues and matter.job.readings.of(eye) != EyeReading()
    ]


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


def _notes_on_doubt(groups: Mapping[str, tuple[str, float]]) -> list[Note]:
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
    hardest: dict[str, Chance] = {}  # of both lenses the one that passes less easily
    for name, chance in _best_chances(matter):
        if name not in hardest or chance(1) < hardest[name](1):
            hardest[name] = chance
    notes = []
    for name, chance in hardest.items():
        if 1.0 - chance(1) <= ACCEPTED_DOUBT:
            continue
        needed = repeats_needed(chance)
        code = "guarded-needs-repeats" if needed else "guarded-never-passes"
        params = {"check": name, "count": str(needed or "")}
        notes.append(Note(code=code, about="verdict", severity="warning", params=params))
    return notes


def _best_chances(matter: Matter) -> Iterator[tuple[str, Chance]]:
    """For each limit, the chance that a perfect reading repeated n times passes.

    Only the prism is read repeatedly; for power, cylinder, axis and add n changes nothing.
    """
    for name, limit, uncertainty in power_limits(matter):
        yield name, partial(_fixed_chance, limit, uncertainty)
    if matter.job.state == "mounted":
        for component in COMPONENTS:
            found = pair_row(matter, component)
            if found and matter.pair_is_ordered:
                yield f"prism.{component}", partial(_pair_chance, matter, found[1])
        return
    for eye in matter.own_eyes:
        found = lens_row(matter, eye, "horizontal")
        if found:
            yield "prism.lens", partial(_lens_chance, matter, eye, found[1])


def _fixed_chance(limit: Decimal, uncertainty: float, _count: int) -> float:
    return chance_within(Decimal(0), limit, uncertainty)


def _pair_chance(matter: Matter, limit: Decimal, count: int) -> float:
    return chance_within(Decimal(0), limit, pair_uncertainty(matter, count))


def _lens_chance(matter: Matter, eye: Eye, limit: Decimal, count: int) -> float:
    of = chance_within_circle if judged_as_vector(matter, eye) else chance_within
    return of(Decimal(0), limit, lens_uncertainty(matter, eye, count))
