"""Enclosures over a whole box of values: of the operating point, of what can be measured on it, and of its derivatives.

With x0 solved at the box's centre and J0 the Jacobian there, every solution at any values of the box satisfies

    x - x0 = -Y F0 - Y Q q(x, c) + (I - Y J0)(x - x0)

Y an approximate inverse of J0, F0 the residual of x0, and q the sources that the varying terms and the bent branches put
in: (c_j - c_j0) w_t(x) of a conductance, c_j0 - c_j of a source, phi_k(u) - phi_k0 - phi'_k0 (u - u_k0) of a branch, each
with its column in Q.  An interval vector that this map takes into its own interior contains a solution for every value of
the box (Krawczyk, Computing 4, 187-201, 1969; Moore, SIAM J. Numer. Anal. 14, 611-615, 1977).  The derivative with respect
to a value obeys the linear equation of the same form; where a positive vector v with |Z| |kappa| v < v is found, the
Jacobian is regular all over the box and in it the solution is the only one.  Everything measured is y = y0 + R q with R
worked out before it meets an interval, so that differences of voltages stay sharp.  Rounded outwards throughout.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from netaudit.devices.base import Array
from netaudit.devices.families import Exponential, Ramp, Square
from netaudit.solve.interval import Interval, matrix_times, product, products, real_product
from netaudit.solve.sensitivity import Variable, assign, moved
from netaudit.solve.settle import Job, Solver
from netaudit.solve.solved import Solved
from netaudit.solve.structure import structure
from netaudit.solve.system import Index, Numbers
from netaudit.solve.terms import Terms, terms, values_of

_EPS = 2.0**-52
_TINY = 1e-250
#: roundings in one entry that a device stamps (a few operations, exp and log among them), relative
_STAMPED = 2.0**-46
_ROUNDS, _SHARPER, _GROW = 10, 2, 0.1
#: halvings of a box that cannot be enclosed as a whole, and boxes enclosed at once
_DEPTH, _AT_ONCE = 2, 64
#: families that lie above their tangents, and halvings on the way to where a curve is met
_CONVEX, _HALVINGS = (Exponential, Ramp, Square), 10


@dataclass(frozen=True)
class Outputs:
    """Enclosures over a batch of boxes: ``value`` (boxes, outputs) and ``slope`` (boxes, outputs, variables) with respect
    to each variable's representative; ``reach`` (boxes, variables) of the representatives about the centre; ``centre``
    (boxes, outputs) at the centre; ``control`` (boxes, controls) of the operating point, ``control0`` at the centre;
    ``good``: boxes for which the enclosure was found.  Outputs of ``pins`` (boxes, any) in order: the voltage of each
    against the first pin of its device, then the current into each, then the voltage of each against the reference.
    """

    value: Interval
    slope: Interval
    reach: Interval
    centre: Interval
    control: Interval
    control0: Interval
    good: np.ndarray
    pins: Index

    def pick(self, box: int) -> Outputs:
        """One box as a batch of one."""
        one = slice(box, box + 1)
        return Outputs(
            self.value[one], self.slope[one], self.reach[one], self.centre[one], self.control[one], self.control0[one],
            self.good[one], self.pins[one],
        )  # fmt: skip


class Boxes:
    """A system whose values vary over ``spans``, about one operating point (a batch of one).

    Raises Unsupported (``terms``) where no bounds are known.
    """

    def __init__(self, solver: Solver, nominal: Solved, spans: Sequence[Variable]) -> None:
        # non-decreasing branches: the operating points form a convex set, so that a regular one is the only one
        self._unique = structure(solver.system).monotone
        self._home: Interval | None = None
        self.solver, self.system, self.nominal = solver, solver.system, nominal
        self.spans = tuple(spans)
        self.terms: Terms = terms(solver, nominal, spans)
        system = self.system
        pins = len(system.pins)
        first = np.array([system.pin_numbers[k][next(iter(system.devices[k].pins))] for k, _ in system.pins], dtype=int)
        unit = np.zeros((pins, system.n + 1))
        unit[np.arange(pins), system.position[:pins]] = 1.0
        unit = unit[:, :-1] if system.n else unit[:, :0]
        self._against_first = unit - unit[first] if pins else unit
        self._against_ground = unit

    def enclose(self, low: Array, high: Array, pins: Index, depth: int = 0) -> Outputs:
        """The outputs of some ``pins`` (batch, any) for boxes (batch, variables), each taken in 2^depth parts; those that fail as a whole are taken in halves,
        quarters and so on."""
        found = self._whole(low, high, pins)
        if self._home is None and not self._unique:
            # the first box must hold all others: only in it the operating point is known to be one
            if len(low) != 1 or not found.good[0]:
                return replace(found, good=np.zeros(len(low), dtype=bool))
            self._home = found.control
        if not self._unique:
            assert self._home is not None
            return replace(found, good=found.good & found.control0.within(self._home).all(axis=-1))
        if depth:
            self._split(found, low, high, depth, np.arange(len(low)))
        for further in range(max(depth, 1), _DEPTH + 1):
            failed = np.flatnonzero(~found.good)
            if not len(failed):
                break
            self._split(found, low[failed], high[failed], further, failed)
        return found

    def _whole(self, low: Array, high: Array, pins: Index) -> Outputs:
        middle = low + 0.5 * (high - low)
        centre = self._solve(middle)
        if centre is None:
            return self._nothing(pins)
        try:
            with np.errstate(all="ignore"):
                return _Run(self, low, high, middle, pins, *centre).outputs()
        except np.linalg.LinAlgError:
            return self._nothing(pins)

    def _split(self, found: Outputs, low: Array, high: Array, depth: int, where: Index) -> None:
        """Encloses some boxes in 2^depth parts each, along the values that move the branches most, and puts the hull of
        the parts into ``found``."""
        parts, pins = 2**depth, np.repeat(found.pins[where], 2**depth, axis=0)
        lows, highs = np.repeat(low, parts, axis=0), np.repeat(high, parts, axis=0)
        row, share = np.arange(len(lows)), np.where(highs > lows, self._influence, 0.0)
        for d in range(depth):
            column = np.argmax(share, axis=-1)
            share[row, column] *= 0.5
            upper = ((row >> d) & 1) == 1
            middle = lows[row, column] + 0.5 * (highs[row, column] - lows[row, column])
            lows[row, column] = np.where(upper, middle, lows[row, column])
            highs[row, column] = np.where(upper, highs[row, column], middle)
        one = _together(
            [
                self._whole(lows[k : k + _AT_ONCE], highs[k : k + _AT_ONCE], pins[k : k + _AT_ONCE])
                for k in range(0, len(lows), _AT_ONCE)
            ]
        )
        good = one.good.reshape(-1, parts).all(axis=1)
        for mine, theirs in ((found.value, one.value), (found.slope, one.slope)):
            shape = (-1, parts, *theirs.shape[1:])
            mine.low[where[good]] = theirs.low.reshape(shape).min(axis=1)[good]
            mine.high[where[good]] = theirs.high.reshape(shape).max(axis=1)[good]
        found.good[where[good]] = True

    @cached_property
    def _influence(self) -> Array:
        """How much each value moves the branches in thermal voltages over its span, at the nominal point."""
        system, start = self.system, self.nominal
        rows = np.array([[v.quantity.nominal for v in self.spans]])
        near = moved(self.solver, start, self.spans, rows, list(range(len(self.spans))))
        return np.asarray(np.abs(near.u - start.u).sum(axis=-1)) if system.m else np.ones(len(self.spans))

    def numbers(self, rows: Array) -> Numbers:
        """The numbers of rows of values (rows, variables)."""
        overrides, air = assign(self.spans, rows, float(np.asarray(self.nominal.ambient).reshape(-1)[0]))
        temperature = np.repeat(self.nominal.temperature, len(rows), axis=0)
        return self.system.numbers(overrides, temperature, air, (len(rows),))

    def _solve(self, rows: Array) -> tuple[Array, Numbers] | None:
        """x and numbers at the rows; None where one is not found."""
        overrides, air = assign(self.spans, rows, self.system.circuit.ambient.nominal)
        start, count = self.nominal, len(rows)
        air = np.broadcast_to(np.asarray(air, dtype=float), (count,))
        temperature = np.repeat(start.temperature, count, axis=0)
        settled = self.solver.settle(Job(overrides, air, count, np.repeat(start.u, count, axis=0), temperature), False)
        if not settled.converged.all():
            return None
        return settled.solved.x, self.numbers(rows)

    def _nothing(self, pins: Index) -> Outputs:
        count, ny, width = len(pins), 3 * pins.shape[1], len(self.spans)
        nc = len(self.terms.g[0]) + len(self.terms.sense[0]) + self.system.m
        out, control = _everything((count, ny)), _everything((count, nc))
        slope, reach = _everything((count, ny, width)), _everything((count, width))
        return Outputs(out, slope, reach, out, control, control, np.zeros(count, dtype=bool), pins)


class _Run:
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
        slack = system.balance.spread(size) * (64 + handle_terms.shape[-1]) * _EPS + _TINY
        self.here = Interval(here - slack, here + slack)
        rows = system.to_rows
        total = rows.spread(slack) + rows.spread(np.abs(here)) * 64 * _EPS
        middle = rows.spread(here)
        self.f0 = Interval(middle - total, middle + total)

    def _matrices(self) -> None:
        """Y, its defect, the sources' columns on handles, and the outputs' rows on sources."""
        system, t, b = self.system, self.t, self.count
        jac = system.jacobian(self.num, self.slope0)
        self.y: Array = np.asarray(np.linalg.inv(jac), dtype=float)
        defect = Interval.point(np.eye(system.n)) - real_product(self.y, jac)
        sized = self._absolute()
        self.defect = defect.magnitude() + (np.abs(self.y) @ sized) * 64 * _EPS
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
        spread = real_product(self.y, on_rows) + _sym(np.abs(self.y) @ sums * 64 * _EPS)
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
        self.control0 = _dot(controls, self.x0) + matrix_times(Interval.point(controls), self.first)

    def _output_rows(self) -> None:
        """What the outputs are at the centre and how they answer to the sources."""
        boxes, pins, each = self.boxes, self.pins, np.arange(self.count)[:, None]
        volts, ground = boxes._against_first[pins], boxes._against_ground[pins]
        currents = self._handle_jacobian()[each, pins]
        spread = -self.unknown_rows
        current_rows = Interval.point(self.columns[each, pins]) - product(currents, spread)
        self.out_rows = _stacked([-product(volts, spread), current_rows, -product(ground, spread)])
        self.out_matrix = np.concatenate([volts, currents, ground], axis=1)
        here = Interval(self.here.low[each, pins], self.here.high[each, pins])
        at = _joined([_dot(volts, self.x0), here, _dot(ground, self.x0)])
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

    # -- values

    def outputs(self) -> Outputs:
        found = self._values()
        self._output_rows()
        if found is None:
            return replace(self.boxes._nothing(self.pins), reach=self._reach(), centre=self.out0)
        good, source, far = found
        value = self.out0 + matrix_times(self.out_rows, source)
        extra = np.abs(self.out_matrix) @ (self.defect @ far[..., None])
        value = value + _sym(extra[..., 0] + self._own(far))
        slope, regular = self._slopes()
        good = good & regular & np.isfinite(value.low).all(axis=-1) & np.isfinite(value.high).all(axis=-1)
        reach = self._reach()
        return Outputs(value, slope, reach, self.out0, self.control, self.control0, good, self.pins)

    def _reach(self) -> Interval:
        """How far each variable's representative goes from the centre; nothing where it has none."""
        lead = np.array([int(np.flatnonzero(r)[0]) if r.any() else -1 for r in self.t.ratio], dtype=int)
        none = Interval.point(np.zeros((self.count, 1)))
        return _joined([self.delta, none])[:, lead]

    def _own(self, far: Array) -> Array:
        """The rounding of the outputs' own rows times how far x moves."""
        return np.asarray((np.abs(self.out_matrix) @ far[..., None])[..., 0] * 64 * _EPS)

    def _values(self) -> tuple[np.ndarray, Interval, Array] | None:
        """Verified boxes, the enclosed sources, and how far each unknown moves; leaves the controls in ``control``."""
        control, good = self.control0, np.zeros(self.count, dtype=bool)
        for _ in range(_ROUNDS):
            tried = _pick(good, control, _grown(control))
            fresh, _, _, consistent = self._map(tried)
            inside = consistent & fresh.within(tried).all(axis=-1)
            if not (good | inside).all():
                fresh = self._along_curves(fresh, tried)
                inside = consistent & fresh.within(tried).all(axis=-1)
            control = _pick(good, control.meet(fresh), fresh)
            good = good | inside
            if good.all():
                break
        if not good.any():
            return None
        # from here on chords instead of tangents: half the distance of the slopes to both sides
        self._sources(control)
        self.slope0 = np.where(good[:, None], self.slope.middle(), self.slope0)
        self._matrices()
        for turn in range(_SHARPER):
            fresh = self._map(control)[0]
            if turn == 0:
                fresh = fresh.meet(self._along_curves(fresh, control))
            control = _pick(good, control.meet(fresh), control)
        self.control = control
        _, source, far, _ = self._map(control)
        return good, source, far

    def _map(self, control: Interval) -> tuple[Interval, Interval, Array, np.ndarray]:
        """What the equation makes of enclosed controls: controls, sources, how far x moves, whether that is consistent
        with the defect of Y."""
        source = self._sources(control)
        size = matrix_times(self.unknown_rows, source).magnitude() + self.first.magnitude()
        far = 1.01 * size + 2.0 * self._defect(size) + _TINY
        rest = self._defect(far)
        consistent = np.asarray((size + rest <= far).all(axis=-1))
        self.source, self.strayed = source, _sym((np.abs(self.controls) @ rest[..., None])[..., 0])
        fresh = self.control0 + matrix_times(self.control_rows, source) + self.strayed
        return fresh, source, far, consistent

    def _along_curves(self, fresh: Interval, tried: Interval) -> Interval:
        """The branches' controls where each meets its own curve, instead of the straight line in its place.

        With everything else enclosed in L, u + z r(u) lies in L, z > 0 the resistance that the branch sees and r what
        bends: a rising function of u whose ends are found by halving.  Where that does not hold, or the curve is not met
        near by, ``fresh`` stays.
        """
        t, m = self.t, self.system.m
        first = len(t.g[0]) + len(t.sense[0])
        if len(t.sense[0]) or not m or not all(isinstance(f, _CONVEX) for f, _, _ in self.num.branches.groups):
            return fresh
        own = len(t.g[0]) + len(t.s[0]) + len(t.inject[0]) + np.arange(m)
        here = first + np.arange(m)
        z = -self.control_rows[:, here, own]
        source = self.source
        without = Interval(self.control_rows.low[:, first:].copy(), self.control_rows.high[:, first:].copy())
        without.low[:, np.arange(m), own] = 0.0
        without.high[:, np.arange(m), own] = 0.0
        line = self.control0[:, first:] + matrix_times(without, source) + self.strayed[:, first:]
        usable = (z.low > 0) & (z.high * self.slope0 < 1.0)
        room = tried.high[:, first:] - tried.low[:, first:]
        start, end = tried.low[:, first:] - room, tried.high[:, first:] + room
        low, high = self._meeting(z, line, start, end)
        out = Interval(fresh.low.copy(), fresh.high.copy())
        out.low[:, first:] = np.where(usable & np.isfinite(low), low, fresh.low[:, first:])
        out.high[:, first:] = np.where(usable & np.isfinite(high), high, fresh.high[:, first:])
        return out

    def _meeting(self, z: Interval, line: Interval, start: Array, end: Array) -> tuple[Array, Array]:
        """The largest u known to lie below all solutions of u + z r(u) in ``line`` and the smallest above, between start
        and end; not finite where there is none."""

        def ends(u: Array) -> Interval:
            return Interval.point(u) + z * self._bend_at(u)

        below, above = ends(start).high < line.low, ends(end).low > line.high
        low, stop = start.copy(), end.copy()
        high, begin = end.copy(), start.copy()
        for _ in range(_HALVINGS):
            middle = 0.5 * (low + stop)
            out = ends(middle).high < line.low
            low, stop = np.where(out, middle, low), np.where(out, stop, middle)
            middle = 0.5 * (high + begin)
            out = ends(middle).low > line.high
            high, begin = np.where(out, middle, high), np.where(out, begin, middle)
        return np.where(below, low, -np.inf), np.where(above, high, np.inf)

    def _bend_at(self, u: Array) -> Interval:
        """phi(u) - phi0 - slope0 (u - u0) at points u, over all parameters."""
        low, high = np.zeros(u.shape), np.zeros(u.shape)
        for (family, index, _), p in zip(self.num.branches.groups, self.vertex_parameters, strict=True):
            at = u[:, None, index]
            a, b = family.bounds(at, at, p)
            low[:, index], high[:, index] = a.min(axis=1), b.max(axis=1)
        line = Interval.point(self.slope0) * (Interval.point(u) - Interval.point(self.u0))
        return Interval(low, high) - self.phi0 - line

    def _defect(self, far: Array) -> Array:
        return np.asarray((self.defect @ far[..., None])[..., 0])

    def _branch_values(self, control: Interval) -> tuple[Interval, Interval]:
        """u of every branch, and what the varying senses add to B0 x."""
        ng, ne = len(self.t.g[0]), len(self.t.sense[0])
        base = control[:, ng + ne :]
        if not ne:
            return base, Interval.point(np.zeros(base.shape))
        add = self.delta[:, self.t.sense[0]] * control[:, ng : ng + ne]
        extra = _summed(add, self.t.sense[2], self.system.m)
        return base + extra, extra

    def _sources(self, control: Interval) -> Interval:
        """q over the enclosed controls, in the order of the columns."""
        t, d = self.t, self.delta
        u, extra = self._branch_values(control)
        self.u = u
        self.phi, self.slope = self._ranges(u)
        conductances = d[:, t.g[0]] * control[:, : len(t.g[0])]
        sources = -d[:, t.s[0]]
        injected = d[:, t.inject[0]] * self.phi[:, t.inject[2]]
        bent = self._bent(u) + extra * Interval.point(self.slope0)
        return _joined([conductances, sources, injected, bent])

    def _ranges(self, u: Interval) -> tuple[Interval, Interval]:
        """phi and its slope over u and all parameters of the box."""
        shape = (self.count, self.system.m)
        out = [np.zeros(shape) for _ in range(4)]
        for (family, index, _), p in zip(self.num.branches.groups, self.vertex_parameters, strict=True):
            low, high = u.low[:, None, index], u.high[:, None, index]
            for pair, (a, b) in zip(
                (out[:2], out[2:]), (family.bounds(low, high, p), family.slope_bounds(low, high, p)), strict=True
            ):
                pair[0][:, index], pair[1][:, index] = a.min(axis=1), b.max(axis=1)
        return Interval(out[0], out[1]), Interval(out[2], out[3])

    def _bent(self, u: Interval) -> Interval:
        """phi(u) - phi0 - slope0 (u - u0) over u and all parameters."""
        low, high = np.zeros(u.shape), np.zeros(u.shape)
        for (family, index, _), p in zip(self.num.branches.groups, self.vertex_parameters, strict=True):
            u0, s0 = Interval.point(self.u0[:, None, index]), Interval.point(self.slope0[:, None, index])
            phi0 = self.phi0[:, index][:, None]
            start = Interval(*family.bounds(u0.low, u0.low, p)) - phi0
            steep = Interval(*family.slope_bounds(u0.low, u0.low, p)) - s0
            if not isinstance(family, _CONVEX):
                over = u[:, index][:, None]
                whole = start + (Interval(*family.slope_bounds(over.low, over.high, p)) - s0) * (over - u0)
                lo, hi = whole.low, whole.high
            else:
                los, his = [], []
                for end in (u.low[:, None, index], u.high[:, None, index]):
                    away = Interval.point(end) - u0
                    his.append((Interval(*family.bounds(end, end, p)) - phi0 - s0 * away).high)
                    # convex: above its tangent at the centre
                    los.append((start + steep * away).low)
                lo, hi = np.minimum(*los), np.maximum(*his)
            low[:, index], high[:, index] = lo.min(axis=1), hi.max(axis=1)
        return Interval(low, high)

    # -- derivatives

    def _slopes(self) -> tuple[Interval, np.ndarray]:
        kappa = self._kappa()
        explicit = self._explicit()
        base = products(self.control_rows, explicit)
        reach = self.control_rows.magnitude() @ kappa.magnitude()
        unknown = self.unknown_rows.magnitude()
        far_base = (unknown @ explicit.magnitude()) * (1 + 1e-9) + _TINY
        near = np.abs(self.controls)
        v, good = self._positive(reach, base.magnitude(), unknown @ kappa.magnitude(), far_base, near)
        far = (far_base + (unknown @ kappa.magnitude()) @ v) * (1 + 1e-6)
        rest = self.defect @ (2.0 * far)
        inner = Interval(-v, v)
        for _ in range(3):
            inner = inner.meet(base + products(self.control_rows, products(kappa, inner)) + _sym(near @ rest))
        total = explicit + products(kappa, inner)
        out = products(self.out_rows, total) + _sym(np.abs(self.out_matrix) @ (rest + far * 64 * _EPS))
        return out, good & np.isfinite(out.low).all(axis=(1, 2)) & np.isfinite(out.high).all(axis=(1, 2))

    def _positive(
        self, reach: Array, size: Array, moved: Array, far_base: Array, near: Array
    ) -> tuple[Array, np.ndarray]:
        """v > 0 with size + reach v + the defect's share < v, which bounds the derivatives of the controls."""
        eye = np.eye(reach.shape[-1])
        floor = 1e-30 + 1e-6 * size.max(axis=1, keepdims=True, initial=0.0)
        try:
            v = np.linalg.solve(eye - reach, size + floor) * 1.001
        except np.linalg.LinAlgError:
            v = np.full(size.shape, np.nan)
        far = (far_base + moved @ v) * (1 + 1e-6)
        rest = self.defect @ far
        # the defect's own series: once more must be negligible
        small = np.asarray((self.defect @ rest <= 0.25 * rest + _TINY).all(axis=(1, 2)))
        holds = (size + reach @ v) * (1 + 1e-12) + near @ (2.0 * rest) < v
        good = holds.all(axis=(1, 2)) & (v > 0).all(axis=(1, 2)) & small & np.isfinite(v).all(axis=(1, 2))
        return np.where(good[:, None, None], v, np.inf), np.asarray(good)

    def _kappa(self) -> Interval:
        """How each source answers to each control at fixed values, (boxes, sources, controls)."""
        t, m = self.t, self.system.m
        ng, ns, ni, ne = len(t.g[0]), len(t.s[0]), len(t.inject[0]), len(t.sense[0])
        low = np.zeros((self.count, ng + ns + ni + m, ng + ne + m))
        high = low.copy()

        def put(rows: Index, columns: Index, part: Interval) -> None:
            low[:, rows, columns], high[:, rows, columns] = part.low, part.high

        k, j = np.arange(ng), np.arange(m)
        put(k, k, self.delta[:, t.g[0]])
        put(ng + ns + ni + j, ng + ne + j, self.slope - Interval.point(self.slope0))
        d = self.delta
        i = np.arange(ni)
        put(ng + ns + i, ng + ne + t.inject[2], d[:, t.inject[0]] * self.slope[:, t.inject[2]])
        for e in range(ne):
            b = int(t.sense[2][e])
            part = d[:, [int(t.sense[0][e])]] * self.slope[:, [b]]
            put(np.array([ng + ns + ni + b]), np.array([ng + e]), part)
            for one in np.flatnonzero(t.inject[2] == b):
                put(np.array([ng + ns + int(one)]), np.array([ng + e]), d[:, [int(t.inject[0][one])]] * part)
        return Interval(low, high)

    def _explicit(self) -> Interval:
        """How each source answers to each variable's representative at fixed x, (boxes, sources, variables)."""
        t, m = self.t, self.system.m
        ng, ns, ni, ne = len(t.g[0]), len(t.s[0]), len(t.inject[0]), len(t.sense[0])
        # by function first
        width = len(t.entry)
        low = np.zeros((self.count, ng + ns + ni + m, width))
        high = low.copy()

        def add(row: int, function: int, part: Interval) -> None:
            total = Interval(low[:, row, function], high[:, row, function]) + part
            low[:, row, function], high[:, row, function] = total.low, total.high

        for k in range(ng):
            add(k, int(t.g[0][k]), self.control[:, k])
        one = Interval.point(np.ones(self.count))
        for k in range(ns):
            add(ng + k, int(t.s[0][k]), -one)
        for k in range(ni):
            add(ng + ns + k, int(t.inject[0][k]), self.phi[:, int(t.inject[2][k])])
        for k in range(ne):
            b = int(t.sense[2][k])
            part = self.slope[:, b] * self.control[:, ng + k]
            add(ng + ns + ni + b, int(t.sense[0][k]), part)
            for i in np.flatnonzero(t.inject[2] == b):
                add(ng + ns + int(i), int(t.sense[0][k]), self.delta[:, int(t.inject[0][i])] * part)
        for function, b, name in t.parameter:
            part = self._by_parameter(b, name)
            add(ng + ns + ni + b, function, part)
            for i in np.flatnonzero(t.inject[2] == b):
                add(ng + ns + int(i), function, self.delta[:, int(t.inject[0][i])] * part)
        return products(
            Interval(low, high), Interval.point(np.broadcast_to(t.ratio.T, (self.count, width, len(t.ratio))))
        )

    def _by_parameter(self, branch: int, name: str) -> Interval:
        """The derivative of a branch's value by one of its parameters at fixed u."""
        phi, slope = self.phi[:, branch], self.slope[:, branch]
        if name == "offset":
            return -slope
        if name == "R":
            return -(phi * slope)
        if name == "log_I":
            for (_, index, _), p in zip(self.num.branches.groups, self.vertex_parameters, strict=True):
                at = np.flatnonzero(index == branch)
                if len(at):
                    r = np.broadcast_to(p["R"], (self.count, self.t.vertices, len(index)))[:, :, int(at[0])]
                    share = Interval.point(np.ones(self.count)) - Interval(r.min(axis=1), r.max(axis=1)) * slope
                    # i (1 - R di/du) = i V / (V + R g): between 0 and i
                    share = share.meet(Interval(np.zeros(self.count), np.ones(self.count)))
                    return phi * share
        return _everything((self.count,))


