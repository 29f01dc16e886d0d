"""How likely is a decision wrong? Flat prior, Gaussian reading, as in JCGM 106.

A deviation d read with standard uncertainty u says of the true deviation: Gaussian around d.
Closed forms only; the circle needs one fixed sum.
"""

import math
from collections.abc import Callable
from decimal import Decimal

from pycore.decimals import from_float

ACCEPTED_DOUBT = 0.05
_REACH = 10.0  # standard uncertainties; nothing that counts lies beyond
_STEPS = 400  # of the circle's sum; compared with scipy to 1e-9 in the tests


def _below(value: float) -> float:
    """Probability that a standard Gaussian lies below a value."""
    return 0.5 * math.erfc(-value / math.sqrt(2.0))


def chance_within(deviation: Decimal, limit: Decimal, uncertainty: float) -> float:
    """Probability that the true deviation lies within plus or minus the limit.

    Arguments: `deviation`, `limit`, `uncertainty` in one unit. Returns 0 to 1.
    Source: JCGM 106:2012, 7.

    >>> round(chance_within(Decimal(0), Decimal(2), 1.0), 4)
    0.9545
    """
    d, t = float(deviation), float(limit)
    if uncertainty <= 0:
        return 1.0 if abs(deviation) <= limit else 0.0
    return _below((t - d) / uncertainty) - _below((-t - d) / uncertainty)


def chance_within_circle(distance: Decimal, radius: Decimal, uncertainty: float) -> float:
    """Probability that a true vector lies within a circle around the expected point.

    Arguments: `distance` of the reading from the centre, `radius`, `uncertainty` of each
    component, in one unit. Returns 0 to 1 (the distribution of Rice).

    >>> round(chance_within_circle(Decimal(0), Decimal(2), 1.0), 4)
    0.8647
    """
    d, r = float(distance), float(radius)
    if uncertainty <= 0:
        return 1.0 if distance <= radius else 0.0
    # Slices across the circle, from where the Gaussian begins to where it or the circle ends,
    # at x = middle + half sin(t): smooth to both ends, so a plain sum converges.
    low, high = max(-r, d - _REACH * uncertainty), min(r, d + _REACH * uncertainty)
    middle, half = (low + high) / 2.0, (high - low) / 2.0
    if half <= 0:
        return 0.0
    chance = 0.0
    for step in range(_STEPS):
        angle = math.pi * ((step + 0.5) / _STEPS - 0.5)
        x = middle + half * math.sin(angle)
        across = math.sqrt(max(0.0, (r - x) * (r + x)))
        density = math.exp(-0.5 * ((x - d) / uncertainty) ** 2)
        chance += density * math.erf(across / (uncertainty * math.sqrt(2.0))) * math.cos(angle)
    return min(1.0, chance * half * math.pi / _STEPS / (uncertainty * math.sqrt(2.0 * math.pi)))


def largest_accepted(limit: Decimal, chance: Callable[[Decimal], float]) -> Decimal | None:
    """The largest deviation that guarded acceptance still passes, or None where none does.

    Arguments: `limit`; `chance` of the truth being within, for a deviation, in one unit.
    Returns the deviation, to 1e-9 of the limit. Source: JCGM 106:2012, 8 (guarded acceptance).

    >>> accepted = largest_accepted(
    ...     Decimal("0.33"), lambda d: chance_within(d, Decimal("0.33"), 0.08 * 2**0.5))
    >>> round(float(accepted), 3)
    0.144
    """
    if 1.0 - chance(Decimal(0)) > ACCEPTED_DOUBT:
        return None
    low, high = 0.0, float(limit)
    for _ in range(32):
        middle = (low + high) / 2.0
        if 1.0 - chance(from_float(middle)) > ACCEPTED_DOUBT:
            high = middle
        else:
            low = middle
    return from_float(low)


def repeats_needed(chance: Callable[[int], float], most: int = 20) -> int | None:
    """How many readings of each lens make a pass possible at all, or None if `most` do not.

    Arguments: `chance` of the truth being within, at no deviation, for a count of readings;
    `most` readings of each lens. Returns a count.

    >>> repeats_needed(lambda n: chance_within(Decimal(0), Decimal("0.33"), 0.2 / n**0.5))
    2
    """
    for count in range(1, most + 1):
        if 1.0 - chance(count) <= ACCEPTED_DOUBT:
            return count
    return None
