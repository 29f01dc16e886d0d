"""A simulated lens read on the simulated bench: noise as physics, rounding to the instrument's steps, as values and as typed.

Noise is not drawn by the posterior's algebra: powers and axis scatter, every reading is rounded. One standard uncertainty of
a power or an axis is taken to contain the drum's step; that of a prism is not (the table of causes adds step²/12).
"""

from __future__ import annotations

import math

import numpy as np

from tests.references import bench_reference as bench
from tests.references.cause_documents import Job
from tests.references.cause_faults import NOISE
from tests.references.cause_hypotheses import predicted
from tests.references.cause_lenses import ADD, CYLINDER, MEAN, MEASURED, PLACE, PRISM, Floats, Lenses, cylinder_parts, slid_by
from tests.references.cause_orders import Bench, LensOrder, PairOrder, Rng
from tests.references.cause_posterior import prism_variances

POWER_STEP = {"manual": 0.125, "automatic": 0.01}


def read_lens(rng: Rng, pair: PairOrder, eye: str, lenses: Lenses, latents: Floats) -> tuple[Floats, Job]:
    """One lens (one hypothesis) read, its latent values given: its values as the digits say them, and the digits."""
    means, loads = predicted(pair, eye, lenses)
    true = means[0] + loads[0] @ latents
    broad = np.sqrt(lenses.broad[0])
    true[: PLACE.start] += rng.normal(0, broad[: PLACE.start])
    laboratory, _, settling = prism_variances(pair)
    made_so = rng.normal(0, math.sqrt(laboratory), 2)
    values, typed = np.zeros(MEASURED), read_prism(rng, pair, eye, true[PRISM] + made_so)
    values[PRISM] = typed.pop("vector")
    if pair.plan.powers:
        values[MEAN], values[CYLINDER] = read_power(rng, pair.bench, true, lenses.seen[0], typed)
        if pair.right.add:
            values[ADD] = read_add(rng, pair.bench, true[ADD], typed)
    settled = made_so + rng.normal(0, math.sqrt(settling), 2) + rng.normal(0, broad[PLACE])
    place = true[PLACE] + slid_by(lenses.power, pair.plan.distances)[0] @ settled + rng.normal(0, pair.bench.position_mm, 2)
    values[PLACE] = read_place(pair, pair.lens(eye), place, typed)
    return values, typed


def round_to(value: float, step: float) -> float:
    """To the nearest step."""
    return round(float(value) / step) * step


def without_step(uncertainty: float, step: float) -> float:
    """What is left of a standard uncertainty without the rounding to a step."""
    return math.sqrt(max(uncertainty**2 - step**2 / 12, 0.0))


def read_prism(rng: Rng, pair: PairOrder, eye: str, prism: Floats) -> Job:
    """The prism read once or several times, with what stands on the compensator's scale taken out beforehand."""
    step, scale = pair.bench.prism_step, pair.plan.scales.get(eye)
    taken = complex(bench.vector(*scale)) if scale else 0j
    sightings, seen = [], []
    for _ in range(pair.plan.times):
        x, y = (round_to(part, step) for part in prism + rng.normal(0, pair.bench.prism, 2) - [taken.real, taken.imag])
        seen.append([x + taken.real, y + taken.imag])
        sighting: Job = {"prism": in_words(eye, x, y)}
        if scale:
            sighting["compensator"] = {"amount": str(scale[0]), "base": str(scale[1])}
        sightings.append(sighting)
    return sightings[0] | {"vector": np.mean(seen, axis=0)} | ({"repeats": sightings[1:]} if sightings[1:] else {})


def in_words(eye: str, x: float, y: float) -> list[Job]:
    """Components by words."""
    words = ((x, bench.horizontal_word(eye, x)), (y, bench.vertical_word(y)))
    return [{"amount": f"{abs(amount):.2f}", "base": word} for amount, word in words if word] or [{"amount": "0", "base": "0"}]


def read_power(rng: Rng, meter: Bench, true: Floats, seen: Floats, typed: Job) -> tuple[float, Floats]:
    """Sphere, cylinder and axis read off the drums: mean power and parts of the cylinder as the digits say them.

    `seen`: the power whose cylinder a turn of the axis acts on.
    """
    step = POWER_STEP[meter.kind]
    scatter = math.hypot(NOISE["laboratory_power_d"], without_step(meter.power_d, step)) / math.sqrt(2)
    turn_deg = math.hypot(NOISE["laboratory_axis_deg"], without_step(meter.axis_deg, 1.0))
    turn = np.deg2rad(rng.normal(0, turn_deg)) * cylinder_parts(seen)[::-1] * [2.0, -2.0]
    mean, parts = true[MEAN] + rng.normal(0, scatter), true[CYLINDER] + rng.normal(0, scatter, 2) + turn
    sphere, cylinder, axis = bench.spherocylinder(matrix_of(mean, parts), -1)
    sphere, cylinder, axis = round_to(sphere, step), round_to(cylinder, step), round(float(axis)) % 180 or 180
    typed |= {"sphere": with_sign(sphere), "cylinder": with_sign(cylinder)} | ({"axis": str(axis)} if cylinder else {})
    read = bench.power_matrix(sphere, cylinder, axis)
    return float(np.trace(read)) / 2, cylinder_parts(read)


def read_add(rng: Rng, meter: Bench, true: float, typed: Job) -> float:
    """The add as the digits say it."""
    step = POWER_STEP[meter.kind]
    scatter = math.hypot(NOISE["laboratory_power_d"], without_step(meter.power_d, step))
    read = round_to(max(true + rng.normal(0, scatter), 0.0), step)
    typed["add"] = f"{read:.3f}"
    return read


def matrix_of(mean: float, parts: Floats) -> Floats:
    """The power matrix of a mean power and the cylinder's parts."""
    return mean * np.eye(2) + np.array([[-parts[0], parts[1]], [parts[1], parts[0]]])


def with_sign(power: float) -> str:
    """Three decimals, signed."""
    return f"{power:+.3f}" if round(power, 3) else "0.00"


def read_place(pair: PairOrder, lens: LensOrder, place_mm: Floats, typed: Job) -> Floats:
    """Where the ordered prism was found, as height and distance to the tenth of a millimetre."""
    inwards = bench.vector_of_word(lens.eye, 1, "in").real
    height, distance = round(lens.height_mm + place_mm[1], 1), round(lens.pd_mm - inwards * place_mm[0], 1)
    if pair.plan.heights:
        typed["prp_height_mm"] = f"{height:.1f}"
    if pair.plan.distances:
        typed["pd_mm"] = f"{distance:.1f}"
    return np.array([inwards * (lens.pd_mm - distance), height - lens.height_mm])
