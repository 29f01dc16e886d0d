"""Which readings of one lens would pass, given the other's: the region drawn in its dial."""

from dataclasses import dataclass
from decimal import Decimal

from pycore.bench.doubt import chance_within, chance_within_circle, largest_accepted
from pycore.bench.matter import Matter, component_of
from pycore.bench.verdict_prism import (
    judged_as_vector,
    lens_row,
    lens_uncertainty,
    lens_vertical_is_known,
    pair_decides_vertical,
    pair_row,
    pair_uncertainty,
)
from pycore.optics.prism import NO_PRISM, Eye, Prism


@dataclass(frozen=True, slots=True, kw_only=True)
class Region:
    """Readings that pass, in prism dioptres around `centre`.

    Either a circle of `radius`, or a rectangle from `low` to `high`, an end being None where
    the prism is not limited that way. `provisional` until the other lens is read; `empty`
    where no reading can pass.
    """

    centre: Prism
    radius: Decimal | None = None
    low: tuple[Decimal | None, Decimal | None] = (None, None)
    high: tuple[Decimal | None, Decimal | None] = (None, None)
    provisional: bool = False
    empty: bool = False


Span = tuple[Decimal | None, Decimal | None]


def region_of(matter: Matter, eye: Eye) -> Region | None:
    """The region of one lens, by the edition's prism rows only (millimetres must be measured).

    Arguments: `matter`; `eye`. Returns the Region, or None where no row limits this lens.
    A pair's region is centred on the expected point plus the other lens's error.
    """
    due = matter.dues.get(eye)
    if due is None or (due.partner and matter.job.state != "mounted"):
        return None
    if matter.job.state != "mounted" and judged_as_vector(matter, eye):
        return _circle(matter, eye)
    spans = [_span(matter, eye, component) for component in ("horizontal", "vertical")]
    if all(span == (None, None) for span in spans):
        return None
    (left, right), (down, up) = spans
    other = matter.error("left" if eye == "right" else "right")
    return Region(
        centre=due.expected + (other or NO_PRISM if matter.job.state == "mounted" else NO_PRISM),
        low=(left, down),
        high=(right, up),
        provisional=matter.job.state == "mounted" and other is None,
        empty=any(low is not None and high is not None and low > high for low, high in spans),
    )


def _circle(matter: Matter, eye: Eye) -> Region:
    found = lens_row(matter, eye, "vertical")
    assert found is not None  # judged_as_vector has looked
    limit, uncertainty = found[1], lens_uncertainty(matter, eye)
    half = _accepted(matter, limit, uncertainty, circle=True)
    centre = matter.dues[eye].expected
    return Region(centre=centre, radius=half or Decimal(0), empty=half is None)


def _span(matter: Matter, eye: Eye, component: str) -> Span:
    """From where to where the component may be read, in prism dioptres."""
    spans = []
    expected = component_of(matter.dues[eye].expected, component)
    if matter.job.state == "mounted":
        spans.append(_pair_span(matter, eye, component, expected))
        row = matter.row(f"prism.{component}.each", {}, eye=eye)
        known = component == "horizontal" or lens_vertical_is_known(matter, eye)
        if row and known:
            limit = row.limit({})
            spans.append(_around(matter, expected, limit, lens_uncertainty(matter, eye)))
    else:
        if component == "vertical" and pair_decides_vertical(matter):
            spans.append(_pair_span(matter, eye, component, expected))
        found = lens_row(matter, eye, component)
        if found and (component == "horizontal" or lens_vertical_is_known(matter, eye)):
            spans.append(_around(matter, expected, found[1], lens_uncertainty(matter, eye)))
    lows = [low for low, _ in spans if low is not None]
    highs = [high for _, high in spans if high is not None]
    return max(lows, default=None), min(highs, default=None)


def _pair_span(matter: Matter, eye: Eye, component: str, expected: Decimal) -> Span:
    found = pair_row(matter, component)
    other = matter.error("left" if eye == "right" else "right")
    if found is None or not matter.pair_is_ordered:
        return None, None
    if component == "vertical":
        if not matter.vertical_pair_is_readable:
            return None, None
        if other is None and not matter.dues[eye].vertical_known:
            return None, None
    shift = component_of(other, component) if other else Decimal(0)
    return _around(matter, expected + shift, found[1], pair_uncertainty(matter))


def _around(matter: Matter, centre: Decimal, limit: Decimal, uncertainty: float) -> Span:
    half = _accepted(matter, limit, uncertainty, circle=False)
    if half is None:
        return centre, centre - 1  # turned round: nothing lies between
    return centre - half, centre + half


def _accepted(
    matter: Matter, limit: Decimal, uncertainty: float, *, circle: bool
) -> Decimal | None:
    """The largest deviation that passes by the job's decision rule, or None."""
    if matter.job.decision_rule == "simple":
        return limit
    chance_of = chance_within_circle if circle else chance_within
    return largest_accepted(limit, lambda off: chance_of(off, limit, uncertainty))
