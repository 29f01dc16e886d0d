"""What can be wrong with both lenses at once: each fault as physics, with the prior and the parameters of the program's table."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from tests.references import bench_reference as bench
from tests.references.cause_faults import Act, parameter, towards_nose
from tests.references.cause_lenses import LAYOUT, MIRROR, Floats, Lenses, displaced, offset, upside_down
from tests.references.cause_orders import EYES, LensOrder, PairOrder


@dataclass(frozen=True)
class PairFault:
    """One fault of the pair: what each lens is made as, what is done to it on the lens meter."""

    code: str
    share: float
    made_as: dict[str, Callable[[Lenses, Lenses], Lenses]]  # from this place's lens and the other one
    read: dict[str, Act]
    turns: bool = False
    crossed: bool = False  # the other lens, with its own faults, lies at this place
    zero_variance: float = 0.0
    layout_variance: float = 0.0


def own(lens: Lenses, _other: Lenses) -> Lenses:
    """This place's lens."""
    return lens


def same(lenses: Lenses) -> Lenses:
    """Read as it is."""
    return lenses


def pair_fault(code: str, share: float = 1.0, make: Any = own, read: Any = same, **more: Any) -> PairFault:
    """A pair's fault that treats both lenses alike (one function) or each in its way (one per eye)."""
    per_eye = [part if isinstance(part, dict) else dict.fromkeys(EYES, part) for part in (make, read)]
    return PairFault(code, share, per_eye[0], per_eye[1], **more)


def pair_faults(pair: PairOrder) -> Iterator[PairFault]:
    """Every fault of the pair that this job allows, as ordered first."""
    yield pair_fault("as-ordered")
    for code in ("instrument-zero",) + ("compensator-left-on",) * (pair.bench.kind == "manual"):
        yield pair_fault(code, zero_variance=parameter(code, "prism") ** 2)
    if pair.plan.scales.keys() & set(pair.plan.eyes):
        taken = {eye: 2 * taken_by_scale(pair, eye) for eye in EYES}
        yield pair_fault("compensator-wrong-sense", read={eye: lambda lenses, c=c: offset(lenses, c) for eye, c in taken.items()})
    if pair.state == "mounted":
        by_name = parameter("frame-upside-down", "by_name")
        yield pair_fault("frame-upside-down", by_name, read=upside_down)
        yield pair_fault("frame-upside-down", 1 - by_name, read=upside_down, crossed=True)
        yield pair_fault("frame-not-square", turns=True)
    yield pair_fault("lenses-swapped", make=lambda lens, other: replace(lens, **body(other)))
    if pair.state != "uncut":
        yield from shared_layout()
    yield from shared_prism(pair)
    if pair.thinning_amount:
        yield from shared_thinning(pair)
    if pair.right.asked:
        yield pair_fault("as-worn-ignored", make={lens.eye: as_prescribed(lens.asked) for lens in pair.lenses if lens.asked})


def body(lens: Lenses) -> dict[str, Any]:
    """All that goes with the body of a lens."""
    return {name: getattr(lens, name) for name in ("prism", "thinning", "thinning_load", "power", "add")}


def as_prescribed(asked: LensOrder) -> Callable[[Lenses, Lenses], Lenses]:
    """The lens made to the prescription, not to the maker's values."""
    return lambda lens, _other: replace(lens, prism=asked.prism[None], power=asked.power[None])


def taken_by_scale(pair: PairOrder, eye: str) -> Floats:
    """What the compensator of one lens was taken to take away, Δ (its scale reads the lens's prism)."""
    prism = complex(bench.vector(*pair.plan.scales.get(eye, (0.0, 0))))
    return np.array([prism.real, prism.imag])


def shared_layout() -> Iterator[PairFault]:
    """Both lenses laid out by the same wrong distance or height."""
    for code, directions in (
        ("layout-pd-wrong", {eye: np.array([towards_nose(eye), 0.0]) for eye in EYES}),
        ("layout-height-wrong", {eye: np.array([0.0, 1.0]) for eye in EYES}),
    ):
        make = {eye: lambda lens, _other, way=way: displaced(lens, way, LAYOUT, 0.0) for eye, way in directions.items()}
        yield pair_fault(code, make=make, layout_variance=parameter(code, "spread_mm") ** 2)


def shared_prism(pair: PairOrder) -> Iterator[PairFault]:
    """The pair's prism shared out wrongly between the lenses."""
    right, left = pair.right.prism, pair.left.prism
    yield pair_fault("eyes-swapped-in-words", make=lambda lens, other: replace(lens, prism=other.prism * MIRROR))
    for whole in EYES:
        prisms = {eye: ((right - left) if eye == "right" else (left - right)) * (eye == whole) for eye in EYES}
        make = {eye: lambda lens, _other, prism=prism: replace(lens, prism=prism[None]) for eye, prism in prisms.items()}
        yield pair_fault("not-split", 1 / 2, make=make)
    yield pair_fault("split-twice", make=lambda lens, _other: replace(lens, prism=lens.prism / 2))


def shared_thinning(pair: PairOrder) -> Iterator[PairFault]:
    """Another thinning than due in both lenses."""
    due, add = pair.thinning_amount or 0.0, str(min(pair.right.add, pair.left.add))
    rules = [float(bench.thinning_amount(rule, add, add)) for rule in ("two-thirds", "six-tenths")]
    others = [amount for amount in rules if abs(amount - due) > 0.05 + 1e-9]

    def thinned(code: str, amount: float, share: float = 1.0) -> PairFault:
        return pair_fault(code, share, make=lambda lens, _other: replace(lens, thinning=np.array([[0.0, -amount]])))

    yield thinned("thinning-missing", 0.0)
    yield thinned("thinning-doubled", 2 * due)
    yield thinned("thinning-base-up", -due)
    for amount in others:
        yield thinned("thinning-other-rule", amount, 1 / len(others))
