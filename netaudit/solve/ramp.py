"""Into which operating point a board rises when its supplies are switched on.

The supplies' voltages rise from zero in small steps, all together or one of them after the others, and the operating
point is followed from step to step; where it ends in a fold the board moves on to what Newton then finds.  In a balanced
circuit the point that is followed may be one in which the board cannot rest: which way it falls is up to tolerances.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Device
from netaudit.solve.persist import Persistence
from netaudit.solve.settle import Settled, Solver
from netaudit.solve.solved import Solved

#: steps from zero to the full voltages, and the finest step as a share
_STEPS, _FINEST = 16, 1e-4
#: supplies of which each is tried as the last one
_MOST = 4
_SAME_VOLTS = 1e-4


@dataclass(frozen=True)
class Rise:
    """``how`` the supplies rose, in words, and the number of the point reached (None: the following failed)."""

    how: str
    point: int | None


def rises(solver: Solver, boards: Sequence[Solved]) -> list[Rise]:
    """Every way of switching on that is tried, with the board among ``boards`` (batches of one) that it ends in."""
    supplies = [d for d in solver.system.devices if d.kind == "supply" and d.words.get("state") != "off"]
    ways: list[tuple[str, list[list[Device]]]] = [("all supplies together", [supplies])]
    if 1 < len(supplies) <= _MOST:
        ways += [(f"{last.name} last", [[d for d in supplies if d is not last], [last]]) for last in supplies]
    elif len(supplies) == 1:
        ways = [(f"{supplies[0].name} rising from zero", [supplies])]
    return [Rise(how, _which(_followed(solver, supplies, stages), boards)) for how, stages in ways if supplies]


def _followed(solver: Solver, supplies: list[Device], stages: list[list[Device]]) -> Settled | None:
    """Follows the point; steps become finer where it would pass from rest into a point where the board cannot rest."""
    persistence = Persistence(solver)
    share = {d.name: 0.0 for d in supplies}
    state: Settled | None = None
    rests = True
    for stage in stages:
        at, step = 0.0, 1.0 / _STEPS
        while at < 1.0:
            target = min(1.0, at + step)
            trial = _stepped(solver, supplies, share | {d.name: target for d in stage}, state)
            if trial is None:
                return None
            keeps = persistence.of(trial.solved).stable is not False
            if rests and not keeps and step > _FINEST:
                step /= 4.0
                continue
            at, state, rests, step = target, trial, keeps, min(2.0 * step, 1.0 / _STEPS)
        share |= {d.name: 1.0 for d in stage}
    return state


def _stepped(solver: Solver, supplies: list[Device], share: dict[str, float], state: Settled | None) -> Settled | None:
    """The point with the supplies at these shares of their voltages, from the one before."""
    job = solver.job({(d.name, "value"): d.nominal("value") * share[d.name] for d in supplies})
    if state is not None:
        job = replace(job, u0=state.solved.u, t0=state.solved.temperature)
    trial = solver.settle(job, remedies=False)
    if not trial.converged[0]:
        trial = solver.settle(job)
    return trial if trial.converged[0] else None


def _which(end: Settled | None, boards: Sequence[Solved]) -> int | None:
    if end is None:
        return None
    for k, board in enumerate(boards):
        x, y = end.solved.x[0], board.x[0]
        if bool((np.abs(x - y) <= _SAME_VOLTS * (1.0 + np.maximum(np.abs(x), np.abs(y)))).all()):
            return k
    return None
