"""First-order changes of a solved board for small changes of its values, without a single derivative written by hand.

For a value p the change of every balance at fixed x is measured by stamping once more, dF = F(x; p + h) - F(x; p); the
circuit answers with dx = -J^-1 dF and, where parts heat, with dT = (I - R K)^-1 R dP.  The board moved by (dx, dT) is
handed to whoever wants to know what that does to a stress: any function of a solved batch can be differentiated so.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from netaudit.devices.base import Array, Value
from netaudit.quantities.quantity import Quantity
from netaudit.solve.heat import closed_loop, loop_gain, power_change, respond, warming
from netaudit.solve.linear import Dense
from netaudit.solve.settle import Solver
from netaudit.solve.solved import Solved

#: step of a value as a share of its span: small enough to be local, large against rounding
SHARE = 1e-4
#: numbers held at once while many members are moved, and members at most in one batch
_BUDGET, _MEMBERS = 4_000_000, 4096
#: the same of a large circuit, which is solved member by member
_SPARSE_MEMBERS = 64


@dataclass(frozen=True)
class Variable:
    """A value that varies: ``device`` and ``name`` of the value (both empty for the ambient), its span, and the name
    under which corners show it (``R1``, ``D2.V_Z``, ``ambient``)."""

    key: str
    device: str
    name: str
    quantity: Quantity


def variables(solver: Solver) -> tuple[Variable, ...]:
    """Everything with a span: device values in the order of the netlist, the ambient last."""
    found = [
        Variable(d.name if name == "value" else f"{d.name}.{name}", d.name, name, q)
        for d in solver.system.devices
        for name, q in d.values.items()
        if q.varies
    ]
    ambient = solver.system.circuit.ambient
    if ambient.varies:
        found.append(Variable("ambient", "", "", ambient))
    return tuple(found)


def assign(spans: Sequence[Variable], values: Array, ambient: float) -> tuple[dict[tuple[str, str], Value], Value]:
    """Overrides and ambient for rows of values (members, variables); ambient stays where no variable is the ambient."""
    overrides: dict[tuple[str, str], Value] = {}
    air: Value = ambient
    for k, variable in enumerate(spans):
        if variable.device:
            overrides[(variable.device, variable.name)] = values[..., k]
        else:
            air = values[..., k]
    return overrides, air


def moved(
    solver: Solver,
    solved: Solved,
    spans: Sequence[Variable],
    values: Array,
    groups: NDArray[np.bool_],
    gain: Array | None = None,
) -> Solved:
    """The boards of ``solved`` (one batch axis of V) each moved a little along each group of variables.

    ``values``: (V, variables) as solved; ``groups``: (groups, variables), true where a group has the variable.  Returns a
    batch of V * groups members in that order (group fastest); member (v, k) differs from v by SHARE of the span of each
    variable of its group, inwards where it stands at its high end.  ``gain`` is the thermal loop's matrix at a board
    nearby, which spares the boards' own where there are many.
    """
    count, width = values.shape[0], len(groups)
    step = np.where(groups, steps(spans, values)[:, None, :], 0.0)
    grid = np.repeat(values, width, axis=0) + step.reshape(count * width, -1)
    overrides, air = assign(spans, grid, solver.system.circuit.ambient.nominal)
    air_rows = np.broadcast_to(np.asarray(air, dtype=float), (count * width,))
    air_step = (air_rows - np.repeat(np.broadcast_to(np.asarray(solved.ambient), (count,)), width))[:, None]
    temperature = np.repeat(solved.temperature, width, axis=0) + air_step
    u = np.repeat(solved.u, width, axis=0)
    x = np.repeat(solved.x, width, axis=0)

    def answer() -> tuple[Array, Array]:
        """The change of the balances at fixed unknowns, and the circuit's answer to it."""
        num = solver.system.numbers(overrides, temperature, air_rows, (count * width,))
        sums = solver.system.handle_sums(num, x, num.branches.value(u)[0])
        d = sums.reshape(count, width, -1) - solved.handle_sums[:, None, :]
        return d, respond(solver.system, solved, d, solver.linear)

    d, dx = answer()
    if solver.heat.any and gain is None:
        dx, dt = _with_heat(solver, solved, d, dx)
        temperature[:, solver.heat.devices] += dt.reshape(count * width, -1)
    elif solver.heat.any and gain is not None:
        rise = power_change(solver.system, solver.heat, solved, d, dx) @ solver.heat.resistance.T
        temperature[:, solver.heat.devices] += closed_loop(gain, rise.reshape(count * width, -1).T).T
        _, dx = answer()
    num = solver.system.numbers(overrides, temperature, air_rows, (count * width,))
    x = x + dx.reshape(count * width, -1)
    return Solved(solver.system, num, x, solver.system.sense(num, x), temperature, air_rows, overrides)


def steps(spans: Sequence[Variable], values: Array) -> Array:
    """Signed steps (V, variables): SHARE of each span, towards its inside."""
    low = np.array([v.quantity.low for v in spans])
    high = np.array([v.quantity.high for v in spans])
    size = SHARE * (high - low)
    return np.asarray(np.where(values + size > high, -size, size), dtype=float)


def _with_heat(solver: Solver, solved: Solved, d: Array, dx: Array) -> tuple[Array, Array]:
    """dx and dT with the heated temperatures answering too; d, dx hold the change at fixed temperatures."""
    heat = solver.heat
    warm = warming(solver.system, heat, solved, solver.linear)
    dp = power_change(solver.system, heat, solved, d, dx)
    rise = dp @ heat.resistance.T
    gain, _ = loop_gain(heat, warm.slopes)
    dt = np.swapaxes(closed_loop(gain, np.swapaxes(rise, -1, -2)), -1, -2)
    return dx + dt @ warm.dx, dt


def chunks(solver: Solver, members: int) -> int:
    """How many of so many members are taken at once within the memory budget: a piece of work."""
    system = solver.system
    width = len(system.g_row) + len(system.s_row) + len(system.a_row) + system.n
    dense = isinstance(solver.linear, Dense)
    if dense:
        width += system.n * (system.n + system.m)
    return max(1, min(members, _BUDGET // max(width, 1), _MEMBERS if dense else _SPARSE_MEMBERS))
