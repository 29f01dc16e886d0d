"""What was read of one lens, as numbers with their variances."""

import math
from typing import NamedTuple

from pycore.bench.cause_table import cause_table
from pycore.bench.expected import Due, read_prism, sightings_of
from pycore.job.document import Job
from pycore.job.order import EyeOrder
from pycore.optics.power import Power

Vector = tuple[float, float]
PowerParts = tuple[float, float, float]  # mean, j0, j45


class Seen(NamedTuple):
    """What was read of one lens; None for what was not.

    `prism` the mean of its readings; `place` where the lens shows what is due, in mm to the right
    of the ordered point and above it (each None where not measured); `power` as mean, j0, j45;
    `add`. Variances: `prism_var`, `laboratory_var` and `settling_var` (of finding a place by its
    prism) in prism dioptres squared; `position_var` in mm squared; `principal_var` of each
    principal power, `axis_var` in radians squared, `add_var`.
    """

    prism: Vector | None
    place: tuple[float | None, float | None]
    power: PowerParts | None
    add: float | None
    prism_var: float
    laboratory_var: float
    settling_var: float
    position_var: float
    principal_var: float
    axis_var: float
    add_var: float

    @property
    def size(self) -> int:
        """How many numbers were read."""
        parts = (self.prism and self.prism[0], *self.place, self.add)
        single = sum(part is not None for part in parts)
        return single + (self.prism is not None) + 3 * (self.power is not None)


def components_of(power: Power | None) -> PowerParts:
    """A power as mean power and the two components of its cylinder, in dioptres.

    >>> components_of(Power(__import__("decimal").Decimal(2)))
    (2.0, 0.0, 0.0)
    """
    if power is None:
        return math.nan, 0.0, 0.0
    xx, xy, yy = power.matrix()
    return (xx + yy) / 2.0, (yy - xx) / 2.0, xy + 0.0


def seen_of(job: Job, order: EyeOrder, due_: Due) -> Seen:
    """What was read of one lens. Arguments: `job`; `order` of the eye; `due_` what is due."""
    scatter, known = cause_table().scatter, job.instrument.uncertainty
    eye = order.eye
    read = read_prism(job, eye)
    count = max(1, len(sightings_of(job, eye)))
    step = float(job.instrument.prism_step)
    reading, rounding = float(known.prism) ** 2, step * step / 12.0
    laboratory = scatter.laboratory_prism**2
    axis_deg = math.hypot(scatter.laboratory_axis_deg, float(known.axis_deg))
    power_var = scatter.laboratory_power_d**2 + float(known.power_d) ** 2
    add = job.readings.of(eye).add
    return Seen(
        prism=(float(read.x), float(read.y)) if read is not None else None,
        place=_place(job, order, due_),
        power=_power_read(job, order, due_),
        add=float(add) if add is not None and due_.add else None,
        prism_var=laboratory + reading / count + rounding + _partner_var(job, reading + rounding),
        laboratory_var=laboratory,
        settling_var=reading + rounding,
        position_var=float(known.position_mm) ** 2,
        principal_var=power_var,
        axis_var=math.radians(axis_deg) ** 2,
        add_var=power_var,
    )


def _partner_var(job: Job, reading: float) -> float:
    """What is due beside an existing partner rests on a reading of that one."""
    return reading if any(order.partner for order in job.orders) else 0.0


def _power_read(job: Job, order: EyeOrder, due_: Due) -> PowerParts | None:
    reading = job.readings.of(order.eye)
    if reading.sphere is None or due_.power is None:
        return None
    if reading.cylinder is None and due_.power.cylinder:
        return None
    if reading.cylinder and reading.axis is None:
        return None
    cylinder, axis = reading.cylinder or 0, reading.axis or 180
    power = Power(reading.sphere, reading.sphere * 0 + cylinder, reading.sphere * 0 + axis)
    return components_of(power)


def _place(job: Job, order: EyeOrder, due_: Due) -> tuple[float | None, float | None]:
    """Where the lens was found to show what is due, in mm to the right and up."""
    reading = job.readings.of(order.eye)
    right_mm = up_mm = None
    if due_.power is None:  # how its prism changes from place to place is not known
        return None, None
    if reading.pd_mm is not None and order.pd_mm is not None:
        outwards = float(reading.pd_mm - order.pd_mm)
        right_mm = -outwards if order.eye == "right" else outwards
    if reading.prp_height_mm is not None and order.prp_height_mm is not None:
        up_mm = float(reading.prp_height_mm - order.prp_height_mm)
    return right_mm, up_mm
