"""Both lenses cut from top to bottom, without thinning and with one way to thin.

In mm, to one scale, seen from the side with the front to the left; the reference points stand at
one depth. The front is the same both ways; the back without thinning is dashed. Beside the ends
stand the thicknesses before and after.
"""

from collections.abc import Iterator, Mapping
from decimal import Decimal

from pycore.bench.edge import FramedLens
from pycore.bench.thinning import Choice
from pycore.decimals import fixed, from_float
from pycore.optics.prism import Eye, Prism
from pycore.scenes.body import cut_ends, framed_depths, stations, tidy
from pycore.scenes.dial import Scene, Shape
from pycore.words import say

BETWEEN_MM = 44.0  # from one lens's reference point to the other's, with room for the texts
ROOM_MM = 6.0
BESIDE_MM = 12.0


def thinning_scene(
    lenses: Mapping[Eye, FramedLens],
    prescribed: Mapping[Eye, Prism],
    before: Choice,
    after: Choice,
    amount: str,
) -> Scene:
    """The picture of the pair, or of the lens there is.

    Arguments: `lenses`; `prescribed` prism dioptres; the choices `before` and `after`, and
    the `amount` of that one as text. Returns the scene, in mm, y up from the boxing centres.
    """
    shapes: list[Shape] = []
    for number, (eye, lens) in enumerate(lenses.items()):
        shapes += _lens(eye, lens, prescribed[eye], (before, after), number * BETWEEN_MM)
    points = [point for shape in shapes for point in shape.get("points", [])]
    points.append([BETWEEN_MM, 0.0])  # one lens is drawn no larger than two
    across, along = [x for x, _ in points], [y for _, y in points]
    extent = [
        min(across) - BESIDE_MM,
        min(along) - 1.5 * ROOM_MM,
        max(across) + BESIDE_MM,
        max(along) + 1.5 * ROOM_MM,
    ]
    words = say(f"section_rows.thinning.choice-{after.rule}"), amount
    middle = (extent[0] + extent[2]) / 2.0
    shapes.append(
        {
            "role": "way",
            "kind": "label",
            "x": middle,
            "y": extent[1] + ROOM_MM / 3.0,
            "text": say("text.named", name=words[0], value=words[1]),
        }
    )
    return {"unit": "mm", "extent": extent, "shapes": shapes}


def _lens(
    eye: Eye, lens: FramedLens, prescribed: Prism, choices: tuple[Choice, Choice], x: float
) -> Iterator[Shape]:
    (_, low), (_, high) = cut_ends(lens, upright=True)
    up = lens.rim.centre[1]
    places = stations(low - up, high - up)
    # The one without thinning last, so that nothing covers it.
    for choice, dashed in zip(reversed(choices), (False, True), strict=True):
        prism = prescribed + Prism(Decimal(0), choice.up)
        depths = framed_depths(lens, prism, choice.edges[eye].centre_mm, upright=True)
        front = [[tidy(x + depth), tidy(y)] for y, (depth, _) in zip(places, depths, strict=True)]
        back = [[tidy(x + depth), tidy(y)] for y, (_, depth) in zip(places, depths, strict=True)]
        if dashed:
            yield {"role": "before", "kind": "polyline", "points": back, "dashed": True}
        else:
            yield {"role": "outline", "kind": "polygon", "points": [*front, *reversed(back)]}
    yield {"role": "prp", "kind": "point", "x": x, "y": tidy(-up)}
    middle = x + depths[0][1] / 2.0
    for turn, y in ((90.0, high - up + ROOM_MM / 2.0), (270.0, low - up - ROOM_MM / 2.0)):
        figures = [fixed(from_float(choice.edges[eye].at(turn)), 1) for choice in choices]
        text = say("text.before-after", before=figures[0], after=figures[1])
        yield {"role": "end-label", "kind": "label", "x": middle, "y": tidy(y), "text": text}
    yield {
        "role": "eye-label",
        "kind": "label",
        "x": middle,
        "y": tidy(high - up + ROOM_MM),
        "word": f"letters.{eye}",
        "text": "",
    }
