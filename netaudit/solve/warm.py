"""What self-heating does to the number of operating points.

The proofs hold at fixed temperatures.  They hold for the whole board where no heated part's law moves with its
temperature; elsewhere other temperatures may go with another point (a thermistor that heats itself), which is looked for
from hot starts.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from netaudit.devices.base import Array
from netaudit.solve.settle import Settled, Solver
from netaudit.solve.solved import Solved
from netaudit.solve.stability import Stability

#: kelvins above ambient from which hot points are looked for
_HOTTER = (30.0, 90.0, 200.0, 450.0)
#: points whose voltages agree to this (V, and relative) and whose temperatures agree to a hundred times this (K) are one
_SAME = 1e-5
#: beyond this no law of a part has a meaning, degC
_HOTTEST = 2900.0


def moved(solver: Solver, board: Solved) -> tuple[str, ...]:
    """The heated parts whose law is another one 10 K higher."""
    if not solver.heat.any:
        return ()
    system = solver.system
    here, there = (system.numbers(board.overrides, board.temperature + d, board.ambient, (1,)) for d in (0.0, 10.0))
    changed = np.zeros(len(system.devices), dtype=bool)
    owner = system.handle_device
    for rows, a, b in ((system.g_row, here.g, there.g), (system.s_row, here.s, there.s)):
        changed[owner[rows[_differs(a, b)]]] = True
    for branches, a, b in (
        (system.a_branch, here.inject, there.inject),
        (system.b_branch, here.sense, there.sense),
    ):
        changed[system.branch_device[branches[_differs(a, b)]]] = True
    for (_, index, p), (_, _, q) in zip(here.branches.groups, there.branches.groups, strict=True):
        for name in p:
            changed[system.branch_device[index[_differs(p[name], q[name])]]] = True
    return tuple(system.devices[k].name for k in solver.heat.devices if changed[k])


def _differs(a: Array, b: Array) -> NDArray[np.bool_]:
    """Which entries of the last axis differ (one board, with or without its batch axis)."""
    return np.asarray(np.atleast_2d(a)[0] != np.atleast_2d(b)[0])


def hotter_points(solver: Solver, known: Sequence[Settled]) -> list[Settled]:
    """Further points at other temperatures, found from hot starts out of the first of those known."""
    board = known[0].solved
    job = solver.job(count=len(_HOTTER))
    t0 = np.repeat(board.temperature, len(_HOTTER), axis=0)
    t0[:, solver.heat.devices] += np.array(_HOTTER)[:, None]
    u0 = np.repeat(board.u, len(_HOTTER), axis=0)
    trial = solver.settle(replace(job, u0=u0, t0=t0), remedies=False)
    found: list[tuple[Array, Array]] = [(k.solved.x[0], k.solved.temperature[0]) for k in known]
    out = []
    for k in np.flatnonzero(trial.converged):
        x, t = trial.solved.x[k], trial.solved.temperature[k]
        if any(_same(x, t, *old) for old in found) or float(t.max()) > _HOTTEST:
            continue
        again = solver.settle(replace(solver.job(), u0=trial.solved.u[k][None], t0=t[None]), remedies=False)
        if again.converged[0]:
            found.append((x, t))
            out.append(again)
    return out


def _same(x: Array, t: Array, y: Array, u: Array) -> bool:
    volts = np.abs(x - y) <= _SAME * (1.0 + np.maximum(np.abs(x), np.abs(y)))
    return bool(volts.all() and (np.abs(t - u) <= _SAME * 100).all())


def thermal_stability(gain: Array | None) -> Stability | None:
    """False where det(I - R dP/dT) < 0: a small warming grows whatever the heat capacities; None: nothing to say."""
    if gain is None:
        return None
    sign, log = np.linalg.slogdet(np.eye(len(gain)) - gain)
    if sign < 0 and log > -50:
        return Stability(False, "a small warming grows whatever the heat capacities (thermal loop gain above 1)")
    return None
