"""The prism all over a lens as arrows, and the pair's vertical imbalance as lines and a zone.

Coordinates in mm from the prism reference point, x to the observer's right, y up. An arrow points
to the base; its length is the prism times the scene's `mm_per_prism`.
"""

import math
from collections.abc import Iterator, Sequence
from decimal import Decimal

from pycore.bench.field import Agreement, LensField, Reading
from pycore.bench.layout import Spot
from pycore.decimals import fixed
from pycore.job.body import Place
from pycore.optics.prism import prism_parts
from pycore.scenes.dial import Scene, Shape
from pycore.scenes.rim import Points, chords, holds, within
from pycore.scenes.segment import segment_points

STEP_MM = 6.0
MARGIN_MM = 3.0
LONGEST_MM = 9.0
LINES = 6  # at most so many lines of imbalance on each side of none
