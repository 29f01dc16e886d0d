"""Why do the readings differ from what is due? Every cause, alone and with one other, weighed.

A hypothesis is one shared cause, one cause of the right lens and one of the left, mostly none.
Its probability is its prior times the density of the readings, over the sum for all: nothing
else. Three causes at once (of the order of one job in ten thousand) are left out.
"""

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from typing import NamedTuple

from pycore.bench.cause_effect import EFFECTS
from pycore.bench.cause_fit import Column, Fit, Gauge, Key, joined, turn_column
from pycore.bench.cause_lens import HEIGHT_SPREAD_MM, Held, Lens, height_is_free, held_lenses
from pycore.bench.cause_shared import Common, commons, own_causes
from pycore.bench.cause_table import AS_ORDERED, NONE_OF_THESE, Cause, CauseTable, cause_table
from pycore.bench.expected import Due
from pycore.job.document import Job
from pycore.optics.prism import Eye

FAINT = 10.0  # hypotheses below e^-10 of the best are left out: together about 1 in 10,000
UNLIKELY = 6.5  # a pair of causes is left out that could reach e^-6.5 of the best at most


class Own(NamedTuple):
    """One variant of one cause of one lens, with its prior."""

    cause: Cause | None
    variant: int
    weight: float

    @property
    def code(self) -> str:
        """The cause's code; `as-ordered` for none."""
        return self.cause.code if self.cause else AS_ORDERED

    def lens(self, lens: Lens, held: Held) -> Lens | None:
        """The lens as this leaves it, or None where it cannot happen to it."""
        if self.cause is None:
            return lens
        made = EFFECTS[self.cause.code](lens, held.site, self.cause)
        return made[self.variant][1] if self.variant < len(made) else None


class Story(NamedTuple):
    """One hypothesis: what is common, what each lens has of its own, and its probability."""

    common: Common
    own: Mapping[Eye, Own]
    probability: float


NO_CAUSE = Own(None, 0, 1.0)


