"""How good a list of causes is over many simulated jobs: confusion, rank of the injected cause, reliability.

Half of the jobs drawn for the reliability have something wrong, and every job carries the weight that makes the whole
again a draw from the priors: the curve then stands on faults as well as on the many good pairs.
"""

from __future__ import annotations

import json
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any

import numpy as np

from pycore.api import handle
from tests.references.cause_faults import CAUSES
from tests.references.cause_hypotheses import hypotheses_of
from tests.references.cause_orders import EYES, draw_pair
from tests.references.cause_posterior import AS_ORDERED, Entry, Member, Posterior, as_far_as_read, posterior
from tests.references.cause_simulator import Case, draw_truth, draw_with, simulate

ALL_OTHERS: Entry = (("all-others", EYES),)
BINS = np.array([0.0, 0.02, 0.05, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 0.95, 0.98, 1.0])


Group = frozenset[Entry]


@dataclass(frozen=True)
class Judged:
    """One job: its weight, what went wrong, the probability of that one's group by the simulator's own posterior, the list that
    is tested, and the same by the simulator's groups of equal predictions, likeliest first."""

    weight: float
    truth: Entry
    sure: float
    tested: dict[Entry, float]
    groups: list[tuple[float, Group]]

    def accuses(self) -> bool:
        """Tell whether a cause stands first."""
        return self.groups[0][1].isdisjoint({AS_ORDERED, ALL_OTHERS})

    def holds(self, group: Group) -> bool:
        """Tell whether a group of the tested list holds what went wrong; the rest of the list holds what is not in it."""
        return self.truth in group or (group == {ALL_OTHERS} and not any(self.truth in other for _, other in self.groups))


def grouped(own: Posterior, truth: Entry, tested: dict[Entry, float]) -> list[tuple[float, Group]]:
    """A tested list by the simulator's groups, likeliest first (of each group, what is listed, and what went wrong)."""
    left, found = dict(tested), []
    while left:
        entry = next(iter(left))
        group = own.groups.get(entry, frozenset([entry]))
        told = frozenset(member for member in group if member in tested or member == truth)
        found.append((sum(left.pop(member, 0.0) for member in group), told))
    return sorted(found, key=lambda item: -item[0])


# --- the program's list ---------------------------------------------------------------------------------------------------


def reported(job: dict[str, Any]) -> list[tuple[Entry, dict[str, Any]]]:
    """The program's list of causes of one job, through its door."""
    request = {"format": "wedgewright.request/1", "do": "report", "job": job, "sections": ["causes"]}
    report = json.loads(handle(json.dumps(request)))
    assert "causes" in report, (report, job)
    return [(tuple(sorted(member_of(part) for part in (one, *one.get("with", [])))), one) for one in report["causes"]]


def listed(job: dict[str, Any]) -> list[tuple[Entry, float]]:
    """Its probabilities, in its order."""
    return [(entry, one["probability"]) for entry, one in reported(job)]


def estimates(job: dict[str, Any]) -> dict[Entry, dict[str, Any] | None]:
    """How large each of its causes was, None where that is not worked out."""
    return {entry: one["estimate"] for entry, one in reported(job)}


def causes_of(job: dict[str, Any]) -> dict[Entry, float]:
    """Its probabilities by entry."""
    found: dict[Entry, float] = {}
    for entry, value in listed(job):
        found[entry] = found.get(entry, 0.0) + value
    return found


def member_of(part: dict[str, Any]) -> Member:
    """One cause of an entry with its eyes, right first; what is no cause, or one of the pair only, concerns both."""
    code = part["code"]
    both = code not in CAUSES or CAUSES[code]["both"] == 1
    return part["code"], EYES if both else tuple(eye for eye in EYES if eye in part["eyes"])


# --- jobs -----------------------------------------------------------------------------------------------------------------


def judge(case: Case, weight: float, *, program: bool) -> Judged:
    """One job judged by the simulator and by the program (or by the simulator alone, to prove itself)."""
    own = posterior(case.pair, case.hypotheses, case.data)
    truth = as_far_as_read(case.truth.entry, case.pair.plan.eyes)
    tested = causes_of(case.job) if program else in_short(own.entries)
    sure = sum(own.entries[entry] for entry in own.groups[truth])
    return Judged(weight, truth, sure, tested, grouped(own, truth, tested))


