"""What repeated readings say of their mean: against a published series and scipy's distributions."""

import math
from decimal import Decimal

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from pycore.bench.repeats import ENOUGH, pooled_scatter, repeated, uncertainty_of_mean, uncertainty_of_one
from pycore.optics.prism import Prism
from tests.core.strategies import decimals

# JCGM 100:2008, 4.4.3 and table 1: twenty temperatures whose mean is 100.145, its experimental standard deviation 1.489
# and that of the mean 0.333. The series is from memory, its last value the one with which the printed figures come out.
TEMPERATURES = (
    *("96.90", "98.18", "98.25", "98.61", "99.03", "99.49", "99.56", "99.74", "99.89", "100.07"),
    *("100.33", "100.42", "100.68", "100.95", "101.11", "101.20", "101.57", "101.84", "102.36", "102.72"),
)
NO_STEP, ONE = Decimal("0.000001"), Decimal("0.10")
SERIES = st.lists(st.tuples(decimals("-5", "5"), decimals("-5", "5")), min_size=ENOUGH, max_size=20)


def prisms(series: list[tuple[Decimal, Decimal]]) -> list[Prism]:
    return [Prism(x, y) for x, y in series]


def test_the_published_series() -> None:
    """The same series across and along: pooled, its scatter is that of one."""
    both = [Prism(Decimal(text), Decimal(text)) for text in TEMPERATURES]
    assert sum(map(Decimal, TEMPERATURES)) / 20 == Decimal("100.145")
    assert round(pooled_scatter(both), 3) == 1.489
    # Of the mean the t distribution with 38 degrees makes it a little more than s/√n (JCGM 101:2008, 6.4.9.4).
    of_mean = repeated(both, ONE, NO_STEP).uncertainty
    assert of_mean == pytest.approx(0.333 * math.sqrt(38 / 36), abs=5e-4)


@given(series=SERIES, step=decimals("0.01", "1"))
def test_the_mean_of_enough_readings(series: list[tuple[Decimal, Decimal]], step: Decimal) -> None:
    """A scaled and shifted t by scipy, and the step's rectangle √(step²/12), as two independent parts."""
    across, along = np.array(series, dtype=float).T
    count = len(series)
    free = 2 * (count - 1)
    scatter = math.sqrt((across.var(ddof=1) + along.var(ddof=1)) / 2)
    of_t = float(stats.t.std(free)) * scatter
    of_step = float(stats.uniform(-float(step) / 2, float(step)).std())
    found = repeated(prisms(series), ONE, step)
    assert (found.count, found.scatter) == (count, pytest.approx(scatter, abs=1e-9))
    assert found.uncertainty == pytest.approx(math.hypot(of_t / math.sqrt(count), of_step), rel=1e-9, abs=1e-9)
    assert uncertainty_of_one(prisms(series), step) == pytest.approx(math.hypot(of_t, of_step), rel=1e-9, abs=1e-9)


@pytest.mark.parametrize("count", [0, 1, 2, 3])
def test_before_there_are_enough_the_bench_s_figure_speaks(count: int) -> None:
    far_apart = [Prism(Decimal(number), Decimal(0)) for number in range(count)]
    found = repeated(far_apart, ONE, Decimal("0.25"))
    step = 0.25**2 / 12
    wanted = math.sqrt((0.01 - step) / max(count, 1) + step)
    assert (found.count, found.scatter) == (count, None)
    assert found.uncertainty == pytest.approx(wanted, rel=1e-12)


@given(one=decimals("0.01", "0.5"), step=decimals("0.01", "1"), count=st.integers(1, 19))
def test_more_readings_never_make_it_worse_nor_better_than_the_step(one: Decimal, step: Decimal, count: int) -> None:
    fewer, more = (uncertainty_of_mean(number, one, step) for number in (count, count + 1))
    assert more <= fewer + 1e-12
    assert more >= min(float(one), float(step) / math.sqrt(12)) - 1e-12
    assert uncertainty_of_mean(1, one, step) == float(one)  # the contract's figure, as it was typed


def test_the_figures_hold_where_they_should() -> None:
    """Of 20,000 simulated sets of four, the true value lies within two standard uncertainties of the mean in about
    19 of 20: not far fewer, as with s/√n (JCGM 100:2008, G.3), nor nearly all."""
    random = np.random.default_rng(42)
    sets = random.normal(0.0, 0.1, size=(20_000, ENOUGH, 2))
    scatter = np.sqrt(sets.var(axis=1, ddof=1).mean(axis=1))
    example = prisms([(Decimal(str(x)), Decimal(str(y))) for x, y in sets[0].tolist()])
    factor = repeated(example, ONE, NO_STEP).uncertainty / scatter[0]
    inside = np.abs(sets[:, :, 0].mean(axis=1)) <= 2 * factor * scatter
    assert 0.945 < inside.mean() < 0.975