@dataclass(slots=True)
class Bench:
    """The lenses of one job with their gauges: all that weighing needs.

    `held` are the lenses ordered, `gauges` those of which something was read: what is ordered for
    the other one counts where both were exchanged. `zero` is the standard uncertainty of the
    instrument's zero in prism dioptres; `free_height` where the height read at is common to both
    but not known.
    """

    held: Mapping[Eye, Held]
    gauges: Mapping[Eye, Gauge]
    table: CauseTable
    zero: float
    free_height: bool

    def lens(self, common: Common, eye: Eye, own: Own) -> Lens | None:
        """The lens as both causes leave it, or None where they cannot meet."""
        lens = own.lens(common.lenses[eye], self.held[eye])
        return None if lens is None else common.after(lens, eye)

    def columns(self, common: Common, eye: Eye, lens: Lens) -> list[Column]:
        """The columns of what is common to both lenses and not known."""
        nothing = (0.0, 0.0)
        columns = []
        zero = math.hypot(self.zero, common.zero)
        if zero:
            columns += [Column((zero, 0.0), (zero, 0.0)), Column((0.0, zero), (0.0, zero))]
        if lens.t_spread:
            columns.append(Column((0.0, lens.t_spread), (0.0, lens.t_spread)))
        if self.free_height:
            moved = lens.moved(0.0, HEIGHT_SPREAD_MM) if lens.has_power else nothing
            columns.append(Column(moved, nothing))
        if common.moved:
            moved = lens.moved(*common.moved[eye])
            columns.append(Column(moved, moved))
        if common.turn_deg:
            columns.append(turn_column(lens, math.radians(common.turn_deg)))
        return columns

    def fit(self, common: Common, eye: Eye, own: Own) -> Fit | None:
        """How well one lens fits under one hypothesis, or None where it cannot be."""
        lens = self.lens(common, eye, own)
        if lens is None:
            return None
        return self.gauges[eye].fit(lens, self.columns(common, eye, lens))

    def key(self, story: Story) -> Key:
        """What a hypothesis predicts for all that was read: equal keys cannot be told apart."""
        parts: list[float | None] = []
        for eye, own in story.own.items():
            parts += self._key(story.common, eye, own)
        return tuple(parts)

    def _key(self, common: Common, eye: Eye, own: Own) -> Key:
        lens = self.lens(common, eye, own)
        assert lens is not None  # it has been fitted
        gauge = self.gauges[eye]
        columns = [gauge.scaled(lens, column) for column in self.columns(common, eye, lens)]
        scaled = [round(part, 6) + 0.0 for column in columns for part in column]
        return (*gauge.key(lens), *scaled)

    def commons(self) -> list[Common]:
        """The shared causes that would change something of what was read; first: none."""
        none, *others = commons(self.held, self.table)
        kept: dict[str, list[Common]] = {}
        for common in others:
            cause = self.table.causes[common.code]
            # What can be in one lens alone is in both only if it changes something in both.
            enough = all if cause.right or cause.left else any
            if enough([self._changes(none, common, eye) for eye in self.gauges]):
                kept.setdefault(common.code, []).append(common)
        found = []
        for code, variants in kept.items():
            cause = self.table.causes[code]
            scale = cause.prior * cause.both / sum([variant.weight for variant in variants])
            found += [replace(variant, weight=variant.weight * scale) for variant in variants]
        rest = 1.0 - sum([common.weight for common in found])
        return [replace(none, weight=rest), *found]

    def _changes(self, none: Common, common: Common, eye: Eye) -> bool:
        lens = common.after(common.lenses[eye], eye)
        gauge = self.gauges[eye]
        if gauge.changes(lens, none.lenses[eye]):
            return True
        columns = self.columns(common, eye, lens)
        known = 0 if common.zero else len(self.columns(none, eye, lens))
        added = columns[known:]  # a zero off widens the columns that its uncertainty has
        return any(gauge.feels(lens, column) for column in added)

    def owns(self, none: Common, eye: Eye) -> list[Own]:
        """The causes one lens may have of its own that would change something: none first, then
        the likeliest."""
        still, held, gauge = none.lenses[eye], self.held[eye], self.gauges[eye]
        kept: list[Own] = []
        for cause, weight in own_causes(held, self.table):
            made = EFFECTS[cause.code](still, held.site, cause)
            variants = [
                Own(cause, at, share)
                for at, (share, lens) in enumerate(made)
                if gauge.changes(lens, still)
            ]
            whole = sum([variant.weight for variant in variants])
            kept += [own._replace(weight=weight * own.weight / whole) for own in variants]
        rest = 1.0 - sum([own.weight for own in kept])
        kept.sort(key=lambda own: -own.weight)
        return [NO_CAUSE._replace(weight=rest), *kept]


class _Weighed(NamedTuple):
    """One lens's own cause with its log prior and its fit; `top` bounds both from above."""

    own: Own
    log_prior: float
    fit: Fit
    top: float


def weigh(bench: Bench, slack: float = 0.0) -> list[Story]:
    """Every hypothesis that matters with its probability, the most probable first.

    Arguments: `bench`; `slack` by how much (as a logarithm) looks may yet raise a hypothesis over
    another. Returns the hypotheses; their probabilities sum to 1.
    """
    none, *shared = bench.commons()
    owns = {eye: bench.owns(none, eye) for eye in bench.gauges}
    found = [*_without_shared(bench, none, owns, FAINT + slack)]
    alone = [(common, _alone(bench, common, owns)) for common in shared]
    found += [(common, own, weight) for common, (own, weight, _) in alone]
    best = max([weight for _, _, weight in found])
    for common, (_, _, fits) in alone:
        found += _with_own(bench, common, owns, fits, best - UNLIKELY - slack)
    return _normalised(found, FAINT + slack)


Found = tuple[Common, Mapping[Eye, Own], float]


def _normalised(found: list[Found], faint: float) -> list[Story]:
    best = max([weight for _, _, weight in found])
    kept = [one for one in found if one[2] > best - faint]
    shares = [math.exp(weight - best) for _, _, weight in kept]
    whole = sum(shares)
    stories = [
        Story(common, own, share / whole)
        for (common, own, _), share in zip(kept, shares, strict=True)
    ]
    return sorted(stories, key=lambda story: -story.probability)