def in_short(entries: dict[Entry, float], least: float = 1e-4) -> dict[Entry, float]:
    """A posterior as a list that people could read: what is hardly probable as one."""
    told = {entry: value for entry, value in entries.items() if value >= least}
    return told | {ALL_OTHERS: 1 - sum(told.values())}


def from_priors(count: int, seed: int, *, program: bool) -> list[Judged]:
    """Jobs by the priors, the faulty ones oversampled and weighted."""
    rng, judged = np.random.default_rng(seed), []
    for number in range(count):
        pair = draw_pair(rng)
        hypotheses = hypotheses_of(pair)
        good = float(np.prod([prior["as-ordered"] for prior in hypotheses.prior.values()]))
        faulty = number % 2 == 1
        truth = draw_truth(rng, hypotheses, faulty=faulty)
        while not faulty and truth.entry != AS_ORDERED:
            truth = draw_truth(rng, hypotheses)
        judged.append(judge(simulate(rng, pair, hypotheses, truth), 1 - good if faulty else good, program=program))
    return judged


def by_cause(codes: Iterable[str], each: int, seed: int, *, program: bool) -> list[Judged]:
    """The same number of jobs for each cause."""
    rng = np.random.default_rng(seed)
    return [judge(draw_with(rng, code), 1.0, program=program) for code in codes for _ in range(each)]


# --- figures --------------------------------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Reliability:
    """Per bin of the stated probability: weight, mean stated, how often true; the expected calibration error; and what that
    error would be on average by chance alone, were the statements perfectly calibrated."""

    rows: list[tuple[float, float, float]]
    error: float
    by_chance: float


def reliability(judged: list[Judged], *, top_only: bool) -> Reliability:
    """Stated probability against frequency, of the first group of each job or of all groups."""
    told, true, weight = [], [], []
    for job in judged:
        for value, group in job.groups[:1] if top_only else job.groups:
            told.append(value)
            true.append(job.holds(group))
            weight.append(job.weight)
    return curve(np.array(told), np.array(true), np.array(weight))


def curve(told: Any, true: Any, weight: Any) -> Reliability:
    """The reliability curve of weighted statements."""
    place = np.clip(np.digitize(told, BINS) - 1, 0, len(BINS) - 2)
    rows, error, chance = [], 0.0, 0.0
    for number in range(len(BINS) - 1):
        here = place == number
        if weight[here].sum() > 0:
            mean, often = (float(np.average(part[here], weights=weight[here])) for part in (told, true))
            rows.append((float(weight[here].sum() / weight.sum()), mean, often))
            error += rows[-1][0] * abs(mean - often)
            spread = np.sqrt((weight[here] ** 2 * told[here] * (1 - told[here])).sum())
            chance += float(np.sqrt(2 / np.pi) * spread / weight.sum())  # mean of the absolute value of a normal deviate
    return Reliability(rows, error, chance)


@dataclass(frozen=True)
class Ranks:
    """Where the simulator is sure (0.9) of the injected cause's group: how many, how often first, among the first three."""

    sure: int
    first: float
    among_three: float


def ranks(judged: list[Judged], sure: float = 0.9) -> Ranks:
    """Rank of the injected group in the tested list."""
    places = []
    for job in judged:
        if job.sure >= sure:
            ranked = [job.truth in group for _, group in job.groups]
            places.append(ranked.index(True) if any(ranked) else len(ranked))
    found = np.array(places)
    return Ranks(len(found), float((found == 0).mean()), float((found < 3).mean()))


def falsely_accused(judged: list[Judged]) -> float:
    """Share of correct pairs for which some cause (with all that predict the same) stands above one half."""
    good = [job for job in judged if job.truth == AS_ORDERED]
    return sum(job.accuses() and job.groups[0][0] > 0.5 for job in good) / len(good)


def confusion(judged: list[Judged]) -> dict[str, dict[str, int]]:
    """Injected cause → what stands first → in how many jobs. A first group that holds the injected cause counts as it."""
    table: dict[str, dict[str, int]] = {}
    for job in judged:
        _, first = job.groups[0]
        injected = code_of(job.truth)
        stated = injected if job.holds(first) else code_of(max(first, key=lambda entry: job.tested.get(entry, 0.0)))
        row = table.setdefault(injected, {})
        row[stated] = row.get(stated, 0) + 1
    return table


def code_of(entry: Entry) -> str:
    """The causes of an entry without their eyes."""
    return " + ".join(code for code, _ in entry)
