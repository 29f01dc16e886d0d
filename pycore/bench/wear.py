"""What does the eye get from the lens as it is worn, and which lens gives the prescription?

Pantoscopic tilt, wrap and both vertex distances. The power goes by the tilted-lens matrix (beside
it a pencil of rays through the real lens), the prism by tracing the lens with its prism through
the front pole. Prism thinning is in the lens
when it is traced and is left out of both answers again, so that they stand beside the order.
Front and vertex distances are the wearer's; what nobody measured is asked for.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal

from pycore.bench.body import BodyValues
from pycore.decimals import from_float
from pycore.job.body import Wear
from pycore.optics.pencil import back_of_read_power, pencil_as_worn
from pycore.optics.power import Power
from pycore.optics.prism import Eye, Prism
from pycore.optics.tilt import (
    Tilt,
    Vector,
    moved,
    power_as_worn,
    power_of,
    power_to_order,
    thin_prism_as_worn,
    tilt_of,
)
from pycore.optics.tilt_trace import Glass, prism_as_worn, prism_to_order

NO_TILT = "0"  # what an angle beside a measured one is taken for, visibly


@dataclass(frozen=True, slots=True, kw_only=True)
class Fit:
    """How the frame sits: tilts in degrees, vertex distances in mm.

    `usual` maps each field nobody filled to the text of the value taken instead.
    """

    pantoscopic_deg: float
    wrap_deg: float
    tested_mm: float
    worn_mm: float
    usual: Mapping[str, str]


@dataclass(frozen=True, slots=True, kw_only=True)
class Act:
    """What a lens is or gives: power in dioptres, prism in prism dioptres."""

    power: Power
    prism: Prism


def fit_of(wear: Wear) -> Fit | None:
    """How the frame sits, or None where nobody measured anything of it.

    Arguments: `wear`. Returns the Fit. A tilt missing beside a measured figure counts as none,
    a missing vertex distance as equal to the other one: both leave the lens alone.

    >>> fit = fit_of(Wear(wrap_deg=Decimal(15)))
    >>> fit.pantoscopic_deg, fit.usual["wear.pantoscopic_deg"]
    (0.0, '0')
    """
    tilts = {"pantoscopic_deg": wear.pantoscopic_deg, "wrap_deg": wear.wrap_deg}
    distances = {"vertex_tested_mm": wear.vertex_tested_mm, "vertex_worn_mm": wear.vertex_worn_mm}
    measured = [value for value in (*tilts.values(), *distances.values()) if value is not None]
    if not measured:
        return None
    usual = {f"wear.{name}": NO_TILT for name, value in tilts.items() if value is None}
    known = next((value for value in distances.values() if value is not None), Decimal(0))
    for name, value in distances.items():
        if value is None and known:
            usual[f"wear.{name}"] = format(known, "f")
    return Fit(
        pantoscopic_deg=float(tilts["pantoscopic_deg"] or 0),
        wrap_deg=float(tilts["wrap_deg"] or 0),
        tested_mm=float(known if wear.vertex_tested_mm is None else wear.vertex_tested_mm),
        worn_mm=float(known if wear.vertex_worn_mm is None else wear.vertex_worn_mm),
        usual=usual,
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class Worn:
    """One lens before one eye: its tilt, what it is made of, its thinning, how it sits.

    `farther_mm`: how much farther from the eye it is worn than the power was tested.
    """

    eye: Eye
    tilt: Tilt
    glass: Glass
    thinning: Vector
    farther_mm: float

    def effect_of(self, lens: Act) -> Act:
        """What the eye gets from a lens, as at the distance at which it was tested.

        Arguments: `lens` as a lens meter shows it, without thinning. Returns its effect, without
        thinning, with a cylinder of the lens's sign. Raises BeyondError.
        Source: facts 4.15, 4.15b, 4.15c; both vertex distances by vergence.
        """
        prism = _plus(_pair(lens.prism), self.thinning)
        traced = prism_as_worn(self.glass.back(lens.power), prism, self.glass, self.tilt)
        worn = power_as_worn(lens.power.matrix(), self.tilt, self.glass.index)
        power, seen = moved(worn, traced, -self.farther_mm)
        return Act(power=power_of(power, _sign(lens.power)), prism=self._without_thinning(seen))

    def pencil_power(self, lens: Act) -> Power:
        """The power the eye gets from a lens by a narrow pencil through its thickness and prism.

        Arguments: `lens` as a lens meter shows it, without thinning. Returns dioptres, as at the
        distance at which it was tested, with a cylinder of the lens's sign. Raises BeyondError.
        Source: `optics.pencil`.
        """
        prism = _plus(_pair(lens.prism), self.thinning)
        back = back_of_read_power(lens.power, prism, self.glass)
        worn = pencil_as_worn(back, prism, self.glass, self.tilt)
        power, _ = moved(worn, prism, -self.farther_mm)
        return power_of(power, _sign(lens.power))

    def lens_for(self, wanted: Act) -> Act:
        """The lens that gives the eye what is wanted: `effect_of` turned round.

        Arguments: `wanted` effect, without thinning. Returns the lens to order or to expect on
        the lens meter, without thinning. Raises BeyondError. Source: as `effect_of`.
        """
        prism = _plus(_pair(wanted.prism), self.thinning)
        worn, seen = moved(wanted.power.matrix(), prism, self.farther_mm)
        matrix = power_to_order(worn, self.tilt, self.glass.index)
        power = power_of(matrix, _sign(wanted.power))
        traced = prism_to_order(self.glass.back(power), seen, self.glass, self.tilt)
        return Act(power=power, prism=self._without_thinning(traced))

    def classical_prism(self, lens: Act) -> Prism:
        """The prism as worn by the small-tilt formulas, g·T·p and 100·tan α·(t/n)·(-F2).

        Arguments: `lens`. Returns prism dioptres, without thinning, at the distance of wear.
        A check of the trace: good to about 0.2 Δ at 5 Δ and 15 degrees. Source: facts 4.15c
        and 4.16 (front pole).
        """
        across, along, ahead = self.tilt.light()
        shift_cm = self.glass.thickness_mm / 10.0 / self.glass.index / -ahead
        xx, xy, yy = lens.power.matrix()
        front_d = self.glass.front_d
        x_cm, y_cm = shift_cm * across, shift_cm * along
        tilted = (
            (front_d - xx) * x_cm - xy * y_cm,
            (front_d - yy) * y_cm - xy * x_cm,
        )
        prism = _plus(_pair(lens.prism), self.thinning)
        return self._without_thinning(
            thin_prism_as_worn(_plus(prism, tilted), self.tilt, self.glass.index)
        )

    def _without_thinning(self, prism: Vector) -> Prism:
        return Prism(
            from_float(prism[0] - self.thinning[0]), from_float(prism[1] - self.thinning[1])
        )


def worn_lens(eye: Eye, body: BodyValues, thinning: Prism, fit: Fit) -> Worn:
    """One lens as worn. Arguments: `eye`; `body` of the lens; `thinning`; `fit` of the frame.

    Returns the Worn lens.
    """
    return Worn(
        eye=eye,
        tilt=tilt_of(eye, fit.pantoscopic_deg, fit.wrap_deg),
        glass=Glass(
            index=float(body.index),
            front_d=body.front_d,
            thickness_mm=float(body.thickness_mm),
        ),
        thinning=_pair(thinning),
        farther_mm=fit.worn_mm - fit.tested_mm,
    )


def power_difference(first: Power, second: Power) -> Decimal:
    """The largest difference of two powers along any meridian, in dioptres, never negative.

    >>> power_difference(Power(Decimal(-3)), Power(Decimal("-3.25"), Decimal("0.25"), Decimal(90)))
    Decimal('0.250000000000')
    """
    differences = [a - b for a, b in zip(first.matrix(), second.matrix(), strict=True)]
    return power_of((differences[0], differences[1], differences[2])).strongest


def _pair(prism: Prism) -> Vector:
    return float(prism.x), float(prism.y)


def _plus(first: Vector, second: Vector) -> Vector:
    return first[0] + second[0], first[1] + second[1]


def _sign(power: Power) -> int:
    return 1 if power.cylinder > 0 else -1
