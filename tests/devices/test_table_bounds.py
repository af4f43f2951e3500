"""Bounds of a measured curve's slope hold for the exact cubic, in rational arithmetic, not only for its rounded values."""

from __future__ import annotations

from fractions import Fraction

import numpy as np

from netaudit.devices.table import Table


def curves() -> list[Table]:
    """Curves with steep and flat pieces side by side, where the slopes of a piece cancel."""
    rng = np.random.default_rng(7)
    out = []
    for _ in range(60):
        x = np.cumsum(rng.uniform(0.01, 1.0, 12)) - 3.0
        y = np.cumsum(
            rng.choice([1e-9, 1e-4, 1.0, 30.0], 12) * rng.uniform(0.3, 1.0, 12) * rng.choice([1.0, 1.0, -1.0], 12)
        )
        out.append(Table(tuple(zip(x.tolist(), y.tolist(), strict=True))))
    return out


def slope(table: Table, k: int, u: Fraction) -> Fraction:
    """The slope at u of the cubic through points k and k + 1 with their slopes, exactly."""
    (x0, y0), (x1, y1) = (tuple(map(Fraction, point)) for point in table.points[k : k + 2])
    d0, d1 = Fraction(float(table._d[k])), Fraction(float(table._d[k + 1]))
    h, t = x1 - x0, u - x0
    secant = (y1 - y0) / h
    return d0 + t * (2 * (3 * secant - 2 * d0 - d1) / h + 3 * t * (d0 + d1 - 2 * secant) / h**2)


def test_slope_bounds_hold_for_the_exact_cubic() -> None:
    rng = np.random.default_rng(8)
    for table in curves():
        x = np.array([p[0] for p in table.points])
        for k in range(len(x) - 1):
            h = x[k + 1] - x[k]
            low = np.array([x[k], x[k] + 0.5 * h, x[k] + 0.9 * h, *(x[k] + h * rng.uniform(0.0, 0.99, 4))])
            high = np.maximum(low, np.minimum(x[k + 1], low + h * rng.uniform(0.0, 0.6, len(low))))
            high[:3] = x[k + 1]
            least, most = table.slope_bounds(low, high, {})
            for a, b, lo, hi in zip(low.tolist(), high.tolist(), least.tolist(), most.tolist(), strict=True):
                exact = [slope(table, k, Fraction(a) + (Fraction(b) - Fraction(a)) * j / 8) for j in range(9)]
                assert Fraction(lo) <= min(exact)
                assert max(exact) <= Fraction(hi)


def test_slope_bounds_hold_for_the_values_that_the_solver_takes() -> None:
    rng = np.random.default_rng(9)
    for table in curves():
        x = np.array([p[0] for p in table.points])
        u = np.sort(rng.uniform(x[0] - 1, x[-1] + 1, 3000))
        at = table.value(u, {})[1]
        least, most = table.slope_bounds(u[:-1], u[1:], {})
        assert (least <= np.minimum(at[:-1], at[1:])).all()
        assert (most >= np.maximum(at[:-1], at[1:])).all()
