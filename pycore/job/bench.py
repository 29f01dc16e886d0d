"""The bench's instrument and what was read on it, as written down."""

from dataclasses import dataclass
from decimal import Decimal

from pycore.errors import Note
from pycore.job.fields import Fields
from pycore.job.order import Component, read_component, read_components
from pycore.optics.prism import NO_PRISM, Eye, Prism, from_base, total

MAXIMUM_REPEATS = 20
MOST_ON_RINGS = "60"  # prism dioptres; no lens meter's rings reach so far
SENSES = ("lens-prism", "own-base", "none")
TENTH = Decimal("0.1")  # prism dioptres: a nudge of the target, whatever the step
TOWARDS, AWAY = "towards-base", "away-from-base"
PLACES = ("marked-point", "first-lens-set")


@dataclass(frozen=True, slots=True, kw_only=True)
class Uncertainty:
    """One standard uncertainty per quantity of one reading.

    `prism` and `zero` in prism dioptres, `power_d` in dioptres, `axis_deg`, `position_mm`.
    `zero` is common to both lenses. The defaults are common practice and shown as assumed.
    """

    prism: Decimal = Decimal("0.10")
    power_d: Decimal = Decimal("0.04")
    axis_deg: Decimal = Decimal("1.0")
    position_mm: Decimal = Decimal("0.3")
    zero: Decimal = Decimal(0)
    assumed: bool = True


@dataclass(frozen=True, slots=True, kw_only=True)
class Instrument:
    """A lens meter: its rings, its prism compensator, its steps.

    `rings` a count, `ring_step` prism dioptres between rings, `compensator` the sense of its
    scale (None while not yet known), `compensator_maximum` and `prism_step` prism dioptres.
    `target_direction` and `mirrored` say how the target moves, `zero` where it stands with
    nothing in (prism dioptres on the rings), `checked_on` when that was found out.
    The defaults (5 rings, 1 apart, quarter steps, towards the base) are common practice.
    """

    kind: str = "manual"
    rings: Decimal = Decimal(5)
    ring_step: Decimal = Decimal(1)
    compensator: str | None = None
    compensator_maximum: Decimal | None = None
    prism_step: Decimal = Decimal("0.25")
    target: str = "cross"
    target_direction: str = TOWARDS
    mirrored: bool = False
    zero: Prism = NO_PRISM
    checked_on: str | None = None
    uncertainty: Uncertainty = Uncertainty()

    @property
    def outermost_ring(self) -> Decimal:
        """The outermost ring, in prism dioptres."""
        return self.rings * self.ring_step

    @property
    def fine_step(self) -> Decimal:
        """The small step of a nudge, in prism dioptres."""
        return min(self.prism_step, Decimal("0.05"))

    @property
    def signs(self) -> tuple[int, int]:
        """Whether the target goes with (1) or against (-1) the base, across and upwards.

        An automatic lens meter has no target: its numbers name the base.
        """
        if self.kind == "automatic":
            return (1, 1)
        sign = -1 if self.target_direction == AWAY else 1
        return (-sign if self.mirrored else sign, sign)

    def turned(self, prism: Prism) -> Prism:
        """A prism as a shift of the target, or a shift as the prism it means: its own inverse.

        Arguments and return in prism dioptres.

        >>> Instrument(mirrored=True).turned(Prism(Decimal(3), Decimal(1)))
        Prism(x=Decimal('-3'), y=Decimal('1'))
        """
        across, along = self.signs
        return Prism(prism.x * across + 0, prism.y * along + 0)

    def place_of(self, prism: Prism) -> Prism:
        """Where on the rings the target stands for a prism, in prism dioptres.

        >>> meter = Instrument(target_direction="away-from-base",
        ...                    zero=Prism(Decimal("0.1"), Decimal(0)))
        >>> meter.place_of(Prism(Decimal(3), Decimal(-1)))
        Prism(x=Decimal('-2.9'), y=Decimal('1'))
        """
        return self.turned(prism) + self.zero


