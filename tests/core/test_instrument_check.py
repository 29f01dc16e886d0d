"""The guided check of the lens meter, against an instrument simulated apart from it: a target moves in the complex plane
by the geometry of ISO 8429's angles; what the check then says must be how that instrument was made."""

import cmath
import math
from decimal import Decimal

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from pycore.bench.instrument_check import WAYS, Looks, check, suggested_amount
from pycore.job.bench import Instrument
from pycore.optics.prism import NO_PRISM, Prism
from tests.core.strategies import decimals

SENSES = ("lens-prism", "own-base", "none")
OBLIQUE = [40, 30, 60, 130, 140, 220, 310, 335]


def place(value: complex, step: float = 0.01) -> Prism:
    """A place on the rings as a person reads it, to the step."""
    return Prism(*(Decimal(str(round(round(part / step) * step, 4))) for part in (value.real, value.imag)))


def seen_by(way: tuple[str, bool], prism: complex, zero: complex = 0) -> complex:
    """Where the target stands: mirroring is the conjugate turned half round, going away the opposite."""
    direction, mirrored = way
    moved = -prism.conjugate() if mirrored else prism
    return zero + (-moved if direction == "away-from-base" else moved)


def looks(way: tuple[str, bool], sense: str, amount: float, base: float, zero: complex = 0, step: float = 0.25) -> Looks:
    prism = cmath.rect(amount, math.radians(base))
    turned = base if sense == "lens-prism" else base + 180
    return Looks(
        zero=place(zero, 0.05),
        amount=Decimal(str(amount)),
        base_deg=Decimal(str(base)),
        seen=(place(seen_by(way, prism, zero), step),),
        scale=None if sense == "none" else (Decimal(str(amount)), Decimal(str(turned % 360))),
        compensator=sense != "none",
    )


@pytest.mark.parametrize("base", OBLIQUE)
@pytest.mark.parametrize("sense", SENSES)
@pytest.mark.parametrize("way", WAYS)
def test_every_kind_of_instrument_is_told(way: tuple[str, bool], sense: str, base: int) -> None:
    found = check(looks(way, sense, 3.0, base, zero=0.2 - 0.1j), Instrument())
    assert (found.wrong, found.way, found.compensator, found.settled) == ((), way, sense, True)
    assert found.zero == Prism(Decimal("0.2"), Decimal("-0.1"))


@given(
    way=st.sampled_from(WAYS),
    sense=st.sampled_from(SENSES),
    amount=st.floats(2.0, 5.0).map(lambda value: round(value, 2)),
    base=st.floats(0, 360).map(lambda value: round(value, 1)),
    turned=st.floats(-10, 10),
    zero=st.complex_numbers(max_magnitude=0.5),
    step=st.sampled_from([0.05, 0.1, 0.25]),
)
def test_a_prism_laid_a_little_askew_is_told_alike(
    way: tuple[str, bool], sense: str, amount: float, base: float, turned: float, zero: complex, step: float
) -> None:
    """Up to ten degrees askew, the zero off, read to the step."""
    assume(26 <= base % 90 <= 64)
    straight = looks(way, sense, amount, base, zero, step)
    askew = cmath.rect(amount, math.radians(base + turned))
    seen = (place(seen_by(way, askew, zero), step),)
    found = check(Looks(**{name: getattr(straight, name) for name in Looks.__dataclass_fields__} | {"seen": seen}), Instrument())
    assert (found.way, found.compensator, found.wrong) == (way, sense, ())


def test_at_90_degrees_a_mirror_cannot_be_seen() -> None:
    """Why the base must be oblique: the picture is the same, so the check refuses it."""
    up = cmath.rect(3.0, math.radians(90))
    straight, mirrored = (seen_by(("towards-base", flag), up) for flag in (False, True))
    assert straight == pytest.approx(mirrored, abs=1e-12)
    for base in (0, 10, 80, 90, 100, 175, 270, 350, 360):
        found = check(looks(("towards-base", False), "none", 3.0, base), Instrument())
        assert (found.way, "base-straight" in found.wrong, found.settled) == (None, True, False)


