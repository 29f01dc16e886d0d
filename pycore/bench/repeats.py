"""How sure is the mean of several readings of one lens?

From four readings on their own scatter says it; before, the bench's uncertainty of one reading
does. What the instrument's step leaves open is never averaged away: a target that stands still
between two marks is read alike every time.
Sources: JCGM 100:2008, 4.2 (readings repeated), 4.2.4 (pooled), F.2.2.1 (resolution, step/sqrt 12)
and H.6 (both together); JCGM 101:2008, 6.4.9.4 (the mean of n readings is a scaled and shifted t,
whose standard deviation needs more than two degrees of freedom).
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Decimal

from pycore.optics.prism import Prism

ENOUGH = 4  # readings; six degrees of freedom, both directions taken together


@dataclass(frozen=True, slots=True)
class Repeated:
    """The readings of one lens: how many, and the standard uncertainty of each component of
    their mean, in prism dioptres; `scatter` is that of one reading, None where it is not used."""

    count: int
    uncertainty: float
    scatter: float | None = None


def repeated(sightings: Sequence[Prism], one: Decimal, step: Decimal) -> Repeated:
    """What the readings of one lens say of their mean.

    Arguments: `sightings` prisms read; `one` the bench's standard uncertainty of one reading;
    `step` of the instrument; all in prism dioptres. Returns Repeated. Source: the module's.

    >>> reads = [Prism(Decimal(x), Decimal(0)) for x in ("2.9", "3.0", "3.0", "3.1")]
    >>> repeated(reads, Decimal("0.10"), Decimal("0.01")).count
    4
    >>> round(repeated(reads, Decimal("0.10"), Decimal("0.01")).uncertainty, 4)
    0.0355
    """
    count = len(sightings)
    if count < ENOUGH:
        return Repeated(count, uncertainty_of_mean(max(count, 1), one, step))
    scatter = pooled_scatter(sightings)
    free = degrees_of_freedom(count)
    of_mean = scatter * math.sqrt(free / (free - 2) / count)
    return Repeated(count, math.hypot(of_mean, resolution(step)), scatter)


def uncertainty_of_one(sightings: Sequence[Prism], step: Decimal) -> float:
    """Standard uncertainty of a single further reading, by the scatter of these.

    Arguments: `sightings` prisms read, ENOUGH at least; `step` of the instrument; prism
    dioptres. Returns prism dioptres. Source: the module's.

    >>> uncertainty_of_one([Prism(Decimal(3), Decimal(0))] * 4, Decimal(0))
    0.0
    """
    free = degrees_of_freedom(len(sightings))
    return math.hypot(pooled_scatter(sightings) * math.sqrt(free / (free - 2)), resolution(step))


def uncertainty_of_mean(count: int, one: Decimal, step: Decimal) -> float:
    """Standard uncertainty of the mean of `count` readings by the bench's figure for `one`.

    Arguments and return in prism dioptres. What `one` holds beyond the step is divided by n.

    >>> uncertainty_of_mean(1, Decimal("0.10"), Decimal("0.25"))
    0.1
    >>> round(uncertainty_of_mean(4, Decimal("0.10"), Decimal("0.25")), 4)
    0.08
    """
    whole = float(one)
    if count == 1:
        return whole
    fixed = min(whole, resolution(step))
    return math.sqrt((whole * whole - fixed * fixed) / count + fixed * fixed)


def resolution(step: Decimal) -> float:
    """Standard uncertainty of a reading to a step: step/sqrt 12, in the step's unit.

    >>> round(resolution(Decimal("0.25")), 4)
    0.0722
    """
    return float(step) / math.sqrt(12.0)


def degrees_of_freedom(count: int) -> int:
    """Those of the scatter of `count` readings, both directions taken together.

    >>> degrees_of_freedom(4)
    6
    """
    return 2 * (count - 1)


def pooled_scatter(sightings: Sequence[Prism]) -> float:
    """Experimental standard deviation of one reading, pooled over both directions.

    Arguments: at least two prisms in prism dioptres. Returns prism dioptres.

    >>> pooled_scatter([Prism(Decimal(1), Decimal(0)), Prism(Decimal(3), Decimal(0))])
    1.0
    """
    count = Decimal(len(sightings))
    squares = Decimal(0)
    for parts in ([prism.x for prism in sightings], [prism.y for prism in sightings]):
        mean = sum(parts, Decimal(0)) / count
        squares += sum(((part - mean) ** 2 for part in parts), Decimal(0))
    return math.sqrt(float(squares) / degrees_of_freedom(len(sightings)))
