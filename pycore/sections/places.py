"""Places on a lens as people say them: millimetres in or out, up or down."""

from decimal import Decimal

from pycore.bench.layout import Spot
from pycore.decimals import fixed
from pycore.names import Entry, number
from pycore.optics.prism import Eye, horizontal_word, vertical_word
from pycore.words import say


def spot_entry(spot: Spot) -> Entry:
    """A place as the report writes it: mm to the observer's right and up. Arguments: `spot`."""
    return {"right_mm": number(spot.right_mm), "up_mm": number(spot.up_mm)}


def spot_text(eye: Eye, spot: Spot, places: int = 1) -> str:
    """A place in words, `3.5 in 1.0 up`. Arguments: `eye`; `spot` mm; `places` decimals.

    >>> spot_text("left", Spot(Decimal("-3.5"), Decimal(0)))
    '3.5 in'
    """
    parts = [
        say("text.component", amount=text, word=say(f"directions.{word}"))
        for size, word in (
            (spot.right_mm, horizontal_word(eye, spot.right_mm)),
            (spot.up_mm, vertical_word(spot.up_mm)),
        )
        if word and float(text := fixed(abs(size), places))
    ]
    return " ".join(parts) or fixed(Decimal(0), places)


def millimetres(value: float, places: int = 1) -> str:
    """A computed length in words. Arguments: `value` mm; `places` decimals.

    >>> millimetres(68.04)
    '68.0 mm'
    """
    return say("text.millimetres", number=fixed(Decimal(value), places))
