"""``point/…``: what the operating point itself says about supplies, references and drives."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from typing import Any

import numpy as np

from netaudit.audit.rule import about
from netaudit.audit.tasks import Task
from netaudit.audit.worst import Extreme
from netaudit.circuit.circuit import Board, Circuit
from netaudit.devices.base import Array, Device
from netaudit.devices.supply import limiting
from netaudit.finding import Finding, Level
from netaudit.quantities.write import engineering
from netaudit.solve.solved import Solved

#: a junction conducts above this, A
CONDUCTS = 10e-6
#: a limit is reached at this share of it
REACHED = 0.999
#: an off supply's net above this is fed, V
_FED_VOLTS = 0.3

Margin = Callable[[Solved], Array]


def point_tasks(circuit: Circuit, board: Board, regulating: frozenset[str]) -> Iterator[Task]:
    """Tasks of all point rules of a mode; ``regulating``: references that regulate in some mode or are expected to."""
    from netaudit.audit.device_points import device_tasks

    for device in circuit.devices:
        if device.missing:
            continue
        if device.kind == "supply":
            yield from _supply_tasks(device, circuit)
        elif device.kind == "zener" and "I_ZK" in {**device.ratings, **device.values}:
            yield from _zener_tasks(device, circuit, regulating)
        yield from device_tasks(device, circuit, regulating)


def make(
    rule: str, level: Level, device: Device, circuit: Circuit, text: str, extreme: Extreme, **fields: Any
) -> Finding:
    """A finding of a point rule at the corner of an extreme."""
    return Finding(
        rule, level, f"{device.name}: {text}", mode=circuit.mode, corner=extreme.corner, **about(device), **fields
    )


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
    yield make(
        "point/supply-limiting", "error", device, circuit,
        f"the supply is in its current limit of {engineering(limit, 'A')} and falls to {engineering(volts, 'V')}: "
        "raise the limit, lower the load, or write limiting=ok if that is meant",
        extreme, quantity="current", value=limit, limit=limit, unit="A",
    )  # fmt: skip


def _pushed(board: Solved, device: Device) -> Array:
    """Amperes pushed into a supply beyond what it can absorb."""
    view = board.view(device.name)
    return np.asarray(_sign(device) * view.i("+") - view.value("sinks"))


def _back_feed_finding(extreme: Extreme, device: Device, circuit: Circuit) -> Iterable[Finding]:
    if extreme.value <= 1e-9 * max(device.nominal("sinks", 0.0), 1e-9):
        return
    view = extreme.board.view(device.name)
    pushed = float(_sign(device) * view.i("+"))
    allowed = float(view.value("sinks"))
    pin = "+" if _sign(device) > 0 else "-"
    yield make(
        "point/back-feed", "error", device, circuit,
        f"{engineering(pushed, 'A')} are pushed back into the supply, which can absorb {engineering(allowed, 'A')}"
        f"{_by(extreme.board, device.pins[pin], device)}: block the path with a diode, or state sinks=",
        extreme, net=device.pins["+"], quantity="current", value=pushed, limit=allowed, unit="A",
    )  # fmt: skip


def _fed(board: Solved, device: Device) -> Array:
    """How far an off supply's net is above 0.3 V while more than 10 uA reach it, in volts (negative: not fed)."""
    view = board.view(device.name)
    volts = _sign(device) * (view.v("+") - view.v("-")) - _FED_VOLTS
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
    yield make(
        "point/back-feed", "error", device, circuit,
        f"the supply is off, but its net {device.pins['+']} is fed to {engineering(volts, 'V')}"
        f"{_by(extreme.board, device.pins['+'], device)}: block the path with a diode or switch it",
        extreme, net=device.pins["+"], quantity="voltage", value=volts, limit=_FED_VOLTS, unit="V",
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


def _zener_tasks(device: Device, circuit: Circuit, regulating: frozenset[str]) -> Iterator[Task]:
    if device.words.get("use") == "clamp":
        return
    knee = device.ratings["I_ZK"].nominal if "I_ZK" in device.ratings else device.nominal("I_ZK")
    yield Task(
        lambda b: knee - b.view(device.name).i("K"),
        lambda e, n: _starved(e, n, device, circuit, knee, regulating),
    )


def _starved(
    extreme: Extreme, nominal: Solved, device: Device, circuit: Circuit, knee: float, regulating: frozenset[str]
) -> Iterable[Finding]:
    view = extreme.board.view(device.name)
    current = float(view.i("K"))
    if current >= knee * (1 - 1e-9):
        return
    now = nominal.view(device.name)
    powered = float(now.v("K") - now.v("A")) > 0.5 * device.nominal("V_Z", 0.0) or float(now.i("K")) > CONDUCTS
    if not powered and device.name not in regulating:
        return
    if device.name not in regulating and float(now.i("K")) <= CONDUCTS:
        return
    yield make(
        "point/zener-starved", "warning", device, circuit,
        f"its current falls to {engineering(max(current, 0.0), 'A')}, below the knee of {engineering(knee, 'A')}: "
        "it no longer holds its voltage; lower the series resistance, or write use=clamp if it is meant to stay off",
        extreme, quantity="current", value=current, limit=knee, unit="A",
    )  # fmt: skip
