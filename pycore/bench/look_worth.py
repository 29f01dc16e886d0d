"""The further looks that can be taken at this job, and what each is worth now."""

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from operator import mul

from pycore.bench.cause_bench import Bench
from pycore.bench.cause_lens import Held, Lens
from pycore.bench.cause_rank import Label, Ranked
from pycore.bench.cause_weighing import Weighing
from pycore.bench.look import LookTable, Row, codes_of, information, look_tables
from pycore.bench.look_number import Mixture, Part, information_of_number
from pycore.job.document import Job
from pycore.job.looks import OF_THE_PAIR
from pycore.optics.prism import EYES, Eye

LEAST_CYLINDER = 0.25  # dioptres; below, an axis tells nothing
LEAST_PRISM = 1.0  # prism dioptres; below, an edge tells nothing
WORTH_COUNTING = 1e-3  # a number's information counts causes from this probability on
QUARTER_TURN = 90.0
LEAST_BITS = 0.05  # a look expected to tell less is not worth taking


@dataclass(frozen=True, slots=True)
class Offer:
    """A look that can be taken: at one lens, or (`eye` None) at the bench or the pair."""

    table: LookTable
    eye: Eye | None

    def row(self, label: Label) -> Row:
        """How probable each result is if `label` is what happened."""
        return self.table.row(codes_of(label, self.eye))


@dataclass(frozen=True, slots=True)
class Worth:
    """What a look is expected to tell about what happened, in `bits`."""

    offer: Offer
    bits: float


def offers(job: Job, bench: Bench) -> list[Offer]:
    """The looks that can be taken and were not yet. Arguments: `job`; `bench`."""
    taken = {(look.look, None if look.look in OF_THE_PAIR else look.eye) for look in job.looks}
    found: list[Offer] = []
    for code, table in look_tables().items():
        eyes: tuple[Eye | None, ...] = (None,) if code in OF_THE_PAIR else tuple(bench.gauges)
        found += [
            Offer(table, eye)
            for eye in eyes
            if (code, eye) not in taken and _can_be_taken(code, eye, job, bench)
        ]
    return found


def _can_be_taken(code: str, eye: Eye | None, job: Job, bench: Bench) -> bool:
    if code == "engraving":
        return len(bench.held) == len(EYES)
    if code == "meter-key":
        return job.instrument.kind == "automatic"
    if code == "compensator-scale":
        return any(one.site.taken for one in bench.held.values())
    if code == "measure-place":
        return job.state != "uncut"
    if eye is None:
        return True
    one = bench.held[eye]
    if code == "read-axis":
        return one.seen.power is None and _cylinder(one.due) >= LEAST_CYLINDER
    if code == "edge-thickness":
        return math.hypot(one.due.px, one.due.py) >= LEAST_PRISM
    if code == "reread-upright":
        return one.seen.prism is not None
    return True


def worths(job: Job, weighing: Weighing) -> list[Worth]:
    """What each look is expected to tell about what happened, the most telling first.

    Arguments: `job`; `weighing` of its causes. Returns the looks with their information.
    """
    found = [
        Worth(offer, _bits(offer, weighing.bench, _causes(weighing)))
        for offer in offers(job, weighing.bench)
    ]
    return sorted(found, key=lambda worth: -worth.bits)


def group_bits(offer: Offer, weighing: Weighing) -> float:
    """What a look tells about which group it is, in bits; the rest of what it is worth tells the
    causes of one group apart. Arguments: `offer`; `weighing`."""
    probable = {one.label: one for one in weighing.ranking.causes}
    groups = [
        [(share, probable[label]) for label, share in zip(group.labels, group.shares, strict=True)]
        for group in weighing.ranking.groups
    ]
    return _bits(offer, weighing.bench, groups)


Case = Sequence[tuple[float, Ranked]]  # causes with their probabilities that count as one


def _causes(weighing: Weighing) -> list[Case]:
    return [[(one.probability, one)] for one in weighing.ranking.causes if one.probability]


def _bits(offer: Offer, bench: Bench, cases: Sequence[Case]) -> float:
    """The information of a look's result about which of `cases` holds."""
    if offer.table.code == "read-axis":
        return _bits_of_axis(offer, bench, cases)
    merged: dict[Row, float] = {}  # which of those with equal results it is, no result tells
    for case in cases:
        whole = sum([share for share, _ in case])
        row = _mixed([(share / whole, offer.row(one.label)) for share, one in case])
        merged[row] = merged.get(row, 0.0) + whole
    if offer.table.code == "reread-upright":
        return _bits_of_rereading(offer, bench, merged)
    return information(list(merged.values()), list(merged))


