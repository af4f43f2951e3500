"""Boxes of values about one operating point: enclosed as a whole or in parts (see ``enclosure``)."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from functools import cached_property

import numpy as np

from netaudit.devices.base import Array
from netaudit.solve.enclosure import Enclosure, Outputs
from netaudit.solve.frame import everything
from netaudit.solve.interval import Interval
from netaudit.solve.sensitivity import Variable, assign, moved
from netaudit.solve.settle import Job, Solver
from netaudit.solve.solved import Solved
from netaudit.solve.structure import structure
from netaudit.solve.system import Index, Numbers
from netaudit.solve.terms import Terms, terms

#: halvings of a box that cannot be enclosed as a whole, and boxes enclosed at once
_DEPTH, _AT_ONCE = 2, 64


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
        self.against_first = unit - unit[first] if pins else unit
        self.against_ground = unit

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
            return self.nothing(pins)
        try:
            with np.errstate(all="ignore"):
                return Enclosure(self, low, high, middle, pins, *centre).outputs()
        except np.linalg.LinAlgError:
            return self.nothing(pins)

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
        near = moved(self.solver, start, self.spans, rows, np.eye(len(self.spans), dtype=bool))
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

    def nothing(self, pins: Index) -> Outputs:
        """The outputs of boxes of which nothing is known."""
        count, ny, width = len(pins), 3 * pins.shape[1], len(self.spans)
        nc = len(self.terms.g[0]) + len(self.terms.sense[0]) + self.system.m
        out, control = everything((count, ny)), everything((count, nc))
        slope, reach = everything((count, ny, width)), everything((count, width))
        return Outputs(out, slope, reach, out, control, control, np.zeros(count, dtype=bool), pins)


def _together(parts: Sequence[Outputs]) -> Outputs:
    """Batches one after the other as one."""

    def whole(name: str) -> Interval:
        some = [getattr(p, name) for p in parts]
        return Interval(np.concatenate([i.low for i in some]), np.concatenate([i.high for i in some]))

    good = np.concatenate([p.good for p in parts])
    pins = np.concatenate([p.pins for p in parts])
    value, slope, reach = whole("value"), whole("slope"), whole("reach")
    return Outputs(value, slope, reach, whole("centre"), whole("control"), whole("control0"), good, pins)
