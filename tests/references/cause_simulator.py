"""Jobs of which it is known what went wrong: a cause drawn from the table's priors, the lenses made and read so, as a document.

Nothing is drawn by the posterior's algebra: a turn is any angle, and see `cause_readings` for noise and rounding.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from tests.references.cause_documents import Job, document
from tests.references.cause_faults import CAUSES, Fault, lens_faults, parameter
from tests.references.cause_hypotheses import OTHER, Hypotheses, hypotheses_of, start
from tests.references.cause_lenses import PLACE, PRISM, Floats, Lenses, not_square, shown, slid_by, turned, with_zero
from tests.references.cause_orders import EYES, PairOrder, Rng, draw_pair
from tests.references.cause_pair_faults import PairFault, pair_faults
from tests.references.cause_posterior import AS_ORDERED, Entry, common_variance, entry_of
from tests.references.cause_readings import read_lens


@dataclass(frozen=True)
class Truth:
    """What went wrong: codes of the pair's fault and of each lens's; `both` where both lenses have it for the same reason."""

    shared: str
    right: str
    left: str
    both: bool = False

    @property
    def entry(self) -> Entry:
        """The same as an entry."""
        return ((self.right, EYES),) if self.both else entry_of(self.shared, self.right, self.left)


@dataclass(frozen=True)
class Case:
    """One simulated job: the order, what went wrong, the values read (as the document's digits say them), the document."""

    pair: PairOrder
    hypotheses: Hypotheses
    truth: Truth
    data: dict[str, Floats]
    job: Job
    latents: dict[str, Floats]  # of each place: displacements, zero error and the like
    turn_deg: dict[str, float]  # of each place: by how much the lens or its frame is turned


# --- what went wrong ----------------------------------------------------------------------------------------------------------


def truth_of(hypotheses: Hypotheses, shared: str, right: str, left: str) -> Truth:
    """The drawn codes; a code of the shared list that is a lens's fault concerns both lenses."""
    if shared not in {fault.code for fault in hypotheses.pair}:
        return Truth("as-ordered", shared, shared, both=True)
    return Truth(shared, right, left)


def draw_truth(rng: Rng, hypotheses: Hypotheses, *, faulty: bool = False) -> Truth:
    """From the priors; never three faults at once. `faulty`: given that something is wrong."""
    beside = {fault.code for fault in hypotheses.beside}
    while True:
        drawn = [draw_code(rng, hypotheses.prior[part]) for part in ("shared", "right", "left")]
        wrong = sum(code != "as-ordered" for code in drawn)
        if wrong <= 2 and (wrong or not faulty) and not (wrong == 2 and stands_alone(hypotheses, drawn)):
            return Truth(*drawn) if wrong == 2 and drawn[0] in beside else truth_of(hypotheses, *drawn)


def stands_alone(hypotheses: Hypotheses, drawn: list[str]) -> bool:
    """Tell whether a shared cause is one that stands beside no other, or an unknown one would stand beside it."""
    shared, *own = drawn
    beside_others = shared in {fault.code for fault in hypotheses.pair + hypotheses.beside}
    return not beside_others or (shared != "as-ordered" and "none-of-these" in own)


def draw_code(rng: Rng, prior: dict[str, float]) -> str:
    """One code by its prior."""
    return sorted(prior)[int(rng.choice(len(prior), p=[prior[code] for code in sorted(prior)]))]


def entries_allowed(hypotheses: Hypotheses) -> dict[Entry, Truth]:
    """Every single cause that this job allows."""
    none = "as-ordered"
    found = {AS_ORDERED: Truth(none, none, none)}
    for code in hypotheses.prior["shared"]:
        found[((code, EYES),)] = truth_of(hypotheses, code, none, none)
    for eye in EYES:
        for code in hypotheses.prior[eye].keys() - {none}:
            if CAUSES[code][eye] or code == "table-moved":
                found[((code, (eye,)),)] = Truth(none, *((code, none) if eye == "right" else (none, code)))
    return found


# --- making and reading -----------------------------------------------------------------------------------------------------


def draw_variant(rng: Rng, faults: Any, code: str) -> Any:
    """One variant of a fault by its share."""
    variants = [fault for fault in faults if fault.code == code]
    return variants[int(rng.choice(len(variants), p=[fault.share for fault in variants]))]


def draw_turn(rng: Rng, fault: Fault | PairFault) -> float:
    """One angle in degrees; 0 where nothing is turned."""
    return float(rng.normal(0, parameter(fault.code, "turn_deg"))) if fault.turns else 0.0


def lens_on_table(
    pair: PairOrder, place: str, shared: PairFault, own: dict[str, Fault], own_deg: float, table_deg: float
) -> Lenses:
    """The lens that lies at one place, with all that went wrong with it; `own_deg` and `table_deg`: turned by."""
    source = OTHER[place] if shared.crossed else place
    fault = own[source]
    lens = fault.make(shared.made_as[place](start(pair, source), start(pair, OTHER[source])))
    if fault.turns:
        lens = turned(lens, np.array([own_deg]))
    lens = fault.read(shown(lens))
    lens = not_square(lens, np.array([table_deg])) if shared.turns else shared.read[place](lens)
    return with_zero(lens)


def simulate(rng: Rng, pair: PairOrder, hypotheses: Hypotheses, truth: Truth) -> Case:
    """Make the pair with that fault, read it, write the readings down."""
    shared = draw_variant(rng, hypotheses.pair + hypotheses.beside, truth.shared)
    own = {eye: draw_variant(rng, hypotheses.lens[eye], getattr(truth, eye)) for eye in EYES}
    if truth.both:
        variants = [[fault for fault in hypotheses.lens[eye] if fault.code == truth.right] for eye in EYES]
        pairs = hypotheses.same_variant(truth.right)
        right, left, _ = pairs[int(rng.choice(len(pairs), p=[share for _, _, share in pairs]))]
        own = {"right": variants[0][right], "left": variants[1][left]}
    table_deg = draw_turn(rng, shared)
    own_deg = {eye: draw_turn(rng, own[eye]) for eye in EYES}
    common = rng.normal(0, np.sqrt(common_variance(pair, shared)))
    data, readings, latents = {}, {}, {}
    for eye in EYES:
        lenses = lens_on_table(pair, eye, shared, own, own_deg[OTHER[eye] if shared.crossed else eye], table_deg)
        latents[eye] = np.concatenate([common, rng.normal(0, np.sqrt(lenses.own_variance[0]))])
        data[eye], readings[eye] = read_lens(rng, pair, eye, lenses, latents[eye])
    too_far = max(far_off(pair, eye, data[eye]) for eye in EYES) > FARTHEST_SLID_MM
    if pair.plan.heights and (too_far or max(np.abs(data[eye][PLACE]).max() for eye in EYES) > OFF_THE_LENS_MM):
        pair = replace(pair, plan=replace(pair.plan, heights=False, distances=False))
        hypotheses = hypotheses_of(pair)
        readings = {eye: {name: typed for name, typed in its.items() if not name.endswith("_mm")} for eye, its in readings.items()}
    job = document(pair) | {"readings": {"at": "marked-point", **{eye: readings[eye] for eye in pair.plan.eyes}}}
    return Case(pair, hypotheses, truth, data, job, latents, {eye: own_deg[eye] + table_deg for eye in EYES})


FARTHEST_SLID_MM, OFF_THE_LENS_MM = 10.0, 14.0


def far_off(pair: PairOrder, eye: str, values: Floats) -> float:
    """How far one would have to slide, as the prism read has it. (Decided by what was read alone, so that the posterior need
    not know of it.)"""
    way = slid_by(pair.lens(eye).power[None], both=True)[0] @ (values[PRISM] - pair.due(eye))
    return float(np.abs(way).max())


# --- draws --------------------------------------------------------------------------------------------------------------------


def draw_case(rng: Rng, *, faulty: bool = False) -> Case:
    """A job and what went wrong with it, from the priors (`faulty`: given that something is wrong)."""
    pair = draw_pair(rng)
    hypotheses = hypotheses_of(pair)
    return simulate(rng, pair, hypotheses, draw_truth(rng, hypotheses, faulty=faulty))


def may_happen(pair: PairOrder, code: str) -> bool:
    """Tell whether a job allows a cause, without asking whether it would be noticed."""
    of_lens = (fault for eye in EYES for fault in lens_faults(pair, eye))
    return any(fault.code == code for faults in (of_lens, pair_faults(pair)) for fault in faults)


def draw_with(rng: Rng, code: str) -> Case:
    """A job with that cause in it alone: jobs are drawn until one allows it, the eyes then by their shares."""
    while True:
        pair = draw_pair(rng)
        if not may_happen(pair, code):
            continue
        hypotheses = hypotheses_of(pair)
        allowed = {entry: truth for entry, truth in entries_allowed(hypotheses).items() if entry[0][0] == code}
        if allowed:
            shares = [CAUSES[code]["both" if len(eyes) == 2 else eyes[0]] if code in CAUSES else 1.0 for ((_, eyes),) in allowed]
            truths = list(allowed.values())
            return simulate(rng, pair, hypotheses, truths[int(rng.choice(len(truths), p=np.array(shares) / sum(shares)))])