def _mixed(rows: Sequence[tuple[float, Row]]) -> Row:
    if len(rows) == 1:
        return rows[0][1]
    columns = zip(*[row for _, row in rows], strict=True)
    shares = [share for share, _ in rows]
    return tuple([sum(map(mul, shares, column)) for column in columns])


def _bits_of_rereading(offer: Offer, bench: Bench, cases: Mapping[Row, float]) -> float:
    """The reading again, as a number: how far along from what is due to what was read."""
    assert offer.eye is not None
    one = bench.held[offer.eye]
    assert one.seen.prism is not None  # else it is not offered
    (x, y), (due_x, due_y) = one.seen.prism, one.due.prism
    off = math.hypot(x - due_x, y - due_y)
    again = (off, math.sqrt(2.0 * (one.seen.prism_var - one.seen.laboratory_var)))
    as_due = (0.0, math.sqrt(one.seen.prism_var))
    other = (off / 2.0, off / 2.0 + 0.5)
    outcomes = (again, as_due, other)
    mixtures = [
        tuple([Part(share, *where) for share, where in zip(row, outcomes, strict=True)])
        for row in cases
    ]
    return information_of_number(list(cases.values()), mixtures)


def _bits_of_axis(offer: Offer, bench: Bench, cases: Sequence[Case]) -> float:
    """The axis, as a number; of causes that are not worth counting none is asked."""
    assert offer.eye is not None
    merged: dict[Mixture, float] = {}
    for case in cases:
        worthy = [(share, one) for share, one in case if one.probability >= WORTH_COUNTING]
        whole = sum([share for share, _ in worthy])
        parts = [
            part._replace(share=part.share * share / whole)
            for share, one in worthy
            for part in axis_mixture(bench, offer.eye, one)
        ]
        if parts:
            mixture = tuple(parts)
            merged[mixture] = merged.get(mixture, 0.0) + whole
    counted = sum(merged.values())
    shares = [share / counted for share in merged.values()]
    return information_of_number(shares, list(merged), -QUARTER_TURN, QUARTER_TURN)


def axis_mixture(bench: Bench, eye: Eye, one: Ranked) -> Mixture:
    """The axis that a cause predicts, in degrees from the one due, within a quarter turn.

    Arguments: `bench`; `eye`; `one` cause. Returns the mixture over its variants.
    """
    parts: list[Part] = []
    for story in one.stories:
        lens = bench.lens(story.common, eye, story.own[eye])
        assert lens is not None  # it has been weighed
        share = story.probability / one.probability
        mean, deviation = _axis(bench.held[eye], lens)
        # An axis comes round again after half a turn.
        parts += [Part(share, mean + turn, deviation) for turn in (-180.0, 0.0, 180.0)]
    return tuple(parts)


def _axis(held: Held, lens: Lens) -> tuple[float, float]:
    """Axis from the one due, and its standard deviation, in degrees, to a hundredth."""
    due, seen = held.due, held.seen
    cross, along = lens.j0 * due.j45 - lens.j45 * due.j0, lens.j0 * due.j0 + lens.j45 * due.j45
    cylinder = max(_cylinder(lens), LEAST_CYLINDER)
    var = seen.axis_var + seen.principal_var / 2.0 / cylinder**2 + lens.turn_rad**2
    deviation = QUARTER_TURN if lens.broad else math.degrees(math.sqrt(var))
    return round(math.degrees(math.atan2(cross, along)) / 2.0, 2), round(deviation, 2)


def _cylinder(lens: Lens) -> float:
    return 2.0 * math.hypot(lens.j0, lens.j45)


def tell_apart(one: Label, other: Label, offered: Sequence[Offer]) -> Offer | None:
    """The look that best tells two causes apart, or None where none does.

    Arguments: both; `offered` looks. Taken as equally probable.
    """
    best, most = None, LEAST_BITS
    for offer in offered:
        bits = information((0.5, 0.5), (offer.row(one), offer.row(other)))
        if bits > most:
            best, most = offer, bits
    return best
