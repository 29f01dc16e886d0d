"""Random orders against the reference of `tests/references/bench_reference.py` (complex numbers, numpy matrices).

100,000 orders go through the core's own functions, some thousands more through the door with every name of
every prism. `python -m tests.references.million` sends a million through the door.
"""

from __future__ import annotations

from decimal import Decimal

import numpy as np
import pytest

from pycore.optics.power import Power, prism_at
from pycore.optics.prism import Prism, from_base, total
from tests.references import bench_reference as bench
from tests.references.million import ALLOWED, compare
from tests.references.orders import STRATA, degrees, draw, hundredths, reckon, with_sign

D = Decimal

ORDERS = 9_100  # of each of the eleven strata
THROUGH_THE_DOOR = 500


def largest_error(stratum: str) -> float:
    """Largest error of sums of components, and of the prism some millimetres away: p(r) = p0 − F r."""
    rng = np.random.default_rng(STRATA.index(stratum) + 1)
    orders = draw(rng, stratum, ORDERS)
    true = reckon(orders)
    offset = rng.integers(-3000, 3001, (ORDERS, 2))
    sums, moved = np.empty(ORDERS, complex), np.empty(ORDERS, complex)
    for place in range(ORDERS):
        amounts, bases = orders.amount[place].tolist(), orders.base[place].tolist()
        prism = total([from_base(D(hundredths(a)), D(degrees(b))) for a, b in zip(amounts, bases, strict=True)])
        sphere, cylinder, axis = (int(part[place]) for part in (orders.sphere, orders.cylinder, orders.axis))
        power = Power(D(with_sign(sphere)), D(with_sign(cylinder)), D(axis or 18000) / 100)
        right, up = offset[place].tolist()
        there = prism_at(prism, power, D(right) / 100, D(up) / 100)
        sums[place], moved[place] = complex(prism.x, prism.y), complex(there.x, there.y)
    away = bench.prism_at(true.prescribed, true.power, (offset[:, 0] + 1j * offset[:, 1]) / 100)
    return float(max(np.abs(sums - true.prescribed).max(), np.abs(moved - away).max()))


def test_sums_and_shifts_of_a_hundred_thousand_orders() -> None:
    largest = {stratum: largest_error(stratum) for stratum in STRATA}
    print(f"{len(STRATA) * ORDERS} orders: largest vector error {max(largest.values()):.1e} Δ")
    assert len(STRATA) * ORDERS >= 100_000
    assert {stratum: error for stratum, error in largest.items() if error > ALLOWED} == {}


@pytest.mark.parametrize("stratum", STRATA)
def test_the_door_says_what_the_reference_says(stratum: str) -> None:
    """Vectors, words, quadrant, both notations, powers, compensator, readings, pair, optical centre."""
    errors = compare(draw(np.random.default_rng(1000 + STRATA.index(stratum)), stratum, THROUGH_THE_DOOR))
    assert {name: error for name, error in errors.items() if error > ALLOWED} == {}


def test_opposite_prisms_leave_nothing() -> None:
    """Whole and tenth degrees, right round: equal and opposite prisms cancel exactly, radians leave ghosts."""
    for tenths in range(1800):
        one, other = D(tenths) / 10, D(tenths + 1800) / 10
        assert total([from_base(D("3.37"), one), from_base(D("3.37"), other)]) == Prism(D(0), D(0)), one
