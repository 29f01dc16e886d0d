"""The smallest movement that saves a pair, found by scipy from the job as typed and the sources' limits.

Written apart from the core: limits from `limits_reference`, powers as numpy matrices, the optimum by sequential quadratic
programming. A limit is ‖A d + b‖ ≤ r in the movement d = (right lens right, up, left lens right, up), mm.
Sources: p(r) = p0 − F r (AJOPO 1976;53:27-33), so that a lens moved by d reads p + F d / 10 at the ordered place; the
order of method with the first lens set, S6; segments S2 to S4, S8; the accepted doubt by JCGM 106:2012, with scipy.stats.

`python -m tests.references.shift_reference [count] [seed]` compares that many failing jobs and prints what it found.
"""

from __future__ import annotations

import json
import sys
from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass
from fractions import Fraction
from itertools import product
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq, linprog, minimize
from scipy.stats import ncx2, norm

from tests.references import limits_reference as ref
from tests.references.limits_reference import D
from tests.references.shift_jobs import EYES, draw

Job = dict[str, Any]
Array = NDArray[np.float64]
FARTHEST_MM = 10.0
TOUCHING = 1e-7  # limits that meet in one point still meet


@dataclass(frozen=True)
class Ball:
    """‖A d + b‖ ≤ r; A has one row for a strip, two for a disc."""

    a: Array
    b: Array
    r: float

    def room(self, move: Array) -> float:
        """How much is left, negative where broken."""
        return self.r - float(np.linalg.norm(self.a @ move + self.b))


# --- the job as numbers -------------------------------------------------------------------------------------------------


class Pair:
    """A job's numbers: x to the observer's right, y up."""

    def __init__(self, job: Job) -> None:
        self.job, self.edition, self.state = job, job["edition"], job["state"]
        self.option = job["edition_options"].get
        self.design = job["lens"]["design"]
        self.power = {eye: _power(job[eye]) for eye in EYES}
        self.thinning = self._thinning()
        self.prescribed = {eye: _vector(job[eye].get("prism", []), eye) for eye in EYES}
        self.count = {eye: 1 + len(job["readings"][eye].get("repeats", [])) for eye in EYES}
        self.read = {eye: self._mean(eye) for eye in EYES}
        if job["left"].get("partner"):
            self.thinning = self.read["left"][1] - self.prescribed["left"][1]
        self.expected = {eye: self.prescribed[eye] + np.array([0.0, self.thinning or 0.0]) for eye in EYES}
        self.error = {eye: self.read[eye] - self.expected[eye] for eye in EYES}
        self.own = [eye for eye in EYES if not job[eye].get("partner")]
        self.first_set = job["readings"]["at"] == "first-lens-set"
        marked = self.state == "uncut" or self.design != "single-vision" or "prp_height_mm" in job["right"]
        self.lens_vertical = self.thinning is not None and marked and not self.first_set
        self.pair_vertical = marked or self.first_set

    def _thinning(self) -> float | None:
        rule = self.job.get("thinning", {"rule": "none"})["rule"]
        if rule == "unknown":
            return None
        add = min(Fraction(self.job[eye].get("add", "0")) for eye in EYES)
        return -float(round(add * 2 / 3, 2)) if rule == "two-thirds" else 0.0

    def _mean(self, eye: str) -> Array:
        seen = self.job["readings"][eye]
        looks = [seen["prism"], *(again["prism"] for again in seen.get("repeats", []))]
        return np.array(np.mean([_vector(look, eye) for look in looks], axis=0))

    def matrix(self, eye: str) -> Array:
        """Prism dioptres per mm."""
        sphere, cylinder, axis = self.power[eye]
        across = np.array([-np.sin(np.radians(axis)), np.cos(np.radians(axis))])
        return np.array((sphere * np.eye(2) + cylinder * np.outer(across, across)) / 10.0)

    def along(self, eye: str, direction: str) -> float:
        """Power along 90 or 180, in dioptres."""
        return float(abs(np.diag(self.matrix(eye))[1 if direction == "vertical" else 0])) * 10.0

    def strongest(self, eye: str) -> float:
        """The stronger principal power, in dioptres."""
        sphere, cylinder, _ = self.power[eye]
        return max(abs(sphere), abs(sphere + cylinder))

    def responses(self) -> dict[str, Array]:
        """How each lens's reading answers to the movement: two rows for each eye."""
        own = {"right": np.eye(2, 4), "left": np.eye(2, 4, 2)}
        if not self.first_set:
            return {eye: self.matrix(eye) @ own[eye] for eye in EYES}
        f90 = {eye: self.matrix(eye)[1, 1] for eye in EYES}
        first = "left" if round(abs(f90["left"]), 12) > round(abs(f90["right"]), 12) else "right"
        # The table goes up by h until the first lens shows what it showed: 0 = (F (d - h))_y.
        height = np.linalg.lstsq(np.array([[f90[first]]]), self.matrix(first)[1:] @ own[first], rcond=None)[0][0]
        follow = np.array([np.zeros(4), height if abs(f90[first]) > 1e-12 else np.zeros(4)])
        return {eye: self.matrix(eye) @ (own[eye] - follow) for eye in EYES}


