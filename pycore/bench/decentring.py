"""Can moving a finished lens give the prism, and how large must the blank be?

Moving the optical centre to c from the point gives the prism p = F c there; so c = F⁻¹ p. Along a
meridian without power no move gives any prism; along a weak one the move is long and the prism
hangs on the last hundredth of the power.
"""

from dataclasses import dataclass
from decimal import Decimal

from pycore.angles import cosine, sine
from pycore.bench.expected import Due
from pycore.bench.layout import Spot
from pycore.bench.outline import Outline
from pycore.decimals import from_float, snap
from pycore.job.body import SEGMENTED
from pycore.job.order import EyeOrder
from pycore.optics.power import Power
from pycore.optics.prism import Eye, Prism

ALLOWANCE_MM = 2.0  # for edging, on the diameter (facts 4.6; one course leaves it out)
LARGEST_BLANK_MM = Decimal(80)  # usual largest finished blank, from memory (facts section 6)
WEAK_D = 1.0  # facts 4.3: ill-conditioned below about 1 D
NO_PRISM_LEFT = 1e-6  # prism dioptres along a meridian that count as none


@dataclass(frozen=True, slots=True, kw_only=True)
class Weak:
    """A principal meridian with too little power for the prism along it.

    `meridian_deg`; `power_d` dioptres; `prism` prism dioptres along it; `move_mm`, None where
    the power is zero.
    """

    meridian_deg: float
    power_d: float
    prism: float
    move_mm: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Decentring:
    """Whether a finished lens can be moved for its prism.

    `centre`: its optical centre from the prism reference point in mm, None where there is none;
    `refused`: a code of why it must be ground (`progressive`, `aspheric`, `segmented`,
    `thinning-unknown`, `singular`), "" where moving gives the prism; `needed`: there is prism
    or may be; `weak`: meridians that make it doubtful or impossible.
    """

    centre: Spot | None
    refused: str
    needed: bool
    weak: tuple[Weak, ...]


def decentring_of(order: EyeOrder, due: Due) -> Decentring | None:
    """Can the prism due be had by moving a finished lens? None where the power is not known.

    Arguments: `order`; `due` of the same eye. Returns the Decentring. Source: c = F⁻¹ p,
    AJOPO 1976;53:27-33 and facts 4.3; progressive and aspheric lenses: their power varies, so no
    move gives a known prism (facts 4.3); segmented: the segment would move along (common practice).
    """
    if due.power is None:
        return None
    needed = bool(snap(due.expected.amount)) or not due.vertical_known
    centre, weak = optical_centre(due.expected, due.power)
    refused = _refused_by_design(order, due)
    if refused in ("progressive", "aspheric", "thinning-unknown"):
        return Decentring(centre=None, refused=refused, needed=needed, weak=())
    if centre is None:
        refused = refused or "singular"
    return Decentring(centre=centre, refused=refused if needed else "", needed=needed, weak=weak)


def _refused_by_design(order: EyeOrder, due: Due) -> str:
    if order.lens.design == "progressive":
        return "progressive"
    if order.lens.aspheric:
        return "aspheric"
    if not due.vertical_known:
        return "thinning-unknown"
    return "segmented" if order.lens.design in SEGMENTED else ""


def optical_centre(prism: Prism, power: Power) -> tuple[Spot | None, tuple[Weak, ...]]:
    """Where the optical centre lies from a point with a prism, and which meridians are weak.

    Arguments: `prism` prism dioptres; `power`. Returns the centre in mm, or None where a meridian
    with prism along it has no power, and the weak meridians. Meridian by meridian, which is
    F⁻¹ p, and says which meridian fails; where one has neither power nor prism, the nearest
    centre is taken. Source: facts 4.3.

    >>> optical_centre(Prism(Decimal(2), Decimal(0)), Power(Decimal(4)))[0].right_mm
    Decimal('5.000000000000')
    """
    axis_deg = float(power.axis)
    right_mm, up_mm, possible = 0.0, 0.0, True
    weak = []
    for meridian_deg, part_d in zip((axis_deg, axis_deg + 90.0), power.principal, strict=True):
        x, y, power_d = cosine(meridian_deg), sine(meridian_deg), float(part_d)
        along = float(prism.x) * x + float(prism.y) * y
        if abs(along) < NO_PRISM_LEFT:
            continue
        move_mm = 10.0 * along / power_d if power_d else None
        if abs(power_d) < WEAK_D:
            weak.append(
                Weak(
                    meridian_deg=meridian_deg % 180.0,
                    power_d=power_d,
                    prism=along,
                    move_mm=move_mm,
                )
            )
        if move_mm is None:
            possible = False
        else:
            right_mm, up_mm = right_mm + move_mm * x, up_mm + move_mm * y
    centre = Spot(from_float(right_mm), from_float(up_mm)) if possible else None
    return centre, tuple(weak)


def way_of(moving: Decentring, smallest_mm: float | None, blank_mm: Decimal | None) -> str:
    """How the prism is got: a code.

    Arguments: `moving`; `smallest_mm` blank that the moved lens needs, None where the frame is
    not known; `blank_mm` the blank there is, None for the usual largest. Returns `none` (no
    prism), `move`, `move-unchecked`, or `ground-` and why.
    """
    if not moving.needed:
        return "none"
    if moving.refused:
        return f"ground-{moving.refused}"
    if smallest_mm is None:
        return "move-unchecked"
    largest_mm = float(blank_mm or LARGEST_BLANK_MM)
    return "move" if smallest_mm <= largest_mm + 1e-9 else "ground-blank"


@dataclass(frozen=True, slots=True, kw_only=True)
class Blank:
    """The smallest round blank around one centre, in mm: by the rule, and for the rim itself.

    `centre` from the boxing centre; `by_rule_mm`, `for_rim_mm` None where the frame is not known.
    """

    centre: Spot
    by_rule_mm: float | None
    for_rim_mm: float | None


def blank_of(rim: Outline | None, ed_mm: float | None, eye: Eye, centre: Spot) -> Blank:
    """The smallest blank of one lens.

    Arguments: `rim`; `ed_mm` effective diameter; `eye`; `centre` of the blank (of a finished
    lens: its optical centre) from the boxing centre. Returns the Blank. Source: facts 4.6.
    """
    return Blank(
        centre=centre,
        by_rule_mm=None if ed_mm is None else smallest_blank(ed_mm, centre),
        for_rim_mm=None if rim is None else smallest_blank_for(rim, eye, centre),
    )


def smallest_blank(ed_mm: float, centre: Spot) -> float:
    """The smallest round blank by the rule: ED + 2 · distance + 2.

    Arguments: `ed_mm` effective diameter; `centre` from the boxing centre. Returns mm.
    Source: facts 4.6, common practice.

    >>> smallest_blank(54.0, Spot(Decimal(6), Decimal(0)))
    68.0
    """
    return ed_mm + 2.0 * length_mm(centre) + ALLOWANCE_MM


def smallest_blank_for(rim: Outline, eye: Eye, centre: Spot) -> float:
    """The smallest round blank for the rim itself: twice its farthest point, and 2 mm.

    Arguments: `rim`; `eye`; `centre` from the boxing centre. Returns mm. Source: facts 4.6.
    """
    x, y = float(centre.right_mm), float(centre.up_mm)
    farthest = max((right - x) ** 2 + (up - y) ** 2 for right, up in rim.points(eye))
    return float(2.0 * farthest**0.5 + ALLOWANCE_MM)


def length_mm(spot: Spot) -> float:
    """How far a point lies from where its place counts from, in mm."""
    return float((spot.right_mm**2 + spot.up_mm**2).sqrt())
