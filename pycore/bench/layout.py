"""Where do the points of each lens lie in the frame, and how is the prism got: moved or ground?

Boxing system (ISO 8624): each lens in its box A by B, the boxes DBL apart; heights count from the
lowest boxing line. Positions here are from the boxing centre of their lens, to the observer's
right and up, in mm. The fitting cross, the pupil and the prism reference point are three points.
"""

from dataclasses import dataclass
from decimal import Decimal

from pycore.bench.outline import outline_of
from pycore.bench.reading import reading_point
from pycore.decimals import from_float
from pycore.job.body import Frame
from pycore.job.document import Job
from pycore.job.order import EyeOrder
from pycore.optics.prism import Eye, Prism

USUAL_CROSS_ABOVE_MM = Decimal(4)  # 2 to 4 mm by design (facts section 5): the chart says it


@dataclass(frozen=True, slots=True)
class Spot:
    """A point in the frame's plane: mm to the observer's right and up."""

    right_mm: Decimal
    up_mm: Decimal

    def __add__(self, other: "Spot") -> "Spot":
        return Spot(self.right_mm + other.right_mm, self.up_mm + other.up_mm)

    def __sub__(self, other: "Spot") -> "Spot":
        return Spot(self.right_mm - other.right_mm, self.up_mm - other.up_mm)


@dataclass(frozen=True, slots=True, kw_only=True)
class Box:
    """The frame's box in mm, as given or as the traced rim has it."""

    a_mm: Decimal | None
    b_mm: Decimal | None
    dbl_mm: Decimal | None

    @property
    def frame_pd_mm(self) -> Decimal | None:
        """Distance between both boxing centres, A + DBL, in mm. Source: ISO 8624."""
        return None if self.a_mm is None or self.dbl_mm is None else self.a_mm + self.dbl_mm


@dataclass(frozen=True, slots=True, kw_only=True)
class LensPlace:
    """One lens's points from its boxing centre, in mm; None for what the job does not tell.

    `prp` prism reference point (moved by the centration `shift`, if one is on), `pupil` the eye
    behind the lens (at the fitting height, or else at the height ordered for the lens), `cross`
    the fitting cross, `segment_top` the middle of a segment's top.
    `assumed`: fields a usual value filled, with that value; `missing`: fields that would help.
    """

    eye: Eye
    prp: Spot | None
    pupil: Spot | None
    cross: Spot | None
    segment_top: Spot | None
    shift: Spot
    assumed: tuple[tuple[str, str], ...]
    missing: tuple[str, ...]


def inwards(eye: Eye, right_mm: Decimal) -> Decimal:
    """A distance to the observer's right as one towards the nose (or back), in mm."""
    return right_mm if eye == "right" else -right_mm + 0


def box_of(frame: Frame) -> Box:
    """The box of a frame; a traced rim fills in what is not given. Arguments: `frame`, mm."""
    a_mm, b_mm = frame.a_mm, frame.b_mm
    rim = outline_of(frame)
    if rim and (a_mm is None or b_mm is None):
        left, bottom, right, top = rim.box
        a_mm = from_float(right - left) if a_mm is None else a_mm
        b_mm = from_float(top - bottom) if b_mm is None else b_mm
    return Box(a_mm=a_mm, b_mm=b_mm, dbl_mm=frame.dbl_mm)


def place_of(job: Job, eye: Eye) -> LensPlace | None:
    """Where one lens's points lie in the frame, or None where the eye is not ordered.

    Arguments: `job`; `eye`. Returns the place, mm from the boxing centre. Source: decentration = (A + DBL) / 2 - PD inwards and
    height - B / 2 upwards (facts 4.6); shift opposite to the base (facts 4.7).
    """
    order = job.order(eye)
    if order is None:
        return None
    box = box_of(job.frame)
    assumed: dict[str, str] = {}
    missing: list[str] = []
    across = _across(job, order, box, assumed, missing)
    height = _prp_height(order, box, assumed)
    if box.b_mm is None:
        missing.append("frame.b_mm")
    half_b = None if box.b_mm is None else box.b_mm / 2
    shift = shift_of(job, order.verified.prism_total)
    return LensPlace(
        eye=eye,
        prp=_moved(_spot(across, height, half_b), shift),
        pupil=_spot(across, order.fitting_height_mm or height, half_b),
        cross=_spot(across, _cross_height(order, height), half_b),
        segment_top=_segment_top(job, order, across, half_b, assumed),
        shift=shift,
        assumed=tuple(assumed.items()),
        missing=tuple(missing),
    )