def _power(eye: Job) -> tuple[float, float, float]:
    return float(eye["sphere"]), float(eye.get("cylinder", 0)), float(eye.get("axis", 180))


def _vector(parts: list[Job], eye: str) -> Array:
    nose = 1.0 if eye == "right" else -1.0
    ways = {"in": (nose, 0.0), "out": (-nose, 0.0), "up": (0.0, 1.0), "down": (0.0, -1.0)}
    return np.sum([float(part["amount"]) * np.array(ways[part["base"]]) for part in parts], axis=0) if parts else np.zeros(2)


# --- what the edition asks, as groups of alternatives -------------------------------------------------------------------

Group = list[list[Ball] | None]  # each alternative's limits; None: it cannot pass


def groups_of(pair: Pair) -> list[Group]:
    """Every group that decides, each a list of alternatives of which one (strict: each) has to hold."""
    made: list[Group] = []
    respond = pair.responses()
    difference = respond["right"] - respond["left"]
    mounted = pair.state == "mounted"
    uncertainty = float(np.sqrt(sum(variance(pair.count[eye]) for eye in EYES)))
    for row, direction in ((1, "vertical"), (0, "horizontal")):
        only_the_pair = direction == "vertical" and not pair.lens_vertical
        limit = _pair_limit(pair, direction)
        if (mounted or only_the_pair) and limit is not None and (direction == "horizontal" or pair.pair_vertical):
            error = pair.error["right"][row] - pair.error["left"][row]
            prism = _strip(pair, difference[row], error, float(limit), uncertainty)
            made.append(_alternatives(pair, [prism] if prism else None, _millimetres(pair, direction)))
    for eye in pair.own:
        made += _mounted_each(pair, respond, eye) if mounted else _single(pair, respond, eye)
    return [group for group in made if group]


def _alternatives(pair: Pair, prism: list[Ball] | None, other: tuple[bool, list[Ball] | None]) -> Group:
    """Prism and millimetres by the option chosen; `other`: whether the row is open, and its limits where measured."""
    is_open, millimetres = other
    mode = pair.option("prism-alternatives")
    if mode == "replace" and is_open:
        return [millimetres] if millimetres else []
    if mode == "both" and millimetres:
        return [prism + millimetres] if prism else [None]
    return [prism, millimetres] if millimetres else [prism]


def variance(count: int) -> float:
    """Of the mean of one or two readings, each good to 0.08 prism dioptres on a scale in steps of 0.25.

    What the step leaves open, step squared over 12, is in both alike (JCGM 100:2008, F.2.2.1); only the rest is averaged.
    """
    step = 0.25**2 / 12.0
    return (0.08**2 - step) / count + step


def _strip(pair: Pair, row: Array, error: float, limit: float, uncertainty: float) -> Ball | None:
    half = limit
    if pair.job.get("decision_rule") == "guarded":

        def chance(off: float) -> float:
            return float(norm.cdf((limit - off) / uncertainty) - norm.cdf((-limit - off) / uncertainty) - 0.95)

        if chance(0.0) < 0:
            return None
        half = float(brentq(chance, 0.0, limit, xtol=1e-12))
    return Ball(np.atleast_2d(row), np.array([error]), half)


