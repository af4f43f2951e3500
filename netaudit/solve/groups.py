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

#: kinds of which each conducting group of pins stands for itself; in others pins that conduct nothing may control
_APART = frozenset({"relay", "connector", "testpoint", "capacitor", "switch", "fuse"})


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


def rails(circuit: Circuit, strict: bool = False) -> frozenset[str]:
    """The nets with a voltage of their own: grounds and what stiff supplies tie to them.

    ``strict`` counts supplies with a current limit as soft: beyond it they let the voltage go.
    """
    held = set(circuit.grounds)
    supplies = [d for d in circuit.devices if is_stiff(d) and len(d.pins) == 2 and not (strict and "limit" in d.values)]
    grown = True
    while grown:
        grown = False
        for supply in supplies:
            ends = set(supply.pins.values())
            if len(ends & held) == 1:
                held |= ends
                grown = True
    return frozenset(held)


def groups(circuit: Circuit, strict: bool = False) -> tuple[Group, ...]:
    """The interacting groups of a circuit, in the order of their first device; ``strict`` as for ``rails``."""
    held = rails(circuit, strict)
    parent: dict[str, str] = {}

    def find(net: str) -> str:
        parent.setdefault(net, net)
        while parent[net] != net:
            parent[net] = parent[parent[net]]
            net = parent[net]
        return net

    lone: list[Device] = []
    members: list[tuple[Device, str]] = []
    for device in circuit.devices:
        if device.missing or (is_stiff(device) and set(device.pins.values()) <= held):
            continue
        free = []
        for pins in _joined(device):
            nets = [device.pins[pin] for pin in pins if device.pins[pin] not in held]
            for net in nets[1:]:
                parent[find(net)] = find(nets[0])
            free += nets[:1]
        if device.kind == "relay" and len(free) > 1:
            # coil and contact do not influence each other, but the device stands in one circuit only
            parent[find(free[1])] = find(free[0])
        if free:
            members.append((device, free[0]))
        elif _joined(device):
            lone.append(device)
    sorted_out: dict[str, list[Device]] = {}
    for device, first in members:
        sorted_out.setdefault(find(first), []).append(device)
    return tuple(_group(ds) for ds in [*sorted_out.values(), *([d] for d in lone)])


def _joined(device: Device) -> tuple[tuple[str, ...], ...]:
    """Sets of pins that interact: all pins of a device but those that neither conduct nor control."""
    kind = KINDS[device.kind]
    conducting = kind.conducts(device)
    if device.kind in _APART:
        return conducting
    if device.kind == "unmodelled":
        pins = {pin for a, b, _ in device.draws for pin in (a, b)}
    elif device.kind == "current-source":
        pins = set(device.pins)
    else:
        pins = {*kind.controls(device), *(pin for group in conducting for pin in group)}
    return (tuple(pin for pin in device.pins if pin in pins),) if pins else ()


def _group(devices: list[Device]) -> Group:
    awkward = tuple(d.name for d in devices if KINDS[d.kind].growth(d) != "increasing")
    return Group(tuple(devices), awkward)


def alone(circuit: Circuit, group: Group, strict: bool = False) -> Circuit:
    """The circuit of one group with the stiff supplies that hold its rails.

    Not ``strict``, those supplies have no current limit: whether the limit is ever reached is another question.
    """
    held = rails(circuit, strict)
    supplies = [
        _unlimited(d)
        for d in circuit.devices
        if is_stiff(d) and not d.missing and set(d.pins.values()) <= held and not (strict and "limit" in d.values)
    ]
    devices = (*supplies, *group.devices)
    touched = {net for d in devices for net in d.pins.values()}
    nets = tuple(net for net in circuit.nets if net in touched)
    names = {d.name for d in devices}
    paths = tuple(p for p in circuit.heat_paths if set(p.devices) <= names)
    grounds = tuple(net for net in circuit.grounds if net in touched)
    return replace(circuit, devices=devices, nets=nets, grounds=grounds, heat_paths=paths)


def _unlimited(device: Device) -> Device:
    return replace(device, values={k: v for k, v in device.values.items() if k != "limit"})


def limited(circuit: Circuit) -> tuple[Device, ...]:
    """Stiff supplies with a current limit: the cut holds only while they stay below it."""
    return tuple(d for d in circuit.devices if is_stiff(d) and "limit" in d.values and not d.missing)
