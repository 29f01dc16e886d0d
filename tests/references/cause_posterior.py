"""The exact posterior of the simulator's own model: which faults, given what was read. Its own Gaussian algebra in numpy.

A hypothesis is one fault of the pair × one of the right lens × one of the left, with product prior, of which at most two
are real faults (three at once are never drawn either). Each predicts a normal distribution, or a mixture of them over
angles and variants; a turn is a fine sum over angles. Both lenses' readings are independent given the latent values they
have in common (zero, layout error, thinning where it is not known); these are integrated in closed form.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cache, cached_property

import numpy as np

from tests.references.cause_faults import CAUSES, NOISE
from tests.references.cause_hypotheses import (
    Hypotheses,
    Places,
    Rows,
    contexts_of,
    predicted,
    read_at_places,
    rows_of,
    what_is_read,
)
from tests.references.cause_lenses import (
    ADD,
    COMMON,
    CYLINDER,
    LAYOUT,
    MEAN,
    MEASURED,
    PLACE,
    PRISM,
    THINNING,
    ZERO,
    Floats,
    Lenses,
    cylinder_parts,
    slid_by,
)
from tests.references.cause_orders import EYES, PairOrder
from tests.references.cause_pair_faults import PairFault

Member = tuple[str, tuple[str, ...]]  # one cause and the eyes it concerns
Entry = tuple[Member, ...]  # a joint hypothesis: what is wrong
AS_ORDERED: Entry = (("as-ordered", EYES),)


# --- noise ----------------------------------------------------------------------------------------------------------------


def prism_variances(pair: PairOrder) -> tuple[float, float, float]:
    """Variance (Δ²) of each component: the laboratory's, the reading's, settling on a place."""
    meter = pair.bench
    step = meter.prism_step**2 / 12
    return NOISE["laboratory_prism"] ** 2, meter.prism**2 / pair.plan.times + step, meter.prism**2 + step


def noise_of(pair: PairOrder, lenses: Lenses) -> Floats:
    """Covariance of what is measured about what each hypothesis predicts, N × measured × measured."""
    laboratory, reading, settling = prism_variances(pair)
    power = NOISE["laboratory_power_d"] ** 2 + pair.bench.power_d**2
    turn = np.deg2rad(NOISE["laboratory_axis_deg"]) ** 2 + np.deg2rad(pair.bench.axis_deg) ** 2
    noise = np.zeros((len(lenses), MEASURED, MEASURED))
    to_mm, both = slid_by(lenses.power, pair.plan.distances), np.eye(2)
    noise[:, PRISM, PRISM] = (laboratory + reading) * both
    noise[:, MEAN, MEAN] = power / 2
    cylinder = cylinder_parts(lenses.seen)
    across = cylinder[:, ::-1] * [-2.0, 2.0]  # a turn by δ moves the cylinder's parts by 2 δ across themselves
    noise[:, CYLINDER, CYLINDER] = power / 2 * both + turn * across[:, :, None] * across[:, None, :]
    noise[:, ADD, ADD] = power
    unplaced = ~to_mm.any((1, 2))
    noise[:, PLACE, PLACE] = (laboratory + settling) * to_mm @ np.swapaxes(to_mm, 1, 2)
    noise[:, PLACE, PLACE] += (pair.bench.position_mm**2 + 900 * unplaced)[:, None, None] * both
    noise[:, PLACE, PRISM] = laboratory * to_mm
    noise[:, PRISM, PLACE] = laboratory * np.swapaxes(to_mm, 1, 2)
    broad = lenses.broad
    noise[:, range(6), range(6)] += broad[:, :6]
    noise[:, PLACE, PLACE] += broad[:, 6, None, None] * to_mm @ np.swapaxes(to_mm, 1, 2)
    return noise


# --- evidence -------------------------------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Evidence:
    """ln p(read of one lens | row, common latents) as c + h·u − u·J u / 2."""

    constant: Floats
    linear: Floats
    quadratic: Floats


def evidence_of(pair: PairOrder, place: str, rows: Rows, data: Floats) -> Evidence:
    """The likelihood of one lens's readings under each row, its own latent values integrated out."""
    read = what_is_read(pair, place)
    means, loads = predicted(pair, place, rows.lenses)
    noise = noise_of(pair, rows.lenses)
    means, loads, noise = means[:, read], loads[:, read], noise[:, read][:, :, read]
    own, common = loads[:, :, COMMON:], loads[:, :, :COMMON]
    covariance = noise + (own * rows.lenses.own_variance[:, None, :]) @ np.swapaxes(own, 1, 2)
    half = np.linalg.cholesky(covariance)
    difference = data[read] - means
    whitened = np.linalg.solve(half, np.concatenate([difference[:, :, None], common], axis=2))
    first, rest = whitened[:, :, 0], whitened[:, :, 1:]
    scale = np.log(np.diagonal(half, axis1=1, axis2=2)).sum(1) + len(means[0]) / 2 * math.log(2 * math.pi)
    back = np.swapaxes(rest, 1, 2)
    return Evidence(-scale - (first**2).sum(1) / 2, (back @ first[:, :, None])[:, :, 0], back @ rest)


