"""``point/…``: what the operating point itself says about supplies, references and drives."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

import numpy as np

from netaudit.audit.context import CONDUCTS, POWERED, REACHED, Context
from netaudit.audit.drives import amplifier_tasks, bipolar_tasks, gate_tasks, relay_tasks
from netaudit.audit.references import reference_tasks, regulator_tasks
from netaudit.audit.tasks import Task, made
from netaudit.audit.worst import Extreme
from netaudit.circuit.circuit import Circuit
from netaudit.devices.base import Array, Device
from netaudit.devices.supply import limiting
from netaudit.finding import Finding
from netaudit.quantities.write import engineering
from netaudit.solve.solved import Solved

#: what a supply with ``sinks=no`` is not asked about: leakage below this, A
_NOTHING = 1e-9


def point_tasks(circuit: Circuit, known: Context) -> Iterator[Task]:
    """Tasks of all point rules of a mode."""
    for device in circuit.devices:
        if device.missing:
            continue
        if device.kind == "supply":
            yield from _supply_tasks(device, circuit)
        elif device.kind in ("zener", "shunt-reference"):
            yield from reference_tasks(device, circuit, known)
        elif device.kind in ("regulator", "converter"):
            yield from regulator_tasks(device, circuit)
        elif device.kind in ("npn", "pnp"):
            yield from bipolar_tasks(device, circuit)
        elif device.kind in ("nmos", "pmos"):
            yield from gate_tasks(device, circuit)
        elif device.kind == "opamp":
            yield from amplifier_tasks(device, circuit)
        elif device.kind == "relay":
            yield from relay_tasks(device, circuit, known)


def _supply_tasks(device: Device, circuit: Circuit) -> Iterator[Task]:
    if device.words.get("state") == "off":
        yield Task(lambda b: _fed(b, device), lambda e, n: _fed_finding(e, device, circuit))
        return
    if "limit" in device.values and device.words.get("limiting") != "ok":
        yield Task(lambda b: _limit_share(b, device) - REACHED, lambda e, n: _limiting_finding(e, device, circuit))
    if device.words.get("sinks") != "yes":
        yield Task(lambda b: _pushed(b, device), lambda e, n: _back_feed_finding(e, device, circuit))


def _sign(device: Device) -> float:
    return -1.0 if device.nominal("value", 0.0) < 0 else 1.0


def _limit_share(board: Solved, device: Device) -> Array:
    view = board.view(device.name)
    return np.asarray(-_sign(device) * view.i("+") / view.value("limit"))


def _limiting_finding(extreme: Extreme, device: Device, circuit: Circuit) -> Iterable[Finding]:
    view = extreme.board.view(device.name)
    if not bool(limiting(view, device)):
        return
    limit = float(view.value("limit"))
    volts = float(view.v("+") - view.v("-"))
    yield made(
        "point/supply-limiting", "error", device, circuit.mode,
        f"the supply is in its current limit of {engineering(limit, 'A')} and falls to {engineering(volts, 'V')}: "
        "raise the limit, lower the load, or write limiting=ok if that is meant",
        extreme.corner, quantity="current", value=limit, limit=limit, unit="A",
    )  # fmt: skip


def _pushed(board: Solved, device: Device) -> Array:
    """Amperes pushed into a supply beyond what it can absorb."""
    view = board.view(device.name)
    return np.asarray(_sign(device) * view.i("+") - view.value("sinks"))


def _back_feed_finding(extreme: Extreme, device: Device, circuit: Circuit) -> Iterable[Finding]:
    allowed = device.nominal("sinks", 0.0)
    if extreme.value <= (1e-9 * allowed or _NOTHING):
        return
    view = extreme.board.view(device.name)
    pushed = float(_sign(device) * view.i("+"))
    pin = "+" if _sign(device) > 0 else "-"
    yield made(
        "point/back-feed", "error", device, circuit.mode,
        f"{engineering(pushed, 'A')} are pushed back into the supply{_by(extreme.board, device.pins[pin], device)}, and "
        f"it can absorb {engineering(allowed, 'A')}: block the path with a diode, or state sinks=",
        extreme.corner, net=device.pins["+"], quantity="current", value=pushed, limit=allowed, unit="A",
    )  # fmt: skip


def _fed(board: Solved, device: Device) -> Array:
    """How far an off supply's net is above 0.3 V while more than 10 uA reach it, in volts (negative: not fed)."""
    view = board.view(device.name)
    volts = _sign(device) * (view.v("+") - view.v("-")) - POWERED
    return np.where(feeding(board, device.pins["+"], device.name) > CONDUCTS, volts, np.minimum(volts, -1e-9))


def feeding(board: Solved, net: str, besides: str) -> Array:
    """Amperes that parts deliver into a net."""
    system = board.system
    pins = np.flatnonzero(system.pin_net == system.net_of[net])
    pins = np.array([p for p in pins if system.devices[system.pins[p][0]].name != besides], dtype=np.intp)
    return np.asarray(np.maximum(-board.handle_sums[..., pins], 0.0).sum(axis=-1))


def _fed_finding(extreme: Extreme, device: Device, circuit: Circuit) -> Iterable[Finding]:
    if extreme.value <= 0:
        return
    view = extreme.board.view(device.name)
    volts = float(view.v("+") - view.v("-"))
    yield made(
        "point/back-feed", "error", device, circuit.mode,
        f"the supply is off, but its net {device.pins['+']} is fed to {engineering(volts, 'V')}"
        f"{_by(extreme.board, device.pins['+'], device)}: block the path with a diode or switch it",
        extreme.corner, net=device.pins["+"], quantity="voltage", value=volts, limit=POWERED, unit="V",
    )  # fmt: skip


def _by(board: Solved, net: str, supply: Device) -> str:
    """`` by PS1 over R1, D1``: the path along which most of the current comes."""
    path = feed_path(board, net, supply.name)
    return f" by way of {', '.join(path)}" if path else ""


def feed_path(board: Solved, net: str, besides: str) -> list[str]:
    """The parts along which most current reaches a net, from the source to the net."""
    system = board.system
    path: list[str] = []
    seen = {besides}
    while len(path) < 20:
        pins = np.flatnonzero(system.pin_net == system.net_of[net])
        pins = np.array([p for p in pins if system.devices[system.pins[p][0]].name not in seen], dtype=np.intp)
        if not len(pins):
            break
        best = int(pins[np.argmin(board.handle_sums[pins])])
        if board.handle_sums[best] > -1e-9:
            break
        number = system.pins[best][0]
        device = system.devices[number]
        path.insert(0, device.name)
        seen.add(device.name)
        if device.kind in ("supply", "current-source"):
            break
        entering = max(system.pin_numbers[number].items(), key=lambda item: board.handle_sums[item[1]])
        net = device.pins[entering[0]]
    return path