@dataclass(frozen=True, slots=True, kw_only=True)
class Sighting:
    """One look at one lens: the prism seen on the rings and what the compensator stood at.

    The prism is named by its base, whichever way the target moves on this instrument.
    """

    prism: tuple[Component, ...]
    compensator: Component | None = None

    @property
    def is_read(self) -> bool:
        """Tell whether anything was seen: a compensator may be set before the reading."""
        return bool(self.prism)

    @property
    def seen(self) -> Prism:
        """What is seen on the rings, in prism dioptres, the compensator not taken out."""
        return total(from_base(part.amount, part.base_deg) for part in self.prism)

    def lens_prism(self, instrument: Instrument) -> Prism:
        """The lens's prism in prism dioptres: what is seen, compensator and zero taken out.

        Arguments: `instrument` it was seen on. Source: facts section 5 (from memory).
        """
        taken = taken_by_compensator(self.compensator, instrument.compensator)
        return self.seen + taken - instrument.turned(instrument.zero)


def taken_by_compensator(compensator: Component | None, sense: str | None) -> Prism:
    """What the compensator takes away from the picture, in prism dioptres.

    Arguments: what stands on its scale, or None; `sense` of the scale. Source: facts section 5,
    compensator (from memory).

    >>> setting = Component(amount=Decimal(3), base_deg=Decimal(90))
    >>> taken_by_compensator(setting, "own-base").y
    Decimal('-3')
    """
    if compensator is None or sense not in ("lens-prism", "own-base"):
        return NO_PRISM
    scale = from_base(compensator.amount, compensator.base_deg)
    return scale if sense == "lens-prism" else -scale


@dataclass(frozen=True, slots=True, kw_only=True)
class EyeReading:
    """What was read of one lens: powers in D, axis in degrees, positions in mm.

    `slid_mm` is how far from the marked point of an unmounted lens the expected prism lay.
    """

    sphere: Decimal | None = None
    cylinder: Decimal | None = None
    axis: Decimal | None = None
    add: Decimal | None = None
    add_side: str | None = None
    prism: Sighting | None = None
    compensator: Component | None = None
    repeats: tuple[Sighting, ...] = ()
    prp_height_mm: Decimal | None = None
    pd_mm: Decimal | None = None
    slid_mm: Decimal | None = None

    @property
    def sightings(self) -> tuple[Sighting, ...]:
        """The prism reading with its repeats, the first first."""
        return ((self.prism,) if self.prism else ()) + self.repeats


@dataclass(frozen=True, slots=True, kw_only=True)
class Readings:
    """Everything read of the pair; `at` is None where it was not said."""

    at: str | None = None
    right: EyeReading = EyeReading()
    left: EyeReading = EyeReading()
    prp_distance_mm: Decimal | None = None

    def of(self, eye: Eye) -> EyeReading:
        """The reading of one lens."""
        return self.right if eye == "right" else self.left


def read_instrument(fields: Fields) -> Instrument:
    """Read an instrument object. Arguments: `fields`. Returns the instrument."""
    kind = fields.word("kind", ("manual", "automatic")) or "manual"
    step = Decimal("0.25") if kind == "manual" else Decimal("0.01")
    zero = fields.child("zero")
    instrument = Instrument(
        kind=kind,
        rings=fields.count("rings", "1", "20") or Decimal(5),
        ring_step=fields.number("ring_step", "0.1", "5") or Decimal(1),
        compensator=fields.word("compensator", SENSES),
        compensator_maximum=fields.number("compensator_maximum", "0", "40"),
        prism_step=fields.number("prism_step", "0.01", "1") or step,
        target=fields.word("target", ("cross", "dots")) or "cross",
        target_direction=fields.word("target_direction", (TOWARDS, AWAY)) or TOWARDS,
        mirrored=fields.flag("mirrored"),
        zero=read_place_object(zero) if zero else NO_PRISM,
        checked_on=fields.text("checked_on"),
        uncertainty=_read_uncertainty(fields),
    )
    fields.finish()
    return instrument


