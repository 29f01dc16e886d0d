"""How large was it? The free parameters of a hypothesis, and how well it fits at its best."""

import math
from collections.abc import Sequence
from dataclasses import dataclass

from pycore.bench.cause import Bench, Story
from pycore.bench.cause_fit import dot, inverse_root
from pycore.optics.prism import Eye


@dataclass(frozen=True, slots=True)
class Found:
    """A parameter as far as the readings tell it: mean and one standard uncertainty."""

    mean: float
    uncertainty: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Estimate:
    """What the readings say of one hypothesis's free parameters, in standard deviations of their
    priors. `own` those of each lens, in the order of its columns (slips, shifts, turn); `common`
    in the order of the common columns. `residual`: how far, in standard deviations, the readings
    stay from the best fit, over the square root of their number."""

    own: dict[Eye, list[Found]]
    common: list[Found]
    residual: float


def estimate(bench: Bench, story: Story) -> Estimate:
    """The posterior of the parameters of one hypothesis. Source: Gaussian linear models.

    Arguments: `bench`; `story`. Returns the estimate.
    """
    misfit: list[float] = []
    columns: list[list[float]] = []
    counts: dict[Eye, int] = {}
    shared: list[list[float]] = []
    before = 0
    for eye, own in story.own.items():
        lens = bench.lens(story.common, eye, own)
        assert lens is not None  # it has been weighed
        gauge = bench.gauges[eye]
        bare = lens._replace(slips=(), shifts=(), turn_rad=0.0)
        part, _ = gauge.misfit(bare)
        mine = [gauge.scaled(bare, column) for column in gauge.own_columns(lens)]
        ours = [gauge.scaled(bare, column) for column in bench.columns(story.common, eye, lens)]
        columns = [column + [0.0] * len(part) for column in columns]
        columns += [[0.0] * before + column for column in mine]
        shared = [
            (shared[at] if before else []) + column for at, column in enumerate(ours)
        ]
        counts[eye] = len(mine)
        misfit += part
        before += len(part)
    means, deviations, rest = _solved(columns + shared, misfit)
    found = [Found(mean, deviation) for mean, deviation in zip(means, deviations, strict=True)]
    own_found: dict[Eye, list[Found]] = {}
    at = 0
    for eye, count in counts.items():
        own_found[eye] = found[at : at + count]
        at += count
    residual = math.sqrt(max(rest, 0.0) / len(misfit))
    return Estimate(own=own_found, common=found[at:], residual=residual)


def _solved(
    columns: Sequence[Sequence[float]], misfit: Sequence[float]
) -> tuple[list[float], list[float], float]:
    """Posterior means and standard deviations of standard normal parameters, and what is left of
    the squared misfit (with the parameters' own share)."""
    whole = dot(misfit, misfit)
    if not columns:
        return [], [], whole
    pull = [dot(column, misfit) for column in columns]
    rows = [
        [dot(one, two) + (one is two) for two in columns] for one in columns
    ]
    inverse, _ = inverse_root(rows)
    half = [dot(row, pull) for row in inverse]
    means = [
        sum([inverse[k][at] * half[k] for k in range(len(half))]) for at in range(len(half))
    ]
    deviations = [
        math.sqrt(sum([row[at] ** 2 for row in inverse])) for at in range(len(half))
    ]
    return means, deviations, whole - dot(half, half)
