"""Interval arithmetic on arrays, rounded outwards: every result contains every real result of the operands' members.

Error model: numpy's + - * / are correctly rounded (IEEE 754, unit roundoff U = 2^-53), so one step outwards (``nextafter``)
encloses a single operation.  Sums are bounded a priori: in whatever order a library sums n products, fused or not,

    |fl(a . x) - a . x| <= gamma_n |a| . |x| + n ETA,     gamma_n = n U / (1 - n U),  ETA = 2^-1074

(Higham, Accuracy and Stability of Numerical Algorithms, 2nd ed. 2002, eq. 3.5; one step outwards after a sum is not
enough).  ``_slack(n)`` is more than twice gamma_n + the rounding of the bound itself.  numpy's exp, expm1, log and log1p
are not correctly rounded; ``widen`` (2^-50 relative, eight roundings; 0.86 ulp was measured) covers them and is tested against 60-digit arithmetic.

Overflow ends in an unbounded interval, never in nan.  Empty intersections are left as low > high: ask ``empty``.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from netaudit.devices.families import widen

Array = NDArray[np.float64]

_EPS = 2.0**-52
_TINY = float(np.finfo(float).tiny)


@dataclass(frozen=True)
class Interval:
    """Intervals [low, high], element by element; both arrays have one shape (any leading batch axes)."""

    low: Array
    high: Array

    @staticmethod
    def point(value: Array | float) -> Interval:
        """The interval that holds one float."""
        value = np.asarray(value, dtype=float)
        return Interval(value, value)

    @staticmethod
    def around(middle: Array, radius: Array) -> Interval:
        """[middle - radius, middle + radius], radius >= 0."""
        return _outwards(middle - radius, middle + radius)

    @property
    def shape(self) -> tuple[int, ...]:
        return np.shape(self.low)

    def __getitem__(self, key: Any) -> Interval:
        return Interval(self.low[key], self.high[key])

    def __neg__(self) -> Interval:
        return Interval(-self.high, -self.low)

    def __add__(self, other: Interval) -> Interval:
        return _outwards(self.low + other.low, self.high + other.high)

    def __sub__(self, other: Interval) -> Interval:
        return _outwards(self.low - other.high, self.high - other.low)

    def __mul__(self, other: Interval) -> Interval:
        """0 times an unbounded end is 0."""
        with np.errstate(invalid="ignore", over="ignore"):
            products = np.stack(
                np.broadcast_arrays(
                    self.low * other.low, self.low * other.high, self.high * other.low, self.high * other.high
                )
            )
        products = np.where(np.isnan(products), 0.0, products)
        return _outwards(products.min(axis=0), products.max(axis=0))

    def __truediv__(self, other: Interval) -> Interval:
        """Unbounded where the divisor contains zero."""
        across = (other.low <= 0.0) & (other.high >= 0.0)
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            q = np.stack(
                np.broadcast_arrays(
                    self.low / other.low, self.low / other.high, self.high / other.low, self.high / other.high
                )
            )
        free = across | np.isnan(q).any(axis=0)
        out = _outwards(q.min(axis=0), q.max(axis=0))
        return Interval(np.where(free, -np.inf, out.low), np.where(free, np.inf, out.high))

    def scaled(self, factor: Array | float) -> Interval:
        """Times exact floats."""
        return self * Interval.point(factor)

    def middle(self) -> Array:
        """A float inside (0 where unbounded to both sides)."""
        with np.errstate(invalid="ignore"):
            m = 0.5 * self.low + 0.5 * self.high
        m = np.where(np.isfinite(m), m, np.where(np.isfinite(self.low), self.low, self.high))
        m = np.where(np.isfinite(m), m, 0.0)
        return np.asarray(np.minimum(np.maximum(m, self.low), self.high))

    def radius(self, middle: Array) -> Array:
        """The largest distance of a member from ``middle``, rounded up."""
        with np.errstate(invalid="ignore"):
            r = np.maximum(self.high - middle, middle - self.low)
        return np.asarray(np.nextafter(np.maximum(r, 0.0), np.inf))

    def width(self) -> Array:
        """high - low, rounded up."""
        return np.asarray(np.nextafter(self.high - self.low, np.inf))

    def magnitude(self) -> Array:
        """The largest absolute value."""
        return np.asarray(np.maximum(np.abs(self.low), np.abs(self.high)))

    def meet(self, other: Interval) -> Interval:
        """The intersection; low > high where there is none."""
        return Interval(np.maximum(self.low, other.low), np.minimum(self.high, other.high))

    def hull(self, other: Interval) -> Interval:
        """The smallest interval that contains both."""
        return Interval(np.minimum(self.low, other.low), np.maximum(self.high, other.high))

    def empty(self) -> NDArray[np.bool_]:
        return np.asarray(np.greater(self.low, self.high))

    def within(self, other: Interval) -> NDArray[np.bool_]:
        """Whether every member lies in the interior of ``other``."""
        return np.asarray((self.low > other.low) & (self.high < other.high))

    def has_zero(self) -> NDArray[np.bool_]:
        return np.asarray((self.low <= 0.0) & (self.high >= 0.0))

    def grown(self) -> Interval:
        """Grown by 2^-50 relative: covers one call of numpy's exp, expm1, log or log1p at both ends."""
        return Interval(*widen(self.low, self.high))


