"""What was understood of every number in a job document, as text with its unit."""

from collections.abc import Iterator, Mapping
from decimal import Decimal
from functools import lru_cache
from typing import Any

from pycore.decimals import NumberError, decimal_places, read_decimal, signed
from pycore.job.order import WORDS
from pycore.names import plain
from pycore.optics.prism import Eye, from_base, horizontal_word, vertical_word
from pycore.words import say, spoken_language

_SIGNED_DIOPTRES = ("sphere", "cylinder")
_DIOPTRES = ("add", "front_curve", "power_d")
_PRISM = (
    "amount",
    "left_amount",
    "prism",
    "ring_step",
    "compensator_maximum",
    "prism_step",
    "zero_uncertainty",
    "x",
    "y",
)
_DEGREES = ("axis", "degrees")
_TEXTS = ("format", "id", "edition", "initials", "at", "state", "design", "checked_on")


def echo_of(job: Mapping[str, Any]) -> dict[str, str]:
    """Each number of a job document, by its path, as it was understood.

    Arguments: `job` as `contract.decode` gives it. Returns texts by path.

    >>> echo_of({"right": {"sphere": "-2,25", "pd_mm": "31.5"}})
    {'right.sphere': '\u22122.25 D', 'right.pd_mm': '31.5 mm'}
    """
    language = spoken_language()
    return {
        path: text
        for path, key, value in _leaves(job, "")
        if (text := _understood(language, path, key, value))
    }


def _leaves(value: Any, path: str, key: str = "") -> Iterator[tuple[str, str, str]]:
    if isinstance(value, Mapping):
        for name, item in value.items():
            yield from _leaves(item, f"{path}.{name}" if path else name, name)
    elif isinstance(value, list):
        for index, item in enumerate(value):
            yield from _leaves(item, f"{path}[{index}]", key)
    elif isinstance(value, str) and key not in _TEXTS:
        yield path, key, value


@lru_cache(maxsize=1024)  # between two keystrokes all numbers but one are the same
def _understood(_language: str, path: str, key: str, text: str) -> str:
    if key == "base":
        return _base(path, text)
    try:
        number = read_decimal(text)
    except NumberError:
        return ""
    if key in _SIGNED_DIOPTRES:
        return say("text.dioptres", number=signed(number, max(2, decimal_places(number))))
    if key in _DIOPTRES:
        return say("text.dioptres", number=plain(number))
    if key in _PRISM:
        return say("text.prism-dioptres", number=plain(number))
    if key.endswith("_mm"):
        return say("text.millimetres", number=plain(number))
    if key in _DEGREES or key.endswith("_deg"):
        return say("text.degrees", number=plain(number))
    return plain(number)


def _base(path: str, text: str) -> str:
    """A base in degrees is echoed with its quadrant, so that a slip shows."""
    if text in WORDS:
        return say(f"directions.{text}")
    try:
        degrees = read_decimal(text)
    except NumberError:
        return ""
    eye: Eye = "left" if "left" in path.split(".") else "right"
    prism = from_base(Decimal(1), degrees)
    words = [vertical_word(prism.y), horizontal_word(eye, prism.x)]
    names = " ".join(say(f"directions.{word}") for word in words if word)
    return say("text.base", number=plain(degrees), words=names)
