"""What must hold after a lens has been moved, as convex limits on the movement.

The edition's own checks, taken from the verdict, with what each movement does to them. Moving a
lens by d in the frame changes the reading at the ordered place from p to p + F d / 10 (d in mm),
since the new point lies at -d on the lens; a place found by sliding moves along with the lens.
"""

import math
from collections.abc import Iterator, Mapping, Sequence
from functools import lru_cache
from itertools import product

from pycore.bench.doubt import ACCEPTED_DOUBT, chance_within, chance_within_circle
from pycore.bench.expected import read_first
from pycore.bench.matter import PAIR, Check, Matter
from pycore.bench.remedy_least import STILL, Disc, Move, PrismLimit, Strip
from pycore.decimals import from_float
from pycore.optics.power import point_with_prism
from pycore.optics.prism import EYES, NO_PRISM, Eye

Rows = Mapping[tuple[Eye, str], Move]

RIGHTWARDS: Mapping[Eye, Move] = {"right": (1.0, 0.0, 0.0, 0.0), "left": (0.0, 0.0, 1.0, 0.0)}
UPWARDS: Mapping[Eye, Move] = {"right": (0.0, 1.0, 0.0, 0.0), "left": (0.0, 0.0, 0.0, 1.0)}
_SAFE = 1e-7  # kept back of an accepted half width, so that its doubt is not above
_TINY, _SOLVED = 1e-6, 1e-8


def sum_of(*terms: tuple[float, Move]) -> Move:
    """A sum of rows, each times its factor.

    >>> sum_of((2.0, (1.0, 0.0, 0.0, 0.0)), (-1.0, (0.0, 0.0, 1.0, 0.0)))
    (2.0, 0.0, -1.0, 0.0)
    """
    a, b, c, d = (sum(factor * row[index] for factor, row in terms) for index in range(4))
    return a, b, c, d


def responses(matter: Matter) -> Rows:
    """How each component of each lens's reading answers to a movement, in prism dioptres per mm.

    Arguments: `matter`. Returns a row for each eye with a power and each component. At marked
    points each lens answers to its own movement by F / 10. With the first lens set (the stronger
    along 90, the right where they are equal) the height of the table follows that lens: its
    vertical reading stays, and the other lens is read higher or lower by as much. Source:
    p(r) = p0 - F r, AJOPO 1976;53:27-33; the order of method, Z80.1-2010, 8.4 as quoted.
    """
    rows: dict[tuple[Eye, str], Move] = {}
    first = first_set(matter)
    height = STILL
    if first is not None:
        _, xy, yy = _matrix_per_mm(matter, first)
        if yy:  # where the reading of the first lens is found again, in mm up
            height = sum_of((1.0, UPWARDS[first]), (xy / yy, RIGHTWARDS[first]))
    for eye, due in matter.dues.items():
        if due.power is None:
            continue
        xx, xy, yy = _matrix_per_mm(matter, eye)
        up = sum_of((1.0, UPWARDS[eye]), (-1.0, height))
        rows[eye, "horizontal"] = sum_of((xx, RIGHTWARDS[eye]), (xy, up))
        rows[eye, "vertical"] = sum_of((xy, RIGHTWARDS[eye]), (yy, up))
    return rows


def first_set(matter: Matter) -> Eye | None:
    """The lens by which the height of the frame table was set, or None at marked points."""
    right, left = matter.dues.get("right"), matter.dues.get("left")
    if matter.place != "first-lens-set" or right is None or left is None:
        return None
    if right.power is None or left.power is None:
        return None
    return read_first(right, left) or "right"


def _matrix_per_mm(matter: Matter, eye: Eye) -> tuple[float, float, float]:
    power = matter.dues[eye].power
    assert power is not None  # the callers have looked
    xx, xy, yy = power.matrix()
    return xx / 10.0, xy / 10.0, yy / 10.0


def towards_nose(eye: Eye) -> float:
    """The factor that makes a distance to the observer's right one towards the nose."""
    return 1.0 if eye == "right" else -1.0


def slid_point(matter: Matter, eye: Eye) -> tuple[float, float] | None:
    """Where the expected prism lies on a lens for which only the length slid was measured.

    Arguments: `matter`; `eye`. Returns (right_mm, up_mm): the length as measured, the direction
    as the lens's power and its error give it; None where they give none.
    """
    slid_mm, error = matter.job.readings.of(eye).slid_mm, matter.error(eye)
    power = matter.dues[eye].power
    if slid_mm is None or error is None or power is None:
        return None
    point = point_with_prism(error, NO_PRISM, power)
    size = math.hypot(*point) if point else 0.0
    if point is None or not size:
        return None
    return point[0] * float(slid_mm) / size, point[1] * float(slid_mm) / size


def pieces(
    matter: Matter, checks: Sequence[Check], *, careful: bool
) -> Iterator[tuple[PrismLimit, ...]]:
    """Convex pieces whose union is what the edition allows of the prism.

    Arguments: `matter`; `checks` of its verdict; `careful` where a doubt above 0.05 does not
    pass. Yields the limits of each piece. Alternatives of a group (prism or mm) make a piece
    each; where the option asks for both they hold together and share the doubt evenly. Their
    doubts multiply, so carefully both together are a piece too, each with the root of the doubt.
    """
    groups: dict[str, list[Check]] = {}
    for check in checks:
        if check.counts and check.id.startswith(("prism", "prp")):
            groups.setdefault(check.group, []).append(check)
    rows = responses(matter)
    ways = [_ways(matter, rows, members, careful=careful) for members in groups.values()]
    for chosen in product(*ways):
        yield tuple(limit for limits in chosen for limit in limits)


