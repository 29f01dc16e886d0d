"""What was read of one lens, as numbers with their variances."""

import math
from typing import NamedTuple

from pycore.bench.cause_table import cause_table
from pycore.bench.expected import Due, read_prism, sightings_of
from pycore.job.document import Job
from pycore.job.order import EyeOrder
from pycore.optics.power import Power

Vector = tuple[float, float]


class Seen(NamedTuple):
    """What was read of one lens; None for what was not.

    `prism` the mean of its readings; `place` where the lens shows what is due, as the prism
    F r / 10 in x and y (each None where not measured); `power` as mean, j0, j45; `add`.
    Variances: `prism_var`, `place_var` (xx, xy, yy), `laboratory_var`, all prism dioptres squared;
    `principal_var` of each principal power, `axis_var` in radians squared, `add_var`.
    """

    prism: Vector | None
    place: tuple[float | None, float | None]
    power: tuple[float, float, float] | None
    add: float | None
    prism_var: float
    place_var: tuple[float, float, float]
    laboratory_var: float
    principal_var: float
    axis_var: float
    add_var: float

    @property
    def size(self) -> int:
        """How many numbers were read."""
        parts = (self.prism and self.prism[0], *self.place, self.add)
        single = sum(part is not None for part in parts)
        return single + (self.prism is not None) + 3 * (self.power is not None)


def components_of(power: Power | None) -> tuple[float, float, float]:
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
    place, place_var = _place(job, order, due_, reading + rounding)
    axis_deg = math.hypot(scatter.laboratory_axis_deg, float(known.axis_deg))
    power_var = scatter.laboratory_power_d**2 + float(known.power_d) ** 2
    add = job.readings.of(eye).add
    return Seen(
        prism=(float(read.x), float(read.y)) if read is not None else None,
        place=place,
        power=_power_read(job, order, due_),
        add=float(add) if add is not None and due_.add else None,
        prism_var=laboratory + reading / count + rounding + _partner_var(job, reading + rounding),
        place_var=place_var,
        laboratory_var=laboratory,
        principal_var=power_var,
        axis_var=math.radians(axis_deg) ** 2,
        add_var=power_var,
    )


def _partner_var(job: Job, reading: float) -> float:
    """What is due beside an existing partner rests on a reading of that one."""
    return reading if any(order.partner for order in job.orders) else 0.0


def _power_read(job: Job, order: EyeOrder, due_: Due) -> tuple[float, float, float] | None:
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


def _place(
    job: Job, order: EyeOrder, due_: Due, settling: float
) -> tuple[tuple[float | None, float | None], tuple[float, float, float]]:
    """Where the lens was found to show what is due, as F r / 10, and its variances."""
    reading = job.readings.of(order.eye)
    mean, j0, j45 = components_of(due_.power)
    right_mm = up_mm = None
    if reading.pd_mm is not None and order.pd_mm is not None:
        outwards = float(reading.pd_mm - order.pd_mm)
        right_mm = -outwards if order.eye == "right" else outwards
    if reading.prp_height_mm is not None and order.prp_height_mm is not None:
        up_mm = float(reading.prp_height_mm - order.prp_height_mm)
    if math.isnan(mean) or (right_mm is None and up_mm is None):
        return (None, None), (0.0, 0.0, 0.0)
    # Slid along one meridian only, the prism across it was left as it was.
    both = right_mm is not None and up_mm is not None
    xx, xy, yy = mean - j0, j45 if both else 0.0, mean + j0
    across, along = right_mm or 0.0, up_mm or 0.0
    var = float(job.instrument.uncertainty.position_mm) ** 2 / 100.0
    return (
        None if right_mm is None else (xx * across + xy * along) / 10.0,
        None if up_mm is None else (xy * across + yy * along) / 10.0,
    ), (
        settling + var * (xx * xx + xy * xy),
        var * xy * (xx + yy),
        settling + var * (xy * xy + yy * yy),
    )
