"""Random orders in strata, as numbers for the reference and as typed text for the door.

Everything is drawn as whole numbers (hundredths of a dioptre, 1e-9 of a degree), so that the text says exactly
what the reference reckons with. One order is one lens; two of them make a job: even places right, odd left.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from tests.references import bench_reference as bench

Ints = NDArray[np.int64]
Job = dict[str, Any]

DEGREE = 10**9  # bases are counted in 1e-9 of a degree
TURN = 360 * DEGREE
STRATA = (
    "random",
    "words",
    "equal and opposite",
    "sums near zero",
    "bases beside right angles",
    "axis 0 and 180",
    "plano",
    "pure cylinder",
    "to 40 D and 40 Δ",
    "thinned",
    "eight components",
)
SENSES = ("lens-prism", "own-base")
RINGS, COMPENSATOR_MAXIMUM = 5, 15


@dataclass(frozen=True)
class Orders:
    """A stratum's orders: prism components (n × k), powers, and per pair the add in eighths and a rule."""

    stratum: str
    amount: Ints
    base: Ints
    sphere: Ints
    cylinder: Ints
    axis: Ints
    add: Ints
    rule: tuple[str, ...]
    seen: tuple[Ints, Ints]  # what the target shows: amount, base
    scale: tuple[Ints, Ints]  # what stands on the compensator's scale

    def __len__(self) -> int:
        return len(self.sphere)


