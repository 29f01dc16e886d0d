"""The guided check of the lens meter: what was seen, read strictly; what it settles, as the page
shows it and as the job writes it."""

from collections.abc import Iterator
from decimal import Decimal

from pycore.bench.instrument_check import (
    SUGGESTED_BASE_DEG,
    Found,
    Looks,
    check,
    suggested_amount,
)
from pycore.bench.repeats import ENOUGH
from pycore.decimals import fixed
from pycore.envelope import checked
from pycore.job.bench import MAXIMUM_REPEATS, read_instrument, read_place_object
from pycore.job.fields import Fields
from pycore.names import Entry, degrees_text, plain
from pycore.optics.prism import Prism
from pycore.scenes.instrument_check import check_scene
from pycore.words import say

FORMAT = "wedgewright.instrument-check/1"


def answer(fields: Fields) -> Entry:
    """Answer a request for the guided check.

    Arguments: `fields` of the envelope: `instrument` as in the job; `known` (amount, base in
    degrees); `zero` and the list `seen`, places on the rings (x, y); `scale` (amount, base)
    or `compensator` "none". Prism dioptres, degrees. Returns the next look, what is settled in
    sentences and as fields of the job's instrument, what cannot be, and the picture.
    Raises RefusedError with every fault.
    """
    instrument = read_instrument(fields.child("instrument") or Fields({}, "", []))
    looks = _read_looks(fields)
    checked(fields)
    found = check(looks, instrument)
    suggested = {
        "amount": plain(suggested_amount(instrument)),
        "base": plain(SUGGESTED_BASE_DEG),
    }
    return {
        "format": FORMAT,
        "suggested": suggested,
        "next": found.next,
        "places": {
            "zero": None if looks.zero is None else _place_text(looks.zero),
            "seen": [_place_text(place) for place in looks.seen],
        },
        "enough": ENOUGH,
        "settled": found.settled,
        "findings": [*_findings(found, looks)],
        "wrong": [{"code": code, "params": _params(looks, found)} for code in found.wrong],
        "instrument": _settled_fields(found),
        "scene": check_scene(instrument, looks.zero, looks.seen),
    }


def _read_looks(fields: Fields) -> Looks:
    known, zero, scale = fields.child("known"), fields.child("zero"), fields.child("scale")
    amount, base_deg = _amount_and_base(known) if known else (None, None)
    scale_amount, scale_deg = _amount_and_base(scale) if scale else (None, None)
    return Looks(
        zero=read_place_object(zero) if zero else None,
        amount=amount,
        base_deg=base_deg,
        seen=tuple(map(read_place_object, fields.children("seen", MAXIMUM_REPEATS))),
        scale=(scale_amount, scale_deg) if scale_amount and scale_deg is not None else None,
        compensator=fields.word("compensator", ("none",)) is None,
    )


def _amount_and_base(fields: Fields) -> tuple[Decimal | None, Decimal | None]:
    found = fields.number("amount", "0.01", "20"), fields.number("base", "0", "360")
    fields.finish()
    return found


def _findings(found: Found, looks: Looks) -> Iterator[Entry]:
    """What is settled, one sentence each, by codes of the words' group instrument_check."""
    params = _params(looks, found)
    if found.zero is not None:
        yield {"code": "zero-found" if found.zero.amount else "zero-centre", "params": params}
    if found.way:
        direction, mirrored = found.way
        code = f"{direction}-changed-over" if mirrored else direction
        yield {"code": code, "params": params}
    if found.compensator:
        yield {"code": f"scale-{found.compensator}", "params": params}
    if found.uncertainty is not None:
        yield {"code": "uncertainty-found", "params": params}


def _params(looks: Looks, found: Found) -> dict[str, str]:
    """Every text that a sentence of the check may need."""
    params = {"count": str(len(looks.seen)), "base": "", "amount": ""}
    if looks.amount is not None and looks.base_deg is not None:
        params |= {"amount": fixed(looks.amount, 2), "base": degrees_text(float(looks.base_deg))}
    if found.moved:
        params |= _named(found.moved, "moved")
    if looks.zero:
        params["zero"] = _place_text(looks.zero)
    if looks.scale:
        params |= {
            "scale_amount": fixed(looks.scale[0], 2),
            "scale_base": degrees_text(float(looks.scale[1])),
        }
    if found.uncertainty is not None:
        params["uncertainty"] = fixed(Decimal(found.uncertainty), 3)
    return params


def _named(moved: Prism, name: str) -> dict[str, str]:
    direction = moved.base_deg
    return {
        f"{name}_amount": fixed(moved.amount, 2),
        f"{name}_base": "\u2013" if direction is None else degrees_text(direction),
    }


def _place_text(place: Prism) -> str:
    """A place on the rings in words: how far to the right or left, up or down."""
    parts = [
        say(f"text.place-{ahead if part > 0 else back}", amount=fixed(abs(part), 2))
        for part, ahead, back in ((place.x, "right", "left"), (place.y, "up", "down"))
        if part
    ]
    return " ".join(parts) or say("text.place-middle")


def _settled_fields(found: Found) -> Entry:
    """What is settled, as fields of the job's instrument."""
    if not found.settled or found.way is None or found.zero is None:
        return {}
    fields: Entry = {
        "target_direction": found.way[0],
        "mirrored": found.way[1],
        "compensator": found.compensator,
        "zero": {"x": plain(found.zero.x), "y": plain(found.zero.y)},
    }
    if found.uncertainty is not None:
        fields["uncertainty"] = {"prism": fixed(Decimal(found.uncertainty), 3)}
    return fields
