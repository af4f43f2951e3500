"""Self-heating: junction temperatures solved together with the electrical unknowns.

Every heated device adds T_j - T_ambient - sum_k R_jk P_k(x, T) = 0 (R_th_ja on the diagonal; devices on one heat path
share its R_th).  The electrical rows are eliminated exactly: with J dx = -dF/dT the power's total derivative is
K = dP/dT, and Newton in T alone, (I - R K) dT = T_ambient + R P - T, takes the same steps as Newton on all rows.
R K is the loop gain: where its largest real eigenvalue passes 1 the operating point runs away (a fold).
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.circuit.circuit import Circuit
from netaudit.devices.base import Array
from netaudit.solve.linear import Linear
from netaudit.solve.solved import Solved
from netaudit.solve.system import Index, Numbers, System

#: step of the finite difference in temperature, kelvin
_DELTA = 1e-2


@dataclass(frozen=True)
class Heat:
    """The heated devices of a system (their numbers) and the matrix R in K/W, shape (h, h)."""

    devices: Index
    resistance: Array

    @property
    def any(self) -> bool:
        return len(self.devices) > 0


def heat_paths(system: System, circuit: Circuit) -> Heat:
    """R from R_th_ja, or from ``same-heat`` with each device's R_th_jc."""
    shared = {name: path for path in circuit.heat_paths for name in path.devices}
    heated = [
        k
        for k, d in enumerate(system.devices)
        if ("R_th_ja" in d.ratings and d.name not in shared) or (d.name in shared and "R_th_jc" in d.ratings)
    ]
    r = np.zeros((len(heated), len(heated)))
    for a, k in enumerate(heated):
        device = system.devices[k]
        path = shared.get(device.name)
        if path is None:
            r[a, a] = device.ratings["R_th_ja"].nominal
            continue
        for b, other in enumerate(heated):
            if system.devices[other].name in path.devices:
                r[a, b] += path.R_th.nominal
        r[a, a] += device.ratings["R_th_jc"].nominal
    return Heat(np.array(heated, dtype=np.intp), r)


def with_axis(num: Numbers) -> Numbers:
    """The numbers with one more axis before the last, so that a batch meets a second batch axis."""

    def grow(a: Array) -> Array:
        return a[..., None, :] if a.ndim > 1 else a

    groups = tuple((f, i, {k: grow(v) for k, v in p.items()}) for f, i, p in num.branches.groups)
    return replace(
        num,
        g=grow(num.g),
        s=grow(num.s),
        inject=grow(num.inject),
        sense=grow(num.sense),
        branches=type(num.branches)(groups, num.branches.m),
    )


@dataclass(frozen=True)
class Warming:
    """How a batch of boards answers to each heated temperature alone: dx/dT (batch, h, n) and K = dP/dT with the
    circuit responding, W/K, shape (batch, h, h), one column a temperature."""

    dx: Array
    slopes: Array


def warming(system: System, heat: Heat, solved: Solved, linear: Linear) -> Warming:
    """Measured by stamping once more at slightly higher temperatures; ``solved`` has one batch axis."""
    warmer = solved.temperature + _DELTA
    num = system.numbers(solved.overrides, warmer, solved.ambient, solved.num.batch)
    sums = system.handle_sums(num, solved.x, num.branches.value(solved.u)[0])
    explicit = (sums - solved.handle_sums) / _DELTA
    column = np.full(len(system.devices), -1, dtype=np.intp)
    column[heat.devices] = np.arange(len(heat.devices))
    of_handle = column[system.handle_device]
    d = np.zeros((explicit.shape[0], len(heat.devices), explicit.shape[-1]))
    known = np.flatnonzero(of_handle >= 0)
    d[:, of_handle[known], known] = explicit[:, known]
    dx = respond(system, solved, d, linear)
    return Warming(dx, np.swapaxes(power_change(system, heat, solved, d, dx), -1, -2))


def power_change(system: System, heat: Heat, solved: Solved, d: Array, dx: Array) -> Array:
    """The change of the heated devices' powers for explicit changes d (batch, k, handles) of the balances and the
    answer dx (batch, k, n): shape (batch, k, h)."""
    num = with_axis(solved.num)
    slope = solved.num.branches.value(solved.u)[1][:, None, :]
    di = linear_sums(system, num, dx, slope) + d
    pins = len(system.pins)
    dv = system.pin_voltages(dx)
    i, v = solved.handle_sums[:, None, :pins], solved.pin_voltages[:, None, :]
    return np.asarray(system.to_devices.spread(dv * i + v * di[..., :pins])[..., heat.devices])


def respond(system: System, solved: Solved, d: Array, linear: Linear) -> Array:
    """dx = -J^-1 (d summed to rows), for d of shape (batch, k, handles): shape (batch, k, n)."""
    right = -system.to_rows.spread(d)
    slope = solved.num.branches.value(solved.u)[1]
    return linear.solve_many(system, solved.num, slope, right)


def linear_sums(system: System, num: Numbers, dx: Array, slope: Array) -> Array:
    """The change of every handle's balance for a change dx of the unknowns at fixed numbers."""
    still = replace(num, s=num.s * 0.0)
    return system.handle_sums(still, dx, slope * system.sense(num, dx))


def loop_gain(heat: Heat, slopes: Array, share: float = 1.0) -> tuple[Array, Array]:
    """The matrix share R K and its largest real eigenvalue, for slopes (..., h, h).

    Where the electrical part is singular its slopes are no numbers: they count as no answer (0) then.
    """
    gain = share * heat.resistance @ np.where(np.isfinite(slopes), slopes, 0.0)
    values = np.linalg.eigvals(gain)
    return gain, np.asarray(np.where(np.abs(values.imag) < 1e-9, values.real, -np.inf).max(axis=-1))


def closed_loop(gain: Array, rise: Array) -> Array:
    """(1 - gain)^-1 rise, for gain (..., h, h) and rise (..., h, k); the open loop's rise where the loop is singular."""
    with np.errstate(all="ignore"):
        try:
            return np.asarray(np.linalg.solve(np.eye(gain.shape[-1]) - gain, rise))
        except np.linalg.LinAlgError:
            return rise
