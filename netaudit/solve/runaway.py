"""Following the operating point as the thermal resistances rise together from zero to their values.

A fold on the way (the loop gain R dP/dT reaches 1) is thermal runaway, whether or not a hotter equilibrium exists
beyond: the part that was cold when the board was switched on passes through it.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array
from netaudit.solve.settle import Job, Settled, Solver

_FIRST_STEP = 0.25
_LEAST_STEP = 1.0 / 512


@dataclass(frozen=True)
class Followed:
    """Where the following ended: ``share`` of the thermal resistances reached (1: all the way), the last settled
    state, and the devices that carry the runaway (largest in the eigenvector), empty when there is none."""

    share: float
    settled: Settled
    runaway: tuple[str, ...] = ()


def follow(solver: Solver, job: Job) -> Followed:
    """Follows one circuit (a job with one member) from cold."""
    settled = solver.settle(replace(job, share=0.0))
    if not solver.heat.any or not settled.converged[0]:
        return Followed(1.0, settled)
    share, step = 0.0, _FIRST_STEP
    while share < 1.0:
        target = min(1.0, share + step)
        trial = solver.settle(
            replace(job, share=target, u0=settled.solved.u, t0=settled.solved.temperature), remedies=False
        )
        if trial.converged[0] and float(trial.gain[0]) < 1.0 and _near(solver, settled, trial, share, target):
            share, settled, step = target, trial, min(2 * step, 0.5)
            continue
        step /= 2
        if step < _LEAST_STEP:
            return Followed(share, settled, _carriers(solver, settled))
    return Followed(1.0, settled)


def _near(solver: Solver, old: Settled, new: Settled, share: float, target: float) -> bool:
    """Whether the new temperatures lie where the tangent at the old ones leads: no jump to another branch."""
    heat = solver.heat
    rise = heat.resistance @ old.solved.powers[0, heat.devices]
    gain = old.gain_matrix[0] if old.gain_matrix is not None else np.zeros_like(heat.resistance)
    tangent = np.linalg.solve(np.eye(len(rise)) - gain, rise) * (target - share)
    actual = (new.solved.temperature - old.solved.temperature)[0, heat.devices]
    return bool((np.abs(actual - tangent) <= np.abs(tangent) + 2.0).all())


def _carriers(solver: Solver, settled: Settled) -> tuple[str, ...]:
    """The devices with the largest share in the eigenvector of the largest real eigenvalue of the loop gain."""
    if settled.gain_matrix is None:
        return ()
    values, vectors = np.linalg.eig(settled.gain_matrix[0])
    vector: Array = np.abs(vectors[:, int(np.argmax(values.real))])
    names = [solver.system.devices[k].name for k in solver.heat.devices]
    order = np.argsort(-vector)
    return tuple(names[k] for k in order if vector[k] > 0.3 * vector[order[0]])[:4]
