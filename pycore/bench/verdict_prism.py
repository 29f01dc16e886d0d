"""Is the prism within the edition's limits, for the pair and for each lens?"""

import math
from collections.abc import Iterator
from dataclasses import replace
from decimal import Decimal

from pycore.bench.doubt import chance_within, chance_within_circle
from pycore.bench.matter import MERIDIAN, PAIR, Check, Matter, component_of
from pycore.bench.repeats import uncertainty_of_mean
from pycore.bench.verdict_position import (
    distance_check,
    height_check,
    open_row,
    position_check,
    position_row,
)
from pycore.decimals import snap
from pycore.editions.edition import Row
from pycore.optics.power import Power
from pycore.optics.prism import EYES, NO_PRISM, Eye, Prism

UNIT = "\u0394"
COMPONENTS = ("vertical", "horizontal")


def prism_checks(matter: Matter) -> Iterator[Check]:
    """Every check of prism, with its alternatives in millimetres.

    Arguments: `matter`. Yields Checks in prism dioptres and mm.
    Source: the edition's rows; the order of method by Z80.1-2010, 8.4 and 8.5 as quoted.
    """
    mounted = matter.job.state == "mounted"
    right, left = matter.error("right"), matter.error("left")
    if right is not None and left is not None:
        for component in COMPONENTS:
            yield from _pair_checks(matter, component, (right, left), counts=mounted)
    for eye in matter.own_eyes:
        if eye not in matter.reads:
            continue
        if mounted:
            yield from _each_lens_checks(matter, eye)
        else:
            yield from lens_checks(matter, eye)


def pair_row(matter: Matter, component: str) -> tuple[Row, Decimal] | None:
    """The pair's row for one component and its limit in prism dioptres, or None.

    Arguments: `matter`; `component` vertical or horizontal.
    """
    sizes = {"power": _row_power(matter, component), "prism": _row_prism(matter, component)}
    row = matter.row(f"prism.{component}", sizes, state="mounted")
    return (row, row.limit(sizes)) if row else None


def pair_uncertainty(matter: Matter, repeats: int = 0) -> float:
    """Standard uncertainty of the pair's difference, in prism dioptres; the zero cancels.

    Arguments: `matter`; `repeats` readings of each lens, or 0 for those that were taken.
    """
    right, left = (_of_mean(matter, eye, repeats) for eye in EYES)
    return math.hypot(right, left)


def lens_uncertainty(matter: Matter, eye: Eye, repeats: int = 0) -> float:
    """Standard uncertainty of one lens's prism component, with the zero, in prism dioptres.

    Arguments: as `pair_uncertainty`; `eye` the lens's.
    """
    return math.hypot(_of_mean(matter, eye, repeats), float(matter.uncertainty.zero))


def _of_mean(matter: Matter, eye: Eye, repeats: int) -> float:
    """Without the zero: of the mean of as many readings, by the bench's figure for one, or of
    those that were taken, by their own scatter where there are enough."""
    if not repeats and eye in matter.repeats:
        return matter.repeats[eye].uncertainty
    step = matter.job.instrument.prism_step
    return uncertainty_of_mean(repeats or 1, matter.uncertainty.prism, step)


def _powers(matter: Matter) -> list[Power]:
    return [due.power for due in matter.dues.values() if due.power]


def _row_power(matter: Matter, component: str) -> Decimal:
    """The stronger power of the pair that picks the row, in dioptres."""
    if matter.option("row-power") == "strongest":
        sizes = [power.strongest for power in _powers(matter)]
    else:
        sizes = [abs(power.along(MERIDIAN[component])) for power in _powers(matter)]
    return max(sizes, default=Decimal(0))


def _row_prism(matter: Matter, component: str) -> Decimal:
    """The ordered prism that picks the row, in prism dioptres."""
    thinned = matter.option("thinning-row") == "with-thinning"
    parts = {
        eye: component_of(due.expected if thinned else due.prescribed, component)
        for eye, due in matter.dues.items()
    }
    if matter.option("prism-row") == "pair":
        return snap(abs(parts.get("right", Decimal(0)) - parts.get("left", Decimal(0))))
    return snap(max((abs(part) for part in parts.values()), default=Decimal(0)))


def _pair_checks(
    matter: Matter, component: str, errors: tuple[Prism, Prism], counts: bool
) -> Iterator[Check]:
    """The pair's check of one component; `errors` of the right and the left lens."""
    found = pair_row(matter, component)
    if found is None:
        return
    if component == "vertical" and not matter.vertical_pair_is_readable:
        return
    if component == "vertical" and pair_decides_vertical(matter):
        counts = True
    row, limit = found
    deviation = snap(component_of(errors[0] - errors[1], component))
    uncertainty = pair_uncertainty(matter)
    right, left = matter.dues["right"].expected, matter.dues["left"].expected
    ordered = snap(component_of(right - left, component))
    prism = Check(
        id=f"prism.{component}",
        group=f"prism.{component}",
        eye=PAIR,
        component=component,
        ordered=ordered,
        read=ordered + deviation,
        deviation=deviation,
        limit=limit,
        uncertainty=uncertainty,
        chance=chance_within(deviation, limit, uncertainty),
        unit=UNIT,
        row=row,
        counts=counts,
    )
    check_of = height_check if component == "vertical" else distance_check
    other = check_of(matter, prism) if counts else None
    replaced = matter.option("prism-alternatives") == "replace" and open_row(matter, component)
    yield _as_information(prism) if counts and replaced else prism
    if other:
        yield other