def draw(rng: np.random.Generator, stratum: str, count: int) -> Orders:
    """Draw an even number of orders of one stratum."""
    parts = {"eight components": 8, "random": 3}.get(stratum, 2)
    strong = stratum == "to 40 D and 40 Δ"
    amount = rng.integers(0, 4001 if strong else 1201, (count, parts))
    fine = rng.choice([DEGREE, DEGREE // 10, DEGREE // 100, 1], (count, parts))  # 37, 37.3, 37.25 or 37.123456789 degrees
    base = rng.integers(0, TURN, (count, parts)) // fine * fine
    sphere, cylinder = rng.integers(-2000, 2001, count), rng.integers(-800, 801, count)
    axis = rng.integers(0, 18001, count) // 100 * 100
    if stratum == "words":
        base = rng.integers(0, 4, (count, parts)) * 90 * DEGREE
    elif stratum == "equal and opposite":
        amount[:, 1], base[:, 1] = amount[:, 0], (base[:, 0] + 180 * DEGREE) % TURN
    elif stratum == "sums near zero":
        off = rng.choice([0, 1, 10**3, 10**7, DEGREE // 10], count)
        amount[:, 1] = amount[:, 0] + rng.integers(0, 2, count)
        base[:, 1] = (base[:, 0] + 180 * DEGREE + off) % TURN
    elif stratum == "bases beside right angles":
        base = (rng.integers(0, 4, (count, parts)) * 90 * DEGREE + rng.choice([-1, 0, 1], (count, parts))) % TURN
    elif stratum == "axis 0 and 180":
        axis = rng.choice([0, 1, 9000, 17999, 18000], count)
    elif stratum == "plano":
        sphere[:] = cylinder[:] = 0
    elif stratum == "pure cylinder":
        sphere = np.where(rng.integers(0, 2, count) == 0, 0, -cylinder)  # plano in either form
    elif strong:
        sphere, cylinder = rng.integers(-4000, 4001, count), rng.integers(-2000, 2001, count)
    thinned = stratum == "thinned"
    rules = rng.choice(["two-thirds", "six-tenths"] if thinned else ["none"], count // 2)
    small = tuple((rng.integers(0, 501, count), rng.integers(0, 3600, count) * (DEGREE // 10)) for _ in range(2))
    return Orders(
        stratum, amount, base, sphere, cylinder, axis, rng.integers(6, 33, count), tuple(map(str, rules)), small[0], small[1]
    )


# --- as text ------------------------------------------------------------------------------------------------------------


def hundredths(value: int) -> str:
    """12 → "0.12"."""
    return f"{value // 100}.{value % 100:02d}"


def with_sign(value: int) -> str:
    """A power: "+0.12", "-0.12", "0.00"."""
    return ("" if value == 0 else "+" if value > 0 else "-") + hundredths(abs(value))


def degrees(value: int) -> str:
    """A base in degrees with no more digits than it needs."""
    return f"{value // DEGREE}.{value % DEGREE:09d}".rstrip("0").rstrip(".")


def component(eye: str, amount: int, base: int, way: int) -> Job:
    """One prism component, by turns in degrees, in the 180 notation, or in words where it has one."""
    typed: Any = degrees(base)
    if way % 3 == 1 and base % (180 * DEGREE):
        typed = {"degrees": degrees(base % (180 * DEGREE)), "side": "up" if base < 180 * DEGREE else "down"}
    elif way % 3 == 2 and base % (90 * DEGREE) == 0:
        typed = next(word for (side, word), at in bench.BASE_OF_WORD.items() if (side, at) == (eye, base // DEGREE))
    return {"amount": hundredths(amount), "base": typed}


def jobs(orders: Orders) -> Iterator[Job]:
    """The orders as jobs of two uncut lenses each, read with the compensator on."""
    thinned = orders.stratum == "thinned"
    for first in range(0, len(orders), 2):
        job: Job = {
            "format": "wedgewright.job/1",
            "state": "uncut",
            "lens": {"design": "progressive" if thinned else "single-vision"},
            "thinning": {"rule": orders.rule[first // 2]},
            "instrument": {
                "rings": f"{RINGS}",
                "ring_step": "1",
                "compensator": SENSES[first // 2 % 2],
                "compensator_maximum": f"{COMPENSATOR_MAXIMUM}",
            },
            "readings": {"at": "marked-point"},
        }
        for place, eye in ((first, "right"), (first + 1, "left")):
            pairs = zip(orders.amount[place].tolist(), orders.base[place].tolist(), strict=True)
            job[eye] = {
                "sphere": with_sign(int(orders.sphere[place])),
                "cylinder": with_sign(int(orders.cylinder[place])),
                "axis": hundredths(int(orders.axis[place])),
                "prism": [component(eye, amount, base, first + part) for part, (amount, base) in enumerate(pairs)],
            }
            if thinned:
                job[eye]["add"] = f"{int(orders.add[place]) / 8:.3f}"
            (seen, seen_base), (set_to, set_base) = orders.seen, orders.scale
            job["readings"][eye] = {
                "prism": [component(eye, int(seen[place]), int(seen_base[place]), 0)],
                "compensator": {"amount": hundredths(int(set_to[place])), "base": degrees(int(set_base[place]))},
            }
        yield job


# --- as the reference reckons them ------------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Reckoned:
    """What the reference makes of a stratum's orders: complex vectors and 2×2 matrices, one per lens."""

    prescribed: bench.Complexes
    thinning: bench.Complexes
    expected: bench.Complexes
    read: bench.Complexes
    power: bench.Floats


def reckon(orders: Orders) -> Reckoned:
    """The reference's figures for the orders, all at once."""
    prescribed = bench.vector(orders.amount / 100, orders.base / DEGREE).sum(axis=1)
    amounts = [
        float(bench.thinning_amount(rule, f"{orders.add[2 * place] / 8}", f"{orders.add[2 * place + 1] / 8}"))
        for place, rule in enumerate(orders.rule)
    ]
    thinning = -1j * np.repeat(amounts, 2)
    seen, scale = (bench.vector(amount / 100, base / DEGREE) for amount, base in (orders.seen, orders.scale))
    lens_prism = np.arange(len(orders)) // 2 % 2 == 0
    read = np.where(
        lens_prism,
        bench.read_through_compensator(seen, scale, "lens-prism"),
        bench.read_through_compensator(seen, scale, "own-base"),
    )
    power = bench.power_matrix(orders.sphere / 100, orders.cylinder / 100, orders.axis / 100)
    return Reckoned(prescribed, thinning, prescribed + thinning, read, power)
