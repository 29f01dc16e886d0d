"""What does the generator need: the prism at the block's centre, its wedge, its four angles?

The prism due at the prism reference point (prescribed, or the maker's, with thinning) plus what
the power adds on the way to the block's centre, as vectors. The base is one direction with four
angles, by what one looks at and from where. The blank and the thickness are held against it.
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass, replace
from decimal import Decimal

from pycore.angles import cosine, sine, wrap
from pycore.bench.body import BodyValues, body_values
from pycore.bench.edge import Framing, edge_of
from pycore.bench.expected import Due
from pycore.bench.outline import outline_of
from pycore.job.body import Surfacing
from pycore.job.document import Job
from pycore.job.order import EyeOrder
from pycore.optics.power import Power, prism_at
from pycore.optics.prism import Prism
from pycore.optics.surface import OutsideSurfaceError
from pycore.optics.thickness import Solid, thicknesses
from pycore.optics.wedge import wedge_tangent

USUAL_RING_INDEX = Decimal("1.530")  # from memory (facts 4.10)
USUAL_BLOCK_MM = Decimal(55)  # from memory
USUAL_BLANKS_MM = tuple(map(Decimal, (60, 65, 70, 75, 80)))  # from memory (facts section 6)
ALLOWANCE_MM = 2.0  # of the blank's diameter (facts 4.6)
_TURNS = tuple(15.0 * number for number in range(24))  # degrees round the block
_ROUND = tuple((cosine(turn), sine(turn)) for turn in _TURNS)
MEASURED_MM = 1e-3  # less than anybody measures: never the reason for a warning


@dataclass(frozen=True, slots=True, kw_only=True)
class Blocking:
    """How one lens is blocked, in mm: where its prism reference point lies from the block's
    centre (seen from the front), the block's diameter, the index for which rings are marked.

    `usual` holds each field nobody filled, with the text of the value taken instead.
    """

    prp_right_mm: Decimal
    prp_up_mm: Decimal
    block_diameter_mm: Decimal
    ring_index: Decimal
    usual: tuple[tuple[str, str], ...]

    @property
    def centre(self) -> tuple[float, float]:
        """The block's centre from the prism reference point, in mm."""
        return -float(self.prp_right_mm), -float(self.prp_up_mm)


@dataclass(frozen=True, slots=True)
class Angles:
    """One base, four angles in degrees 0 to 360, by what one looks at and from where."""

    lens_from_front: float
    lens_from_back: float
    ring_from_front: float
    ring_from_back: float


@dataclass(frozen=True, slots=True, kw_only=True)
class BlockEdge:
    """Thickness at the block's edge in mm, with the angle from the front where it is so."""

    thinnest_mm: float
    thinnest_deg: float
    thickest_mm: float
    thickest_deg: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Surfaced:
    """One lens on the generator. Prisms in prism dioptres, thicknesses and diameters in mm.

    `ring` is the mark of the ring that gives the prism. `centre_mm` at the prism reference point:
    as given, else `needed_mm`, the least that keeps every minimum inside the rim, due to what
    `governs` (centre, inside, edge or hole); without a frame an estimate, and both None.
    `usual`: what the frame leaves open, with the value taken.
    `edge` is None where a surface does not reach the block's edge.
    """

    blocking: Blocking
    body: BodyValues
    usual: Mapping[str, str]
    prism: Prism
    wedge_deg: float
    angles: Angles | None
    ring: float
    edge: BlockEdge | None
    centre_mm: float
    needed_mm: float | None
    governs: str | None
    blank_needed_mm: float | None
    blank_given_mm: Decimal | None

    @property
    def blank_suffices(self) -> bool | None:
        """Tell whether the blank is large enough; None where that is not known."""
        if self.blank_needed_mm is None or self.blank_given_mm is None:
            return None
        return self.blank_needed_mm <= float(self.blank_given_mm)

    @property
    def thickness_suffices(self) -> bool | None:
        """Tell whether the thickness given keeps every minimum; None where that is not known."""
        if self.needed_mm is None or not self.body.thickness_given:
            return None
        return self.centre_mm >= self.needed_mm - MEASURED_MM

    @property
    def block_edge_suffices(self) -> bool | None:
        """Tell whether the lens keeps its minimum edge out to the block's edge."""
        if self.edge is None:
            return None
        return self.edge.thinnest_mm >= float(self.body.minimum_edge_mm) - MEASURED_MM


def blocking_of(order: EyeOrder) -> Blocking:
    """How one lens is blocked, with usual values where the job says nothing.

    Arguments: `order` of the eye. Returns the Blocking: on the prism reference point, if nothing
    else is said.
    """
    given = order.surfacing or Surfacing()
    usual = []

    def taken(name: str, value: Decimal) -> Decimal:
        found: Decimal | None = getattr(given, name)
        if found is None:
            usual.append((f"{order.eye}.surfacing.{name}", format(value, "f")))
        return value if found is None else found

    return Blocking(
        prp_right_mm=taken("prp_right_mm", Decimal(0)),
        prp_up_mm=taken("prp_up_mm", Decimal(0)),
        block_diameter_mm=taken("block_diameter_mm", USUAL_BLOCK_MM),
        ring_index=taken("ring_index", USUAL_RING_INDEX),
        usual=tuple(usual),
    )


