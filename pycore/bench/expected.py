"""What must the lens meter show at each lens's prism reference point?

Expected = prescribed (or the maker's stated values) + prism thinning; for a lens that must
match an existing partner, plus the partner's own vertical difference, so that the pair agrees.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Decimal

from pycore.decimals import snap
from pycore.errors import Note
from pycore.job.bench import EyeReading
from pycore.job.document import Job
from pycore.job.order import EyeOrder
from pycore.optics.power import Power
from pycore.optics.prism import NO_PRISM, Eye, Prism, base_of_word, from_base

THINNING_PLACES = Decimal("0.01")
SHARE_OF_ADD = {"two-thirds": Decimal(2) / Decimal(3), "six-tenths": Decimal("0.6")}


@dataclass(frozen=True, slots=True, kw_only=True)
class Due:
    """What one lens is due to show: prisms in prism dioptres, power and add in dioptres.

    `thinning` is None where it is not known; `expected` then leaves the thinning out and
    holds for the horizontal only (`vertical_known` false).
    """

    eye: Eye
    prescribed: Prism
    thinning: Prism | None
    expected: Prism
    power: Power | None
    add: Decimal | None
    stated_used: bool
    partner: bool
    vertical_known: bool


def thinning_of(job: Job, eye: Eye) -> Prism | None:
    """The prism thinning due in one lens, in prism dioptres, or None where it is not known.

    Arguments: `job`; `eye`. Rules of thumb: 0.6 or 2/3 of the smaller add, base down, the
    same in both lenses. Source: technical brief "Understanding Prism-Thinning", vol. 26
    no. 35, October 1998; rounding to 0.01 as on paperwork and the smaller add: common practice.
    """
    thinning = job.thinning
    if thinning is None:
        return NO_PRISM if _has_one_power(job) else None
    if thinning.rule == "none":
        return NO_PRISM
    if thinning.rule == "amount":
        amount = thinning.amount or Decimal(0)
        if eye == "left" and thinning.left_amount is not None:
            amount = thinning.left_amount
        down = from_base(amount, base_of_word(eye, "down"))
        return down if thinning.base == "down" else -down
    add = smaller_add(job)
    if thinning.rule not in SHARE_OF_ADD or add is None:
        return None
    amount = (add * SHARE_OF_ADD[thinning.rule]).quantize(THINNING_PLACES, ROUND_HALF_EVEN)
    return from_base(amount, base_of_word(eye, "down"))


def _has_one_power(job: Job) -> bool:
    """Without a word on thinning, only a lens with an add can have been thinned."""
    designs = {order.lens.design for order in job.orders}
    if designs <= {"single-vision", "near"}:
        return True
    return designs <= {"single-vision", "near", None} and smaller_add(job) is None


def smaller_add(job: Job) -> Decimal | None:
    """The smaller add of the order (or of the maker's stated values), in dioptres, or None."""
    adds = [order.verified.add for order in job.orders if order.verified.add]
    return min(adds) if adds else None


def due(job: Job, eye: Eye) -> Due | None:
    """What one lens must show, or None where the eye is not ordered.

    Arguments: `job`; `eye`. Returns the Due. Source: vector addition; domain facts 4.1;
    matching the old thinning when one lens is replaced: the technical brief of 1998.
    """
    order = job.order(eye)
    if order is None:
        return None
    verified = order.verified
    partner = _partner_of(job)
    if partner:
        thinning = _difference_of_partner(job, partner)
    else:
        thinning = NO_PRISM if verified.includes_thinning else thinning_of(job, eye)
    return Due(
        eye=eye,
        prescribed=verified.prism_total,
        thinning=thinning,
        expected=verified.prism_total + (thinning or NO_PRISM),
        power=verified.power,
        add=verified.add,
        stated_used=order.stated is not None,
        partner=order.partner,
        vertical_known=thinning is not None,
    )


def _partner_of(job: Job) -> EyeOrder | None:
    return next((order for order in job.orders if order.partner), None)


def _difference_of_partner(job: Job, partner: EyeOrder) -> Prism | None:
    """The vertical prism beyond its own prescription that the existing lens shows, if read.

    It is due in both lenses: the new one is made to match it, so that the pair agrees.
    """
    seen = read_prism(job, partner.eye)
    if seen is None:
        return None
    return Prism(Decimal(0), seen.y - partner.verified.prism_total.y)


def read_prism(job: Job, eye: Eye) -> Prism | None:
    """The lens's prism as read, compensator taken out, the mean of all readings; or None.

    Arguments: `job`; `eye`. Returns prism dioptres.
    """
    prisms = sightings_of(job, eye)
    if not prisms:
        return None
    count = Decimal(len(prisms))
    x = sum((prism.x for prism in prisms), Decimal(0)) / count
    y = sum((prism.y for prism in prisms), Decimal(0)) / count
    return Prism(x, y)


def sightings_of(job: Job, eye: Eye) -> tuple[Prism, ...]:
    """Each reading of one lens's prism, compensator and zero taken out, in prism dioptres."""
    reading: EyeReading = job.readings.of(eye)
    return tuple(sighting.lens_prism(job.instrument) for sighting in reading.sightings)


def thinning_found(dues: Mapping[Eye, Due], reads: Mapping[Eye, Prism | None]) -> Decimal | None:
    """Half the sum of both vertical errors where the thinning is not known: what both share.

    Arguments: `dues`; `reads` prism dioptres. Returns prism dioptres, up positive, or None.
    Source: the job document, version 1.
    """
    right, left = reads.get("right"), reads.get("left")
    if right is None or left is None or any(due_.vertical_known for due_ in dues.values()):
        return None
    return (right.y - dues["right"].expected.y + left.y - dues["left"].expected.y) / 2


def notes_on_thinning_found(dues: Mapping[Eye, Due], found: Decimal, text: str) -> list[Note]:
    """Warnings on thinning found that no rule would give.

    Arguments: `dues`; `found` prism dioptres, up positive; `text` of the amount.
    """
    adds = [due_.add for due_ in dues.values() if due_.add]
    codes = ["thinning-found-not-down"] * (snap(found) > 0)
    codes += ["thinning-found-exceeds-add"] * (bool(adds) and snap(abs(found)) > min(adds))
    return [
        Note(
            code=code,
            field="thinning",
            severity="warning",
            about="reading",
            params={"amount": text},
        )
        for code in codes
    ]


def read_first(right: Due | None, left: Due | None) -> Eye | None:
    """Which lens goes on the lens meter first: the one with the stronger power along 90.

    Arguments: both lenses' Due. Returns the eye, or None where powers are missing or equal.
    Source: certification review questions (facts section 5).
    """
    if right is None or left is None or right.power is None or left.power is None:
        return None
    powers = {due.eye: abs(due.power.along(Decimal(90))) for due in (right, left) if due.power}
    if powers["right"] == powers["left"]:
        return None
    return "right" if powers["right"] > powers["left"] else "left"


def notes_on_thinning(job: Job) -> list[Note]:
    """What a person should know about the thinning that was taken. Arguments: `job`."""
    notes = []
    adds = {order.verified.add for order in job.orders if order.verified.add}
    thinning = job.thinning
    if thinning and thinning.rule in SHARE_OF_ADD:
        if len(adds) > 1:
            add = str(min(adds))
            notes.append(
                Note(code="thinning-from-smaller-add", field="thinning.rule", params={"add": add})
            )
        if not adds:
            notes.append(Note(code="thinning-needs-add", field="thinning.rule", severity="ask"))
    if thinning and thinning.left_amount not in (None, thinning.amount):
        notes.append(
            Note(code="thinning-differs", field="thinning.left_amount", severity="warning")
        )
    unknown = thinning is None or thinning.rule == "unknown"
    if unknown and not _has_one_power(job) and not _partner_of(job):
        notes.append(Note(code="thinning-not-known", field="thinning"))
    for order in job.orders:
        if order.partner and read_prism(job, order.eye) is None:
            notes.append(
                Note(code="partner-not-read", field=f"readings.{order.eye}.prism", severity="ask")
            )
        if order.partner and order.verified.prism is None:
            notes.append(
                Note(
                    code="partner-without-prescription",
                    field=f"{order.eye}.prism",
                    severity="warning",
                )
            )
    return notes


def has_marked_height(order: EyeOrder, state: str) -> bool:
    """Tell whether the lens has a vertical point to be read at.

    Arguments: `order` of the eye; `state`. A single vision lens in (or cut for) a frame has one
    only where the order gives a height; progressives and multifocals carry their own marks.
    Source: domain facts section 5; the job document.
    """
    if state == "uncut" or order.lens.design in ("bifocal", "trifocal", "progressive"):
        return True
    return order.prp_height_mm is not None
