"""A lens on its block, from the front and turned over: one base, two views, four angles.

In mm. The front view lies left with the block's centre at the origin; the back view beside it is
its mirror image, as the surfacer sees the lens on the block.
"""

from collections.abc import Iterator

from pycore.angles import cosine, sine
from pycore.bench.surfacing import Surfaced
from pycore.decimals import fixed, from_float
from pycore.scenes.dial import Scene, Shape
from pycore.words import say

GAP_MM = 8.0
LABEL_ROOM_MM = 7.0
ARROW_SHARE, RING_SHARE = 0.8, 0.6  # of the block's radius


def surfacing_scene(lens: Surfaced) -> Scene:
    """The picture of one lens on its block. Arguments: `lens`. Returns the scene, in mm."""
    radius = float(lens.blocking.block_diameter_mm) / 2.0
    blank = float(lens.blank_given_mm or 0) / 2.0
    reach = max(radius, blank) + LABEL_ROOM_MM
    beside = 2.0 * reach + GAP_MM
    shapes = [*_view(lens, radius, blank, 0.0, 1), *_view(lens, radius, blank, beside, -1)]
    return {"unit": "mm", "extent": [-reach, -reach, beside + reach, reach], "shapes": shapes}


def _view(lens: Surfaced, radius: float, blank: float, x: float, hand: int) -> Iterator[Shape]:
    """One view with its centre at `x`; `hand` is 1 from the front, -1 from the back."""
    side = "front" if hand == 1 else "back"
    if blank:
        yield {"role": "blank", "kind": "circle", "x": x, "y": 0.0, "radius": blank}
    yield {"role": "block", "kind": "circle", "x": x, "y": 0.0, "radius": radius}
    yield {"role": "axis", "kind": "line", "x": x - radius, "y": 0.0, "x2": x + radius, "y2": 0.0}
    yield {"role": "axis", "kind": "line", "x": x, "y": -radius, "x2": x, "y2": radius}
    prp_x = x + hand * float(lens.blocking.prp_right_mm)
    yield {"role": "prp", "kind": "point", "x": prp_x, "y": float(lens.blocking.prp_up_mm)}
    below = -max(radius, blank) - LABEL_ROOM_MM / 2.0
    yield {
        "role": "view-label",
        "kind": "label",
        "x": x,
        "y": below,
        "text": say(f"section_rows.surfacing.view-{side}"),
    }
    if lens.angles:
        base = lens.angles.lens_from_front if hand == 1 else lens.angles.lens_from_back
        ring = lens.angles.ring_from_front if hand == 1 else lens.angles.ring_from_back
        yield from _arrow("arrow", x, base, radius * ARROW_SHARE, radius)
        yield from _arrow("ring-arrow", x, ring, radius * RING_SHARE, radius)


def _arrow(role: str, x: float, turn_deg: float, length: float, radius: float) -> Iterator[Shape]:
    """An arrow from the block's centre, its angle written beyond the block's edge."""
    across, along = cosine(turn_deg), sine(turn_deg)
    yield {
        "role": role,
        "kind": "arrow",
        "x": x,
        "y": 0.0,
        "x2": x + length * across,
        "y2": length * along,
    }
    far = radius + LABEL_ROOM_MM / 2.0
    yield {
        "role": f"{role}-label",
        "kind": "label",
        "x": x + far * across,
        "y": far * along,
        "text": say("text.degrees", number=fixed(from_float(turn_deg), 0)),
    }
