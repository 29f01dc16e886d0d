"""Jobs that stand on a limit, one last digit above it and one below it, with the outcome the reference says.

Made from `limits_reference` alone.
"""

from __future__ import annotations

from functools import cache

from tests.references.limit_cases_power import add_cases, axis_cases, cylinder_cases, power_cases, weaker_meridian_cases
from tests.references.limit_cases_prism import (
    each_lens_cases,
    lens_component_cases,
    lens_mm_cases,
    lens_vector_cases,
    pair_cases,
    pair_distance_cases,
    pair_mm_cases,
)
from tests.references.limit_jobs import Case, designs_of

MAKERS = (
    power_cases,
    weaker_meridian_cases,
    cylinder_cases,
    axis_cases,
    add_cases,
    pair_cases,
    pair_mm_cases,
    pair_distance_cases,
    each_lens_cases,
    lens_vector_cases,
    lens_mm_cases,
    lens_component_cases,
)


@cache
def cases_of(edition: str) -> tuple[Case, ...]:
    """Every case of an edition."""
    return tuple(found for design in designs_of(edition) for make in MAKERS for found in make(edition, design))
