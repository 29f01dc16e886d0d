"""The bench of one job: its lenses, what was read of them, and every cause they may have."""

import math
from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import NamedTuple

from pycore.bench.cause_algebra import Fit
from pycore.bench.cause_effect import EFFECTS, Variants
from pycore.bench.cause_fit import Column, Gauge, Key, turn_column
from pycore.bench.cause_lens import HEIGHT_SPREAD_MM, Held, Lens, height_is_free, held_lenses
from pycore.bench.cause_shared import Common, commons, own_causes
from pycore.bench.cause_table import AS_ORDERED, Cause, CauseTable, cause_table
from pycore.bench.expected import Due
from pycore.job.document import Job
from pycore.optics.prism import Eye


class Own(NamedTuple):
    """One variant of one cause of one lens, with its prior."""

    cause: Cause | None
    variant: int
    weight: float

    @property
    def code(self) -> str:
        """The cause's code; `as-ordered` for none."""
        return self.cause.code if self.cause else AS_ORDERED


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
    but not known, `free_thinning` where the thinning of a lens is not known.
    """

    held: Mapping[Eye, Held]
    gauges: Mapping[Eye, Gauge]
    table: CauseTable
    zero: float
    free_height: bool
    free_thinning: bool
    _last: tuple[object, Variants] = (None, [])

    def lens(self, common: Common, eye: Eye, own: Own) -> Lens | None:
        """The lens as both causes leave it, or None where they cannot meet."""
        lens = common.lenses[eye]
        if own.cause is not None:
            made = self._made(own.cause, lens, eye)
            if own.variant >= len(made):
                return None
            lens = made[own.variant][1]
        return common.after(lens, eye)

    def _made(self, cause: Cause, lens: Lens, eye: Eye) -> Variants:
        """All variants of a cause at once, kept for the next of them."""
        key = cause.code, eye, lens
        if self._last[0] != key:
            self._last = key, EFFECTS[cause.code](lens, self.held[eye].site, cause)
        return self._last[1]

    def columns(self, common: Common, eye: Eye, lens: Lens) -> list[Column]:
        """The columns of what is common to both lenses and not known."""
        nothing = (0.0, 0.0)
        columns = []
        zero = math.hypot(self.zero, common.zero)
        if zero:
            # What is due beside an existing lens has the zero in its own vertical: it cancels.
            up = 0.0 if self.held[eye].site.partnered else zero
            columns += [Column((zero, 0.0), (zero, 0.0)), Column((0.0, up), (0.0, up))]
        if self.free_thinning:
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
    free_thinning = any(one.due.t_spread for one in held.values())
    return Bench(held, gauges, table, zero, height_is_free(job), free_thinning)
