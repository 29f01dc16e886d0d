"""Causes as people read them: what happened in words, how large, how probable."""

from decimal import Decimal

from pycore.bench.cause_estimate import Found, Size
from pycore.bench.cause_rank import Label, Named
from pycore.decimals import fixed, from_float
from pycore.names import Entry, prism_entry
from pycore.optics.prism import Eye, Prism
from pycore.words import say

SURE, HARDLY = 0.995, 0.005


def percent(probability: float) -> str:
    """A probability as people read it; never 0 or 100.

    >>> percent(0.617), percent(0.9999)
    ('62 %', '> 99 %')
    """
    if probability > SURE:
        return say("cause_texts.above-99-percent")
    if probability < HARDLY:
        return say("cause_texts.below-one-percent")
    return say("cause_texts.percent", number=fixed(from_float(100.0 * probability), 0))


def eyes_code(one: Named) -> str:
    """The code of the lenses a cause is in: right, left or both."""
    return "both" if len(one.eyes) > 1 else one.eyes[0]


def cause_sentence(label: Label) -> Entry:
    """What happened, as a code of the words `causes` and its parameters. Arguments: `label`."""
    first, *others = (_sentence(one) for one in label)
    if not others:
        return first
    texts = {"first": _say(first), "second": _say(others[0])}
    return {"code": "together", "params": texts}


def _sentence(one: Named) -> Entry:
    return {"code": one.code, "params": {"eye": say(f"eyes.{eyes_code(one)}")}}


def _say(sentence: Entry) -> str:
    return say(f"causes.{sentence['code']}", **sentence["params"])


def cause_text(label: Label) -> str:
    """What happened, in words. Arguments: `label` of one cause, or two together."""
    return _say(cause_sentence(label))


def named_entry(label: Label) -> Entry:
    """A cause, with a second that came along, as the report names it. Arguments: `label`."""
    first, *others = label
    return {
        "code": first.code,
        "eyes": list(first.eyes),
        "with": [{"code": other.code, "eyes": list(other.eyes)} for other in others],
        "sentence": cause_sentence(label),
    }


def size_entry(size: Size) -> Entry:
    """How large a cause was, as the report writes it. Arguments: `size`."""
    entry: Entry = {"kind": size.kind}
    texts = {}
    for eye, values in size.values.items():
        entry[eye] = {
            name: {"mean": found.mean, "uncertainty": found.uncertainty}
            for name, found in values.items()
        }
        texts[eye] = _size_text(size.kind, eye, values)
    if len(set(texts.values())) == 1:
        entry["shown"] = next(iter(texts.values()))
    else:
        lines = [
            say("cause_texts.of-lens", eye=say(f"eyes.{eye}"), text=text)
            for eye, text in texts.items()
        ]
        entry["shown"] = say("cause_texts.together", first=lines[0], second=lines[1])
    return entry


def _size_text(kind: str, eye: Eye, values: dict[str, Found]) -> str:
    found = list(values.values())
    doubt = max([one.uncertainty for one in found])
    if kind == "zero":
        prism = Prism(from_float(found[0].mean), from_float(found[1].mean))
        shown = prism_entry(eye, prism)["shown"]
        return say(
            "cause_texts.zero",
            amount=shown["amount"],
            base=shown["base"],
            uncertainty=_figure(doubt, 2),
        )
    words = {
        "inwards": ("too-far-in", "too-far-out"),
        "turn": ("counter-clockwise", "clockwise"),
    }
    up = ("up", "down")
    along = found[-1].mean
    params = {
        "along": _figure(abs(along), 1),
        "uncertainty": _figure(doubt, 1),
        "along_word": _word(words.get(kind, up), along),
    }
    if len(found) > 1:
        across = found[0].mean
        params["across"] = _figure(abs(across), 1)
        params["across_word"] = _word(("right", "left"), across)
    return say(f"cause_texts.{kind}", **params)


def _word(words: tuple[str, str], value: float) -> str:
    word = words[0] if value >= 0 else words[1]
    group = "directions" if word in ("up", "down") else "cause_texts"
    return say(f"{group}.{word}")


def _figure(value: float, places: int) -> str:
    return fixed(Decimal(value), places)
