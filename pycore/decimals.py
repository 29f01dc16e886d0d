"""Text to Decimal, strictly, and Decimal to text for people: the only number reading there is."""

import re
from decimal import ROUND_HALF_EVEN, Decimal
from functools import lru_cache

MAXIMUM_DIGITS = 12
NANO = Decimal("1E-9")
PICO = Decimal("1E-12")
TRUE_MINUS = "\u2212"

_LAST_PLACE = tuple(Decimal(1).scaleb(-places) for places in range(16))
_NUMBER = re.compile(r"([+-]?)([0-9]+[.,]?[0-9]*|[.,][0-9]+)", re.ASCII)
_EXPONENT = re.compile(r"[+-]?[0-9.,]+[eE][+-]?[0-9]+", re.ASCII)
_THOUSANDS = re.compile(r"[+-]?[0-9]{1,3}([., '][0-9]{3})+[., '][0-9]*", re.ASCII)


class NumberError(ValueError):
    """The text is not a number as it may be written at the bench; `code` says why.

    >>> NumberError("number-empty").code
    'number-empty'
    """

    def __init__(self, code: str) -> None:
        super().__init__(code)
        self.code = code


@lru_cache(maxsize=1024)  # between two keystrokes all numbers but one are the same
def read_decimal(text: str) -> Decimal:
    """Read a number from its own digits; comma and point both separate decimals.

    Arguments: `text` as typed. Returns the exact Decimal.
    Raises NumberError: number-empty, number-too-long, number-exponent, number-thousands,
    number-malformed. Source: the job document, version 1 ("Text").

    >>> read_decimal(" \u22122,25 ")
    Decimal('-2.25')
    >>> read_decimal("1e3")
    Traceback (most recent call last):
    pycore.decimals.NumberError: number-exponent
    """
    plain = text.strip().replace(TRUE_MINUS, "-")
    if not plain:
        raise NumberError("number-empty")
    digits = sum(map(str.isdigit, plain)) if len(plain) > MAXIMUM_DIGITS else 0
    if digits > MAXIMUM_DIGITS:
        raise NumberError("number-too-long")
    if _NUMBER.fullmatch(plain):
        return Decimal(plain.replace(",", ".").rstrip("."))
    if _EXPONENT.fullmatch(plain):
        raise NumberError("number-exponent")
    if _THOUSANDS.fullmatch(plain):
        raise NumberError("number-thousands")
    raise NumberError("number-malformed")


def has_sign(text: str) -> bool:
    """Tell whether the typed number carries its sign (`+`, `-` or the true minus).

    >>> has_sign("+0.75"), has_sign("0.75")
    (True, False)
    """
    return text.strip()[:1] in ("+", "-", TRUE_MINUS)


def from_float(value: float) -> Decimal:
    """A computed value as a Decimal, kept to 1e-12 (its last digits are noise).

    Arguments: `value` in any unit. Returns the same unit.

    >>> from_float(0.1 + 0.2)
    Decimal('0.300000000000')
    """
    return Decimal(value).quantize(PICO, ROUND_HALF_EVEN)


def snap(value: Decimal) -> Decimal:
    """Round what leaves the optics, once, to 1e-9, so that floating noise never decides.

    Arguments: `value` in any unit. Returns the same unit.

    >>> snap(Decimal("0.330000000001"))
    Decimal('0.330000000')
    """
    return value.quantize(NANO, ROUND_HALF_EVEN) + 0


def fixed(value: Decimal, places: int) -> str:
    """Write a number with a fixed count of decimals, half-even, with the true minus.

    Arguments: `value` in any unit; `places` decimals. Returns text without unit.

    >>> fixed(Decimal("-0.125"), 2), fixed(Decimal("-0.001"), 2)
    ('\u22120.12', '0.00')
    """
    rounded = value.quantize(_LAST_PLACE[places], ROUND_HALF_EVEN)
    text = format(abs(rounded), "f")
    return TRUE_MINUS + text if rounded < 0 else text


def signed(value: Decimal, places: int = 2) -> str:
    """Write a number with its sign always shown, as powers are; zero has none.

    Arguments: `value` in any unit; `places` decimals. Returns text without unit.

    >>> signed(Decimal("0.75")), signed(Decimal("0"))
    ('+0.75', '0.00')
    """
    text = fixed(value, places)
    return text if text.startswith(TRUE_MINUS) or float(text) == 0 else "+" + text


def decimal_places(value: Decimal) -> int:
    """Count the decimals a number needs, trailing zeros left out.

    >>> decimal_places(Decimal("0.1250")), decimal_places(Decimal(20))
    (3, 0)
    """
    exponent = value.normalize().as_tuple().exponent
    return -exponent if isinstance(exponent, int) and exponent < 0 else 0


def places_to_tell_apart(first: Decimal, second: Decimal, least: int = 2) -> int:
    """Count the decimals at which two different values also look different (at most 9).

    Arguments: two values in one unit; `least` decimals. Returns a count of decimals.

    >>> places_to_tell_apart(Decimal("0.3304"), Decimal("0.33"))
    4
    """
    places = least
    while places < 9 and first != second and fixed(first, places) == fixed(second, places):
        places += 1
    return places
