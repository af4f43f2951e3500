"""The worst case of audited quantities over all ranges and tolerances.

Every quantity is a function of a solved board (a batch of them) that is to be maximised, usually a ratio of stress to
limit.  Sensitivities at the nominal point send each quantity to a vertex of the box; the vertices are solved as one
batch, sensitivities are looked at again there, and where one points back inside (a power that peaks within a range) the
extreme is found by a bounded search along that value.  Every vertex solved serves every quantity, and vertices of
quantities that have no value in common are solved as one (``packing``).
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace
from itertools import product
from typing import Literal

import numpy as np

from netaudit.audit.packing import Mask, Wanted, pack, together
from netaudit.devices.base import Array
from netaudit.solve.sensitivity import SHARE, Variable, assign, chunks, moved, steps, variables
from netaudit.solve.settle import Job, Settled, Solver
from netaudit.solve.solved import Solved
from netaudit.workers import IN_PROCESS, Interrupted, Workers

Proof = Literal["proven", "bounded", "checked"]
Objective = Callable[[Solved], Array]

#: a gain below this share of the value is rounding, not an influence
_NEGLIGIBLE = 1e-12
#: with at most this many values all vertices are solved besides those that sensitivities point to
_ALL_VERTICES = 8
_ROUNDS = 8
#: values along which one quantity is searched inside its range in each round
_INSIDE = 4
_ZOOM = 4
#: on boards with more values than this rows are solved together, and influences of less than FAINT of a quantity over a
#: value's whole span are left out: rounding would make every quantity depend on everything
_MANY, _FAINT = 40, 1e-7
#: rows for which every remedy is tried in vain before the rest gets plain Newton only: where so many corners have no
#: operating point the finding stands, and each further one costs as much as the whole board
_VAIN = 8


@dataclass(frozen=True)
class Extreme:
    """The largest value of a quantity, the board at which it occurs, and the corner in the user's values."""

    value: float
    board: Solved
    corner: Mapping[str, float]
    proof: Proof
    bound: float | None = None


@dataclass(frozen=True)
class Rows:
    """Rows of values (members, variables) to be solved as one batch, started from a board (a batch of one)."""

    solver: Solver
    spans: tuple[Variable, ...]
    start: Solved
    values: Array
    remedies: bool
    gain: Array | None


def settle(rows: Rows, workers: Workers) -> Settled:
    """Solves them; a piece of work for ``Workers.each``."""
    start, count = rows.start, len(rows.values)
    overrides, air = assign(rows.spans, rows.values, rows.solver.system.circuit.ambient.nominal)
    rise = start.temperature - np.asarray(start.ambient, dtype=float).reshape(-1, 1)
    ambient = np.broadcast_to(np.asarray(air, dtype=float), (count,))
    job = Job(overrides, ambient, count, np.repeat(start.u, count, axis=0), rise + ambient[:, None], gain=rows.gain)
    return rows.solver.settle(job, rows.remedies)


