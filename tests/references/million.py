"""A million random orders through the door, compared with the reference: `python -m tests.references.million [count]`.

Prints the largest error of each stratum and every quantity that is off by more than 1e-9 prism dioptres, dioptres
or millimetres (bases: 1e-7 degrees where the prism is at least 0.01); fails if there is one. A wrong word is `inf`.
"""

from __future__ import annotations

import json
import math
import sys
from collections import defaultdict
from concurrent.futures import ProcessPoolExecutor

import numpy as np

from pycore.api import handle
from tests.references import bench_reference as bench
from tests.references.orders import COMPENSATOR_MAXIMUM, RINGS, SENSES, STRATA, Job, Orders, draw, jobs, reckon

ALLOWED = 1e-9
ALLOWED_BASE_DEG = 1e-7
NOTHING = 5e-10  # what leaves the optics is snapped to 1e-9
# Below it the program names no optical centre: too weak to decentre, must be ground (singular at 0; 0.25: common practice).
WEAKEST_D = 0.25
EYES = ("right", "left")
Errors = dict[str, float]


def vector_in(entry: Job) -> complex:
    """A prism of the report as a vector."""
    return complex(entry["x"], entry["y"])


def compare_names(eye: str, entry: Job, true: complex) -> Errors:
    """Every name of a prism against its vector; a wrong word counts as an infinite error."""
    amount = abs(true)
    right = {
        "in and out": entry["horizontal"]["base"] == bench.horizontal_word(eye, true.real if abs(true.real) > NOTHING else 0),
        "up and down": entry["vertical"]["base"] == bench.vertical_word(true.imag if abs(true.imag) > NOTHING else 0),
        "quadrant": entry["quadrant"] == bench.quadrant(eye, true),
        "no base without prism": (entry["base"] is None) == (entry["amount"] == 0),
    }
    if min(abs(abs(part) - NOTHING) for part in (true.real, true.imag)) < 1e-12:
        right = {}  # half a step from 0: either word is right
    errors = {name: 0.0 if holds else math.inf for name, holds in right.items()}
    errors["components"] = abs(
        complex(entry["horizontal"]["amount"] - abs(true.real), entry["vertical"]["amount"] - abs(true.imag))
    )
    errors["amount"] = abs(entry["amount"] - amount)
    if amount >= 0.01:
        base, notation = bench.base_of(true), entry["notation_180"]
        errors["base"] = bench.turn_between(entry["base"], base) * ALLOWED / ALLOWED_BASE_DEG
        named = bench.base_of(bench.vector_of_180(eye, 1, float(notation["degrees"]), notation["side"]))
        half_a_digit = 0.5 * 10 ** -len(notation["degrees"].partition(".")[2])
        errors["180 notation"] = 0.0 if bench.turn_between(named, base) <= half_a_digit + ALLOWED_BASE_DEG else math.inf
    return errors


def compare_compensator(entry: Job, expected: complex, sense: str) -> Errors:
    """The setting that centres the target, and the smaller one that brings it back onto the rings."""
    full, given = entry["full"], entry["onto_rings"]
    setting, left = bench.setting_to_centre(expected, sense, COMPENSATOR_MAXIMUM)
    errors = {
        "compensator": abs(bench.vector(full["amount"], full["base"] or 0) - setting),
        "compensator, residual": abs(vector_in(full["residual"]) - left),
    }
    smaller = bench.setting_onto_rings(expected, RINGS, sense, COMPENSATOR_MAXIMUM)
    if abs(abs(expected) - RINGS) > 1e-9:
        errors["rings needed or not"] = 0.0 if (smaller is None) == (given is None) else math.inf
    if abs(abs(expected) - COMPENSATOR_MAXIMUM) > 1e-9:
        errors["beyond the compensator or not"] = 0.0 if full["beyond_maximum"] == (abs(left) > NOTHING) else math.inf
    if smaller and given:
        errors["onto the rings"] = abs(bench.vector(given["amount"], given["base"] or 0) - smaller[0])
        errors["onto the rings, residual"] = abs(vector_in(given["residual"]) - smaller[1])
    return errors


def compare_powers(entries: list[Job], true: bench.Floats) -> Errors:
    """Both cylinder forms, as matrices and as powers, and the powers along 90 and 180, of all lenses at once."""
    errors = {}
    for meridian in (90, 180):
        given = np.array([entry[f"at_{meridian}"] for entry in entries])
        errors[f"along {meridian}"] = np.abs(given - bench.along(true, meridian)).max()
    for name, sign in (("plus form", 1), ("minus form", -1)):
        key = name.replace(" ", "_")
        sphere, cylinder = (np.array([entry[key][part] for entry in entries]) for part in ("sphere", "cylinder"))
        axis = np.array([entry[key]["axis"] or 180.0 for entry in entries])  # none where the cylinder is 0
        none = np.array([entry[key]["axis"] is None for entry in entries])
        errors[f"{name}, matrix"] = np.abs(bench.power_matrix(sphere, cylinder, axis) - true).max()
        true_sphere, true_cylinder, _ = bench.spherocylinder(true, sign)
        errors[f"{name}, sphere and cylinder"] = max(np.abs(sphere - true_sphere).max(), np.abs(cylinder - true_cylinder).max())
        errors[f"{name}, axis over 0 to 180"] = 0.0 if np.all((axis > 0) & (axis <= 180) & (none == (cylinder == 0))) else math.inf
    return {name: float(error) for name, error in errors.items()}