def _together(parts: Sequence[Outputs]) -> Outputs:
    """Batches one after the other as one."""

    def whole(name: str) -> Interval:
        some = [getattr(p, name) for p in parts]
        return Interval(np.concatenate([i.low for i in some]), np.concatenate([i.high for i in some]))

    good = np.concatenate([p.good for p in parts])
    pins = np.concatenate([p.pins for p in parts])
    value, slope, reach = whole("value"), whole("slope"), whole("reach")
    return Outputs(value, slope, reach, whole("centre"), whole("control"), whole("control0"), good, pins)


def _dot(a: Array, x: Array) -> Interval:
    """a x for real matrices and vectors."""
    return matrix_times(Interval.point(a), Interval.point(x))


def _sym(radius: Array) -> Interval:
    radius = radius * (1 + 1e-9) + _TINY
    return Interval(-radius, radius)


def _grown(x: Interval) -> Interval:
    room = _GROW * (x.high - x.low) + 1e-14 * x.magnitude() + 1e-18
    return Interval(x.low - room, x.high + room)


def _pick(first: np.ndarray, a: Interval, b: Interval) -> Interval:
    return Interval(np.where(first[:, None], a.low, b.low), np.where(first[:, None], a.high, b.high))


def _joined(parts: Sequence[Interval]) -> Interval:
    return Interval(np.concatenate([p.low for p in parts], axis=-1), np.concatenate([p.high for p in parts], axis=-1))


def _stacked(parts: Sequence[Interval]) -> Interval:
    return Interval(np.concatenate([p.low for p in parts], axis=1), np.concatenate([p.high for p in parts], axis=1))


def _summed(x: Interval, index: Index, size: int) -> Interval:
    """Sums of the entries that share an index."""
    out = Interval.point(np.zeros((len(x.low), size)))
    for k, i in enumerate(index):
        low, high = out.low.copy(), out.high.copy()
        total = out[:, int(i)] + x[:, k]
        low[:, int(i)], high[:, int(i)] = total.low, total.high
        out = Interval(low, high)
    return out


def _everything(shape: tuple[int, ...]) -> Interval:
    return Interval(np.full(shape, -np.inf), np.full(shape, np.inf))
