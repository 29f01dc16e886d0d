"""Causes that both lenses share: what each does to the pair before and after a lens's own cause.

Order of acting: what was ordered, ground or laid out wrongly comes first, then the lens's own
cause, then what was done at the bench.
"""

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from itertools import product
from math import prod

from pycore.bench.cause_effect import EFFECTS, turned, turns
from pycore.bench.cause_lens import OTHER, Held, Lens
from pycore.bench.cause_seen import Vector
from pycore.bench.cause_table import AS_ORDERED, Cause, CauseTable
from pycore.optics.prism import Eye

Pair = Mapping[Eye, Lens]
After = Callable[[Lens, Eye], Lens]
STILL: Mapping[Eye, Vector] = {}


def _as_it_is(lens: Lens, _eye: Eye) -> Lens:
    return lens


@dataclass(frozen=True, slots=True, kw_only=True)
class Common:
    """One variant of one shared cause (`code` as-ordered: none).

    `weight` its prior; `lenses` as each lens's own cause finds them; `after` what the bench then
    does to each. Free parameters common to both lenses: `zero` of a vector added to both readings
    (prism dioptres), `moved` how each lens moves (mm), `turn_deg` a turn; each is one standard
    deviation.
    """

    code: str
    variant: int
    weight: float
    lenses: Pair
    after: After = _as_it_is
    zero: float = 0.0
    moved: Mapping[Eye, Vector]
    turn_deg: float = 0.0


def commons(held: Mapping[Eye, Held], table: CauseTable) -> list[Common]:
    """Every shared cause that can happen to these lenses, `as-ordered` first.

    Arguments: `held` lenses by eye; `table`. Returns them with their priors.
    """
    due = {eye: one.due for eye, one in held.items()}
    found: list[Common] = []
    for cause in table.causes.values():
        if cause.both:
            own = SHARED.get(cause.code, _in_both)
            found += own(cause, held, due)
    rest = 1.0 - sum(common.weight for common in found)
    return [Common(code=AS_ORDERED, variant=0, weight=rest, lenses=due, moved=STILL), *found]


def _one(cause: Cause, lenses: Pair, **more: object) -> list[Common]:
    return [_variant(cause, 0, 1.0, lenses, **more)]


def _variant(cause: Cause, variant: int, share: float, lenses: Pair, **more: object) -> Common:
    weight = cause.prior * cause.both * share
    settings: dict[str, object] = {"moved": STILL, **more}
    return Common(code=cause.code, variant=variant, weight=weight, lenses=lenses, **settings)  # type: ignore[arg-type]


def _in_both(cause: Cause, held: Mapping[Eye, Held], due: Pair) -> list[Common]:
    """A lens's cause in both lenses, each with its own free parameters, in the same variant."""
    effect = EFFECTS[cause.code]
    made = {eye: effect(due[eye], held[eye].site, cause) for eye in held}
    count = min(map(len, made.values()))
    shares = [share for share, _ in next(iter(made.values()))]
    if cause.place == "bench":
        return [
            _variant(cause, at, shares[at], due, after=_again(cause, held, at))
            for at in range(count)
        ]
    lenses = [{eye: made[eye][at][1] for eye in held} for at in range(count)]
    return [_variant(cause, at, shares[at], lenses[at]) for at in range(count)]


def _again(cause: Cause, held: Mapping[Eye, Held], at: int) -> After:
    def after(lens: Lens, eye: Eye) -> Lens:
        made = EFFECTS[cause.code](lens, held[eye].site, cause)
        return made[at][1] if made else lens

    return after


def _zero(cause: Cause, _held: Mapping[Eye, Held], due: Pair) -> list[Common]:
    return _one(cause, due, zero=cause.of("prism"))


def _left_on(cause: Cause, held: Mapping[Eye, Held], due: Pair) -> list[Common]:
    if any(one.site.automatic or not one.site.has_compensator for one in held.values()):
        return []
    return _one(cause, due, zero=cause.of("prism"))


def _wrong_sense(cause: Cause, held: Mapping[Eye, Held], due: Pair) -> list[Common]:
    taken = {eye: one.site.taken for eye, one in held.items() if one.site.taken}
    if not taken:
        return []

    def after(lens: Lens, eye: Eye) -> Lens:
        x, y = taken.get(eye) or (0.0, 0.0)
        return lens._replace(sx=lens.sx + 2.0 * x, sy=lens.sy + 2.0 * y)

    return _one(cause, due, after=after)


def _upside_down(cause: Cause, _held: Mapping[Eye, Held], due: Pair) -> list[Common]:
    by_name = cause.of("by_name") if _can_be_swapped(due) else 1.0
    found = [_variant(cause, 0, by_name, due, after=_turned_over)]
    if by_name < 1.0:
        swapped = _swapped(due)
        found.append(_variant(cause, 1, 1.0 - by_name, swapped, after=_turned_over))
    return found


