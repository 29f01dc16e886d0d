"""What can be wrong with one lens: each fault as physics, with the prior and the parameters of the program's table.

Only priors, shares and parameters come from the program's table of causes; what a fault does is written here from the physics.
"""

from __future__ import annotations

import json
from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from functools import cache
from pathlib import Path
from typing import Any

import numpy as np

import pycore
from tests.references import bench_reference as bench
from tests.references.cause_lenses import (
    COMMON,
    FLIP,
    MEASURED,
    MIRROR,
    PRISM,
    Floats,
    Lenses,
    displaced,
    read_at_centre,
    read_from_front,
    read_mirrored,
    read_off,
)
from tests.references.cause_orders import (
    EYES,
    SEGMENT_BELOW_MM,
    SEGMENT_CENTRE_BELOW_TOP_MM,
    SEGMENT_INSET_MM,
    LensOrder,
    PairOrder,
)

TABLE: dict[str, Any] = json.loads((Path(pycore.__file__).parent / "bench" / "cause_table.json").read_text("utf-8"))
CAUSES: dict[str, dict[str, Any]] = {entry["code"]: entry for entry in TABLE["causes"]}
NOISE: dict[str, float] = TABLE["noise"]
FINE, COARSE = 97, 13  # angles of a turn: alone, and beside another fault
Act = Callable[[Lenses], Lenses]


def parameter(code: str, name: str) -> float:
    """One figure of the table."""
    return float(CAUSES[code]["parameters"][name])


@cache
def angles(code: str, count: int) -> tuple[Floats, Floats]:
    """Angles (degrees) and weights that stand for a normal turn: evenly spaced to four standard deviations."""
    nodes = np.linspace(-4, 4, count)
    weights = np.exp(-(nodes**2) / 2)
    return nodes * parameter(code, "turn_deg"), weights / weights.sum()


@dataclass(frozen=True)
class Fault:
    """One fault of one lens: how it acts when the lens is made, and when it is read. A turn multiplies the hypotheses."""

    code: str
    share: float  # of the variant, among those of its code
    make: Act = lambda lenses: lenses
    read: Act = lambda lenses: lenses
    turns: bool = False
    variant: int = 0  # the same number is the same variant in either lens


def prism_fault(code: str, change: Callable[[Floats], Floats], share: float = 1.0, variant: int = 0) -> Fault:
    """A fault that changes the prescribed prism and nothing else."""
    return Fault(code, share, lambda lenses: replace(lenses, prism=change(lenses.prism)), variant=variant)


def thinning_fault(code: str, amount_down: float) -> Fault:
    """Another thinning than due, Δ base down."""
    return Fault(code, 1.0, lambda lenses: replace(lenses, thinning=np.broadcast_to([0.0, -amount_down], lenses.thinning.shape)))


def power_fault(code: str, power: tuple[float, float, float], share: float = 1.0, variant: int = 0) -> Fault:
    """Another power than ordered: sphere, cylinder, axis."""
    matrix = bench.power_matrix(*power)
    return Fault(code, share, lambda lenses: replace(lenses, power=np.broadcast_to(matrix, lenses.power.shape)), variant=variant)


# --- one lens -----------------------------------------------------------------------------------------------------------


def lens_faults(pair: PairOrder, eye: str) -> Iterator[Fault]:
    """Every fault of one lens that this job allows, as ordered first."""
    yield Fault("as-ordered", 1.0)
    yield from point_faults(pair, eye)
    yield from reading_faults(pair)
    if pair.state != "uncut":
        yield from layout_faults()
    lens = pair.lens(eye)
    if np.any(lens.prism):
        yield from base_faults()
        yield from amount_faults(lens)
    if pair.thinning_amount:
        yield thinning_fault("thinning-one-lens", 0.0)
    if lens.cylinder and pair.plan.powers:
        yield from cylinder_faults(lens)
    yield Fault("none-of-these", 1.0, read=unknown)


def unknown(lenses: Lenses) -> Lenses:
    """Anything at all: broad about what is due."""
    broad = np.zeros(MEASURED)
    broad[PRISM] = NOISE["none_prism"] ** 2
    broad[2] = NOISE["none_mean_power_d"] ** 2
    broad[3:5] = NOISE["none_cylinder_d"] ** 2
    broad[5] = NOISE["none_add_d"] ** 2
    broad[6:8] = NOISE["none_prism"] ** 2  # as prism; see `noise_of`
    return replace(lenses, broad=np.broadcast_to(broad, lenses.broad.shape))


def towards_nose(eye: str) -> float:
    """Sign of x towards the nose."""
    return bench.vector_of_word(eye, 1, "in").real


def point_faults(pair: PairOrder, eye: str) -> Iterator[Fault]:
    """Read at another point than the marked one."""
    lens, inwards = pair.lens(eye), towards_nose(eye)

    def at(code: str, place_mm: tuple[float, float]) -> Fault:
        spread = parameter(code, "spread_mm")
        return Fault(code, 1.0, read=lambda lenses: read_off(lenses, np.array(place_mm), np.array([spread, spread])))

    if pair.design == "progressive":
        yield at("read-at-fitting-cross", (0.0, lens.cross_mm))
    if pair.state != "uncut":
        across, upright, bridge = pair.box_mm
        # The eye is pd from the middle of the bridge, the boxing centre half of A and of the bridge.
        yield at("read-at-boxing-centre", (inwards * (lens.pd_mm - (across + bridge) / 2), upright / 2 - lens.height_mm))
    if pair.design == "bifocal":
        yield segment_fault(lens, inwards)
    yield at("read-elsewhere", (0.0, 0.0))
    if np.any(pair.due(eye)) and np.abs(np.linalg.eigvalsh(lens.power)).min() > 1e-6:
        distance_mm = 10 * np.hypot(*np.linalg.solve(lens.power, pair.due(eye)))
        codes = ("read-at-optical-centre",) * (pair.design != "progressive") + ("target-centred",)
        for code in codes:
            if distance_mm <= parameter(code, "reach_mm"):
                yield centre_fault(code)
    if pair.state == "mounted" and len(pair.plan.eyes) == 2 and eye in read_second(pair):
        spread = parameter("table-moved", "spread_mm")
        yield Fault("table-moved", 1.0, read=lambda lenses: read_off(lenses, np.zeros(2), np.array([0.0, spread])))


