"""Cases of power, cylinder, axis and add."""

from __future__ import annotations

from collections.abc import Iterator
from decimal import Decimal

from tests.references import limits_reference as ref
from tests.references.limit_jobs import ABSENT, EYES, Case, Due, around, base_job, case, listed, signed, state_for

D = Decimal

POWERS = {  # each edition's switches, one last digit to both sides, and some more
    "ansi": "0.00 0.25 6.49 6.50 6.51 7.99 8.00 8.01 12.25 20.00",
    "iso-8980": "0.00 3.00 3.01 6.00 6.01 9.00 9.01 12.00 12.01 20.00 20.01 24.00",
    "nj": "0.00 6.00 6.24 6.25 6.26 9.00 11.99 12.00 12.01 15.00",
    "iso-21987": "3.00",
}
CYLINDERS = {
    "ansi": "0.25 2.00 2.01 3.50 3.51 4.50 4.51 6.00",
    "iso-8980": "0.25 0.75 0.76 4.00 4.01 6.00 6.01 8.00",
    "nj": "1.00",
    "iso-21987": "1.00",
}
AXIS_CYLINDERS = {
    "ansi": "0.11 0.12 0.25 0.26 0.50 0.51 0.75 0.76 1.50 1.51 3.00",
    "iso-21987": "0.124 0.125 0.25 0.26 0.50 0.51 0.75 0.76 1.50 1.51 2.50 2.51 4.00",
    "iso-8980": "0.25 0.50 0.51 0.75 0.76 1.50 1.51 3.00",
    "nj": "0.11 0.12 0.37 0.38 0.50 1.00 1.01 1.12 2.00",
}


def power_cases(edition: str, design: str) -> Iterator[Case]:
    """Spheres: plus in the right lens, minus in the left."""
    for power in listed(POWERS, edition):
        limit = ref.power_limit(edition, power, design)
        for deviation, outcome in around(limit) if limit is not None else [(D(0), ABSENT)]:
            job = base_job(edition, state_for(edition), design)
            for eye, sphere in zip(EYES, (power, -power), strict=True):
                job[eye]["sphere"] = signed(sphere)
                job["readings"][eye]["sphere"] = signed(sphere + deviation)
            due = [Due("power", eye, outcome) for eye in EYES]
            yield case(f"power {power} off {deviation}", job, due, power=power)


def weaker_meridian_cases(edition: str, design: str) -> Iterator[Case]:
    """ISO 8980 judges each meridian, the others the strongest only: +4.00 −1.00, weaker meridian off."""
    limit = ref.power_limit(edition, D(4), design)
    if limit is None:
        return
    for deviation, outcome in around(limit):
        job = base_job(edition, state_for(edition), design)
        for eye in EYES:
            job[eye] |= {"sphere": "+4.00", "cylinder": "-1.00", "axis": "30"}
            job["readings"][eye] |= {"sphere": "+4.00", "cylinder": signed(D(-1) + deviation), "axis": "30"}
        each = outcome if edition.startswith("iso-8980") else "within"
        yield case(f"weaker meridian off {deviation}", job, [Due("power", eye, each) for eye in EYES], power=D(4))


def cylinder_cases(edition: str, design: str) -> Iterator[Case]:
    """Minus form in the right lens; plus form in the left, read in the minus form."""
    for strongest in listed(POWERS, edition):
        for size in listed(CYLINDERS, edition):
            if size > 2 * strongest or (edition in ref.ANSI and strongest != D("12.25")):
                continue
            limit = ref.cylinder_limit(edition, strongest, size, design)
            for deviation, outcome in around(limit) if limit is not None else [(D(0), ABSENT)]:
                job, read = base_job(edition, state_for(edition), design), size + deviation
                if read < 0:
                    continue  # a cylinder of the other sign is another order
                job["right"] |= {"sphere": signed(strongest), "cylinder": signed(-size), "axis": "30"}
                job["readings"]["right"] |= {"sphere": signed(strongest), "cylinder": signed(-read), "axis": "30"}
                job["left"] |= {"sphere": signed(-strongest), "cylinder": signed(size), "axis": "120"}
                job["readings"]["left"] |= {"sphere": signed(read - strongest), "cylinder": signed(-read), "axis": "30"}
                name = f"cylinder {size}, strongest {strongest}, off {deviation}"
                yield case(name, job, [Due("cylinder", eye, outcome) for eye in EYES], power=strongest, cylinder=size)


def axis_cases(edition: str, design: str) -> Iterator[Case]:
    """Axis 90 in the right lens; 178 in the left, so that the limit reaches across 180."""
    for size in listed(AXIS_CYLINDERS, edition):
        limit = ref.axis_limit(edition, size)
        for deviation, outcome in [*around(limit), *around(limit, D(1))] if limit is not None else [(D(20), ABSENT)]:
            job = base_job(edition, state_for(edition), design)
            for eye, axis in zip(EYES, (D(90), D(178)), strict=True):
                job[eye] |= {"sphere": "+5.00", "cylinder": signed(-size), "axis": f"{axis}"}
                read = (axis + deviation) % 180 or D(180)
                job["readings"][eye] |= {"sphere": "+5.00", "cylinder": signed(-size), "axis": f"{read:f}"}
            due = [Due("axis", eye, outcome) for eye in EYES]
            yield case(f"axis, cylinder {size}, off {deviation}", job, due, power=D(5), cylinder=size)


def add_cases(edition: str, design: str) -> Iterator[Case]:
    """Adds of multifocals and progressives."""
    if design == "single-vision":
        return
    for add in (D("0.75"), D("4.00"), D("4.01"), D("5.00")):
        limit = ref.add_limit(edition, add)
        for deviation, outcome in around(limit) if limit is not None else [(D(0), ABSENT)]:
            job = base_job(edition, state_for(edition), design)
            for eye in EYES:
                job[eye]["add"] = f"{add}"
                job["readings"][eye]["add"] = f"{add + deviation}"
            due = [Due("add", eye, outcome) for eye in EYES]
            yield case(f"add {add} off {deviation}", job, due, add=add)
