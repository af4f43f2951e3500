"""Reference nets and current unknowns: what has to be settled before a circuit can become a matrix."""

from __future__ import annotations

from collections.abc import Sequence

from netaudit.circuit.circuit import Circuit
from netaudit.circuit.loops import stiff_loops
from netaudit.devices import KINDS
from netaudit.devices.base import Device

#: conductance ratio beyond which a difference of two node voltages no longer carries a resistor's current
_RATIO = 1e4
#: above this resistance the rounding of a kilovolt is below 1e-18 A and the current unknown buys nothing
_HIGH = 1e5
_RESISTIVE = frozenset({"resistor", "thermistor", "fuse", "inductor", "link", "switch"})


def references(circuit: Circuit, devices: Sequence[Device], nets: Sequence[str]) -> frozenset[str]:
    """The nets held at 0 V: the grounds, and one net of every conductive island without a ground.

    In an island that nothing joins to a reference only differences have a meaning; its busiest net becomes 0 V.  No
    current can flow through that choice, since nothing else leads out of the island.
    """
    parent = {net: net for net in (*nets, *circuit.grounds)}

    def find(net: str) -> str:
        while parent[net] != net:
            parent[net] = parent[parent[net]]
            net = parent[net]
        return net

    busy = dict.fromkeys(nets, 0)
    for device in devices:
        for net in device.pins.values():
            busy[net] += 1
        for group in KINDS[device.kind].conducts(device):
            for pin in group[1:]:
                parent[find(device.pins[pin])] = find(device.pins[group[0]])
    held = set(circuit.grounds)
    referenced = {find(net) for net in held}
    candidates: dict[str, str] = {}
    for net in nets:
        island = find(net)
        if island not in referenced and (island not in candidates or busy[net] > busy[candidates[island]]):
            candidates[island] = net
    return frozenset(held | set(candidates.values()))


def carried(devices: Sequence[Device]) -> frozenset[str]:
    """Resistive devices whose current is solved as an unknown of its own.

    A current g (v_1 - v_2) inherits the rounding of both voltages, about g |v| 1e-16.  Where a resistance is low (below
    1 ohm) or its conductance is beyond 1e4 times all others at one of its ends (a blocking junction counts as none),
    that error can exceed the current itself.
    """
    ohms = {d.name: _ohms(d) for d in devices if d.kind in _RESISTIVE and len(d.pins) == 2}
    total: dict[str, float] = {}
    for device in devices:
        r = ohms.get(device.name)
        if r is not None:
            for net in device.pins.values():
                total[net] = total.get(net, 0.0) + (1.0 / r if r > 0 else float("inf"))
        elif device.kind == "supply" and device.words.get("state") != "off":
            for net in device.pins.values():
                total[net] = float("inf")
    out = set()
    for device in devices:
        r = ohms.get(device.name)
        if r is None or r > _HIGH:
            continue
        if r < 1.0 or any(1.0 / r > _RATIO * (total[net] - 1.0 / r) for net in device.pins.values()):
            out.add(device.name)
    return frozenset(out)


def shared(devices: Sequence[Device]) -> frozenset[str]:
    """Devices of 0 ohm in loops without a supply: the voltages are fine, but the current's share is undetermined.

    Each of them gets the same small resistance when it is stamped, so that the current shares evenly.
    """
    loops = (loop for loop in stiff_loops(devices) if all(d.kind != "supply" for d in loop))
    return frozenset(d.name for loop in loops for d in loop)


def _ohms(device: Device) -> float:
    if device.kind in ("resistor", "thermistor"):
        return device.nominal("value", 0.0)
    return device.nominal("R_on" if device.kind == "switch" else "R", 0.0)
