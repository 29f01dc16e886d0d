"""What one lens is due to show, what was read of it, and what the causes need to know of it.

All numbers are plain floats: causes are weighed, not judged against limits. Prisms in prism
dioptres as vectors seen from the front (x right, y up), powers in dioptres, places in mm.
"""

import math
from collections.abc import Mapping
from typing import NamedTuple

from pycore.bench.cause_seen import PowerParts, Seen, Vector, components_of, seen_of
from pycore.bench.expected import (
    SHARE_OF_ADD,
    THINNING_PLACES,
    Due,
    has_marked_height,
    read_first,
    smaller_add,
)
from pycore.bench.layout import place_of
from pycore.bench.segment import segment_of
from pycore.job.bench import taken_by_compensator
from pycore.job.document import Job
from pycore.job.order import EyeOrder
from pycore.optics.prism import EYES, Eye
from pycore.optics.surface import true_front_d

OTHER: Mapping[Eye, Eye] = {"right": "left", "left": "right"}
SEGMENT_DEPTH_MM = 3.0  # where a reading in the segment is taken, below its top
HEIGHT_SPREAD_MM = 5.0  # of a height of the frame table that nobody wrote down
USUAL_THINNING_SPREAD = 0.5  # prism dioptres, where thinning and add are not known


class Lens(NamedTuple):
    """A lens as it is made and held: the state that a cause changes.

    `px`, `py` prescribed prism, `t` thinning (up positive), `t_spread` its standard deviation
    where it is not known; `mean`, `j0`, `j45` the power as mean and the cylinder's two components
    ((Fyy - Fxx)/2, Fxy), nan where not known; `add`; `sx`, `sy` what reading at another point
    adds. `slips` and `shifts` are columns of free parameters, each one standard deviation of the
    prism: a slip is of the point read at only, a shift is in the lens. `turned_deg` is a turn it
    has made, `turn_rad` the standard deviation of one more; `power_spread` of the mean power;
    `broad` marks none-of-these; `lying` is the power with which it lies there, where the one read
    is another (from the front).
    """

    px: float
    py: float
    t: float
    t_spread: float
    mean: float
    j0: float
    j45: float
    add: float
    sx: float = 0.0
    sy: float = 0.0
    slips: tuple[Vector, ...] = ()
    shifts: tuple[Vector, ...] = ()
    turned_deg: float = 0.0
    turn_rad: float = 0.0
    power_spread: float = 0.0
    broad: bool = False
    lying: PowerParts | None = None

    @property
    def prism(self) -> Vector:
        """The prism at the ordered point of the frame, in prism dioptres."""
        return self.px, self.py + self.t

    @property
    def has_power(self) -> bool:
        """Tell whether the power is known."""
        return not math.isnan(self.mean)

    @property
    def lies_with(self) -> PowerParts:
        """The power by which its prism changes from place to place: mean, j0, j45 in dioptres."""
        return self.lying or self[4:7]

    def moved(self, right_mm: float, up_mm: float) -> Vector:
        """F d / 10: how the prism grows when the lens moves by d, in prism dioptres.

        Source: p(r) = p0 - F r, AJOPO 1976;53:27-33.
        """
        return (
            ((self.mean - self.j0) * right_mm + self.j45 * up_mm) / 10.0,
            (self.j45 * right_mm + (self.mean + self.j0) * up_mm) / 10.0,
        )


class Site(NamedTuple):
    """What the causes need to know of one lens beside its state.

    `second` the probability that it was read second; `cylinder` as written, dioptres;
    `cross_mm` how far above the reference point the fitting cross lies;
    `boxing` the boxing centre from the reference point, mm; `segment` a reading in it, as prism
    beyond what the point ordered shows; `front_power` how much stronger the front vertex power
    is, dioptres; `prescription` the lens without the maker's stated values; `rules` thinnings by
    other rules, up positive; `taken` what the compensator's setting was taken to take away.
    """

    eye: Eye
    design: str | None
    second: float
    cylinder: float
    cross_mm: float | None
    boxing: Vector | None
    segment: tuple[Vector, Vector] | None
    front_power: float | None
    prescription: Lens | None
    rules: tuple[float, ...]
    partnered: bool
    taken: Vector | None
    automatic: bool
    has_compensator: bool


class Held(NamedTuple):
    """One lens with all that is known of it: as due, where it stands, what was read."""

    due: Lens
    site: Site
    seen: Seen


