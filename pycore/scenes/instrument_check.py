"""The rings while the instrument is checked: where the target stood, with nothing in and then."""

from collections.abc import Iterator, Sequence

from pycore.job.bench import Instrument
from pycore.optics.prism import Prism
from pycore.scenes.dial import LABEL_ROOM, Scene, Shape, rings, scale, shape_at


def check_scene(instrument: Instrument, zero: Prism | None, seen: Sequence[Prism]) -> Scene:
    """The rings with every place that was given, the latest as the target.

    Arguments: `instrument`; `zero` where the target stood with nothing in, or None; `seen`
    where it stood with the known prism; places on the rings in prism dioptres. Returns the scene.
    """
    outermost = float(instrument.outermost_ring)
    reach = LABEL_ROOM * max([outermost, *(float(place.amount) for place in seen)])
    places = _places(instrument, zero, seen)
    shapes = [*rings(instrument), *scale(None, outermost, (1, 1)), *places]
    return {"unit": "\u0394", "extent": [-reach, -reach, reach, reach], "shapes": shapes}


def _places(instrument: Instrument, zero: Prism | None, seen: Sequence[Prism]) -> Iterator[Shape]:
    if zero is not None and seen:
        yield shape_at("zero", zero)
    for place in seen[:-1]:
        yield shape_at("repeat", place)
    now = seen[-1] if seen else zero
    if now is not None:
        target = {"kind": "crosses", "angle_deg": 180.0, "style": instrument.target}
        yield shape_at("target", now) | target
