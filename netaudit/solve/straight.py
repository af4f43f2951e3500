"""Elimination as a straight-line program: the order worked out once on one board, then run across a whole batch.

Markowitz's rule (Management Science 3(3) 255-269, 1957) with threshold pivoting picks the order on the numbers of one
solved board.  The program then consists of array operations of the batch's length on the nonzeros alone, which for
board-like matrices is a small fraction of a dense factorisation.  Members for which that order is numerically poor show
a residual and are solved again with dense LAPACK.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Array
from netaudit.solve.linear import Dense
from netaudit.solve.system import Index, Numbers, System

_THRESHOLD = 0.05
#: members taken at a time, so that all nonzeros of a slice stay in the cache
_SLICE = 512


@dataclass(frozen=True)
class Step:
    """One pivot: its slot, row and column; slots of the rows to be reduced with the slots they touch; and the slots and
    columns of the pivot row's rest (for the back substitution)."""

    pivot: int
    row: int
    column: int
    reduce: tuple[tuple[int, int, tuple[tuple[int, int], ...]], ...]
    rest: tuple[tuple[int, int], ...]


@dataclass(frozen=True)
class Program:
    """Slots (the nonzeros of the pattern first, fill after them) and the steps in order."""

    slots: int
    steps: tuple[Step, ...]


def plan(rows: Index, columns: Index, values: Array, n: int) -> Program | None:
    """The elimination order for a pattern with the values of one board; None where no pivot is usable."""
    slot: list[dict[int, int]] = [{} for _ in range(n)]
    number: list[dict[int, float]] = [{} for _ in range(n)]
    in_column: list[set[int]] = [set() for _ in range(n)]
    for k, (i, j, v) in enumerate(zip(rows.tolist(), columns.tolist(), values.tolist(), strict=True)):
        slot[i][j], number[i][j] = k, v
        in_column[j].add(i)
    slots = len(values)
    left = set(range(n))
    steps = []
    while left:
        best = _pivot(left, number, in_column)
        if best is None:
            return None
        i, j = best
        left.discard(i)
        for c in number[i]:
            in_column[c].discard(i)
        rest = [(c, s) for c, s in slot[i].items() if c != j]
        reduce = []
        for r in sorted(in_column[j]):
            factor = number[r].pop(j) / number[i][j]
            touched = []
            for c, s in rest:
                if c not in slot[r]:
                    slot[r][c], number[r][c] = slots, 0.0
                    in_column[c].add(r)
                    slots += 1
                number[r][c] -= factor * number[i][c]
                touched.append((slot[r][c], s))
            reduce.append((r, slot[r].pop(j), tuple(touched)))
        in_column[j] = set()
        steps.append(Step(slot[i][j], i, j, tuple(reduce), tuple((s, c) for c, s in rest)))
    return Program(slots, tuple(steps))


def _pivot(left: set[int], number: list[dict[int, float]], in_column: list[set[int]]) -> tuple[int, int] | None:
    """The entry with the least Markowitz count among those not small in their row."""
    best, least = None, np.inf
    for i in sorted(left, key=lambda i: len(number[i])):
        width = len(number[i]) - 1
        if best is not None and width > least:
            break
        top = max((abs(v) for v in number[i].values()), default=0.0)
        if top == 0.0 or not np.isfinite(top):
            return None
        for j, v in number[i].items():
            count = width * (len(in_column[j]) - 1)
            if abs(v) >= _THRESHOLD * top and count < least:
                best, least = (i, j), count
        if least == 0:
            break
    return best


class Straight:
    """The linear solves of a large batch by a program; ``rho`` are the resistances the branches see at the board that
    the order was worked out on (they only steer the limiting step)."""

    def __init__(self, system: System, program: Program, rho: Array) -> None:
        self._program = program
        self._rho = np.where(np.isfinite(rho), rho, 1e12)
        self._dense = Dense()

    @classmethod
    def build(cls, system: System, num: Numbers, slope: Array, rho: Array) -> Straight | None:
        """From one solved board: numbers, slopes (m,) and seen resistances (m,)."""
        entries = system.jacobian_entries(num, slope).reshape(-1)
        program = plan(system.pattern_row, system.pattern_column, entries, system.n)
        return None if program is None else cls(system, program, rho)

    def solve(
        self, system: System, num: Numbers, slope: Array, right: Array, turn: int, shift: Array | None = None
    ) -> tuple[Array, Array]:
        if shift is not None:
            return self._dense.solve(system, num, slope, right, turn, shift)
        entries = np.ascontiguousarray(
            np.broadcast_to(system.jacobian_entries(num, slope), (len(right), len(system.pattern_row))).T
        )
        x = np.empty_like(right)
        for start in range(0, len(right), _SLICE):
            stop = min(start + _SLICE, len(right))
            x[start:stop] = self._run(entries[:, start:stop], right[start:stop].T).T
        poor = ~np.isfinite(x).all(axis=-1)
        if poor.any():
            rows = np.flatnonzero(poor)
            part = num.take(rows) if num.batch else num
            x[rows] = self._dense.solve(system, part, slope[rows], right[rows], -1)[0]
        return x, self._rho / (1.0 + slope * self._rho)

    def solve_many(self, system: System, num: Numbers, slope: Array, right: Array) -> Array:
        return self._dense.solve_many(system, num, slope, right)

    def _run(self, entries: Array, right: Array) -> Array:
        """The program on one slice: entries (nonzeros, members), right (n, members), x (n, members)."""
        count = entries.shape[1]
        work = np.zeros((self._program.slots, count))
        work[: len(entries)] = entries
        w = list(work)
        b = list(np.array(right))
        hold = np.empty(count)
        factor = np.empty(count)
        for step in self._program.steps:
            pivot = w[step.pivot]
            for row, slot, touched in step.reduce:
                np.divide(w[slot], pivot, out=factor)
                for target, source in touched:
                    np.multiply(factor, w[source], out=hold)
                    np.subtract(w[target], hold, out=w[target])
                np.multiply(factor, b[step.row], out=hold)
                np.subtract(b[row], hold, out=b[row])
        x = np.empty((len(b), count))
        for step in reversed(self._program.steps):
            total = b[step.row]
            for slot, column in step.rest:
                np.multiply(w[slot], x[column], out=hold)
                np.subtract(total, hold, out=total)
            np.divide(total, w[step.pivot], out=x[step.column])
        return x
