"""``expect/missed``: requirements of the netlist, looked at over the whole box at both ends."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator

import numpy as np

from netaudit.audit.tasks import Task
from netaudit.audit.worst import Extreme
from netaudit.circuit.circuit import Board, Circuit, Expectation
from netaudit.devices import KINDS
from netaudit.devices.base import Array
from netaudit.finding import Finding
from netaudit.quantities.write import engineering
from netaudit.solve.solved import Solved

_UNITS = {"voltage": "V", "current": "A", "power": "W", "temperature": "degC"}


def expectation_tasks(board: Board, circuit: Circuit, present: frozenset[str]) -> Iterator[Task]:
    """Two tasks for each requirement of the mode (one where it is one-sided)."""
    for wanted in board.expectations:
        if wanted.mode is not None and wanted.mode != circuit.mode:
            continue
        if wanted.device is not None and wanted.device not in present:
            continue
        for sign, bound in ((1.0, wanted.high), (-1.0, wanted.low)):
            if math.isfinite(bound):
                yield _task(wanted, circuit, sign, bound)


def _task(wanted: Expectation, circuit: Circuit, sign: float, bound: float) -> Task:
    def objective(board: Solved) -> Array:
        return np.asarray(sign * measured(wanted, board))

    def verdict(extreme: Extreme, nominal: Solved) -> Iterable[Finding]:
        found = sign * extreme.value
        slack = 1e-9 * max(abs(bound), abs(found))
        if sign * (found - bound) > slack:
            yield _missed(wanted, circuit, found, bound, sign, extreme)

    return Task(objective, verdict)


def measured(wanted: Expectation, board: Solved) -> Array:
    """What the requirement speaks of, on a batch of boards."""
    if wanted.quantity == "voltage":
        volts = board.net(wanted.nets[0])
        return volts - board.net(wanted.nets[1]) if len(wanted.nets) > 1 else volts
    name = wanted.device or ""
    view = board.view(name)
    if wanted.quantity == "power":
        return view.power
    if wanted.quantity == "temperature":
        return view.temperature
    if wanted.pin is not None:
        return view.i(wanted.pin)
    device = board.system.devices[board.system.index_of[name]]
    return KINDS[device.kind].requirement(view, device)


def _missed(
    wanted: Expectation, circuit: Circuit, found: float, bound: float, sign: float, extreme: Extreme
) -> Finding:
    unit = _UNITS[wanted.quantity]
    target = " to ".join(wanted.nets) or f"{wanted.device}{':' + wanted.pin if wanted.pin else ''}"
    end = "upper" if sign > 0 else "lower"
    return Finding(
        "expect/missed",
        "error",
        f"the {wanted.quantity} of {target} reaches {engineering(found, unit, 4)}, beyond the {end} end "
        f"{engineering(bound, unit, 4)} that is expected: change the circuit or the expectation",
        device=wanted.device,
        net=wanted.nets[0] if wanted.nets else None,
        pin=wanted.pin,
        quantity=wanted.quantity,
        value=found,
        limit=bound,
        unit=unit,
        mode=circuit.mode,
        corner=extreme.corner,
        file=wanted.place.file,
        line=wanted.place.line,
    )