def _disc(pair: Pair, rows: Array, error: Array, limit: float, uncertainty: float) -> Ball | None:
    half = limit
    if pair.job.get("decision_rule") == "guarded":

        def chance(off: float) -> float:
            return float(ncx2.cdf((limit / uncertainty) ** 2, 2, (off / uncertainty) ** 2) - 0.95)

        if chance(0.0) < 0:
            return None
        half = float(brentq(chance, 0.0, limit, xtol=1e-12))
    return Ball(rows, error, half)


def _pair_limit(pair: Pair, direction: str) -> D | None:
    place = 1 if direction == "vertical" else 0
    with_thinning = pair.option("thinning-row") == "with-thinning"
    ordered = {eye: (pair.expected if with_thinning else pair.prescribed)[eye][place] for eye in EYES}
    component = max(abs(value) for value in ordered.values())
    if pair.option("prism-row") == "pair":
        component = abs(ordered["right"] - ordered["left"])
    sizes = [pair.strongest(eye) if pair.option("row-power") == "strongest" else pair.along(eye, direction) for eye in EYES]
    return ref.pair_limit(pair.edition, direction, _decimal(component), _decimal(max(sizes)))


def _decimal(value: float) -> D:
    return D(repr(round(float(value), 9)))


def _is_open(pair: Pair, sizes: list[float], switch: D) -> bool:
    size = min(sizes) if pair.option("millimetre-power") == "both-lenses" else max(sizes)
    return pair.option("prism-alternatives") != "prism-only" and _decimal(size) > switch


def _millimetres(pair: Pair, direction: str) -> tuple[bool, list[Ball] | None]:
    """The pair's alternative in mm: each lens's own for progressives, else the pair's together."""
    if pair.edition not in ref.ANSI:
        return False, None
    progressive, vertical = pair.design == "progressive", direction == "vertical"
    switch = ref.ANSI_SWITCH_VERTICAL if vertical else ref.ANSI_SWITCH_HORIZONTAL
    if progressive and not vertical:
        switch = ref.ANSI_SWITCH_PROGRESSIVE_HORIZONTAL[pair.option("progressive-horizontal-switch")]
    if not _is_open(pair, [pair.along(eye, direction) for eye in EYES], switch):
        return False, None
    readings, name = pair.job["readings"], "prp_height_mm" if vertical else "pd_mm"
    found = [readings[eye].get(name) for eye in EYES]
    away = np.diag([0.0, 1.0, 0.0, 1.0]) if vertical else np.diag([-1.0, 0.0, 1.0, 0.0])
    rows = [away[1], away[3]] if vertical else [away[0], away[2]]
    if progressive:
        if None in found:
            return True, None
        off = [float(seen) - float(pair.job[eye][name]) for seen, eye in zip(found, EYES, strict=True)]
        return True, [Ball(np.atleast_2d(row), np.array([value]), 1.0) for row, value in zip(rows, off, strict=True)]
    wanted = [float(pair.job[eye].get(name, 0.0)) for eye in EYES]
    if vertical:
        if None in found:
            return True, None
        off_by = float(found[0]) - float(found[1]) - (wanted[0] - wanted[1])
        return True, [Ball(np.atleast_2d(rows[0] - rows[1]), np.array([off_by]), 1.0)]
    total = readings.get("prp_distance_mm") or (None if None in found else sum(map(float, found)))
    if total is None:
        return True, None
    return True, [Ball(np.atleast_2d(rows[0] + rows[1]), np.array([float(total) - sum(wanted)]), 2.5)]


def _mounted_each(pair: Pair, respond: dict[str, Array], eye: str) -> list[Group]:
    """Limits for each lens of a mounted pair, by the options that ask for them."""
    limits: dict[int, D] = {}
    if pair.edition in ref.ANSI and pair.option("horizontal-reading") == "each-lens":
        limits[0] = ref.ANSI_EACH_LENS_HORIZONTAL
    if pair.edition.startswith("nj") and pair.option("per-lens-or-total") == "both":
        limits = {0: ref.NJ_LENS} | ({1: ref.NJ_LENS} if pair.lens_vertical else {})
    return [_component(pair, respond, eye, row, limit) for row, limit in limits.items()]


