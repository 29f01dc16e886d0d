"""The shortest movement that satisfies convex limits, and the nearest one on a grid.

A movement is four numbers in mm: the right lens to the observer's right and up, then the left
lens. Shortest means the least sum of squares. A limit answers for any movement with a flat cut:
a plane that parts the movement from everything the limit allows. The shortest movement below all
cuts is kept exactly (the dual active-set method for a strictly convex quadratic, Mathematical
Programming 1983;27:1-33), and cuts are asked for until none is broken.
"""

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from itertools import product

Move = tuple[float, float, float, float]
Cut = tuple[float, Move, float]  # how far beyond (mm), the plane's unit normal, its bound (mm)

STILL: Move = (0.0, 0.0, 0.0, 0.0)
BROKEN_MM = 1e-8  # a limit counts as broken from here on
ON_GRID_MM = 1e-7  # on the grid a limit may be touched; whoever asks judges again in decimals
_PARALLEL = 1e-13  # squared sine of an angle that counts as none
_MOST_CUTS = 200  # never seen to need 60


def dot(first: Move, second: Move) -> float:
    """The inner product of two movements (or of a row and a movement).

    >>> dot((1.0, 2.0, 0.0, 0.0), (3.0, 4.0, 5.0, 6.0))
    11.0
    """
    return first[0] * second[0] + first[1] * second[1] + first[2] * second[2] + first[3] * second[3]


@dataclass(frozen=True, slots=True)
class Strip:
    """|row · movement + offset| <= limit: a component, in the unit of the row times mm."""

    row: Move
    offset: float
    limit: float

    def cut(self, move: Move) -> Cut | None:
        """The side that the movement is nearest to, or beyond. None: no movement changes it.

        A side broken that no movement changes is beyond by an endless distance.
        """
        value = dot(self.row, move) + self.offset
        sign = 1.0 if value >= 0.0 else -1.0
        beyond = sign * value - self.limit
        length = math.sqrt(dot(self.row, self.row))
        if length < 1e-12:
            return (math.inf, STILL, 0.0) if beyond > BROKEN_MM else None
        normal = _times(self.row, sign / length)
        return beyond / length, normal, (self.limit - sign * self.offset) / length

    def reach(self, move: Move, ray: Move) -> float:
        """How far from a movement within, along a ray, the limit is met, in lengths of the ray."""
        speed, value = dot(self.row, ray), dot(self.row, move) + self.offset
        if abs(speed) < 1e-12:
            return math.inf
        return (self.limit - value) / speed if speed > 0.0 else (-self.limit - value) / speed


@dataclass(frozen=True, slots=True)
class Disc:
    """The length of (across, up) · movement + offset is at most `radius` (never negative)."""

    across: Move
    up: Move
    offset: tuple[float, float]
    radius: float

    def cut(self, move: Move) -> Cut | None:
        """The tangent towards the movement, by the gradient of the length."""
        x, y = dot(self.across, move) + self.offset[0], dot(self.up, move) + self.offset[1]
        size = math.hypot(x, y)
        if size < 1e-12:
            return None
        beyond = size - self.radius
        slope = _plus(_times(self.across, x / size), self.up, y / size)
        length = math.sqrt(dot(slope, slope))
        if length < 1e-12:
            return (math.inf, STILL, 0.0) if beyond > BROKEN_MM else None
        normal = _times(slope, 1.0 / length)
        return beyond / length, normal, dot(normal, move) - beyond / length

    def reach(self, move: Move, ray: Move) -> float:
        """How far from a movement within, along a ray, the limit is met, in lengths of the ray."""
        x, y = dot(self.across, move) + self.offset[0], dot(self.up, move) + self.offset[1]
        across, up = dot(self.across, ray), dot(self.up, ray)
        speed = across * across + up * up
        if speed < 1e-24:
            return math.inf
        half, rest = x * across + y * up, x * x + y * y - self.radius**2
        return (math.sqrt(max(half * half - speed * rest, 0.0)) - half) / speed


@dataclass(frozen=True, slots=True)
class Cover:
    """A round blank still covers every point of a rim: no point is farther than `radius_mm`.

    `across` and `up` pick the lens's movement; `centre` of the blank before it and `points` of
    the rim in mm from one place; `reach_mm` how far the rim reaches from there.
    """

    across: Move
    up: Move
    centre: tuple[float, float]
    points: tuple[tuple[float, float], ...]
    reach_mm: float
    radius_mm: float

    def cut(self, move: Move) -> Cut | None:
        """The tangent of the disc around the rim's point farthest from the blank's centre."""
        x = dot(self.across, move) + self.centre[0]
        y = dot(self.up, move) + self.centre[1]
        if math.hypot(x, y) + self.reach_mm <= self.radius_mm:
            return None
        far = max(self.points, key=lambda point: (point[0] - x) ** 2 + (point[1] - y) ** 2)
        offset = self.centre[0] - far[0], self.centre[1] - far[1]
        return Disc(self.across, self.up, offset, self.radius_mm).cut(move)


PrismLimit = Strip | Disc
Limit = PrismLimit | Cover


def _times(row: Move, factor: float) -> Move:
    return (row[0] * factor, row[1] * factor, row[2] * factor, row[3] * factor)


def _plus(row: Move, other: Move, factor: float) -> Move:
    return (
        row[0] + other[0] * factor,
        row[1] + other[1] * factor,
        row[2] + other[2] * factor,
        row[3] + other[3] * factor,
    )


