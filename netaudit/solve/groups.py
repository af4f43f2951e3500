"""Groups of parts that really interact: a circuit cut apart at the nets that stiff supplies hold.

A net that a chain of ideal supplies ties to a reference has one voltage whatever the parts on it do, so parts that meet
only there cannot influence each other.  Each group may then be asked on its own how many operating points it has, and
the points of the whole are all their combinations.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

from netaudit.circuit.circuit import Circuit
from netaudit.devices import KINDS
from netaudit.devices.base import Device


@dataclass(frozen=True)
class Group:
    """Devices that influence each other, without the supplies that hold their rails; ``settled``: every device
    increasing, so that the group has exactly one operating point; ``awkward`` names the devices that prevent that."""

    devices: tuple[Device, ...]
    awkward: tuple[str, ...]

    @property
    def settled(self) -> bool:
        return not self.awkward


def is_stiff(device: Device) -> bool:
    """An ideal supply: no output resistance; a current limit is looked at afterwards (``limited``)."""
    return device.kind == "supply" and device.words.get("state") != "off" and device.nominal("R", 0.0) == 0.0


def rails(circuit: Circuit) -> frozenset[str]:
    """The nets with a voltage of their own: grounds and what stiff supplies tie to them."""
    held = set(circuit.grounds)
    supplies = [d for d in circuit.devices if is_stiff(d) and len(d.pins) == 2]
    grown = True
    while grown:
        grown = False
        for supply in supplies:
            ends = set(supply.pins.values())
            if len(ends & held) == 1:
                held |= ends
                grown = True
    return frozenset(held)


def groups(circuit: Circuit) -> tuple[Group, ...]:
    """The interacting groups of a circuit, in the order of their first device."""
    held = rails(circuit)
    parent: dict[str, str] = {}

    def find(net: str) -> str:
        parent.setdefault(net, net)
        while parent[net] != net:
            parent[net] = parent[parent[net]]
            net = parent[net]
        return net

    lone: list[Device] = []
    members: list[Device] = []
    for device in circuit.devices:
        if device.missing or (is_stiff(device) and set(device.pins.values()) <= held):
            continue
        free = [net for net in device.pins.values() if net not in held]
        for net in free[1:]:
            parent[find(net)] = find(free[0])
        (members if free else lone).append(device)
    sorted_out: dict[str, list[Device]] = {}
    for device in members:
        first = next(net for net in device.pins.values() if net not in held)
        sorted_out.setdefault(find(first), []).append(device)
    return tuple(_group(ds) for ds in [*sorted_out.values(), *([d] for d in lone)])


def _group(devices: list[Device]) -> Group:
    awkward = tuple(d.name for d in devices if KINDS[d.kind].growth(d) != "increasing")
    return Group(tuple(devices), awkward)


def alone(circuit: Circuit, group: Group) -> Circuit:
    """The circuit of one group with the stiff supplies that hold its rails."""
    held = rails(circuit)
    supplies = [d for d in circuit.devices if is_stiff(d) and not d.missing and set(d.pins.values()) <= held]
    devices = (*supplies, *group.devices)
    touched = {net for d in devices for net in d.pins.values()}
    nets = tuple(net for net in circuit.nets if net in touched)
    names = {d.name for d in devices}
    paths = tuple(p for p in circuit.heat_paths if set(p.devices) <= names)
    return replace(circuit, devices=devices, nets=nets, heat_paths=paths)


def limited(circuit: Circuit) -> tuple[str, ...]:
    """Stiff supplies with a current limit: the cut holds only while they stay below it."""
    return tuple(d.name for d in circuit.devices if is_stiff(d) and "limit" in d.values)
