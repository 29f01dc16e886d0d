"""Movements, what they leave and what the laboratory is told, in words."""

from collections.abc import Sequence

from pycore.bench.layout import Spot
from pycore.bench.matter import PAIR, Check, Matter
from pycore.bench.remedy import Shift
from pycore.bench.remedy_moved import parts_of
from pycore.decimals import fixed, places_to_tell_apart, signed
from pycore.names import Entry, number, prism_entry, thinning_text
from pycore.optics.prism import EYES, NO_PRISM, Eye, Prism
from pycore.sections.places import spot_entry, spot_text
from pycore.words import say


def spot_of(shift: Shift, eye: Eye) -> Spot | None:
    """How one lens moves, in mm, or None where it stays. Arguments: `shift`; `eye`."""
    spot = Spot(*parts_of(shift.move, eye))
    return spot if spot.right_mm or spot.up_mm else None


def minus(spot: Spot) -> Spot:
    """The new dot's place on the lens, for a movement of the lens. Arguments: `spot` mm.

    >>> from decimal import Decimal
    >>> minus(Spot(Decimal("0.4"), Decimal(0)))
    Spot(right_mm=Decimal('-0.4'), up_mm=Decimal('0'))
    """
    return Spot(-spot.right_mm + 0, -spot.up_mm + 0)


def move_text(shift: Shift, eye: Eye) -> str:
    """How one lens moves in the frame, `0.4 in 1.2 up`, or "". Arguments: `shift`; `eye`."""
    spot = spot_of(shift, eye)
    return spot_text(eye, spot, _places(shift)) if spot else ""


def dot_text(shift: Shift, eye: Eye) -> str:
    """Where the new dot lies from the old one, or "". Arguments: `shift`; `eye`."""
    spot = spot_of(shift, eye)
    return spot_text(eye, minus(spot), _places(shift)) if spot else ""


def _places(shift: Shift) -> int:
    """One decimal, or more where no tenth of a millimetre is within the limits."""
    return next((n for n in (1, 2) if all(round(part, n) == part for part in shift.move)), 3)


def shift_entry(shift: Shift | None) -> Entry | None:
    """A movement as the report writes it. Arguments: `shift`, or None for none."""
    if shift is None:
        return None
    spots = {eye: spot_of(shift, eye) for eye in EYES}
    exact = {eye: shift.exact[2 * at : 2 * at + 2] for at, eye in enumerate(EYES)}
    return {
        **{eye: spot_entry(spot) if spot else None for eye, spot in spots.items()},
        "new_dot": {eye: spot_entry(minus(spot)) for eye, spot in spots.items() if spot},
        "exact": {
            eye: {"right_mm": round(part[0], 6), "up_mm": round(part[1], 6)}
            for eye, part in exact.items()
        },
        "after": after_entry(shift),
        "shown": {eye: move_text(shift, eye) for eye in EYES},
    }


def after_entry(shift: Shift) -> Entry:
    """What a movement leaves, check by check. Arguments: `shift`.

    Returns `right` and `left` PRISM as then read, `checks` of the prism with their margins, the
    largest `doubt` of a group, and the margins as `shown`.
    """
    return {
        **dict.fromkeys(EYES),
        **{eye: prism_entry(eye, prism) for eye, prism in shift.after.reads.items()},
        "checks": [_check_entry(check, shift.groups[check.group][1]) for check in shift.checks],
        "doubt": round(shift.doubt, 9),
        "shown": margins_text(shift),
    }


def _check_entry(check: Check, doubt: float) -> Entry:
    return {
        "id": check.id,
        "group": check.group,
        "eye": check.eye,
        "component": check.component,
        "deviation": number(check.deviation),
        "limit": number(check.limit),
        "margin": number(check.margin),
        "unit": check.unit,
        "doubt": round(doubt, 9),
        "outcome": "within" if check.within else "outside",
        "shown": _check_texts(check),
    }


def _check_texts(check: Check) -> dict[str, str]:
    places = places_to_tell_apart(abs(check.deviation), check.limit, 1 if check.unit == "mm" else 2)
    code = f"{check.id}.{check.component}" if check.eye != PAIR and check.component else check.id
    return {
        "deviation": signed(check.deviation, places),
        "limit": fixed(check.limit, places),
        "margin": fixed(check.margin, places),
        "name": say("text.check-name", check=say(f"checks.{code}"), eye=say(f"eyes.{check.eye}")),
    }


def margins_text(shift: Shift) -> str:
    """The margins a movement leaves. Arguments: `shift`. A check that an alternative makes up
    for is left out."""
    return "; ".join(
        say("section_texts.remedy.margin", unit=check.unit, **_check_texts(check))
        for check in shift.checks
        if check.within
    )


def movement_instruction(shift: Shift, *, allowed: bool) -> Entry:
    """What is to be done with the lenses that move. Arguments: `shift`; `allowed` uncut."""
    parts = [
        say(
            "remedies.new-dot" if allowed else "remedies.new-place",
            eye=say(f"eyes.{eye}"),
            dot=dot_text(shift, eye),
            prism=both_notations(eye, shift.after.reads[eye]),
        )
        for eye in shift.eyes
    ]
    code = "mark" if allowed else "edge-smaller"
    return {"code": code, "params": {"lenses": "; ".join(parts)}}


def both_notations(eye: Eye, prism: Prism) -> str:
    """A prism in the 360 and in the 180 notation. Arguments: `eye`; `prism`."""
    shown = prism_entry(eye, prism)["shown"]
    if shown["text"] == shown["text_180"]:
        return str(shown["text"])
    return say("section_texts.remedy.both-notations", **{k: shown[k] for k in ("text", "text_180")})


def remake_instruction(matter: Matter, eyes: Sequence[Eye]) -> Entry:
    """The sentence to the laboratory for lenses to be made again.

    Arguments: `matter`; `eyes`. Amounts and bases in both notations, as the lens meter must show
    them at the prism reference point, with the thinning where it is known.
    """
    parts = [
        say(
            f"remedies.{_due_code(matter, eye)}",
            eye=say(f"eyes.{eye}"),
            prism=both_notations(eye, matter.dues[eye].expected),
            amount=_thinning_text(matter, eye),
        )
        for eye in eyes
    ]
    return {"code": "remake", "params": {"lenses": "; ".join(parts)}}


def _due_code(matter: Matter, eye: Eye) -> str:
    thinning = matter.dues[eye].thinning
    if thinning is None:
        return "lens-due-without-thinning"
    return "lens-due-with-thinning" if thinning.amount else "lens-due"


def _thinning_text(matter: Matter, eye: Eye) -> str:
    return thinning_text((matter.dues[eye].thinning or NO_PRISM).y)
