"""The rim of the frame, point by point, from what is known of it.

Either radii somebody traced, or the box (A, B), the effective diameter ED and a class of shape:
each quarter of the rim is then a superellipse that touches the box, and the fullest quarter
reaches out to ED / 2 (a point every 5 degrees may miss the corner by up to 0.2 mm). The real rim
differs: what rests on a class is marked as assumed.
"""

from dataclasses import dataclass
from functools import lru_cache

from pycore.angles import cosine, sine
from pycore.job.body import Frame
from pycore.optics.prism import Eye

POINTS = 72
STEP_DEG = 360 / POINTS
OVAL, SQUAREST = 2.0, 40.0  # exponents: an ellipse, and what counts as a rectangle
USUAL_SHAPE = "rounded-rectangle"
USUAL_ED_BEYOND_A_MM = 3.0  # facts section 6: ED is about A + 1 to A + 8, from memory
# The quarters of the right lens that are full, counted counter-clockwise from the nose upwards:
# up and in, up and out, down and out, down and in. The other quarters are elliptic.
_FULL = {"rounded-rectangle": (0, 1, 2, 3), "teardrop": (2,), "oval": (), "round": ()}


@dataclass(frozen=True, slots=True, kw_only=True)
class Outline:
    """The rim of the right lens, seen from the front; the left lens is its mirror.

    `radii_mm` from the boxing centre at equal steps of angle from 0 (towards the nose, for the
    right lens), counter-clockwise; `ed_mm` twice the longest radius; `assumed`: the fields of the job
    that a usual value filled, with that value.
    """

    radii_mm: tuple[float, ...]
    ed_mm: float
    assumed: tuple[tuple[str, str], ...] = ()

    def points(self, eye: Eye) -> tuple[tuple[float, float], ...]:
        """Points of one lens's rim from its boxing centre, counter-clockwise from 0 degrees.

        Arguments: `eye`. Returns (right_mm, up_mm) pairs, seen from the front.
        """
        count = len(self.radii_mm)
        radii = self.radii_mm if eye == "right" else _mirrored(self.radii_mm)
        return tuple(
            (radius * x, radius * y)
            for radius, (x, y) in zip(radii, _directions(count), strict=True)
        )

    @property
    def box(self) -> tuple[float, float, float, float]:
        """The right lens's box: left, bottom, right, top in mm from the boxing centre."""
        rim = self.points("right")
        across, along = [x for x, _ in rim], [y for _, y in rim]
        return min(across), min(along), max(across), max(along)


@lru_cache(maxsize=8)
def _directions(count: int) -> tuple[tuple[float, float], ...]:
    angles = [360.0 * number / count for number in range(count)]
    return tuple((cosine(angle), sine(angle)) for angle in angles)


def _mirrored(radii: tuple[float, ...]) -> tuple[float, ...]:
    """The same rim seen in a mirror that swaps left and right: angle t becomes 180 - t."""
    count = len(radii)
    if count % 2 == 0:
        return tuple(radii[(count // 2 - number) % count] for number in range(count))
    # With an odd count 180 degrees falls between two radii: the mean of both.
    half = count // 2
    return tuple(
        (radii[(half - number) % count] + radii[(half + 1 - number) % count]) / 2.0
        for number in range(count)
    )


def outline_of(frame: Frame) -> Outline | None:
    """The rim of a frame, or None where neither radii nor the box is known.

    Arguments: `frame`, in mm. Returns the Outline. Source: boxing system (ISO 8624) for A, B and
    ED; the classes of shape are a model of ours.

    >>> from decimal import Decimal
    >>> rim = outline_of(Frame(a_mm=Decimal(52), b_mm=Decimal(34), ed_mm=Decimal(56)))
    >>> round(rim.ed_mm, 1), rim.assumed
    (56.0, (('frame.shape', 'rounded-rectangle'),))
    """
    return _outline_of(frame)


@lru_cache(maxsize=16)
def _outline_of(frame: Frame) -> Outline | None:
    if frame.outline_mm:
        traced = tuple(float(radius) for radius in frame.outline_mm)
        return Outline(radii_mm=traced, ed_mm=2.0 * max(traced))
    if frame.a_mm is None or frame.b_mm is None:
        return None
    half_a, half_b = float(frame.a_mm) / 2.0, float(frame.b_mm) / 2.0
    assumed: list[tuple[str, str]] = []
    shape = frame.shape or USUAL_SHAPE
    if frame.shape is None:
        assumed.append(("frame.shape", USUAL_SHAPE))
    full = _FULL[shape]
    reach = max(half_a, half_b)
    if full and frame.ed_mm is None:
        reach = half_a + USUAL_ED_BEYOND_A_MM / 2.0
        assumed.append(("frame.ed_mm", f"{2.0 * reach:.1f}"))
    elif frame.ed_mm is not None:
        reach = float(frame.ed_mm) / 2.0
    fullest = exponent_reaching(half_a, half_b, reach) if full else OVAL
    radii = [
        _radius(half_a, half_b, fullest if number * 4 // POINTS in full else OVAL, x, y)
        for number, (x, y) in enumerate(_directions(POINTS))
    ]
    return Outline(
        radii_mm=tuple(radii),
        ed_mm=2.0 * longest_radius(half_a, half_b, fullest),
        assumed=tuple(assumed),
    )


def longest_radius(half_a_mm: float, half_b_mm: float, exponent: float) -> float:
    """The longest radius of |x/a|^k + |y/b|^k = 1: (a^2q + b^2q)^(1/2q) with q = k / (k - 2).

    Arguments: half the box in mm; `exponent` k, 2 or more. Returns mm. Source: Hölder's
    inequality.

    >>> longest_radius(26.0, 17.0, 2.0), round(longest_radius(26.0, 17.0, 1e9), 4)
    (26.0, 31.0644)
    """
    longer, shorter = max(half_a_mm, half_b_mm), min(half_a_mm, half_b_mm)
    if exponent <= OVAL:
        return longer
    q = exponent / (exponent - 2.0)
    return float(longer * (1.0 + (shorter / longer) ** (2.0 * q)) ** (0.5 / q))


def exponent_reaching(half_a_mm: float, half_b_mm: float, reach_mm: float) -> float:
    """The exponent of the superellipse in a box whose longest radius is `reach_mm`.

    Arguments in mm. Returns 2 (an ellipse) to 40 (nearly the box itself), the nearest there is.

    >>> round(longest_radius(26.0, 17.0, exponent_reaching(26.0, 17.0, 28.0)), 6)
    28.0
    """
    low, high = OVAL, SQUAREST
    if reach_mm <= max(half_a_mm, half_b_mm):
        return low
    for _ in range(40):
        middle = (low + high) / 2.0
        if longest_radius(half_a_mm, half_b_mm, middle) < reach_mm:
            low = middle
        else:
            high = middle
    return high


def _radius(half_a_mm: float, half_b_mm: float, exponent: float, x: float, y: float) -> float:
    part = abs(x / half_a_mm) ** exponent + abs(y / half_b_mm) ** exponent
    return float(part ** (-1.0 / exponent))