def wedge_degrees(amount: float, index: float) -> float:
    """The angle between both surfaces that makes a prism.

    Arguments: `amount` prism dioptres; `index`. Returns degrees. Source: facts 4.8 and 4.9.

    >>> round(wedge_degrees(1.0, 1.586), 3)
    0.978
    """
    return math.degrees(math.atan(wedge_tangent(amount, index)))


def ring_mark(amount: float, index: float, ring_index: float) -> float:
    """The mark of the prism ring whose wedge gives a prism in another index.

    Arguments: `amount` prism dioptres wanted in `index`; `ring_index` for which rings are marked.
    Returns prism dioptres on the ring. Source: facts 4.10 (from memory), P (m - 1) / (n - 1).

    >>> round(ring_mark(3.0, 1.60, 1.530), 2)
    2.65
    """
    return amount * (ring_index - 1.0) / (index - 1.0)


def angles_of(prism: Prism) -> Angles | None:
    """The four angles of a base, or None for no prism. Arguments: `prism`. Returns degrees.

    Source: facts 4.10: a ring under the front stands with its thick side opposite to the base;
    turned over about the upright, an angle θ is seen at 180 - θ.

    >>> angles_of(Prism(Decimal(0), Decimal("-1.33")))
    Angles(lens_from_front=270.0, lens_from_back=270.0, ring_from_front=90.0, ring_from_back=90.0)
    """
    base_deg = prism.base_deg
    if base_deg is None:
        return None
    return Angles(base_deg, wrap(180.0 - base_deg), wrap(base_deg + 180.0), wrap(360.0 - base_deg))


def surfaced(job: Job, order: EyeOrder, due_: Due, framing: Framing | None) -> Surfaced | None:
    """One lens on the generator, or None without a power.

    Arguments: `job`; `order` and `due_` of the eye; `framing` of its lens, None without a frame.
    Returns the Surfaced lens.
    Source: p + F·c with c the reference point from the block's centre (facts 4.10), the thin
    formula: in thick steep lenses 6 mm away up to 0.5 Δ off; the section `field` has the exact one.
    """
    body = framing.values if framing else body_values(order, job.frame)
    if body is None or due_.power is None:
        return None
    blocking = blocking_of(order)
    prism = prism_at(due_.expected, due_.power, -blocking.prp_right_mm, -blocking.prp_up_mm)
    amount, index = float(prism.amount), float(body.index)
    centre_mm, needed_mm, governs = _thickness(body, framing, due_.expected)
    return Surfaced(
        blocking=blocking,
        body=body,
        usual=_usual_of_frame(framing, job),
        prism=prism,
        wedge_deg=wedge_degrees(amount, index),
        angles=angles_of(prism),
        ring=ring_mark(amount, index, float(blocking.ring_index)),
        edge=block_edge(_solid(body, order, due_), centre_mm, blocking),
        centre_mm=centre_mm,
        needed_mm=needed_mm,
        governs=governs,
        blank_needed_mm=_blank_needed_mm(framing, blocking),
        blank_given_mm=order.lens.blank_diameter_mm,
    )


def _usual_of_frame(framing: Framing | None, job: Job) -> dict[str, str]:
    outline = outline_of(job.frame)
    if framing is None or outline is None:
        return {}
    return {**framing.placed.usual, **dict(outline.assumed)}


def _solid(body: BodyValues, order: EyeOrder, due_: Due) -> Solid:
    progressive = order.lens.design == "progressive"
    return Solid(
        index=float(body.index),
        front_d=body.front_d,
        power=due_.power or Power(Decimal(0)),
        prism_x=float(due_.expected.x),
        prism_y=float(due_.expected.y),
        add=float(due_.add or 0) if progressive else 0.0,
    )


def block_edge(solid: Solid, centre_mm: float, blocking: Blocking) -> BlockEdge | None:
    """Thickness round the block's edge, or None where a surface does not reach it.

    Arguments: `solid`; `centre_mm` at the prism reference point; `blocking`. Returns mm and
    degrees. Source: exact surfaces and wedge, `optics.thickness`.
    """
    x, y = blocking.centre
    radius = float(blocking.block_diameter_mm) / 2.0
    places = [(x + radius * across, y + radius * along) for across, along in _ROUND]
    try:
        found = thicknesses(solid, centre_mm, places)
    except OutsideSurfaceError:
        return None
    thin, thick = min(zip(found, _TURNS, strict=True)), max(zip(found, _TURNS, strict=True))
    return BlockEdge(
        thinnest_mm=thin[0], thinnest_deg=thin[1], thickest_mm=thick[0], thickest_deg=thick[1]
    )


def _thickness(
    body: BodyValues, framing: Framing | None, prism: Prism
) -> tuple[float, float | None, str | None]:
    """Thickness at the reference point; the least that keeps every minimum, and what governs."""
    given_mm = float(body.thickness_mm)
    if framing is None:
        return given_mm, None, None
    try:
        edge = edge_of(replace(framing.lens, centre_mm=None), prism)
    except OutsideSurfaceError:
        return given_mm, None, None
    return given_mm if body.thickness_given else edge.centre_mm, edge.centre_mm, edge.governs


def _blank_needed_mm(framing: Framing | None, blocking: Blocking) -> float | None:
    """The blank that reaches the farthest point of the rim, in mm. Source: facts 4.6."""
    if framing is None:
        return None
    x, y = blocking.centre
    far = max(math.hypot(at_x - x, at_y - y) for at_x, at_y in framing.lens.rim.points)
    return 2.0 * far + ALLOWANCE_MM
