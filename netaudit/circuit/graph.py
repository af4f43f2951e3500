"""The graph of one mode: nets and devices, an edge a pin; what conducts, what is stiff, what hangs together."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import NamedTuple

from netaudit.circuit.circuit import Circuit
from netaudit.devices import KINDS
from netaudit.devices.base import Device


class Pin(NamedTuple):
    """A pin of a device; a plain tuple, since a large board has a hundred thousand of them."""

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
    """The graph of a circuit; ``on_net`` lists the pins of every net (open pins have a net of their own)."""

    def __init__(self, circuit: Circuit) -> None:
        self.circuit = circuit
        self.named = frozenset(circuit.nets)
        self.on_net: dict[str, list[Pin]] = {net: [] for net in circuit.nets}
        for device in circuit.devices:
            for pin, net in device.pins.items():
                self.on_net.setdefault(net, []).append(Pin(device, pin))
        self.groups = [(device, conducting(device)) for device in circuit.devices]
        self.islands = self.joined()

    def joined(self, control: bool = True) -> Islands:
        """Islands of nets that devices join conductively; without ``control`` a control pin (a base, a gate) does not
        count as joined to the rest of its device."""
        islands = Islands(self.on_net)
        for device, groups in self.groups:
            left_out = () if control or device.missing else KINDS[device.kind].controls(device)
            for group in groups:
                pins = [pin for pin in group if pin not in left_out]
                for pin in pins[1:]:
                    islands.join(device.pins[pin], device.pins[pins[0]])
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


def conductive_islands(circuit: Circuit) -> tuple[tuple[str, ...], ...]:
    """The nets by conductively connected part of the circuit, both in the order of the nets."""
    return tuple(tuple(nets) for nets in Graph(circuit).islands.members().values())


def conductive_blocks(circuit: Circuit) -> tuple[frozenset[str], ...]:
    """Devices by biconnected block: only within a block can a current that leaves a device come back to it.

    The nets are the vertices, every conducting pin pair an edge; devices in parallel share a block.
    """
    import networkx as nx

    graph = nx.Graph()
    devices: dict[frozenset[str], set[str]] = {}
    for device in circuit.devices:
        for group in conducting(device):
            for pin in group[1:]:
                ends = (device.pins[group[0]], device.pins[pin])
                if ends[0] != ends[1]:
                    graph.add_edge(*ends)
                    devices.setdefault(frozenset(ends), set()).add(device.name)
    components = nx.biconnected_component_edges(graph)
    return tuple(frozenset().union(*(devices[frozenset(edge)] for edge in edges)) for edges in components)


#: kinds that are a short when this resistance is 0
_SHORTS = {"link": "R", "inductor": "R", "fuse": "R", "switch": "R_on"}


def stiff_pairs(device: Device) -> tuple[tuple[str, str], ...]:
    """Pairs of pins between which nothing in the device limits the current: an ideal supply, a short, a closed contact
    of 0 ohm, a wiper at the end of its track."""
    if device.missing:
        return ()
    kind, state = device.kind, device.words.get("state")
    if kind == "supply":
        return (("+", "-"),) if state != "off" and device.nominal("R", 0.0) == 0.0 else ()
    if kind == "resistor":
        return (("1", "2"),) if device.nominal("value") == 0.0 else ()
    if kind in _SHORTS:
        closed = state != "open" and device.nominal(_SHORTS[kind], 0.0) == 0.0
        return (("1", "2"),) if closed else ()
    if kind == "relay":
        return (("COM", "NO" if state == "on" else "NC"),) if device.nominal("R_on", 0.0) == 0.0 else ()
    if kind == "trimmer":
        ends = {0.0: (("1", "W"),), 1.0: (("W", "2"),)}
        return ends.get(device.nominal("at", 0.5), ())
    return ()
