"""From the span of the nets to bounds of every unknown and every branch value, by the circuit's own equations.

Each row of G x + A phi(B x) - s = 0 is solved for each of its terms in turn with the others at their bounds
(feasibility-based tightening; Kearfott, Rigorous Global Search, 1996, ch. 7), as is each u_k = sum B_kj x_j.  Where a
bound on phi_k is new, slices that cannot carry it are cut from the ends of u_k.  Nothing is cut that a solution could
hold: sums are bounded a priori and every single operation is rounded outwards.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from netaudit.devices.base import Array
from netaudit.solve.branches import BranchGroups
from netaudit.solve.interval import Interval
from netaudit.solve.system import Numbers, System

_ROUNDS = 200
#: a round that gains less than this share of every width ends the tightening
_GAIN = 0.02
#: shares of an interval that are tried as slices, the largest first
SLICES = (0.97, 0.875, 0.75, 0.5, 0.25, 0.1)


@dataclass(frozen=True)
class Dense:
    """A small circuit as dense arrays, the rounding of summing their entries enclosed: g (n, n), s (n,), a (n, m),
    b (m, n), and the branches."""

    g: Interval
    s: Interval
    a: Interval
    b: Interval
    branches: BranchGroups

    @property
    def n(self) -> int:
        return len(self.g.low)

    @property
    def m(self) -> int:
        return len(self.b.low)


def dense(system: System, num: Numbers) -> Dense:
    """The arrays of one member (numbers without batch axes)."""
    still = np.zeros(system.m)
    plain, sizes = num, _magnitudes(num)
    return Dense(
        _entries(system.jacobian(plain, still), system.jacobian(sizes, still)),
        _entries(system.right_side(plain, still, still, still), system.right_side(sizes, still, still, still)),
        _entries(system.injection(plain), system.injection(sizes)),
        _entries(sense_matrix(system, plain.sense), sense_matrix(system, sizes.sense)),
        num.branches,
    )


def _entries(value: Array, size: Array) -> Interval:
    """Sums of stamped terms: one term is exact, of several the rounding is bounded by the terms' magnitudes."""
    slack = np.where(size > np.abs(value) * (1 + 1e-12), size, 0.0) * (64 * np.finfo(float).eps)
    slack = np.where(size > 0.0, np.maximum(slack, np.abs(value) * np.finfo(float).eps), 0.0)
    return Interval(value - slack, value + slack)


def _magnitudes(num: Numbers) -> Numbers:
    return replace(num, g=np.abs(num.g), s=np.abs(num.s), inject=np.abs(num.inject), sense=np.abs(num.sense))


def sense_matrix(system: System, sense: Array) -> Array:
    """B as a dense matrix (m, n)."""
    out = np.zeros((system.m, system.n + 1))
    np.add.at(out, (system.b_branch, system.position[system.b_column]), sense)
    return out[:, : system.n]


@dataclass(frozen=True)
class Bounds:
    """Bounds of the unknowns x and of the branch values u; ``empty``: no solution lies within."""

    x: Interval
    u: Interval
    empty: bool = False


def tighten(circuit: Dense, x: Interval, u: Interval | None = None) -> Bounds:
    """Bounds from a box of the unknowns, and of the branch values if any are known; both may be unbounded."""
    u = u or Interval(np.full(circuit.m, -np.inf), np.full(circuit.m, np.inf))
    matrix = Interval(
        np.concatenate([circuit.g.low, circuit.a.low], axis=1), np.concatenate([circuit.g.high, circuit.a.high], axis=1)
    )
    for _ in range(_ROUNDS):
        before = (x, u)
        u = u.meet(_sum(circuit.b * x[None, :]))
        x = solved_for(circuit.b, x, u)
        phi = _phi(circuit.branches, u)
        terms = solved_for(matrix, Interval(np.r_[x.low, phi.low], np.r_[x.high, phi.high]), circuit.s)
        x = x.meet(terms[: circuit.n])
        u = shaved(circuit.branches, u, terms[circuit.n :])
        if x.empty().any() or u.empty().any():
            return Bounds(x, u, True)
        if not (_gained(before[0], x) or _gained(before[1], u)):
            break
    return Bounds(x, u)


