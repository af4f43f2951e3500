"""What stands behind Newton: a fixed tuple of remedies, each tried only when the one before failed."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array
from netaudit.solve.linear import Linear
from netaudit.solve.newton import Anchor, Effort, Iterate, newton
from netaudit.solve.starts import starts
from netaudit.solve.system import Numbers, System


@dataclass(frozen=True)
class Found:
    """A solution of a single circuit: x (n,), u (m,), by which method and in how many steps; ``x`` None: not found."""

    x: Array | None
    u: Array
    method: str
    iterations: int


#: unknowns up to which many starts are tried at once
_LARGEST_BATCH = 200

Remedy = Callable[[System, Numbers, Array, Linear], Iterate]


def climb(system: System, num: Numbers, u0: Array, linear: Linear) -> Found:
    """Tries the remedies in order from the branch values u0 (m,)."""
    steps = 0
    last = u0
    for name, remedy in REMEDIES:
        result = remedy(system, num, u0[None, :], linear)
        steps += int(result.iterations[0])
        last = result.u[0]
        if result.converged[0]:
            return Found(result.x[0], result.u[0], name, steps)
    return Found(None, last, ", ".join(name for name, _ in REMEDIES), steps)


def _plain(system: System, num: Numbers, u0: Array, linear: Linear) -> Iterate:
    return newton(system, num, u0, linear)


def _damped(system: System, num: Numbers, u0: Array, linear: Linear) -> Iterate:
    return newton(system, num, u0, linear, Effort(limit=200, damping=0.4))


def _structured(system: System, num: Numbers, u0: Array, linear: Linear) -> Iterate:
    """Newton from many starts at once; the first that ends in a solution counts."""
    if system.n > _LARGEST_BATCH or not system.m:
        return Iterate(np.zeros((1, system.n)), u0, np.zeros(1, dtype=bool), np.zeros(1, dtype=int))
    total = 0
    for effort in (Effort(limit=30), Effort(limit=80, damping=0.3)):
        result = newton(system, num, starts(system, num), linear, effort)
        total += int(result.iterations.max())
        good = np.flatnonzero(result.converged)
        if len(good):
            k = good[:1]
            return Iterate(result.x[k], result.u[k], result.converged[k], np.array([total]))
    return Iterate(result.x[:1], result.u[:1], result.converged[:1], np.array([total]))


def _supplies(system: System, num: Numbers, u0: Array, linear: Linear) -> Iterate:
    """Raises all sources together from zero, the step adapted to how Newton fares (natural parameter continuation)."""
    u, share, step, total = np.zeros_like(u0), 0.0, 0.1, 0
    result = newton(system, replace(num, s=num.s * 0.0), u, linear)
    while result.converged[0]:
        total += int(result.iterations[0])
        u = result.u
        if share >= 1.0:
            break
        while step > 1e-4:
            target = min(1.0, share + step)
            result = newton(system, replace(num, s=num.s * target), u, linear, Effort(limit=25))
            if result.converged[0]:
                share, step = target, step * 2.0
                break
            total += int(result.iterations[0])
            step *= 0.4
        else:
            break
    done = result.converged & (share >= 1.0)
    return Iterate(result.x, result.u, done, np.array([total]))


def _pseudo_time(system: System, num: Numbers, u0: Array, linear: Linear) -> Iterate:
    """Implicit steps of a circuit with equal capacitances at the nodes, the step growing while it goes well.

    What it ends in is an operating point that persists with those capacitances; the last step has none.
    """
    x = np.zeros(system.n)
    u, weight, total = u0, 1e-2, 0
    for _ in range(120):
        pull = Anchor(weight * system.is_node, x)
        result = newton(system, num, u, linear, Effort(limit=30, anchor=pull))
        total += int(result.iterations[0])
        if not result.converged[0]:
            weight *= 4.0
            if weight > 1e6:
                break
            continue
        moved = float(np.abs(result.x[0] - x).max(initial=0.0))
        x, u = result.x[0], result.u
        weight *= 0.3
        if moved < 1e-9 or weight < 1e-16:
            break
    result = newton(system, num, u, linear)
    return Iterate(result.x, result.u, result.converged, result.iterations + total)


REMEDIES: tuple[tuple[str, Remedy], ...] = (
    ("newton", _plain),
    ("damped newton", _damped),
    ("structured starts", _structured),
    ("supply continuation", _supplies),
    ("pseudo-transient", _pseudo_time),
)
