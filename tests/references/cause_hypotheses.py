"""All that can be wrong with one job: which faults it allows, their priors, and what each of their combinations predicts."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass, replace
from typing import TypeVar

import numpy as np
from numpy.typing import NDArray

from tests.references.cause_faults import CAUSES, COARSE, FINE, Fault, angles, lens_faults
from tests.references.cause_lenses import (
    ADD,
    COMMON,
    CYLINDER,
    MEAN,
    MEASURED,
    PLACE,
    PRISM,
    Floats,
    Lenses,
    as_second,
    joined,
    made,
    measured,
    not_square,
    shown,
    slid_by,
    turned,
    with_zero,
)
from tests.references.cause_orders import EYES, PairOrder
from tests.references.cause_pair_faults import PairFault, pair_faults

AnyFault = TypeVar("AnyFault", Fault, PairFault)
Places = NDArray[np.int64]
OTHER = {"right": "left", "left": "right"}


def what_is_read(pair: PairOrder, place: str) -> NDArray[np.bool_]:
    """Which measurable values this job has of the lens at one place."""
    read = np.zeros(MEASURED, dtype=bool)
    if place not in pair.plan.eyes:
        return read
    return would_be_read(pair)


def would_be_read(pair: PairOrder) -> NDArray[np.bool_]:
    """Which measurable values this job has of a lens that is read."""
    read = np.zeros(MEASURED, dtype=bool)
    read[PRISM] = True
    read[MEAN], read[CYLINDER] = pair.plan.powers, pair.plan.powers
    read[ADD] = pair.plan.powers and pair.right.add > 0
    read[PLACE] = pair.plan.distances, pair.plan.heights
    return read


@dataclass(frozen=True)
class Hypotheses:
    """All that one job allows: faults and the prior of each code, for each lens and for the pair."""

    lens: dict[str, list[Fault]]
    pair: list[PairFault]
    beside: list[PairFault]  # a lens's fault in both lenses, where one of them has a second one
    prior: dict[str, dict[str, float]]  # "right", "left", "shared" → code → prior

    def same_variant(self, code: str) -> list[tuple[int, int, float]]:
        """Places, among the code's variants of the right and of the left lens, of the variants that both allow; shares."""
        return same_variant(self.lens, code)


def same_variant(lens: dict[str, list[Fault]], code: str) -> list[tuple[int, int, float]]:
    """See `Hypotheses.same_variant`."""
    right, left = ([fault for fault in lens[eye] if fault.code == code] for eye in EYES)
    found = [(i, j, one.share) for i, one in enumerate(right) for j, other in enumerate(left) if one.variant == other.variant]
    whole = sum(share for _, _, share in found)
    return [(i, j, share / whole) for i, j, share in found]


def in_both(lens: dict[str, list[Fault]], codes: list[str]) -> Iterator[PairFault]:
    """Faults of a lens in both lenses, to stand beside a further one of either. (Not the turns, of which any two angles go
    together, nor what is unknown.)"""
    for code in codes:
        of_code = {eye: [fault for fault in lens[eye] if fault.code == code] for eye in EYES}
        if code == "none-of-these" or of_code["right"][0].turns:
            continue
        for right, left, share in same_variant(lens, code):
            one = {"right": of_code["right"][right], "left": of_code["left"][left]}
            make = {eye: lambda lens, _other, act=fault.make: as_second(act(as_second(lens))) for eye, fault in one.items()}
            read = {eye: lambda lens, act=fault.read: as_second(act(as_second(lens))) for eye, fault in one.items()}
            yield PairFault(code, share, make, read)


def hypotheses_of(pair: PairOrder) -> Hypotheses:
    """Faults that this job allows and that change something in what is read, and their priors.

    A lens that is not read yet has no faults of its own here; faults of both lenses stay, whatever the other will show.
    """
    lens = {eye: noticeable(pair, eye, list(lens_faults(pair, eye))) for eye in EYES}
    shared = noticeable_pair(pair, list(pair_faults(pair)))
    codes = {eye: {fault.code for fault in lens[eye]} for eye in EYES}
    prior: dict[str, dict[str, float]] = {"shared": {}}
    for eye in EYES:
        here = codes[eye] - {"as-ordered"} if eye in pair.plan.eyes else set()
        prior[eye] = {code: CAUSES[code]["prior"] * share_of(code, eye, codes) for code in here}
    for code in {fault.code for fault in shared} - {"as-ordered"}:
        prior["shared"][code] = CAUSES[code]["prior"] * CAUSES[code]["both"]
    common = sorted((codes["right"] & codes["left"]) - {"as-ordered"} - prior["shared"].keys())
    common = [code for code in common if CAUSES[code]["both"]]
    prior["shared"] |= {code: CAUSES[code]["prior"] * CAUSES[code]["both"] for code in common}
    for of_one in prior.values():
        of_one["as-ordered"] = 1 - sum(of_one.values())
    return Hypotheses(lens, shared, list(in_both(lens, common)), prior)


