"""The section `near`: the pair at the reading point, the slab, what the eyes get."""

from collections.abc import Iterator, Mapping
from decimal import Decimal

from pycore.bench.body import BodyValues, body_values
from pycore.bench.near import (
    SLAB_LEAST,
    USUAL_CENTRE_MM,
    USUAL_DISTANCE_MM,
    Near,
    effective_at_near,
    near_of,
    pair_prism,
    slab_line,
)
from pycore.bench.reading import LensAtReading, lens_at_reading
from pycore.case import Case
from pycore.decimals import fixed, snap
from pycore.names import Entry, number, plain, prism_entry
from pycore.optics.prism import Eye, Prism
from pycore.scenes.dial import Scene
from pycore.scenes.near import near_scene
from pycore.sections.answer import Ask, Row, SectionAnswer
from pycore.sections.body_asks import body_asks
from pycore.sections.near_notes import near_notes
from pycore.sections.near_slab import (
    amount_text,
    eye_row,
    millimetres,
    pair_text,
    pair_texts,
    shown_texts,
    slab_entry,
    slab_rows,
)

Lenses = Mapping[Eye, LensAtReading]


def near_section(case: Case) -> SectionAnswer:
    """The section. Arguments: `case`. Returns the answer: numbers in prism dioptres and mm."""
    found = {eye: lens_at_reading(case.job, due_) for eye, due_ in case.dues.items()}
    lenses: Lenses = {eye: lens for eye, lens in found.items() if lens}
    near = near_of(lenses["right"], lenses["left"]) if len(lenses) == 2 else None
    effects = {eye: _effective(case, lens) for eye, lens in lenses.items()}
    eyes = {eye: _eye_entry(lens, effects[eye]) for eye, lens in lenses.items()}
    own = _own(case, near, lenses, effects)
    title, params = _title(near)
    return SectionAnswer(
        title=title,
        title_params=params,
        own=own,
        eyes=eyes,
        rows=tuple(_rows(case, near, lenses, effects, eyes, own)),
        asks=tuple(_asks(case, near, lenses)),
        notes=tuple(near_notes(case, near, lenses, effects)),
        draw=lambda: _scenes(case, near, lenses),
    )


def _effective(case: Case, lens: LensAtReading) -> Prism | None:
    """The prescribed prism as the eye gets it at near, or None where no thin formula tells."""
    wear = case.job.wear
    return effective_at_near(
        case.dues[lens.eye].prescribed,
        lens.reading_power,
        wear.reading_distance_mm or USUAL_DISTANCE_MM,
        wear.rotation_centre_mm or USUAL_CENTRE_MM,
    )


def _title(near: Near | None) -> tuple[str, Mapping[str, str]]:
    if near is None:
        return "one-lens", {}
    if not near.vertical_known:
        return "unknown", {}
    if not near.slabs:
        return "none", {}
    slab = near.slabs[0]
    code = "slab" if near.advised else "small"
    return code, {
        "amount": amount_text(slab.amount, SLAB_LEAST),
        "eye": slab.eye,
        "word": slab.base,
    }


def _own(
    case: Case, near: Near | None, lenses: Lenses, effects: Mapping[Eye, Prism | None]
) -> Entry | None:
    """The pair's part of the report; what cannot be told is left out."""
    if near is None:
        return None
    own: Entry = {
        "horizontal": number(near.reading.horizontal),
        "distance": {
            "vertical": number(near.distance.vertical),
            "horizontal": number(near.distance.horizontal),
        },
        "change": {"horizontal": number(near.change.horizontal)},
        "shown": {"horizontal": pair_text("horizontal", near.reading.horizontal)},
    }
    if near.vertical_known:
        own["vertical"] = number(near.reading.vertical)
        own["change"]["vertical"] = number(near.change.vertical)
        own["shown"]["vertical"] = pair_text("vertical", near.reading.vertical)
        own["slab"] = slab_entry(case, near, lenses)
    right, left = effects["right"], effects["left"]
    if right is not None and left is not None:
        effective = pair_prism(right, left)
        own["effective"] = {
            "vertical": number(effective.vertical),
            "horizontal": number(effective.horizontal),
        }
    return own


def _eye_entry(lens: LensAtReading, effective: Prism | None) -> Entry:
    eye = lens.eye
    return {
        "reading_point": {
            "right_mm": number(lens.point.right_mm),
            "up_mm": number(lens.point.up_mm),
        },
        "at_reading": prism_entry(eye, lens.prism),
        "through_segment": lens.segment is not None,
        "beyond_thin": lens.beyond_thin,
        "effective": prism_entry(eye, effective) if effective is not None else None,
    }


def _rows(
    case: Case,
    near: Near | None,
    lenses: Lenses,
    effects: Mapping[Eye, Prism | None],
    eyes: Mapping[Eye, Entry],
    own: Entry | None,
) -> Iterator[Row]:
    yield from _point_rows(lenses)
    texts = shown_texts({eye: entry["at_reading"] for eye, entry in eyes.items()})
    yield eye_row("at-reading", texts, assumed=any(_open_segment(lens) for lens in lenses.values()))
    if near and own:
        yield from _pair_rows(case, near, lenses, own)
    jumps = {
        eye: fixed(jump, 2)
        for eye, lens in lenses.items()
        if lens.segment and (jump := lens.segment.jump) is not None
    }
    if jumps:
        usual = any(lens.segment and lens.segment.centre_assumed for lens in lenses.values())
        yield eye_row("jump", jumps, assumed=usual)
    if _has_prism(case):
        texts = shown_texts({eye: entry["effective"] for eye, entry in eyes.items()})
        yield from _effective_rows(case, effects, texts)