def _without_shared(
    bench: Bench, none: Common, owns: Mapping[Eye, list[Own]], faint: float
) -> Iterator[Found]:
    log_none = math.log(none.weight)
    lists = [
        sorted(_weighed(bench, none, eye, owns[eye]), key=lambda one: -one.top) for eye in owns
    ]
    eyes = list(owns)
    if len(eyes) == 1:
        for one in lists[0]:
            yield none, {eyes[0]: one.own}, log_none + one.log_prior + joined(one.fit)
        return
    best = -math.inf
    for one in lists[0]:
        for two in lists[1]:
            top = log_none + one.top + two.top
            if top < best - faint:
                break
            weight = log_none + one.log_prior + two.log_prior + joined(one.fit, two.fit)
            best = max(best, weight)
            yield none, dict(zip(eyes, (one.own, two.own), strict=True)), weight


def _weighed(bench: Bench, common: Common, eye: Eye, owns: list[Own]) -> Iterator[_Weighed]:
    for own in owns:
        fit = bench.fit(common, eye, own)
        assert fit is not None  # these are the causes that can happen to this lens
        log_prior = math.log(own.weight)
        yield _Weighed(own, log_prior, fit, log_prior + _top(fit))


def _top(fit: Fit) -> float:
    """A bound for one lens's share of a joint density (Cauchy-Schwarz: each lens is given the
    common parameters' prior to the power of one half)."""
    if not fit.pull:
        return fit.density
    doubled = Fit(
        2.0 * fit.density,
        tuple([2.0 * part for part in fit.pull]),
        tuple([tuple([2.0 * part for part in row]) for row in fit.grip]),
    )
    return 0.5 * joined(doubled)


def _alone(
    bench: Bench, common: Common, owns: Mapping[Eye, list[Own]]
) -> tuple[Mapping[Eye, Own], float, Mapping[Eye, Fit]]:
    """A shared cause with nothing beside it."""
    own = {eye: owns[eye][0] for eye in owns}
    fits = {eye: fit for eye in owns if (fit := bench.fit(common, eye, own[eye]))}
    weight = math.log(common.weight) + sum([math.log(one.weight) for one in own.values()])
    return own, weight + joined(*fits.values()), fits


def _with_own(
    bench: Bench,
    common: Common,
    owns: Mapping[Eye, list[Own]],
    fits: Mapping[Eye, Fit],
    least: float,
) -> Iterator[Found]:
    """A shared cause together with one of one lens, where that can reach the weight `least`."""
    if common.code == NONE_OF_THESE:
        return
    log_common = math.log(common.weight)
    none = {eye: owns[eye][0] for eye in owns}
    for eye in owns:
        beside = [other for other in owns if other != eye]
        others = [fits[one] for one in beside]
        log_rest = log_common + sum([math.log(none[other].weight) for other in beside])
        reach = log_rest + bench.gauges[eye].ceiling + sum([_top(fit) for fit in others])
        for own in owns[eye][1:]:
            log_prior = math.log(own.weight)
            if reach + log_prior < least:
                break  # the likelier causes come first
            if own.code in (common.code, NONE_OF_THESE):
                continue  # nothing happens twice to one lens, and none of these means none
            fit = bench.fit(common, eye, own)
            if fit is not None:
                yield common, {**none, eye: own}, log_rest + log_prior + joined(fit, *others)


def bench_of(job: Job, dues: Mapping[Eye, Due]) -> Bench | None:
    """All that weighing needs of one job, or None where nothing of it was read.

    Arguments: `job`; `dues` of its eyes.
    """
    table = cause_table().in_state(job.state)
    held = held_lenses(job, dues)
    seen = {eye: one for eye, one in held.items() if one.seen.size}
    if not seen:
        return None
    if len(seen) == 1:  # nothing was read before or after it
        held = {eye: one._replace(site=one.site._replace(second=0.0)) for eye, one in held.items()}
    gauges = {eye: Gauge(one.seen, one.due.prism, table.scatter) for eye, one in seen.items()}
    zero = float(job.instrument.uncertainty.zero)
    return Bench(held, gauges, table, zero, height_is_free(job))
