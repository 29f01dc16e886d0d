"""Orders of realistic statistics for the simulator of causes, as numbers and as a job document.

Ranges: frames 48-58 by 28-46 with a bridge of 14-24 mm, distances of 27-36 mm to each eye, fitting crosses 2-4 mm above the
prism reference point (published ranges and shop practice); how often what is ordered, and the spread of powers: common practice.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from tests.references import bench_reference as bench

Floats = NDArray[np.float64]
Rng = np.random.Generator
EYES = ("right", "left")
THINNED = ("bifocal", "progressive")
# A flat-top segment as usual: its top below the reference point, its centre below its top, towards the nose.
SEGMENT_BELOW_MM, SEGMENT_CENTRE_BELOW_TOP_MM, SEGMENT_INSET_MM = 4.0, 5.0, 2.5


@dataclass(frozen=True, kw_only=True)
class LensOrder:
    """One lens as ordered: powers in D, prism components (Δ, base as typed), positions in mm."""

    eye: str
    sphere: float
    cylinder: float
    axis_deg: int
    add: float
    components: tuple[tuple[float, Any], ...]
    pd_mm: float
    height_mm: float
    cross_mm: float
    asked: LensOrder | None = None  # the prescription, where these are values that the maker states instead

    @property
    def power(self) -> Floats:
        """The power matrix in D."""
        return bench.power_matrix(self.sphere, self.cylinder, self.axis_deg)

    @property
    def prism(self) -> Floats:
        """The prescribed prism as a vector in Δ, seen from the front."""
        return sum((vector_of(self.eye, amount, base) for amount, base in self.components), np.zeros(2))


@dataclass(frozen=True, kw_only=True)
class Bench:
    """The instrument: its step (Δ) and one standard uncertainty per quantity."""

    kind: str
    prism_step: float
    prism: float
    power_d: float
    axis_deg: float
    position_mm: float
    zero: float


@dataclass(frozen=True, kw_only=True)
class Plan:
    """What is read of the pair: `times` each prism; what stands on the compensator's scale (Δ), where one is set."""

    eyes: tuple[str, ...]
    powers: bool
    heights: bool
    distances: bool
    times: int
    scales: dict[str, tuple[float, int]]


@dataclass(frozen=True, kw_only=True)
class PairOrder:
    """A pair as ordered, and the bench it is read on."""

    right: LensOrder
    left: LensOrder
    design: str
    state: str
    rule: str
    thinning_amount: float | None  # Δ base down in both, None: not known
    bench: Bench
    plan: Plan
    box_mm: tuple[float, float, float]  # A, B and the bridge

    def thinning(self) -> Floats:
        """The thinning due in each lens as a vector; what it is on average where it is not known."""
        amount = self.right.add / 3 if self.thinning_amount is None else self.thinning_amount
        return np.array([0.0, -amount])

    def due(self, eye: str) -> Floats:
        """What the lens meter must show at the ordered point."""
        return self.lens(eye).prism + self.thinning()

    def lens(self, eye: str) -> LensOrder:
        """The order of one eye."""
        return self.right if eye == "right" else self.left

    @property
    def lenses(self) -> tuple[LensOrder, LensOrder]:
        """Right, left."""
        return self.right, self.left


def vector_of(eye: str, amount: float, base: Any) -> Floats:
    """One prism with its base as typed (a word, degrees, or the 180 notation) as a vector in Δ."""
    if isinstance(base, dict):
        prism = bench.vector_of_180(eye, amount, float(base["degrees"]), base["side"])
    elif base in ("in", "out", "up", "down"):
        prism = bench.vector_of_word(eye, amount, base)
    else:
        prism = complex(bench.vector(amount, float(base)))
    return np.array([prism.real, prism.imag])


def pick(rng: Rng, choices: Sequence[Any], shares: Sequence[float]) -> Any:
    """One of the choices."""
    return choices[int(rng.choice(len(choices), p=np.array(shares) / sum(shares)))]


def draw_pair(rng: Rng) -> PairOrder:
    """Draw one pair as a prism shop would get it."""
    design = pick(rng, ("single-vision", "progressive", "bifocal"), (0.5, 0.4, 0.1))
    add = 0.0 if design == "single-vision" else float(rng.integers(3, 13)) / 4
    sphere = quarter(np.clip(rng.normal(-1.0, 2.5), -8, 7))
    cylinder = 0.0 if rng.random() < 0.25 else -min(quarter(rng.exponential(0.9)) + 0.25, 4.0)
    axis = round(pick(rng, (180.0, 90.0, rng.uniform(0, 180)), (0.5, 0.25, 0.25)) + rng.normal(0, 12)) % 180 or 180
    components = draw_prism(rng)
    half_pd, box = rng.uniform(28.5, 34.5), (rng.integers(48, 59), rng.integers(28, 47), rng.integers(14, 25))
    height = half_mm(box[1] / 2 + rng.uniform(-1, 3))
    cross = float(rng.integers(2, 5)) if design == "progressive" else 0.0
    right = LensOrder(
        eye="right", sphere=sphere, cylinder=cylinder, axis_deg=axis, add=add, components=written(rng, "right", components[0]),
        pd_mm=half_mm(half_pd), height_mm=height, cross_mm=cross,
    )  # fmt: skip
    left = LensOrder(
        eye="left", sphere=sphere + quarter(rng.normal(0, 0.6)), cylinder=min(0.0, cylinder + quarter(rng.normal(0, 0.3))),
        axis_deg=round(180 - axis + rng.normal(0, 8)) % 180 or 180, add=add, components=written(rng, "left", components[1]),
        pd_mm=half_mm(half_pd + rng.normal(0, 0.7)), height_mm=height + float(rng.choice([0, 0, 0, 0.5, -0.5])), cross_mm=cross,
    )  # fmt: skip
    rule, amount = draw_thinning(rng, design, add)
    state = pick(rng, ("mounted", "uncut", "edged"), (0.65, 0.25, 0.10))
    if rng.random() < 0.06:
        right, left = stated_by_maker(rng, right), stated_by_maker(rng, left)
    meter = draw_bench(rng)
    places = state == "mounted" and amount is not None and min(weakest(right), weakest(left)) >= 1 and rng.random() < 0.3
    plan = Plan(
        eyes=pick(rng, (EYES, EYES[:1], EYES[1:]), (0.92, 0.05, 0.03)),
        powers=rng.random() < 0.8,
        heights=places,
        distances=places and rng.random() < 0.6,
        times=3 if rng.random() < 0.1 else 1,
        scales=draw_scales(rng, meter, (right, left)),
    )
    return PairOrder(
        right=right, left=left, design=design, state=state, rule=rule, thinning_amount=amount, bench=meter, plan=plan,
        box_mm=(float(box[0]), float(box[1]), float(box[2])),
    )  # fmt: skip


