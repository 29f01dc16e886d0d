"""Where in the frame a lens shows what is due: what that place says of the lens that lies there.

The prism changes from the ordered point by F r / 10, F the power of the lens that lies there:
another one if both were exchanged, turned with the lens. The place is measured in mm, the rest is
reckoned as prism; `log_steepness` makes a density of prisms one of places.
Source: p(r) = p0 - F r, AJOPO 1976;53:27-33; change of variables in a probability density.
"""

import math
from typing import NamedTuple

from pycore.bench.cause_seen import PowerParts, Vector

# A place is looked for within some 30 mm. Below this power the prism changes on that way by less
# than it scatters (0.15 prism dioptres): it could be found anywhere in the frame.
FLATTEST_D = 0.05


class Way(NamedTuple):
    """From the ordered point to the place found, mm to the right and up; None where not measured.

    Slid along one meridian only, the prism across it was left as it was.
    """

    right_mm: float | None
    up_mm: float | None

    @property
    def measured(self) -> bool:
        """Tell whether anything of it was measured."""
        return self.right_mm is not None or self.up_mm is not None

    def slopes(self, power: PowerParts) -> tuple[float, float, float]:
        """How fast a lens of this power changes its prism on the way: Fxx, Fxy, Fyy in dioptres.

        >>> Way(1.0, 2.0).slopes((3.0, 0.5, 0.25)), Way(None, 2.0).slopes((3.0, 0.5, 0.25))
        ((2.5, 0.25, 3.5), (2.5, 0.0, 3.5))
        """
        mean, j0, j45 = power
        return mean - j0, 0.0 if None in self else j45, mean + j0

    def change(self, power: PowerParts) -> Vector:
        """F r / 10: how much the prism of a lens of this power changes on the way, prism dioptres.

        >>> Way(4.0, -2.0).change((3.0, 0.5, 0.0))
        (1.0, -0.7)
        """
        xx, xy, yy = self.slopes(power)
        across, along = self.right_mm or 0.0, self.up_mm or 0.0
        return (xx * across + xy * along) / 10.0, (xy * across + yy * along) / 10.0

    def parts_of(self, prism: Vector) -> list[float]:
        """The components of a prism along which the place was measured.

        >>> Way(None, 2.0).parts_of((1.0, 0.5))
        [0.5]
        """
        return [part for part, way in zip(prism, self, strict=True) if way is not None]

    def variances(self, power: PowerParts, position_var: float) -> tuple[float, float, float]:
        """What an uncertain place makes of the prism, F s F / 100: xx, xy, yy, prism dioptres
        squared. Arguments: `power` in dioptres; `position_var` of each coordinate, mm squared.

        >>> Way(1.0, 2.0).variances((5.0, 0.0, 0.0), 4.0)
        (1.0, 0.0, 1.0)
        """
        xx, xy, yy = self.slopes(power)
        var = position_var / 100.0
        return var * (xx * xx + xy * xy), var * xy * (xx + yy), var * (xy * xy + yy * yy)

    def log_steepness(self, power: PowerParts) -> float:
        """The logarithm of how many prism dioptres a mm is, both ways together where both are
        measured. Argument: `power` in dioptres.

        >>> math.exp(Way(1.0, 2.0).log_steepness((20.0, 10.0, 0.0)))
        3.0000000000000004
        """
        if not self.measured:
            return 0.0
        mean, j0, j45 = power
        size = math.hypot(j0, j45)
        slopes = [mean - size, mean + size]  # the principal powers
        if None in self:
            slopes = self.parts_of((mean - j0, mean + j0))
        return sum([math.log(max(abs(slope), FLATTEST_D) / 10.0) for slope in slopes])
