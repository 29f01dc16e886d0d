"""The outline of a reading segment as a polygon."""

from pycore.angles import cosine, sine
from pycore.bench.segment import SegmentPlace

STEP_DEG = 6
WIDEST_MM = 80.0  # a full-width segment is cut at this width; the rim hides the rest


def segment_points(place: SegmentPlace) -> list[list[float]]:
    """A segment's rim, [x, y] in mm from the middle of its top, y up.

    Arguments: `place`. Round and flat-topped ones are circles, cut by the top; a full-width one
    is everything below its line. Returns no points where its width or its depth is not known.
    """
    if place.centre_below_top_mm is None:
        return []
    below = float(place.centre_below_top_mm)
    if place.width_mm is None:
        half = WIDEST_MM / 2.0
        return [[-half, 0.0], [half, 0.0], [half, -half], [-half, -half]] if not below else []
    radius = float(place.width_mm) / 2.0
    half_chord = max(radius * radius - below * below, 0.0) ** 0.5
    rim = []
    for degrees in range(0, 360, STEP_DEG):
        x, y = radius * cosine(degrees), radius * sine(degrees) - below
        if y > 0.0:
            x, y = min(max(x, -half_chord), half_chord), 0.0
        rim.append([round(x, 3), round(y, 3)])
    return rim
