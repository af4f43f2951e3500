"""The frame of an enclosure: a batch of boxes of values about solved centres, and everything linear about them.

See ``enclosure`` for the equations.  Here: the varying coefficients over the boxes, the residual at the centres, the
approximate inverse and its defect, and how controls, unknowns and outputs answer to the sources.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from netaudit.devices.base import Array
from netaudit.solve.interval import Interval, matrix_times, product, real_product
from netaudit.solve.system import Index, Numbers
from netaudit.solve.terms import values_of

if TYPE_CHECKING:
    from netaudit.solve.box import Boxes

EPS = 2.0**-52
TINY = 1e-250
#: roundings in one entry that a device stamps (a few operations, exp and log among them), relative
_STAMPED = 2.0**-46
#: by how much an enclosure grows before it is asked whether it maps into itself
_GROW = 0.1


class Frame:
    """One batch of boxes; see the module."""

    def __init__(
        self, boxes: Boxes, low: Array, high: Array, middle: Array, pins: Index, x0: Array, num: Numbers
    ) -> None:
        self.pins = pins
        self.boxes, self.system, self.t = boxes, boxes.system, boxes.terms
        self.count, self.x0, self.num = len(low), x0, num
        self._coefficients(low, high, middle)
        self._centre()
        self._matrices()

    def _coefficients(self, low: Array, high: Array, middle: Array) -> None:
        """The functions' deviations from the centre and the branch parameters at the vertices of each device's values."""
        v = np.arange(self.t.vertices)
        up = (v[:, None] >> self.t.pattern[None, :]) & 1
        rows = np.where(up[None] == 1, high[:, None, :], low[:, None, :])
        at = self.boxes.numbers(rows.reshape(-1, rows.shape[-1]))
        shape = (self.count, self.t.vertices)
        c = values_of(self.t, at).reshape(*shape, -1)
        slack = _STAMPED * np.abs(c).max(axis=1)
        self.c0 = values_of(self.t, self.num)
        self.c = Interval(c.min(axis=1) - slack, c.max(axis=1) + slack)
        self.delta = self.c - Interval.point(self.c0)
        self.vertex_parameters = [
            {p: a.reshape(*shape, -1) if a.ndim > 1 else a for p, a in parameters.items()}
            for _, _, parameters in at.branches.groups
        ]

    def _centre(self) -> None:
        system, num = self.system, self.num
        self.u0 = system.sense(num, self.x0)
        phi, self.slope0 = num.branches.value(self.u0)
        self.phi0 = Interval.point(phi)
        handle_terms = system.contributions(num, self.x0, phi)
        here = system.balance.spread(handle_terms)
        # u0 is rounded as well: what that does to the branches, taken as straight
        wide = system.sensing.spread(
            np.abs(num.sense * system.extended(self.x0)[..., system.position[system.b_column]])
        )
        turned = np.abs(num.inject) * (self.slope0 * wide)[..., system.a_branch]
        shape = (self.count, len(system.a_branch))
        size = np.abs(handle_terms)
        size[:, len(system.g_row) : len(system.g_row) + shape[1]] += np.broadcast_to(turned, shape)
        slack = system.balance.spread(size) * (64 + handle_terms.shape[-1]) * EPS + TINY
        self.here = Interval(here - slack, here + slack)
        rows = system.to_rows
        total = rows.spread(slack) + rows.spread(np.abs(here)) * 64 * EPS
        middle = rows.spread(here)
        self.f0 = Interval(middle - total, middle + total)

    def _matrices(self) -> None:
        """Y, its defect, the sources' columns on handles, and the outputs' rows on sources."""
        system, t, b = self.system, self.t, self.count
        jac = system.jacobian(self.num, self.slope0)
        self.y: Array = np.asarray(np.linalg.inv(jac), dtype=float)
        defect = Interval.point(np.eye(system.n)) - real_product(self.y, jac)
        sized = self._absolute()
        self.defect = defect.magnitude() + (np.abs(self.y) @ sized) * 64 * EPS
        handles = len(system.position)
        inject = np.zeros((b, handles, system.m))
        np.add.at(
            np.moveaxis(inject, 0, -1),
            (system.a_row, system.a_branch),
            np.broadcast_to(self.num.inject, (b, len(system.a_row))).T,
        )
        fixed = np.concatenate([t.g[1], t.s[1], t.inject[1]]).T
        columns = np.concatenate([np.broadcast_to(fixed, (b, *fixed.shape)), inject], axis=-1)
        on_rows = np.swapaxes(system.to_rows.spread(np.swapaxes(columns, -1, -2)), -1, -2)
        sums = np.swapaxes(system.to_rows.spread(np.swapaxes(np.abs(columns), -1, -2)), -1, -2)
        spread = real_product(self.y, on_rows) + around_zero(np.abs(self.y) @ sums * 64 * EPS)
        senses = np.zeros((b, system.m, system.n + 1))
        np.add.at(
            np.moveaxis(senses, 0, -1),
            (system.b_branch, system.position[system.b_column]),
            np.broadcast_to(self.num.sense, (b, len(system.b_branch))).T,
        )
        senses = senses[..., :-1]

        def wide(a: Array) -> Array:
            return np.broadcast_to(a, (b, *a.shape))

        controls = np.concatenate([wide(t.g[2]), wide(t.sense[1]), senses], axis=1)
        self.controls = controls
        self.unknown_rows = -spread
        self.control_rows = -product(controls, spread)
        self.columns = columns
        # the rounding of the residual at the centre: a first small step of everything
        self.first = -matrix_times(Interval.point(self.y), self.f0)
        self.control0 = dot(controls, self.x0) + matrix_times(Interval.point(controls), self.first)

    def _output_rows(self) -> None:
        """What the outputs are at the centre and how they answer to the sources."""
        boxes, pins, each = self.boxes, self.pins, np.arange(self.count)[:, None]
        volts, ground = boxes.against_first[pins], boxes.against_ground[pins]
        currents = self._handle_jacobian()[each, pins]
        spread = -self.unknown_rows
        current_rows = Interval.point(self.columns[each, pins]) - product(currents, spread)
        self.out_rows = stacked([-product(volts, spread), current_rows, -product(ground, spread)])
        self.out_matrix = np.concatenate([volts, currents, ground], axis=1)
        here = Interval(self.here.low[each, pins], self.here.high[each, pins])
        at = joined([dot(volts, self.x0), here, dot(ground, self.x0)])
        self.out0 = at + matrix_times(Interval.point(self.out_matrix), self.first)

    def _absolute(self) -> Array:
        """The sums of the absolute stamps of J0: what its rounding scales with."""
        system, num = self.system, self.num
        pairs = np.abs(
            num.inject[..., system.pair_a]
            * num.sense[..., system.pair_b]
            * self.slope0[..., system.a_branch[system.pair_a]]
        )
        g = np.broadcast_to(np.abs(num.g), (*pairs.shape[:-1], num.g.shape[-1]))
        entries = system.pattern.sums(np.concatenate([g, pairs], axis=-1))
        out = np.zeros((self.count, system.n * system.n))
        out[..., system.pattern_row * system.n + system.pattern_column] = entries
        return out.reshape(self.count, system.n, system.n)

    def _handle_jacobian(self) -> Array:
        """The rows of J0 of every handle by itself, (boxes, handles, n)."""
        system, num = self.system, self.num
        out = np.zeros((len(system.position), system.n + 1, self.count))
        np.add.at(
            out,
            (system.g_row, system.position[system.g_column]),
            np.broadcast_to(num.g, (self.count, len(system.g_row))).T,
        )
        pairs = (
            num.inject[..., system.pair_a]
            * num.sense[..., system.pair_b]
            * self.slope0[..., system.a_branch[system.pair_a]]
        )
        row, column = system.a_row[system.pair_a], system.position[system.b_column[system.pair_b]]
        np.add.at(out, (row, column), np.broadcast_to(pairs, (self.count, len(row))).T)
        return np.moveaxis(out, -1, 0)[..., :-1]


def dot(a: Array, x: Array) -> Interval:
    """a x for real matrices and vectors."""
    return matrix_times(Interval.point(a), Interval.point(x))


def around_zero(radius: Array) -> Interval:
    """[-radius, radius], grown by its own rounding."""
    radius = radius * (1 + 1e-9) + TINY
    return Interval(-radius, radius)


def grown(x: Interval) -> Interval:
    """Somewhat larger."""
    room = _GROW * (x.high - x.low) + 1e-14 * x.magnitude() + 1e-18
    return Interval(x.low - room, x.high + room)


def choose(first: np.ndarray, a: Interval, b: Interval) -> Interval:
    """The first where the mask holds, the second elsewhere."""
    return Interval(np.where(first[:, None], a.low, b.low), np.where(first[:, None], a.high, b.high))


def joined(parts: Sequence[Interval]) -> Interval:
    """Side by side along the last axis."""
    return Interval(np.concatenate([p.low for p in parts], axis=-1), np.concatenate([p.high for p in parts], axis=-1))


def stacked(parts: Sequence[Interval]) -> Interval:
    """One after the other along the second axis."""
    return Interval(np.concatenate([p.low for p in parts], axis=1), np.concatenate([p.high for p in parts], axis=1))


def summed(x: Interval, index: Index, size: int) -> Interval:
    """Sums of the entries that share an index."""
    out = Interval.point(np.zeros((len(x.low), size)))
    for k, i in enumerate(index):
        low, high = out.low.copy(), out.high.copy()
        total = out[:, int(i)] + x[:, k]
        low[:, int(i)], high[:, int(i)] = total.low, total.high
        out = Interval(low, high)
    return out


def everything(shape: tuple[int, ...]) -> Interval:
    """Nothing is known."""
    return Interval(np.full(shape, -np.inf), np.full(shape, np.inf))
