"""Do the millimetres pass what the prism does not: the measured alternatives of an edition.

A measured figure says where, after sliding, the expected prism was found. Without one the
figure that the lens's power leads one to expect is shown, marked computed, and never counts.
"""

import math
from decimal import Decimal

from pycore.bench.doubt import chance_within
from pycore.bench.matter import MERIDIAN, PAIR, Check, Matter
from pycore.decimals import from_float, snap
from pycore.editions.edition import Row
from pycore.optics.power import point_with_prism
from pycore.optics.prism import EYES, NO_PRISM, Eye, Prism

UNIT = "mm"


def height_check(matter: Matter, prism: Check) -> Check | None:
    """The difference of prism reference point heights, or each one's own, in mm; or None.

    Arguments: `matter`; `prism` the check it is an alternative to. The lens stronger along 90
    is set at its own expected prism; the other slides vertically until the ordered pair prism
    appears. Source: Z80.1-2010, 8.4 as quoted; facts section 1, corrections.
    """
    row = open_row(matter, "vertical")
    if row is None:
        return None
    ordered = {eye: order.prp_height_mm for eye in EYES if (order := matter.job.order(eye))}
    read = {eye: matter.job.readings.of(eye).prp_height_mm for eye in EYES}
    deviation = _each_or_difference(row, ordered, read)
    return _pair_check(matter, prism, row, deviation, sum_of_two=row.measure != "each")


def distance_check(matter: Matter, prism: Check) -> Check | None:
    """The distance between prism reference points against the order, in mm; or None.

    Arguments as `height_check`. Source: Z80.1-2010, 8.5 as quoted.
    """
    row = open_row(matter, "horizontal")
    if row is None:
        return None
    ordered = {eye: order.pd_mm for eye in EYES if (order := matter.job.order(eye))}
    read = {eye: matter.job.readings.of(eye).pd_mm for eye in EYES}
    if row.measure == "each":
        return _pair_check(matter, prism, row, _each_or_difference(row, ordered, read), False)
    wanted = _sum(ordered) or matter.job.pd_mm
    found = matter.job.readings.prp_distance_mm or _sum(read)
    deviation = found - wanted if found is not None and wanted is not None else None
    return _pair_check(matter, prism, row, deviation, sum_of_two=False)


def position_check(matter: Matter, eye: Eye, prism: Check) -> Check | None:
    """How far from its place, in any direction, the expected prism lies on one lens, in mm.

    Arguments: `matter`; `eye`; `prism` the check it is an alternative to. None where the
    edition has no such row for this power, or where the lens has no power along one meridian
    and the error across it is beyond the limit (no shift can take that away).
    """
    due, error = matter.dues[eye], matter.error(eye) or NO_PRISM
    row = position_row(matter, eye)
    if row is None or due.power is None:
        return None
    measured = _measured_offset_mm(matter, eye)
    deviation = measured
    if measured is None:
        point = point_with_prism(error, NO_PRISM, due.power)
        deviation = snap(from_float(math.hypot(*point))) if point else None
    if deviation is None or _error_that_no_shift_moves(matter, eye, error) > prism.limit:
        return None
    return _check(
        row,
        deviation,
        uncertainty=float(matter.uncertainty.position_mm),
        id_="prp.position",
        group=prism.group,
        eye=eye,
        measured=measured is not None,
    )


def _measured_offset_mm(matter: Matter, eye: Eye) -> Decimal | None:
    """How far the expected prism was found from its place, in mm, if anybody measured it."""
    reading, order = matter.job.readings.of(eye), matter.job.order(eye)
    if reading.slid_mm is not None:
        return reading.slid_mm
    if order is None or None in (reading.pd_mm, reading.prp_height_mm):
        return None
    if order.pd_mm is None or order.prp_height_mm is None:
        return None
    across = (reading.pd_mm or Decimal(0)) - order.pd_mm
    up = (reading.prp_height_mm or Decimal(0)) - order.prp_height_mm
    return Prism(across, up).amount  # the length of any vector in decimals