def weakest(lens: LensOrder) -> float:
    """The weaker principal power, D."""
    return min(abs(lens.sphere), abs(lens.sphere + lens.cylinder))


def stated_by_maker(rng: Rng, lens: LensOrder) -> LensOrder:
    """The same lens with the maker's values for it as worn: a little more or less power and prism."""
    parts = tuple((round(amount * rng.uniform(0.9, 1.05) + 0.05, 2), base) for amount, base in lens.components)
    sphere = round(lens.sphere + rng.normal(0, 0.08), 2)
    return replace(lens, sphere=sphere, components=parts, asked=lens)


def draw_scales(rng: Rng, meter: Bench, lenses: tuple[LensOrder, LensOrder]) -> dict[str, tuple[float, int]]:
    """The compensator set about on what is ordered, where that lies off the rings."""
    if meter.kind == "automatic":
        return {}
    prisms = {lens.eye: complex(*lens.prism) for lens in lenses}
    wanted = {eye: prism for eye, prism in prisms.items() if abs(prism) > 4.5 or (abs(prism) > 2 and rng.random() < 0.1)}
    return {eye: (half_mm(abs(prism)), round(bench.base_of(prism)) % 360) for eye, prism in wanted.items()}


def quarter(value: float) -> float:
    """To the quarter."""
    return round(float(value) * 4) / 4


def half_mm(value: float) -> float:
    """To the half."""
    return round(float(value) * 2) / 2


def draw_prism(rng: Rng) -> tuple[dict[str, float], dict[str, float]]:
    """Components by word for both lenses: mostly split evenly, like bases across, opposite bases up and down."""
    kind = pick(rng, ("compound", "across", "upright", "none"), (0.55, 0.22, 0.13, 0.10))
    across, upright = quarter(rng.gamma(3.0, 0.8)) + 0.5, quarter(rng.gamma(2.0, 0.7)) + 0.5
    right: dict[str, float] = {}
    left: dict[str, float] = {}
    if kind in ("compound", "across"):
        word = pick(rng, ("in", "out"), (0.5, 0.5))
        right[word], left[word] = across, across if rng.random() < 0.75 else quarter(rng.uniform(0, 4))
    if kind in ("compound", "upright"):
        words = pick(rng, (("up", "down"), ("down", "up")), (0.5, 0.5))
        right[words[0]], left[words[1]] = upright, upright if rng.random() < 0.6 else quarter(rng.uniform(0, 3))
        if rng.random() < 0.2:  # all of it in one lens
            (right if rng.random() < 0.5 else left).pop(words[0], None)
    return right, left


def written(rng: Rng, eye: str, words: dict[str, float]) -> tuple[tuple[float, Any], ...]:
    """The components in words, or their sum as amount and base in degrees, or in the 180 notation."""
    parts = [(amount, word) for word, amount in words.items() if amount]
    total = sum((complex(*vector_of(eye, amount, word)) for amount, word in parts), 0j)
    base, way = round(bench.base_of(total)) % 360, rng.random()
    if abs(total) < 0.5 or base % 90 == 0 or way < 0.6:
        return tuple(parts)
    amount = round(abs(total), 2)
    if way < 0.8:
        return ((amount, str(base)),)
    return ((amount, {"degrees": str(base % 180), "side": "up" if base < 180 else "down"}),)


def draw_thinning(rng: Rng, design: str, add: float) -> tuple[str, float | None]:
    """The rule of the paperwork and its amount, Δ base down in both lenses."""
    if design not in THINNED:
        return "none", 0.0
    rule = pick(rng, ("two-thirds", "six-tenths", "amount", "none", "unknown"), (0.5, 0.1, 0.1, 0.25, 0.05))
    if rule == "unknown":
        return rule, None
    if rule == "amount":
        return rule, quarter(rng.uniform(0.5, 1.5))
    return rule, float(bench.thinning_amount(rule, str(add), str(add)))


def draw_bench(rng: Rng) -> Bench:
    """A manual lens meter in quarter steps, or an automatic one in hundredths."""
    zero = float(rng.choice([0.0, 0.03, 0.05]))
    if rng.random() < 0.7:
        return Bench(kind="manual", prism_step=0.25, prism=0.08, power_d=0.04, axis_deg=1.0, position_mm=0.3, zero=zero)
    return Bench(kind="automatic", prism_step=0.01, prism=0.05, power_d=0.03, axis_deg=1.0, position_mm=0.3, zero=zero)
