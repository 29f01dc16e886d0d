"""Where on each lens does the wearer read, and what prism does the lens have there?

The distance point is the prism reference point. Nothing is assumed silently: each usual value
that is taken is named in `assumed` with the field that would supply it.
"""

from dataclasses import dataclass
from decimal import Decimal

from pycore.bench.expected import Due
from pycore.bench.segment import SegmentPlace, segment_of
from pycore.decimals import snap
from pycore.job.document import Job
from pycore.job.order import EyeOrder
from pycore.optics.power import Power, prism_at
from pycore.optics.prism import NO_PRISM, Eye, Prism, base_of_word

# Common practice; the depth is also given as 8 mm, the inset from 1.5 mm on: measure them.
USUAL_DEPTH_MM = Decimal(10)
USUAL_INSET_MM = Decimal("2.5")
THIN_LIMIT = Decimal(20)  # prism dioptres, 11.3 degrees; beyond it thin-prism formulas end


@dataclass(frozen=True, slots=True)
class Assumed:
    """A usual value that was taken, and the field of the job it stands for."""

    field: str
    usual: Decimal


@dataclass(frozen=True, slots=True, kw_only=True)
class ReadingPoint:
    """The point of one lens through which the wearer reads: mm below the prism reference point
    and towards the nose from it."""

    eye: Eye
    depth_mm: Decimal
    inset_mm: Decimal
    assumed: tuple[Assumed, ...]

    @property
    def right_mm(self) -> Decimal:
        """Distance from the prism reference point to the observer's right, in mm."""
        return self.inset_mm if base_of_word(self.eye, "in") == 0 else -self.inset_mm

    @property
    def up_mm(self) -> Decimal:
        """Distance from the prism reference point upwards, in mm (never positive)."""
        return -self.depth_mm + 0


@dataclass(frozen=True, slots=True, kw_only=True)
class LensAtReading:
    """One lens at its distance and its reading point, prisms in prism dioptres.

    `segment` is the segment read through, if any; `outside_segment` is true where there is one
    but the point lies outside it.
    """

    order: EyeOrder
    power: Power
    point: ReadingPoint
    distance: Prism
    prism: Prism
    segment: SegmentPlace | None
    outside_segment: bool

    @property
    def eye(self) -> Eye:
        """The eye whose lens it is."""
        return self.order.eye

    @property
    def open_add(self) -> Decimal:
        """The add of a progressive lens, in dioptres, whose own prism is not modelled; else 0."""
        add = self.order.verified.add or Decimal(0)
        return add if self.order.lens.design == "progressive" else Decimal(0)

    @property
    def reading_power(self) -> Power:
        """The power read through, with the add where it applies, in dioptres."""
        add = self.segment.add if self.segment else self.open_add
        return Power(self.power.sphere + add, self.power.cylinder, self.power.axis)

    @property
    def beyond_thin(self) -> bool:
        """Tell whether the prism is beyond what the thin-prism formulas are good for."""
        return max(snap(self.prism.amount), snap(self.distance.amount)) > THIN_LIMIT


def reading_point(job: Job, order: EyeOrder) -> ReadingPoint:
    """The reading point of one lens.

    Arguments: `job`; `order` of the eye. Returns the point in mm. The depth is the job's, else
    usual; the inset is the job's, else distance minus near distance, else the segment's, else
    usual. A near-only lens is read at its reference point where nothing else is said. Usual
    values: common practice.
    """
    wear, near_only = job.wear, order.lens.design == "near"
    depth_mm, inset_mm = wear.reading_depth_mm, _inset_mm(job, order)
    assumed = []
    if depth_mm is None:
        depth_mm = Decimal(0) if near_only else USUAL_DEPTH_MM
        assumed.append(Assumed("wear.reading_depth_mm", depth_mm))
    if inset_mm is None:
        inset_mm = Decimal(0) if near_only else USUAL_INSET_MM
        assumed.append(Assumed("wear.reading_inset_mm", inset_mm))
    return ReadingPoint(eye=order.eye, depth_mm=depth_mm, inset_mm=inset_mm, assumed=tuple(assumed))


def _inset_mm(job: Job, order: EyeOrder) -> Decimal | None:
    if job.wear.reading_inset_mm is not None:
        return job.wear.reading_inset_mm
    if order.lens.design == "near":
        return None
    if order.pd_mm is not None and order.near_pd_mm is not None:
        return order.pd_mm - order.near_pd_mm
    return order.segment.inset_mm if order.segment else None


def lens_at_reading(job: Job, due: Due) -> LensAtReading | None:
    """One lens at its reading point, or None where its power is not known.

    Arguments: `job`; `due` what the lens must show. Returns prisms in prism dioptres, by
    p(r) = p0 - F r with the segment's own part where the point lies in it. The add of a
    progressive lens is not modelled (it depends on the design). Source: domain facts 4.2, 4.12.
    """
    order = job.order(due.eye)
    if order is None or due.power is None:
        return None
    point = reading_point(job, order)
    place = segment_of(order)
    inside = place is not None and place.holds(point.right_mm, point.up_mm)
    own = place.prism_at(point.right_mm, point.up_mm) if place and inside else NO_PRISM
    return LensAtReading(
        order=order,
        power=due.power,
        point=point,
        distance=due.expected,
        prism=prism_at(due.expected, due.power, point.right_mm, point.up_mm) + own,
        segment=place if inside else None,
        outside_segment=place is not None and not inside,
    )