def common_variance(pair: PairOrder, fault: PairFault) -> Floats:
    """Prior variance of the latents that both lenses have in common."""
    variance = np.zeros(COMMON)
    variance[ZERO] = pair.bench.zero**2 + fault.zero_variance
    variance[LAYOUT] = fault.layout_variance
    if pair.thinning_amount is None:
        variance[THINNING] = (pair.right.add / 3) ** 2
    return variance


def joint(right: Evidence, left: Evidence, i: Places, j: Places, variance: Floats) -> Floats:
    """ln p(all readings | pairs of rows), the common latents integrated out."""
    constant: Floats = right.constant[i] + left.constant[j]
    active = np.flatnonzero(variance)
    if not len(active):
        return constant
    scale = np.sqrt(variance[active])
    linear = (right.linear[i] + left.linear[j])[:, active] * scale
    inner = (right.quadratic[i] + left.quadratic[j])[:, active][:, :, active] * np.outer(scale, scale) + np.eye(len(active))
    solved = np.linalg.solve(inner, linear[:, :, None])[:, :, 0]
    return constant + (linear * solved).sum(1) / 2 - np.linalg.slogdet(inner)[1] / 2


# --- posterior ------------------------------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Posterior:
    """What the simulator holds of a job's readings. `likelihood`: ln p(readings | entry)."""

    entries: dict[Entry, float]
    likelihood: dict[Entry, float]

    @cached_property
    def groups(self) -> dict[Entry, frozenset[Entry]]:
        """Each entry's group, all that predict the same: equal likelihoods of readings that are as good as continuous."""
        possible = sorted((value, entry) for entry, value in self.likelihood.items() if value > -math.inf)
        groups: list[list[Entry]] = []
        for (value, entry), (before, _) in zip(possible, [(-math.inf, AS_ORDERED), *possible], strict=False):
            if value - before < 1e-7 * max(1.0, abs(value)):
                groups[-1].append(entry)
            else:
                groups.append([entry])
        found = {entry: frozenset([entry]) for entry in self.likelihood}
        for group in groups:
            found |= dict.fromkeys(group, frozenset(group))
        return found


def posterior(pair: PairOrder, hypotheses: Hypotheses, data: dict[str, Floats]) -> Posterior:
    """Which faults, given the data (measured values of each place; what is not read in this job is never looked at)."""
    contexts, shared = contexts_of(hypotheses), hypotheses.pair + hypotheses.beside
    sources = {eye: rows_of(pair, eye, hypotheses.lens[eye], shared) for eye in EYES}
    rows = read_at_places(sources, shared, contexts)
    evidence = {eye: evidence_of(pair, eye, rows[eye], data[eye]) for eye in EYES}
    parts = lens_by_lens(pair, hypotheses, rows, evidence)
    first = len(contexts[0])
    for fault, its in zip(shared[1:], contexts[1:], strict=True):
        log_weights = np.array([context.weight for context in its])
        beside = np.array([context.beside for context in its])
        parts += within_pair_fault(pair, hypotheses, fault, rows, evidence, first, log_weights, beside)
        first += len(its)
    return gathered([(as_far_as_read(entry, pair.plan.eyes), before, found) for entry, before, found in parts])


Part = tuple[Entry, float, float]  # with ln prior, ln likelihood


def lens_by_lens(pair: PairOrder, hypotheses: Hypotheses, rows: dict[str, Rows], evidence: dict[str, Evidence]) -> list[Part]:
    """Right lens × left lens without a fault of the pair, and the faults that both lenses have for the same reason."""
    here = {eye: np.flatnonzero(rows[eye].context == 0) for eye in EYES}
    right, left = here["right"], here["left"]
    i, j = np.repeat(right, len(left)), np.tile(left, len(right))
    logs = joint(evidence["right"], evidence["left"], i, j, common_variance(pair, hypotheses.pair[0])).reshape(
        len(right), len(left)
    )
    peak = logs.max()
    weight = {eye: rows[eye].weight[here[eye]] for eye in EYES}
    shares = np.exp(logs - peak)
    weighted = shares * np.exp(weight["right"][:, None] + weight["left"])
    codes = {eye: [fault.code for fault in hypotheses.lens[eye]] for eye in EYES}
    names = {eye: list(dict.fromkeys(codes[eye])) for eye in EYES}
    member = {
        eye: np.array([[codes[eye][row] == name for row in rows[eye].fault[here[eye]]] for name in names[eye]], float)
        for eye in EYES
    }
    blocks = member["right"] @ weighted @ member["left"].T
    prior, parts = hypotheses.prior, []
    none = prior["shared"]["as-ordered"]
    for a, right_code in enumerate(names["right"]):
        for b, left_code in enumerate(names["left"]):
            if right_code not in prior["right"] or left_code not in prior["left"]:
                continue
            before = math.log(none * prior["right"][right_code] * prior["left"][left_code])
            parts.append((entry_of("as-ordered", right_code, left_code), before, log_of(blocks[a, b]) + peak))
    alone = prior["right"]["as-ordered"] * prior["left"]["as-ordered"]
    for code in prior["shared"].keys() - {fault.code for fault in hypotheses.pair}:
        a, b = names["right"].index(code), names["left"].index(code)
        pairs, found = hypotheses.same_variant(code), blocks[a, b]
        if len(pairs) > 1:  # the same variant in both lenses, its share counted once
            rows_a, rows_b = np.flatnonzero(member["right"][a]), np.flatnonzero(member["left"][b])
            found = sum(shares[rows_a[i_], rows_b[j_]] * share for i_, j_, share in pairs)
        parts.append((((code, EYES),), math.log(prior["shared"][code] * alone), log_of(found) + peak))
    return parts


