"""How does this lens meter's target move, what does its compensator's scale mean, how well does
it read? Settled from a known prism, by looks that a person makes in a minute.

The prism is shown with an oblique base: at 0 or 90 degrees a left-right mirror cannot be seen.
With nothing in, the target stands at the zero. With the prism in, it has moved along one of four
ways: towards the base or away from it, each with left and right as they are or changed over.
What then stands on the compensator's scale, once the target is back, is the prism itself or its
opposite. Readings of the prism laid back afresh say how well one reading can be trusted.
Source: the geometry of vectors (ISO 8429 for the angles); the figures below are common practice.
"""

from collections.abc import Iterator
from dataclasses import dataclass, field
from decimal import ROUND_HALF_EVEN, Decimal

from pycore.angles import direction, wrap
from pycore.bench.repeats import ENOUGH, pooled_scatter, uncertainty_of_one
from pycore.job.bench import AWAY, TOWARDS, Instrument
from pycore.optics.prism import NO_PRISM, Prism, from_base

SUGGESTED_BASE_DEG = Decimal(40)
OBLIQUE_DEG = 25.0  # at least so far from 0, 90, 180 and 270
NEAR_DEG = 20.0  # so far a prism laid by hand may be turned
# So far two amounts may differ: up to half a prism dioptre, where that is no great part of both.
NEAR, LEAST_SHARE, MOST_SHARE = Decimal("0.5"), Decimal("0.15"), Decimal("0.35")
LEAST_STEPS = 4  # of the instrument's, that the known prism must make
MOST_SCATTER = 0.5  # Δ, of one reading
WAYS = ((TOWARDS, False), (TOWARDS, True), (AWAY, False), (AWAY, True))


@dataclass(frozen=True, slots=True, kw_only=True)
class Looks:
    """What was seen. Places on the rings to the right and up, amounts in prism dioptres, bases in
    degrees; None or empty where not yet looked.

    `zero` where the target stood with nothing in, `seen` where with the known prism (its base at
    `base_deg`), laid back afresh each time; `scale` what stood on the compensator's scale with
    the target back (amount and base), `compensator` false where there is none.
    """

    zero: Prism | None = None
    amount: Decimal | None = None
    base_deg: Decimal | None = None
    seen: tuple[Prism, ...] = ()
    scale: tuple[Decimal, Decimal] | None = None
    compensator: bool = True

    @property
    def prism(self) -> Prism | None:
        """The known prism, or None where it is not wholly given."""
        if self.amount is None or self.base_deg is None:
            return None
        return from_base(self.amount, self.base_deg)


@dataclass(frozen=True, slots=True, kw_only=True)
class Found:
    """What the looks settle: each None while it is open. Prism dioptres.

    `wrong` are the codes of what cannot be, each about one look; `next` the look that comes next
    (zero, known, scale, again, done).
    """

    next: str
    way: tuple[str, bool] | None = None
    zero: Prism | None = None
    compensator: str | None = None
    uncertainty: float | None = None
    moved: Prism | None = None
    wrong: tuple[str, ...] = field(default=())

    @property
    def settled(self) -> bool:
        """Tell whether the instrument may be used by what was found."""
        return not self.wrong and None not in (self.way, self.zero, self.compensator)


def suggested_amount(instrument: Instrument) -> Decimal:
    """The amount of a good known prism: six tenths of the rings, to a half, in prism dioptres.

    Far enough out to be seen clearly, and well inside the rings. Common practice.

    >>> suggested_amount(Instrument())
    Decimal('3.0')
    """
    half = Decimal("0.5")
    reach = instrument.outermost_ring * Decimal("0.6")
    return max(half, (reach / half).quantize(Decimal(1), ROUND_HALF_EVEN) * half)