def _pair_rows(case: Case, near: Near, lenses: Lenses, own: Entry) -> Iterator[Row]:
    assumed = _assumed(lenses) or near.alike
    yield Row(code="distance", pair=pair_texts(near.distance))
    if near.vertical_known:
        yield Row(code="total", pair=pair_texts(near.reading), assumed=assumed)
        yield Row(code="change", pair=pair_texts(near.change), assumed=assumed)
        yield from slab_rows(case, near, lenses, own["slab"], assumed=assumed)
    else:
        yield Row(code="total-horizontal", pair=own["shown"]["horizontal"], assumed=assumed)


def _point_rows(lenses: Lenses) -> Iterator[Row]:
    """Where the wearer reads; the usual figures are marked."""
    for code in ("depth", "inset"):
        name = f"wear.reading_{code}_mm"
        texts = {
            eye: millimetres(lens.point.depth_mm if code == "depth" else lens.point.inset_mm)
            for eye, lens in lenses.items()
        }
        assumed = any(item.field == name for lens in lenses.values() for item in lens.point.assumed)
        yield eye_row(code, texts, assumed=assumed)


def _assumed(lenses: Lenses) -> bool:
    """Tell whether a usual value stands behind the pair's figures. Usual depths of the optical
    centre that are the same in both segments of one add cancel."""
    segments = [lens.segment for lens in lenses.values()]
    if any(lens.point.assumed for lens in lenses.values()):
        return True
    if any(place and place.centre_right_mm is None for place in segments):
        return True
    said = {
        (place.add, place.centre_below_top_mm, place.centre_assumed) if place else None
        for place in segments
    }
    return len(said) > 1 and any(place and place.centre_assumed for place in segments)


def _open_segment(lens: LensAtReading) -> bool:
    """Tell whether the lens's own figure rests on a usual or unknown place."""
    segment = lens.segment
    unknown = segment is not None and (
        segment.centre_assumed or bool(segment.missing) or segment.centre_right_mm is None
    )
    return unknown or bool(lens.point.assumed)


def _has_prism(case: Case) -> bool:
    return any(snap(due_.prescribed.amount) for due_ in case.dues.values())


def _effective_rows(
    case: Case, effects: Mapping[Eye, Prism | None], texts: Mapping[Eye, str]
) -> Iterator[Row]:
    wear = case.job.wear
    away, centre = wear.reading_distance_mm, wear.rotation_centre_mm
    for code, given, usual in (
        ("reading-distance", away, USUAL_DISTANCE_MM),
        ("rotation-centre", centre, USUAL_CENTRE_MM),
    ):
        yield Row(code=code, pair=millimetres(given or usual), assumed=given is None)
    assumed = away is None or centre is None
    yield eye_row("effective", texts, assumed=assumed)
    right, left = effects.get("right"), effects.get("left")
    if right is not None and left is not None:
        yield Row(code="effective-pair", pair=pair_texts(pair_prism(right, left)), assumed=assumed)


def _asks(case: Case, near: Near | None, lenses: Lenses) -> Iterator[Ask]:
    """What is missing, with the usual value that was taken for it."""
    for eye in ("right", "left"):
        if eye not in lenses:
            yield Ask(field=f"{eye}.sphere")
    usual = {item.field: item.usual for lens in lenses.values() for item in lens.point.assumed}
    wear = case.job.wear
    if _has_prism(case) and wear.reading_distance_mm is None:
        usual["wear.reading_distance_mm"] = USUAL_DISTANCE_MM
    if _has_prism(case) and wear.rotation_centre_mm is None:
        usual["wear.rotation_centre_mm"] = USUAL_CENTRE_MM
    for lens in lenses.values():
        yield from _segment_asks(lens, usual)
        if lens.order.lens.design is None and lens.order.verified.add:
            yield Ask(field=f"{lens.eye}.design")
    for field, value in usual.items():
        yield Ask(field=field, usual=plain(value), used=True)
    if near and near.advised:
        bodies = {
            slab.eye: body_values(lenses[slab.eye].order, case.job.frame) for slab in near.slabs
        }
        taken = {eye: _index_taken(body) for eye, body in bodies.items() if body}
        yield from body_asks(taken)


def _index_taken(body: BodyValues) -> dict[str, str]:
    """The usual index where nobody gave one, by field. Arguments: `body` of the lens."""
    return {field: text for field, text in body.usual.items() if field == "lens.index"}


def _segment_asks(lens: LensAtReading, usual: dict[str, Decimal]) -> Iterator[Ask]:
    place = lens.segment
    if place is None:
        return
    for field in place.missing:
        yield Ask(field=field)
    if place.centre_right_mm is None:
        usual[f"{lens.eye}.segment.inset_mm"] = lens.point.inset_mm
    if place.centre_assumed and place.centre_below_top_mm is not None:
        usual[f"{lens.eye}.segment.centre_below_top_mm"] = place.centre_below_top_mm


def _scenes(case: Case, near: Near | None, lenses: Lenses) -> dict[str, Scene]:
    eye_with_slab = near.slabs[0].eye if near and near.advised and near.slabs else None
    return {
        eye: near_scene(case.job, lens, slab_line(lens) if eye == eye_with_slab else None)
        for eye, lens in lenses.items()
    }
