"""The causes against a simulator that knows what went wrong (tests/references/cause_*.py, written apart from the core).

Physics: p(r) = p0 − F r ("A matrix formalism for decentration problems", AJOPO 1976;53:27-33) and the signatures of wrong
readings of shop practice. The same figures over more jobs: `python -m tests.references.cause_confusion 10000 1`.
"""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest
from scipy.stats import multivariate_normal

import pycore
from tests.references.bench_reference import power_matrix
from tests.references.cause_confusion import CODES, LARGEST_ACCUSED, LARGEST_ERROR, LEAST_AMONG_THREE, LEAST_FIRST, Figures, measure
from tests.references.cause_faults import NOISE
from tests.references.cause_lenses import LAYOUT, OWN, ZERO, Floats, slid_by
from tests.references.cause_posterior import AS_ORDERED, Entry, as_far_as_read, posterior
from tests.references.cause_simulator import Case, draw_case, draw_with
from tests.references.cause_statistics import causes_of, estimates, listed

pytestmark = [pytest.mark.slow, pytest.mark.timeout(900)]  # a minute on two idle processors
COUNT = 1200


@pytest.fixture(scope="module")
def figures() -> Figures:
    return measure(COUNT, 7)


def test_every_cause_was_injected(figures: Figures) -> None:
    assert {code for job in figures.stratified for code, _ in job.truth} == set(CODES)


def test_what_can_be_known_is_named_first(figures: Figures) -> None:
    """Where the simulator's own posterior holds the injected cause's group for at least 0.9."""
    assert figures.ranks.sure > COUNT / 5
    assert figures.ranks.first >= LEAST_FIRST
    assert figures.ranks.among_three >= LEAST_AMONG_THREE


def test_probabilities_are_calibrated(figures: Figures) -> None:
    assert figures.first.error <= LARGEST_ERROR
    assert figures.accusing.error <= LARGEST_ERROR + figures.accusing.by_chance


def test_correct_pairs_are_not_accused(figures: Figures) -> None:
    assert figures.accused <= LARGEST_ACCUSED


def test_probabilities_sum_to_one(figures: Figures) -> None:
    for job in figures.drawn:
        assert sum(job.tested.values()) == pytest.approx(1, abs=1e-6)


# --- the simulator itself ---------------------------------------------------------------------------------------------------


def test_the_simulator_is_calibrated_on_its_own_jobs() -> None:
    """Its exact posterior, put in the program's place, keeps what is promised of the program."""
    found = measure(400, 11, program=False)
    assert found.first.error <= LARGEST_ERROR / 2 + 2 * found.first.by_chance
    assert found.every.error <= 2 * found.every.by_chance + 1e-3
    assert found.ranks.first == 1
    assert found.accused <= LARGEST_ACCUSED


def test_the_simulator_slides_a_lens_as_the_worked_example() -> None:
    """R +3.00 −1.00 ×90, due 2 in 1 up, reads 1.2 in 1.6 up: what is due lies 4 mm to the left, 2 mm up (by F⁻¹, by hand)."""
    power, missing = power_matrix(3.0, -1.0, 90.0), np.array([1.2 - 2.0, 1.6 - 1.0])
    assert slid_by(power[None], both=True)[0] @ missing == pytest.approx([-4, 2])
    assert slid_by(power[None], both=False)[0] @ missing == pytest.approx([0, 2])


def test_the_simulators_evidence_is_a_normal_density() -> None:
    """ "As ordered" without zero uncertainty, powers or heights: prism of both lenses, against scipy's density."""
    rng, checked = np.random.default_rng(3), 0
    while checked < 5:
        case: Case = draw_case(rng)
        plan, meter = case.pair.plan, case.pair.bench
        if plan.powers or plan.heights or meter.zero or case.pair.thinning_amount is None:
            continue
        checked += 1
        variance = NOISE["laboratory_prism"] ** 2 + meter.prism**2 / plan.times + meter.prism_step**2 / 12
        read = np.concatenate([case.data[eye][:2] for eye in ("right", "left")])
        due = np.concatenate([case.pair.due(eye) for eye in ("right", "left")])
        expected = multivariate_normal(due, variance * np.eye(4)).logpdf(read)
        found = posterior(case.pair, case.hypotheses, case.data)
        assert found.likelihood[AS_ORDERED] == pytest.approx(expected, abs=1e-9)


