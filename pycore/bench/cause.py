"""Why do the readings differ from what is due? Every cause, alone and with one other, weighed.

A hypothesis is one shared cause, one cause of the right lens and one of the left, mostly none.
Its probability is its prior times the density of the readings, over the sum for all: nothing
else. Three causes at once (of the order of one job in ten thousand) are left out.
"""

import math
from collections.abc import Iterator, Mapping
from typing import NamedTuple

from pycore.bench.cause_algebra import Fit, joined
from pycore.bench.cause_bench import Bench, Own, Story
from pycore.bench.cause_shared import Common
from pycore.bench.cause_table import NONE_OF_THESE
from pycore.optics.prism import Eye

FAINT = 10.0  # hypotheses below e^-10 of the best are left out: together about 1 in 10,000
# Beside these in both lenses nothing else is thought of: none of these means none, and two turns
# of their own are two things at once already.
ALONE = (NONE_OF_THESE, "lens-rotated")
UNLIKELY = 6.5  # a pair of causes is left out that could reach e^-6.5 of the best at most


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
    if common.code in ALONE:
        return
    log_common = math.log(common.weight)
    none = {eye: owns[eye][0] for eye in owns}
    for eye in owns:
        beside = [other for other in owns if other != eye]
        others = [fits[one] for one in beside]
        log_rest = log_common + sum([math.log(none[other].weight) for other in beside])
        reach = log_rest + bench.ceiling(common, eye) + sum([_top(fit) for fit in others])
        for own in owns[eye][1:]:
            log_prior = math.log(own.weight)
            if reach + log_prior < least:
                break  # the likelier causes come first
            if own.code in (common.code, NONE_OF_THESE):
                continue  # nothing happens twice to one lens, and none of these means none
            fit = bench.fit(common, eye, own)
            if fit is not None:
                yield common, {**none, eye: own}, log_rest + log_prior + joined(fit, *others)
