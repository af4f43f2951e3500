"""Interval arithmetic contains the exact results (rational arithmetic) and its widening covers numpy's functions."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction

import mpmath as mp
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from netaudit.devices.families import WIDEN
from netaudit.solve import interval as iv
from netaudit.solve.interval import Interval

NUMBERS = st.one_of(
    st.floats(-1e9, 1e9), st.floats(-1.0, 1.0), st.sampled_from([0.0, 1e-300, -1e-300, 1e-19, 1e20, 1 / 3, 5e-324])
)


def intervals(count: int) -> st.SearchStrategy[Interval]:
    pairs = st.lists(st.tuples(NUMBERS, NUMBERS), min_size=count, max_size=count)
    return pairs.map(lambda ps: Interval(np.array([min(p) for p in ps]), np.array([max(p) for p in ps])))


def member(x: Interval, k: int, share: Fraction) -> Fraction:
    low, high = Fraction(float(x.low[k])), Fraction(float(x.high[k]))
    return low + share * (high - low)


def holds(x: Interval, value: Fraction, k: int | tuple[int, ...] = ()) -> bool:
    low, high = float(x.low[k]), float(x.high[k])
    return (low == -np.inf or Fraction(low) <= value) and (high == np.inf or value <= Fraction(high))


SHARES = st.sampled_from([Fraction(0), Fraction(1), Fraction(1, 3), Fraction(5, 7)])


@settings(max_examples=300, deadline=None, derandomize=True)
@given(x=intervals(1), y=intervals(1), s=SHARES, t=SHARES)
def test_elementary_operations_contain_the_exact_result(x: Interval, y: Interval, s: Fraction, t: Fraction) -> None:
    a, b = member(x, 0, s), member(y, 0, t)
    assert holds(x + y, a + b, 0)
    assert holds(x - y, a - b, 0)
    assert holds(x * y, a * b, 0)
    assert holds(x.hull(y), a, 0)
    assert holds(-x, -a, 0)
    if b:
        assert holds(x / y, a / b, 0)
    assert Fraction(float(x.width()[0])) >= member(x, 0, Fraction(1)) - member(x, 0, Fraction(0))
    assert abs(a - Fraction(float(x.middle()[0]))) <= Fraction(float(x.radius(x.middle())[0]))


@settings(max_examples=150, deadline=None, derandomize=True)
@given(x=intervals(6), a=intervals(18), s=SHARES, t=SHARES)
def test_matrix_products_contain_the_exact_result(x: Interval, a: Interval, s: Fraction, t: Fraction) -> None:
    matrix = Interval(a.low.reshape(3, 6), a.high.reshape(3, 6))
    vector = [member(x, k, s) for k in range(6)]
    real = iv.times(matrix.low, x)
    both = iv.matrix_times(matrix, x)
    square = iv.product(matrix.low, Interval(x.low[:, None], x.high[:, None]))
    also = iv.products(matrix, Interval(x.low[:, None], x.high[:, None]))
    for k in range(3):
        exact = sum((Fraction(float(matrix.low[k, j])) * vector[j] for j in range(6)), Fraction(0))
        free = sum((member(a, 6 * k + j, t) * vector[j] for j in range(6)), Fraction(0))
        assert holds(real, exact, k)
        assert holds(square, exact, (k, 0))
        assert holds(both, free, k)
        assert holds(also, free, (k, 0))
    assert holds(iv.total(x), sum(vector, Fraction(0)))


@pytest.mark.parametrize("count", [2, 10, 100])
def test_products_of_reals_contain_the_exact_sum_under_cancellation(count: int) -> None:
    rng = np.random.default_rng(3)
    for _ in range(200):
        a = rng.normal(size=(1, count)) * 10.0 ** rng.integers(-12, 12, (1, count))
        b = rng.normal(size=(count, 1)) * 10.0 ** rng.integers(-12, 12, (count, 1))
        found = iv.real_product(a, b)
        exact = sum((Fraction(float(p)) * Fraction(float(q)) for p, q in zip(a[0], b[:, 0], strict=True)), Fraction(0))
        assert holds(found, exact, (0, 0))


def test_batches_give_what_their_members_give() -> None:
    rng = np.random.default_rng(4)
    a, low = rng.normal(size=(5, 3, 4)), rng.normal(size=(5, 4))
    x = Interval(low, low + rng.random((5, 4)))
    together = iv.times(a, x)
    for k in range(5):
        one = iv.times(a[k], x[k])
        assert np.allclose(together.low[k], one.low, rtol=1e-12, atol=1e-12)
        assert np.allclose(together.high[k], one.high, rtol=1e-12, atol=1e-12)


def test_overflow_and_unbounded_ends_stay_unbounded() -> None:
    huge = Interval(np.array([1e300]), np.array([1e308]))
    assert (huge * huge).high[0] == np.inf
    free = Interval(np.array([-np.inf]), np.array([np.inf]))
    assert (free - free).low[0] == -np.inf
    assert iv.times(np.array([[1.0]]), free).high[0] == np.inf
    assert (free * Interval.point(np.zeros(1))).high[0] <= 1e-300
    assert (Interval.point(np.ones(1)) / Interval(np.array([-1.0]), np.array([1.0]))).low[0] == -np.inf


@pytest.mark.parametrize(("name", "low", "high"), [("exp", -700, 700), ("expm1", -40, 700), ("log", 1e-300, 1e300)])
def test_widening_covers_the_error_of_the_library(name: str, low: float, high: float) -> None:
    """Against 60-digit arithmetic (mpmath), for both the vector code and the remainder of an array."""
    mp.mp.dps = 60
    exact: Callable[[object], mp.mpf] = getattr(mp, name)
    rng = np.random.default_rng(5)
    x = np.concatenate([rng.uniform(low, high, 1501), rng.normal(size=500) if low < 0 else rng.uniform(0.5, 2, 500)])
    found = getattr(np, name)(x)
    for at, value in zip(x.tolist(), found.tolist(), strict=True):
        true = exact(mp.mpf(at))
        assert abs(mp.mpf(value) - true) <= abs(mp.mpf(value)) * mp.mpf(WIDEN) / 2 + mp.mpf(5e-324), at