def compare_centres(entries: list[Job | None], prescribed: bench.Complexes, power: bench.Floats, design: str) -> Errors:
    """Where the optical centres lie; nowhere for a progressive or where a principal power is too weak."""
    weakest = np.abs(np.linalg.eigvalsh(power)).min(axis=-1)
    absent = np.array([entry is None for entry in entries])
    must_be_absent = (weakest < WEAKEST_D - 1e-9) | (design != "single-vision")
    errors = {"no optical centre": 0.0 if np.all(absent[must_be_absent]) else math.inf}
    must_be_there = (weakest > WEAKEST_D + 1e-9) & (np.abs(prescribed) > 2 * NOTHING) & ~must_be_absent
    errors["optical centre missing"] = 0.0 if not np.any(absent[must_be_there]) else math.inf
    there = must_be_there & ~absent
    given = np.array(
        [complex(entry["right_mm"], entry["up_mm"]) for entry, take in zip(entries, there, strict=True) if entry and take]
    )
    if len(given):
        true = bench.optical_centre_mm(prescribed[there], power[there])
        errors["optical centre, mm"] = float((np.abs(given - true) / np.maximum(1, np.abs(true))).max())
    return errors


def compare(orders: Orders) -> Errors:
    """The largest error of each quantity over a stratum's orders, through the door."""
    true, worst = reckon(orders), defaultdict(float)
    lenses: list[Job] = []
    design = "single-vision"

    def keep(errors: Errors) -> None:
        for name, error in errors.items():
            worst[name] = max(worst[name], float(error))

    for place, job in enumerate(jobs(orders)):
        report = json.loads(handle(json.dumps({"format": "wedgewright.request/1", "do": "report", "sections": [], "job": job})))
        assert report["format"] == "wedgewright.report/1", report
        design = job["lens"]["design"]
        for lens, eye in ((2 * place, "right"), (2 * place + 1, "left")):
            entry, expected = report[eye], complex(true.expected[lens])
            lenses.append(entry)
            keep(compare_names(eye, entry["expected"], expected))
            keep(compare_compensator(entry["compensator"], expected, SENSES[place % 2]))
        for name, vectors in (("ordered", true.expected), ("read", true.read)):
            vertical, horizontal = bench.pair_difference(vectors[2 * place], vectors[2 * place + 1])
            keep({f"pair, {name}, vertical": abs(report["pair"]["vertical"][name] - vertical)})
            keep({f"pair, {name}, horizontal": abs(report["pair"]["horizontal"][name] - horizontal)})
    for name in ("prescribed", "thinning", "expected", "read", "error"):
        vectors = true.read - true.expected if name == "error" else getattr(true, name)
        keep({f"{name}, vector": np.abs(np.array([vector_in(entry[name]) for entry in lenses]) - vectors).max()})
    keep(compare_powers([entry["power"] for entry in lenses], true.power))
    keep(compare_centres([entry["oc_from_prp_mm"] for entry in lenses], true.prescribed, true.power, design))
    return dict(worst)


def compare_some(seed: int, stratum: str, count: int) -> tuple[str, Errors]:
    """One piece of the work, for one process."""
    return stratum, compare(draw(np.random.default_rng(seed), stratum, count))


def main(count: int) -> int:
    """Compare `count` orders, divided evenly over the strata; 1 if any error is too large."""
    piece = 5_000
    pieces = [(stratum, seed) for seed in range(math.ceil(count / piece / len(STRATA))) for stratum in STRATA]
    worst: dict[str, Errors] = {stratum: {} for stratum in STRATA}
    with ProcessPoolExecutor() as pool:
        work = [pool.submit(compare_some, 1000 * place + seed, stratum, piece) for place, (stratum, seed) in enumerate(pieces)]
        for done in work:
            stratum, errors = done.result()
            worst[stratum] |= {name: max(error, worst[stratum].get(name, 0.0)) for name, error in errors.items()}
    for stratum, errors in worst.items():
        wrong = {name: error for name, error in errors.items() if error > ALLOWED}
        print(f"{stratum}: {len(errors)} quantities, largest error {max(errors.values()):.1e}", wrong or "")
    largest = max(error for errors in worst.values() for error in errors.values())
    vectors = max(error for errors in worst.values() for name, error in errors.items() if name.endswith("vector"))
    print(
        f"{len(pieces) * piece} orders: largest vector error {vectors:.1e} Δ, largest of all {largest:.1e} (allowed {ALLOWED:.0e})"
    )
    return int(largest > ALLOWED)


if __name__ == "__main__":
    sys.exit(main(int(sys.argv[1]) if len(sys.argv) > 1 else 1_000_000))