def within_pair_fault(
    pair: PairOrder, hypotheses: Hypotheses, fault: PairFault, rows: dict[str, Rows], evidence: dict[str, Evidence],
    first: int, log_weights: Floats, beside: Places,
) -> list[Part]:  # fmt: skip
    """A fault of the pair, by itself and with one fault of one lens beside it."""
    here = {eye: np.flatnonzero((rows[eye].context >= first) & (rows[eye].context < first + len(log_weights))) for eye in EYES}
    ordered = {eye: np.full(len(log_weights), -1) for eye in EYES}
    for eye in EYES:
        none = here[eye][rows[eye].fault[here[eye]] == 0]
        ordered[eye][rows[eye].context[none] - first] = none
    single = here["right"][rows["right"].fault[here["right"]] == 0]
    single = single[~beside[rows["right"].context[single] - first]]
    right, left = (here[eye][rows[eye].fault[here[eye]] > 0] for eye in EYES)
    i = np.concatenate([single, right, ordered["right"][rows["left"].context[left] - first]])
    j = np.concatenate([ordered["left"][rows["right"].context[part] - first] for part in (single, right)] + [left])
    # A lens that lies at the other place brings its own faults with it.
    at = {"left": "right", "right": "left"} if fault.crossed else {"right": "right", "left": "left"}
    codes = {eye: [one.code for one in hypotheses.lens[at[eye]]] for eye in EYES}
    number = {eye: np.array([codes[eye].index(code) for code in codes[eye]]) for eye in EYES}  # variants: that of their first
    beyond = len(codes["right"])
    labels = np.concatenate([
        np.zeros(len(single), int), number["right"][rows["right"].fault[right]], beyond + number["left"][rows["left"].fault[left]]
    ])  # fmt: skip
    logs = joint(evidence["right"], evidence["left"], i, j, common_variance(pair, fault))
    logs += log_weights[rows["right"].context[i] - first] + rows["right"].weight[i] + rows["left"].weight[j]
    parts: list[Part] = []
    prior, order = hypotheses.prior, np.argsort(labels, kind="stable")
    firsts = np.flatnonzero(np.diff(labels[order], prepend=-1))
    for label, found in zip(labels[order][firsts], np.logaddexp.reduceat(logs[order], firsts), strict=True):
        own = dict.fromkeys(EYES, "as-ordered")
        if label:
            place = "right" if label < beyond else "left"
            own[at[place]] = codes[place][label - beyond * (place == "left")]
        if any(code not in prior[eye] for eye, code in own.items()):
            continue
        before = prior["shared"][fault.code] * prior["right"][own["right"]] * prior["left"][own["left"]]
        parts.append((entry_of(fault.code, own["right"], own["left"]), math.log(before), float(found)))
    return parts


@cache
def entry_of(shared: str, right: str, left: str) -> Entry:
    """The entry of a joint hypothesis; the same cause in both lenses is one that concerns both."""
    if shared == "as-ordered" and right == left:
        return ((right, EYES),)
    members = ((shared, EYES), (right, ("right",)), (left, ("left",)))
    return tuple(sorted(member for member in members if member[0] != "as-ordered"))


def as_far_as_read(entry: Entry, eyes: tuple[str, ...]) -> Entry:
    """Where one lens alone was read, a lens's fault in both lenses is told of that lens."""
    if len(eyes) == 2:
        return entry
    of_lens = {code for code, cause in CAUSES.items() if cause["both"] < 1}
    return tuple(sorted((code, eyes if code in of_lens else concerned) for code, concerned in entry))


def log_of(value: float) -> float:
    """ln, of nothing as well."""
    return math.log(value) if value > 0 else -math.inf


def gathered(parts: list[Part]) -> Posterior:
    """The posterior by entry."""
    peak = max(before + found for _, before, found in parts)
    by_entry: dict[Entry, list[tuple[float, float]]] = {}
    for entry, before, found in parts:
        by_entry.setdefault(entry, []).append((before, found))
    total, likelihood = {}, {}
    for entry, its in by_entry.items():
        total[entry] = sum(math.exp(before + found - peak) for before, found in its)
        if len(its) == 1:
            likelihood[entry] = its[0][1]
            continue
        befores, founds = np.array(its).T
        likelihood[entry] = float(np.logaddexp.reduce(founds + befores) - np.logaddexp.reduce(befores))
    whole = sum(total.values())
    return Posterior({entry: value / whole for entry, value in total.items()}, likelihood)
