"""How well does a lens, as a cause would leave it, fit what was read of it?

Everything is Gaussian: a lens predicts a mean, its free parameters (one column each, one
standard deviation of the parameter) widen it. A lens's own parameters are integrated out in
closed form; those common to both lenses are kept as `pull` and `grip` until both are joined.
Source of the algebra: Gaussian linear models (matrix determinant lemma, Woodbury identity).
"""

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

from pycore.bench.cause_algebra import Fit, Rows, dot, inverse_root, less, slopes, times
from pycore.bench.cause_lens import Lens
from pycore.bench.cause_place import Way
from pycore.bench.cause_seen import PowerParts, Seen, Vector
from pycore.bench.cause_table import Scatter

Key = tuple[float | None, ...]
ALIKE = 6  # decimals to which predictions count as equal, in their own units
SAME = 1e-6
NO_POWER = (0.0, 0.0, 0.0)


class Column(NamedTuple):
    """What one standard deviation of a parameter changes: the prism read, the prism at the
    ordered point, the power."""

    read: Vector
    made: Vector
    power: PowerParts = NO_POWER


@dataclass(slots=True)
class Gauge:
    """Fits lenses to the readings of one of them, and keeps what many causes have in common.

    `due` is the prism due, from which heights and distances were measured.
    """

    seen: Seen
    due: Vector
    scatter: Scatter
    _widths: dict[object, tuple[Rows, float]] = field(default_factory=dict)
    _powers: dict[object, tuple[Rows, float]] = field(default_factory=dict)
    _fits: dict[object, tuple[list[float], float]] = field(default_factory=dict)
    _columns: dict[object, list[float]] = field(default_factory=dict)
    _way: Way = field(init=False)

    def __post_init__(self) -> None:
        self._way = Way(*self.seen.place)

    def fit(self, lens: Lens, common: Sequence[Column] = ()) -> Fit:
        """How well `lens` fits. `common` the columns of the parameters both lenses share."""
        if lens.turn_rad or any(column.power != NO_POWER for column in common):
            return self._fit_turned(lens, common)
        misfit, log_width = self._prism_misfit(lens)
        density = -0.5 * sum([part * part for part in misfit]) - log_width
        if self.seen.power is not None:
            density += self._power_fit(lens)[1]
        if self.seen.add is not None:
            density += self._add_fit(lens)[1]
        if not common:
            return Fit(density)
        columns = [self._prism_scaled(lens, column) for column in common]
        return Fit(density, *slopes(columns, misfit))

    def _fit_turned(self, lens: Lens, common: Sequence[Column]) -> Fit:
        """The fit where a parameter changes prism and power together."""
        misfit, log_width = self.misfit(lens)
        columns = [self.scaled(lens, column) for column in common]
        if lens.turn_rad:
            # One parameter more: I + u u' is made round again by stretching along u only.
            turn = self.scaled(lens, turn_column(lens, lens.turn_rad))
            size = dot(turn, turn)
            narrower = (1.0 - 1.0 / math.sqrt(1.0 + size)) / size if size else 0.0
            misfit = less(misfit, turn, narrower)
            columns = [less(column, turn, narrower) for column in columns]
            log_width += 0.5 * math.log1p(size)
        density = -0.5 * dot(misfit, misfit) - log_width
        return Fit(density, *slopes(columns, misfit)) if columns else Fit(density)

    def misfit(self, lens: Lens) -> tuple[list[float], float]:
        """What was read less what `lens` predicts, in independent standard deviations, and the
        logarithm of their product. A turn of the lens and common parameters are left out."""
        misfit, log_width = self._prism_misfit(lens)
        misfit = list(misfit)
        for fit in self._other_fits(lens):
            own = fit[0]
            misfit += own
            log_width -= fit[1] + 0.5 * dot(own, own)
        return misfit, log_width

    def _other_fits(self, lens: Lens) -> Iterator[tuple[list[float], float]]:
        if self.seen.power is not None:
            yield self._power_fit(lens)
        if self.seen.add is not None:
            yield self._add_fit(lens)

    def _prism_misfit(self, lens: Lens) -> tuple[list[float], float]:
        seen = self.seen
        (x, y), rest = lens.prism, []
        if seen.prism is not None:
            rest = [seen.prism[0] - x - lens.sx, seen.prism[1] - y - lens.sy]
        if self._way.measured:
            across, along = self._way.change(lens.lies_with)
            rest += self._way.parts_of((self.due[0] + across - x, self.due[1] + along - y))
        inverse, log_width = self._width(lens)
        return times(inverse, rest), log_width

    def _power_fit(self, lens: Lens) -> tuple[list[float], float]:
        """The power's misfit and its log density; the same for most causes, so kept."""
        key = lens[4:7], lens.power_spread, lens.broad
        found = self._fits.get(key)
        if found is None:
            assert self.seen.power is not None  # asked only where it was read
            rows, log_width = self._power_width(lens)
            power = [a - b for a, b in zip(self.seen.power, lens[4:7], strict=True)]
            misfit = times(rows, power)
            found = self._fits[key] = misfit, -0.5 * dot(misfit, misfit) - log_width
        return found

    def _add_fit(self, lens: Lens) -> tuple[list[float], float]:
        key = lens.add, lens.broad
        found = self._fits.get(key)
        if found is None:
            deviation = self._add_deviation(lens)
            misfit = ((self.seen.add or 0.0) - lens.add) / deviation
            found = self._fits[key] = [misfit], -0.5 * misfit * misfit - math.log(deviation)
        return found

    def scaled(self, lens: Lens, column: Column) -> list[float]:
        """A parameter's column in the independent standard deviations of `misfit`."""
        scaled = list(self._prism_scaled(lens, column))
        if self.seen.power is not None:
            scaled += times(self._power_width(lens)[0], column.power)
        if self.seen.add is not None:
            scaled.append(0.0)
        return scaled

    def _prism_scaled(self, lens: Lens, column: Column) -> list[float]:
        key = self._width_key(lens), column
        found = self._columns.get(key)
        if found is None:
            part = self._prism_part(column)
            found = self._columns[key] = times(self._width(lens)[0], part)
        return found

    def ceiling(self, steepest_d: float) -> float:
        """No lens can fit better than this: the density at no misfit and with nothing free.
        `steepest_d` no principal power is greater: the steeper, the sharper a place is found."""
        seen = self.seen
        own = math.sqrt(seen.principal_var / 2.0) if seen.power is not None else 1.0
        add = math.sqrt(seen.add_var) if seen.add is not None else 1.0
        best = Lens(0.0, 0.0, 0.0, 0.0, steepest_d, 0.0, 0.0, 0.0)
        return -self._width(best)[1] - 3.0 * math.log(own) - math.log(add)

    def own_columns(self, lens: Lens) -> list[Column]:
        """The columns of the lens's own free parameters: slips, shifts, then the turn."""
        nothing = (0.0, 0.0)
        columns = [Column(slip, nothing) for slip in lens.slips]
        columns += [Column(shift, shift) for shift in lens.shifts]
        if lens.turn_rad:
            columns.append(turn_column(lens, lens.turn_rad))
        return columns

    def key(self, lens: Lens) -> Key:
        """What `lens` predicts for what was read, rounded: equal keys cannot be told apart."""
        seen, (x, y) = self.seen, lens.prism
        inverse, log_width = self._width(lens)
        parts: list[float] = [log_width, *(part for row in inverse for part in row)]
        if seen.prism is not None:
            parts += (x + lens.sx, y + lens.sy)
        if self._way.measured:
            parts += (*self._way.parts_of((x, y)), *self._slopes(lens))
        if seen.power is not None:
            parts += (*lens[4:7], lens.power_spread, float(lens.broad))
        if seen.add is not None:
            parts.append(lens.add)
        if lens.turn_rad:
            parts += self.scaled(lens, turn_column(lens, lens.turn_rad))
        return tuple([round(part, ALIKE) + 0.0 for part in parts])

    def changes(self, lens: Lens, still: Lens) -> bool:
        """Tell whether `lens` predicts anything else than `still` does for what was read."""
        seen = self.seen
        if lens.broad:
            return True
        if seen.power is not None and (_differ(lens[4:7], still[4:7]) or lens.power_spread):
            return True
        if seen.add is not None and _differ((lens.add,), (still.add,)):
            return True
        (x, y), made = lens.prism, still.prism
        if seen.prism is not None and _differ((x + lens.sx, y + lens.sy), (made[0], made[1])):
            return True
        if self._way.measured and (
            _differ((x, y), made) or _differ(self._slopes(lens), self._slopes(still))
        ):
            return True
        return any(self.feels(lens, own) for own in self.own_columns(lens))

    def _slopes(self, lens: Lens) -> tuple[float, float, float]:
        return self._way.slopes(lens.lies_with)

    def feels(self, lens: Lens, column: Column) -> bool:
        """Tell whether a parameter moves anything of what was read."""
        return any(abs(part) > SAME for part in self.scaled(lens, column))

    def _prism_part(self, column: Column) -> list[float]:
        part: list[float] = list(column.read) if self.seen.prism is not None else []
        return part + self._way.parts_of(column.made)

    def _width_key(self, lens: Lens) -> object:
        return lens.slips, lens.shifts, lens.broad, self._way.measured and lens.lies_with

    def _width(self, lens: Lens) -> tuple[Rows, float]:
        """Scales prism and place (as the prism F r / 10) to independent standard deviations, and
        the logarithm of their product, a place's in mm; kept by what they depend on."""
        key = self._width_key(lens)
        found = self._widths.get(key)
        if found is None:
            found = self._widths[key] = self._make_width(lens)
        return found

    def _make_width(self, lens: Lens) -> tuple[Rows, float]:
        seen, laboratory = self.seen, self.seen.laboratory_var
        xx, xy, yy = self._way.variances(lens.lies_with, seen.position_var)
        place = laboratory + seen.settling_var
        whole = [
            [seen.prism_var, 0.0, laboratory, 0.0],
            [0.0, seen.prism_var, 0.0, laboratory],
            [laboratory, 0.0, place + xx, xy],
            [0.0, laboratory, xy, place + yy],
        ]
        present = [seen.prism is not None] * 2 + [part is not None for part in seen.place]
        kept = [at for at in range(4) if present[at]]
        rows = [[whole[one][two] for two in kept] for one in kept]
        for column in self.own_columns(lens._replace(turn_rad=0.0)):
            part = self._prism_part(column)
            for row, one in zip(rows, part, strict=True):
                for at, two in enumerate(part):
                    row[at] += one * two
        for at, row in enumerate(rows):
            row[at] += lens.broad * self.scatter.none_prism**2
        inverse, log_width = inverse_root(rows)
        return inverse, log_width - self._way.log_steepness(lens.lies_with)

    def _power_width(self, lens: Lens) -> tuple[Rows, float]:
        key = lens.j0, lens.j45, lens.power_spread, lens.broad
        found = self._powers.get(key)
        if found is None:
            found = self._powers[key] = self._make_power_width(lens)
        return found

    def _make_power_width(self, lens: Lens) -> tuple[Rows, float]:
        """Scales mean power, the cylinder along its own direction and across it."""
        seen, scatter = self.seen, self.scatter
        size = math.hypot(lens.j0, lens.j45)
        along = (lens.j0 / size, lens.j45 / size) if size else (1.0, 0.0)
        broad = float(lens.broad)
        own = seen.principal_var / 2.0
        cylinder = own + broad * scatter.none_cylinder_d**2
        mean = own + lens.power_spread**2 + broad * scatter.none_mean_power_d**2
        across = cylinder + (2.0 * size) ** 2 * seen.axis_var
        a, b, c = (1.0 / math.sqrt(var) for var in (mean, cylinder, across))
        rows = [
            [a, 0.0, 0.0],
            [0.0, along[0] * b, along[1] * b],
            [0.0, -along[1] * c, along[0] * c],
        ]
        return rows, -math.log(a * b * c)

    def _add_deviation(self, lens: Lens) -> float:
        return math.hypot(math.sqrt(self.seen.add_var), self.scatter.none_add_d * lens.broad)


def turn_column(lens: Lens, turn_rad: float) -> Column:
    """What a small turn of a lens changes: its prism and the axis of its cylinder.

    Arguments: `lens`; `turn_rad` counter-clockwise, radians. Source: derivative of a rotation.
    """
    x, y = lens.prism
    turned = (-y * turn_rad, x * turn_rad)
    power = (0.0, 2.0 * lens.j45 * turn_rad, -2.0 * lens.j0 * turn_rad)
    return Column(turned, turned, power)


def _differ(one: Sequence[float], two: Sequence[float]) -> bool:
    """Tell whether two predictions differ visibly."""
    return any(abs(a - b) > SAME for a, b in zip(one, two, strict=True))
