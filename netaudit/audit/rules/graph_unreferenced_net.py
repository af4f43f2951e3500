"""Nets that no conductive path joins to a reference.

Without a path to a ground the voltage of these nets is undefined: only differences between them have a meaning.  A
galvanically separate part of the circuit needs a ``ground`` of its own.  Where a switch, relay contact, fuse or supply
that is open in this mode would give the path, it is a note only.

    fails:  R1 resistor 1k 1:A 2:B  with nothing else on A and B
    passes: ground B
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, listed
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    graph = site.graph
    grounds = {graph.islands.find(net) for net in graph.circuit.grounds}
    with_contacts = graph.joined(graph.circuit.devices)
    for device, contact in graph.open_contacts():
        for pin in contact[1:]:
            with_contacts.join(device.pins[pin], device.pins[contact[0]])
    referenced = {with_contacts.find(net) for net in graph.circuit.grounds}
    for island, nets in graph.islands.members().items():
        if island in grounds:
            continue
        pins = [p for net in nets for p in graph.on_net[net]]
        # a net that only control pins, capacitors, markers and parts without a model touch has its own rules
        carrying = [p for p in pins if any(p.name in g for g in _groups(p.device))]
        named = [net for net in nets if net in graph.circuit.nets]
        if not carrying or not named:
            continue
        open_only = with_contacts.find(nets[0]) in referenced
        first = carrying[0].device
        yield Finding(
            RULE.name,
            "note" if open_only else RULE.level,
            f"no conductive path joins {listed(named)} to a reference"
            + (
                " while a contact is open in this mode: their voltages are undefined until it closes"
                if open_only
                else ": add a path to a ground, or a ground statement for this part of the circuit"
            ),
            net=named[0],
            mode=graph.circuit.mode if open_only else None,
            device=first.name if len(pins) == 1 else None,
            file=first.place.file,
            line=first.place.line,
        )


def _groups(device: object) -> tuple[tuple[str, ...], ...]:
    from netaudit.circuit.graph import conducting
    from netaudit.devices.base import Device

    assert isinstance(device, Device)
    return conducting(device)


RULE = Rule("graph/unreferenced-net", "error", "structure", "nets without a conductive path to a reference", find)
