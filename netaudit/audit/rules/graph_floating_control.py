"""A gate, base or amplifier input that nothing conductive drives or biases, in any mode.

A control pin decides what the part does.  Left floating it takes whatever voltage leakage and coupling give it.  From
the net of the pin the conductive paths are followed, through resistors, junctions and closed contacts, but not through
other control pins: they must come to a reference, a source, a connector or a part without a model.  A contact that
closes in another mode counts; a capacitor does not.

Mend: a resistor to a rail, a driver, or a link to the net that was meant.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:LOAD
        Q1 nmos V_th=2V K=1 G:GATE D:LOAD S:GND
        C1 capacitor 10n 1:GATE 2:GND

    passes:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:LOAD
        Q1 nmos V_th=2V K=1 G:GATE D:LOAD S:GND
        R2 resistor 100k 1:GATE 2:GND
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about
from netaudit.circuit.graph import Graph
from netaudit.devices import KINDS
from netaudit.devices.base import Device
from netaudit.finding import Finding

_SOURCES = frozenset({"supply", "current-source", "connector", "unmodelled"})


def find(site: Site) -> Iterable[Finding]:
    waiting: dict[tuple[str, str], Device] = {}
    driven: set[tuple[str, str]] = set()
    for graph in site.graphs:
        controls = list(_controls(graph))
        nets = _driven_nets(graph) if controls else frozenset()
        for device, pin in controls:
            waiting.setdefault((device.name, pin), device)
            if pin not in device.open_pins and device.pins[pin] in nets:
                driven.add((device.name, pin))
    for (name, pin), device in waiting.items():
        if (name, pin) in driven:
            continue
        is_open = pin in device.open_pins
        where = "which is left open," if is_open else f"on net {device.pins[pin]}"
        text = (
            f"{name}:{pin} {where} is driven and biased by nothing in any mode: "
            "give it a level with a resistor to a rail or a driver"
        )
        yield Finding(RULE.name, RULE.level, text, net=None if is_open else device.pins[pin], pin=pin, **about(device))


def _controls(graph: Graph) -> Iterable[tuple[Device, str]]:
    for device in graph.circuit.devices:
        if not device.missing and not device.covered:
            for pin in KINDS[device.kind].controls(device):
                yield device, pin


def _driven_nets(graph: Graph) -> frozenset[str]:
    """Nets from which conductive paths, control pins left out, come to something that sets a level."""
    islands = graph.joined(control=False)
    driven = {islands.find(net) for net in graph.circuit.grounds}
    for device in graph.circuit.devices:
        if device.kind in _SOURCES:
            driven |= {islands.find(net) for net in device.pins.values()}
        elif device.missing:
            # what a part without a model does at its pins is unknown: it may well drive them
            outputs = set(device.pins) - set(KINDS[device.kind].controls(device))
            driven |= {islands.find(device.pins[pin]) for pin in outputs}
    return frozenset(net for net in graph.on_net if islands.find(net) in driven)


RULE = Rule("graph/floating-control", "error", "structure", "a control pin that nothing drives", find, whole=True)