def _gained(old: Interval, new: Interval) -> bool:
    with np.errstate(invalid="ignore"):
        was, now = old.high - old.low, new.high - new.low
        return bool(
            ((now < (1.0 - _GAIN) * was) | (np.isinf(was) & ((old.low < new.low) | (new.high < old.high)))).any()
        )


def _phi(branches: BranchGroups, u: Interval) -> Interval:
    """phi over boxes that may be unbounded (then phi is)."""
    bounded = np.isfinite(u.low) & np.isfinite(u.high)
    low, high = branches.bounds(np.where(bounded, u.low, 0.0), np.where(bounded, u.high, 0.0))
    return Interval(np.where(bounded, low, -np.inf), np.where(bounded, high, np.inf))


def _sum(terms: Interval) -> Interval:
    """The sums of the rows."""
    low, high, size = (t.sum(axis=-1) for t in (terms.low, terms.high, terms.magnitude()))
    slack = (terms.low.shape[-1] + 4) * np.finfo(float).eps
    return Interval(*_finite(low - slack * size, high + slack * size))


def _finite(low: Array, high: Array) -> tuple[Array, Array]:
    return np.where(np.isnan(low), -np.inf, low), np.where(np.isnan(high), np.inf, high)


def solved_for(matrix: Interval, x: Interval, right: Interval) -> Interval:
    """x (..., t) cut by every row of matrix x = right, solved for each of its entries; matrix (r, t), right (r,).

    Sums that leave one term out come from sums before and behind it: taking a huge term off again would leave nothing.
    """
    with np.errstate(all="ignore"):
        terms = matrix * x[..., None, :]
        low, high, size = (_without(t) for t in (terms.low, terms.high, terms.magnitude()))
        slack = (terms.low.shape[-1] + 4) * np.finfo(float).eps
        rest = Interval(*_finite(low - slack * size, high + slack * size))
        found = (right[:, None] - rest) / matrix
    lows = found.low.max(axis=-2, initial=-np.inf)
    return x.meet(Interval(lows, found.high.min(axis=-2, initial=np.inf)))


def _without(t: Array) -> Array:
    """For each entry of a row the sum of all others."""
    zero = np.zeros((*t.shape[:-1], 1))
    before = np.concatenate([zero, np.cumsum(t, axis=-1)[..., :-1]], axis=-1)
    behind = np.concatenate([np.cumsum(t[..., ::-1], axis=-1)[..., -2::-1], zero], axis=-1)
    return np.asarray(before + behind)


def shaved(branches: BranchGroups, u: Interval, phi: Interval) -> Interval:
    """u less the slices at its ends over which the branch cannot carry anything in ``phi``."""
    if not (np.isfinite(u.low).all() and np.isfinite(u.high).all()):
        bounded = np.isfinite(u.low) & np.isfinite(u.high)
        inner = shaved(branches, _where(bounded, u), _where(bounded, phi))
        return Interval(np.where(bounded, inner.low, u.low), np.where(bounded, inner.high, u.high))
    shares = np.array(SLICES).reshape(-1, *([1] * np.ndim(u.low)))
    width = u.high - u.low
    edge = np.clip(u.high - shares * width, u.low, u.high)
    high = np.where(_apart(branches, edge, u.high, phi), edge, u.high).min(axis=0)
    edge = np.clip(u.low + shares * width, u.low, high)
    low = np.where(_apart(branches, u.low, edge, phi), edge, u.low).max(axis=0)
    none = _apart(branches, low, high, phi)
    return Interval(np.where(none, np.inf, low), np.where(none, -np.inf, high))


def _apart(branches: BranchGroups, low: Array, high: Array, phi: Interval) -> NDArray[np.bool_]:
    """Whether the branches carry nothing in ``phi`` over [low, high]."""
    lo, hi = branches.bounds(*np.broadcast_arrays(low, high))
    return np.asarray((lo > phi.high) | (hi < phi.low))


def _where(bounded: NDArray[np.bool_], x: Interval) -> Interval:
    return Interval(np.where(bounded, x.low, 0.0), np.where(bounded, x.high, 0.0))