def held(limit: Limit, still: Sequence[int]) -> Limit:
    """The same limit where some parts of the movement stay at nothing.

    Arguments: `limit`; `still` the places of those parts in a movement.

    >>> held(Strip((1.0, 2.0, 3.0, 4.0), 0.0, 1.0), (2, 3)).row
    (1.0, 2.0, 0.0, 0.0)
    """

    keep = [0.0 if index in still else 1.0 for index in range(4)]

    def masked(row: Move) -> Move:
        return row[0] * keep[0], row[1] * keep[1], row[2] * keep[2], row[3] * keep[3]

    if isinstance(limit, Strip):
        return Strip(masked(limit.row), limit.offset, limit.limit)
    return replace(limit, across=masked(limit.across), up=masked(limit.up))


def length_mm(move: Move) -> float:
    """The root of the sum of squares, in mm.

    >>> length_mm((3.0, 0.0, 0.0, 4.0))
    5.0
    """
    return math.sqrt(dot(move, move))


def allows(limits: Sequence[Limit], move: Move, slack_mm: float = ON_GRID_MM) -> bool:
    """Tell whether a movement is within every limit. Arguments: `limits`; `move`; `slack_mm`.

    >>> allows([Strip((1.0, 0.0, 0.0, 0.0), 0.0, 2.0)], (2.0, 9.0, 0.0, 0.0))
    True
    """
    for limit in limits:
        cut = limit.cut(move)
        if cut is not None and cut[0] > slack_mm:
            return False
    return True


def shortest(limits: Sequence[Limit]) -> Move | None:
    """The shortest movement within every limit, or None where there is none.

    Arguments: `limits`. Returns mm, to about 1e-8. Source: Goldfarb and Idnani's dual method,
    Mathematical Programming 1983;27:1-33, with cuts of Kelley's kind for the round limits.

    >>> shortest([Strip((0.5, 0.0, 0.0, 0.0), 1.0, 0.25)])
    (-1.5, 0.0, 0.0, 0.0)
    """
    state = _Active()
    for _ in range(_MOST_CUTS):
        cuts = [cut for limit in limits if (cut := limit.cut(state.move)) is not None]
        worst = max(cuts, default=None)
        if worst is None or worst[0] <= BROKEN_MM:
            return state.move
        if math.isinf(worst[0]) or not state.add(worst[1], worst[2]):
            return None
    return None


class _Active:
    """The shortest movement below the cuts that hold it, with what each cut presses."""

    def __init__(self) -> None:
        self.move: Move = STILL
        self.normals: list[Move] = []
        self.presses: list[float] = []

    def add(self, normal: Move, bound: float) -> bool:
        """Take one more cut in; False where no movement is below it and the others."""
        press = 0.0
        while True:
            shares = self._shares(normal)
            free = normal
            for other, share in zip(self.normals, shares, strict=True):
                free = _plus(free, other, -share)
            room = dot(free, free)
            until, leaving = self._first_to_leave(shares)
            whole = (dot(normal, self.move) - bound) / room if room > _PARALLEL else math.inf
            step = min(whole, until)
            if math.isinf(step):
                return False
            self.presses = [
                have - step * share for have, share in zip(self.presses, shares, strict=True)
            ]
            press += step
            if room > _PARALLEL:
                self.move = _plus(self.move, free, -step)
            if whole <= until:
                self.normals.append(normal)
                self.presses.append(press)
                return True
            del self.normals[leaving], self.presses[leaving]

    def _first_to_leave(self, shares: Sequence[float]) -> tuple[float, int]:
        """How far the new cut may press until one of the others presses no more, and which."""
        return min(
            (
                (max(have, 0.0) / share, index)
                for index, (have, share) in enumerate(zip(self.presses, shares, strict=True))
                if share > 0.0
            ),
            default=(math.inf, -1),
        )

    def _shares(self, normal: Move) -> list[float]:
        """The new normal as a sum of the others, by least squares."""
        rows = [
            [dot(first, second) for second in self.normals] + [dot(first, normal)]
            for first in self.normals
        ]
        return _solved(rows)


def _solved(rows: list[list[float]]) -> list[float]:
    """Solve a small symmetric positive system, given as rows with their right side."""
    size = len(rows)
    for at in range(size):
        pivot = rows[at]
        for below in rows[at + 1 :]:
            factor = below[at] / pivot[at]
            for column in range(at, size + 1):
                below[column] -= factor * pivot[column]
    found = [0.0] * size
    for at in reversed(range(size)):
        rest = sum(rows[at][column] * found[column] for column in range(at + 1, size))
        found[at] = (rows[at][size] - rest) / rows[at][at]
    return found


def on_grid(limits: Sequence[Limit], move: Move, step_mm: float) -> Iterator[Move]:
    """Movements on a grid that keep within every limit, the shortest first.

    Arguments: `limits`; `move` the shortest movement off the grid; `step_mm`. Yields movements
    next to it first (a part that does not move stays), then one step farther around it.

    >>> next(on_grid([Strip((0.5, 0.0, 0.0, 0.0), 1.0, 0.23)], (-1.54, 0.0, 0.0, 0.0), 0.1))
    (-1.6, 0.0, 0.0, 0.0)
    """
    tried: set[Move] = set()
    for reach in (0, 1):
        places = [_places(part, step_mm, reach) for part in move]
        found: list[Move] = [
            (a, b, c, d)
            for a, b, c, d in product(*places)
            if (a, b, c, d) not in tried and allows(limits, (a, b, c, d))
        ]
        tried.update(found)
        yield from sorted(found, key=length_mm)


def _places(part: float, step_mm: float, reach: int) -> list[float]:
    """The grid's values next to one part; a part at rest stays there."""
    steps = part / step_mm
    if abs(steps) < 1e-6:
        return [0.0]
    low, high = math.floor(steps - 1e-6) - reach, math.ceil(steps + 1e-6) + reach
    return [round(number * step_mm, 9) + 0.0 for number in range(low, high + 1)]
