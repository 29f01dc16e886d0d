"""The table of causes: code, place, prior and what each predicts, kept as data."""

import json
from collections.abc import Mapping
from dataclasses import dataclass, replace
from functools import cache

from pycore.data import package_text
from pycore.job.document import STATES

PLACES = ("as-ordered", "bench", "layout", "surfacing", "order", "none")
AS_ORDERED, NONE_OF_THESE = "as-ordered", "none-of-these"


@dataclass(frozen=True, slots=True)
class Cause:
    """One cause.

    `prior` is the share of jobs it is met in, before anything is read; `right`, `left`, `both`
    are the shares of that (sum 1); `parameters` in the units of their names; `states` of the
    lenses in which it can happen.
    """

    code: str
    place: str
    prior: float
    right: float
    left: float
    both: float
    parameters: Mapping[str, float]
    states: tuple[str, ...]

    def of(self, name: str) -> float:
        """A parameter, in the unit its name ends with."""
        return self.parameters[name]


@dataclass(frozen=True, slots=True)
class Scatter:
    """Standard deviations: the laboratory's normal scatter, and how broad none-of-these is.

    Prism dioptres, dioptres, degrees.
    """

    laboratory_prism: float
    laboratory_power_d: float
    laboratory_axis_deg: float
    none_prism: float
    none_mean_power_d: float
    none_cylinder_d: float
    none_add_d: float


@dataclass(frozen=True, slots=True)
class CauseTable:
    """All causes by code, the scatter, and how many jobs the priors are worth (`pseudo_count`:
    the weight of the Dirichlet distribution whose mean the priors are)."""

    causes: Mapping[str, Cause]
    scatter: Scatter
    pseudo_count: int
    provenance: str

    def in_state(self, state: str) -> "CauseTable":
        """The table with the causes only that can happen in a state of the lenses."""
        kept = {code: cause for code, cause in self.causes.items() if state in cause.states}
        return replace(self, causes=kept)


@cache
def cause_table() -> CauseTable:
    """The table as it comes with the program. Priors and scatter: common practice.

    >>> cause_table().causes["base-reversed"].place
    'surfacing'
    """
    source = json.loads(package_text("bench/cause_table.json"))
    causes = {
        row["code"]: Cause(
            code=row["code"],
            place=row["place"],
            prior=row["prior"],
            right=row["right"],
            left=row["left"],
            both=row["both"],
            parameters=row["parameters"],
            states=tuple(row.get("states", STATES)),
        )
        for row in source["causes"]
    }
    return CauseTable(
        causes=causes,
        scatter=Scatter(**source["noise"]),
        pseudo_count=source["pseudo_count"],
        provenance=source["provenance"],
    )
