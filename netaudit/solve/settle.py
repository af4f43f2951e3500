"""One circuit or a batch of value sets, settled: electrical Newton inside, temperatures outside."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Array, Value
from netaudit.solve.heat import Heat, closed_loop, heat_paths, loop_gain, warming
from netaudit.solve.ladder import climb
from netaudit.solve.linear import Linear, choose
from netaudit.solve.newton import newton, seen_resistance
from netaudit.solve.solved import Solved
from netaudit.solve.system import Numbers, Overrides, System

#: temperatures settled to this, kelvin
TEMPERATURE_STEP = 1e-7
#: a junction does not warm by hundreds of kelvin in one honest step: this keeps the laws where they are smooth
_STRIDE = 60.0
#: turns of the thermal loop by the chord of a board nearby before the members' own matrices are worked out
_CHORDS = 14
#: from this many members on a batch runs through the straight-line elimination, up to this many unknowns
_STRAIGHT_MEMBERS, _STRAIGHT_UNKNOWNS = 48, 600
#: beyond these a junction law has no meaning; iterates are kept between them
COLDEST, HOTTEST = -270.0, 3000.0


@dataclass(frozen=True)
class Job:
    """What is to be solved: values that differ from nominal (one batch axis), ambient in degC, and a start.

    ``share`` scales every thermal resistance (1 is the board as it is).  ``gain`` is the loop's matrix at a board
    nearby: temperatures then move by its chord, which costs nothing, before the members' own matrices are worked out.
    """

    overrides: Overrides
    ambient: Value
    count: int
    u0: Array
    t0: Array
    share: float = 1.0
    gain: Array | None = None


@dataclass(frozen=True)
class Settled:
    """Solutions of a Job: which converged, by which method and in how many steps, and the largest loop gain."""

    solved: Solved
    converged: np.ndarray
    method: tuple[str, ...]
    iterations: np.ndarray
    gain: Array
    gain_matrix: Array | None = None


class Solver:
    """A system with its heat paths and linear algebra, ready to settle jobs."""

    def __init__(self, system: System) -> None:
        self.system = system
        self.heat: Heat = heat_paths(system, system.circuit)
        self.linear: Linear = choose(system)
        self._straight: Linear | None = None

    def job(self, overrides: Overrides | None = None, ambient: Value | None = None, count: int = 1) -> Job:
        """A job that starts from rest: all branch values zero, everything at ambient."""
        air: Value = self.system.circuit.ambient.nominal if ambient is None else ambient
        t0 = np.broadcast_to(np.asarray(air, dtype=float).reshape(-1, 1), (count, len(self.system.devices))).copy()
        return Job(overrides or {}, air, count, np.tile(self.system.start, (count, 1)), t0)

    def settle(self, job: Job, remedies: bool = True) -> Settled:
        """Electrical and thermal unknowns together; without ``remedies`` members that Newton misses stay unconverged."""
        temperature, u = job.t0.copy(), job.u0.copy()
        total = np.zeros(job.count, dtype=int)
        methods = ["newton"] * job.count
        gain = np.zeros(job.count)
        matrix: Array | None = None
        for turn in range(40):
            num = self.system.numbers(job.overrides, temperature, job.ambient, (job.count,))
            x, u, good, steps, named = self._electrical(num, u, remedies)
            total += steps
            methods = [n if n != "newton" else m for n, m in zip(named, methods, strict=True)]
            solved = Solved(self.system, num, x, u, temperature, job.ambient, job.overrides)
            if not self.heat.any or not good.any():
                return Settled(solved, good, tuple(methods), total, gain, matrix)
            if job.gain is not None and turn < _CHORDS:
                step = np.clip(closed_loop(job.gain, self._thermal_rest(solved, job).T).T, -_STRIDE, _STRIDE)
            else:
                step, gain, matrix = self._thermal_step(solved, job)
            moving = good & ~(np.abs(step).max(axis=-1) < TEMPERATURE_STEP)
            if not moving.any():
                return Settled(solved, good, tuple(methods), total, gain, matrix)
            moved = temperature[:, self.heat.devices] + np.where(good[:, None] & np.isfinite(step), step, 0.0)
            temperature = temperature.copy()
            temperature[:, self.heat.devices] = np.clip(moved, COLDEST, HOTTEST)
        return Settled(solved, good & ~moving, tuple(methods), total, gain, matrix)

    def prepare(self, board: Solved) -> None:
        """Works out the elimination order for large batches on a solved board (a batch of one)."""
        from netaudit.solve.straight import Straight

        if self._straight is None and self.system.n <= _STRAIGHT_UNKNOWNS:
            slope = board.num.branches.value(board.u)[1]
            still = np.zeros((1, self.system.n))
            z = self.linear.solve(self.system, board.num, slope, still, 0)[1]
            self._straight = Straight.build(self.system, board.num, slope, seen_resistance(z, slope)[0])

    def _linear_for(self, count: int) -> Linear:
        return self._straight if self._straight is not None and count >= _STRAIGHT_MEMBERS else self.linear

    def _electrical(
        self, num: Numbers, u: Array, remedies: bool
    ) -> tuple[Array, Array, np.ndarray, np.ndarray, list[str]]:
        result = newton(self.system, num, u, self._linear_for(len(u)))
        x, u, good = result.x.copy(), result.u.copy(), result.converged.copy()
        steps = result.iterations.copy()
        named = ["newton"] * len(u)
        for k in np.flatnonzero(~good) if remedies else ():
            one = num.single(int(k))
            found = climb(self.system, one, self.system.start, self.linear)
            steps[k] += found.iterations
            named[k] = found.method
            if found.x is not None:
                x[k], u[k], good[k] = found.x, found.u, True
        # a member that was not found is marked as such; what it carries on must still be numbers
        lost = ~good & ~(np.isfinite(x).all(axis=-1) & np.isfinite(u).all(axis=-1))
        x[lost], u[lost] = 0.0, self.system.start
        return x, u, good, steps, named

    def thermal_gain(self, solved: Solved) -> Array:
        """The loop's matrix R K (h, h) at a board (a batch of one)."""
        return np.asarray(loop_gain(self.heat, warming(self.system, self.heat, solved, self.linear).slopes)[0][0])

    def _thermal_rest(self, solved: Solved, job: Job) -> Array:
        """By how much the heated temperatures (batch, h) miss ambient plus R P."""
        power = solved.powers[:, self.heat.devices]
        air = np.asarray(job.ambient, dtype=float).reshape(-1, 1)
        return np.asarray(air + power @ (job.share * self.heat.resistance).T - solved.temperature[:, self.heat.devices])

    def _thermal_step(self, solved: Solved, job: Job) -> tuple[Array, Array, Array]:
        """The Newton step of the heated temperatures (batch, h), the largest loop gain and the gain matrix."""
        heat = self.heat
        rest = self._thermal_rest(solved, job)
        slopes = warming(self.system, heat, solved, self.linear).slopes
        gain, largest = loop_gain(heat, slopes, job.share)
        step = closed_loop(gain, rest[..., None])[..., 0]
        return np.clip(step, -_STRIDE, _STRIDE), largest, gain