def predicted(pair: PairOrder, place: str, lenses: Lenses) -> tuple[Floats, Floats]:
    """Means and loadings of what this job's order has measured at one place."""
    return measured(lenses, pair.due(place), slid_by(lenses.power, pair.plan.distances))


def share_of(code: str, eye: str, codes: dict[str, set[str]]) -> float:
    """The share of one lens; a moved table concerns the lens read second, wherever it is known which."""
    entry = CAUSES[code]
    if code == "table-moved" and code not in codes[OTHER[eye]]:
        return float(entry["right"] + entry["left"])
    return float(entry[eye])


def as_due(pair: PairOrder, place: str) -> tuple[Floats, Floats]:
    """What is predicted where nothing is wrong."""
    return predicted(pair, place, with_zero(shown(start(pair, place))))


def differs(pair: PairOrder, place: str, lenses: Lenses, due: tuple[Floats, Floats]) -> bool:
    """Tell whether anything read of a lens, once it is read, would differ from what is due (see `as_due`)."""
    read = would_be_read(pair)
    means, loads = predicted(pair, place, lenses)
    due_means, due_loads = due
    free = np.concatenate(
        [loads[:, :, :COMMON] - due_loads[:, :, :COMMON], loads[:, :, COMMON:] * lenses.own_variance[:, None, :]], 2
    )
    far = [bool((np.abs(part[:, read]) > 1e-9).any()) for part in (means - due_means, free)]
    return far[0] or far[1] or bool(lenses.broad[:, read].any())


def noticeable(pair: PairOrder, eye: str, faults: list[Fault]) -> list[Fault]:
    """The faults that change something, as ordered first; what does not leaves its share to the other variants."""
    changing, ordered, due = [], start(pair, eye), as_due(pair, eye)
    for fault in faults[1:]:
        lens = fault.make(ordered)
        if fault.turns:
            lens = turned(lens, np.array([3.0]))
        if differs(pair, eye, with_zero(fault.read(shown(lens))), due):
            changing.append(fault)
    return [faults[0], *shared_out(changing)]


def shared_out(faults: list[AnyFault]) -> list[AnyFault]:
    """The shares of each code's variants made up to 1."""
    whole: dict[str, float] = {}
    for fault in faults:
        whole[fault.code] = whole.get(fault.code, 0.0) + fault.share
    return [replace(fault, share=fault.share / whole[fault.code]) for fault in faults]


def noticeable_pair(pair: PairOrder, faults: list[PairFault]) -> list[PairFault]:
    """The same for the faults of the pair."""
    lenses, due = {eye: start(pair, eye) for eye in EYES}, {eye: as_due(pair, eye) for eye in EYES}
    changing = []
    for fault in faults[1:]:
        noticed = []
        for place in EYES:
            source = OTHER[place] if fault.crossed else place
            lens = shown(fault.made_as[place](lenses[source], lenses[OTHER[source]]))
            lens = not_square(lens, np.array([3.0])) if fault.turns else fault.read[place](lens)
            noticed.append(bool(fault.zero_variance) or differs(pair, place, with_zero(lens), due[place]))
        # What may also concern one lens alone concerns both only where it changes both.
        if all(noticed) if fault.layout_variance else any(noticed):
            changing.append(fault)
    return [faults[0], *shared_out(changing)]


# --- laid out -------------------------------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Rows:
    """The hypotheses of the lens that lies at one place: index of the context (the pair's fault, its angle) and of the
    lens's own fault, log weight, what is predicted."""

    context: Places
    fault: Places
    weight: Floats
    lenses: Lenses


