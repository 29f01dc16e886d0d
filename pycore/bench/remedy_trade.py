"""What the bench allows of a movement: which lens may be moved, how far, what moves with it.

An uncut lens is moved by marking it anew; its segment and its blank move along. A cut lens can
only be moved by edging it smaller. A progressive or aspheric lens has no single power, so no
movement gives a known prism, and the progressive's corridor and fitting cross would move along.
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from decimal import Decimal

from pycore.bench.decentring import ALLOWANCE_MM, LARGEST_BLANK_MM
from pycore.bench.layout import Spot
from pycore.bench.lens_layout import lens_layout
from pycore.bench.matter import Matter
from pycore.bench.outline import outline_of
from pycore.bench.remedy_least import Cover, Disc, Limit, Strip
from pycore.bench.remedy_limits import RIGHTWARDS, UPWARDS, sum_of
from pycore.decimals import from_float
from pycore.job.body import SEGMENTED
from pycore.optics.power import Power, point_with_prism
from pycore.optics.prism import EYES, NO_PRISM, Eye

# Segment height, of each lens and between both: Z80.1-1999 to 2015 (published tables and guides);
# each lens also EN ISO 21987 practice (published competency cards). Horizontal, in total: the
# same tables. Under other editions common practice.
SEGMENT_HEIGHT_MM = 1.0
SEGMENT_DISTANCE_MM = 2.5
FINISHED = ("none", "move")  # a finished lens moved: its blank is round its optical centre
MOST_MM = 10.0  # thin formulas are off by several per cent beyond (facts 4.17)


@dataclass(frozen=True, slots=True, kw_only=True)
class Blank:
    """The blank an uncut lens is cut from: `centre` from the boxing centre, `diameter_mm`.

    `assumed`: the size was not given (the usual largest), or the centre is taken to be the mark.
    """

    centre: Spot
    diameter_mm: Decimal
    size_assumed: bool
    centre_assumed: bool


def refusal(matter: Matter, eye: Eye) -> str:
    """Why a lens cannot be moved at all: a code, "" where it can.

    Arguments: `matter`; `eye`. Source: facts 4.3 (progressive, aspheric).
    """
    due, order = matter.dues[eye], matter.job.order(eye)
    if due.partner or order is None:
        return "partner"
    if eye not in matter.reads:
        return "not-read"
    if order.lens.design == "progressive":
        return "progressive"
    if order.lens.aspheric:
        return "aspheric"
    return "" if due.power is not None else "power-unknown"


def trade_limits(matter: Matter, eyes: Iterable[Eye]) -> Mapping[str, tuple[Limit, ...]]:
    """Limits on a movement beside the edition's prism rows, by the code of what they are about.

    Arguments: `matter`; `eyes` that may be moved. Returns `far`, `segment`, `blank` in mm.
    """
    moved = tuple(eyes)
    far = tuple(Disc(RIGHTWARDS[eye], UPWARDS[eye], (0.0, 0.0), MOST_MM) for eye in moved)
    covers = tuple(cover for eye in moved if (cover := _cover(matter, eye)))
    return {"far": far, "segment": _segment(matter, moved), "blank": covers}


def _segment(matter: Matter, eyes: tuple[Eye, ...]) -> tuple[Limit, ...]:
    """How far segments may move, which now stand as ordered (nothing says otherwise)."""
    having = [eye for eye in eyes if has_segment(matter, eye)]
    limits: list[Limit] = [Strip(UPWARDS[eye], 0.0, SEGMENT_HEIGHT_MM) for eye in having]
    if not having:
        return ()
    signs = {"right": 1.0, "left": -1.0}
    across = sum_of(*((signs[eye], RIGHTWARDS[eye]) for eye in having))
    limits.append(Strip(across, 0.0, SEGMENT_DISTANCE_MM))
    if len(having) == len(EYES):
        up = sum_of(*((signs[eye], UPWARDS[eye]) for eye in having))
        limits.append(Strip(up, 0.0, SEGMENT_HEIGHT_MM))
    return tuple(limits)


def has_segment(matter: Matter, eye: Eye) -> bool:
    """Tell whether a lens carries a segment that moves with it."""
    order = matter.job.order(eye)
    return order is not None and order.lens.design in SEGMENTED


def _cover(matter: Matter, eye: Eye) -> Limit | None:
    blank, rim = blank_of_uncut(matter, eye), outline_of(matter.job.frame)
    if blank is None or rim is None:
        return None
    radius_mm = (float(blank.diameter_mm) - ALLOWANCE_MM) / 2.0
    centre = float(blank.centre.right_mm), float(blank.centre.up_mm)
    return Cover(RIGHTWARDS[eye], UPWARDS[eye], centre, rim.points(eye), rim.ed_mm / 2.0, radius_mm)


def blank_of_uncut(matter: Matter, eye: Eye) -> Blank | None:
    """The blank of an uncut lens in the frame, or None where it cannot be told.

    Arguments: `matter`; `eye`. The mark stands at its ordered place. The blank's centre lies where
    the surfacing says; else, of a lens whose prism comes from moving a finished one, at its
    optical centre as read; else it is taken to be the mark. Source: facts 4.6.
    """
    due = matter.dues[eye]
    lens = lens_layout(matter.job, due) if matter.job.state == "uncut" else None
    if lens is None or lens.ground is None:
        return None
    size, surfaced = lens.order.lens.blank_diameter_mm, lens.order.surfacing is not None
    centre = None
    if not surfaced and lens.way in FINISHED and lens.place.prp:
        point = point_with_prism(matter.reads[eye], NO_PRISM, due.power or Power(Decimal(0)))
        if point:
            centre = lens.place.prp + Spot(from_float(point[0]), from_float(point[1]))
    return Blank(
        centre=centre or lens.ground.centre,
        diameter_mm=size or LARGEST_BLANK_MM,
        size_assumed=size is None,
        centre_assumed=centre is None and not surfaced,
    )
