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

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array
from netaudit.devices.families import Exponential, Ramp, Square
from netaudit.solve.frame import EPS, TINY, Frame, around_zero, choose, everything, grown, joined, summed
from netaudit.solve.interval import Interval, matrix_times, products
from netaudit.solve.system import Index

#: rounds in which an enclosure is looked for, and rounds that make it tighter
_ROUNDS, _SHARPER = 10, 2
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


class Enclosure(Frame):
    """One batch of boxes with what is enclosed over them: first the values, then the derivatives."""

    def outputs(self) -> Outputs:
        found = self._values()
        self._output_rows()
        if found is None:
            return replace(self.boxes.nothing(self.pins), reach=self._reach(), centre=self.out0)
        good, source, far = found
        value = self.out0 + matrix_times(self.out_rows, source)
        extra = np.abs(self.out_matrix) @ (self.defect @ far[..., None])
        value = value + around_zero(extra[..., 0] + self._own(far))
        slope, regular = self._slopes()
        good = good & regular & np.isfinite(value.low).all(axis=-1) & np.isfinite(value.high).all(axis=-1)
        reach = self._reach()
        return Outputs(value, slope, reach, self.out0, self.control, self.control0, good, self.pins)

    def _reach(self) -> Interval:
        """How far each variable's representative goes from the centre; nothing where it has none."""
        lead = np.array([int(np.flatnonzero(r)[0]) if r.any() else -1 for r in self.t.ratio], dtype=int)
        none = Interval.point(np.zeros((self.count, 1)))
        return joined([self.delta, none])[:, lead]

    def _own(self, far: Array) -> Array:
        """The rounding of the outputs' own rows times how far x moves."""
        return np.asarray((np.abs(self.out_matrix) @ far[..., None])[..., 0] * 64 * EPS)

    def _values(self) -> tuple[np.ndarray, Interval, Array] | None:
        """Verified boxes, the enclosed sources, and how far each unknown moves; leaves the controls in ``control``."""
        control, good = self.control0, np.zeros(self.count, dtype=bool)
        for _ in range(_ROUNDS):
            tried = choose(good, control, grown(control))
            fresh, _, _, consistent = self._map(tried)
            inside = consistent & fresh.within(tried).all(axis=-1)
            if not (good | inside).all():
                fresh = self._along_curves(fresh, tried)
                inside = consistent & fresh.within(tried).all(axis=-1)
            control = choose(good, control.meet(fresh), fresh)
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
            control = choose(good, control.meet(fresh), control)
        self.control = control
        _, source, far, _ = self._map(control)
        return good, source, far

    def _map(self, control: Interval) -> tuple[Interval, Interval, Array, np.ndarray]:
        """What the equation makes of enclosed controls: controls, sources, how far x moves, whether that is consistent
        with the defect of Y."""
        source = self._sources(control)
        size = matrix_times(self.unknown_rows, source).magnitude() + self.first.magnitude()
        far = 1.01 * size + 2.0 * self._defect(size) + TINY
        rest = self._defect(far)
        consistent = np.asarray((size + rest <= far).all(axis=-1))
        self.source, self.strayed = source, around_zero((np.abs(self.controls) @ rest[..., None])[..., 0])
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
        extra = summed(add, self.t.sense[2], self.system.m)
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
        return joined([conductances, sources, injected, bent])

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

    def _slopes(self) -> tuple[Interval, np.ndarray]:
        kappa = self._kappa()
        explicit = self._explicit()
        base = products(self.control_rows, explicit)
        reach = self.control_rows.magnitude() @ kappa.magnitude()
        unknown = self.unknown_rows.magnitude()
        far_base = (unknown @ explicit.magnitude()) * (1 + 1e-9) + TINY
        near = np.abs(self.controls)
        v, good = self._positive(reach, base.magnitude(), unknown @ kappa.magnitude(), far_base, near)
        far = (far_base + (unknown @ kappa.magnitude()) @ v) * (1 + 1e-6)
        rest = self.defect @ (2.0 * far)
        inner = Interval(-v, v)
        for _ in range(3):
            inner = inner.meet(base + products(self.control_rows, products(kappa, inner)) + around_zero(near @ rest))
        total = explicit + products(kappa, inner)
        out = products(self.out_rows, total) + around_zero(np.abs(self.out_matrix) @ (rest + far * 64 * EPS))
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
        small = np.asarray((self.defect @ rest <= 0.25 * rest + TINY).all(axis=(1, 2)))
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
        return everything((self.count,))