@dataclass(frozen=True)
class Context:
    """One fault of the pair, at one angle where it turns both lenses: its log weight; `beside`: only with a fault of one lens."""

    weight: float
    beside: bool = False


def start(pair: PairOrder, eye: str) -> Lenses:
    """One lens exactly as ordered."""
    lens = pair.lens(eye)
    unknown = np.array([0.0, 1.0]) * (pair.thinning_amount is None)
    return made(lens.prism, pair.thinning(), unknown, lens.power, lens.add)


def rows_of(pair: PairOrder, source: str, faults: list[Fault], shared: list[PairFault]) -> Rows:
    """Every fault of one lens within every fault of the pair, before the pair's turns on the table."""
    place_of = [OTHER[source] if fault.crossed else source for fault in shared]
    lens, other = start(pair, source), start(pair, OTHER[source])
    base = joined([fault.made_as[place](lens, other) for fault, place in zip(shared, place_of, strict=True)])
    every = np.arange(len(shared))
    parts: list[Lenses] = []
    labels: list[tuple[Places, int, Floats]] = []
    for number, fault in enumerate(faults):
        # What is unknown stands beside no fault of the pair.
        contexts = every[:1] if fault.code == "none-of-these" else every
        for take, count in ((every[:1], FINE), (every[1:], COARSE)) if fault.turns else ((contexts, 1),):
            lenses, weights = fault.make(base.take(take)), np.array([fault.share])
            if fault.turns:
                turns, weights = angles(fault.code, count)
                lenses = turned(lenses, turns)
            parts.append(fault.read(shown(lenses)))
            labels.append((np.repeat(take, len(weights)), number, np.tile(np.log(weights), len(take))))
    context = np.concatenate([label[0] for label in labels])
    fault_number = np.concatenate([np.full(len(label[0]), label[1]) for label in labels])
    return Rows(context, fault_number, np.concatenate([label[2] for label in labels]), joined(parts))


def contexts_of(hypotheses: Hypotheses) -> list[list[Context]]:
    """Each fault of the pair with its angles; then those of a lens in both lenses."""
    found = []
    for fault in hypotheses.pair:
        if fault.turns:
            fine, coarse = angles(fault.code, FINE), angles(fault.code, COARSE)
            alone, beside = ([math.log(weight) for weight in weights] for _, weights in (fine, coarse))
            found.append([Context(weight) for weight in alone] + [Context(weight, beside=True) for weight in beside])
        else:
            found.append([Context(math.log(fault.share))])
    return found + [[Context(math.log(fault.share), beside=True)] for fault in hypotheses.beside]


def read_at_places(sources: dict[str, Rows], shared: list[PairFault], contexts: list[list[Context]]) -> dict[str, Rows]:
    """The lenses on the lens meter, under the faults of the pair: rows of the right and of the left place."""
    parts: dict[str, list[tuple[Places, Places, Floats, Lenses]]] = {eye: [] for eye in EYES}
    first = 0
    for number, fault in enumerate(shared):
        for source, rows in sources.items():
            place = OTHER[source] if fault.crossed else source
            here = np.flatnonzero(rows.context == number)
            if fault.turns:
                parts[place] += turned_on_table(rows, here, fault.code, first)
            else:
                lenses = with_zero(fault.read[place](rows.lenses.take(here)))
                parts[place].append((np.full(len(here), first), rows.fault[here], rows.weight[here], lenses))
        first += len(contexts[number])
    found = {}
    for place, of_place in parts.items():
        context, fault_number, weight, lenses = zip(*of_place, strict=True)
        found[place] = Rows(np.concatenate(context), np.concatenate(fault_number), np.concatenate(weight), joined(list(lenses)))
    return found


def turned_on_table(rows: Rows, here: Places, code: str, first: int) -> list[tuple[Places, Places, Floats, Lenses]]:
    """A lens in a frame that is not square: finely by itself, coarsely with faults of its own."""
    alone = here[rows.fault[here] == 0]
    found = []
    for take, count, offset in ((alone, FINE, 0), (here, COARSE, FINE)):
        lenses = with_zero(not_square(rows.lenses.take(take), angles(code, count)[0]))
        which, angle = np.repeat(take, count), np.tile(np.arange(count), len(take))
        found.append((first + offset + angle, rows.fault[which], rows.weight[which], lenses))
    return found