def centre_fault(code: str) -> Fault:
    """Read where the target stands in the middle."""
    return Fault(code, 1.0, read=lambda lenses: read_at_centre(lenses, parameter(code, "spread_mm")))


def segment_fault(lens: LensOrder, inwards: float) -> Fault:
    """Read 3 mm below the middle of the segment's top, where the segment adds its own prism."""
    below_top, spread = 3.0, parameter("read-at-segment", "spread_mm")
    place = np.array([inwards * SEGMENT_INSET_MM, -SEGMENT_BELOW_MM - below_top])
    own = np.array([0.0, -lens.add * (SEGMENT_CENTRE_BELOW_TOP_MM - below_top) / 10])  # p(r) = −add r, r from its centre

    def read(lenses: Lenses) -> Lenses:
        there = replace(lenses, power=lenses.power + lens.add * np.eye(2))  # the spread acts through both powers
        moved = read_off(there, np.zeros(2), np.array([spread, spread]))
        return replace(moved, power=lenses.power, read=lenses.read - lenses.power @ place / 10 + own)

    return Fault("read-at-segment", 1.0, read=read)


def read_second(pair: PairOrder) -> tuple[str, ...]:
    """The lens read second: the one weaker along 90; either where both are equal."""
    strength = {lens.eye: round(abs(float(bench.along(lens.power, 90))), 9) for lens in pair.lenses}
    return tuple(eye for eye in EYES if strength[eye] == min(strength.values()))


def reading_faults(pair: PairOrder) -> Iterator[Fault]:
    """Read with the lens or the key the wrong way round."""
    spread = parameter("read-from-front", "usual_power_d")
    yield Fault("read-from-front", 1.0, read=lambda lenses: read_from_front(lenses, 0.0, spread))
    if pair.bench.kind == "automatic":
        yield Fault("meter-key-wrong", 1.0, read=read_mirrored)


def layout_faults() -> Iterator[Fault]:
    """Edged and mounted in the wrong place. One length serves for one direction."""

    def along(code: str, *directions: tuple[float, float]) -> Fault:
        def make(lenses: Lenses) -> Lenses:
            for latent, direction in enumerate(directions, start=COMMON):
                lenses = displaced(lenses, np.array(direction), latent, parameter(code, "spread_mm") ** 2)
            return lenses

        return Fault(code, 1.0, make)

    yield along("lens-displaced", (1, 0), (0, 1))
    yield along("layout-pd-wrong", (1, 0))
    yield along("layout-height-wrong", (0, 1))
    yield Fault("lens-rotated", 1.0, turns=True)


def base_faults() -> Iterator[Fault]:
    """The prism's amount right, its base wrong."""
    yield prism_fault("base-reversed", lambda prism: -prism)
    yield prism_fault("side-word-wrong", lambda prism: -prism)
    yield prism_fault("base-mirrored", lambda prism: prism * MIRROR)
    yield prism_fault("base-flipped", lambda prism: prism * FLIP)
    for variant, change in enumerate((MIRROR, -np.ones(2), FLIP)):
        yield prism_fault("angle-not-carried", lambda prism, change=change: prism * change, 1 / 3, variant)
    yield Fault(
        "wearers-view-angle", 1.0,
        lambda lenses: replace(lenses, prism=lenses.prism * MIRROR, power=lenses.power * np.outer(MIRROR, MIRROR)),
    )  # fmt: skip


def amount_faults(lens: LensOrder) -> Iterator[Fault]:
    """The prism's amount wrong."""
    across, upright = lens.prism
    oblique = min(abs(across), abs(upright)) > 1e-9
    if oblique:
        as_numbers = parameter("amounts-exchanged", "as_signed_numbers")
        yield prism_fault("amounts-exchanged", lambda prism: np.sign(prism) * np.abs(prism)[:, ::-1], 1 - as_numbers)
        yield prism_fault("amounts-exchanged", lambda prism: prism[:, ::-1], as_numbers, 1)
        yield prism_fault(
            "added-arithmetically",
            lambda prism: prism * (np.abs(prism).sum(1) / np.maximum(np.hypot(prism[:, 0], prism[:, 1]), 1e-12))[:, None],
        )
        for variant, kept in enumerate(np.eye(2)):
            yield prism_fault("component-missing", lambda prism, kept=kept: prism * kept, 1 / 2, variant)
    yield prism_fault("prism-missing", lambda prism: 0 * prism)
    yield prism_fault("prism-doubled", lambda prism: 2 * prism)


def cylinder_faults(lens: LensOrder) -> Iterator[Fault]:
    """A step of the transposition forgotten, or the sign."""
    sphere, cylinder, axis_deg = lens.sphere, lens.cylinder, lens.axis_deg
    steps = (
        (sphere, -cylinder, axis_deg + 90),
        (sphere + cylinder, cylinder, axis_deg + 90),
        (sphere + cylinder, -cylinder, axis_deg),
    )
    for variant, power in enumerate(steps):
        yield power_fault("cylinder-transposition", power, 1 / 3, variant)
    yield power_fault("cylinder-sign", (sphere, -cylinder, axis_deg))
