"""Nets that no conductive path joins to a reference.

Without a path to a ground the voltage of these nets is undefined: only differences between them have a meaning.  A
galvanically separate part of the circuit needs a ``ground`` of its own.  Where a switch, relay contact, fuse or supply
that is open in this mode would give the path, it is a note only.  Nets on which only control pins, capacitors, markers
and parts without a model stand carry no current and have rules of their own.

Mend: a path to a ground, or a ``ground`` statement for this part of the circuit; where a connector or a part without a
model drives the net, a supply or driver that stands for it.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:GND
        PS2 supply 5V +:A -:B
        R2 resistor 1k 1:A 2:B

    passes:
        ground B
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:GND
        PS2 supply 5V +:A -:B
        R2 resistor 1k 1:A 2:B
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from netaudit.audit.rule import Rule, Site, listed
from netaudit.circuit.graph import Graph, Pin
from netaudit.finding import Finding

_OUTSIDE = frozenset({"connector", "unmodelled"})
_OPEN = "while a contact is open in this mode: their voltages are undefined until it closes"


def find(site: Site) -> Iterable[Finding]:
    graph = site.graph
    if not graph.circuit.grounds:
        yield from _no_ground(graph)
        return
    carrying = {(device.name, pin) for device, groups in graph.groups for group in groups for pin in group}
    grounds = {graph.islands.find(net) for net in graph.circuit.grounds}
    loose = [nets for island, nets in graph.islands.members().items() if island not in grounds]
    closed = _with_contacts_closed(graph) if loose else frozenset()
    for nets in loose:
        pins = [pin for net in nets for pin in graph.on_net[net]]
        named = [net for net in nets if net in graph.named]
        if named and any((pin.device.name, pin.name) in carrying for pin in pins):
            yield _finding(named, pins, nets[0] in closed)


def _with_contacts_closed(graph: Graph) -> frozenset[str]:
    """The nets that are joined to a reference when every contact is closed."""
    islands = graph.joined()
    for device, contact in graph.open_contacts():
        for pin in contact[1:]:
            islands.join(device.pins[pin], device.pins[contact[0]])
    referenced = {islands.find(net) for net in graph.circuit.grounds}
    return frozenset(net for net in graph.on_net if islands.find(net) in referenced)


def _finding(named: Sequence[str], pins: Sequence[Pin], closes: bool) -> Finding:
    first = pins[0].device
    outside = next((pin.device for pin in pins if pin.device.kind in _OUTSIDE), None)
    mend = ": add a path to a ground, or a ground statement for this part of the circuit"
    if closes:
        mend = f" {_OPEN}"
    elif outside is not None:
        mend = f": if {outside.name} drives them, put a supply or a driver in its place; else add a path to a ground"
    return Finding(
        RULE.name,
        "note" if closes else RULE.level,
        f"no conductive path joins {listed(named)} to a reference{mend}",
        net=named[0],
        device=first.name if len(pins) == 1 else None,
        file=first.place.file,
        line=first.place.line,
    )


def _no_ground(graph: Graph) -> Iterable[Finding]:
    """One finding for a netlist without any reference, instead of one for each of its parts."""
    for device in graph.circuit.devices[:1]:
        yield Finding(
            RULE.name,
            RULE.level,
            "no net is a reference, so that no voltage is defined: add a ground statement",
            net=next(iter(device.pins.values()), None),
            file=device.place.file,
            line=device.place.line,
        )


RULE = Rule("graph/unreferenced-net", "error", "structure", "nets without a conductive path to a reference", find)