def check(looks: Looks, instrument: Instrument) -> Found:
    """Settle what can be settled. Arguments: `looks`; `instrument` for its rings and step.

    >>> looks = Looks(zero=NO_PRISM, amount=Decimal(3), base_deg=Decimal(40),
    ...               seen=(Prism(Decimal("-2.25"), Decimal(2)),),
    ...               scale=(Decimal(3), Decimal(220)))
    >>> found = check(looks, Instrument())
    >>> found.way, found.compensator, found.next
    (('towards-base', True), 'own-base', 'again')
    """
    wrong = [*_wrong_setting(looks, instrument)]
    moved = _mean(looks.seen) - (looks.zero or NO_PRISM) if looks.seen else None
    way = None
    if looks.prism and moved and not wrong:
        way, why = _way(looks.prism, moved)
        wrong += why
    compensator = None if looks.compensator else "none"
    if looks.prism and looks.scale:
        compensator, why = _sense(looks.prism, from_base(*looks.scale))
        wrong += why
    uncertainty = None
    if len(looks.seen) >= ENOUGH:
        uncertainty = uncertainty_of_one(looks.seen, instrument.prism_step)
        if pooled_scatter(looks.seen) > MOST_SCATTER:
            wrong.append("scatter")
    return Found(
        next=_next(looks),
        way=way,
        zero=looks.zero,
        compensator=compensator,
        uncertainty=uncertainty,
        moved=moved,
        wrong=tuple(wrong),
    )


def _next(looks: Looks) -> str:
    if looks.zero is None:
        return "zero"
    if looks.prism is None or not looks.seen:
        return "known"
    if looks.compensator and looks.scale is None:
        return "scale"
    return "again" if len(looks.seen) < ENOUGH else "done"


def _wrong_setting(looks: Looks, instrument: Instrument) -> Iterator[str]:
    """What would make the looks useless, whatever they show."""
    if looks.zero and looks.zero.amount > instrument.ring_step:
        yield "zero-far"
    if looks.base_deg is not None:
        beside = wrap(float(looks.base_deg), 90.0)
        if not OBLIQUE_DEG <= beside <= 90.0 - OBLIQUE_DEG:
            yield "base-straight"
    if looks.amount is not None:
        if looks.amount < LEAST_STEPS * instrument.prism_step:
            yield "prism-weak"
        if looks.amount > instrument.outermost_ring:
            yield "prism-off-rings"


def _mean(places: tuple[Prism, ...]) -> Prism:
    count = Decimal(len(places))
    return Prism(
        sum((place.x for place in places), Decimal(0)) / count,
        sum((place.y for place in places), Decimal(0)) / count,
    )


def _way(prism: Prism, moved: Prism) -> tuple[tuple[str, bool] | None, list[str]]:
    """Which of the four ways the target went, or what is wrong with each."""
    if not _same_amount(moved, prism):
        return None, ["known-amount"]
    for way in WAYS:
        meter = Instrument(target_direction=way[0], mirrored=way[1])
        if _apart_deg(moved, meter.turned(prism)) <= NEAR_DEG:
            return way, []
    return None, ["known-direction"]


def _sense(prism: Prism, scale: Prism) -> tuple[str | None, list[str]]:
    """What the compensator's scale means, or what is wrong with it."""
    if not _same_amount(scale, prism):
        return None, ["scale-amount"]
    for sense, meant in (("lens-prism", prism), ("own-base", -prism)):
        if _apart_deg(scale, meant) <= NEAR_DEG:
            return sense, []
    mirror = Instrument(mirrored=True).turned(prism)
    changed_over = min(_apart_deg(scale, mirror), _apart_deg(scale, -mirror)) <= NEAR_DEG
    return None, ["scale-changed-over" if changed_over else "scale-direction"]


def _same_amount(one: Prism, other: Prism) -> bool:
    allowed = max(LEAST_SHARE * other.amount, min(NEAR, MOST_SHARE * other.amount))
    return abs(one.amount - other.amount) <= allowed


def _apart_deg(one: Prism, other: Prism) -> float:
    """The angle between two prisms of like amount, neither of them none, in degrees."""
    first, second = (direction(float(prism.x), float(prism.y)) for prism in (one, other))
    turn = wrap(first - second)
    return min(turn, 360.0 - turn)
