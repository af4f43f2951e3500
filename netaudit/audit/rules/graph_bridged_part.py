"""A part with all its pins on one net.

It carries no current and does nothing: a net name is wrong, or the part is left over.  Connectors and test points may
join pins of one net; pins left open with ``nc`` are each on a net of their own.

Mend: correct a net, or leave the part out.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:GND
        R2 resistor 1k 1:VIN 2:VIN

    passes:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:GND
        R2 resistor 1k 1:VIN 2:GND
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about
from netaudit.finding import Finding

_MARKS = frozenset({"connector", "testpoint"})


def find(site: Site) -> Iterable[Finding]:
    for device in site.graph.circuit.devices:
        if len(device.pins) < 2 or device.kind in _MARKS:
            continue
        nets = iter(device.pins.values())
        first = next(nets)
        if all(net == first for net in nets):
            text = f"all pins of {device.name} are on net {first}: correct a net, or leave the part out"
            yield Finding(RULE.name, RULE.level, text, net=first, **about(device))


RULE = Rule("graph/bridged-part", "warning", "structure", "a part with all its pins on one net", find)