def test_program_and_simulator_agree_job_by_job() -> None:
    """Two ways to the same posterior: half the sum of absolute differences, of jobs of which every other one is faulty."""
    rng, apart = np.random.default_rng(5), []
    for number in range(120):
        case = draw_case(rng, faulty=number % 2 == 0)
        own, program = posterior(case.pair, case.hypotheses, case.data).entries, causes_of(case.job)
        apart.append(sum(abs(own.get(entry, 0.0) - program.get(entry, 0.0)) for entry in own.keys() | program.keys()) / 2)
    assert np.median(apart) < 0.005
    assert max(apart) < 0.1


def test_every_cause_is_listed_once() -> None:
    """Also where one lens alone was read, and what concerns both is told of that one."""
    rng, one_lens = np.random.default_rng(6), 0
    while one_lens < 8:
        case = draw_case(rng, faulty=True)
        if len(case.pair.plan.eyes) == 1:
            one_lens += 1
            entries = [entry for entry, _ in listed(case.job)]
            assert len(set(entries)) == len(entries)


SIZED = (
    "lens-displaced",
    "read-elsewhere",
    "instrument-zero",
    "layout-pd-wrong",
    "layout-height-wrong",
    "lens-rotated",
    "frame-not-square",
)


def true_size(case: Case, eye: str, name: str) -> float:
    """The simulated size that the report names so, of a job with one cause."""
    ((code, eyes),) = case.truth.entry
    latents, own = case.latents[eye], OWN.start
    if code.startswith("layout"):
        towards = -1 if name == "inwards_mm" and eyes == ("left",) else 1
        return float(latents[LAYOUT] if len(eyes) == 2 else latents[own] * towards)
    places = {"right_mm": own, "up_mm": own + 1, "x": ZERO.start, "y": ZERO.start + 1}
    return case.turn_deg[eye] if name == "turn_deg" else float(latents[places[name]])


def test_sizes_lie_within_their_uncertainty() -> None:
    """True size less stated size, over the stated uncertainty: like a standard normal, whatever was read."""
    rng, scores = np.random.default_rng(9), []
    for code in SIZED:
        for _ in range(15):
            case = draw_with(rng, code)
            entry = as_far_as_read(case.truth.entry, case.pair.plan.eyes)
            estimate = estimates(case.job).get(entry)
            for eye in entry[0][1] if estimate else ():
                scores += [
                    (true_size(case, eye, name) - found["mean"]) / found["uncertainty"]
                    for name, found in estimate.get(eye, {}).items()
                ]
    assert len(scores) > 80
    assert max(map(abs, scores)) < 5
    assert 0.6 < np.mean(np.square(scores)) < 1.5


def test_a_look_entered_changes_the_list_as_bayes_has_it() -> None:
    """A look at the target without a lens, its result drawn by the table: own posterior × the table's row, made up to 1."""
    looks = json.loads((Path(pycore.__file__).parent / "bench" / "look_table.json").read_text("utf-8"))["looks"]["lens-out"]
    rng = np.random.default_rng(8)

    def chances(entry: Entry) -> Floats:
        return np.mean([looks["rows"].get(code, looks["rows"]["default"]) for code, _ in entry], axis=0)

    for _ in range(25):
        case = draw_case(rng, faulty=True)
        result = int(rng.choice(len(looks["results"]), p=chances(case.truth.entry)))
        own = posterior(case.pair, case.hypotheses, case.data).entries
        own = {entry: value * float(chances(entry)[result]) for entry, value in own.items()}
        program = causes_of(case.job | {"looks": [{"look": "lens-out", "result": looks["results"][result]}]})
        whole = sum(own.values())
        apart = sum(abs(own.get(entry, 0.0) / whole - program.get(entry, 0.0)) for entry in own.keys() | program.keys()) / 2
        assert apart < 0.12
