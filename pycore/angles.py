"""Sine, cosine and arc tangent in degrees, exact at multiples of 90: the only trigonometry.

Radians leave ghosts: with plain sines, equal and opposite prisms at most bases do not cancel.
Every angle is first brought, exactly, into the first octant; theta and theta + 180 then give
exactly negated values. Do not "simplify" the reduction away.
"""

import math
from decimal import Decimal


def wrap(angle_deg: float, turn_deg: float = 360.0) -> float:
    """Bring an angle into [0, turn).

    Arguments and return in degrees.

    >>> wrap(-90.0), wrap(180.0, 180.0)
    (270.0, 0.0)
    """
    wrapped = math.fmod(angle_deg, turn_deg)
    if wrapped < 0:
        wrapped += turn_deg
    return 0.0 if wrapped == turn_deg else wrapped


def half_turn(angle: Decimal) -> Decimal:
    """Bring an angle of a meridian or an axis, exactly, into [0, 180).

    Arguments and return in degrees. (The remainder of a Decimal keeps the dividend's sign.)

    >>> half_turn(Decimal(-20))
    Decimal('160')
    """
    return (angle % 180 + 180) % 180


def _sine_of_first_quarter(angle_deg: float) -> float:
    if angle_deg == 30.0:
        return 0.5  # the library's sine of pi/6 is one unit in the last place low
    if angle_deg <= 45.0:
        return math.sin(math.radians(angle_deg))
    return math.cos(math.radians(90.0 - angle_deg)) if angle_deg != 60.0 else math.sqrt(0.75)


def sine(angle_deg: float) -> float:
    """Sine of an angle; exact at multiples of 90 and at 30 and 150.

    Arguments: `angle_deg` degrees. Returns a pure number.

    >>> sine(180.0), sine(270.0), sine(30.0) + sine(210.0)
    (0.0, -1.0, 0.0)
    """
    angle_deg = wrap(angle_deg)
    sign = 1.0
    if angle_deg >= 180.0:
        angle_deg, sign = angle_deg - 180.0, -1.0
    if angle_deg > 90.0:
        angle_deg = 180.0 - angle_deg
    return sign * _sine_of_first_quarter(angle_deg) + 0.0


def cosine(angle_deg: float) -> float:
    """Cosine of an angle; exact at multiples of 90 and at 60 and 120.

    Arguments: `angle_deg` degrees. Returns a pure number.

    >>> cosine(90.0), cosine(180.0), cosine(60.0)
    (0.0, -1.0, 0.5)
    """
    angle_deg = wrap(angle_deg)
    sign = 1.0
    if angle_deg > 180.0:
        angle_deg = 360.0 - angle_deg
    if angle_deg > 90.0:
        angle_deg, sign = 180.0 - angle_deg, -1.0
    return sign * _sine_of_first_quarter(90.0 - angle_deg) + 0.0


def direction(x: float, y: float) -> float:
    """Direction of the vector (x, y), counter-clockwise from +x; exact at multiples of 90.

    Arguments: `x`, `y` in one unit, not both zero. Returns degrees in [0, 360).

    >>> direction(-1.0, 0.0), direction(0.0, -2.0), direction(3.0, 3.0)
    (180.0, 270.0, 45.0)
    """
    wide, high = abs(x), abs(y)
    if wide == high:
        angle_deg = 45.0
    elif high < wide:
        angle_deg = math.degrees(math.atan2(high, wide))
    else:
        angle_deg = 90.0 - math.degrees(math.atan2(wide, high))
    if x < 0:
        angle_deg = 180.0 - angle_deg
    return wrap(-angle_deg if y < 0 else angle_deg)
