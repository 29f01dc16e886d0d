"""One lens's layout put together: its points, how its prism is got, its smallest blank."""

from dataclasses import dataclass
from decimal import Decimal

from pycore.bench.decentring import Blank, Decentring, blank_of, decentring_of, way_of
from pycore.bench.expected import Due
from pycore.bench.layout import LensPlace, Spot, place_of
from pycore.bench.outline import outline_of
from pycore.job.document import Job
from pycore.job.order import EyeOrder
from pycore.optics.prism import Eye

NOWHERE = Spot(Decimal(0), Decimal(0))


@dataclass(frozen=True, slots=True, kw_only=True)
class LensLayout:
    """All that is known of one lens's layout.

    `moving`: whether moving a finished lens gives the prism; `moved`: the blank for that, around
    the optical centre, None where it cannot be; `ground`: the blank of a lens whose prism is
    worked in, around the blank's centre; `way`: the code of `way_of`, "" without a power.
    """

    eye: Eye
    order: EyeOrder
    place: LensPlace
    moving: Decentring | None
    moved: Blank | None
    ground: Blank | None
    way: str

    @property
    def blank(self) -> Blank | None:
        """The blank the lens needs: moved where moving can give the prism, else ground."""
        return self.moved or self.ground

    @property
    def made_from(self) -> Blank | None:
        """The blank of the way the lens is made, the blank's own size considered."""
        return self.ground if self.way.startswith("ground") else self.blank

    @property
    def blank_centre_assumed(self) -> bool:
        """Tell whether the blank's centre was taken to be the prism reference point."""
        return self.moved is None and self.ground is not None and self.order.surfacing is None

    @property
    def centre(self) -> Spot | None:
        """The optical centre from the prism reference point, in mm, if there is one."""
        return self.moving.centre if self.moving else None

    @property
    def centre_in_box(self) -> Spot | None:
        """The optical centre from the boxing centre, in mm, if both are known."""
        prp, centre = self.place.prp, self.centre
        return prp + centre if prp and centre else None


def ed_of(job: Job) -> float | None:
    """The effective diameter in mm: as given, else the rim's own, else None. Arguments: `job`."""
    if job.frame.ed_mm is not None:
        return float(job.frame.ed_mm)
    rim = outline_of(job.frame)
    return rim.ed_mm if rim else None


def lens_layout(job: Job, due: Due) -> LensLayout | None:
    """Put one lens's layout together, or None where the eye is not ordered.

    Arguments: `job`; `due` what the lens must show. Returns the layout, mm. A lens that is
    blocked off its blank's centre (`surfacing`) is ground; else a finished lens is moved where
    that gives the prism. Source: facts 4.3 and 4.6.
    """
    order, place = job.order(due.eye), place_of(job, due.eye)
    if order is None or place is None:
        return None
    moving = decentring_of(order, due)
    moved = ground = None
    if place.prp:
        rim, ed_mm, surfacing = outline_of(job.frame), ed_of(job), order.surfacing
        off_centre = NOWHERE
        if surfacing:
            zero = Decimal(0)
            off_centre = Spot(surfacing.prp_right_mm or zero, surfacing.prp_up_mm or zero)
        ground = blank_of(rim, ed_mm, due.eye, place.prp - off_centre)
        if moving and moving.centre and not moving.refused and surfacing is None:
            moved = blank_of(rim, ed_mm, due.eye, place.prp + moving.centre)
    smallest_mm = moved.by_rule_mm if moved else None
    return LensLayout(
        eye=due.eye,
        order=order,
        place=place,
        moving=moving,
        moved=moved,
        ground=ground,
        way=way_of(moving, smallest_mm, order.lens.blank_diameter_mm) if moving else "",
    )