def shift_of(job: Job, prescribed: Prism) -> Spot:
    """How far the prism moves the reference point: the eye turns towards the apex.

    Arguments: `job` with its `centration_shift_mm` for each prism dioptre (none: no shift);
    `prescribed` prism dioptres. Returns mm. Source: the centring rule for prisms, 0.25 mm for
    each cm/m opposite to the base (facts 4.7); 0.3 in other places.
    """
    each_mm = job.centration_shift_mm or Decimal(0)
    return Spot(-prescribed.x * each_mm + 0, -prescribed.y * each_mm + 0)


def _spot(across: Decimal | None, height: Decimal | None, half_b: Decimal | None) -> Spot | None:
    if across is None or height is None or half_b is None:
        return None
    return Spot(across, height - half_b)


def _moved(spot: Spot | None, shift: Spot) -> Spot | None:
    return None if spot is None else spot + shift


def _across(
    job: Job, order: EyeOrder, box: Box, assumed: dict[str, str], missing: list[str]
) -> Decimal | None:
    """The eye's distance from the boxing centre, to the observer's right, before any shift."""
    pd_mm = _pd(job, order, assumed)
    if pd_mm is None:
        near = order.lens.design == "near"
        missing.append(f"{order.eye}.{'near_pd_mm' if near else 'pd_mm'}")
    missing += [
        f"frame.{name}"
        for name, value in (("a_mm", box.a_mm), ("dbl_mm", box.dbl_mm))
        if value is None
    ]
    frame_pd_mm = box.frame_pd_mm
    if pd_mm is None or frame_pd_mm is None:
        return None
    return inwards(order.eye, frame_pd_mm / 2 - pd_mm)


def _pd(job: Job, order: EyeOrder, assumed: dict[str, str]) -> Decimal | None:
    """The monocular distance that counts: the near one for a near-only lens."""
    if order.lens.design == "near":
        if order.near_pd_mm is not None:
            return order.near_pd_mm
        return order.pd_mm if order.pd_for == "near" else None
    if order.pd_mm is not None and order.pd_for != "near":
        return order.pd_mm
    if job.pd_mm is None:
        return None
    half = job.pd_mm / 2
    assumed[f"{order.eye}.pd_mm"] = format(half, "f")
    return half


def _prp_height(order: EyeOrder, box: Box, assumed: dict[str, str]) -> Decimal | None:
    if order.prp_height_mm is not None:
        return order.prp_height_mm
    if order.lens.design == "progressive" and order.fitting_height_mm is not None:
        above = order.cross_above_prp_mm
        if above is None:
            above = USUAL_CROSS_ABOVE_MM
            assumed[f"{order.eye}.cross_above_prp_mm"] = format(above, "f")
        return order.fitting_height_mm - above
    if box.b_mm is None:
        return None
    middle = box.b_mm / 2  # the horizontal centre line, where no height is ordered
    assumed[f"{order.eye}.prp_height_mm"] = format(middle.normalize(), "f")
    return middle


def _cross_height(order: EyeOrder, prp_height: Decimal | None) -> Decimal | None:
    """The fitting cross's height: as given, or as far above the reference point as given."""
    if order.fitting_height_mm is not None:
        return order.fitting_height_mm
    if order.cross_above_prp_mm is None or prp_height is None:
        return None
    return prp_height + order.cross_above_prp_mm


def _segment_top(
    job: Job,
    order: EyeOrder,
    across: Decimal | None,
    half_b: Decimal | None,
    assumed: dict[str, str],
) -> Spot | None:
    segment = order.segment
    if segment is None or across is None:
        return None
    inset_mm = segment.inset_mm
    if inset_mm is None:
        reading = reading_point(job, order)
        inset_mm = reading.inset_mm
        if any(part.field == "wear.reading_inset_mm" for part in reading.assumed):
            assumed[f"{order.eye}.segment.inset_mm"] = format(inset_mm, "f")
    return _spot(across + inwards(order.eye, inset_mm), segment.height_mm, half_b)
