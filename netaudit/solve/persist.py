"""Whether a board rests in a point: each interacting group judged alone, since groups that meet only at stiff supplies
cannot hold each other.  One group that leaves is enough; the point persists if every group does."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from netaudit.solve.decide import branch_names
from netaudit.solve.groups import alone, groups, limited
from netaudit.solve.settle import Solver
from netaudit.solve.solved import Solved
from netaudit.solve.stability import Stability, stability
from netaudit.solve.system import System

#: unknowns up to which stability is looked at
_LARGEST = 400


class Persistence:
    """The stability of the points of one board."""

    def __init__(self, solver: Solver) -> None:
        self.solver = solver

    @cached_property
    def _parts(self) -> list[System]:
        """The groups that structure leaves open, each as a system of its own; the whole where it cannot be cut apart."""
        circuit = self.solver.system.circuit
        strict = bool(limited(circuit))
        every = groups(circuit, strict)
        if len(every) == 1:
            return [self.solver.system]
        return [System(alone(circuit, group, strict)) for group in every if not group.settled]

    def of(self, board: Solved) -> Stability:
        """The stability of one point (a batch of one)."""
        found = [self._part(system, board) for system in self._parts]
        for one in found:
            if one.stable is False:
                return one
        for one in found:
            if one.stable is None:
                return one
        return found[0] if found else Stability(True, "it decays with any capacitances (every part is increasing)")

    def _part(self, system: System, board: Solved) -> Stability:
        if system.n > _LARGEST:
            return Stability(None, "not decided: the circuit is too large for the test")
        whole = self.solver.system
        temperature = np.array([board.temperature[0, whole.index_of[d.name]] for d in system.devices])
        place = {name: k for k, name in enumerate(branch_names(whole))}
        u = np.array([board.u[0, place[name]] for name in branch_names(system)])
        own = {k: float(np.reshape(v, -1)[0]) for k, v in board.overrides.items() if k[0] in system.index_of}
        num = system.numbers(own, temperature)
        slope = num.branches.value(u)[1]
        return stability(system.jacobian(num, slope), system.is_node)
