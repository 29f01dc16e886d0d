"""What is the lens made of and how thick may it be? The usual figure where nobody said.

One place for every section: the index, the front curve, the thickness, the minimum thicknesses
and the density, each as written in the job or else the usual value, which is named in `usual`
so that it is asked for where it is used and never taken silently.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Decimal
from functools import lru_cache

from pycore.job.body import Frame
from pycore.job.order import EyeOrder
from pycore.optics.material import usual_material
from pycore.optics.power import Power
from pycore.optics.surface import true_front_d

USUAL_INDEX = Decimal("1.498")
LOW_INDEX = Decimal("1.52")  # below it the softer material wants the thicker centre
QUARTER = Decimal("0.25")
FLATTEST_CURVE, STEEPEST_CURVE = Decimal("0.5"), Decimal("12")
USUAL_EDGE_MM = Decimal("1.5")
USUAL_HOLE_MM = Decimal("2.0")
USUAL_RADIUS_MM = Decimal(27)


@dataclass(frozen=True, slots=True, kw_only=True)
class BodyValues:
    """One lens as a body. Curves in dioptres as marked for `curve_index`, thicknesses in mm.

    `thickness_mm` at the prism reference point, given or estimated (`thickness_given`);
    `usual` maps the field of the job nobody filled to the text of the value taken instead.
    """

    index: Decimal
    front_curve: Decimal
    curve_index: Decimal
    abbe: Decimal | None
    density_g_cm3: Decimal | None
    thickness_mm: Decimal
    thickness_given: bool
    minimum_centre_mm: Decimal
    minimum_edge_mm: Decimal
    minimum_hole_mm: Decimal
    usual: Mapping[str, str]

    @property
    def front_d(self) -> float:
        """The true power of the front surface in dioptres."""
        return true_front_d(float(self.front_curve), float(self.curve_index), float(self.index))


def usual_front_curve(power: Power) -> Decimal:
    """The front curve usual for a power, in dioptres as marked, to the quarter.

    Arguments: `power`. Returns dioptres. Plus: the mean power + 6; minus: half of it + 6.
    Source: Vogel's rule, from memory (facts section 6); a maker's chart goes before it.

    >>> usual_front_curve(Power(Decimal("2.00"))), usual_front_curve(Power(Decimal("-5.00")))
    (Decimal('8.00'), Decimal('3.50'))
    """
    mean = power.sphere + power.cylinder / 2
    curve = (mean if mean > 0 else mean / 2) + 6
    rounded = (curve / QUARTER).quantize(Decimal(1), ROUND_HALF_EVEN) * QUARTER
    return min(max(rounded, FLATTEST_CURVE), STEEPEST_CURVE)


def usual_minimum_centre_mm(index: Decimal) -> Decimal:
    """The least centre thickness usual for an index, in mm; the careful end of the range.

    Arguments: `index`. Source: shop practice, from memory (facts section 6): 2.0 mm for 1.498,
    1.0 to 1.5 mm for 1.53 to 1.74.

    >>> usual_minimum_centre_mm(Decimal("1.60"))
    Decimal('1.5')
    """
    return Decimal("2.0") if index < LOW_INDEX else Decimal("1.5")


@lru_cache(maxsize=8)
def body_values(order: EyeOrder, frame: Frame) -> BodyValues | None:
    """One lens's body from the order, with usual values where it says nothing.

    Arguments: `order` of the eye; `frame`. Returns the values, or None without a power. (A pure
    function, kept because most sections ask the same.)
    """
    power = order.verified.power
    if power is None:
        return None
    lens, usual = order.lens, dict[str, str]()

    def taken(name: str, given: Decimal | None, value: Decimal) -> Decimal:
        if given is not None:
            return given
        usual[f"lens.{name}"] = format(value, "f")
        return value

    index = taken("index", lens.index, USUAL_INDEX)
    material = usual_material(index)
    centre_mm = taken("minimum_centre_mm", lens.minimum_centre_mm, usual_minimum_centre_mm(index))
    edge_mm = taken("minimum_edge_mm", lens.minimum_edge_mm, USUAL_EDGE_MM)
    density, abbe = lens.density_g_cm3, lens.abbe
    if material:
        density = taken("density_g_cm3", density, material.density_g_cm3)
        abbe = taken("abbe", abbe, material.abbe)
    estimate = _estimated_thickness_mm(order, power, index, centre_mm, edge_mm, frame)
    return BodyValues(
        index=index,
        front_curve=taken("front_curve", lens.front_curve, usual_front_curve(power)),
        curve_index=lens.curve_index,
        abbe=abbe,
        density_g_cm3=density,
        thickness_mm=taken("centre_thickness_mm", lens.centre_thickness_mm, estimate),
        thickness_given=lens.centre_thickness_mm is not None,
        minimum_centre_mm=centre_mm,
        minimum_edge_mm=edge_mm,
        minimum_hole_mm=max(edge_mm, USUAL_HOLE_MM),
        usual=usual,
    )


def _estimated_thickness_mm(
    order: EyeOrder,
    power: Power,
    index: Decimal,
    centre_mm: Decimal,
    edge_mm: Decimal,
    frame: Frame,
) -> Decimal:
    """Centre thickness of a lens that just keeps both minima, by the parabola and the thin wedge:
    an estimate for where the thickness hardly matters. The section `edge` works it out."""
    radius_mm = frame.ed_mm / 2 if frame.ed_mm else USUAL_RADIUS_MM
    strongest_plus = max(power.principal)
    rise_mm = strongest_plus * radius_mm * radius_mm / (2000 * (index - 1))
    wedge_mm = order.verified.prism_total.amount * radius_mm / (100 * (index - 1))
    return max(centre_mm, edge_mm + rise_mm + wedge_mm).quantize(Decimal("0.1"), ROUND_HALF_EVEN)