def _component(pair: Pair, respond: dict[str, Array], eye: str, row: int, limit: D) -> Group:
    uncertainty = float(np.sqrt(variance(pair.count[eye])))
    strip = _strip(pair, respond[eye][row], pair.error[eye][row], float(limit), uncertainty)
    return [[strip] if strip else None]


def _single(pair: Pair, respond: dict[str, Array], eye: str) -> list[Group]:
    """One unmounted lens: the vector of its error, or its components."""
    rows = (0, 1) if pair.lens_vertical else (0,)
    ordered = (pair.expected if pair.option("thinning-row") == "with-thinning" else pair.prescribed)[eye]
    limits = [
        ref.lens_limit(pair.edition, name, _decimal(abs(part)), _decimal(pair.strongest(eye)))
        for name, part in zip(("horizontal", "vertical"), ordered, strict=True)
    ]
    vector = pair.edition in ref.ANSI and pair.lens_vertical and pair.option("lens-prism") == "vector"
    if not vector:
        return [_component(pair, respond, eye, row, limit) for row in rows if (limit := limits[row]) is not None]
    disc = _disc(pair, respond[eye], pair.error[eye], 0.33, float(np.sqrt(variance(pair.count[eye]))))
    return [_alternatives(pair, [disc] if disc else None, _position(pair, eye))]


def _position(pair: Pair, eye: str) -> tuple[bool, list[Ball] | None]:
    """Where the expected prism was found on one lens, within 1.0 mm in any direction."""
    if pair.option("prism-alternatives") == "prism-only" or _decimal(pair.strongest(eye)) <= ref.ANSI_SWITCH_LENS:
        return False, None
    seen, order, error = pair.job["readings"][eye], pair.job[eye], pair.error[eye]
    values, vectors = np.linalg.eigh(pair.matrix(eye))
    flat = vectors[:, np.abs(values) < 1e-9]
    if flat.size and float(np.linalg.norm(flat.T @ error)) > 0.33:
        return True, None
    nose = 1.0 if eye == "right" else -1.0
    place = np.eye(2, 4, 2 * EYES.index(eye))
    if "slid_mm" in seen:
        point = None if flat.size else np.linalg.solve(pair.matrix(eye), error)
        size = 0.0 if point is None else float(np.linalg.norm(point))
        if point is None or size == 0.0:
            at_worst = 1.0 - float(seen["slid_mm"])  # the direction is not known
            return True, [Ball(place, np.zeros(2), at_worst) if at_worst >= 0 else Ball(place * 0.0, np.array([9.0, 0.0]), 1.0)]
        return True, [Ball(place, point / size * float(seen["slid_mm"]), 1.0)]
    if "pd_mm" not in seen:
        return True, None
    off = np.array([-nose * (float(seen["pd_mm"]) - float(order["pd_mm"])), float(seen["prp_height_mm"]) - float(order["prp_height_mm"])])
    return True, [Ball(place, off, 1.0)]


# --- the trade's limits and the optimum ---------------------------------------------------------------------------------


def trade(pair: Pair, eyes: list[str]) -> list[Ball]:
    """How far a lens goes at most, where its segment may stand, and that its blank covers a round rim."""
    limits = []
    for eye in eyes:
        place = np.eye(2, 4, 2 * EYES.index(eye))
        limits.append(Ball(place, np.zeros(2), FARTHEST_MM))
        if pair.design == "bifocal":
            limits.append(Ball(place[1:], np.zeros(1), 1.0))
        if pair.state == "uncut" and "frame" in pair.job:
            limits += _blank(pair, eye, place)
    if pair.design == "bifocal":
        right, left = (np.eye(2, 4, 2 * at) * (eye in eyes) for at, eye in enumerate(EYES))
        limits.append(Ball((right - left)[:1], np.zeros(1), 2.5))
        limits.append(Ball((right - left)[1:], np.zeros(1), 1.0))
    return limits


def _blank(pair: Pair, eye: str, place: Array) -> list[Ball]:
    frame, order = pair.job["frame"], pair.job[eye]
    half = float(frame["a_mm"]) / 2.0
    inward = half + float(frame["dbl_mm"]) / 2.0 - float(order["pd_mm"])
    prp = np.array([inward * (1.0 if eye == "right" else -1.0), float(order["prp_height_mm"]) - half])
    centre = prp - np.array([float(order["surfacing"][name]) for name in ("prp_right_mm", "prp_up_mm")])
    radius = (float(order["blank_diameter_mm"]) - 2.0) / 2.0
    angles = np.radians(np.arange(0, 360, 5))  # the rim's points, every 5 degrees
    return [Ball(place, centre - half * np.array([np.cos(t), np.sin(t)]), radius) for t in angles]


