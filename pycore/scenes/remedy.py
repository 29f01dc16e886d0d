"""Each lens around its old dot, in mm: the new dot, the way to it, and where a dot would pass.

The picture lies on the lens: it shows where the lens is dotted anew, so the lens moves the other
way in the frame. The region is what passes by the prism, with the other lens moved as shown.
"""

import math
from collections.abc import Iterator, Mapping, Sequence

from pycore.bench.matter import Matter
from pycore.bench.remedy_least import Move, PrismLimit, allows
from pycore.bench.remedy_limits import pieces
from pycore.bench.verdict_prism import prism_checks
from pycore.optics.prism import EYES
from pycore.scenes.dial import Scene, Shape

MARGIN = 1.1  # room around what is drawn
FARTHEST = 3.0  # of the movement: a region that has no end is drawn so far
LEAST_MM = 1.0
CORNERS = 48


def remedy_scene(matter: Matter, move: Move) -> Mapping[str, Scene]:
    """Both lenses' dots. Arguments: `matter`; `move` of the lenses, mm. Returns scenes by eye."""
    reach = max(LEAST_MM, *(abs(part) for part in move))
    checks = tuple(prism_checks(matter))
    choices = pieces(matter, checks, careful=matter.job.decision_rule == "guarded")
    limits = next((piece for piece in choices if allows(piece, move)), ())
    shapes = {
        eye: list(_shapes(limits, move, 2 * at, FARTHEST * reach))
        for at, eye in enumerate(EYES)
        if eye in matter.dues
    }
    # Both pictures to one scale, wide enough for the movement and the region round the new dot.
    regions = [point for drawn in shapes.values() for point in drawn[0]["points"]]
    half = MARGIN * max(reach, *(abs(part) for point in regions for part in point))
    extent = [-half, -half, half, half]
    return {eye: {"unit": "mm", "extent": extent, "shapes": drawn} for eye, drawn in shapes.items()}


def _shapes(
    limits: Sequence[PrismLimit], move: Move, start: int, farthest_mm: float
) -> Iterator[Shape]:
    """One lens; `start` is the place of its part in the movement, `farthest_mm` how far a region is drawn."""
    x, y = 0.0 - move[start], 0.0 - move[start + 1]
    region = _region(limits, move, start, farthest_mm)
    yield {"role": "region", "kind": "polygon", "points": region}
    yield {"role": "old-dot", "kind": "point", "x": 0.0, "y": 0.0}
    if x or y:
        yield {"role": "shift", "kind": "line", "x": 0.0, "y": 0.0, "x2": x, "y2": y}
        yield {"role": "new-dot", "kind": "point", "x": x, "y": y}


def _region(
    limits: Sequence[PrismLimit], move: Move, start: int, farthest_mm: float
) -> list[list[float]]:
    """Where the dot may be: ray by ray from the new dot, which lies within; convex, so complete."""
    points = []
    for number in range(CORNERS):
        angle = 2.0 * math.pi * number / CORNERS
        along = [0.0, 0.0, 0.0, 0.0]
        along[start], along[start + 1] = math.cos(angle), math.sin(angle)
        ray: Move = (along[0], along[1], along[2], along[3])
        reach = min((limit.reach(move, ray) for limit in limits), default=farthest_mm)
        reach = min(max(reach, 0.0), farthest_mm)
        point = (move[start] + reach * along[start], move[start + 1] + reach * along[start + 1])
        points.append([round(0.0 - part, 4) for part in point])
    return points
