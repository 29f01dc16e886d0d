"""The notes of the section `field`: what its figures leave out, and where they stop holding."""

from collections.abc import Iterator, Mapping

from pycore.bench.field import Agreement, LensField, Reading
from pycore.bench.layout import Spot
from pycore.bench.segment import segment_of
from pycore.decimals import fixed
from pycore.optics.prism import Eye
from pycore.sections.places import spot_text

Notes = Iterator[tuple[str, dict[str, str]]]


def field_notes(
    lenses: Mapping[Eye, LensField],
    readings: Mapping[Eye, list[Reading]],
    agreement: Agreement | None,
) -> Notes:
    """What a person should know. Arguments: `lenses`, `readings` by eye; `agreement` of the pair."""
    for eye, lens in lenses.items():
        yield from _lens_notes(lens)
        yield from _reading_notes(eye, readings[eye])
    if agreement and any(lens.order.verified.add for lens in lenses.values()):
        yield "pair-distance-only", {}


def _lens_notes(lens: LensField) -> Notes:
    params = {"eye": str(lens.eye)}
    if not lens.due.vertical_known:
        yield "thinning-unknown", params
    if lens.order.lens.design == "progressive":
        yield "progressive", params
    if lens.order.lens.design == "trifocal":
        yield "trifocal", params
    if lens.order.lens.aspheric:
        yield "aspheric", params
    if segment_of(lens.order) and not lens.segment:
        yield "segment-height-missing", params


def _reading_notes(eye: Eye, readings: list[Reading]) -> Notes:
    differing = [reading for reading in readings if reading.differs]
    if differing:
        worst = max(differing, key=lambda reading: reading.difference or 0)
        spot = Spot(worst.place.right_mm, worst.place.up_mm)
        amount = fixed(worst.difference or worst.thin.amount, 2)
        yield "differs", {"eye": eye, "difference": amount, "place": spot_text(eye, spot)}
    if any(reading.beyond_thin for reading in readings):
        yield "beyond-thin", {"eye": eye}
    if any(reading.exact is None for reading in readings):
        yield "no-exact", {"eye": eye}
