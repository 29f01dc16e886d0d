"""What would be seen if one cause were the case? A picture of it, before anything is read."""

import math
from collections.abc import Mapping

from pycore.bench.cause_effect import EFFECTS
from pycore.bench.cause_lens import Held, Lens
from pycore.bench.cause_seen import Vector
from pycore.bench.cause_shared import Common, commons, own_causes
from pycore.bench.cause_table import AS_ORDERED, NONE_OF_THESE, CauseTable
from pycore.optics.prism import Eye

Pictures = dict[Eye, tuple[Lens, Vector]]
DIAGONAL = 0.7071067811865476  # of a unit vector towards 45 degrees
STILL = 1e-9
TURN = "turn_deg"


def imagined(
    held: Mapping[Eye, Held], table: CauseTable, code: str, eyes: tuple[Eye, ...]
) -> Pictures:
    """Each lens and the prism read of it, in prism dioptres, if a cause were the case.

    Arguments: `held` lenses; `table`; `code` of the cause; `eyes` whose lenses it is in. What is
    not known of it stands at one standard deviation (a turn at the middle of its outer part).
    Empty where it cannot happen, and for none of these, which looks like nothing.
    """
    none, *shared = commons(held, table)
    if code == NONE_OF_THESE:
        return {}
    if code == AS_ORDERED:
        return {eye: _picture(none, eye, one, one.due) for eye, one in held.items()}
    if len(eyes) == 1:
        return _in_one(held, table, code, eyes[0], none) if eyes[0] in held else {}
    variants = [common for common in shared if common.code == code]
    if not variants:
        return {}
    common = variants[-1] if TURN in table.causes[code].parameters else variants[0]
    lenses = {eye: common.after(common.lenses[eye], eye) for eye in held}
    return {eye: _picture(common, eye, one, lenses[eye]) for eye, one in held.items()}


def _in_one(
    held: Mapping[Eye, Held], table: CauseTable, code: str, eye: Eye, none: Common
) -> Pictures:
    causes = [cause for cause, _ in own_causes(held[eye], table) if cause.code == code]
    made = [
        each for cause in causes for each in EFFECTS[code](held[eye].due, held[eye].site, cause)
    ]
    if not made:
        return {}
    lens = (made[-1] if TURN in table.causes[code].parameters else made[0])[1]
    return {
        each: _picture(none, each, one, lens if each == eye else one.due)
        for each, one in held.items()
    }


def eyes_of(
    held: Mapping[Eye, Held], table: CauseTable, code: str, eye: Eye | None
) -> tuple[Eye, ...]:
    """The lenses a cause is shown in: the one asked for, or those it can be in.

    Arguments: `held`; `table`; `code`; `eye` asked for, None for both.
    """
    both = tuple(held)
    cause = table.causes.get(code)
    if cause is None or not (cause.right or cause.left):
        return both
    if eye:
        return (eye,)
    if cause.both:
        return both
    able = [each for each in both if any(own is cause for own, _ in own_causes(held[each], table))]
    return (able[0],)


def _picture(common: Common, eye: Eye, one: Held, lens: Lens) -> tuple[Lens, Vector]:
    (x, y), (due_x, due_y) = lens.prism, one.due.prism
    x, y = x + lens.sx, y + lens.sy
    parts = [(common.zero * DIAGONAL, common.zero * DIAGONAL)]
    if common.moved:
        parts.append(lens.moved(*common.moved[eye]))
    if math.hypot(x - due_x, y - due_y) < STILL:  # else the picture is plain without them
        parts += (*lens.slips, *lens.shifts)
    return lens, (x + sum([part[0] for part in parts]), y + sum([part[1] for part in parts]))