def held_lenses(job: Job, dues: Mapping[Eye, Due]) -> dict[Eye, Held]:
    """The lenses whose readings are to be explained; an existing partner is not in question.

    Arguments: `job`; `dues` of its eyes. Returns them by eye.
    """
    return {
        eye: Held(_lens(job, due_), _site(job, order, due_, dues), seen_of(job, order, due_))
        for eye, due_ in dues.items()
        if (order := job.order(eye)) and not order.partner
    }


def height_is_free(job: Job) -> bool:
    """Tell whether the height read at is common to both lenses but nowhere written down."""
    if job.readings.at == "first-lens-set":
        return True
    return not all(has_marked_height(order, job.state) for order in job.orders)


def _lens(job: Job, due_: Due) -> Lens:
    mean, j0, j45 = components_of(due_.power)
    thinning, spread = 0.0, 0.0
    if due_.thinning is not None:
        thinning = float(due_.thinning.y)
    else:
        add = float(smaller_add(job) or 0)
        thinning, spread = -add / 3.0, add / 3.0 or USUAL_THINNING_SPREAD
    prism = due_.prescribed
    add_due = float(due_.add or 0)
    return Lens(float(prism.x), float(prism.y), thinning, spread, mean, j0, j45, add_due)


def _site(job: Job, order: EyeOrder, due_: Due, dues: Mapping[Eye, Due]) -> Site:
    place = place_of(job, order.eye)
    boxing = place.prp if place else None
    setting = job.readings.of(order.eye).compensator
    taken = taken_by_compensator(setting, job.instrument.compensator)
    return Site(
        eye=order.eye,
        design=order.lens.design,
        second=_second(job, order.eye, dues),
        cylinder=float(due_.power.cylinder) if due_.power else 0.0,
        cross_mm=None if order.cross_above_prp_mm is None else float(order.cross_above_prp_mm),
        boxing=(-float(boxing.right_mm), -float(boxing.up_mm)) if boxing else None,
        segment=_segment(order),
        front_power=_front_power(order, due_),
        prescription=_prescription(order, _lens(job, due_)),
        rules=_rules(job),
        partnered=any(other.partner for other in job.orders),
        taken=(float(taken.x), float(taken.y)) if setting else None,
        automatic=job.instrument.kind == "automatic",
        has_compensator=job.instrument.compensator != "none",
    )


def _second(job: Job, eye: Eye, dues: Mapping[Eye, Due]) -> float:
    """How probable it is that this lens was read second: the weaker along 90."""
    if job.state != "mounted" or len(dues) < len(EYES):
        return 0.0
    first = read_first(dues.get("right"), dues.get("left"))
    return 0.5 if first is None else float(first != eye)


def _segment(order: EyeOrder) -> tuple[Vector, Vector] | None:
    """A point in the segment, mm from the reference point, and the segment's prism there."""
    place = segment_of(order)
    if place is None or place.top_up_mm is None or place.centre_right_mm is None:
        return None
    up_mm = place.top_up_mm - int(SEGMENT_DEPTH_MM)
    own = place.prism_at(place.centre_right_mm, up_mm)
    return (float(place.centre_right_mm), float(up_mm)), (float(own.x), float(own.y))


def _front_power(order: EyeOrder, due_: Due) -> float | None:
    """How much the front vertex power exceeds the back vertex power, in dioptres, or None.

    Source: vertex powers of a thick lens, F1 / (1 - (t/n) F1) + F2 (textbook optics).
    """
    lens = order.lens
    if None in (lens.index, lens.front_curve, lens.centre_thickness_mm) or due_.power is None:
        return None
    index = float(lens.index or 0)
    reduced = float(lens.centre_thickness_mm or 0) / 1000.0 / index
    front = true_front_d(float(lens.front_curve or 0), float(lens.curve_index), index)
    back_vertex = components_of(due_.power)[0]
    back = back_vertex - front / (1.0 - reduced * front)
    return front + back / (1.0 - reduced * back) - back_vertex


def _prescription(order: EyeOrder, due: Lens) -> Lens | None:
    """The lens by the prescription alone, where the maker states other values."""
    wanted = order.prescribed
    if order.stated is None or wanted.power is None:
        return None
    mean, j0, j45 = components_of(wanted.power)
    prism, add = wanted.prism_total, float(wanted.add or 0)
    return due._replace(px=float(prism.x), py=float(prism.y), mean=mean, j0=j0, j45=j45, add=add)


def _rules(job: Job) -> tuple[float, ...]:
    """Thinning by each rule of thumb, up positive, where there is an add."""
    add = smaller_add(job)
    if add is None:
        return ()
    return tuple(-float((add * share).quantize(THINNING_PLACES)) for share in SHARE_OF_ADD.values())
