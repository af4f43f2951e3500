"""The few families of nonlinear branches.

A family is one scalar function phi(u; parameters) with its derivative, its bounds over an interval and its limiting step.
Everything works on arrays of any (broadcastable) shape; u in volts (or amperes for a limit row), phi in amperes (volts).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from netaudit.devices.omega import HIGHEST, LOWEST, omega_start

Array = NDArray[np.float64]
Parameters = dict[str, Array]
Shape = Literal["increasing", "nondecreasing", "other"]

#: relative widening that covers the error of numpy's exp, log and expm1 (measured at most 0.86 ulp) many times over
WIDEN = 2.0**-50
#: parts into which an interval is cut for the offset of a curve that bends both ways
PIECES = 8


def widen(low: Array, high: Array) -> tuple[Array, Array]:
    """An interval grown by WIDEN relative and the smallest normal number, so that rounding stays inside."""
    tiny = np.finfo(float).tiny
    return low - np.abs(low) * WIDEN - tiny, high + np.abs(high) * WIDEN + tiny


class Family:
    """Interface of a branch family."""

    parameters: tuple[str, ...] = ()
    shape: Shape = "other"

    def value(self, u: Array, p: Parameters) -> tuple[Array, Array]:
        """phi(u) and d phi / d u."""
        raise NotImplementedError

    def bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        """An enclosure of phi over [low, high], rounding included."""
        raise NotImplementedError

    def slope_bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        """An enclosure of d phi / d u over [low, high], rounding included."""
        raise NotImplementedError

    def offset_bounds(self, low: Array, high: Array, slope: Array, p: Parameters) -> tuple[Array, Array]:
        """An enclosure of phi(u) - slope u over [low, high] (``slope`` taken as exact), rounding included.

        Of each of PIECES parts of the interval the better of the plain and the mean-value enclosure counts; the width
        shrinks with the square of the interval's.
        """
        share = np.arange(PIECES + 1).reshape(-1, *([1] * np.ndim(low))) / PIECES
        edges = low + share * (high - low)
        edges[-1] = high
        a, b = edges[:-1], np.maximum(edges[1:], edges[:-1])
        middle = np.clip(0.5 * a + 0.5 * b, a, b)
        plain = _line_off(*self.bounds(a, b, p), a, b, slope)
        mean = _line_off(*self.bounds(middle, middle, p), middle, middle, slope)
        least, most = self.slope_bounds(a, b, p)
        half = np.nextafter(np.maximum(b - middle, middle - a), np.inf)
        reach = np.nextafter(half * np.maximum(np.abs(least - slope), np.abs(most - slope)) * (1 + WIDEN), np.inf)
        lo = np.maximum(plain[0], np.nextafter(mean[0] - reach, -np.inf))
        hi = np.minimum(plain[1], np.nextafter(mean[1] + reach, np.inf))
        return lo.min(axis=0), hi.max(axis=0)

    def touch(self, slope: Array, p: Parameters) -> Array:
        """About where phi has this slope (nan: nowhere, or not known)."""
        return np.full(np.shape(slope), np.nan)

    def limit(self, old: Array, new: Array, current: Array, rho: Array, p: Parameters) -> Array:
        """The branch's next controlling value, from the linear solution (``new``, ``current``).

        ``rho`` >= 0 (inf allowed) is the resistance that the branch sees.  The default accepts ``new``.
        """
        return new


class Convex(Family):
    """A family whose phi is convex: above its chord nowhere, below its tangents nowhere."""

    def offset_bounds(self, low: Array, high: Array, slope: Array, p: Parameters) -> tuple[Array, Array]:
        """Highest at an end of the interval; nowhere below the tangent at (about) the point of that slope."""
        ends = [_line_off(*self.bounds(u, u, p), u, u, slope) for u in (low, high)]
        with np.errstate(all="ignore"):
            at = self.touch(slope, p)
            at = np.clip(np.where(np.isfinite(at), at, 0.5 * low + 0.5 * high), low, high)
        floor = _line_off(*self.bounds(at, at, p), at, at, slope)[0]
        least, most = self.slope_bounds(at, at, p)
        # phi(u) >= phi(at) + s (u - at) for the true slope s, of which only an enclosure is known
        left = np.maximum(most - slope, 0.0) * (low - at)
        right = np.minimum(least - slope, 0.0) * (high - at)
        dip = np.minimum(left, right) * (1 + WIDEN) - np.finfo(float).tiny
        return np.nextafter(floor + dip, -np.inf), np.maximum(ends[0][1], ends[1][1])


def _line_off(lo: Array, hi: Array, low: Array, high: Array, slope: Array) -> tuple[Array, Array]:
    """[lo, hi] - slope [low, high], rounded outwards."""
    a, b = slope * low, slope * high
    lo, hi = lo - np.maximum(a, b), hi - np.minimum(a, b)
    slack = 4 * np.finfo(float).eps * (np.maximum(np.abs(a), np.abs(b)) + np.maximum(np.abs(lo), np.abs(hi)))
    tiny = np.finfo(float).tiny
    return lo - slack - tiny, hi + slack + tiny


@dataclass(frozen=True)
class Exponential(Convex):
    """Junction or breakdown with its series resistance inside the branch.

        i = I_S (exp(w / V) - 1),    u = w + R i

    Parameters: ``log_I`` = ln(I_S / 1 A) (a logarithm, since a sharp breakdown's I_S underflows), ``V`` = n V_T in
    volts, ``R`` in ohms (0 allowed).  Closed form by Wright's omega function (Banwell and Jayakumar, Electronics Letters
    36(4) 291-292, 2000), polished by Newton steps in x = w / V so that i keeps its relative accuracy on both sides of
    zero, and is zero at zero.  The exponent is cut at 600: currents beyond 1e260 A stay there.
    """

    parameters = ("log_I", "V", "R")
    shape: Shape = "increasing"

    def value(self, u: Array, p: Parameters) -> tuple[Array, Array]:
        V, r = p["V"], p["R"]
        _, i, grown = _junction(u, p["log_I"], V, r)
        return i, grown / (V + r * grown)

    def bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        return self._widened(self.value(low, p)[0], self.value(high, p)[0], low, high, p)

    def slope_bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        return self._widened(self.value(low, p)[1], self.value(high, p)[1], low, high, p)

    def touch(self, slope: Array, p: Parameters) -> Array:
        grown = slope * p["V"] / (1.0 - p["R"] * slope)
        x = np.log(grown) - p["log_I"]
        return p["V"] * x + p["R"] * (grown - np.exp(p["log_I"]))

    def _widened(self, lo: Array, hi: Array, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        """Both ends grown by the error of the exponent (its magnitude times a few ulp) on top of ``widen``.

        x is known to a few ulp of the largest of u/V and x, and exp(log_I + x) to as many ulp as its exponent is large;
        near zero expm1 keeps the relative error of x itself.
        """
        size = 1.0 + np.maximum(np.abs(low), np.abs(high)) / p["V"] + np.abs(p["log_I"])
        slack = size * 16 * np.finfo(float).eps
        lo, hi = widen(lo, hi)
        return lo - np.abs(lo) * slack, hi + np.abs(hi) * slack

    def limit(self, old: Array, new: Array, current: Array, rho: Array, p: Parameters) -> Array:
        """Meets the curve with the line of slope -1/rho through the linear solution (Newton in s = u + rho i).

        With rho infinite the line is level: the curve's point of that current.  Steps below 0.3 V are accepted.
        """
        V, r, log_i = p["V"], p["R"], p["log_I"]
        finite = np.isfinite(rho)
        seen = np.where(finite, rho, 0.0)
        x, i, _ = _junction(new + seen * current, log_i, V, r + seen)
        step = V * x + r * i
        if not finite.all():
            step = np.where(finite, step, self._level(new, current, p))
        return np.where(np.abs(new - old) < 0.3 * V, new, step)

    def _level(self, new: Array, current: Array, p: Parameters) -> Array:
        """The voltage at which the curve carries ``current``; ``new`` where it never does (at or below -I_S)."""
        log_i = p["log_I"]
        i_s = np.exp(log_i)
        rising = np.logaddexp(np.log(np.maximum(current, np.finfo(float).tiny)), log_i) - log_i
        share = np.minimum(current, 0.0) / np.maximum(i_s, np.finfo(float).tiny)
        falling = np.log1p(np.maximum(share, -1.0 + 1e-12))
        x = np.where(current > 0.0, rising, falling)
        return np.where(current > -i_s * (1.0 - 1e-12), p["V"] * x + p["R"] * current, new)


def _junction(u: Array, log_i: Array, V: Array, r: Array) -> tuple[Array, Array, Array]:
    """(x, i, I_S e^x) with V x + r i = u and i = I_S (e^x - 1)."""
    a, slope = u / V, r / V
    if not np.any(r):
        return (a, *_bare(a, log_i))
    log_rho = np.minimum(log_i + np.log(np.maximum(slope, np.finfo(float).tiny)), -LOWEST)
    whole = a + np.exp(log_rho)
    omega = omega_start(np.minimum(np.maximum(whole + log_rho, LOWEST), HIGHEST))
    # below 1 the logarithm of omega would cancel against log_rho
    x = np.where(omega < 1.0, whole - omega, np.log(omega) - log_rho)
    # x lies between 0 and a; the start has an error of 3e-9, which may reach beyond
    x = np.minimum(np.maximum(x, np.minimum(a, 0.0)), np.maximum(a, 0.0))
    for _ in range(4):
        i, grown = _bare(x, log_i)
        step = (a - x - slope * i) / (1.0 + slope * grown)
        x = x + step
        if (np.abs(step) <= 1e-8 * np.abs(x)).all():
            break
    return (x, *_bare(x, log_i))


def _bare(x: Array, log_i: Array) -> tuple[Array, Array]:
    """I_S (e^x - 1) without cancellation, and I_S e^x; written for an I_S that underflows and an e^x that overflows."""
    grown = np.exp(np.minimum(log_i + np.maximum(x, 0.0), 600.0))
    i = np.copysign(grown * np.expm1(-np.abs(x)), x)
    return i, grown * np.exp(np.minimum(x, 0.0))


@dataclass(frozen=True)
class Ramp(Convex):
    """phi(u) = max(0, u - offset): the piece from which limits are built, min(a, b) = a - max(0, a - b)."""

    parameters = ("offset",)
    shape: Shape = "nondecreasing"

    def value(self, u: Array, p: Parameters) -> tuple[Array, Array]:
        w = u - p["offset"]
        on = w > 0
        return np.where(on, w, 0.0), on.astype(float)

    def bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        lo, hi = _shifted(low, high, p["offset"])
        return np.maximum(lo, 0.0), np.maximum(hi, 0.0)

    def slope_bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        lo, hi = _shifted(low, high, p["offset"])
        return (lo > 0).astype(float), (hi >= 0).astype(float)

    def touch(self, slope: Array, p: Parameters) -> Array:
        return np.asarray(p["offset"] + 0.0 * slope)

    def offset_bounds(self, low: Array, high: Array, slope: Array, p: Parameters) -> tuple[Array, Array]:
        """The lowest point is an end or the corner."""
        corner = np.clip(self.touch(slope, p), low, high)
        every = [_line_off(*self.bounds(u, u, p), u, u, slope) for u in (low, corner, high)]
        lo = np.minimum(np.minimum(every[0][0], every[1][0]), every[2][0])
        return lo, np.maximum(every[0][1], every[2][1])


@dataclass(frozen=True)
class Square(Convex):
    """phi(u) = max(0, u - offset)^2 / 2: the square law of a field-effect channel (offset is the threshold)."""

    parameters = ("offset",)
    shape: Shape = "nondecreasing"

    def value(self, u: Array, p: Parameters) -> tuple[Array, Array]:
        on = np.maximum(u - p["offset"], 0.0)
        return 0.5 * on * on, on

    def bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        lo, hi = _shifted(low, high, p["offset"])
        return widen(0.5 * np.maximum(lo, 0.0) ** 2, 0.5 * np.maximum(hi, 0.0) ** 2)

    def slope_bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        lo, hi = _shifted(low, high, p["offset"])
        return np.maximum(lo, 0.0), np.maximum(hi, 0.0)

    def touch(self, slope: Array, p: Parameters) -> Array:
        return np.asarray(p["offset"] + slope)


def _shifted(low: Array, high: Array, offset: Array) -> tuple[Array, Array]:
    """[low, high] - offset, rounded outwards."""
    return np.nextafter(low - offset, -np.inf), np.nextafter(high - offset, np.inf)


EXPONENTIAL = Exponential()
RAMP = Ramp()
SQUARE = Square()
