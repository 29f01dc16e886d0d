"""The little linear algebra that weighing needs, on a handful of numbers, and how two fits join."""

import math
from collections.abc import Iterable, Sequence
from operator import mul
from typing import NamedTuple

Numbers = tuple[float, ...]
Rows = list[list[float]]


class Fit(NamedTuple):
    """The fit of one lens. `density` the logarithm of the probability density with the common
    parameters at zero (without the constant that all causes share); `pull` and `grip` its slope
    and curvature in the common parameters."""

    density: float
    pull: Numbers = ()
    grip: tuple[Numbers, ...] = ()


def dot(one: Sequence[float], two: Sequence[float]) -> float:
    """The sum of products."""
    return sum(map(mul, one, two), 0.0)


def slopes(
    columns: Sequence[Sequence[float]], misfit: Sequence[float]
) -> tuple[Numbers, tuple[Numbers, ...]]:
    """How a fit changes with parameters of these `columns`: its slope and its curvature."""
    pull = tuple([dot(column, misfit) for column in columns])
    return pull, tuple([tuple([dot(one, two) for two in columns]) for one in columns])


def times(rows: Rows, vector: Sequence[float]) -> list[float]:
    """A matrix times a vector."""
    return [sum(map(mul, row, vector)) for row in rows]


def less(vector: Sequence[float], along: Sequence[float], narrower: float) -> list[float]:
    """A vector made shorter in one direction. Arguments: `vector`; `along` the direction, `narrower`
    its share to be taken away, over the square of its length."""
    factor = narrower * dot(vector, along)
    return [part - factor * other for part, other in zip(vector, along, strict=True)]


def root(rows: Iterable[Sequence[float]]) -> Rows:
    """The lower triangle L with L L' = `rows`, a positive definite matrix (Cholesky)."""
    lower: Rows = []
    for at, row in enumerate(rows):
        made: list[float] = []
        for column in range(at):
            other = lower[column]
            made.append((row[column] - dot(made, other[:column])) / other[column])
        made.append(math.sqrt(row[at] - dot(made, made)))
        lower.append(made)
    return lower


def inverse_root(rows: Iterable[Sequence[float]]) -> tuple[Rows, float]:
    """The inverse of `root`, and the logarithm of half the determinant's power: log det L."""
    lower = root(rows)
    size = len(lower)
    inverse: Rows = []
    for at, row in enumerate(lower):
        made = [
            -sum([row[k] * inverse[k][column] for k in range(column, at)]) / row[at]
            for column in range(at)
        ]
        inverse.append([*made, 1.0 / row[at], *[0.0] * (size - at - 1)])
    return inverse, sum([math.log(row[at]) for at, row in enumerate(lower)])


def joined(one: Fit, two: Fit | None = None) -> float:
    """The logarithm of the density of one lens, or of both together, with the common parameters
    (standard normal) integrated out."""
    pull, grip, density = one.pull, one.grip, one.density
    if two is not None:
        density += two.density
        pull = tuple([a + b for a, b in zip(pull, two.pull, strict=True)])
        grip = tuple(
            [
                tuple([a + b for a, b in zip(row, other, strict=True)])
                for row, other in zip(grip, two.grip, strict=True)
            ]
        )
    return density + _gain(pull, grip) if pull else density


def _gain(pull: Numbers, grip: tuple[Numbers, ...]) -> float:
    """What integrating the common parameters adds: p' (1 + G)^-1 p / 2 - log det (1 + G) / 2."""
    if len(pull) == 1:
        whole = 1.0 + grip[0][0]
        return 0.5 * (pull[0] ** 2 / whole - math.log(whole))
    if len(pull) == 2:  # written out, since it is the usual case: the zero
        (p, q), (a, b), c = pull, grip[0], 1.0 + grip[1][1]
        a += 1.0
        whole = a * c - b * b
        return 0.5 * ((c * p * p - 2.0 * b * p * q + a * q * q) / whole - math.log(whole))
    rows = [[part + (i == j) for j, part in enumerate(row)] for i, row in enumerate(grip)]
    inverse, log_root = inverse_root(rows)
    moved = times(inverse, pull)
    return 0.5 * dot(moved, moved) - log_root