def _error_that_no_shift_moves(matter: Matter, eye: Eye, error: Prism) -> Decimal:
    """The error along a meridian without power, in prism dioptres; 0 where both have power."""
    power = matter.dues[eye].power
    if power is None or all(power.principal):
        return Decimal(0)
    if not any(power.principal):
        return error.amount
    flat = power.axis if not power.sphere else power.axis + 90
    radians = math.radians(float(flat))
    return abs(from_float(float(error.x) * math.cos(radians) + float(error.y) * math.sin(radians)))


def open_row(matter: Matter, component: str) -> Row | None:
    """The pair's row of millimetres for one component, where the lenses' power opens it.

    Arguments: `matter`; `component` vertical (heights) or horizontal (distances).
    """
    if matter.option("prism-alternatives") == "prism-only" or not matter.pair_is_ordered:
        return None
    sizes = [abs(due.power.along(MERIDIAN[component])) for due in matter.dues.values() if due.power]
    both = matter.option("millimetre-power") == "both-lenses"
    check = "prp.height" if component == "vertical" else "prp.distance"
    return matter.row(check, {"power": min(sizes) if both else max(sizes)}, state="mounted")


def position_row(matter: Matter, eye: Eye) -> Row | None:
    """One unmounted lens's row of millimetres, where its power opens it."""
    power = matter.dues[eye].power
    if power is None or matter.option("prism-alternatives") == "prism-only":
        return None
    return matter.row("prp.position", {"power": power.strongest}, eye=eye)


def _each_or_difference(
    row: Row, ordered: dict[Eye, Decimal | None], read: dict[Eye, Decimal | None]
) -> Decimal | None:
    """The larger deviation of both eyes, or the deviation of their difference, in mm."""
    right, left = read["right"], read["left"]
    if right is None or left is None:
        return None
    wanted_right, wanted_left = ordered.get("right"), ordered.get("left")
    if wanted_right is None or wanted_left is None:
        return None if row.measure == "each" else right - left
    off_right, off_left = right - wanted_right, left - wanted_left
    if row.measure == "each":
        return max(off_right, off_left, key=abs)
    return off_right - off_left


def _sum(parts: dict[Eye, Decimal | None]) -> Decimal | None:
    right, left = parts.get("right"), parts.get("left")
    return right + left if right is not None and left is not None else None


def _computed_mm(matter: Matter, prism: Check) -> Decimal | None:
    """How far the weaker lens would have to slide, 10 |error| / |power|, in mm, or None."""
    meridian = MERIDIAN[prism.component or "vertical"]
    sizes = [abs(due.power.along(meridian)) for due in matter.dues.values() if due.power]
    slid = min(sizes, default=Decimal(0))
    return snap(abs(prism.deviation) * 10 / slid) if slid else None


def _pair_check(
    matter: Matter, prism: Check, row: Row, measured: Decimal | None, sum_of_two: bool
) -> Check | None:
    deviation = measured if measured is not None else _computed_mm(matter, prism)
    if deviation is None:
        return None
    one = float(matter.uncertainty.position_mm)
    return _check(
        row,
        deviation,
        uncertainty=one * math.sqrt(2.0) if sum_of_two else one,
        id_=row.check,
        group=prism.group,
        eye=PAIR,
        measured=measured is not None,
    )


def _check(
    row: Row,
    deviation: Decimal,
    *,
    uncertainty: float,
    id_: str,
    group: str,
    eye: str,
    measured: bool,
) -> Check:
    limit = row.limit({})
    return Check(
        id=id_,
        group=group,
        eye=eye,
        ordered=Decimal(0),
        read=deviation,
        deviation=deviation,
        limit=limit,
        uncertainty=uncertainty,
        chance=chance_within(deviation, limit, uncertainty),
        unit=UNIT,
        row=row,
        measured=measured,
        counts=measured,
    )
