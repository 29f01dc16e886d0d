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


@dataclass(frozen=True, slots=True, kw_only=True)
class Segment:
    """A reading segment. Sizes in mm; `inset_mm` towards the nose."""

    shape: str | None = None
    width_mm: Decimal | None = None
    height_mm: Decimal | None = None
    inset_mm: Decimal | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Frame:
    """A frame in the boxing system (ISO 8624), all in mm."""

    a_mm: Decimal | None = None
    b_mm: Decimal | None = None
    dbl_mm: Decimal | None = None
    ed_mm: Decimal | None = None


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


_LENS_NUMBERS = {
    "index": ("1.4", "2.1"),
    "abbe": ("15", "100"),
    "front_curve": ("-15", "25"),
    "curve_index": ("1.4", "2.0"),
    "centre_thickness_mm": ("0.3", "40"),
    "blank_diameter_mm": ("30", "100"),
}
_SEGMENT_NUMBERS = {"width_mm": ("5", "80"), "height_mm": ("0", "60"), "inset_mm": ("-10", "10")}
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
    frame = Frame(**{name: fields.number(name, *limits) for name, limits in _FRAME_NUMBERS.items()})
    fields.finish()
    return frame


def read_wear(fields: Fields) -> Wear:
    """Read a wear object. Arguments: `fields`. Returns the wear, in mm and degrees."""
    wear = Wear(**{name: fields.number(name, *limits) for name, limits in _WEAR_NUMBERS.items()})
    fields.finish()
    return wear
