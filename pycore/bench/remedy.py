"""What saves a pair that failed: the smallest movement of its lenses, or why only a remake will do.

A movement is in mm, of the lens in the frame, seen from the front; the new dot lies at minus that
on the lens. Two are sought: the least that passes, and the least whose doubt is at most 0.05.
Both are rounded outwards to 0.1 mm and judged again in decimals by the edition's own checks.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from itertools import islice

from pycore.bench.doubt import ACCEPTED_DOUBT
from pycore.bench.matter import Check, Matter
from pycore.bench.remedy_least import Limit, Move, on_grid
from pycore.bench.remedy_limits import pieces
from pycore.bench.remedy_moved import moved, parts_of
from pycore.bench.remedy_reason import Why, is_of_prism, remade_of, why_none
from pycore.bench.remedy_search import Pieces, movable, search
from pycore.bench.remedy_trade import trade_limits
from pycore.bench.verdict import Verdict, groups_of
from pycore.bench.verdict_prism import prism_checks
from pycore.optics.prism import EYES, Eye

GRIDS_MM = (0.1, 0.01, 0.001)  # a finer one only where the coarser has no place within the limits
TRIES = 6  # places on a grid that are judged; the first is nearly always right


@dataclass(frozen=True, slots=True, kw_only=True)
class Shift:
    """A movement that passes, in mm: `exact` before rounding, `move` as it is to be done.

    `after`: the matter as it would then be read, with its `checks` of prism and their `groups`.
    """

    exact: Move
    move: Move
    after: Matter
    checks: tuple[Check, ...]
    groups: Mapping[str, tuple[str, float]]

    @property
    def doubt(self) -> float:
        """The largest doubt of a group that the movement leaves."""
        return max(doubt for _, doubt in self.groups.values())

    @property
    def eyes(self) -> tuple[Eye, ...]:
        """The eyes whose lens moves."""
        return tuple(eye for eye in EYES if any(parts_of(self.move, eye)))


@dataclass(frozen=True, slots=True, kw_only=True)
class Choice:
    """The least movement and the recommended one of some lenses; None where there is none."""

    least: Shift | None = None
    recommended: Shift | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Remedy:
    """`kind` none-needed, shift or remake, and why.

    `shared`: both lenses (or the one that can be moved) by the least sum of squares; `only`: one
    lens alone; `allowed`: the state lets the lens be moved as it is; `remade`: the lenses to be
    made again where nothing is moved.
    """

    kind: str
    why: Why
    shared: Choice = Choice()
    only: Mapping[Eye, Choice] = field(default_factory=dict)
    allowed: bool = False
    remade: tuple[Eye, ...] = ()


def remedy_of(matter: Matter, verdict: Verdict) -> Remedy | None:
    """What to do with a pair (or lens) that was judged.

    Arguments: `matter`; its `verdict`. Returns the Remedy, or None where nothing has failed yet
    that a decision could rest on (not read, or undecided with no movement to decide it).
    """
    if verdict.outcome == "within":
        return Remedy(kind="none-needed", why=Why("within"))
    if verdict.outcome == "unread":
        return None
    beside = [
        name
        for name, (outcome, _) in verdict.groups.items()
        if outcome == "outside" and not is_of_prism(name)
    ]
    if not beside and _prism_failed(verdict):
        found = _shift(matter, verdict)
        if found is not None:
            return found
    if verdict.outcome == "undecided":
        return None
    why = why_none(matter, verdict, beside)
    return Remedy(kind="remake", why=why, remade=remade_of(matter, verdict))


def _prism_failed(verdict: Verdict) -> bool:
    return any(
        is_of_prism(name) and outcome != "within" for name, (outcome, _) in verdict.groups.items()
    )


def _shift(matter: Matter, verdict: Verdict) -> Remedy | None:
    """The movement, if there is one: of both lenses, and of each alone."""
    eyes = movable(matter)
    guarded = matter.job.decision_rule == "guarded"
    careful = tuple(pieces(matter, verdict.checks, careful=True))
    plain = careful if guarded else tuple(pieces(matter, verdict.checks, careful=False))
    shared = _choice(matter, plain, careful, eyes)
    if shared.least is None:
        return None
    only = {eye: _choice(matter, plain, careful, (eye,), shared) for eye in eyes}
    uncut = matter.job.state == "uncut"
    why = Why("uncut" if uncut else f"cut-{matter.job.state}")
    return Remedy(
        kind="shift",
        why=why,
        shared=shared,
        only=only,
        allowed=uncut,
        remade=() if uncut else remade_of(matter, verdict),
    )


def _choice(
    matter: Matter, plain: Pieces, careful: Pieces, eyes: tuple[Eye, ...], shared: Choice = Choice()
) -> Choice:
    """Both movements of some lenses; those of `shared` that move no other lens are the same."""
    trade = tuple(limit for limits in trade_limits(matter, eyes).values() for limit in limits)
    least, recommended = (
        shift if shift is not None and set(shift.eyes) <= set(eyes) else None
        for shift in (shared.least, shared.recommended)
    )
    least = least or _passing(matter, plain, trade, eyes, careful=False)
    if least is None:
        return Choice()
    if least.doubt <= ACCEPTED_DOUBT:
        return Choice(least=least, recommended=least)
    recommended = recommended or _passing(matter, careful, trade, eyes, careful=True)
    return Choice(least=least, recommended=recommended)


def _passing(
    matter: Matter, choices: Pieces, trade: Sequence[Limit], eyes: Sequence[Eye], *, careful: bool
) -> Shift | None:
    """The shortest movement, rounded outwards, that the edition's own checks pass."""
    solved = search(choices, trade, eyes)
    for step_mm in GRIDS_MM:
        for exact, limits in solved:
            for move in islice(on_grid(limits, exact, step_mm), TRIES):
                after = moved(matter, move)
                checks = tuple(check for check in prism_checks(after) if check.counts)
                groups = groups_of(after, checks)
                if _passes(groups, careful=careful):
                    return Shift(
                        exact=solved[0][0], move=move, after=after, checks=checks, groups=groups
                    )
    return None


def _passes(groups: Mapping[str, tuple[str, float]], *, careful: bool) -> bool:
    return all(
        outcome == "within" and (not careful or doubt <= ACCEPTED_DOUBT)
        for outcome, doubt in groups.values()
    )
