"""Values as the report writes them: numbers beside their texts, a prism under all its names."""

from collections.abc import Mapping
from decimal import Decimal
from typing import Any

from pycore.decimals import decimal_places, fixed, signed, snap
from pycore.optics.power import Power
from pycore.optics.prism import Eye, Prism, Word, horizontal_word, vertical_word
from pycore.words import say

Entry = dict[str, Any]
_LETTERS = {"up": "U", "down": "D", "in": "I", "out": "O"}


def number(value: Decimal) -> float:
    """A Decimal as the report's JSON number, snapped once to 1e-9.

    >>> number(Decimal("0.330000000001"))
    0.33
    """
    return float(snap(value))


def prism_entry(eye: Eye, prism: Prism) -> Entry:
    """A prism under all its names: amount and base, components, quadrant, 180 notation, texts.

    Arguments: `eye` whose in and out it is; `prism` in prism dioptres. Returns the entry.

    >>> prism_entry("left", Prism(Decimal(-2), Decimal("-1.5")))["notation_180"]["words"]
    'BD&I'
    """
    x, y, base_deg = number(prism.x), number(prism.y), prism.base_deg
    across, along = horizontal_word(eye, prism.x), vertical_word(prism.y)
    amount = Decimal(0) if base_deg is None else prism.amount
    turned = None if base_deg is None else _in_180(base_deg, across, along)
    entry: Entry = {
        "amount": number(amount),
        "base": None if base_deg is None else round(base_deg, 9) % 360.0,
        "x": x,
        "y": y,
        "horizontal": {"amount": abs(x), "base": across},
        "vertical": {"amount": abs(y), "base": along},
        "quadrant": "-".join(word for word in (along, across) if word) or "none",
        "notation_180": turned,
    }
    entry["shown"] = _prism_texts(entry, prism, amount) if turned else _no_prism_texts()
    return entry


def _in_180(base_deg: float, across: Word | None, along: Word | None) -> Entry:
    degrees = base_deg if base_deg <= 180.0 else base_deg - 180.0
    text, places = f"{degrees:03.0f}", 0
    # Never let rounding turn an up or down into in or out, whose words stand at 0 and 180 only.
    while along and float(text) in (0.0, 180.0) and places < 9:
        places += 1
        text = f"{degrees:0{4 + places}.{places}f}"
    words = "B" + "&".join(_LETTERS[word] for word in (along, across) if word)
    return {"degrees": text, "side": along or across or "", "words": words}


def _no_prism_texts() -> Entry:
    text = say("text.no-prism")
    return {
        "amount": "0.00",
        "base": "",
        "horizontal": "0.00",
        "vertical": "0.00",
        "text": text,
        "text_180": text,
        "components": text,
    }


def _prism_texts(entry: Entry, prism: Prism, amount: Decimal) -> Entry:
    total, base = fixed(amount, 2), degrees_text(entry["base"])
    horizontal, vertical = fixed(abs(prism.x), 2), fixed(abs(prism.y), 2)
    parts = [
        say("text.component", amount=part, word=say(f"directions.{word}"))
        for part, word in (
            (horizontal, entry["horizontal"]["base"]),
            (vertical, entry["vertical"]["base"]),
        )
        if word
    ]
    components = " ".join(parts)
    turned = entry["notation_180"]
    return {
        "amount": total,
        "base": base,
        "horizontal": horizontal,
        "vertical": vertical,
        "components": components,
        "text": say("text.prism", amount=total, base=base, components=components),
        "text_180": say(
            "text.prism-180", amount=total, words=turned["words"], degrees=turned["degrees"]
        ),
    }


def thinning_text(found: Decimal) -> str:
    """A vertical prism common to both lenses in words. Arguments: `found` up positive.

    >>> thinning_text(Decimal("-1.33"))
    '1.33 down'
    """
    word = vertical_word(found)
    amount = fixed(abs(found), 2)
    return say("text.component", amount=amount, word=say(f"directions.{word}")) if word else amount


def degrees_text(degrees: float) -> str:
    """A base or an axis as people write it: one decimal, none where it is whole.

    >>> degrees_text(26.565), degrees_text(37.0)
    ('26.6', '37')
    """
    text = fixed(Decimal(degrees), 1).removesuffix(".0")
    return "0" if text == "360" else text


def power_text(power: Power) -> str:
    """A power in ordinary notation.

    >>> power_text(Power(Decimal("0.75"), Decimal("-2.25"), Decimal(20)))
    '+0.75 \u22122.25 \u00d720'
    """
    sphere = signed(power.sphere, _places(power.sphere))
    if not power.cylinder:
        return sphere
    cylinder = signed(power.cylinder, _places(power.cylinder))
    return f"{sphere} {cylinder} \u00d7{plain(power.axis)}"


def plain(value: Decimal) -> str:
    """A number without trailing zeros. Arguments: `value`.

    >>> plain(Decimal("180.0"))
    '180'
    """
    return format(value.normalize() + 0, "f")


def _places(value: Decimal) -> int:
    return max(2, decimal_places(value))


def power_entry(power: Power) -> Entry:
    """A power in both cylinder forms and along 90 and 180, in dioptres.

    Arguments: `power`. Returns the entry.

    >>> power_entry(Power(Decimal(3), Decimal(-1), Decimal(180)))["at_90"]
    2.0
    """
    at_90, at_180 = power.along(Decimal(90)), power.along(Decimal(180))
    return {
        "plus_form": _form(power.in_form(1)),
        "minus_form": _form(power.in_form(-1)),
        "at_90": number(at_90),
        "at_180": number(at_180),
        "shown": {"at_90": signed(at_90), "at_180": signed(at_180), "text": power_text(power)},
    }


def _form(power: Power) -> Entry:
    sphere, cylinder = power.sphere, power.cylinder
    return {
        "sphere": number(sphere),
        "cylinder": number(cylinder),
        "axis": number(power.axis) if cylinder else None,
        "shown": {
            "sphere": signed(sphere, _places(sphere)),
            "cylinder": signed(cylinder, _places(cylinder)) if cylinder else "0.00",
            "axis": plain(power.axis) if cylinder else "",
            "text": power_text(power),
        },
    }


def spoken(params: Mapping[str, str]) -> dict[str, str]:
    """Parameters as a sentence needs them: codes of checks, eyes and directions as words.

    >>> spoken({"word": "up", "limit": "0.33"})
    {'word': 'up', 'limit': '0.33'}
    """
    groups = {"check": "checks", "eye": "eyes", "word": "directions", "state": "states"}
    return {
        key: say(f"{groups[key]}.{value}") if key in groups and value else value
        for key, value in params.items()
    }
