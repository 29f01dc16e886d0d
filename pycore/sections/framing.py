"""What the sections on thickness share: lenses in their rims, what is asked, texts of places."""

import math
from collections.abc import Iterable, Mapping
from dataclasses import replace
from decimal import Decimal
from functools import lru_cache

from pycore.bench.body import BodyValues
from pycore.bench.edge import Edge, Framing, edge_of, framing_of
from pycore.bench.outline import outline_of
from pycore.case import Case
from pycore.decimals import fixed, from_float
from pycore.job.document import Job
from pycore.names import Entry, plain
from pycore.optics.prism import EYES, Eye
from pycore.optics.surface import OutsideSurfaceError
from pycore.sections.answer import Ask, Row
from pycore.sections.body_asks import body_asks
from pycore.words import say

PLACES = ("nasal", "top-nasal", "top", "top-temporal", "temporal", "bottom-temporal", "bottom")
MATERIAL = ("index", "front_curve", "minimum_centre_mm", "minimum_edge_mm", "density_g_cm3")
TENTH = Decimal("0.1")
BOX = ("frame.a_mm", "frame.b_mm")


@lru_cache(maxsize=1)
def framings_of(case: Case) -> Mapping[Eye, Framing]:
    """Each ordered lens in its rim, as far as power and frame are known. Arguments: `case`.

    Kept for the case, since several sections ask the same.
    """
    found: dict[Eye, Framing] = {}
    for eye in EYES:
        order, due_ = case.job.order(eye), case.dues.get(eye)
        framing = framing_of(case.job, order, due_) if order and due_ else None
        if framing:
            found[eye] = framing
    return found


def body_in_rim(case: Case, eye: Eye, body: BodyValues) -> BodyValues:
    """A lens's body with the thickness that its rim wants, where a rim is known and no thickness.

    Arguments: `case`; `eye`; `body` of the lens. Returns the body, its thickness to 0.1 mm in
    place of the estimate. Source: the section `edge`.
    """
    framing = framings_of(case).get(eye)
    if framing is None or body.thickness_given:
        return body
    try:
        edge = edge_of(framing.lens, case.dues[eye].expected)
    except OutsideSurfaceError:
        return body
    thickness_mm = from_float(edge.centre_mm).quantize(TENTH)
    usual = {**body.usual, "lens.centre_thickness_mm": format(thickness_mm, "f")}
    return replace(body, thickness_mm=thickness_mm, usual=usual)


def asks_for(framings: Iterable[Framing], job: Job) -> tuple[Ask, ...]:
    """What is asked for: every usual value that was used, or the box where it is missing.

    Arguments: `framings`; `job`. Returns the asks.
    """
    framings = tuple(framings)
    outline = outline_of(job.frame)
    if outline is None:
        return tuple(Ask(field=field) for field in BOX if _lacks(job, field))
    placed: dict[str, str] = dict(outline.assumed)
    taken: dict[Eye, dict[str, str]] = {}
    for framing in framings:
        names = [f"lens.{name}" for name in MATERIAL]
        usual = framing.values.usual
        taken[framing.lens.rim.eye] = {name: usual[name] for name in names if name in usual}
        placed |= framing.placed.usual
    asks = [Ask(field=field, usual=text, used=True) for field, text in placed.items()]
    asks += body_asks(taken) if taken else ()
    if any(framing.values.density_g_cm3 is None for framing in framings):
        asks.append(Ask(field="lens.density_g_cm3"))
    return tuple(asks)


def _lacks(job: Job, field: str) -> bool:
    return getattr(job.frame, field.removeprefix("frame.")) is None


def row_of(code: str, texts: Mapping[Eye, str], pair: str = "", *, assumed: bool = False) -> Row:
    """A row from each lens's text. Arguments: `code`; `texts` by eye; `pair`; `assumed`."""
    right, left = texts.get("right", ""), texts.get("left", "")
    return Row(code=code, right=right, left=left, pair=pair, assumed=assumed)


def material_rows(framings: Mapping[Eye, Framing]) -> list[Row]:
    """What the thickness rests on, one row each, marked where it is a usual value.

    Arguments: `framings`. Returns the rows.
    """
    rows = []
    for name in MATERIAL:
        texts = {}
        for eye, framing in framings.items():
            value = getattr(framing.values, name)
            texts[eye] = "" if value is None else plain(value)
        assumed = any(f"lens.{name}" in framing.values.usual for framing in framings.values())
        code = name.removesuffix("_mm").removesuffix("_g_cm3").replace("_", "-")
        rows.append(row_of(code, texts, assumed=assumed))
    return rows


def takes_usual_values(framings: Iterable[Framing]) -> bool:
    """Tell whether a figure of the material was not given. Arguments: `framings`."""
    return any(f"lens.{name}" in framing.values.usual for framing in framings for name in MATERIAL)


def millimetres(value: float) -> str:
    """A thickness in words, to 0.1 mm. Arguments: `value` mm."""
    return say("text.millimetres", number=tenths(value))


def grams(value: float | None) -> str:
    """A weight in words, to 0.1 g; empty where it is not known. Arguments: `value` g."""
    return "" if value is None else say("text.grams", number=tenths(value))


def tenths(value: float) -> str:
    """A computed value to one decimal. Arguments: `value`.

    >>> tenths(6.24)
    '6.2'
    """
    return fixed(from_float(value), 1)


def place_code(eye: Eye, angle_deg: float) -> str:
    """Name the part of the rim at an angle. Arguments: `eye`; `angle_deg` at the boxing centre.

    >>> place_code("right", 10.0), place_code("left", 10.0), place_code("left", 268.0)
    ('nasal', 'temporal', 'bottom')
    """
    seen = angle_deg if eye == "right" else 180.0 - angle_deg
    return (*PLACES, "bottom-nasal")[round(seen / 45.0) % 8]


def place_text(eye: Eye, angle_deg: float) -> str:
    """The same in words. Arguments as for `place_code`."""
    return say(f"rim_places.{place_code(eye, angle_deg)}")


def rounded(value: float | None) -> float | None:
    """A computed mm or g as the report's number: kept to 1e-6. Arguments: `value`.

    >>> rounded(1.23456789), rounded(-0.0)
    (1.234568, 0.0)
    """
    # Several times quicker than `round`, which shows over whole profiles.
    return None if value is None else math.floor(value * 1e6 + 0.5) / 1e6


def edge_summary(edge: Edge) -> Entry:
    """The few numbers by which edges are compared, in mm and g. Arguments: `edge`."""
    return {
        "centre_mm": rounded(edge.centre_mm),
        "thickest_mm": rounded(edge.thickest[1]),
        "thinnest_mm": rounded(edge.thinnest[1]),
        "weight_g": rounded(edge.weight_g),
    }


def signed_amount(up: Decimal) -> Entry:
    """A vertical prism as amount and base. Arguments: `up` prism dioptres, minus for down.

    >>> signed_amount(Decimal("-1.33"))
    {'amount': 1.33, 'base': 'down', 'y': -1.33}
    """
    base = None if not up else "up" if up > 0 else "down"
    return {"amount": float(abs(up)), "base": base, "y": float(up)}
