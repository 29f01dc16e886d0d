"""An edition's rows of limits as frozen values, and which row holds for a lens."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from decimal import Decimal

from pycore.decimals import snap

CHECKS = (
    "prism.vertical",
    "prism.horizontal",
    "prism.vertical.each",
    "prism.horizontal.each",
    "prism.lens",
    "prp.height",
    "prp.distance",
    "prp.position",
    "power",
    "cylinder",
    "axis",
    "add",
)
DESIGN_GROUPS = ("single-vision", "multifocal", "progressive")
QUANTITIES = ("power", "cylinder", "prism", "add")

# Every choice an edition may leave open. The sentence on why each stands is words `options`.
OPTIONS: Mapping[str, tuple[str, ...]] = {
    "prism-alternatives": ("either", "both", "replace", "prism-only"),
    "horizontal-reading": ("total", "each-lens"),
    "lens-prism": ("vector", "components"),
    "millimetre-power": ("stronger", "both-lenses"),
    "progressive-horizontal-switch": ("3.75", "3.375"),
    "power-comparison": ("principal", "ordered-meridians"),
    "prism-row": ("lens", "pair"),
    "thinning-row": ("prescribed", "with-thinning"),
    "row-power": ("meridian", "strongest"),
    "per-lens-or-total": ("total", "both"),
}


@dataclass(frozen=True, slots=True, kw_only=True)
class Range:
    """A range of sizes: `over` and `below` leave their end out, `start` and `to` keep it."""

    over: Decimal | None = None
    start: Decimal | None = None
    below: Decimal | None = None
    to: Decimal | None = None

    def holds(self, size: Decimal) -> bool:
        """Tell whether a size (never negative, in the quantity's unit) lies within."""
        return (
            (self.over is None or size > self.over)
            and (self.start is None or size >= self.start)
            and (self.below is None or size < self.below)
            and (self.to is None or size <= self.to)
        )

    def meets(self, other: "Range") -> bool:
        """Tell whether a size could lie within both."""
        return self._starts_before_end_of(other) and other._starts_before_end_of(self)

    def _starts_before_end_of(self, other: "Range") -> bool:
        start = self.over if self.over is not None else self.start
        end = other.below if other.below is not None else other.to
        if start is None or end is None:
            return True
        both_keep_it = self.over is None and other.below is None
        return start < end or (start == end and both_keep_it)


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """One limit of one edition, with where it stands and how sure we are of it.

    `limit = fixed + per_dioptre * size`, in the check's unit (prism dioptres, D, degrees, mm);
    the size is the cylinder's for a cylinder, else the power's. `ranges` say for which sizes
    it holds, `option` for which choice of the edition, `measure` how millimetres are counted.
    """

    check: str
    fixed: Decimal
    per_dioptre: Decimal
    clause: str
    provenance: str
    designs: tuple[str, ...] = DESIGN_GROUPS
    states: tuple[str, ...] = ("uncut", "edged", "mounted")
    ranges: Mapping[str, Range]
    component: str | None = None
    option: tuple[str, str] | None = None
    measure: str | None = None
    meridians: str = "strongest"

    def overlaps(self, other: "Row") -> bool:
        """Tell whether both rows could hold for one lens, so that the first would win silently."""
        return (
            self.check == other.check
            and bool(set(self.designs) & set(other.designs))
            and bool(set(self.states) & set(other.states))
            and (self.component == other.component or None in (self.component, other.component))
            and (self.option == other.option or None in (self.option, other.option))
            and all(
                self.ranges[quantity].meets(other.ranges[quantity])
                for quantity in set(self.ranges) & set(other.ranges)
            )
        )

    def limit(self, sizes: Mapping[str, Decimal]) -> Decimal:
        """The limit for these sizes, exact. Arguments: sizes by quantity, in dioptres."""
        size = sizes.get("cylinder" if self.check == "cylinder" else "power", Decimal(0))
        return snap(self.fixed + self.per_dioptre * size)


@dataclass(frozen=True, slots=True, kw_only=True)
class Edition:
    """One edition of a standard: its rows, the states it covers, its options' defaults."""

    id: str
    name: str
    states: tuple[str, ...]
    options: Mapping[str, str]
    rows: tuple[Row, ...]
    sha256: str
    local: bool = False
    by_check: Mapping[str, tuple[Row, ...]] = field(init=False)

    def __post_init__(self) -> None:
        by_check: dict[str, tuple[Row, ...]] = {}
        for row in self.rows:
            by_check[row.check] = (*by_check.get(row.check, ()), row)
        object.__setattr__(self, "by_check", by_check)  # an index, made once, of frozen rows

    @property
    def provenances(self) -> tuple[str, ...]:
        """The kinds of provenance among the rows, the surest first."""
        kinds = {row.provenance for row in self.rows}
        return tuple(kind for kind in ("published", "local", "memory") if kind in kinds)

    def row(
        self,
        check: str,
        *,
        design: str,
        state: str,
        chosen: Mapping[str, str],
        sizes: Mapping[str, Decimal],
        component: str | None = None,
    ) -> Row | None:
        """Find the row that holds.

        Arguments: `check`; `design` group; `state`; `chosen` options; `sizes` by quantity
        (dioptres, prism dioptres), never negative; `component` where rows differ by it.
        Returns the first row that fits, or None.
        """
        for row in self.by_check.get(check, ()):
            if (
                design in row.designs
                and state in row.states
                and row.component in (None, component)
                and (row.option is None or chosen.get(row.option[0]) == row.option[1])
                and all(
                    within.holds(sizes[quantity])
                    for quantity, within in row.ranges.items()
                    if quantity in sizes
                )
            ):
                return row
        return None
