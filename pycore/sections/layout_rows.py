"""The rows and the notes of the section `layout`."""

from collections.abc import Callable, Iterator, Sequence
from decimal import Decimal

from pycore.bench.decentring import LARGEST_BLANK_MM, Blank, Weak
from pycore.bench.layout import Spot
from pycore.bench.lens_layout import LensLayout
from pycore.bench.outline import Outline
from pycore.decimals import fixed, signed, snap
from pycore.job.body import Frame
from pycore.job.document import Job
from pycore.names import degrees_text, plain
from pycore.sections.answer import Row
from pycore.sections.places import millimetres, spot_text
from pycore.words import say

POWER_DOUBT_D = Decimal("0.12")  # what a power may be off by within the usual limits
FIT_MM = 0.5  # a traced rim and a typed box, or a model and its ED, may differ by this much
NANO_MM = 1e-9

Notes = Iterator[tuple[str, dict[str, str]]]
PLACED = ("pd_mm", "prp_height_mm", "cross_above_prp_mm")


def _place(spot_of: Callable[[LensLayout], Spot | None]) -> Callable[[LensLayout], str]:
    def text(lens: LensLayout) -> str:
        spot = spot_of(lens)
        return spot_text(lens.eye, spot) if spot else ""

    return text


def _from_pupil(lens: LensLayout) -> Spot | None:
    centre, pupil = lens.centre_in_box, lens.place.pupil
    return centre - pupil if centre and pupil else None


def _shift(lens: LensLayout) -> str:
    shift = lens.place.shift
    return spot_text(lens.eye, shift, 2) if shift.right_mm or shift.up_mm else ""


def _way(lens: LensLayout) -> str:
    if not lens.way:
        return ""
    move = spot_text(lens.eye, lens.centre) if lens.centre else ""
    return say(f"section_texts.layout.{lens.way.split('-')[0]}", move=move)


def _by_rule(blank: Blank | None) -> str:
    return millimetres(blank.by_rule_mm) if blank and blank.by_rule_mm is not None else ""


def _for_rim(blank: Blank | None) -> str:
    return millimetres(blank.for_rim_mm) if blank and blank.for_rim_mm is not None else ""


# Code, what it says of a lens, and the ends of the fields whose usual value it may rest on.
_ROWS: tuple[tuple[str, Callable[[LensLayout], str], tuple[str, ...]], ...] = (
    ("decentration", _place(lambda lens: lens.place.prp), PLACED),
    ("cross", _place(lambda lens: lens.place.cross), ("pd_mm",)),
    ("segment", _place(lambda lens: lens.place.segment_top), ("pd_mm", "segment.inset_mm")),
    ("shift", _shift, ()),
    ("centre-from-prp", _place(lambda lens: lens.centre), ()),
    ("centre-from-pupil", _place(_from_pupil), PLACED),
    ("centre-in-box", _place(lambda lens: lens.centre_in_box), PLACED),
    ("way", _way, ()),
    ("blank", lambda lens: _by_rule(lens.made_from), PLACED),
    ("blank-for-rim", lambda lens: _for_rim(lens.made_from), PLACED),
)


def layout_rows(frame_pd_mm: Decimal | None, lenses: Sequence[LensLayout]) -> Iterator[Row]:
    """The rows of the table. Arguments: `frame_pd_mm`; `lenses`, right first."""
    if frame_pd_mm is not None:
        yield Row(code="frame-pd", pair=millimetres(float(frame_pd_mm)))
    assumed = [field for lens in lenses for field, _ in lens.place.assumed]
    for code, text_of, rests_on in _ROWS:
        texts = {lens.eye: text_of(lens) for lens in lenses}
        if any(texts.values()):
            yield Row(
                code=code,
                right=texts.get("right", ""),
                left=texts.get("left", ""),
                assumed=any(field.endswith(rests_on) for field in assumed),
            )


def frame_notes(frame: Frame, rim: Outline | None) -> Notes:
    """Where the frame's own figures do not agree. Arguments: `frame`; `rim`."""
    if rim is None:
        return
    left, bottom, right, top = rim.box
    for name, given, found, limit_mm in (
        ("A", frame.a_mm, right - left, FIT_MM),
        ("B", frame.b_mm, top - bottom, FIT_MM),
        ("ED", frame.ed_mm, rim.ed_mm, 2 * FIT_MM),
    ):
        if given is not None and abs(float(given) - found) > limit_mm:
            params = {"name": name, "given": str(given), "found": f"{found:.1f}"}
            yield "rim-does-not-fit", params


def lens_notes(job: Job, lenses: Sequence[LensLayout]) -> Notes:
    """What a person should know of the lenses' layout. Arguments: `job`; `lenses`."""
    if any(snap(lens.order.verified.prism_total.amount) for lens in lenses):
        each_mm = job.centration_shift_mm
        yield ("shift-on", {"each": fixed(each_mm, 2)}) if each_mm else ("shift-off", {})
    for lens in lenses:
        yield from _making_notes(lens)
        for weak in lens.moving.weak if lens.moving else ():
            yield _weak_note(lens, weak)
        order, cross, prp = lens.order, lens.place.cross, lens.place.prp
        if order.cross_above_prp_mm is not None and cross and prp:
            above_mm = cross.up_mm - prp.up_mm + lens.place.shift.up_mm
            if above_mm != order.cross_above_prp_mm:
                given, found = plain(order.cross_above_prp_mm), plain(above_mm)
                yield "heights-differ", {"eye": lens.eye, "given": given, "found": found}


def _making_notes(lens: LensLayout) -> Notes:
    given_mm = lens.order.lens.blank_diameter_mm
    made, moved = lens.made_from, lens.moved
    if lens.way.startswith("ground") or lens.way == "move-unchecked":
        params = {"eye": lens.eye, "blank": str(given_mm or LARGEST_BLANK_MM)}
        yield lens.way, params | {"smallest": _by_rule(moved)}
    smallest_mm = made.by_rule_mm if made else None
    if given_mm and smallest_mm and smallest_mm > float(given_mm) + NANO_MM:
        params = {"eye": lens.eye, "blank": str(given_mm), "smallest": _by_rule(made)}
        yield "blank-too-small", params
    if lens.blank_centre_assumed:
        yield "blank-centre-assumed", {"eye": lens.eye}


def _weak_note(lens: LensLayout, weak: Weak) -> tuple[str, dict[str, str]]:
    params = {
        "eye": lens.eye,
        "meridian": degrees_text(weak.meridian_deg),
        "power": signed(Decimal(weak.power_d)),
        "prism": fixed(Decimal(abs(weak.prism)), 2),
    }
    if weak.move_mm is None:
        return "no-power", params
    move_mm = Decimal(abs(weak.move_mm))
    return "weak-power", params | {
        "move": fixed(move_mm, 1),
        "doubt": str(POWER_DOUBT_D),
        "change": fixed(move_mm / 10 * POWER_DOUBT_D, 2),
    }
