"""All operating points of one interacting group at fixed temperatures, with proof, or why there is none."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from netaudit.circuit.circuit import Circuit
from netaudit.devices.base import Array
from netaudit.solve.cases import Region, region
from netaudit.solve.groups import alone, groups, limited
from netaudit.solve.interval import Interval
from netaudit.solve.newton import Effort, newton
from netaudit.solve.passive import span
from netaudit.solve.prune import prune
from netaudit.solve.reduced import Reduced, reduce
from netaudit.solve.settle import Solver
from netaudit.solve.solved import Solved
from netaudit.solve.system import Numbers, System
from netaudit.solve.tighten import Dense, dense
from netaudit.solve.verify import Verified, verify

#: work that a search may take: boxes times distinct branch values squared times branches
_WORK = 2e7
#: fewest and most boxes that are granted
_LEAST_BOXES, _MOST_BOXES = 300, 60_000
#: boxes granted to the question whether a supply reaches its limit
_LIMIT_BOXES = 300
#: branches, and unknowns, beyond which the search is not begun
_LARGEST, _UNKNOWNS = 36, 80


@dataclass(frozen=True)
class Decision:
    """``points``: solutions (x, u); ``complete``: these are all; ``why`` not, in words; ``boxes`` looked at."""

    points: tuple[tuple[Array, Array], ...]
    complete: bool
    why: str = ""
    boxes: int = 0


def decide(solver: Solver, num: Numbers, found: Sequence[tuple[Array, Array]]) -> Decision:
    """Every solution of a group's own circuit, from those already found (one at least)."""
    given = tuple(found)
    limits = span(solver.system.circuit)
    if limits.why:
        return Decision(given, False, limits.why)
    circuit = dense(solver.system, num)
    if not circuit.m:
        return Decision(given, len(given) == 1)
    if circuit.m > _LARGEST or circuit.n > _UNKNOWNS:
        return Decision(given, False, f"{circuit.m} branches interact")
    within = region(solver.system, num, circuit, limits)
    if not within.bounded:
        return Decision(given, False, "the circuit leaves a current without a bound")
    proven = [verify(circuit, x) for x, _ in given]
    if any(p is None for p in proven):
        return Decision(given, False, "a point lies at a corner of a characteristic or next to a fold")
    reduced = reduce(circuit, circuit.branches.value(given[0][1])[1], within.x_max)
    if reduced is None:
        return Decision(given, False, "its equations are singular")
    return _searched(solver, num, circuit, reduced, within, [p for p in proven if p is not None])


def _searched(
    solver: Solver, num: Numbers, circuit: Dense, reduced: Reduced, within: Region, proven: list[Verified]
) -> Decision:
    def polish(at: Array) -> Verified | None:
        result = newton(solver.system, num, at[None, :], solver.linear, Effort(limit=30))
        return verify(circuit, result.x[0]) if result.converged[0] else None

    boxes = [reduced.gather(u) for u in within.boxes]
    pruned = prune(reduced, boxes, proven, polish, _budget(reduced))
    points = tuple((p.x, p.u.middle()) for p in pruned.points)
    if pruned.undecided:
        why = f"{pruned.undecided} of {pruned.boxes} boxes were left undecided"
        return Decision(points, False, why, pruned.boxes)
    return Decision(points, True, "", pruned.boxes)


def _budget(reduced: Reduced) -> int:
    return int(np.clip(_WORK / (reduced.d**2 * len(reduced.variable)), _LEAST_BOXES, _MOST_BOXES))


def may_limit(solver: Solver, board: Solved) -> tuple[str, ...]:
    """Stiff supplies that could be in their current limit at some operating point; the others may count as ideal."""
    circuit = solver.system.circuit
    out = []
    for supply in limited(circuit):
        group = next((g for g in groups(circuit, strict=True) if supply in g.devices), None)
        if group is None or not _below_limit(solver, board, alone(circuit, group, strict=True), supply.name):
            out.append(supply.name)
    return tuple(out)


def _below_limit(solver: Solver, board: Solved, circuit: Circuit, name: str) -> bool:
    """Whether the circuit has no solution in which the supply's ramp is on."""
    limits = span(circuit)
    system = System(circuit)
    if limits.why or system.m > _LARGEST or system.n > _UNKNOWNS:
        return False
    temperature = np.array([board.temperature[0, solver.system.index_of[d.name]] for d in system.devices])
    num = system.numbers({}, temperature)
    arrays = dense(system, num)
    ramp = int(np.flatnonzero(system.branch_device == system.index_of[name])[0])
    corner = next(
        float(p["offset"].reshape(-1)[np.flatnonzero(i == ramp)[0]]) for _, i, p in num.branches.groups if ramp in i
    )
    low = np.full(arrays.m, -np.inf)
    low[ramp] = corner
    within = region(system, num, arrays, limits, Interval(low, np.full(arrays.m, np.inf)))
    if not within.boxes or not within.bounded:
        return not within.boxes
    place = {name: k for k, name in enumerate(branch_names(solver.system))}
    u = np.array([float(board.u[0, place[name]]) for name in branch_names(system)])
    reduced = reduce(arrays, arrays.branches.value(u)[1], within.x_max)
    if reduced is None:
        return False
    boxes = [reduced.gather(u) for u in within.boxes]
    return prune(reduced, boxes, [], lambda _: None, _LIMIT_BOXES).undecided == 0


def branch_names(system: System) -> list[tuple[str, int]]:
    """For each branch the device and the number of the branch in it: the same in a group and in the whole circuit."""
    counts: dict[int, int] = {}
    out = []
    for device in system.branch_device.tolist():
        out.append((system.devices[device].name, counts.get(device, 0)))
        counts[device] = counts.get(device, 0) + 1
    return out
