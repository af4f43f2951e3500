"""Further operating points of a whole circuit: each group searched alone, the combinations settled together."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import islice, product

import numpy as np

from netaudit.devices import KINDS
from netaudit.devices.base import Array
from netaudit.solve.certificate import certify
from netaudit.solve.groups import Group, alone, groups
from netaudit.solve.linear import DENSE_LIMIT
from netaudit.solve.search import search
from netaudit.solve.settle import Settled, Solver
from netaudit.solve.solved import Solved
from netaudit.solve.system import System

#: combinations of the groups' points that are tried
_COMBINATIONS = 128
_SAME_VOLTS = 1e-6


@dataclass(frozen=True)
class Further:
    """Points besides the first, and what the search has to say of itself."""

    settled: list[Settled]
    said: str


def further_points(solver: Solver, first: Settled) -> Further:
    """Searches every group that can have several points; the first point's board is where the others set out from."""
    circuit = solver.system.circuit
    open_groups = [g for g in groups(circuit) if any(KINDS[d.kind].growth(d) == "other" for d in g.devices)]
    if not open_groups:
        return Further([], "")
    choices: list[list[dict[tuple[str, int], float]]] = []
    skipped = 0
    for group in open_groups:
        found = _group_points(solver, group, first.solved)
        skipped += found is None
        if found is not None and len(found) > 1:
            choices.append(found)
    said = "; searched from many starts"
    if skipped:
        said += f" ({skipped} large group{'s' if skipped > 1 else ''} from one start only)"
    if not choices:
        return Further([], said)
    return Further(_combined(solver, first, choices), said)


def _group_points(solver: Solver, group: Group, board: Solved) -> list[dict[tuple[str, int], float]] | None:
    """Branch values of each point of a group, by device and number of its branch; None: too large to search."""
    system = System(alone(solver.system.circuit, group))
    if system.n > DENSE_LIMIT:
        return None
    inner = Solver(system)
    temperature = np.array([board.temperature[0, solver.system.index_of[d.name]] for d in system.devices])
    num = system.numbers({}, temperature)
    names = _branch_names(system)
    return [dict(zip(names, u.tolist(), strict=True)) for _, u in search(inner, num)]


def _branch_names(system: System) -> list[tuple[str, int]]:
    counts: dict[int, int] = {}
    out = []
    for device in system.branch_device.tolist():
        out.append((system.devices[device].name, counts.get(device, 0)))
        counts[device] = counts.get(device, 0) + 1
    return out


def _combined(solver: Solver, first: Settled, choices: Sequence[list[dict[tuple[str, int], float]]]) -> list[Settled]:
    names = _branch_names(solver.system)
    found = [first]
    for picks in islice(product(*choices), _COMBINATIONS):
        values = {key: value for pick in picks for key, value in pick.items()}
        u0 = np.array([[values.get(name, float(first.solved.u[0, k])) for k, name in enumerate(names)]])
        job = replace(solver.job(), u0=u0, t0=first.solved.temperature)
        trial = solver.settle(job, remedies=False)
        if not trial.converged[0] or not certify(trial.solved.pick(0)).holds:
            continue
        if not any(_same(trial.solved.x[0], old.solved.x[0]) for old in found):
            found.append(trial)
    return found[1:]


def _same(a: Array, b: Array) -> bool:
    return bool((np.abs(a - b) <= _SAME_VOLTS * (1.0 + np.maximum(np.abs(a), np.abs(b)))).all())
