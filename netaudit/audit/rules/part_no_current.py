"""An unmodelled part, not ``covered``, on a net with a supply in its circuit.

What it draws is unknown, so every current that is calculated on the way to it is a lower bound.  Stresses on that path
are marked ``lower_bound``.  A part of which no pin but the reference is reached from a supply is not reported.

Mend: ``covered U1 "why" draws VCC:GND=80mA`` puts the current in, ``no-current`` says that there is none.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 10R 1:VIN 2:VCC
        U1 unmodelled VCC:VCC GND:GND

    passes:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 10R 1:VIN 2:VCC
        U1 unmodelled VCC:VCC GND:GND
        covered U1 "measured on the bench" no-current
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about, listed
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    graph = site.graph
    unknown = [d for d in graph.circuit.devices if d.kind == "unmodelled" and not d.covered]
    if not unknown:
        return
    supplies = [d for d in graph.circuit.devices if d.kind == "supply" and d.words.get("state") != "off"]
    supplied = {graph.islands.find(net) for d in supplies for net in d.pins.values()}
    for device in unknown:
        reached = {net: None for pin, net in device.pins.items() if pin not in device.open_pins}
        nets = [n for n in reached if n not in graph.circuit.grounds and graph.islands.find(n) in supplied]
        if nets:
            text = (
                f"what {device.name} draws from {listed(nets)} is unknown: add covered {device.name} "
                '"why" draws PIN:PIN=current, or no-current'
            )
            yield Finding(RULE.name, RULE.level, text, net=nets[0], **about(device))


RULE = Rule("part/no-current", "warning", "structure", "an unmodelled part that may draw current", find)
