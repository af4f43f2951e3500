"""An unmodelled part, not ``covered``, on a net with a supply in its circuit.

What it draws is unknown, so every current that is calculated on the way to it is a lower bound.  Stresses on that path
are marked ``lower_bound``.  A ``covered … draws`` line puts the current in, ``no-current`` says that there is none.

    fails:  U1 unmodelled VCC:V5 GND:GND  with PS1 supply 5V +:V5 -:GND
    passes: covered U1 "data sheet, largest" draws VCC:GND=80mA
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about, listed
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    graph = site.graph
    supplied = {
        graph.islands.find(net)
        for d in graph.circuit.devices
        if d.kind == "supply" and d.words.get("state") != "off"
        for net in d.pins.values()
    }
    for device in graph.circuit.devices:
        if device.kind != "unmodelled" or device.covered:
            continue
        nets = [
            net
            for pin, net in device.pins.items()
            if pin not in device.open_pins and net not in graph.circuit.grounds and graph.islands.find(net) in supplied
        ]
        if nets:
            yield Finding(
                RULE.name,
                RULE.level,
                f"what {device.name} draws from {listed(nets)} is unknown: add covered {device.name} "
                '"why" draws PIN:PIN=current, or no-current',
                net=nets[0],
                **about(device),
            )


RULE = Rule("part/no-current", "warning", "structure", "an unmodelled part that may draw current", find)
