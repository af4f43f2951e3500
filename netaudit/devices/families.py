"""The few families of nonlinear branches.

A family is one scalar function phi(u; parameters) with its derivative, its bounds over an interval and its limiting step.
Everything works on arrays of any (broadcastable) shape; u in volts (or amperes for a limit row), phi in amperes (volts).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from netaudit.devices.omega import wright_omega

Array = NDArray[np.float64]
Parameters = dict[str, Array]
Shape = Literal["increasing", "nondecreasing", "other"]

#: relative widening that covers the error of numpy's exp, log and expm1 (measured at most 0.86 ulp) many times over
WIDEN = 2.0**-50


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

    def limit(self, old: Array, new: Array, current: Array, rho: Array, p: Parameters) -> Array:
        """The branch's next controlling value, from the linear solution (``new``, ``current``).

        ``rho`` >= 0 (inf allowed) is the resistance that the branch sees.  The default accepts ``new``.
        """
        return new


@dataclass(frozen=True)
class Exponential(Family):
    """Junction or breakdown with its series resistance inside the branch.

        i = I_S (exp(w / V) - 1),    u = w + R i

    Parameters: ``log_I`` = ln(I_S / 1 A) (a logarithm, since a sharp breakdown's I_S underflows), ``V`` = n V_T in
    volts, ``R`` in ohms (0 allowed).  Closed form by Wright's omega function (Banwell and Jayakumar, Electronics Letters
    36(4) 291-292, 2000), polished so that the reverse branch keeps its relative accuracy.
    """

    parameters = ("log_I", "V", "R")
    shape: Shape = "increasing"

    def inner(self, u: Array, p: Parameters, extra: Array | float = 0.0) -> Array:
        """The voltage w across the bare junction when u lies across it in series with R + extra."""
        V, r = p["V"], p["R"] + extra
        i_s = np.exp(p["log_I"])
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            theta = (u + r * i_s) / V + np.log(r) + p["log_I"] - np.log(V)
            omega = wright_omega(theta)
            w = np.where(r > 0, V * (np.log(np.maximum(omega, 1e-300)) - np.log(r) - p["log_I"] + np.log(V)), u)
            # for small omega the logarithm above is theta - omega: use u + r I_S - V omega, which does not cancel
            w = np.where((r > 0) & (omega < 1.0), u + r * i_s - V * omega, w)
        return np.asarray(w, dtype=float)

    def _current(self, w: Array, p: Parameters) -> tuple[Array, Array]:
        """Current and conductance of the bare junction; the exponent is kept below overflow."""
        V = p["V"]
        e = np.minimum(w / V + p["log_I"], 600.0)
        grown = np.exp(e)
        i_s = np.exp(p["log_I"])
        small = np.abs(w) < 0.5 * V
        i = np.where(small, i_s * np.expm1(np.where(small, w / V, 0.0)), grown - i_s)
        return i, grown / V

    def value(self, u: Array, p: Parameters) -> tuple[Array, Array]:
        w = self.inner(u, p)
        i, g = self._current(w, p)
        for _ in range(2):
            step = (u - w - p["R"] * i) / (1.0 + p["R"] * g)
            w = w + step
            i, g = self._current(w, p)
        return i, g / (1.0 + p["R"] * g)

    def bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        lo, _ = self.value(low, p)
        hi, _ = self.value(high, p)
        return self._widened(lo, hi, low, high, p)

    def slope_bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        _, lo = self.value(low, p)
        _, hi = self.value(high, p)
        return self._widened(lo, hi, low, high, p)

    def _widened(self, lo: Array, hi: Array, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        """Both ends grown by the error of the exponent (its magnitude times a few ulp) on top of ``widen``.

        exp(e) computed from an exponent with relative error 4 eps has relative error |e| 4 eps; the polished omega step
        leaves at most that, and the cancellation against I_S an absolute error of a few eps I_S.
        """
        size = 1.0 + np.maximum(np.abs(low), np.abs(high)) / p["V"] + np.abs(p["log_I"])
        slack = size * 16 * np.finfo(float).eps
        floor = np.exp(p["log_I"]) * slack
        lo, hi = widen(np.minimum(lo, hi), np.maximum(lo, hi))
        return lo - np.abs(lo) * slack - floor, hi + np.abs(hi) * slack + floor

    def limit(self, old: Array, new: Array, current: Array, rho: Array, p: Parameters) -> Array:
        """Meets the curve with the line of slope -1/rho through the linear solution (Newton in s = u + rho i).

        With rho infinite the line is level: the curve's point of that current.  Steps below 0.3 V are accepted.
        """
        V = p["V"]
        i_s = np.exp(p["log_I"])
        finite = np.isfinite(rho)
        r = np.where(finite, rho, 0.0)
        w = self.inner(new + r * current, p, r)
        i, _ = self._current(w, p)
        met = w + p["R"] * i
        floor = -i_s * (1.0 - 1e-12)
        with np.errstate(divide="ignore", over="ignore", invalid="ignore"):
            level = V * np.log1p(np.maximum(current, floor) / np.maximum(i_s, 1e-300))
        level = level + p["R"] * np.maximum(current, floor)
        # a current below -I_S has no point on the curve: the linear solution itself is as good
        level = np.where(current > floor, np.minimum(level, np.maximum(new, level)), new)
        step = np.where(finite, met, level)
        return np.where(np.abs(new - old) < 0.3 * V, new, step)


@dataclass(frozen=True)
class Ramp(Family):
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


@dataclass(frozen=True)
class Square(Family):
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


def _shifted(low: Array, high: Array, offset: Array) -> tuple[Array, Array]:
    """[low, high] - offset, rounded outwards."""
    return np.nextafter(low - offset, -np.inf), np.nextafter(high - offset, np.inf)


EXPONENTIAL = Exponential()
RAMP = Ramp()
SQUARE = Square()
