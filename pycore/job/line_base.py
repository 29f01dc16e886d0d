"""From the words and degrees written for one prism to the `base` of the job document."""

from collections.abc import Sequence
from decimal import Decimal
from typing import Literal

Base = str | dict[str, str]
OPPOSITE = {"in": "out", "up": "down"}


def _horizontal(degrees: Decimal, eye: str) -> str | None:
    """In or out at an angle of 0 to 360, by the side of the eye; None straight up or down."""
    if degrees in (90, 270):
        return None
    to_the_right = degrees < 90 or degrees > 270
    return "in" if to_the_right == (eye == "right") else "out"


def _vertical(degrees: Decimal) -> str | None:
    """Up or down at an angle of 0 to 360; None where it is level."""
    if degrees in (0, 180):
        return None
    return "up" if degrees < 180 else "down"


def _agree(words: Sequence[str], degrees: Decimal, eyes: Sequence[str]) -> bool:
    """Whether every word is true of the angle in every eye it is written for."""
    return all(
        word in (_vertical(degrees % 360), _horizontal(degrees % 360, eye))
        for word in words
        for eye in eyes
    )


def base_of(
    words: Sequence[str], degrees: str | None, eyes: Sequence[str], bases: Literal["360", "180"]
) -> tuple[Base, str]:
    """The base as the job document writes it, and the code of the question it raises ("" if none).

    Arguments: `words` of up, down, in, out; `degrees` plain text or None; `eyes` it is written
    for; `bases` the notation in use. With words, degrees of 0 to 180 are the 180 notation (the
    up or down word picks the half; 0 and 180 need in or out); above 180 the words must agree.
    Source: US community-college opticianry course OPH 142 (180 notation); ISO 8429 (angles).

    >>> base_of(["down", "in"], "37", ["left"], "360")
    ({'degrees': '37', 'side': 'down'}, '')
    >>> base_of(["up"], "217", ["left"], "360")
    ('217', 'line-base-contradicts')
    """
    if degrees is None:
        return words[0], "line-degrees-missing" if len(words) > 1 else ""
    angle = Decimal(degrees)
    if angle > 360:
        return degrees, "line-base-beyond"
    if not words:
        return degrees, "line-side-missing" if bases == "180" and angle <= 180 else ""
    if angle > 180:
        return degrees, "" if _agree(words, angle, eyes) else "line-base-contradicts"
    side = words[0]
    base: Base = {"degrees": degrees, "side": side}
    if angle in (0, 180):
        return base, "" if side in ("in", "out") else "line-base-contradicts"
    if side in ("in", "out"):
        return base, "line-side-missing"
    full = angle if side == "up" else angle + 180
    return base, "" if _agree(words, full, eyes) else "line-base-contradicts"