def _ways(
    matter: Matter, rows: Rows, members: Sequence[Check], *, careful: bool
) -> list[tuple[PrismLimit, ...]]:
    """The ways in which one group can pass."""
    if matter.option("prism-alternatives") == "both":
        doubt = ACCEPTED_DOUBT / len(members) if careful else None
        sets = [(members, doubt)]
    else:
        sets = [((member,), ACCEPTED_DOUBT if careful else None) for member in members]
        if careful and len(members) > 1:
            sets.append((members, math.sqrt(ACCEPTED_DOUBT)))
    ways = []
    for together, doubt in sets:
        limits = [_limits(matter, rows, member, doubt) for member in together]
        if None not in limits:
            ways.append(tuple(one for part in limits for one in part or ()))
    return ways


def _limits(
    matter: Matter, rows: Rows, check: Check, doubt: float | None
) -> tuple[PrismLimit, ...] | None:
    """One check's limits, or None where no movement passes it."""
    half = half_width(check, doubt)
    if half is None:
        return None
    if check.id == "prp.position":
        return _position(matter, check, half)
    if check.id.startswith("prp"):
        return tuple(_millimetres(matter, check, half))
    if check.eye == PAIR:
        component = check.component or ""
        right, left = rows.get(("right", component)), rows.get(("left", component))
        row = sum_of((1.0, right or STILL), (-1.0, left or STILL))
        return (Strip(row, float(check.deviation), half),)
    eye: Eye = "right" if check.eye == "right" else "left"
    if check.component:
        row = rows.get((eye, check.component), STILL)
        return (Strip(row, float(check.deviation), half),)
    error = matter.error(eye) or NO_PRISM
    across, up = (rows.get((eye, name), STILL) for name in ("horizontal", "vertical"))
    return (Disc(across, up, (float(error.x), float(error.y)), half),)


def half_width(check: Check, doubt: float | None) -> float | None:
    """How far a check's deviation may be from nothing, in its unit.

    Arguments: `check`; `doubt` that is accepted, or None for the limit itself. None where no
    deviation passes.
    """
    if doubt is None:
        return float(check.limit)
    round_ = check.id == "prism.lens" and check.component is None
    return _accepted(float(check.limit), check.uncertainty, doubt, round_)


@lru_cache(maxsize=64)  # the same at every keystroke
def _accepted(limit: float, uncertainty: float, doubt: float, round_: bool) -> float | None:
    """The largest deviation whose doubt is accepted, by Newton's rule.

    The doubt grows ever faster up to the limit, and the start is beside or beyond the solution.
    """
    chance_of = chance_within_circle if round_ else chance_within

    def excess(deviation: float) -> float:
        return 1.0 - chance_of(from_float(deviation), from_float(limit), uncertainty) - doubt

    if excess(0.0) > 0.0:
        return None
    at = limit - 1.7 * uncertainty
    while abs(over := excess(at)) > _SOLVED:
        at -= over * _TINY / (excess(at + _TINY) - over)
    return max(0.0, at - _SAFE)


def _millimetres(matter: Matter, check: Check, half: float) -> Iterator[PrismLimit]:
    """The pair's heights or distances: each lens's own deviation, or what the pair has together."""
    vertical = check.id == "prp.height"
    rows = UPWARDS if vertical else {eye: _outwards(eye) for eye in EYES}
    if check.row.measure == "each":
        for eye in EYES:
            yield Strip(rows[eye], _own_deviation_mm(matter, eye, vertical=vertical), half)
        return
    row = sum_of((1.0, rows["right"]), (-1.0 if vertical else 1.0, rows["left"]))
    yield Strip(row, float(check.deviation), half)


def _outwards(eye: Eye) -> Move:
    return sum_of((-towards_nose(eye), RIGHTWARDS[eye]))


def _own_deviation_mm(matter: Matter, eye: Eye, *, vertical: bool) -> float:
    reading, order = matter.job.readings.of(eye), matter.job.order(eye)
    name = "prp_height_mm" if vertical else "pd_mm"
    found, wanted = getattr(reading, name), getattr(order, name)
    return float(found - wanted)


def _position(matter: Matter, check: Check, half: float) -> tuple[PrismLimit, ...] | None:
    """Where the expected prism was found on one unmounted lens, in any direction.

    A length slid of unknown direction grows at worst by the whole movement.
    """
    eye: Eye = "right" if check.eye == "right" else "left"
    slid_mm = matter.job.readings.of(eye).slid_mm
    if slid_mm is not None:
        point = slid_point(matter, eye)
        radius = half if point else half - float(slid_mm)
        if radius < 0.0:
            return None
        return (Disc(RIGHTWARDS[eye], UPWARDS[eye], point or (0.0, 0.0), radius),)
    offset = tuple(_own_deviation_mm(matter, eye, vertical=part) for part in (False, True))
    return (Disc(_outwards(eye), UPWARDS[eye], (offset[0], offset[1]), half),)