def _turned_over(lens: Lens, _eye: Eye) -> Lens:
    """Turned half round: every prism points the other way, the axis stays."""
    return lens._replace(
        px=-lens.px,
        py=-lens.py,
        t=-lens.t,
        t_spread=-lens.t_spread,
        sx=-lens.sx,
        sy=-lens.sy,
    )


def _not_square(cause: Cause, _held: Mapping[Eye, Held], due: Pair) -> list[Common]:
    return [
        _variant(cause, at, weight, due, after=_turn_by(middle_deg), turn_deg=narrow_deg)
        for at, (weight, (middle_deg, narrow_deg)) in enumerate(turns(cause.of("turn_deg")))
    ]


def _turn_by(angle_deg: float) -> After:
    return lambda lens, _eye: turned(lens, angle_deg, 0.0)


def _pd_wrong(cause: Cause, _held: Mapping[Eye, Held], due: Pair) -> list[Common]:
    spread_mm = cause.of("spread_mm")
    if not _have_powers(due):
        return []
    return _one(cause, due, moved={"right": (spread_mm, 0.0), "left": (-spread_mm, 0.0)})


def _height_wrong(cause: Cause, _held: Mapping[Eye, Held], due: Pair) -> list[Common]:
    up = (0.0, cause.of("spread_mm"))
    if not _have_powers(due):
        return []
    return _one(cause, due, moved={"right": up, "left": up})


def _have_powers(due: Pair) -> bool:
    return all(lens.has_power for lens in due.values())


def _both_rotated(cause: Cause, _held: Mapping[Eye, Held], due: Pair) -> list[Common]:
    """Each lens turned by an angle of its own: every part of one with every part of the other."""
    parts = list(turns(cause.of("turn_deg")))
    found = []
    for at, chosen in enumerate(product(parts, repeat=len(due))):
        lenses = {
            eye: turned(lens, *turn)
            for (eye, lens), (_, turn) in zip(due.items(), chosen, strict=True)
        }
        found.append(_variant(cause, at, prod([weight for weight, _ in chosen]), lenses))
    return found


def _can_be_swapped(due: Pair) -> bool:
    """Two lenses, of which both or neither have a written power."""
    return len(due) == len(OTHER) and len({lens.has_power for lens in due.values()}) == 1


def _swapped(due: Pair) -> Pair:
    return {eye: due[OTHER[eye]] for eye in due}


def _bodies_swapped(cause: Cause, _held: Mapping[Eye, Held], due: Pair) -> list[Common]:
    return _one(cause, _swapped(due)) if _can_be_swapped(due) else []


def _words_swapped(cause: Cause, _held: Mapping[Eye, Held], due: Pair) -> list[Common]:
    if len(due) < len(OTHER):
        return []
    other = _swapped(due)
    return _one(
        cause,
        {eye: due[eye]._replace(px=-other[eye].px, py=other[eye].py) for eye in due},
    )


def _not_split(cause: Cause, _held: Mapping[Eye, Held], due: Pair) -> list[Common]:
    if len(due) < len(OTHER):
        return []
    right, left = due["right"], due["left"]
    x, y = right.px - left.px, right.py - left.py
    ways = (((x, y), (0.0, 0.0)), ((0.0, 0.0), (-x, -y)))
    return [
        _variant(
            cause,
            at,
            0.5,
            {"right": right._replace(px=rx, py=ry), "left": left._replace(px=lx, py=ly)},
        )
        for at, ((rx, ry), (lx, ly)) in enumerate(ways)
    ]


def _as_worn(cause: Cause, held: Mapping[Eye, Held], due: Pair) -> list[Common]:
    if not any(one.site.prescription for one in held.values()):
        return []
    return _one(cause, {eye: held[eye].site.prescription or due[eye] for eye in held})


Shared = Callable[[Cause, Mapping[Eye, Held], Pair], list[Common]]
SHARED: Mapping[str, Shared] = {
    "instrument-zero": _zero,
    "compensator-left-on": _left_on,
    "compensator-wrong-sense": _wrong_sense,
    "frame-upside-down": _upside_down,
    "frame-not-square": _not_square,
    "layout-pd-wrong": _pd_wrong,
    "layout-height-wrong": _height_wrong,
    "lens-rotated": _both_rotated,
    "lenses-swapped": _bodies_swapped,
    "eyes-swapped-in-words": _words_swapped,
    "not-split": _not_split,
    "as-worn-ignored": _as_worn,
}


def own_causes(one: Held, table: CauseTable) -> Iterator[tuple[Cause, float]]:
    """The causes one lens may have of its own, with their priors. Arguments: `one`; `table`."""
    for cause in table.causes.values():
        share = cause.right if one.site.eye == "right" else cause.left
        if cause.code == "table-moved":
            share = (cause.right + cause.left) * one.site.second
        elif cause.code == "thinning-of-old-partner":
            share = cause.right + cause.left
        if share:
            yield cause, cause.prior * share
