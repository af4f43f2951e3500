"""Search for further operating points of the groups that structure leaves open: many starts, structured first.

Every group of interacting parts is asked alone (``groups``); Newton runs as a batch from starts in which junctions,
channels and measured curves are put on, off and on each of their slopes, then from a seeded spread of others.  Newton is
drawn to unstable points as well as to stable ones.  Points are told apart by their branch values.  The search proves
nothing; it is deterministic.
"""

from __future__ import annotations

import numpy as np

from netaudit.devices.base import Array
from netaudit.solve.newton import Effort, newton
from netaudit.solve.settle import Solver
from netaudit.solve.starts import starts
from netaudit.solve.system import Numbers

#: no net of a board stands above this: there Newton has met the rounding of its rows, not a point (V)
WILDEST = 1e7
#: circuits up to the square root of this many unknowns are given all starts, larger ones fewer, but not below FEWEST
_UNKNOWNS, _FEWEST = 1600, 40
#: two points are one when their branch values agree to this (V, and relative)
_SAME = 1e-6


def search(solver: Solver, num: Numbers) -> list[tuple[Array, Array]]:
    """Distinct solutions (x, u) of one circuit at fixed temperatures, in the order found."""
    u0 = starts(solver.system, num)
    # a start costs the cube of the unknowns
    u0 = u0[:: max(1, int(len(u0) / np.clip(_UNKNOWNS * len(u0) / max(solver.system.n, 1) ** 2, _FEWEST, len(u0))))]
    found: list[tuple[Array, Array]] = []
    for effort in (Effort(limit=40), Effort(limit=80, damping=0.3)):
        result = newton(solver.system, num, u0, solver.linear, effort)
        for x, u, good in zip(result.x, result.u, result.converged, strict=True):
            wild = float(np.abs(x[solver.system.is_node]).max(initial=0.0)) > WILDEST
            if good and not wild and not any(_same(x, y) for y, _ in found):
                found.append((x, u))
    return found


def _same(a: Array, b: Array) -> bool:
    return bool((np.abs(a - b) <= _SAME * (1.0 + np.maximum(np.abs(a), np.abs(b)))).all())