class Explorer:
    """Explores the box of one solved operating point (``nominal``: a batch of one)."""

    def __init__(
        self, solver: Solver, nominal: Solved, nominal_only: bool = False, workers: Workers = IN_PROCESS
    ) -> None:
        self.solver = solver
        self.workers = workers
        self.spans: tuple[Variable, ...] = () if nominal_only else variables(solver)
        if self.spans:
            solver.prepare(nominal)
        self.low = np.array([v.quantity.low for v in self.spans])
        self.high = np.array([v.quantity.high for v in self.spans])
        self.middle = np.array([v.quantity.nominal for v in self.spans])
        self.rows: list[Array] = [self.middle]
        self.boards: list[Solved] = [nominal]
        self.member: list[tuple[int, int]] = [(0, 0)]
        self.known: dict[bytes, int] = {self.middle.tobytes(): 0}
        self._columns: list[Array] = []
        self._picked: dict[int, Solved] = {}
        self._sized = 0
        self._slopes: dict[int, Array] = {}
        #: which values each objective was seen to depend on, at any row looked at: (objectives, variables)
        self._many = len(self.spans) > _MANY
        self._depends = np.zeros((0, len(self.spans)), dtype=bool)
        self._gain = solver.thermal_gain(nominal) if self.spans and solver.heat.any else None
        #: corners at which no operating point was found
        self.failures: list[dict[str, float]] = []
        self._lost: set[bytes] = set()
        #: whether the exploration was interrupted: extremes are then those of what was solved so far
        self.cut = False

    def extremes(self, objectives: Sequence[Objective], sized: int | None = None) -> list[Extreme]:
        """The largest value of each objective over the box; of those from ``sized`` on only the sign matters."""
        self._sized = len(objectives) if sized is None else sized
        if not objectives:
            return []
        self._columns, self._slopes = [], {}
        self._depends = np.zeros((len(objectives), len(self.spans)), dtype=bool)
        if not self.spans:
            values = self._table(objectives)
            return [Extreme(float(values[0, k]), self._board(0), {}, "proven") for k in range(len(objectives))]
        try:
            self._search(objectives)
        except Interrupted:
            self.cut = True
        table = self._table(objectives)
        best = np.nanargmax(table, axis=0)
        self._gradients(objectives, sorted(set(best.tolist())))
        return [self._extreme(table, int(best[k]), k) for k in range(len(objectives))]

    def visit(self, rows: Sequence[Array]) -> None:
        """Solves further rows of values; those without an operating point stay unknown."""
        self._solve(rows, remedies=False)

    def board(self, row: int) -> Solved:
        """The board of a row that was solved."""
        return self._board(row)

    def _search(self, objectives: Sequence[Objective]) -> None:
        if len(self.spans) <= _ALL_VERTICES:
            self._solve([np.array(v) for v in product(*zip(self.low, self.high, strict=True))])
        self._climb(objectives)
        self._inside(objectives, np.nanargmax(self._table(objectives), axis=0))

    def _extreme(self, table: Array, row: int, k: int) -> Extreme:
        """The extreme with its corner: the values that have an influence on this quantity somewhere looked at."""
        matters = np.any([slopes[k] != 0.0 for slopes in self._slopes.values()], axis=0)
        corner = {v.key: float(self.rows[row][c]) for c, v in enumerate(self.spans) if matters[c]}
        return Extreme(float(table[row, k]), self._board(row), corner, "checked")

    def _climb(self, objectives: Sequence[Objective]) -> None:
        """Rounds of: best row so far, sensitivities there, the vertices they point to."""
        looked: set[tuple[int, int]] = set()
        for _ in range(_ROUNDS):
            table = self._table(objectives)
            best = np.nanargmax(table, axis=0)
            todo = [k for k in range(len(objectives)) if (int(best[k]), k) not in looked]
            if not todo:
                return
            looked |= {(int(best[k]), k) for k in todo}
            gradients = self._gradients(objectives, sorted({int(best[k]) for k in todo}))
            goals = {k: self._vertices(gradients[int(best[k])][k], int(best[k])) for k in todo}
            packed, _ = pack([Wanted(row, self._matters(k)) for k, rows in goals.items() for row in rows])
            self._solve(packed)
            # what a packed row did not better gets its own: a value that was free in it may matter there after all
            after = np.nanargmax(self._table(objectives), axis=0)
            self._solve([rows[0] for k, rows in goals.items() if after[k] == best[k]])

    def _vertices(self, gradient: Array, row: int) -> list[Array]:
        """The vertex that a gradient points to, and rows in which only the most influential values have gone there: what
        each value alone would gain need not hold for all together."""
        values = self.rows[row]
        goal = np.where(gradient > 0, self.high, np.where(gradient < 0, self.low, values))
        moving = np.flatnonzero(goal != values)
        order = moving[np.argsort(-np.abs(gradient[moving]))]
        out = [goal]
        if row:
            count = 1
            while count < len(order):
                some = values.copy()
                some[order[:count]] = goal[order[:count]]
                out.append(some)
                count *= 2
        return out

    def _inside(self, objectives: Sequence[Objective], best: np.ndarray) -> None:
        """Bounded searches along values whose sensitivity at the best row points back into the box.

        Every objective searches along its own values, one after the other; all objectives share each batch.
        """
        best = best.copy()
        for _ in range(3):
            gradients = self._gradients(objectives, sorted(set(best.tolist())))
            before = self._table(objectives)[best, np.arange(len(objectives))]
            todo = {k: self._inward(gradients[int(best[k])][k], int(best[k])) for k in range(len(objectives))}
            todo = {k: cs for k, cs in todo.items() if self._worth(k, float(before[k]), gradients[int(best[k])][k][cs])}
            if not any(todo.values()):
                return
            for turn in range(max(len(columns) for columns in todo.values())):
                self._zoom(objectives, best, {k: cs[turn] for k, cs in todo.items() if turn < len(cs)})
            after = self._table(objectives)[best, np.arange(len(objectives))]
            if not (after > before * (1 + 1e-9 * np.sign(before))).any():
                return

    def _worth(self, k: int, value: float, gradient: Array) -> bool:
        """Whether a search may matter: of an objective that is judged by its sign only where ten times what the slopes
        promise over the whole spans would reach 0."""
        return k < self._sized or value + 10.0 * float(np.abs(gradient).sum()) / SHARE > 0.0

    def _inward(self, gradient: Array, row: int) -> list[int]:
        """The values whose sensitivity points into the box, the most influential ones first."""
        values = self.rows[row]
        up = (gradient > 0) & (values < self.high)
        down = (gradient < 0) & (values > self.low)
        columns = np.flatnonzero(up | down)
        return [int(c) for c in columns[np.argsort(-np.abs(gradient[columns]))][:_INSIDE]]

    def _zoom(self, objectives: Sequence[Objective], best: np.ndarray, column: Mapping[int, int]) -> None:
        """Successively finer grids, each objective along its column, then the top of the parabola through the best
        three; updates ``best`` where something is larger."""
        left = {k: float(self.low[c]) for k, c in column.items()}
        right = {k: float(self.high[c]) for k, c in column.items()}
        for _ in range(_ZOOM):
            self._try(objectives, best, {k: np.linspace(left[k], right[k], 9) for k in column}, column)
            for k, c in column.items():
                width = (right[k] - left[k]) / 8
                at = float(self.rows[int(best[k])][c])
                left[k], right[k] = max(float(self.low[c]), at - width), min(float(self.high[c]), at + width)
        ends = {k: np.array([left[k], right[k]]) for k in column}
        found = self._solved_for(best, ends, column)
        table = self._table(objectives)
        tops = {
            k: np.array(
                [_parabola((left[k], float(self.rows[int(best[k])][c]), right[k]), table[[a, int(best[k]), b], k])]
            )
            for k, c in column.items()
            for a, b in [found[k]]
            if a is not None and b is not None
        }
        self._try(objectives, best, tops, column)

    def _try(
        self,
        objectives: Sequence[Objective],
        best: np.ndarray,
        grids: Mapping[int, Array],
        column: Mapping[int, int],
    ) -> None:
        """Solves the rows with these values, each objective in its column, and takes over what is better."""
        found = self._solved_for(best, grids, column)
        table = self._table(objectives)
        for k, rows in found.items():
            for row in rows:
                if row is not None and table[row, k] > table[best[k], k]:
                    best[k] = row

    def _solved_for(
        self, best: np.ndarray, grids: Mapping[int, Array], column: Mapping[int, int]
    ) -> dict[int, list[int | None]]:
        """For each objective the rows that differ from its best in one column; None where no point was found."""
        wanted = {k: [self._with(int(best[k]), column[k], v) for v in grid] for k, grid in grids.items()}
        for k, c in column.items():
            self._depends[k, c] = True
        packed, where = pack([Wanted(row, self._matters(k)) for k, rows in wanted.items() for row in rows])
        self._solve(packed, remedies=False)
        numbers = iter(self.known.get(packed[at].tobytes()) for at in where)
        return {k: [next(numbers) for _ in rows] for k, rows in wanted.items()}

    def _matters(self, k: int) -> Mask:
        """The values that a row wanted by an objective fixes: those that it depends on; on small boards all of them."""
        return self._depends[k] if self._many else np.ones(len(self.spans), dtype=bool)

    def _with(self, row: int, column: int, value: float) -> Array:
        out = self.rows[row].copy()
        out[column] = value
        return out

    def _board(self, row: int) -> Solved:
        if row not in self._picked:
            batch, member = self.member[row]
            self._picked[row] = self.boards[batch].pick(member)
        return self._picked[row]

    def _table(self, objectives: Sequence[Objective]) -> Array:
        """Every objective on every row solved so far: shape (rows, objectives)."""
        while len(self._columns) < len(self.boards):
            board = self.boards[len(self._columns)]
            count = board.x.shape[0]
            self._columns.append(np.stack([np.broadcast_to(f(board), (count,)) for f in objectives], axis=-1))
        picked = [self._columns[b][m] for b, m in self.member]
        return np.array(picked)

    def _solve(self, wanted: Sequence[Array], remedies: bool = True) -> None:
        """Solves the rows not looked at yet, as batches started from the nominal point.

        What Newton misses is solved by the remedies, and each row that they solve is a start for those still missed.
        Rows within a range (``remedies`` False) lie between solved ones and do without.
        """
        keys = {row.tobytes(): row for row in wanted}
        rows = [row for key, row in keys.items() if key not in self.known and key not in self._lost]
        if not rows:
            return
        missed = self._solve_batches(rows, self.boards[0])
        self._lost |= {row.tobytes() for row in missed}
        while missed and remedies and len(self.failures) < _VAIN:
            row = missed.pop(0)
            if self._solve_batches([row], self.boards[0], remedies=True):
                self.failures.append({v.key: float(row[c]) for c, v in enumerate(self.spans)})
            elif missed:
                missed = self._solve_batches(missed, self.boards[-1])

    def _solve_batches(self, rows: Sequence[Array], near: Solved, remedies: bool = False) -> list[Array]:
        """Solves rows as batches, each row started from a solved board; gives those without an operating point."""
        size = chunks(self.solver, len(rows))
        parts = [np.array(rows[start : start + size]) for start in range(0, len(rows), size)]
        pieces = [Rows(self.solver, self.spans, near, part, remedies, self._gain) for part in parts]
        missed: list[Array] = []
        for values, settled in zip(parts, self.workers.each(settle, pieces, "corners"), strict=True):
            batch = len(self.boards)
            # a worker sends its own copy of the system back: one is enough
            self.boards.append(replace(settled.solved, system=self.solver.system))
            for member in np.flatnonzero(settled.converged):
                row = values[member]
                self.known[row.tobytes()] = len(self.rows)
                self.rows.append(row)
                self.member.append((batch, int(member)))
            missed += [values[member] for member in np.flatnonzero(~settled.converged)]
        return missed

    def _gradients(self, objectives: Sequence[Objective], rows: Sequence[int]) -> dict[int, Array]:
        """Signed influences at some rows, {row: (objectives, variables)}: the change of each objective for a small
        positive step of each value, zero where it is rounding."""
        todo = [r for r in rows if r not in self._slopes]
        if todo and 0 not in self._slopes:
            # the first look, at the nominal row, tells which values may be moved together elsewhere
            self._gradient_batch(objectives, [0], np.eye(len(self.spans), dtype=bool))
            todo = [r for r in todo if r != 0]
        groups = together(self._depends) if self._many else np.eye(len(self.spans), dtype=bool)
        size = max(1, chunks(self.solver, len(todo) * len(groups)) // max(len(groups), 1)) if todo else 1
        for start in range(0, len(todo), size):
            self._gradient_batch(objectives, todo[start : start + size], groups)
        return {r: self._slopes[r] for r in rows}

    def _gradient_batch(self, objectives: Sequence[Objective], part: Sequence[int], groups: Mask) -> None:
        values = np.array([self.rows[r] for r in part])
        near = moved(self.solver, self._gathered(part), self.spans, values, groups, self._gain if self._many else None)
        shape = (len(part), len(groups))
        sign = np.sign(steps(self.spans, values))
        least = max(_NEGLIGIBLE, _FAINT * SHARE) if self._many else _NEGLIGIBLE
        table = self._table(objectives)
        for r in part:
            self._slopes[r] = np.zeros((len(objectives), len(self.spans)))
        for k, f in enumerate(objectives):
            # at a singular point nothing is known of the neighbours: no number, no influence
            with np.errstate(invalid="ignore"):
                there = np.broadcast_to(f(near), (shape[0] * shape[1],)).reshape(shape)
            here = np.array([table[r, k] for r in part])[:, None]
            change = np.where(np.isfinite(there), there - here, 0.0)
            change[np.abs(change) <= least * np.abs(here)] = 0.0
            slopes = self._attributed(change, groups, k) * sign
            self._depends[k] |= (slopes != 0.0).any(axis=0)
            for i, r in enumerate(part):
                self._slopes[r][k] = slopes[i]

    def _attributed(self, change: Array, groups: Mask, k: int) -> Array:
        """Changes by group (rows, groups) as changes by variable: to the one variable of the group on which the objective
        depends, or to all of them where it is a surprise (they are told apart when they are moved next)."""
        group = groups.argmax(axis=0)
        known = (groups & self._depends[k]).any(axis=1)
        return np.asarray(np.where(self._depends[k] | ~known[group], change[:, group], 0.0))

    def _gathered(self, rows: Sequence[int]) -> Solved:
        """Some rows as one batch."""
        singles = [self._board(r) for r in rows]
        values = np.array([self.rows[r] for r in rows])
        overrides, air = assign(self.spans, values, self.solver.system.circuit.ambient.nominal)
        ambient = np.broadcast_to(np.asarray(air, dtype=float), (len(rows),))
        temperature = np.array([s.temperature for s in singles])
        num = self.solver.system.numbers(overrides, temperature, ambient, (len(rows),))
        x, u = np.array([s.x for s in singles]), np.array([s.u for s in singles])
        return Solved(self.solver.system, num, x, u, temperature, ambient, overrides)


def _parabola(at: tuple[float, float, float], values: Array) -> float:
    """Where the parabola through three points has its top, within them; the middle one if it has none."""
    (left, middle, right), (fl, fm, fr) = at, values
    if not left < middle < right:
        return middle
    dl, dr = (fl - fm) / (left - middle), (fr - fm) / (right - middle)
    curvature = (dr - dl) / (right - left)
    if not curvature < 0:
        return middle
    slope = dl - curvature * (left - middle)
    return float(np.clip(middle - slope / (2 * curvature), left, right))