def times(a: Array, x: Interval) -> Interval:
    """a x for real matrices a (..., k, n), taken as exact, and interval vectors x (..., n): shape (..., k)."""
    m = x.middle()
    return _ball(a, None, m, x.radius(m))


def matrix_times(a: Interval, x: Interval) -> Interval:
    """a x for interval matrices (..., k, n) and interval vectors (..., n)."""
    m, c = x.middle(), a.middle()
    return _ball(c, a.radius(c), m, x.radius(m))


def matrix_times_real(a: Interval, x: Array) -> Interval:
    """a x for interval matrices and real vectors, taken as exact."""
    c = a.middle()
    exact = np.array_equal(a.low, a.high)
    return _ball(c, None if exact else a.radius(c), x, None)


def product(a: Array, b: Interval) -> Interval:
    """a b for real matrices a (..., k, n), taken as exact, and interval matrices b (..., n, p)."""
    m = b.middle()
    return _balls(a, None, m, b.radius(m))


def products(a: Interval, b: Interval) -> Interval:
    """a b for interval matrices (..., k, n) and (..., n, p)."""
    c, m = a.middle(), b.middle()
    return _balls(c, a.radius(c), m, b.radius(m))


def real_product(a: Array, b: Array) -> Interval:
    """An enclosure of a b for real matrices that are taken as exact."""
    return _balls(a, None, b, None)


def total(x: Interval) -> Interval:
    """The sum over the last axis."""
    n = x.low.shape[-1]
    with np.errstate(invalid="ignore", over="ignore"):
        size = x.magnitude().sum(axis=-1) * _slack(n) + n * _TINY
        low, high = x.low.sum(axis=-1) - size, x.high.sum(axis=-1) + size
    return Interval(np.where(np.isnan(low), -np.inf, low), np.where(np.isnan(high), np.inf, high))


def _slack(n: int) -> float:
    """More than twice gamma_n plus the few roundings of computing the bound."""
    return (n + 8) * _EPS


def _ball(a: Array, da: Array | None, x: Array, dx: Array | None) -> Interval:
    """(a +- da)(x +- dx) for vectors x."""
    out = _balls(a, da, x[..., None], None if dx is None else dx[..., None])
    return Interval(out.low[..., 0], out.high[..., 0])


def _balls(a: Array, da: Array | None, b: Array, db: Array | None) -> Interval:
    """(a +- da)(b +- db), None standing for no radius.

    a b +- (|a| db + da (|b| + db)) contains every product; the rounding of a b adds gamma_n |a| |b|, for which |b| enters
    the radius with the slack, and the rounding of the radius itself is covered by one more slack and a tiny term.
    """
    n = a.shape[-1]
    slack = _slack(n)
    with np.errstate(invalid="ignore", over="ignore"):
        centre = a @ b
        size = np.abs(b)
        reach = slack * size if db is None else db + slack * size
        radius = np.abs(a) @ reach
        if da is not None:
            radius = radius + da @ (size if db is None else size + db)
        # the last roundings scale with the centre as well
        radius = radius * (1.0 + 2.0 * slack) + np.abs(centre) * (2.0 * _EPS) + (n + 2) * _TINY
        low, high = centre - radius, centre + radius
    wrong = np.isnan(low) | np.isnan(high)
    return Interval(np.where(wrong, -np.inf, low), np.where(wrong, np.inf, high))


def _outwards(low: Array, high: Array) -> Interval:
    """One float outwards on both sides; nan (infinity less infinity) becomes unbounded."""
    low, high = np.nextafter(low, -np.inf), np.nextafter(high, np.inf)
    return Interval(np.where(np.isnan(low), -np.inf, low), np.where(np.isnan(high), np.inf, high))