def changed(**keys: object) -> Looks:
    """Good looks of an ordinary instrument with something else in them."""
    good = looks(("towards-base", False), "lens-prism", 3.0, 40)
    return Looks(**{name: getattr(good, name) for name in Looks.__dataclass_fields__} | keys)


@pytest.mark.parametrize(
    ("keys", "wrong"),
    [
        ({"zero": place(1.5 + 0j)}, "zero-far"),
        ({"base_deg": Decimal(90)}, "base-straight"),
        ({"amount": Decimal("0.75")}, "prism-weak"),
        ({"amount": Decimal(6)}, "prism-off-rings"),
        ({"seen": (place(1.0 + 0.8j),)}, "known-amount"),
        ({"seen": (NO_PRISM,)}, "known-amount"),
        ({"seen": (place(0 + 3j),)}, "known-direction"),
        ({"seen": (place(3.0 + 0j),)}, "known-direction"),
        ({"scale": (Decimal(5), Decimal(40))}, "scale-amount"),
        ({"scale": (Decimal(3), Decimal(90))}, "scale-direction"),
        ({"scale": (Decimal(3), Decimal(140))}, "scale-changed-over"),
        ({"scale": (Decimal(3), Decimal(320))}, "scale-changed-over"),
        ({"seen": tuple(place(2.3 + 1.93j + off) for off in (1, -1, 1j, -1j))}, "scatter"),
    ],
)
def test_what_cannot_be_is_said(keys: dict[str, object], wrong: str) -> None:
    found = check(changed(**keys), Instrument())
    assert wrong in found.wrong
    assert not found.settled


def test_one_look_after_the_other() -> None:
    assert check(Looks(), Instrument()).next == "zero"
    assert check(Looks(zero=NO_PRISM), Instrument()).next == "known"
    assert check(Looks(zero=NO_PRISM, amount=Decimal(3)), Instrument()).next == "known"
    assert check(changed(seen=()), Instrument()).next == "known"
    assert check(changed(scale=None), Instrument()).next == "scale"
    assert check(changed(scale=None, compensator=False), Instrument()).next == "again"
    four = changed(seen=(place(2.3 + 1.93j),) * 4)
    assert check(four, Instrument()).next == "done"
    assert check(changed(scale=None), Instrument()).settled is False
    assert check(changed(zero=None), Instrument()).settled is False


@given(steps=st.lists(st.tuples(st.integers(-1, 1), st.integers(-1, 1)), min_size=4, max_size=12))
def test_readings_of_the_same_prism_say_how_well_one_is_read(steps: list[tuple[int, int]]) -> None:
    """Pooled scatter by numpy, widened as the standard deviation of t (JCGM 101:2008, 6.4.9.4), with the step's own."""
    seen = tuple(place(2.25 + 2j + 0.25 * complex(*step)) for step in steps)
    found = check(changed(seen=seen), Instrument())
    free = 2 * (len(seen) - 1)
    scatter = math.sqrt(np.var(np.array(steps, dtype=float) * 0.25, axis=0, ddof=1).mean())
    assert found.uncertainty == pytest.approx(math.sqrt(scatter**2 * free / (free - 2) + 0.25**2 / 12), rel=1e-9)
    assert check(changed(seen=seen[:3]), Instrument()).uncertainty is None


@given(rings=decimals("1", "10", "1"), ring_step=st.sampled_from([Decimal("0.5"), Decimal(1), Decimal(2)]))
def test_the_prism_that_is_suggested_stays_on_the_rings(rings: Decimal, ring_step: Decimal) -> None:
    meter = Instrument(rings=rings, ring_step=ring_step)
    amount = suggested_amount(meter)
    assert Decimal("0.5") <= amount <= max(Decimal("0.5"), meter.outermost_ring)
    assert amount % Decimal("0.5") == 0
