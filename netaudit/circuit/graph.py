"""The graph of one mode: nets and devices, an edge a pin; what conducts, what is stiff, what hangs together."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from netaudit.circuit.circuit import Circuit
from netaudit.devices import KINDS
from netaudit.devices.base import Device


@dataclass(frozen=True)
class Pin:
    device: Device
    name: str


class Islands:
    """Union-find over net names."""

    def __init__(self, nets: Iterable[str]) -> None:
        self.parent = {net: net for net in nets}

    def find(self, net: str) -> str:
        parent = self.parent
        while parent[net] != net:
            parent[net] = parent[parent[net]]
            net = parent[net]
        return net

    def join(self, a: str, b: str) -> None:
        self.parent[self.find(a)] = self.find(b)

    def members(self) -> dict[str, list[str]]:
        """Nets by island, both in the order of the nets."""
        out: dict[str, list[str]] = {}
        for net in self.parent:
            out.setdefault(self.find(net), []).append(net)
        return out


class Graph:
    """The graph of a circuit; ``on_net`` lists the pins of every net."""

    def __init__(self, circuit: Circuit) -> None:
        self.circuit = circuit
        self.on_net: dict[str, list[Pin]] = {net: [] for net in circuit.nets}
        for device in circuit.devices:
            for pin, net in device.pins.items():
                self.on_net.setdefault(net, []).append(Pin(device, pin))
        self.islands = self.joined(circuit.devices)

    def joined(self, devices: Iterable[Device]) -> Islands:
        """Islands of nets that the given devices join conductively."""
        islands = Islands(self.on_net)
        for device in devices:
            for group in conducting(device):
                for pin in group[1:]:
                    islands.join(device.pins[pin], device.pins[group[0]])
        return islands

    def open_contacts(self) -> Iterator[tuple[Device, tuple[str, ...]]]:
        """Contacts that are open in this mode and the pins they would join."""
        for device in self.circuit.devices:
            if device.kind == "switch" and device.words.get("state") == "open":
                yield device, ("1", "2")
            elif device.kind == "relay":
                yield device, ("COM", "NO", "NC")
            elif device.kind in ("fuse", "supply") and device.words.get("state") in ("open", "off"):
                yield device, tuple(device.pins)


def conducting(device: Device) -> tuple[tuple[str, ...], ...]:
    """Groups of pins that conduct; a part without a model conducts nothing."""
    return () if device.missing else KINDS[device.kind].conducts(device)


def is_stiff(device: Device) -> bool:
    """Whether nothing in the device limits current between its two pins: an ideal supply, a short."""
    if device.missing or len(device.pins) != 2:
        return False
    zero = {"link": "R", "inductor": "R", "fuse": "R", "switch": "R_on", "supply": "R"}
    if device.kind == "supply":
        return device.words.get("state") != "off" and device.nominal("R", 0.0) == 0.0
    if device.kind == "resistor":
        return device.nominal("value", 1.0) == 0.0
    if device.kind in zero and conducting(device):
        return device.nominal(zero[device.kind], 0.0) == 0.0
    return False
