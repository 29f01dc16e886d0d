"""What prism does the pair have at near, and would a slab be due: on which lens, how much, where?

The slab makes up for what the powers do between the distance and the reading point. Prescribed
prism is never slabbed off, so the total at near is a figure of its own.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Decimal

from pycore.bench.reading import LensAtReading
from pycore.decimals import from_float, snap
from pycore.optics.power import Power
from pycore.optics.prism import EYES, Eye, Prism

# Worth a slab from here on, and about the most that is made (published question banks); the
# steps are from memory: ground to any quarter, moulded (reverse) in halves.
SLAB_LEAST = Decimal("1.5")
SLAB_MOST = Decimal(6)
STEPS = {"slab-off": Decimal("0.25"), "reverse-slab": Decimal("0.50")}
USUAL_DISTANCE_MM = Decimal(400)  # common practice
USUAL_CENTRE_MM = Decimal(27)  # back of the lens to the eye's centre of rotation, domain facts 4.13
CLOCK_INDEX = Decimal("1.530")
CLOCK_PIN_MM = Decimal(10)  # middle pin to outer pin, from memory


@dataclass(frozen=True, slots=True)
class PairPrism:
    """The pair, right minus left, in prism dioptres: vertical + right base up, horizontal + in."""

    vertical: Decimal
    horizontal: Decimal

    def __sub__(self, other: "PairPrism") -> "PairPrism":
        return PairPrism(self.vertical - other.vertical, self.horizontal - other.horizontal)


@dataclass(frozen=True, slots=True, kw_only=True)
class Slab:
    """One way to make the slab: `kind` slab-off (base up, on the lens whose base is the lower at
    near) or reverse-slab (base down, on the other); `amount` and `in_steps` in prism dioptres."""

    kind: str
    eye: Eye
    base: str
    amount: Decimal
    in_steps: Decimal

    @property
    def prism(self) -> Prism:
        """The prism of the slab as made, in prism dioptres."""
        return Prism(Decimal(0), self.in_steps if self.base == "up" else -self.in_steps)


@dataclass(frozen=True, slots=True, kw_only=True)
class Near:
    """The pair at near. `reading` is the total there, `change` = reading - distance.

    `vertical_known` is false where segments stand in unknown places and do not cancel; `alike`
    is true where they were taken to stand alike. `open_adds` is the most that unequal adds of
    progressive lenses, which are not modelled, could still change the vertical: the power rises
    to the add somewhere between both points, so by add times depth at most; equal ones cancel.
    """

    distance: PairPrism
    reading: PairPrism
    change: PairPrism
    vertical_known: bool
    alike: bool
    open_adds: Decimal
    slabs: tuple[Slab, ...]

    @property
    def advised(self) -> bool:
        """Tell whether the change is known and reaches the usual threshold for a slab."""
        return self.vertical_known and snap(abs(self.change.vertical)) >= SLAB_LEAST

    @property
    def beyond_usual(self) -> bool:
        """Tell whether the change is more than a slab usually makes."""
        return snap(abs(self.change.vertical)) > SLAB_MOST


def pair_prism(right: Prism, left: Prism) -> PairPrism:
    """The pair's prism, right minus left. Arguments and return in prism dioptres.

    >>> pair_prism(Prism(Decimal(3), Decimal(1)), Prism(Decimal(-3), Decimal(-1)))
    PairPrism(vertical=Decimal('2'), horizontal=Decimal('6'))
    """
    return PairPrism(right.y - left.y, right.x - left.x)


def near_of(right: LensAtReading, left: LensAtReading) -> Near:
    """The pair at near. Arguments: both lenses at their reading points. Returns the Near.

    Source: domain facts 4.12: slab = vertical pair prism at the reading point minus vertical
    pair prism at the distance point, with full cylinders and segments.
    """
    distance = pair_prism(right.distance, left.distance)
    reading = pair_prism(right.prism, left.prism)
    change = reading - distance
    known, alike = _segments_known(right, left)
    return Near(
        distance=distance,
        reading=reading,
        change=change,
        vertical_known=known,
        alike=alike,
        open_adds=abs(right.open_add - left.open_add) * right.point.depth_mm / 10,
        slabs=slabs_for(change.vertical) if known else (),
    )


def _segments_known(right: LensAtReading, left: LensAtReading) -> tuple[bool, bool]:
    """Whether the segments' vertical part of the pair is known, and whether only because they
    were taken to stand alike: same add, and the same said of both places."""
    missing = [lens.segment.missing if lens.segment else () for lens in (right, left)]
    if not any(missing):
        return True, False
    alike = _said_of_segment(right) == _said_of_segment(left)
    return alike, alike


def _said_of_segment(lens: LensAtReading) -> tuple[Decimal | None, ...]:
    place, segment = lens.segment, lens.order.segment
    return (
        place.add if place else None,
        place.centre_below_top_mm if place else None,
        segment.height_mm if segment else None,
        lens.order.prp_height_mm,
    )


def slabs_for(change: Decimal) -> tuple[Slab, ...]:
    """Both ways to make up for a vertical change: slab-off, reverse slab.

    Arguments: `change` prism dioptres, + where the right lens's base goes up relative to the
    left's. Returns none where nothing changes. Source: domain facts 4.12: slab base up on the
    lens most minus or least plus, reverse slab base down on the other.

    >>> [(slab.kind, slab.eye, slab.base) for slab in slabs_for(Decimal("-1.8"))]
    [('slab-off', 'right', 'up'), ('reverse-slab', 'left', 'down')]
    """
    amount = snap(abs(change))
    if not amount:
        return ()
    lower: Eye = "left" if change > 0 else "right"
    upper: Eye = "right" if change > 0 else "left"
    return (
        Slab(
            kind="slab-off",
            eye=lower,
            base="up",
            amount=amount,
            in_steps=_in_steps(amount, STEPS["slab-off"]),
        ),
        Slab(
            kind="reverse-slab",
            eye=upper,
            base="down",
            amount=amount,
            in_steps=_in_steps(amount, STEPS["reverse-slab"]),
        ),
    )


def _in_steps(amount: Decimal, step: Decimal) -> Decimal:
    return (amount / step).quantize(Decimal(1), ROUND_HALF_EVEN) * step


def with_slab(lenses: Mapping[Eye, LensAtReading], slab: Slab) -> dict[Eye, Prism]:
    """What the lens meter shows at both reading points when the slab is on its lens.

    Arguments: `lenses`; `slab`. Returns prism dioptres by eye; their vertical difference is
    that of the distance points, but for the slab's step.
    """
    return {
        eye: lenses[eye].prism + slab.prism if eye == slab.eye else lenses[eye].prism
        for eye in EYES
    }


def clock_difference(amount: Decimal, index: Decimal) -> Decimal:
    """How much more or less a lens clock shows with its middle pin on the slab line, upright,
    than along the line, in dioptres.

    Arguments: `amount` of the slab in prism dioptres; `index` of the lens. Returns dioptres for
    a clock of index 1.530 with pins 10 mm apart. The slab is a ridge of angle P/(100(n-1)); the
    middle pin sinks by half of angle times pin distance. The rule that the difference in
    dioptres is the slab in prism dioptres (from memory) is this for index 1.530.

    >>> clock_difference(Decimal(3), Decimal("1.530"))
    Decimal('3.00')
    """
    share = (CLOCK_INDEX - 1) / (index - 1)
    return (amount * share * 10 / CLOCK_PIN_MM).quantize(Decimal("0.01"), ROUND_HALF_EVEN)


@dataclass(frozen=True, slots=True, kw_only=True)
class SlabLine:
    """Where the slab line lies: mm upwards from the prism reference point, mm above the lowest
    boxing line; None where not known."""

    up_mm: Decimal | None
    height_mm: Decimal | None
    at_segment: bool


def slab_line(lens: LensAtReading) -> SlabLine:
    """Where the slab line lies on one lens. Arguments: `lens` at its reading point.

    Common practice: at the top of the segment; without one half way down to the reading point,
    to be agreed with the maker.
    """
    order = lens.order
    segment, prp_mm = order.segment, order.prp_height_mm
    if (
        prp_mm is None
        and order.fitting_height_mm is not None
        and order.cross_above_prp_mm is not None
    ):
        prp_mm = order.fitting_height_mm - order.cross_above_prp_mm
    if lens.segment:
        height_mm = segment.height_mm if segment else None
        return SlabLine(up_mm=lens.segment.top_up_mm, height_mm=height_mm, at_segment=True)
    up_mm = lens.point.up_mm / 2
    height_mm = None if prp_mm is None else prp_mm + up_mm
    return SlabLine(up_mm=up_mm, height_mm=height_mm, at_segment=False)


def round_segments_difference_mm(change: Decimal, add: Decimal) -> Decimal:
    """How much two round segments must differ in diameter to make up for a vertical change
    instead of a slab, the larger on the eye that would get the reverse slab.

    Arguments: `change` prism dioptres; `add` dioptres. Returns mm. Source: the textbook rule
    20 times prism over add (domain facts 4.12).

    >>> round_segments_difference_mm(Decimal("1.5"), Decimal("2.50"))
    Decimal('12')
    """
    return abs(change) * 20 / add


def effective_at_near(
    prism: Prism, power: Power, distance_mm: Decimal, centre_mm: Decimal
) -> Prism | None:
    """The prism an eye gets at near from a prism worked in the lens, in prism dioptres.

    Arguments: `prism` worked; `power` read through (with the add); `distance_mm` lens to
    reading matter; `centre_mm` lens to the eye's centre of rotation. Returns
    (1 - s (L + F))⁻¹ p with L = -1/distance, or None where a principal power brings the image
    to the eye's centre of rotation or before it. Paraxial, thin. Source: published for F = 0,
    P/(1 - s/l); with the power computed (domain facts 4.13).

    >>> ten = Prism(Decimal(10), Decimal(0))
    >>> effective_at_near(ten, Power(Decimal(0)), Decimal(1000) / 3, Decimal(27)).x
    Decimal('9.250693802035')
    """
    centre_m, vergence = float(centre_mm) / 1000.0, -1000.0 / float(distance_mm)
    along, across = (1.0 - centre_m * (vergence + float(part)) for part in power.principal)
    if along <= 0.0 or across <= 0.0:
        return None
    xx, xy, yy = power.matrix()
    a_xx, a_xy = 1.0 - centre_m * (vergence + xx), -centre_m * xy
    a_yy = 1.0 - centre_m * (vergence + yy)
    x, y, determinant = float(prism.x), float(prism.y), along * across
    return Prism(
        from_float((a_yy * x - a_xy * y) / determinant),
        from_float((a_xx * y - a_xy * x) / determinant),
    )