def pair_decides_vertical(matter: Matter) -> bool:
    """Tell whether only the pair can be judged vertically: the thinning is not known, or a
    lens has no marked vertical point."""
    return not all(lens_vertical_is_known(matter, eye) for eye in matter.own_eyes)


def _as_information(check: Check) -> Check:
    return replace(check, counts=False)


def _each_lens_checks(matter: Matter, eye: Eye) -> Iterator[Check]:
    """Limits that an edition (or the option chosen) also sets for each lens of the pair."""
    for component in COMPONENTS:
        if component == "vertical" and not lens_vertical_is_known(matter, eye):
            continue
        row = matter.row(f"prism.{component}.each", {}, eye=eye)
        if row:
            yield _component_check(matter, eye, component, row, row.limit({}), f"each.{eye}")


def lens_vertical_is_known(matter: Matter, eye: Eye) -> bool:
    """Tell whether one lens's own vertical error can be stated."""
    return matter.dues[eye].vertical_known and matter.vertical_is_marked(eye)


def lens_sizes(matter: Matter, eye: Eye, component: str) -> dict[str, Decimal]:
    """The sizes that pick a single lens's row: strongest power (D), ordered prism component."""
    due = matter.dues[eye]
    thinned = matter.option("thinning-row") == "with-thinning"
    ordered = due.expected if thinned else due.prescribed
    return {
        "power": due.power.strongest if due.power else Decimal(0),
        "prism": snap(abs(component_of(ordered, component))),
    }


def lens_row(matter: Matter, eye: Eye, component: str) -> tuple[Row, Decimal] | None:
    """A single lens's row for one component and its limit in prism dioptres, or None."""
    sizes = lens_sizes(matter, eye, component)
    row = matter.row("prism.lens", sizes, component=component, eye=eye)
    return (row, row.limit(sizes)) if row else None


def judged_as_vector(matter: Matter, eye: Eye) -> bool:
    """Tell whether a single lens is held to one limit on the vector of its error."""
    found = lens_row(matter, eye, "vertical")
    return (
        found is not None
        and found[0].component is None
        and matter.option("lens-prism") != "components"
        and lens_vertical_is_known(matter, eye)
    )


def lens_checks(matter: Matter, eye: Eye) -> Iterator[Check]:
    """The checks of one uncut or edged lens, in prism dioptres and mm."""
    if judged_as_vector(matter, eye):
        prism = _vector_check(matter, eye)
        replaced = matter.option("prism-alternatives") == "replace" and position_row(matter, eye)
        yield _as_information(prism) if replaced else prism
        position = position_check(matter, eye, prism)
        if position:
            yield position
        return
    for component in COMPONENTS:
        if component == "vertical" and not lens_vertical_is_known(matter, eye):
            continue
        found = lens_row(matter, eye, component)
        if found:
            yield _component_check(matter, eye, component, *found, f"lens.{eye}")


def _vector_check(matter: Matter, eye: Eye) -> Check:
    found = lens_row(matter, eye, "vertical")
    error = matter.error(eye) or NO_PRISM
    assert found is not None  # judged_as_vector has looked
    row, limit = found
    deviation = snap(error.amount)
    uncertainty = lens_uncertainty(matter, eye)
    return Check(
        id="prism.lens",
        group=f"prism.lens.{eye}",
        eye=eye,
        ordered=snap(matter.dues[eye].expected.amount),
        read=snap(matter.reads[eye].amount),
        deviation=deviation,
        limit=limit,
        uncertainty=uncertainty,
        chance=chance_within_circle(deviation, limit, uncertainty),
        unit=UNIT,
        row=row,
    )


def _component_check(
    matter: Matter, eye: Eye, component: str, row: Row, limit: Decimal, group: str
) -> Check:
    error: Prism = matter.error(eye) or NO_PRISM
    deviation = snap(component_of(error, component))
    uncertainty = lens_uncertainty(matter, eye)
    return Check(
        id="prism.lens",
        group=f"prism.{group}.{component}",
        eye=eye,
        component=component,
        ordered=snap(component_of(matter.dues[eye].expected, component)),
        read=snap(component_of(matter.reads[eye], component)),
        deviation=deviation,
        limit=limit,
        uncertainty=uncertainty,
        chance=chance_within(deviation, limit, uncertainty),
        unit=UNIT,
        row=row,
    )
