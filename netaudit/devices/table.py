"""A measured curve as a branch: a shape-preserving piecewise cubic, straight on with its end slopes outside.

Slopes at the points after Fritsch and Butland (SIAM J. Sci. Stat. Comput. 5(2) 300-304, 1984): the weighted harmonic
mean of the neighbouring secants where both have one sign, zero at local extrema.  Between points the curve is monotone,
so hills stay where the data has them and nowhere else.
"""

from __future__ import annotations

from dataclasses import dataclass, field

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

    def _pieces(self, u: Array) -> tuple[Index, Array, Array, Array, Array]:
        """For each u: piece number, width, and the cubic's coefficients (c1, c2, c3) about the piece's left point."""
        k = np.clip(np.searchsorted(self._x, u, side="right") - 1, 0, len(self._x) - 2)
        h = self._x[k + 1] - self._x[k]
        secant = (self._y[k + 1] - self._y[k]) / h
        c2 = (3 * secant - 2 * self._d[k] - self._d[k + 1]) / h
        c3 = (self._d[k] + self._d[k + 1] - 2 * secant) / (h * h)
        return k, h, self._d[k], c2, c3

    def value(self, u: Array, p: Parameters) -> tuple[Array, Array]:
        k, h, c1, c2, c3 = self._pieces(u)
        t = np.clip(u - self._x[k], 0.0, h)
        inside = self._y[k] + t * (c1 + t * (c2 + t * c3))
        slope = c1 + t * (2 * c2 + 3 * c3 * t)
        beyond = u - np.clip(u, self._x[0], self._x[-1])
        slope = np.where(beyond < 0, self._d[0], np.where(beyond > 0, self._d[-1], slope))
        return inside + beyond * slope * (beyond != 0), slope

    def bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        at_low, at_high = self.value(low, p)[0], self.value(high, p)[0]
        lo, hi = np.minimum(at_low, at_high), np.maximum(at_low, at_high)
        for x, y in zip(self._x, self._y, strict=True) if self.shape == "other" else ():
            inside = (low <= x) & (x <= high)
            lo, hi = np.where(inside, np.minimum(lo, y), lo), np.where(inside, np.maximum(hi, y), hi)
        # Horner's rule on three coefficients: a few ulp of the largest term, for which the scale of the data stands
        slack = 64 * np.finfo(float).eps * (np.abs(self._y).max() + np.maximum(np.abs(lo), np.abs(hi)))
        return lo - slack, hi + slack

    def slope_bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        least, most = self._piece_slopes
        first = np.clip(np.searchsorted(self._x, low, side="right") - 1, -1, len(self._x) - 1) + 1
        last = np.clip(np.searchsorted(self._x, high, side="left") - 1, -1, len(self._x) - 1) + 1
        last = np.maximum(first, last)
        lo, hi = _range(least, first, last, np.minimum), _range(most, first, last, np.maximum)
        slack = 64 * np.finfo(float).eps * float(np.abs(self._d).max() + np.abs(most[-1]).max(initial=0.0))
        return widen(lo - slack, hi + slack)

    @property
    def _piece_slopes(self) -> tuple[list[Array], list[Array]]:
        """Least and greatest slope of every piece (the straight ends first and last), as tables for range queries."""
        found: tuple[list[Array], list[Array]] | None = self.__dict__.get("_ranges")
        if found is None:
            _, h, c1, c2, c3 = self._pieces(self._x[:-1])
            ends = np.stack([c1, c1 + h * (2 * c2 + 3 * c3 * h)])
            with np.errstate(divide="ignore", invalid="ignore"):
                t = np.where(c3 != 0, -c2 / (3 * c3), -1.0)
            top = np.where((t > 0) & (t < h), c1 + t * (2 * c2 + 3 * c3 * t), ends[0])
            every = np.concatenate([ends, top[None]])
            least = np.concatenate([[self._d[0]], every.min(axis=0), [self._d[-1]]])
            most = np.concatenate([[self._d[0]], every.max(axis=0), [self._d[-1]]])
            found = (_levels(least, np.minimum), _levels(most, np.maximum))
            object.__setattr__(self, "_ranges", found)
        return found

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
