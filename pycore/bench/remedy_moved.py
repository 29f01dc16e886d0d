"""The same job after a lens has been moved: what would then be read, and where."""

import math
from dataclasses import replace
from decimal import Decimal

from pycore.bench.matter import Matter
from pycore.bench.remedy_least import STILL, Move, dot
from pycore.bench.remedy_limits import responses, slid_point, towards_nose
from pycore.decimals import from_float
from pycore.job.bench import EyeReading
from pycore.optics.prism import EYES, Eye, Prism


def moved(matter: Matter, move: Move) -> Matter:
    """The matter as it would be read after a movement.

    Arguments: `matter`; `move` mm. Returns the Matter: prisms by p + F d / 10, measured places
    moved along with their lens (a length slid whose direction is not known, by the worst).
    """
    rows = responses(matter)
    reads = {
        eye: Prism(
            prism.x + from_float(dot(rows.get((eye, "horizontal"), STILL), move)),
            prism.y + from_float(dot(rows.get((eye, "vertical"), STILL), move)),
        )
        for eye, prism in matter.reads.items()
    }
    readings = matter.job.readings
    right_mm, left_mm = parts_of(move, "right")[0], parts_of(move, "left")[0]
    distance_mm = readings.prp_distance_mm
    if distance_mm is not None:
        distance_mm = distance_mm - right_mm + left_mm
    after = replace(
        readings,
        right=_eye_after(matter, "right", move),
        left=_eye_after(matter, "left", move),
        prp_distance_mm=distance_mm,
    )
    return replace(matter, job=replace(matter.job, readings=after), reads=reads)


def parts_of(move: Move, eye: Eye) -> tuple[Decimal, Decimal]:
    """One lens's part of a movement, exactly as written.

    >>> parts_of((0.1, 0.0, -1.2, 0.0), "left")
    (Decimal('-1.2'), Decimal('0.0'))
    """
    start = 2 * EYES.index(eye)
    return Decimal(repr(move[start])), Decimal(repr(move[start + 1]))


def _eye_after(matter: Matter, eye: Eye, move: Move) -> EyeReading:
    reading = matter.job.readings.of(eye)
    right_mm, up_mm = parts_of(move, eye)
    height_mm, pd_mm, slid_mm = reading.prp_height_mm, reading.pd_mm, reading.slid_mm
    if height_mm is not None:
        height_mm = height_mm + up_mm
    if pd_mm is not None:
        pd_mm = pd_mm - right_mm * Decimal(towards_nose(eye))
    if slid_mm is not None:
        right, up = slid_point(matter, eye) or (0.0, 0.0)
        away_mm = from_float(math.hypot(right + float(right_mm), up + float(up_mm)))
        known = bool(right or up)
        slid_mm = away_mm if known else slid_mm + away_mm  # at worst straight away
    return replace(reading, prp_height_mm=height_mm, pd_mm=pd_mm, slid_mm=slid_mm)
