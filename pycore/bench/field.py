"""What prism does a lens meter read at any point of a lens, and where do both lenses agree?

Thin: p(r) = p0 - F r from the prism reference point; inside a reading segment also the segment's
own part about its own optical centre. Exact: one ray through the real lens as it lies on the stop
(`pycore.optics.trace`). Range of validity: the thin formula holds for a thin lens near its
reference point; beyond about 10 mm from it with more than 6 D, or beyond 20 prism dioptres, it is
off by several per cent (facts 4.17), and the exact reading is the one to expect. The exact one
holds for spherical and toric surfaces; an aspheric or progressive surface is not modelled.
"""

import math
from dataclasses import dataclass
from decimal import Decimal

from pycore.bench.body import BodyValues, body_values
from pycore.bench.expected import Due
from pycore.bench.reading import THIN_LIMIT
from pycore.bench.segment import SegmentPlace, segment_of
from pycore.decimals import from_float, snap
from pycore.job.body import Place
from pycore.job.document import Job
from pycore.job.order import EyeOrder
from pycore.optics.power import Matrix, Power, prism_at
from pycore.optics.prism import Eye, Prism
from pycore.optics.surface import OutsideSurfaceError
from pycore.optics.trace import (
    Body,
    TotalReflectionError,
    body_of,
    reading_on_stop,
    with_segment,
)

WORTH_SHOWING = Decimal("0.05")  # prism dioptres between the thin and the exact reading
USUAL_LIMIT = Decimal(1)  # prism dioptres of vertical imbalance; common practice
FARTHEST_MM = 60.0  # as far as a point may be asked for


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """What is read at one point: prisms in prism dioptres; `exact` None where no light passes."""

    place: Place
    thin: Prism
    exact: Prism | None
    in_segment: bool

    @property
    def difference(self) -> Decimal | None:
        """How far the exact reading lies from the thin one, as vectors, in prism dioptres."""
        return None if self.exact is None else (self.exact - self.thin).amount

    @property
    def differs(self) -> bool:
        """Tell whether the difference is worth showing."""
        return self.difference is not None and snap(self.difference) > WORTH_SHOWING

    @property
    def beyond_thin(self) -> bool:
        """Tell whether the prism is beyond what the thin formula is good for."""
        return snap(self.thin.amount) > THIN_LIMIT


@dataclass(frozen=True, slots=True, kw_only=True)
class LensField:
    """One lens everywhere: its prism at the reference point, its power, its segment, its body.

    `segment` is None where there is none or its height is not known; `values` say what the body
    is made of; `body` is None where no such lens can be made.
    """

    order: EyeOrder
    due: Due
    power: Power
    segment: SegmentPlace | None
    values: BodyValues
    body: Body | None

    @property
    def eye(self) -> Eye:
        """The eye whose lens it is."""
        return self.order.eye

    def in_segment(self, place: Place) -> bool:
        """Tell whether a point lies in the reading segment."""
        return self.segment is not None and self.segment.holds(place.right_mm, place.up_mm)

    def reading(self, place: Place) -> Reading:
        """What the lens meter reads at a point, by both ways. Arguments: `place`."""
        thin = prism_at(self.due.expected, self.power, place.right_mm, place.up_mm)
        segment = self.segment if self.in_segment(place) else None
        if segment:
            thin += segment.prism_at(place.right_mm, place.up_mm)
        return Reading(
            place=place,
            thin=thin,
            exact=self._exact(place, segment),
            in_segment=segment is not None,
        )

    def _exact(self, place: Place, segment: SegmentPlace | None) -> Prism | None:
        if self.body is None:
            return None
        right_mm, up_mm = float(place.right_mm), float(place.up_mm)
        try:
            body = self._body_at(place, segment) if segment else self.body
            x, y = reading_on_stop(body, right_mm, up_mm)
        except (OutsideSurfaceError, TotalReflectionError):
            return None
        return Prism(from_float(x), from_float(y))

    def _body_at(self, place: Place, segment: SegmentPlace) -> Body:
        """The lens with the segment on its front (a segment on the back reads nearly the same)."""
        assert self.body is not None
        right_mm, up_mm = segment.centre_right_mm, segment.centre_up_mm
        return with_segment(
            self.body,
            float(segment.add),
            float(place.right_mm if right_mm is None else right_mm),
            float(place.up_mm if up_mm is None else up_mm),
        )


def lens_field(job: Job, due: Due) -> LensField | None:
    """One lens everywhere, or None where its power is not known.

    Arguments: `job`; `due` what the lens must show at its reference point. Returns the field.
    """
    order = job.order(due.eye)
    values = body_values(order, job.frame) if order else None
    if order is None or values is None or due.power is None:
        return None
    segment = segment_of(order)
    return LensField(
        order=order,
        due=due,
        power=due.power,
        segment=segment if segment and segment.top_up_mm is not None else None,
        values=values,
        body=_body(due, due.power, values),
    )


def _body(due: Due, power: Power, values: BodyValues) -> Body | None:
    thickness_mm, index = float(values.thickness_mm), float(values.index)
    try:
        return body_of(power, due.expected, values.front_d, thickness_mm, index)
    except OutsideSurfaceError:
        return None


@dataclass(frozen=True, slots=True, kw_only=True)
class Agreement:
    """Where the pair's vertical imbalance, beyond what is prescribed, stays within a limit.

    Both eyes looking the same way through the distance lenses, `x_per_mm` and `y_per_mm` say how
    the right prism gains on the left, upwards, for each mm to the observer's right and up. The
    zone is the strip of `half_width_mm` to each side of the line through both reference points'
    along which there is none; `down_mm` is how far straight down (and up) it reaches. None: all.
    """

    limit: Decimal
    x_per_mm: float
    y_per_mm: float
    half_width_mm: float | None
    down_mm: float | None

    def imbalance(self, right_mm: float, up_mm: float) -> float:
        """The pair's vertical imbalance at a point, in prism dioptres, + with the right base up."""
        return self.x_per_mm * right_mm + self.y_per_mm * up_mm


def agreement_of(right: Power, left: Power, limit: Decimal) -> Agreement:
    """Where the pair stays within a limit of vertical imbalance.

    Arguments: `right`, `left` distance powers; `limit` prism dioptres. Returns the Agreement.
    Source: p(r) = p0 - F r for both; the prescribed difference is what the eyes need, and prism
    thinning is the same in both, so neither counts.

    >>> both = agreement_of(Power(Decimal(-3)), Power(Decimal(-6)), Decimal(1))
    >>> round(both.imbalance(0.0, -8.0), 9), round(both.down_mm, 3)
    (2.4, 3.333)
    """
    return _agreement(right.matrix(), left.matrix(), limit)


def _agreement(right: Matrix, left: Matrix, limit: Decimal) -> Agreement:
    x_per_mm, y_per_mm = (left[1] - right[1]) / 10.0, (left[2] - right[2]) / 10.0
    steepest = math.hypot(x_per_mm, y_per_mm)
    return Agreement(
        limit=limit,
        x_per_mm=x_per_mm,
        y_per_mm=y_per_mm,
        half_width_mm=_within(limit, steepest),
        down_mm=_within(limit, abs(y_per_mm)),
    )


def _within(limit: Decimal, per_mm: float) -> float | None:
    """How far it is to the limit, or None where that is beyond any lens."""
    return float(limit) / per_mm if float(limit) < per_mm * FARTHEST_MM else None
