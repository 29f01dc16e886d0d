"""Random jobs that mostly fail on prism, as typed, over every edition, state, design and option."""

from __future__ import annotations

from typing import Any

import numpy as np

from tests.references.limit_jobs import EDITIONS, designs_of, prism, signed
from tests.references.limits_reference import ANSI, D

Job = dict[str, Any]
Rng = np.random.Generator
EYES = ("right", "left")
STATES = {"iso-21987": ("mounted",), "iso-8980-1": ("uncut",), "iso-8980-2": ("uncut",)}
OPTIONS = {
    "ansi": {
        "prism-alternatives": ("either", "either", "both", "replace", "prism-only"),
        "horizontal-reading": ("total", "each-lens"),
        "lens-prism": ("vector", "vector", "components"),
        "millimetre-power": ("stronger", "both-lenses"),
        "progressive-horizontal-switch": ("3.75", "3.375"),
    },
    "iso-21987": {
        "prism-row": ("lens", "pair"),
        "thinning-row": ("prescribed", "with-thinning"),
        "row-power": ("meridian", "strongest"),
    },
    "iso-8980": {"thinning-row": ("prescribed", "with-thinning")},
    "nj": {"per-lens-or-total": ("total", "both")},
}


def step(rng: Rng, scale: float, unit: str) -> D:
    """A Gaussian number in whole steps of a unit."""
    return D(round(float(rng.normal(0.0, scale)) / float(unit))) * D(unit)


def chance(rng: Rng, share: float) -> bool:
    """True in a share of all cases."""
    return bool(rng.random() < share)


def draw(rng: Rng) -> Job:
    """One job. Arguments: `rng`. Returns the job document."""
    edition = str(rng.choice(EDITIONS))
    design = str(rng.choice(designs_of(edition)))
    state = str(rng.choice(STATES.get(edition, ("uncut", "edged", "mounted"))))
    job: Job = {
        "format": "wedgewright.job/1",
        "state": state,
        "edition": edition,
        "edition_options": _options(rng, edition),
        "lens": {"design": design},
        "instrument": {"compensator": "none", "uncertainty": {"prism": "0.08"}},
        "readings": {"at": "marked-point", "right": {}, "left": {}},
    }
    strong = float(rng.choice([2.0, 4.0, 8.0]))
    together = step(rng, strong, "0.25")
    for eye in EYES:
        job[eye] = _eye(rng, together, design)
    if design != "single-vision":
        job["thinning"] = {"rule": str(rng.choice(["none", "two-thirds", "unknown"]))}
        if design == "bifocal" and state == "uncut":
            job["lens"]["blank_diameter_mm"] = "70"
    elif state != "uncut" and chance(rng, 0.3):
        job["readings"]["at"] = "first-lens-set"
        if chance(rng, 0.5):
            for eye in EYES:
                del job[eye]["prp_height_mm"]
    if state == "mounted" and chance(rng, 0.06):
        job["left"]["partner"] = True
    if design != "progressive" and chance(rng, 0.05):
        job["right"]["aspheric"] = True
    _readings(rng, job)
    if state == "uncut" and chance(rng, 0.5):
        _blank(rng, job)
    if job["edition_options"].get("prism-alternatives") == "prism-only" and chance(rng, 0.5):
        job["decision_rule"] = "guarded"
    return job


def _options(rng: Rng, edition: str) -> dict[str, str]:
    family = next(name for name in OPTIONS if edition.startswith(name))
    return {name: str(rng.choice(values)) for name, values in OPTIONS[family].items()}


def _eye(rng: Rng, together: D, design: str) -> Job:
    sphere = max(D(-20), min(D(20), together + step(rng, 1.0, "0.25")))
    eye: Job = {"sphere": signed(sphere), "pd_mm": "32", "prp_height_mm": "18"}
    if chance(rng, 0.6):
        cylinder = step(rng, 1.5, "0.25")
        if chance(rng, 0.03):
            cylinder = -sphere  # no power along one meridian
        eye |= {"cylinder": signed(cylinder), "axis": str(rng.integers(1, 181))} if cylinder else {}
    if chance(rng, 0.8):
        eye["prism"] = prism(step(rng, float(rng.choice([2.0, 6.0])), "0.25"), step(rng, 2.0, "0.25"))
    if design != "single-vision":
        eye["add"] = str(rng.choice(["1.50", "2.00", "2.50"]))
    return eye


def _readings(rng: Rng, job: Job) -> None:
    """What is read: about what is ordered, off by enough to fail most of the time."""
    measured = job["edition"] in ANSI and chance(rng, 0.5)
    off = float(rng.choice([0.3, 0.8, 2.0]))
    for eye in EYES:
        seen = job["readings"][eye]
        inward, up = (
            sum((D(part["amount"]) * (1 if part["base"] == plus else -1) for part in job[eye].get("prism", []) if part["base"] in pair), D(0))
            for plus, pair in (("in", ("in", "out")), ("up", ("up", "down")))
        )
        seen["prism"] = prism(inward + step(rng, off, "0.01"), up + step(rng, off, "0.01"))
        if chance(rng, 0.3):
            seen["repeats"] = [{"prism": prism(inward + step(rng, off, "0.01"), up + step(rng, off, "0.01"))}]
        if measured:
            seen["prp_height_mm"] = str(D(18) + step(rng, 1.5, "0.1"))
            seen["pd_mm"] = str(D(32) + step(rng, 1.5, "0.1"))
            if job["state"] != "mounted" and chance(rng, 0.3):
                seen["slid_mm"] = str(abs(step(rng, 2.0, "0.1")))
    if measured and job["state"] == "mounted" and chance(rng, 0.4):
        job["readings"]["prp_distance_mm"] = str(D(64) + step(rng, 3.0, "0.1"))


def _blank(rng: Rng, job: Job) -> None:
    """A round frame and the blank's centre, so that how far the blank reaches is plain geometry."""
    job["frame"] = {"a_mm": "50", "b_mm": "50", "dbl_mm": "18", "shape": "round"}
    for eye in EYES:
        job[eye]["prp_height_mm"] = "25"
        place = {"prp_right_mm": str(step(rng, 2.0, "0.5")), "prp_up_mm": str(step(rng, 2.0, "0.5"))}
        job[eye] |= {"blank_diameter_mm": str(rng.choice([60, 65, 70])), "surfacing": place}
        if "prp_height_mm" in job["readings"][eye]:
            job["readings"][eye]["prp_height_mm"] = str(D(25) + step(rng, 1.5, "0.1"))
