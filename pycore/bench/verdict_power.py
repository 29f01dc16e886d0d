"""Are power, cylinder, axis and add within the edition's limits, lens by lens?"""

import math
from collections.abc import Iterator
from dataclasses import replace
from decimal import Decimal

from pycore.angles import half_turn
from pycore.bench.doubt import chance_within
from pycore.bench.expected import Due
from pycore.bench.matter import Check, Matter
from pycore.job.bench import EyeReading
from pycore.optics.power import Power
from pycore.optics.prism import Eye

ROOT_TWO = math.sqrt(2.0)


def power_checks(matter: Matter) -> Iterator[Check]:
    """Every check of power, cylinder, axis and add. Arguments: `matter`. Yields Checks.

    The reading is brought into the order's cylinder form; powers are compared along the
    order's meridians: the one of greatest power, both where they are equally strong or the
    edition limits each. Source: Z80.1-1999 and later, table heading; facts section 1.
    """
    for eye in matter.own_eyes:
        due = matter.dues[eye]
        reading = matter.job.readings.of(eye)
        seen = _seen_power(due, reading)
        if seen is not None and due.power is not None:
            yield from _principal_checks(matter, eye, due.power, seen)
            yield from _cylinder_checks(matter, eye, due.power, seen, reading.axis is not None)
        if due.add is not None and reading.add is not None:
            yield from _add_check(matter, eye, due.add, reading.add)


def power_limits(matter: Matter) -> Iterator[tuple[str, Decimal, float]]:
    """Each limit of power, cylinder, axis and add with one reading's standard uncertainty.

    Arguments: `matter`. Yields the check, its limit and the uncertainty, in D or degrees.
    """
    one_d, one_deg = float(matter.uncertainty.power_d), float(matter.uncertainty.axis_deg)
    for eye in matter.own_eyes:
        due = matter.dues[eye]
        if due.power is None:
            continue
        sizes = {"power": due.power.strongest, "cylinder": abs(due.power.cylinder)}
        found = {"power": one_d, "cylinder": one_d * ROOT_TWO}
        found |= {"axis": one_deg} if due.power.cylinder else {}
        found |= {"add": one_d * ROOT_TWO} if due.add else {}
        for check, uncertainty in found.items():
            row = matter.row(check, {**sizes, "add": due.add or Decimal(0)}, eye=eye)
            if row:
                yield check, row.limit(sizes), uncertainty


def _seen_power(due: Due, reading: EyeReading) -> Power | None:
    """The power read, in the order's cylinder form, or None where not read in full."""
    if due.power is None or reading.sphere is None:
        return None
    if reading.cylinder is None and due.power.cylinder:
        return None
    seen = Power(reading.sphere, reading.cylinder or Decimal(0), reading.axis or due.power.axis)
    return seen.in_form(1 if due.power.cylinder > 0 else -1)


def _principal_checks(matter: Matter, eye: Eye, ordered: Power, seen: Power) -> Iterator[Check]:
    sizes = {"power": ordered.strongest, "cylinder": abs(ordered.cylinder)}
    row = matter.row("power", sizes, eye=eye)
    if row is None:
        return
    found = seen.principal
    if matter.option("power-comparison") == "ordered-meridians":
        found = (seen.along(ordered.axis), seen.along(ordered.axis + 90))
    pairs = list(zip(ordered.principal, found, strict=True))
    if row.meridians == "strongest":
        pairs = [pair for pair in pairs if abs(pair[0]) == ordered.strongest]
    for index, (wanted, read) in enumerate(dict.fromkeys(pairs)):
        group = f"power.{eye}.{index + 1}"
        yield _check(matter, "power", group, eye, wanted, read, "D", 1.0, sizes)


def _cylinder_checks(
    matter: Matter, eye: Eye, ordered: Power, seen: Power, axis_read: bool
) -> Iterator[Check]:
    sizes = {"power": ordered.strongest, "cylinder": abs(ordered.cylinder)}
    if matter.row("cylinder", sizes, eye=eye):
        wanted, read = ordered.cylinder, seen.cylinder
        yield _check(matter, "cylinder", f"cylinder.{eye}", eye, wanted, read, "D", ROOT_TWO, sizes)
    if axis_read and seen.cylinder and ordered.cylinder and matter.row("axis", sizes, eye=eye):
        turn = half_turn(seen.axis - ordered.axis + 90) - 90
        axis = _check(
            matter, "axis", f"axis.{eye}", eye, ordered.axis, ordered.axis + turn, "°", 1.0, sizes
        )
        yield replace(axis, read=half_turn(axis.read) or Decimal(180))


def _add_check(matter: Matter, eye: Eye, wanted: Decimal, read: Decimal) -> Iterator[Check]:
    sizes = {"add": wanted}
    if matter.row("add", sizes, eye=eye):
        yield _check(matter, "add", f"add.{eye}", eye, wanted, read, "D", ROOT_TWO, sizes)


def _check(
    matter: Matter,
    id_: str,
    group: str,
    eye: Eye,
    ordered: Decimal,
    read: Decimal,
    unit: str,
    readings: float,
    sizes: dict[str, Decimal],
) -> Check:
    """One check; `readings` is the root of how many focus readings make up the figure."""
    row = matter.row(id_, sizes, eye=eye)
    assert row is not None  # the callers have looked
    deviation, limit = read - ordered, row.limit(sizes)
    one = matter.uncertainty.axis_deg if unit == "°" else matter.uncertainty.power_d
    uncertainty = float(one) * readings
    return Check(
        id=id_,
        group=group,
        eye=eye,
        ordered=ordered,
        read=read,
        deviation=deviation,
        limit=limit,
        uncertainty=uncertainty,
        chance=chance_within(deviation, limit, uncertainty),
        unit=unit,
        row=row,
    )
