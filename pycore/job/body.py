"""The lens as a body, the frame and how it is worn, as written down."""

from dataclasses import dataclass, replace
from decimal import Decimal

from pycore.job.fields import Fields

DESIGNS = ("single-vision", "bifocal", "trifocal", "progressive", "near")
SEGMENTED = ("bifocal", "trifocal")


@dataclass(frozen=True, slots=True, kw_only=True)
class Lens:
    """Design, material and body. Curves in dioptres, thickness and diameter in mm."""

    design: str | None = None
    index: Decimal | None = None
    abbe: Decimal | None = None
    front_curve: Decimal | None = None
    curve_index: Decimal = Decimal("1.530")
    centre_thickness_mm: Decimal | None = None
    aspheric: bool = False
    blank_diameter_mm: Decimal | None = None
    density_g_cm3: Decimal | None = None
    minimum_centre_mm: Decimal | None = None
    minimum_edge_mm: Decimal | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Segment:
    """A reading segment. Sizes in mm; `inset_mm` towards the nose; `height_mm` its top above
    the lowest boxing line; `centre_below_top_mm` where its optical centre lies."""

    shape: str | None = None
    width_mm: Decimal | None = None
    height_mm: Decimal | None = None
    inset_mm: Decimal | None = None
    centre_below_top_mm: Decimal | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Frame:
    """A frame in the boxing system (ISO 8624), all in mm.

    `outline_mm`: radii from the boxing centre of the right lens at equal steps of angle, the
    first at 0 degrees, counter-clockwise, seen from the front (the left lens is its mirror).
    """

    a_mm: Decimal | None = None
    b_mm: Decimal | None = None
    dbl_mm: Decimal | None = None
    ed_mm: Decimal | None = None
    shape: str | None = None
    outline_mm: tuple[Decimal, ...] = ()
    drilled: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Wear:
    """How the frame is worn: distances in mm, tilts in degrees."""

    vertex_tested_mm: Decimal | None = None
    vertex_worn_mm: Decimal | None = None
    pantoscopic_deg: Decimal | None = None
    wrap_deg: Decimal | None = None
    reading_distance_mm: Decimal | None = None
    reading_depth_mm: Decimal | None = None
    reading_inset_mm: Decimal | None = None
    rotation_centre_mm: Decimal | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Surfacing:
    """How a lens is blocked for surfacing. Lengths in mm.

    `prp_right_mm`, `prp_up_mm`: the prism reference point from the blank's (block's) centre.
    """

    block_diameter_mm: Decimal | None = None
    ring_index: Decimal | None = None
    prp_right_mm: Decimal | None = None
    prp_up_mm: Decimal | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Place:
    """A point of a lens from its prism reference point, seen from the front, in mm."""

    right_mm: Decimal
    up_mm: Decimal


SHAPES = ("round", "oval", "rounded-rectangle", "teardrop")
MAXIMUM_OUTLINE = 360
_LENS_NUMBERS = {
    "index": ("1.4", "2.1"),
    "abbe": ("15", "100"),
    "front_curve": ("-15", "25"),
    "curve_index": ("1.4", "2.0"),
    "centre_thickness_mm": ("0.3", "40"),
    "blank_diameter_mm": ("30", "100"),
    "density_g_cm3": ("0.8", "6"),
    "minimum_centre_mm": ("0.3", "20"),
    "minimum_edge_mm": ("0", "20"),
}
_SEGMENT_NUMBERS = {
    "width_mm": ("5", "80"),
    "height_mm": ("0", "60"),
    "inset_mm": ("-10", "10"),
    "centre_below_top_mm": ("-30", "40"),
}
_FRAME_NUMBERS = {
    "a_mm": ("20", "90"),
    "b_mm": ("10", "80"),
    "dbl_mm": ("5", "40"),
    "ed_mm": ("20", "100"),
}
_WEAR_NUMBERS = {
    "vertex_tested_mm": ("0", "40"),
    "vertex_worn_mm": ("0", "40"),
    "pantoscopic_deg": ("-30", "45"),
    "wrap_deg": ("-10", "45"),
    "reading_distance_mm": ("50", "2000"),
    "reading_depth_mm": ("0", "40"),
    "reading_inset_mm": ("-10", "10"),
    "rotation_centre_mm": ("5", "60"),
}
_SURFACING_NUMBERS = {
    "block_diameter_mm": ("20", "90"),
    "ring_index": ("1.4", "2.0"),
    "prp_right_mm": ("-40", "40"),
    "prp_up_mm": ("-40", "40"),
}


def read_lens(fields: Fields, base: Lens) -> Lens:
    """Read a lens's fields out of an object, over those of `base`.

    Arguments: `fields` (a lens object or an eye); `base` what holds where nothing stands.
    Returns the lens.
    """
    read = {name: fields.number(name, *limits) for name, limits in _LENS_NUMBERS.items()}
    changes = {name: value for name, value in read.items() if value is not None}
    design = fields.word("design", DESIGNS) or base.design
    aspheric = fields.flag("aspheric") or (base.aspheric and not fields.has("aspheric"))
    return replace(base, design=design, aspheric=aspheric, **changes)


def read_segment(fields: Fields) -> Segment:
    """Read a segment object. Arguments: `fields`. Returns the segment, sizes in mm."""
    numbers = {name: fields.number(name, *limits) for name, limits in _SEGMENT_NUMBERS.items()}
    segment = Segment(shape=fields.text("shape"), **numbers)
    fields.finish()
    return segment


def read_frame(fields: Fields) -> Frame:
    """Read a frame object. Arguments: `fields`. Returns the frame, in mm."""
    frame = Frame(
        **{name: fields.number(name, *limits) for name, limits in _FRAME_NUMBERS.items()},
        shape=fields.word("shape", SHAPES),
        outline_mm=fields.numbers("outline_mm", MAXIMUM_OUTLINE, "5", "60"),
        drilled=fields.flag("drilled"),
    )
    fields.finish()
    return frame


def read_wear(fields: Fields) -> Wear:
    """Read a wear object. Arguments: `fields`. Returns the wear, in mm and degrees."""
    wear = Wear(**{name: fields.number(name, *limits) for name, limits in _WEAR_NUMBERS.items()})
    fields.finish()
    return wear


def read_surfacing(fields: Fields) -> Surfacing:
    """Read one eye's surfacing object. Arguments: `fields`. Returns it, in mm."""
    numbers = {name: fields.number(name, *limits) for name, limits in _SURFACING_NUMBERS.items()}
    fields.finish()
    return Surfacing(**numbers)


def read_places(fields: Fields, name: str, most: int) -> tuple[Place, ...]:
    """Read a list of points. Arguments: `fields`; `name` of the list; `most` points."""
    places = []
    for item in fields.children(name, most):
        right_mm, up_mm = item.number("right_mm", "-60", "60"), item.number("up_mm", "-60", "60")
        for part in ("right_mm", "up_mm"):
            if not item.has(part):
                item.refuse("number-missing", part, "", "type-number")
        item.finish()
        if right_mm is not None and up_mm is not None:
            places.append(Place(right_mm=right_mm, up_mm=up_mm))
    return tuple(places)
