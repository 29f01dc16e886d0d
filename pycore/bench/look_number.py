"""How much is a look worth whose result is a number? By fixed quadrature over that number.

A result that each case predicts as a mixture of normal distributions carries an information
without a closed form; it is integrated with Gauss-Legendre nodes on panels whose ends are at
whole numbers of standard deviations from the middles of all the parts.
"""

import math
from collections.abc import Sequence
from itertools import pairwise
from typing import NamedTuple

# Nodes and weights of the ten-point Gauss-Legendre rule on [-1, 1]; Abramowitz and Stegun,
# Handbook of Mathematical Functions (1964), table 25.4. The rule is symmetric.
NODES = (
    0.148874338981631,
    0.433395394129247,
    0.679409568299024,
    0.865063366688985,
    0.973906528517172,
)
WEIGHTS = (
    0.295524224714753,
    0.269266719309996,
    0.219086362515982,
    0.149451349150581,
    0.066671344308688,
)
ENDS = (-6.0, -3.0, -1.0, 1.0, 3.0, 6.0)  # of the panels, in standard deviations
ROOT = math.sqrt(2.0 * math.pi)


class Part(NamedTuple):
    """One normal distribution of a mixture: its share, mean and standard deviation."""

    share: float
    mean: float
    deviation: float


Mixture = tuple[Part, ...]


def information_of_number(
    shares: Sequence[float],
    mixtures: Sequence[Mixture],
    low: float = -math.inf,
    high: float = math.inf,
) -> float:
    """How much a number read tells about which case holds, in bits.

    Arguments: `shares` the cases' probabilities (sum 1); `mixtures` what each predicts, in one
    unit; `low` and `high` between which the number lies. Returns the mutual information.

    >>> round(information_of_number([0.5, 0.5], [(Part(1.0, 0.0, 1.0),), (Part(1.0, 9.0, 1.0),)]), 4)
    1.0
    """
    parts = list({part[1:]: part for mixture in mixtures for part in mixture}.values())
    at = {part[1:]: index for index, part in enumerate(parts)}
    rows = [[(part.share, at[part[1:]]) for part in mixture] for mixture in mixtures]
    scales = [(part.mean, 1.0 / part.deviation) for part in parts]
    whole = 0.0
    for node, weight in _nodes(parts, low, high):
        densities = [
            math.exp(-0.5 * ((node - mean) * scale) ** 2) * scale for mean, scale in scales
        ]
        cases = [sum([share * densities[index] for share, index in row]) for row in rows]
        mixed = sum([share * case for share, case in zip(shares, cases, strict=True)])
        whole += weight * sum(
            [
                share * case * math.log2(case / mixed)
                for share, case in zip(shares, cases, strict=True)
                if case > 0.0 and share > 0.0
            ]
        )
    return whole / ROOT


def _nodes(parts: Sequence[Part], low: float, high: float) -> list[tuple[float, float]]:
    ends = sorted(
        {min(max(part.mean + end * part.deviation, low), high) for part in parts for end in ENDS}
    )
    found = []
    for start, end in pairwise(ends):
        middle, half = (start + end) / 2.0, (end - start) / 2.0
        for node, weight in zip(NODES, WEIGHTS, strict=True):
            found += [(middle - half * node, half * weight), (middle + half * node, half * weight)]
    return found
