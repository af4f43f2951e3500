"""Further operating points of a whole circuit: each group searched alone, the combinations settled together."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import islice, product
from math import prod

import numpy as np

from netaudit.devices.base import Array
from netaudit.solve.certificate import certify
from netaudit.solve.decide import Decision, branch_names, decide, may_limit
from netaudit.solve.groups import Group, alone, groups
from netaudit.solve.linear import DENSE_LIMIT
from netaudit.solve.newton import newton
from netaudit.solve.search import WILDEST, search
from netaudit.solve.settle import Settled, Solver
from netaudit.solve.solved import Solved
from netaudit.solve.system import System

#: combinations of the groups' points that are tried
_COMBINATIONS = 128
_SAME_VOLTS = 1e-6


@dataclass(frozen=True)
class Further:
    """Points besides the first, what is to be said of the search, and whether it proves that there are no others."""

    settled: list[Settled]
    said: str
    proven: bool = False


@dataclass(frozen=True)
class _Choice:
    """The points of one group, by device and number of branch, whether these are all, and why that is not known."""

    points: list[dict[tuple[str, int], float]]
    all: bool
    why: str = ""
    boxes: int = 0


def further_points(solver: Solver, first: Settled) -> Further:
    """Searches every group that can have several points; the first point's board is where the others set out from.

    Stiff supplies cut the board apart.  One that may reach its current limit does not: then the groups are larger, and
    only where those cannot be decided the smaller ones give their points, without proof.
    """
    soft = may_limit(solver, first.solved)
    found = _over_groups(solver, first, strict=bool(soft))
    if found.proven or not soft:
        return found
    loose = _over_groups(solver, first, strict=False)
    reason = f"; searched from many starts; not proven to be all ({', '.join(soft)} may reach the current limit)"
    return Further(loose.settled, reason)


def _over_groups(solver: Solver, first: Settled, strict: bool) -> Further:
    open_groups = [g for g in groups(solver.system.circuit, strict) if not g.settled]
    choices = [_group_points(solver, group, first.solved, strict) for group in open_groups]
    reasons = [f"{_named(g)}: {c.why}" for g, c in zip(open_groups, choices, strict=True) if not c.all]
    several = [c.points for c in choices if len(c.points) > 1]
    wanted = prod(len(points) for points in several)
    found = _combined(solver, first, several) if several else []
    if len(found) + 1 != wanted and not reasons:
        reasons.append(f"{wanted - len(found) - 1} of {wanted} combinations of the groups' points did not settle")
    if reasons:
        return Further(found, f"; searched from many starts; not proven to be all ({'; '.join(reasons)})")
    boxes = sum(c.boxes for c in choices)
    counted = f"{len(open_groups)} interacting group{'s' if len(open_groups) != 1 else ''}"
    return Further(
        found,
        f"every other point is excluded by interval search ({counted}, {boxes} box{'es' if boxes != 1 else ''})",
        True,
    )


def _named(group: Group) -> str:
    names = group.awkward
    return ", ".join(names[:3]) + (f" and {len(names) - 3} more" if len(names) > 3 else "")


def _group_points(solver: Solver, group: Group, board: Solved, strict: bool) -> _Choice:
    """The points of a group: those that the search proves, with the starts only where it does not get through."""
    system = System(alone(solver.system.circuit, group, strict))
    names = branch_names(system)
    place = {name: k for k, name in enumerate(branch_names(solver.system))}
    if system.n > DENSE_LIMIT:
        return _Choice([], False, f"too large to search ({system.n} unknowns)")
    inner = Solver(system)
    temperature = np.array([board.temperature[0, solver.system.index_of[d.name]] for d in system.devices])
    num = system.numbers({}, temperature)
    u0 = np.array([[float(board.u[0, place[name]]) for name in names]])
    here = newton(system, num, u0, inner.linear)
    known = [(here.x[0], here.u[0])] if here.converged[0] else []
    decision = decide(inner, num, known) if known else Decision((), False, "it does not settle alone")
    found = list(decision.points)
    # soft supplies make the groups larger: they are searched from starts only with stiff ones
    if not decision.complete and not strict:
        for x, u in search(inner, num):
            if not any(_same(x, y) for y, _ in found):
                found.append((x, u))
    points = [dict(zip(names, u.tolist(), strict=True)) for _, u in found]
    return _Choice(points, decision.complete, decision.why, decision.boxes)


def _combined(solver: Solver, first: Settled, choices: Sequence[list[dict[tuple[str, int], float]]]) -> list[Settled]:
    names = branch_names(solver.system)
    found = [first]
    for picks in islice(product(*choices), _COMBINATIONS):
        values = {key: value for pick in picks for key, value in pick.items()}
        u0 = np.array([[values.get(name, float(first.solved.u[0, k])) for k, name in enumerate(names)]])
        job = replace(solver.job(), u0=u0, t0=first.solved.temperature)
        trial = solver.settle(job, remedies=False)
        wild = float(np.abs(trial.solved.x[0][solver.system.is_node]).max(initial=0.0)) > WILDEST
        if wild or not trial.converged[0] or not certify(trial.solved.pick(0)).holds:
            continue
        if not any(_same(trial.solved.x[0], old.solved.x[0]) for old in found):
            found.append(trial)
    return found[1:]


def _same(a: Array, b: Array) -> bool:
    return bool((np.abs(a - b) <= _SAME_VOLTS * (1.0 + np.maximum(np.abs(a), np.abs(b)))).all())
