"""The shortest movement over all the ways in which an edition may be kept, before rounding."""

from collections.abc import Sequence

from pycore.bench.matter import Matter
from pycore.bench.remedy_least import Limit, Move, held, length_mm, shortest
from pycore.bench.remedy_limits import pieces
from pycore.bench.remedy_trade import refusal, trade_limits
from pycore.bench.verdict import Verdict
from pycore.optics.prism import EYES, Eye

Pieces = Sequence[tuple[Limit, ...]]


def movable(matter: Matter) -> tuple[Eye, ...]:
    """The eyes whose lens may be moved. Arguments: `matter`."""
    return tuple(eye for eye in matter.dues if not refusal(matter, eye))


def unrounded(matter: Matter, verdict: Verdict, eyes: Sequence[Eye]) -> Move | None:
    """The least movement of some lenses that passes, before rounding, whatever their design.

    Arguments: `matter`; its `verdict`; `eyes` to be moved. Returns mm, or None where there is none.
    """
    guarded = matter.job.decision_rule == "guarded"
    choices = tuple(pieces(matter, verdict.checks, careful=guarded))
    trade = [limit for limits in trade_limits(matter, eyes).values() for limit in limits]
    found = search(choices, trade, eyes)
    return found[0][0] if found else None


def search(
    choices: Pieces, beside: Sequence[Limit], eyes: Sequence[Eye]
) -> list[tuple[Move, Sequence[Limit]]]:
    """The shortest movement of some lenses within each piece, the shortest first, unrounded.

    Arguments: `choices` pieces; `beside` limits that hold with all of them; `eyes` to be moved.
    Returns movements in mm with their limits; empty where there is none.
    """
    still = [
        index for at, eye in enumerate(EYES) if eye not in eyes for index in (2 * at, 2 * at + 1)
    ]
    found = []
    for piece in choices:
        limits = [held(limit, still) if still else limit for limit in (*piece, *beside)]
        move = shortest(limits)
        if move is not None:
            found.append((move, limits))
    return sorted(found, key=lambda pair: length_mm(pair[0]))