def movable(pair: Pair) -> list[str]:
    """The lenses that may be moved at all, whatever their design."""
    return [eye for eye in pair.own if not pair.job[eye].get("aspheric")]


def pieces_of(pair: Pair, eyes: list[str]) -> list[list[Ball]]:
    """Convex pieces whose union passes, with the columns of the lenses that stay taken out."""
    still = np.array([eye in eyes for eye in EYES for _ in range(2)], dtype=float)
    pieces = []
    for chosen in product(*groups_of(pair)):
        if None not in chosen:
            balls = [ball for balls in chosen for ball in balls or []] + trade(pair, eyes)
            pieces.append([Ball(ball.a * still, ball.b, ball.r) for ball in balls])
    return pieces


def smallest(piece: list[Ball], near: Array | None = None) -> Array | None:
    """The shortest movement within one piece by SLSQP, from several starts; None where there is none."""
    inside = _inside(piece)
    if inside is None:
        return None
    best: Array | None = None
    for start in [np.zeros(4), inside, *([] if near is None else [near])]:
        found = minimize(
            lambda x: x @ x, start, jac=lambda x: 2 * x, method="SLSQP", constraints=_constraints(piece), options={"maxiter": 200, "ftol": 1e-14}
        )
        good = min(ball.room(found.x) for ball in piece) > -1e-6
        if good and (best is None or found.x @ found.x < best @ best):
            best = found.x
    return inside if best is None else best


def _constraints(piece: list[Ball]) -> list[Job]:
    lines = [ball for ball in piece if ball.a.shape[0] == 1]
    discs = [ball for ball in piece if ball.a.shape[0] == 2]
    made: list[Job] = []
    if lines:
        rows = np.vstack([sign * ball.a for ball in lines for sign in (-1.0, 1.0)])
        ends = np.concatenate([ball.r + sign * ball.b for ball in lines for sign in (-1.0, 1.0)])
        made.append({"type": "ineq", "fun": lambda x: rows @ x + ends, "jac": lambda _: rows})
    if discs:
        a, b, r = np.stack([ball.a for ball in discs]), np.stack([ball.b for ball in discs]), np.array([ball.r for ball in discs])
        made.append(
            {
                "type": "ineq",
                "fun": lambda x: (r**2 - np.sum((a @ x + b) ** 2, axis=1)) / r,
                "jac": lambda x: -2.0 * np.einsum("kij,ki->kj", a, a @ x + b) / r[:, None],
            }
        )
    return made


def _inside(piece: list[Ball]) -> Array | None:
    """A movement within the piece, by linear programming with tangents until none is broken; None where there is none."""
    rows, ends = [], []
    for ball in piece:
        for turn in ([1.0], [-1.0]) if ball.a.shape[0] == 1 else [(np.cos(t), np.sin(t)) for t in np.arange(0.0, 6.28, 0.4)]:
            rows.append(np.append(np.array(turn) @ ball.a, 1.0))
            ends.append(ball.r - np.array(turn) @ ball.b)
    for _ in range(60):
        # the movement with the most room t, at most 0.001
        found = linprog([0, 0, 0, 0, -1.0], A_ub=np.array(rows), b_ub=np.array(ends), bounds=[(-40.0, 40.0)] * 4 + [(None, 1e-3)])
        if not found.success or found.x[4] < -TOUCHING:
            return None
        move = np.array(found.x[:4])
        worst = min(piece, key=lambda ball: ball.room(move))
        if worst.room(move) >= -TOUCHING:
            return move
        at = worst.a @ move + worst.b
        turn = at / np.linalg.norm(at)
        rows.append(np.append(turn @ worst.a, 1.0))
        ends.append(worst.r - turn @ worst.b)
    return None


