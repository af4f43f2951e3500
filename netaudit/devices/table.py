"""A measured curve as a branch: a shape-preserving piecewise cubic, straight on with its end slopes outside.

Slopes at the points after Fritsch and Butland (SIAM J. Sci. Stat. Comput. 5(2) 300-304, 1984): the weighted harmonic
mean of the neighbouring secants where both have one sign, zero at local extrema.  Between points the curve is monotone,
so hills stay where the data has them and nowhere else.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from netaudit.devices.families import Array, Family, Parameters, Shape, widen

Index = NDArray[np.intp]


@dataclass(frozen=True)
class Table(Family):
    """phi(u) through ``points`` (volts, amperes; voltages strictly rising, two at least)."""

    points: tuple[tuple[float, float], ...] = ()
    _x: Array = field(init=False, repr=False, compare=False)
    _y: Array = field(init=False, repr=False, compare=False)
    _d: Array = field(init=False, repr=False, compare=False)

    def __post_init__(self) -> None:
        x, y = (np.array(column, dtype=float) for column in zip(*self.points, strict=True))
        object.__setattr__(self, "_x", x)
        object.__setattr__(self, "_y", y)
        object.__setattr__(self, "_d", slopes(x, y))
        object.__setattr__(self, "shape", self._shape())

    def _shape(self) -> Shape:
        if (np.diff(self._y) > 0).all() and self._d[0] > 0 and self._d[-1] > 0:
            return "increasing"
        return "nondecreasing" if (np.diff(self._y) >= 0).all() and self._d[0] >= 0 and self._d[-1] >= 0 else "other"

    @property
    def end_slopes(self) -> tuple[float, float]:
        """The slopes with which the curve goes on below its first and above its last point."""
        return float(self._d[0]), float(self._d[-1])

    @cached_property
    def _cubics(self) -> tuple[Array, Array, Array]:
        """Width of every piece and the coefficients c2, c3 about its left point; c1 is the slope there."""
        h, d = np.diff(self._x), self._d
        secant = np.diff(self._y) / h
        return h, (3 * secant - 2 * d[:-1] - d[1:]) / h, (d[:-1] + d[1:] - 2 * secant) / (h * h)

    @cached_property
    def _steepest(self) -> float:
        """A bound of every slope, for the scale of rounding errors."""
        h, c2, c3 = self._cubics
        return float((np.abs(self._d[:-1]) + h * (2 * np.abs(c2) + 3 * np.abs(c3) * h)).max())

    def value(self, u: Array, p: Parameters) -> tuple[Array, Array]:
        h, c2, c3 = self._cubics
        k = np.clip(np.searchsorted(self._x, u, side="right") - 1, 0, len(h) - 1)
        c1, c2, c3 = self._d[k], c2[k], c3[k]
        held = np.clip(u, self._x[0], self._x[-1])
        t = held - self._x[k]
        beyond = u - held
        slope = np.where(beyond < 0, self._d[0], np.where(beyond > 0, self._d[-1], c1 + t * (2 * c2 + 3 * c3 * t)))
        return self._y[k] + t * (c1 + t * (c2 + t * c3)) + beyond * slope, slope

    def bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        at_low, at_high = self.value(low, p)[0], self.value(high, p)[0]
        lo, hi = np.minimum(at_low, at_high), np.maximum(at_low, at_high)
        if self.shape == "other":
            # every piece is monotone: besides the ends only points between them can be extreme
            first = np.searchsorted(self._x, low, side="left")
            last = np.searchsorted(self._x, high, side="right") - 1
            lo, hi = _including(lo, hi, self._point_ranges, first, last)
        # Horner's rule on three coefficients: a few ulp of the largest term, for which the scale of the data stands
        slack = 64 * np.finfo(float).eps * (np.abs(self._y).max() + np.maximum(np.abs(lo), np.abs(hi)))
        return lo - slack, hi + slack

    def slope_bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        """The slope is a parabola in each piece: extreme at the ends, at points between them and at vertices between."""
        at_low, at_high = self.value(low, p)[1], self.value(high, p)[1]
        lo, hi = np.minimum(at_low, at_high), np.maximum(at_low, at_high)
        first = np.searchsorted(self._x, low, side="left")
        last = np.searchsorted(self._x, high, side="right") - 1
        lo, hi = _including(lo, hi, self._slope_ranges, first, last)
        where, top = self._vertices
        first = np.clip(np.searchsorted(self._x, low, side="right") - 1, 0, len(top) - 1)
        last = np.clip(np.searchsorted(self._x, high, side="left") - 1, 0, len(top) - 1)
        lo, hi = _including(lo, hi, self._vertex_ranges, first + 1, last - 1)
        for k in (first, last):
            # the vertex is known to rounding only: near the end of the interval it counts as inside
            near = 1e-9 * (1.0 + np.abs(where[k]))
            inside = (where[k] > low - near) & (where[k] < high + near)
            lo = np.where(inside, np.minimum(lo, top[k]), lo)
            hi = np.where(inside, np.maximum(hi, top[k]), hi)
        slack = 64 * np.finfo(float).eps * self._steepest
        return widen(lo - slack, hi + slack)

    @cached_property
    def _point_ranges(self) -> tuple[list[Array], list[Array]]:
        return _levels(self._y, np.minimum), _levels(self._y, np.maximum)

    @cached_property
    def _slope_ranges(self) -> tuple[list[Array], list[Array]]:
        return _levels(self._d, np.minimum), _levels(self._d, np.maximum)

    @cached_property
    def _vertices(self) -> tuple[Array, Array]:
        """Where each piece's slope has its vertex (the piece's left point where it has none) and the slope there."""
        h, c2, c3 = self._cubics
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            t = np.where(c3 != 0, -c2 / (3 * c3), -1.0)
        t = np.where((t > 0) & (t < h), t, 0.0)
        return self._x[:-1] + t, self._d[:-1] + t * (2 * c2 + 3 * c3 * t)

    @cached_property
    def _vertex_ranges(self) -> tuple[list[Array], list[Array]]:
        top = self._vertices[1]
        return _levels(top, np.minimum), _levels(top, np.maximum)

    def limit(self, old: Array, new: Array, current: Array, rho: Array, p: Parameters) -> Array:
        """Steps no further than the data is wide, so that the straight ends do not throw the iteration off."""
        width = float(self._x[-1] - self._x[0])
        return old + np.clip(new - old, -width, width)


def slopes(x: Array, y: Array) -> Array:
    """The slope at every point, preserving the shape of the data."""
    h, secant = np.diff(x), np.diff(y) / np.diff(x)
    d = np.empty_like(x)
    d[0], d[-1] = secant[0], secant[-1]
    if len(x) > 2:
        left, right = secant[:-1], secant[1:]
        w1, w2 = 2 * h[1:] + h[:-1], h[1:] + 2 * h[:-1]
        same = left * right > 0
        with np.errstate(divide="ignore", invalid="ignore"):
            d[1:-1] = np.where(same, (w1 + w2) / (w1 / left + w2 / right), 0.0)
        d[0] = _end(h[0], h[1], secant[0], secant[1])
        d[-1] = _end(h[-1], h[-2], secant[-1], secant[-2])
    return d


def _end(h0: float, h1: float, s0: float, s1: float) -> float:
    """Three-point slope at an end, kept within the shape of the data."""
    d = ((2 * h0 + h1) * s0 - h0 * s1) / (h0 + h1)
    if d * s0 <= 0:
        # a turn of the extrapolated kind: the secant itself keeps the ends growing
        return float(s0)
    return float(3 * s0 if s0 * s1 < 0 and abs(d) > 3 * abs(s0) else d)


def _levels(values: Array, pick: np.ufunc) -> list[Array]:
    """levels[k][i] = pick over values[i : i + 2^k]."""
    out = [values]
    while 2 ** len(out) <= len(values):
        half = 2 ** (len(out) - 1)
        out.append(pick(out[-1][: len(values) - 2 * half + 1], out[-1][half : len(values) - half + 1]))
    return out


def _including(
    lo: Array, hi: Array, ranges: tuple[list[Array], list[Array]], first: Index, last: Index
) -> tuple[Array, Array]:
    """[lo, hi] grown to contain the values first .. last, where there are any."""
    some = first <= last
    first, last = np.where(some, first, 0), np.where(some, last, 0)
    least, most = ranges
    return (
        np.where(some, np.minimum(lo, _range(least, first, last, np.minimum)), lo),
        np.where(some, np.maximum(hi, _range(most, first, last, np.maximum)), hi),
    )


def _range(levels: list[Array], first: Index, last: Index, pick: np.ufunc) -> Array:
    """pick over values[first .. last], both included, for arrays of ends."""
    span = last - first + 1
    level = np.floor(np.log2(np.maximum(span, 1))).astype(int)
    out = np.empty(np.shape(first))
    for k, values in enumerate(levels):
        here = level == k
        if np.any(here):
            out[here] = pick(values[first[here]], values[last[here] - 2**k + 1])
    return out
