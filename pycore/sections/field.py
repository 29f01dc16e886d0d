"""The section `field`, "prism anywhere": what is read at any point, and where the pair agrees.

Under each eye's `field`: `points` in the order asked for, each with `thin` and `exact` (null
where no light passes or no such lens can be made), `difference` between both, `in_segment`,
`beyond_thin` (above 20 prism dioptres); `optical_centre`. Under `field`: `limit` and `agreement`
(the zone within the limit).
"""

from collections.abc import Iterator, Mapping

from pycore.bench.decentring import decentring_of
from pycore.bench.expected import Due
from pycore.bench.field import (
    USUAL_LIMIT,
    Agreement,
    LensField,
    Reading,
    agreement_of,
    lens_field,
)
from pycore.bench.layout import Spot, place_of
from pycore.bench.outline import outline_of
from pycore.case import Case
from pycore.decimals import fixed
from pycore.job.document import Job
from pycore.names import Entry, number, prism_entry
from pycore.optics.prism import Eye
from pycore.scenes.dial import Scene
from pycore.scenes.field import lens_scene, pair_scene
from pycore.scenes.rim import Points, rim_around, shared_rim
from pycore.sections.answer import Ask, Row, SectionAnswer
from pycore.sections.field_notes import field_notes
from pycore.sections.places import millimetres, spot_text
from pycore.words import say

BODY_FIELDS = ("lens.index", "lens.front_curve", "lens.centre_thickness_mm")


def field_section(case: Case) -> SectionAnswer:
    """Answer the section. Arguments: `case`. Returns the answer, prism dioptres and mm."""
    job = case.job
    lenses = {due.eye: lens for due in case.dues.values() if (lens := lens_field(job, due))}
    readings = {
        eye: [lens.reading(place) for place in job.points.get(eye, ())]
        for eye, lens in lenses.items()
    }
    limit = job.field_limit or USUAL_LIMIT
    agreement = None
    if len(lenses) == 2:
        agreement = agreement_of(lenses["right"].power, lenses["left"].power, limit)
    entries = {eye: [_point_entry(eye, one) for one in readings[eye]] for eye in lenses}
    texts = {
        eye: [_text(eye, *pair) for pair in zip(readings[eye], entries[eye], strict=True)]
        for eye in lenses
    }
    title, params = _title(entries, agreement)
    return SectionAnswer(
        title=title,
        title_params=params,
        own={"limit": number(limit), "agreement": _agreement_entry(agreement)},
        eyes={eye: {"points": entries[eye]} for eye in lenses},
        rows=tuple(_rows(texts, agreement)),
        asks=tuple(_asks(job, lenses, readings)),
        notes=tuple(field_notes(lenses, readings, agreement)),
        draw=lambda: _scenes(job, case.dues, lenses, readings, agreement),
    )


# --- numbers for callers -------------------------------------------------------------------------


def _agreement_entry(agreement: Agreement | None) -> Entry | None:
    if agreement is None:
        return None
    return {
        "per_mm": {"right": round(agreement.x_per_mm, 9), "up": round(agreement.y_per_mm, 9)},
        "half_width_mm": _rounded(agreement.half_width_mm),
        "down_mm": _rounded(agreement.down_mm),
    }


def _rounded(value: float | None) -> float | None:
    return None if value is None else round(value, 9)


def _point_entry(eye: Eye, reading: Reading) -> Entry:
    difference = reading.difference
    return {
        "right_mm": number(reading.place.right_mm),
        "up_mm": number(reading.place.up_mm),
        "thin": prism_entry(eye, reading.thin),
        "exact": prism_entry(eye, reading.exact) if reading.exact else None,
        "difference": None if difference is None else number(difference),
        "differs": reading.differs,
        "in_segment": reading.in_segment,
        "beyond_thin": reading.beyond_thin,
    }


# --- texts for people ----------------------------------------------------------------------------


def _title(
    entries: Mapping[Eye, list[Entry]], agreement: Agreement | None
) -> tuple[str, dict[str, str]]:
    """The point last asked for on each lens, else how far the pair agrees."""
    last = {eye: _short_text(found[-1]) for eye, found in entries.items() if found}
    if len(last) == 2:
        return "points", {"right_point": last["right"], "left_point": last["left"]}
    for eye, text in last.items():
        return "point", {"eye": eye, "point": text}
    if agreement:
        params = {"limit": fixed(agreement.limit, 2)}
        if agreement.half_width_mm is None:
            return "agrees-everywhere", params
        if agreement.down_mm is None:
            return "agrees-aside", params | {"aside": millimetres(agreement.half_width_mm)}
        return "agrees-down", params | {"down": millimetres(agreement.down_mm)}
    return ("touch" if entries else "needs-power"), {}


def _short_text(entry: Entry) -> str:
    """One point's prism as it is to be expected: exact where it is known."""
    return str((entry["exact"] or entry["thin"])["shown"]["text"])


def _text(eye: Eye, reading: Reading, entry: Entry) -> str:
    """One point in words: its place, its prism, and the thin one beside it where it differs."""
    place = spot_text(eye, Spot(reading.place.right_mm, reading.place.up_mm))
    thin = entry["thin"]["shown"]["text"]
    if reading.differs:
        exact = entry["exact"]["shown"]["text"]
        return say("section_texts.field.point-exact", place=place, prism=exact, thin=thin)
    return say("section_texts.field.point", place=place, prism=thin)


def _rows(texts: Mapping[Eye, list[str]], agreement: Agreement | None) -> Iterator[Row]:
    for index in range(max(map(len, texts.values()), default=0)):
        row = {eye: found[index] for eye, found in texts.items() if index < len(found)}
        yield Row(code="point", right=row.get("right", ""), left=row.get("left", ""))
    if agreement and agreement.half_width_mm is not None:
        yield Row(code="zone", pair=millimetres(2.0 * agreement.half_width_mm))
    if agreement and agreement.down_mm is not None:
        yield Row(code="down", pair=millimetres(agreement.down_mm))


def _asks(
    job: Job, lenses: Mapping[Eye, LensField], readings: Mapping[Eye, list[Reading]]
) -> Iterator[Ask]:
    if job.field_limit is None and len(lenses) == 2:
        yield Ask(field="field_limit", usual=str(USUAL_LIMIT), used=True)
    usual: dict[str, str] = {}
    for eye, lens in lenses.items():
        if readings[eye]:
            usual = {**lens.values.usual, **usual}
        if lens.segment:
            for field in lens.segment.missing:
                yield Ask(field=field)
    for field in BODY_FIELDS:
        if field in usual:
            yield Ask(field=field, usual=usual[field], used=True)


# --- pictures ------------------------------------------------------------------------------------


def _scenes(
    job: Job,
    dues: Mapping[Eye, Due],
    lenses: Mapping[Eye, LensField],
    readings: Mapping[Eye, list[Reading]],
    agreement: Agreement | None,
) -> dict[str, Scene]:
    rims = {eye: _rim(job, eye) for eye in lenses}
    scenes: dict[str, Scene] = {}
    for eye, lens in lenses.items():
        moving = decentring_of(lens.order, dues[eye])
        centre = moving.centre if moving else None
        scenes[eye] = lens_scene(lens, rims[eye], readings[eye], centre)
    if agreement:
        shared = shared_rim(rims["right"], rims["left"])
        scenes["pair"] = pair_scene(agreement, rims["right"], rims["left"], shared)
    return scenes


def _rim(job: Job, eye: Eye) -> Points:
    place = place_of(job, eye)
    return rim_around(outline_of(job.frame), eye, place.prp if place else None)
