"""Existence of a solution near a computed one, and boxes in which it is the only one.

For a solution x* and C close to J(x*)^-1, Krawczyk's operator (Krawczyk, Computing 4, 1969; Moore, SIAM J. Numer. Anal.
14, 1977) maps a box X around x* into its interior when |C F(x*)| + sup |I - C J(X)| w < w for X = x* +- w: then X holds
exactly one solution.  With J = G + A diag(phi') B,

    |I - C J| w <= |I - C J*| w + |C A| (|phi'(U) - phi'*| (|B| w))

where only the middle part depends on how far the branch values range.  The second half alone is a proof of uniqueness: two
solutions whose branch values lie in U differ by dx with (I - C J) dx = dx for some J between, hence dx = 0 as soon as
|I - C J| w < w for any w > 0.  U may have any shape; the hull of a box and the point is asked.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Array
from netaudit.solve.interval import Interval, matrix_times, product
from netaudit.solve.reduced import Reduced
from netaudit.solve.tighten import Dense

#: radii of the branch values that are tried for the box that must map into itself, relative to how far C F reaches
_GROWTH = (4.0, 64.0, 4096.0, 1e6)


@dataclass(frozen=True)
class Verified:
    """A proven solution: x (n,), its branch values within ``u``, and what uniqueness elsewhere needs of it."""

    x: Array
    u: Interval
    slope: Array
    rest: Array
    gains: Array
    sense: Array

    def alone_in(self, reduced: Reduced, y: Interval) -> np.ndarray:
        """For boxes y (..., d): whether the hull of the box and this point holds no other solution."""
        u = reduced.spread(y).hull(self.u)
        least, most = reduced.branches.slope_bounds(u.low, u.high)
        change = np.maximum(np.abs(least - self.slope), np.abs(most - self.slope)) * (1 + 1e-12)
        return self._contracts(change)

    def _contracts(self, change: Array) -> np.ndarray:
        """Whether some w > 0 has |I - C J| w < w, for bounds ``change`` (..., m) of how far slopes move."""
        with np.errstate(all="ignore"):
            v = np.ones(change.shape)
            coupling = self.sense @ self.gains
            for _ in range(8):
                v = (change * v) @ coupling.T
                v = v / np.maximum(v.max(axis=-1, keepdims=True), 1e-300) + 1e-6
            w = (change * v) @ self.gains.T
            w = w + 1e-6 * w.max(axis=-1, keepdims=True) * self._floor + 1e-300
            image = w @ self.rest.T + (change * (w @ self.sense.T)) @ self.gains.T
            return np.asarray((image * (1 + 1e-9) < w).all(axis=-1))

    @property
    def _floor(self) -> Array:
        """A little of every unknown, in proportion to how it moves with the branches."""
        size = self.gains.max(axis=-1, initial=0.0)
        return np.where(size > 0, size / max(float(size.max(initial=0.0)), 1e-300), 1.0)


def verify(circuit: Dense, x: Array) -> Verified | None:
    """The proof that a solution lies near x (n,); None where it cannot be had."""
    at = Interval.point(x)
    u = matrix_times(circuit.b, at)
    middle = u.middle()
    slope = circuit.branches.value(middle)[1]
    a, b = circuit.a.middle(), circuit.b.middle()
    jac = circuit.g.middle() + (a * slope) @ b
    try:
        c: Array = np.asarray(np.linalg.inv(jac), dtype=float)
    except np.linalg.LinAlgError:
        return None
    if not np.isfinite(c).all():
        return None
    low, high = circuit.branches.bounds(u.low, u.high)
    f = matrix_times(circuit.g, at) + matrix_times(circuit.a, Interval(low, high)) - circuit.s
    size = np.maximum(product(c, Interval(f.low[:, None], f.high[:, None])).magnitude()[:, 0], 0.0)
    ca = product(c, circuit.a)
    rest = (Interval.point(np.eye(circuit.n)) - product(c, circuit.g) - _times_b(ca, slope, circuit.b)).magnitude()
    known = Verified(x, u, slope, rest, ca.magnitude(), circuit.b.magnitude())
    reach = (size @ known.sense.T) + 1e-15 * (1.0 + u.magnitude())
    for growth in _GROWTH:
        box = Interval.around(middle, growth * reach)
        least, most = circuit.branches.slope_bounds(box.low, box.high)
        change = np.maximum(np.abs(least - slope), np.abs(most - slope)) * (1 + 1e-12)
        w = size * 2.0 + (growth * reach * change) @ known.gains.T + 1e-18 * (1.0 + np.abs(x))
        moved = w @ known.sense.T
        if not (moved <= growth * reach).all():
            continue
        image = size + w @ rest.T + (change * moved) @ known.gains.T
        if (image * (1 + 1e-9) < w).all():
            inside = Interval.around(middle, moved)
            return Verified(x, inside, slope, rest, known.gains, known.sense)
    return None


def _times_b(ca: Interval, slope: Array, b: Interval) -> Interval:
    """(C A) diag(slope) B."""
    scaled = ca * Interval.point(slope)
    middle, radius = scaled.middle(), scaled.radius(scaled.middle())
    first = product(middle, b)
    spread = radius @ b.magnitude() * (1 + 1e-12)
    return Interval(first.low - spread, first.high + spread)
