"""Where does a reading segment lie on its lens, and what prism does it add at a point?"""

from dataclasses import dataclass
from decimal import Decimal

from pycore.job.body import SEGMENTED, Segment
from pycore.job.order import EyeOrder
from pycore.optics.power import Power, prism_at
from pycore.optics.prism import NO_PRISM, Prism

FLAT_TOP_CENTRE_MM = Decimal(5)
STRAIGHT_CENTRE_MM = Decimal(0)


@dataclass(frozen=True, slots=True, kw_only=True)
class SegmentPlace:
    """A segment on its lens: mm from the prism reference point, seen from the front.

    A part is None where the order does not give it; `missing` are the fields that would.
    `centre_assumed` marks a usual depth of the optical centre below the segment's top.
    """

    add: Decimal
    top_up_mm: Decimal | None
    centre_right_mm: Decimal | None
    centre_up_mm: Decimal | None
    centre_below_top_mm: Decimal | None
    width_mm: Decimal | None
    is_round: bool
    centre_assumed: bool
    missing: tuple[str, ...]

    def holds(self, right_mm: Decimal, up_mm: Decimal) -> bool:
        """Tell whether a point (mm from the prism reference point) lies in the segment, as far
        as its place is known; what is not known does not shut a point out."""
        if self.top_up_mm is not None and up_mm > self.top_up_mm:
            return False
        if self.width_mm is None or self.centre_right_mm is None:
            return True
        half_mm, across_mm = self.width_mm / 2, right_mm - self.centre_right_mm
        if self.is_round and self.centre_up_mm is not None:
            return across_mm**2 + (up_mm - self.centre_up_mm) ** 2 <= half_mm**2
        return abs(across_mm) <= half_mm

    def prism_at(self, right_mm: Decimal, up_mm: Decimal) -> Prism:
        """The prism the segment adds at a point inside it, in prism dioptres.

        Arguments: the point, mm from the prism reference point. A coordinate of its optical
        centre that is not known counts as the point's own (it then adds nothing that way); ask
        `missing`. Source: Prentice's rule, facts 4.12.
        """
        centre_right_mm = right_mm if self.centre_right_mm is None else self.centre_right_mm
        centre_up_mm = up_mm if self.centre_up_mm is None else self.centre_up_mm
        return prism_at(NO_PRISM, Power(self.add), right_mm - centre_right_mm, up_mm - centre_up_mm)

    @property
    def jump(self) -> Decimal | None:
        """The image jump at the segment's top, in prism dioptres, or None where unknown.

        Source: add times the distance from the top to the optical centre in cm (lens cards).
        """
        depth_mm = self.centre_below_top_mm
        return None if depth_mm is None else abs(self.add * depth_mm / 10)


def segment_of(order: EyeOrder) -> SegmentPlace | None:
    """The reading segment of one lens, or None where it has none.

    Arguments: `order` of the eye. Returns the place as far as the order gives it. Usual depth
    of the optical centre: round, half the width (it is the circle's centre); flat top, 5 mm
    (lens cards: 28 and 35 mm wide); full width, at the line (common practice).
    """
    add = order.verified.add
    if order.lens.design not in SEGMENTED or not add:
        return None
    segment = order.segment or Segment()
    usual = _usual_centre_mm(segment)
    depth_mm = segment.centre_below_top_mm
    centre_assumed = depth_mm is None and usual is not None
    depth_mm = usual if depth_mm is None else depth_mm
    top_up_mm = _difference(segment.height_mm, order.prp_height_mm)
    needed = {
        "segment.height_mm": segment.height_mm,
        "prp_height_mm": order.prp_height_mm,
        "segment.centre_below_top_mm": depth_mm,
    }
    return SegmentPlace(
        add=add,
        top_up_mm=top_up_mm,
        centre_right_mm=_towards_nose(order, segment.inset_mm),
        centre_up_mm=_difference(top_up_mm, depth_mm),
        centre_below_top_mm=depth_mm,
        width_mm=segment.width_mm,
        is_round=_is(segment, "round"),
        centre_assumed=centre_assumed,
        missing=tuple(f"{order.eye}.{name}" for name, value in needed.items() if value is None),
    )


def _is(segment: Segment, shape: str) -> bool:
    return (segment.shape or "").strip().lower().replace(" ", "-").startswith(shape)


def _usual_centre_mm(segment: Segment) -> Decimal | None:
    if _is(segment, "round"):
        return None if segment.width_mm is None else segment.width_mm / 2
    if _is(segment, "flat-top"):
        return FLAT_TOP_CENTRE_MM
    return STRAIGHT_CENTRE_MM if _is(segment, "full-width") else None


def _difference(first: Decimal | None, second: Decimal | None) -> Decimal | None:
    return None if first is None or second is None else first - second


def _towards_nose(order: EyeOrder, inset_mm: Decimal | None) -> Decimal | None:
    """An inset as a distance to the observer's right."""
    if inset_mm is None:
        return None
    return inset_mm if order.eye == "right" else -inset_mm
