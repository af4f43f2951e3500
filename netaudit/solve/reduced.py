"""The circuit seen from its branches: P y + Q phi = c with y the distinct branch values, its rounding enclosed.

With W an approximation of B J0^-1, J0 = G + A diag(alpha) B the Jacobian at slopes alpha (regular even where G is not), the
rows W (G x + A phi - s) = 0 hold exactly whatever W is.  P = I - (W A) diag(alpha) B B^+ makes W G nearly P B; what is
missing is a matrix E with |E x| <= |E| x_max for every x within proven bounds, which widens the right-hand side:

    P y + (W A) phi = W s - E x,     E = W G - P B

Branches that sense the same sum (or its negative) share one entry of y.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from netaudit.devices.base import Array
from netaudit.solve.branches import BranchGroups
from netaudit.solve.interval import Interval, matrix_times, product, real_product
from netaudit.solve.tighten import Dense

Index = NDArray[np.intp]


@dataclass(frozen=True)
class Reduced:
    """``p`` (d, d) exact, ``q`` (d, m) enclosed, ``c`` (d,) enclosed; branch k takes sign[k] * y[variable[k]].

    ``rows`` (2 d, d + m) and ``right``: combinations T of the equations, T [P Q] and T c, the first half of which single
    out one branch current each where that can be had, the second half one branch value each.
    """

    p: Array
    q: Interval
    c: Interval
    variable: Index
    sign: Array
    branches: BranchGroups
    rows: Interval
    right: Interval

    @property
    def d(self) -> int:
        return len(self.p)

    @cached_property
    def signs(self) -> Array:
        """u = signs @ y, shape (m, d)."""
        return _incidence(self.variable, self.sign, self.d)

    def spread(self, y: Interval) -> Interval:
        """The branch values u (..., m) of boxes y (..., d)."""
        low, high = y.low[..., self.variable], y.high[..., self.variable]
        up = self.sign > 0
        return Interval(np.where(up, low, -high), np.where(up, high, -low))

    def gather(self, u: Interval) -> Interval:
        """The boxes y that branch values u (..., m) leave."""
        up = self.sign > 0
        low, high = np.where(up, u.low, -u.high), np.where(up, u.high, -u.low)
        lows = np.full((*low.shape[:-1], self.d), -np.inf)
        highs = np.full((*low.shape[:-1], self.d), np.inf)
        for k, v in enumerate(self.variable.tolist()):
            lows[..., v] = np.maximum(lows[..., v], low[..., k])
            highs[..., v] = np.minimum(highs[..., v], high[..., k])
        return Interval(lows, highs)


def reduce(circuit: Dense, slope: Array, x_max: Array) -> Reduced | None:
    """The reduced form around the given slopes (m,), valid for all |x| <= x_max; None where J0 is singular."""
    b = circuit.b.middle()
    variable, sign, first = _distinct(b)
    base, a = b[first], circuit.a.middle()
    j0 = circuit.g.middle() + (a * slope) @ b
    try:
        w: Array = np.asarray(np.linalg.solve(j0.T, base.T).T, dtype=float)
    except np.linalg.LinAlgError:
        return None
    if not np.isfinite(w).all():
        return None
    p = np.eye(len(first)) - ((w @ a) * slope) @ _incidence(variable, sign, len(first))
    q = product(w, circuit.a)
    e = product(w, circuit.g) - product(p, circuit.b[first])
    c = product(w, circuit.s[:, None])[:, 0]
    missing = matrix_times(e, Interval(-x_max, x_max))
    c = c - missing
    t = _singling(p, q.middle())
    tp, tq = real_product(t, p), product(t, q)
    rows = Interval(np.concatenate([tp.low, tq.low], axis=1), np.concatenate([tp.high, tq.high], axis=1))
    right = product(t, c[:, None])[:, 0]
    return Reduced(p, q, c, variable, sign, circuit.branches, rows, right)


def _incidence(variable: Index, sign: Array, d: int) -> Array:
    out = np.zeros((len(variable), d))
    out[np.arange(len(variable)), variable] = sign
    return out


def _distinct(b: Array) -> tuple[Index, Array, Index]:
    """For each branch its variable and sign, and for each variable the first branch that has it (its sign is +1)."""
    known: dict[bytes, int] = {}
    variable: list[int] = []
    sign: list[float] = []
    first: list[int] = []
    for k, row in enumerate(b):
        plus, minus = (row + 0.0).tobytes(), (0.0 - row).tobytes()
        if plus in known:
            variable.append(known[plus])
            sign.append(1.0)
        elif minus in known:
            variable.append(known[minus])
            sign.append(-1.0)
        else:
            known[plus] = len(first)
            variable.append(len(first))
            sign.append(1.0)
            first.append(k)
    return np.array(variable, dtype=np.intp), np.array(sign), np.array(first, dtype=np.intp)


def _singling(p: Array, q: Array) -> Array:
    """Combinations of the rows that clear Q to echelon form (largest pivots first), then those that clear P."""
    d = p.shape[0]
    out = []
    for one in (q, p):
        t, work = np.eye(d), one.copy()
        scale = np.abs(one).max(axis=0, initial=0.0)
        scale[scale == 0.0] = 1.0
        open_rows = list(range(d))
        for _ in range(d):
            share = np.abs(work[open_rows]) / scale
            r, k = np.unravel_index(int(np.argmax(share)), share.shape) if share.size else (0, 0)
            if not share.size or share[r, k] < 1e-9:
                break
            row = open_rows.pop(int(r))
            t[row] = t[row] / work[row, k]
            work[row] = work[row] / work[row, k]
            for other in range(d):
                if other != row and work[other, k] != 0.0:
                    t[other] = t[other] - work[other, k] * t[row]
                    work[other] = work[other] - work[other, k] * work[row]
            scale[k] = np.inf
        out.append(t)
    return np.concatenate(out)