def read_place(fields: Fields) -> Prism:
    """A place on the rings: `x` to the right and `y` up of their middle, where nothing is said 0.

    Arguments: `fields` that hold it. Returns prism dioptres.
    """
    low, high = "-" + MOST_ON_RINGS, MOST_ON_RINGS
    x, y = fields.number("x", low, high), fields.number("y", low, high)
    return Prism(x or Decimal(0), y or Decimal(0))


def read_place_object(fields: Fields) -> Prism:
    """A place on the rings that is an object of its own. Arguments and return: `read_place`."""
    place = read_place(fields)
    fields.finish()
    return place


def _read_uncertainty(fields: Fields) -> Uncertainty:
    zero = fields.number("zero_uncertainty", "0", "2")
    inner = fields.child("uncertainty")
    read = {"zero": zero}
    if inner:
        read["prism"] = inner.number("prism", "0.001", "2")
        read["power_d"] = inner.number("power_d", "0.001", "2")
        read["axis_deg"] = inner.number("axis_deg", "0.01", "30")
        read["position_mm"] = inner.number("position_mm", "0.01", "5")
        inner.finish()
    given = {name: value for name, value in read.items() if value is not None}
    return Uncertainty(assumed="prism" not in given, **given)


def _read_compensator(fields: Fields, eye: Eye, sense: str | None) -> Component | None:
    inner = fields.child("compensator")
    setting = read_component(inner, eye) if inner else None
    if setting is None or not setting.amount:
        return None
    if sense is None:
        fields.refuse(
            "compensator-sense-unknown", "compensator", str(setting.amount), "settle-compensator"
        )
    elif sense == "none":
        fields.refuse(
            "compensator-not-there", "compensator", str(setting.amount), "correct-instrument"
        )
    return setting


def _read_sighting(fields: Fields, eye: Eye, sense: str | None) -> Sighting | None:
    prism = read_components(fields, "prism", eye)
    compensator = _read_compensator(fields, eye, sense)
    # An empty list is nothing read; "no prism" is read as an amount of 0.
    return Sighting(prism=prism or (), compensator=compensator) if prism or compensator else None


def read_eye_reading(
    fields: Fields, eye: Eye, instrument: Instrument, notes: list[Note]
) -> EyeReading:
    """Read what was read of one lens.

    Arguments: `fields`; `eye`; `instrument` it was read on; `notes` to add to.
    Returns the reading.
    """
    first = _read_sighting(fields, eye, instrument.compensator)
    repeats = []
    for item in fields.children("repeats", MAXIMUM_REPEATS):
        again = _read_sighting(item, eye, instrument.compensator)
        item.finish()
        if again and again.is_read:
            repeats.append(again)
    axis = fields.number("axis", "0", "180")
    if axis == 0:
        notes.append(Note(code="axis-zero", field=fields.at("axis"), about="reading"))
        axis = Decimal(180)
    reading = EyeReading(
        sphere=fields.power("sphere"),
        cylinder=fields.power("cylinder", "20"),
        axis=axis,
        add=fields.number("add", "0", "12"),
        add_side=fields.word("add_side", ("front", "back")),
        prism=first if first and first.is_read else None,
        compensator=first.compensator if first else None,
        repeats=tuple(repeats),
        prp_height_mm=fields.number("prp_height_mm", "0", "80"),
        pd_mm=fields.number("pd_mm", "15", "50"),
        slid_mm=fields.number("slid_mm", "0", "40"),
    )
    fields.finish()
    return reading


def read_readings(fields: Fields, instrument: Instrument, notes: list[Note]) -> Readings:
    """Read the readings object. Arguments as `read_eye_reading`. Returns the readings."""
    right, left = fields.child("right"), fields.child("left")
    readings = Readings(
        at=fields.word("at", PLACES),
        right=read_eye_reading(right, "right", instrument, notes) if right else EyeReading(),
        left=read_eye_reading(left, "left", instrument, notes) if left else EyeReading(),
        prp_distance_mm=fields.number("prp_distance_mm", "30", "100"),
    )
    fields.finish()
    return readings