def passes(pieces: list[list[Ball]], move: Array, slack: float) -> bool:
    """Whether a movement is within one of the pieces."""
    return any(all(ball.room(move) >= -slack for ball in piece) for piece in pieces)


# --- comparison ---------------------------------------------------------------------------------------------------------


@dataclass
class Tally:
    """What a run found: counts, the largest difference in mm, and the jobs that disagree."""

    failing: int = 0
    moved: int = 0
    impossible: int = 0
    largest_mm: float = 0.0
    wrong: tuple[tuple[str, str], ...] = ()
    editions: frozenset[str] = frozenset()

    def plus(self, other: Tally) -> Tally:
        """Both runs together."""
        return Tally(
            self.failing + other.failing,
            self.moved + other.moved,
            self.impossible + other.impossible,
            max(self.largest_mm, other.largest_mm),
            self.wrong + other.wrong,
            self.editions | other.editions,
        )


def compare(job: Job) -> Tally | None:
    """Compare one job; None where it does not fail on prism."""
    from pycore.bench.remedy import remedy_of
    from pycore.bench.remedy_search import unrounded
    from pycore.case import case_of
    from pycore.editions.reader import built_in
    from pycore.job.document import read_job

    case = case_of(read_job(job), built_in(job["edition"]))
    assert case.matter is not None
    assert case.verdict is not None
    groups = [outcome for name, (outcome, _) in case.verdict.groups.items() if name.startswith("prism")]
    if "outside" not in groups:
        return None
    pair = Pair(job)
    eyes = movable(pair)
    pieces = pieces_of(pair, eyes)
    ours = unrounded(case.matter, case.verdict, tuple(eyes))
    tally = Tally(failing=1, editions=frozenset({job["edition"]}))
    wrong = []
    if passes(pieces, np.zeros(4), -1e-6):
        wrong.append("the reference passes it as it is")
    if ours is None:
        tally.impossible = 1
        if any(_inside(piece) is not None for piece in pieces):
            wrong.append("called impossible, but there is a movement")
    else:
        tally.moved = 1
        move = np.array(ours)
        found = [best for piece in pieces if (best := smallest(piece, move)) is not None]
        best = min((float(np.linalg.norm(one)) for one in found), default=np.inf)
        tally.largest_mm = abs(best - float(np.linalg.norm(move)))
        if not passes(pieces, move, 1e-6):
            wrong.append("outside the limits")
        if not tally.largest_mm <= 0.01:
            wrong.append(f"{np.linalg.norm(move):.4f} mm, the optimum is {best:.4f} mm")
    remedy = remedy_of(case.matter, case.verdict)
    if remedy and pair.design != "progressive":
        if (remedy.kind == "shift" or remedy.why.code == "narrow") != (ours is not None):
            wrong.append(f"{remedy.kind}, {remedy.why}")
        for shift in (remedy.shared.least, remedy.shared.recommended):
            if shift and not passes(pieces, np.array(shift.move), 1e-9):
                wrong.append(f"rounded outside the limits: {shift.move}")
    tally.wrong = tuple((text, json.dumps(job)) for text in wrong)
    return tally


def compare_some(seed: int, count: int) -> Tally:
    """Compare as many failing jobs, drawn from one seed."""
    rng, tally = np.random.default_rng(seed), Tally()
    while tally.failing < count:
        one = compare(draw(rng))
        tally = tally.plus(one) if one else tally
    return tally


def main(count: int, seed: int) -> int:
    """Compare `count` failing jobs in all processes; 1 if any disagrees."""
    piece = 100
    total = Tally()
    with ProcessPoolExecutor() as pool:
        for tally in pool.map(compare_some, range(seed * 1000, seed * 1000 + -(-count // piece)), [piece] * -(-count // piece)):
            total = total.plus(tally)
    for text, job in total.wrong[:20]:
        print(text, job)
    print(
        f"{total.failing} failing jobs, {len(total.editions)} editions: {total.moved} moved, {total.impossible} without a movement; "
        f"largest difference from the optimum {total.largest_mm:.2e} mm; {len(total.wrong)} disagree"
    )
    return int(bool(total.wrong))


if __name__ == "__main__":
    sys.exit(main(int(sys.argv[1]) if len(sys.argv) > 1 else 10_000, int(sys.argv[2]) if len(sys.argv) > 2 else 1))
