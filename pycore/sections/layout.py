"""The section `layout`: where the points lie in the frame, the smallest blank, moved or ground.

Under `layout`: `frame_pd_mm`, `box`, and for each eye `decentration` (in and up, mm), the points
from the boxing centre, `optical_centre`, `minimum_blank_mm` (by the rule, for the way the prism
can be got), `minimum_blank_outline_mm` (for the rim itself), `minimum_blank_ground_mm` (around
the blank's own centre), `prism_by` (the code of `pycore.bench.decentring.way_of`).
"""

from collections.abc import Iterator
from decimal import Decimal

from pycore.bench.decentring import LARGEST_BLANK_MM
from pycore.bench.layout import Box, Spot, box_of, inwards
from pycore.bench.lens_layout import LensLayout, lens_layout
from pycore.bench.outline import Outline, outline_of
from pycore.bench.segment import segment_of
from pycore.case import Case
from pycore.names import Entry, number
from pycore.scenes.dial import Scene
from pycore.scenes.layout import layout_scene
from pycore.sections.answer import Ask, SectionAnswer
from pycore.sections.layout_rows import frame_notes, layout_rows, lens_notes
from pycore.sections.places import millimetres, spot_entry, spot_text


def layout_section(case: Case) -> SectionAnswer:
    """Answer the section. Arguments: `case`. Returns the answer, mm in the boxing system."""
    job = case.job
    box, rim = box_of(job.frame), outline_of(job.frame)
    lenses = [lens for due in case.dues.values() if (lens := lens_layout(job, due))]
    title, params = _title(lenses)
    frame_pd_mm = box.frame_pd_mm
    return SectionAnswer(
        title=title,
        title_params=params,
        own={
            "frame_pd_mm": _number(frame_pd_mm),
            "box": {"a_mm": _number(box.a_mm), "b_mm": _number(box.b_mm)},
            "centration_shift_mm": _number(job.centration_shift_mm),
            **{lens.eye: _entry(lens) for lens in lenses},
        },
        rows=tuple(layout_rows(frame_pd_mm, lenses)),
        asks=tuple(_asks(rim, lenses)),
        notes=(*frame_notes(job.frame, rim), *lens_notes(job, lenses)),
        draw=lambda: _scenes(box, rim, lenses),
    )


def _scenes(box: Box, rim: Outline | None, lenses: list[LensLayout]) -> dict[str, Scene]:
    scene = layout_scene(box, rim, lenses) if rim else None
    return {"pair": scene} if scene else {}


def _number(value: Decimal | None) -> float | None:
    return None if value is None else number(value)


def _spot_or_none(spot: Spot | None) -> Entry | None:
    return spot_entry(spot) if spot else None


def _rounded(value: float | None) -> float | None:
    return None if value is None else round(value, 9)


def _entry(lens: LensLayout) -> Entry:
    place, blank = lens.place, lens.blank
    prp = place.prp
    decentration = None
    if prp:
        decentration = {
            "in_mm": number(inwards(lens.eye, prp.right_mm)),
            "up_mm": number(prp.up_mm),
        }
    return {
        "decentration": decentration,
        "prp": _spot_or_none(prp),
        "pupil": _spot_or_none(place.pupil),
        "fitting_cross": _spot_or_none(place.cross),
        "segment_top": _spot_or_none(place.segment_top),
        "centration_shift": spot_entry(place.shift),
        "optical_centre": _centre_entry(lens),
        "minimum_blank_mm": _rounded(blank.by_rule_mm if blank else None),
        "minimum_blank_outline_mm": _rounded(blank.for_rim_mm if blank else None),
        "minimum_blank_ground_mm": _rounded(lens.ground.by_rule_mm if lens.ground else None),
        "blank_centre": spot_entry(blank.centre) if blank else None,
        "prism_by": lens.way or None,
        "assumed": [field for field, _ in place.assumed],
    }


def _centre_entry(lens: LensLayout) -> Entry | None:
    centre, in_box, pupil = lens.centre, lens.centre_in_box, lens.place.pupil
    if centre is None:
        return None
    return {
        "from_prp": spot_entry(centre),
        "from_pupil": spot_entry(in_box - pupil) if in_box and pupil else None,
        "from_boxing_centre": spot_entry(in_box) if in_box else None,
    }


def _title(lenses: list[LensLayout]) -> tuple[str, dict[str, str]]:
    texts = {lens.eye: spot_text(lens.eye, lens.place.prp) for lens in lenses if lens.place.prp}
    blanks = [made.by_rule_mm for lens in lenses if (made := lens.made_from)]
    blank = max((size for size in blanks if size is not None), default=None)
    if not texts or blank is None:
        return "needs-frame", {}
    params = {"blank": millimetres(blank)}
    if len(texts) == 2:
        return "pair", params | {"right_lens": texts["right"], "left_lens": texts["left"]}
    eye, text = next(iter(texts.items()))
    return "lens", params | {"eye": eye, "lens": text}


def _asks(rim: Outline | None, lenses: list[LensLayout]) -> Iterator[Ask]:
    """Each field once: what is missing, and what a usual value stands in for."""
    asked: dict[str, Ask] = {}
    for lens in lenses:
        asked |= {field: Ask(field=field) for field in lens.place.missing}
        if lens.place.segment_top and _lacks_width(lens):
            field = f"{lens.eye}.segment.width_mm"
            asked[field] = Ask(field=field)
        asked |= {
            field: Ask(field=field, usual=usual, used=True) for field, usual in lens.place.assumed
        }
        if lens.moved and lens.way != "none" and lens.order.lens.blank_diameter_mm is None:
            field, usual = "lens.blank_diameter_mm", str(LARGEST_BLANK_MM)
            asked[field] = Ask(field=field, usual=usual, used=True)
    for field, usual in rim.assumed if rim else ():
        asked[field] = Ask(field=field, usual=usual, used=True)
    yield from asked.values()


def _lacks_width(lens: LensLayout) -> bool:
    """Tell whether a segment cannot be drawn because nobody said how wide it is."""
    place = segment_of(lens.order)
    return place is not None and place.width_mm is None and bool(place.centre_below_top_mm)
