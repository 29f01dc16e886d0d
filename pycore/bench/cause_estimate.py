"""How large was it? The free parameters of a hypothesis, and how well it fits at its best."""

import math
from collections.abc import Sequence
from dataclasses import dataclass

from pycore.bench.cause_algebra import dot, inverse_root
from pycore.bench.cause_bench import Bench, Story
from pycore.optics.prism import Eye


@dataclass(frozen=True, slots=True)
class Found:
    """A parameter as far as the readings tell it: mean and one standard uncertainty."""

    mean: float
    uncertainty: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Estimate:
    """What the readings say of one hypothesis's free parameters, in standard deviations of their
    priors. `own` those of each lens, in the order of its columns (slips, shifts, turn); `common`
    in the order of the common columns. `residual`: how far, in standard deviations, the readings
    stay from the best fit, over the square root of their number."""

    own: dict[Eye, list[Found]]
    common: list[Found]
    residual: float


def estimate(bench: Bench, story: Story) -> Estimate:
    """The posterior of the parameters of one hypothesis. Source: Gaussian linear models.

    Arguments: `bench`; `story`. Returns the estimate.
    """
    misfit: list[float] = []
    columns: list[list[float]] = []
    counts: dict[Eye, int] = {}
    shared: list[list[float]] = []
    before = 0
    for eye, own in story.own.items():
        lens = bench.lens(story.common, eye, own)
        assert lens is not None  # it has been weighed
        gauge = bench.gauges[eye]
        bare = lens._replace(slips=(), shifts=(), turn_rad=0.0)
        part, _ = gauge.misfit(bare)
        mine = [gauge.scaled(bare, column) for column in gauge.own_columns(lens)]
        ours = [gauge.scaled(bare, column) for column in bench.columns(story.common, eye, lens)]
        columns = [column + [0.0] * len(part) for column in columns]
        columns += [[0.0] * before + column for column in mine]
        shared = [(shared[at] if before else []) + column for at, column in enumerate(ours)]
        counts[eye] = len(mine)
        misfit += part
        before += len(part)
    means, deviations, rest = _solved(columns + shared, misfit)
    found = [Found(mean, deviation) for mean, deviation in zip(means, deviations, strict=True)]
    own_found: dict[Eye, list[Found]] = {}
    at = 0
    for eye, count in counts.items():
        own_found[eye] = found[at : at + count]
        at += count
    residual = math.sqrt(max(rest, 0.0) / len(misfit))
    return Estimate(own=own_found, common=found[at:], residual=residual)


def _solved(
    columns: Sequence[Sequence[float]], misfit: Sequence[float]
) -> tuple[list[float], list[float], float]:
    """Posterior means and standard deviations of standard normal parameters, and what is left of
    the squared misfit (with the parameters' own share)."""
    whole = dot(misfit, misfit)
    if not columns:
        return [], [], whole
    pull = [dot(column, misfit) for column in columns]
    rows = [
        [dot(one, two) + (i == j) for j, two in enumerate(columns)] for i, one in enumerate(columns)
    ]
    inverse, _ = inverse_root(rows)
    half = [dot(row, pull) for row in inverse]
    means = [sum([inverse[k][at] * half[k] for k in range(len(half))]) for at in range(len(half))]
    deviations = [math.sqrt(sum([row[at] ** 2 for row in inverse])) for at in range(len(half))]
    return means, deviations, whole - dot(half, half)


@dataclass(frozen=True, slots=True, kw_only=True)
class Size:
    """How large a cause was: `kind` names what, `values` each lens's figures by name, in the unit
    the name ends with (prism dioptres for x and y)."""

    kind: str
    values: dict[Eye, dict[str, Found]]


MOVED, INWARDS, UP, TURN, ZERO = "moved", "inwards", "up", "turn", "zero"
KINDS = {
    "lens-displaced": MOVED,
    "read-elsewhere": "read-at",
    "layout-pd-wrong": INWARDS,
    "layout-height-wrong": UP,
    "table-moved": UP,
    "lens-rotated": TURN,
    "frame-not-square": TURN,
    "instrument-zero": ZERO,
    "compensator-left-on": ZERO,
}


def size_of(bench: Bench, code: str, stories: Sequence[Story]) -> Size | None:
    """How large the one cause of `stories` (its variants) was, or None where it has no size.

    Arguments: `bench`; `code` of the cause; `stories`. Returns means and standard uncertainties.
    """
    kind = KINDS.get(code)
    if kind is None or not stories:
        return None
    cause = bench.table.causes[code]
    if kind == TURN:
        return Size(kind=kind, values=_turns(bench, code, stories))
    story = stories[0]
    found = estimate(bench, story)
    values: dict[Eye, dict[str, Found]] = {}
    for eye, own in story.own.items():
        if own.code != code and story.common.code != code:
            continue
        if kind == ZERO:
            zero = math.hypot(bench.zero, story.common.zero)
            values[eye] = {"x": _times(found.common[0], zero), "y": _times(found.common[1], zero)}
            continue
        mine = [_times(one, cause.of("spread_mm")) for one in found.own[eye]]
        if not mine:  # one parameter common to both lenses
            mine = [_times(found.common[-1], cause.of("spread_mm"))]
        elif kind == INWARDS and eye == "left":
            mine = [_times(mine[0], -1.0)]
        values[eye] = _named(kind, mine)
    return Size(kind=kind, values=values)


def _named(kind: str, found: Sequence[Found]) -> dict[str, Found]:
    if kind in (INWARDS, UP):
        return {f"{kind}_mm": found[0]}
    return {"right_mm": found[0], "up_mm": found[1]}


def _times(found: Found, factor: float) -> Found:
    return Found(found.mean * factor, abs(found.uncertainty * factor))


def _turns(bench: Bench, code: str, stories: Sequence[Story]) -> dict[Eye, dict[str, Found]]:
    """The turn in degrees, over the narrower turns it is made of."""
    sums: dict[Eye, list[tuple[float, Found]]] = {}
    for story in stories:
        found = estimate(bench, story)
        for eye, own in story.own.items():
            lens = bench.lens(story.common, eye, own)
            if lens is None or code not in (own.code, story.common.code):
                continue
            narrow, turn = story.common.turn_deg, found.common[-1:]
            if lens.turn_rad:
                narrow, turn = math.degrees(lens.turn_rad), found.own[eye][-1:]
            part = Found(lens.turned_deg + turn[0].mean * narrow, turn[0].uncertainty * narrow)
            sums.setdefault(eye, []).append((story.probability, part))
    return {eye: {"turn_deg": _mixed(parts)} for eye, parts in sums.items()}


def _mixed(parts: Sequence[tuple[float, Found]]) -> Found:
    """Mean and spread of a mixture of normal distributions."""
    whole = sum([share for share, _ in parts])
    mean = sum([share * part.mean for share, part in parts]) / whole
    spread = sum([share * (part.uncertainty**2 + (part.mean - mean) ** 2) for share, part in parts])
    return Found(mean, math.sqrt(spread / whole))
