"""``point/zener-starved`` and ``point/drop-out``: references and regulators that cannot hold their voltage."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

import numpy as np

from netaudit.audit.context import CONDUCTS, POWERED, REACHED, Context, knee
from netaudit.audit.tasks import Task, made
from netaudit.audit.worst import Extreme
from netaudit.circuit.circuit import Circuit
from netaudit.devices.base import Array, Device
from netaudit.finding import Finding
from netaudit.quantities.write import engineering
from netaudit.solve.solved import Solved

#: rounding that still counts as being exactly at a limit
_EXACT = 1e-9


def reference_tasks(device: Device, circuit: Circuit, known: Context) -> Iterator[Task]:
    """The task of a zener or shunt reference: its current against the knee."""
    least = knee(device)
    if device.words.get("use") == "clamp" or least is None:
        return
    regulates = device.name in known.regulating
    yield Task(
        lambda b: least - b.view(device.name).i("K"),
        lambda e, n: _starved(e, n, device, circuit, least, regulates),
    )


def _starved(
    extreme: Extreme, nominal: Solved, device: Device, circuit: Circuit, least: float, regulates: bool
) -> Iterable[Finding]:
    current = float(extreme.board.view(device.name).i("K"))
    if current >= least * (1 - _EXACT):
        return
    now = nominal.view(device.name)
    carries = float(now.i("K")) > CONDUCTS
    powered = carries or float(now.v("K") - now.v("A")) > POWERED
    # a reference that a mode leaves without power is off, not starved; one that never regulates may be a clamp
    if not (powered if regulates else carries):
        return
    yield made(
        "point/zener-starved", "warning", device, circuit.mode,
        f"its current falls to {engineering(max(current, 0.0), 'A')}, below the {engineering(least, 'A')} it needs to "
        "hold its voltage: lower the series resistance, or write use=clamp if it is meant to stay off",
        extreme.corner, quantity="current", value=current, limit=least, unit="A",
    )  # fmt: skip


def regulator_tasks(device: Device, circuit: Circuit) -> Iterator[Task]:
    """The current limit, and the headroom of a regulator (V_drop) or the least input of a converter (V_I_min)."""
    if device.words.get("state") == "off":
        return
    if "limit" in device.values:
        yield Task(lambda b: _share(b, device) - REACHED, lambda e, n: _limiting(e, device, circuit))
    symbol = "V_drop" if device.kind == "regulator" else "V_I_min"
    if symbol in device.values:
        yield Task(lambda b: _lacking(b, device), lambda e, n: _drop_out(e, n, device, circuit))


def _share(board: Solved, device: Device) -> Array:
    """Output current over its limit."""
    view = board.view(device.name)
    return np.asarray(-view.i("OUT") / view.value("limit"))


def _limiting(extreme: Extreme, device: Device, circuit: Circuit) -> Iterable[Finding]:
    if extreme.value < 0:
        return
    view = extreme.board.view(device.name)
    volts, limit = float(view.v("OUT") - view.v("GND")), float(view.value("limit"))
    yield made(
        "point/supply-limiting", "error", device, circuit.mode,
        f"it is in its current limit of {engineering(limit, 'A')} and its output falls to {engineering(volts, 'V')}: "
        "lower the load or choose a stronger one",
        extreme.corner, net=device.pins["OUT"], quantity="current", value=limit, limit=limit, unit="A",
    )  # fmt: skip


def _input(board: Solved, device: Device) -> Array:
    """The input voltage in the direction of the output voltage."""
    view = board.view(device.name)
    sign = -1.0 if device.nominal("value", 0.0) < 0 else 1.0
    return np.asarray(sign * (view.v("IN") - view.v("GND")))


def _needed(board: Solved, device: Device) -> Array:
    """The least input voltage: |V_set| + V_drop, or V_I_min."""
    view = board.view(device.name)
    if device.kind == "regulator":
        return np.asarray(np.abs(view.value("value")) + view.value("V_drop"))
    return np.asarray(view.value("V_I_min"))


def _lacking(board: Solved, device: Device) -> Array:
    return _needed(board, device) - _input(board, device)


def _drop_out(extreme: Extreme, nominal: Solved, device: Device, circuit: Circuit) -> Iterable[Finding]:
    given, needed = float(_input(extreme.board, device)), float(_needed(extreme.board, device))
    # one without power is off, but an input that is left open has none in any mode
    off = float(_input(nominal, device)) < POWERED and "IN" not in device.open_pins
    if given >= needed * (1 - _EXACT) or off:
        return
    yield made(
        "point/drop-out", "error", device, circuit.mode,
        f"its input of {engineering(given, 'V')} is below the {engineering(needed, 'V')} it needs to hold its output: "
        "raise the input voltage or choose a regulator with less drop-out",
        extreme.corner, net=device.pins["IN"], quantity="voltage", value=given, limit=needed, unit="V",
    )  # fmt: skip
