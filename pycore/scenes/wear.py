"""Tilted lenses as they are worn: both from above, each from the side, with light from straight ahead.

In mm, to scale. From above the front looks down the picture, as in the other cuts; from the side
it looks to the left. The line through the front pole turns behind the lens by the prism as worn.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from pycore.decimals import fixed, from_float
from pycore.optics.prism import Eye
from pycore.optics.thickness import Solid
from pycore.optics.tilt import Tilt, Vector
from pycore.scenes.body import Place, depths_along, tidy
from pycore.scenes.dial import Scene, Shape
from pycore.words import say

BEFORE_MM, BEHIND_MM = 16.0, 28.0  # of the line of light
BESIDE_MM = BEFORE_MM + BEHIND_MM + 6.0  # from one side view to the next
ROOM_MM = 8.0


@dataclass(frozen=True, slots=True, kw_only=True)
class WornView:
    """One lens as the picture needs it: `solid` with its prism, `centre_mm` thick; `level` and
    `upright` both ends of a cut, mm from the prism reference point; `prism` as worn, in prism
    dioptres."""

    eye: Eye
    solid: Solid
    centre_mm: float
    level: tuple[Place, Place]
    upright: tuple[Place, Place]
    tilt: Tilt
    prism: Vector


def wear_scene(
    lenses: Sequence[WornView], bridge_mm: float, pantoscopic_deg: float, wrap_deg: float
) -> Scene:
    """The picture of the pair, or of the lens there is.

    Arguments: `lenses`, right first; `bridge_mm` between both; both tilts for the labels.
    Returns the scene, in mm, the reference points at height 0. Raises OutsideSurfaceError.
    """
    shapes: list[Shape] = []
    for lens in lenses:
        nasal = (
            max(x for x, _ in lens.level) if lens.eye == "right" else min(x for x, _ in lens.level)
        )
        middle = (-1 if lens.eye == "right" else 1) * bridge_mm / 2.0 - nasal
        shapes += _view(lens, lens.level, (0, 2), middle)
    edge = max(x for x, _ in _points(shapes))
    for number, lens in enumerate(lenses):
        shapes += _view(lens, lens.upright, (2, 1), edge + number * BESIDE_MM + 2.0 * BEFORE_MM)
    across, along = [x for x, _ in _points(shapes)], [y for _, y in _points(shapes)]
    left, right, low, high = min(across), max(across), min(along), max(along)
    shapes += _label((left + edge) / 2.0, low, "seen-from-above", wrap_deg)
    shapes += _label((edge + BEFORE_MM + right) / 2.0, low, "seen-from-the-side", pantoscopic_deg)
    extent = [left - ROOM_MM, low - ROOM_MM, right + ROOM_MM, high + ROOM_MM]
    return {"unit": "mm", "extent": [tidy(end) for end in extent], "shapes": shapes}


def _points(shapes: Sequence[Shape]) -> list[Place]:
    """Every place that the picture must hold."""
    lines = [
        (shape[x], shape[y])
        for shape in shapes
        for x, y in (("x", "y"), ("x2", "y2"))
        if x in shape
    ]
    return [*lines, *(tuple(point) for shape in shapes for point in shape.get("points", []))]


def _view(
    lens: WornView, ends: tuple[Place, Place], shown: tuple[int, int], middle: float
) -> Iterator[Shape]:
    """One lens cut between two places; `shown` are the directions (0 right, 1 up, 2 towards the
    eye) that run across and along the picture; its front pole at (`middle`, 0)."""
    depths = depths_along(lens.solid, lens.centre_mm, *ends)
    (x, y), (x2, y2) = ends
    last = len(depths) - 1
    spots = [(x + (x2 - x) * i / last, y + (y2 - y) * i / last) for i in range(last + 1)]

    def seen(right: float, up: float, depth: float) -> list[float]:
        worn_x, worn_y, worn_z = lens.tilt.worn(right, up, -depth)
        place = (worn_x, worn_y, -worn_z)
        return [tidy(middle + place[shown[0]]), tidy(place[shown[1]])]

    front = [seen(*spot, depth) for spot, (depth, _) in zip(spots, depths, strict=True)]
    back = [seen(*spot, depth) for spot, (_, depth) in zip(spots, depths, strict=True)]
    yield {"role": "outline", "kind": "polygon", "points": [*front, *reversed(back)]}
    start, end = [0.0, 0.0, -BEFORE_MM], [0.0, 0.0, BEHIND_MM]
    end[0], end[1] = (part / 100.0 * BEHIND_MM for part in lens.prism)
    pole = {"x": tidy(middle), "y": 0.0}
    yield {
        "role": "light",
        "kind": "line",
        "x": tidy(middle + start[shown[0]]),
        "y": start[shown[1]],
        "x2": pole["x"],
        "y2": pole["y"],
    }
    yield {
        "role": "light",
        "kind": "arrow",
        **pole,
        "x2": tidy(middle + end[shown[0]]),
        "y2": tidy(end[shown[1]]),
    }
    yield {"role": "prp", "kind": "point", **pole}
    # From above the letter stands over the temple side, away from the light.
    reach, high = (
        max(back, key=lambda place: abs(place[0]))
        if shown[0] == 0
        else max(back, key=lambda place: place[1])
    )
    yield {
        "role": "eye-label",
        "kind": "label",
        "x": reach,
        "y": high,
        "word": f"letters.{lens.eye}",
        "text": "",
    }


def _label(x: float, y: float, code: str, tilt_deg: float) -> Iterator[Shape]:
    text = say(f"text.{code}", degrees=fixed(from_float(tilt_deg), 1))
    yield {
        "role": "view-label",
        "kind": "label",
        "x": tidy(x),
        "y": tidy(y - ROOM_MM / 2.0),
        "text": text,
    }
